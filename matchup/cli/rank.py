"""``matchup rank``."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

from cyclopts import Parameter
from cyclopts.validators import Number

from matchup.cli.show import THE_ANSWER_IS_NO, Common, Plot, Progress, show_result


def rank(
    job: Annotated[Path, Parameter(help="Job file.")],
    *,
    seed: Annotated[
        int | None, Parameter(help="Replaces the job's seed.", validator=Number(gte=0))
    ] = None,
    plot: Plot = None,
    formulas: Annotated[
        bool, Parameter(negative="", help="Add dynamic formulas as a second opinion.")
    ] = False,
    common: Common = Common(),  # noqa: B008 - frozen
) -> int:
    """Rank every hammer of the job's catalogue."""
    from matchup import api

    with Progress(common) as tell:
        result = api.rank(job, workers=common.workers, seed=seed, tell=tell, formulas=formulas)
    show_result(result, common, plot=plot)
    return 0 if result.options else THE_ANSWER_IS_NO
