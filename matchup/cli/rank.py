"""``matchup rank``."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

from cyclopts import Parameter
from cyclopts.validators import Number

from matchup.cli.show import THE_ANSWER_IS_NO, Common, Plot, Progress, Samples, show_result
from matchup.errors import InputError, Problem


def rank(
    job: Annotated[Path, Parameter(help="Job file.")],
    /,
    *more: Annotated[Path, Parameter(help="More jobs, for one hammer to serve them all.")],
    seed: Annotated[
        int | None, Parameter(help="Replaces the job's seed.", validator=Number(gte=0))
    ] = None,
    samples: Samples = None,
    plot: Plot = None,
    formulas: Annotated[
        bool, Parameter(negative="", help="Add dynamic formulas as a second opinion.")
    ] = False,
    common: Common = Common(),  # noqa: B008 - frozen
) -> int:
    """Rank every hammer of the job's catalogue; of several jobs, which one serves them all."""
    from matchup import api

    if more:
        _refuse("--plot", plot is not None)
        _refuse("--formulas", formulas)
        _refuse("--samples", samples is not None)
        with Progress(common) as tell:
            together = api.rank_together((job, *more), common.workers, seed, tell)
        show_result(together, common)
        return 0 if together.best else THE_ANSWER_IS_NO
    with Progress(common) as tell:
        result = api.rank(
            job,
            workers=common.workers,
            seed=seed,
            tell=tell,
            samples=samples,
            formulas=formulas,
        )
    show_result(result, common, plot=plot)
    return 0 if result.options else THE_ANSWER_IS_NO


def _refuse(option: str, given: bool) -> None:
    if given:
        must = "must be left out with several jobs; give them one by one"
        raise InputError([Problem(None, None, option, must, "")])
