"""``matchup rank``."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

from cyclopts import Parameter

from matchup.cli.show import Common, screen_width, show_document, tell, write_file

NO_HAMMER_CAN = 3


def rank(
    job: Annotated[Path, Parameter(help="Job file.")],
    *,
    seed: Annotated[int | None, Parameter(help="Replaces the job's seed.")] = None,
    common: Common = Common(),  # noqa: B008 - frozen
) -> int:
    """Rank every hammer of the job's catalogue."""
    from matchup import api

    result = api.rank(job, workers=common.workers, seed=seed)
    if common.csv:
        write_file(common.csv, result.to_csv(common.display))
        tell(common, f"wrote {common.csv}")
    if common.json:
        show_document(result.to_dict(common.display))
    else:
        print(result.to_text(common.display, screen_width()))
    return 0 if result.options else NO_HAMMER_CAN
