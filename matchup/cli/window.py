"""``matchup window``."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

from cyclopts import Parameter

from matchup.cli.show import THE_ANSWER_IS_NO, Common, Plot, Progress, show_result


def window(
    job: Annotated[Path, Parameter(help="Job file.")],
    *,
    hammer: Annotated[str | None, Parameter(help="Name in the hammer catalogue.")] = None,
    stage: Annotated[str | None, Parameter(help="Default: the last, the target.")] = None,
    every_stage: Annotated[
        bool, Parameter(negative="", help="Strokes that work at every stage and required case.")
    ] = False,
    plot: Plot = None,
    common: Common = Common(),  # noqa: B008 - frozen
) -> int:
    """Stroke against cushion: where it works, and what stops it."""
    from matchup import api

    with Progress(common) as tell:
        result = api.window(job, hammer, stage, common.workers, tell, every_stage=every_stage)
    show_result(result, common, plot=plot)
    return 0 if result.is_open else THE_ANSWER_IS_NO
