"""matchup: match hammer, cushion and pile.

For every hammer of your own catalogue, find the stroke and pile cushion that reach the target set
at least energy while compression and tension stay within chosen limits. A screening aid: confirm
by trial driving and dynamic testing.

    import matchup
    ranking = matchup.rank("job.toml")
    print(ranking)
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

from matchup.errors import AnalysisError, InputError, MatchupError

if TYPE_CHECKING:
    from matchup.api import (
        BlowResult,
        CheckResult,
        DriveResult,
        RankingResult,
        ReportResult,
        TogetherResult,
        WindowResult,
        blow,
        check,
        drive,
        load_job,
        rank,
        rank_together,
        tender_report,
        window,
    )

__version__ = "0.1.0"
__all__ = [
    "AnalysisError",
    "BlowResult",
    "CheckResult",
    "DriveResult",
    "InputError",
    "MatchupError",
    "RankingResult",
    "ReportResult",
    "TogetherResult",
    "WindowResult",
    "__version__",
    "blow",
    "check",
    "drive",
    "load_job",
    "rank",
    "rank_together",
    "tender_report",
    "window",
]


def __getattr__(name: str) -> Any:
    # The solver and its compiler load only when something is asked of them.
    if name in __all__:
        return getattr(import_module("matchup.api"), name)
    raise AttributeError(f"module 'matchup' has no attribute {name!r}")
