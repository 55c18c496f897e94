"""``matchup window``."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

from cyclopts import Parameter

from matchup.cli.show import THE_ANSWER_IS_NO, Common, Plot, show_result


def window(
    job: Annotated[Path, Parameter(help="Job file.")],
    *,
    hammer: Annotated[str | None, Parameter(help="Name in the hammer catalogue.")] = None,
    stage: Annotated[str | None, Parameter(help="Default: the last, the target.")] = None,
    plot: Plot = None,
    common: Common = Common(),  # noqa: B008 - frozen
) -> int:
    """Stroke against cushion: where it works, and what stops it."""
    from matchup import api

    result = api.window(job, hammer, stage, workers=common.workers)
    show_result(result, common, plot=plot)
    return 0 if result.is_open else THE_ANSWER_IS_NO
