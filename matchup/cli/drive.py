"""``matchup drive``."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

from cyclopts import Parameter

from matchup.cli.show import THE_ANSWER_IS_NO, Common, Plot, Progress, Samples, show_result


def drive(
    job: Annotated[Path, Parameter(help="Job file with a [ground].")],
    *,
    hammer: Annotated[str | None, Parameter(help="Name in the hammer catalogue.")] = None,
    cushion: Annotated[str | None, Parameter(help="Material; default: the best is found.")] = None,
    sheets: Annotated[int | None, Parameter(help="Number of sheets.")] = None,
    thickness: Annotated[str | None, Parameter(help='Instead of sheets: "150 mm".')] = None,
    hammer_cushion: Annotated[
        str | None, Parameter(help="In the job's words, where it offers several.")
    ] = None,
    criterion: Annotated[
        bool, Parameter(negative="", help="Which set at which stroke proves which resistance.")
    ] = False,
    case: Annotated[str | None, Parameter(help="Ground case whose stations are shown.")] = None,
    samples: Samples = None,
    plot: Plot = None,
    common: Common = Common(),  # noqa: B008 - frozen
) -> int:
    """Predict the whole drive by depth, in every ground case."""
    from matchup import api

    with Progress(common) as tell:
        result = api.drive(
            job,
            hammer,
            common.workers,
            tell,
            cushion=cushion,
            sheets=sheets,
            thickness=thickness,
            hammer_cushion=hammer_cushion,
            case=case,
            criterion=criterion,
            samples=samples,
        )
    show_result(result, common, plot=plot)
    return 0 if result.can else THE_ANSWER_IS_NO
