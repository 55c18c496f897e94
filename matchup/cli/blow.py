"""``matchup blow``."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import Annotated

from cyclopts import Parameter

from matchup.cli.show import Common, Plot, screen_width, show_result


def blow(
    job: Annotated[Path, Parameter(help="Job file.")],
    *,
    hammer: Annotated[str | None, Parameter(help="Name in the hammer catalogue.")] = None,
    stroke: Annotated[str | None, Parameter(help='With its unit: "0.6 m".')] = None,
    energy: Annotated[
        str | None, Parameter(help='Instead of a stroke: ram weight times stroke, "35 kJ".')
    ] = None,
    cushion: Annotated[str | None, Parameter(help="Material of the pile cushion.")] = None,
    sheets: Annotated[int | None, Parameter(help="Number of sheets.")] = None,
    thickness: Annotated[str | None, Parameter(help='Instead of sheets: "150 mm".')] = None,
    wear: Annotated[str | None, Parameter(help="new or worn; default: the job's first.")] = None,
    hammer_cushion: Annotated[
        str | None, Parameter(help="In the job's words, where it offers several.")
    ] = None,
    stage: Annotated[str | None, Parameter(help="Default: the last, the target.")] = None,
    best: Annotated[
        bool, Parameter(negative="", help="Stroke and cushion of the hammer's best plan.")
    ] = False,
    traces: Annotated[
        bool, Parameter(negative="", help="With stresses along the pile and time histories.")
    ] = False,
    plot: Plot = None,
    common: Common = Common(),  # noqa: B008 - frozen
) -> int:
    """Compute one blow in detail."""
    from matchup import api

    result = api.blow(
        job,
        hammer,
        stroke,
        energy=energy,
        stage=stage,
        cushion=cushion,
        sheets=sheets,
        thickness=thickness,
        wear=wear,
        hammer_cushion=hammer_cushion,
        best=best,
    )
    show_result(result, common, partial(result.to_dict, traces), plot)
    if traces and not common.json:
        for table in (result.envelope_table(common.display), result.trace_table(common.display)):
            print(f"\n{table.to_text(screen_width())}")
    return 0
