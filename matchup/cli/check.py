"""``matchup check``."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

from cyclopts import Parameter

from matchup.cli.show import THE_ANSWER_IS_NO, Common, Plot, Progress, Samples, show_result


def check(
    job: Annotated[Path, Parameter(help="Job file.")],
    *,
    hammer: Annotated[str | None, Parameter(help="Name in the hammer catalogue.")] = None,
    samples: Samples = None,
    plot: Plot = None,
    formulas: Annotated[
        bool, Parameter(negative="", help="Add dynamic formulas as a second opinion.")
    ] = False,
    common: Common = Common(),  # noqa: B008 - frozen
) -> int:
    """Answer whether a hammer can drive the pile, and if not, why."""
    from matchup import api

    with Progress(common) as tell:
        result = api.check(
            job, hammer, workers=common.workers, tell=tell, samples=samples, formulas=formulas
        )
    show_result(result, common, plot=plot)
    return 0 if result.can else THE_ANSWER_IS_NO
