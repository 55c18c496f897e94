"""The whole drive by depth: what resists, what it takes, and how near the pile comes to harm.

Ground cases are one band, from the least to the largest of them at each depth; the case that is
told in full is a line in it.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from typing import NamedTuple

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Patch

from matchup.model.job import Job
from matchup.model.stage import Stage
from matchup.report.figures.drawing import (
    COMPRESSION,
    GREY,
    INK,
    TENSION,
    drawing,
    new_figure,
    plain_grid,
    settle,
    short_name,
)
from matchup.report.shown import Units
from matchup.search.option import GOES_DOWN, CaseDrive, Option, StagePlan
from matchup.wave.layout import Floats

BAND = "#d4d4d4"
OTHER_LINES = ((0, (1, 1.5)), (0, (5, 2)), (0, (5, 2, 1, 2)), (0, (9, 3)))
"""Line styles of the cases that are not told in full, in their order."""

Value = Callable[[StagePlan], float | None]


class Line(NamedTuple):
    """A value at the stations of one case, as displayed."""

    values: Floats
    depths: Floats


def drive_figure(option: Option, told: CaseDrive, job: Job, units: Units) -> Figure:
    """Draw the whole drive of one hammer.

    Parameters
    ----------
    option : Option
        With its cases.
    told : CaseDrive
        The case that stands out.
    job : Job
        Whose stages resist, also where the drive does not get to them.
    units : Units
    """
    cases = option.cases

    def stroke(plan: StagePlan) -> float | None:
        return units.value(_if_struck(plan, plan.stroke), "stroke")

    parts = (
        (f"resistance, {units.unit('force')}", _resistances(cases, job, units)),
        (f"stroke, {units.unit('stroke')}", _lines(cases, stroke, units)),
        (f"blows/{units.counted}", _lines(cases, lambda plan: _count(plan, units), units)),
    )
    with drawing():
        figure = new_figure(_finding(option, told, units), 4.6)
        panels = figure.subplots(1, 4, sharey=True, width_ratios=(1.15, 0.85, 1, 1.25))
        for axes, (label, lines) in zip(panels, parts, strict=False):
            _draw(axes, cases, told, lines)
            axes.set_xlabel(label)
            axes.set_xlim(left=0)
        _draw_stress(panels[3], cases, told, units)
        _draw_depths(panels, job.stages, told, units)
        _name_cases(figure, cases, told)
        settle(figure)
    return figure


def _finding(option: Option, told: CaseDrive, units: Units) -> str:
    name = short_name(option.hammer.name)
    if told.failing is not None:
        at = units.text(told.failing.stage.penetration, "length")
        return f"{name} {told.failing.verdict} at {at} in case {told.case}"
    depth = units.text(option.target.stage.penetration, "length")
    hardest = told.hardest
    count = None if hardest is None else units.blow_count(hardest.set)
    if hardest is None or count is None:
        return f"{name} reaches {depth}"
    at = units.text(hardest.stage.penetration, "length")
    return (
        f"{name} reaches {depth} with {told.taken.blows:.0f} blows in case {told.case}; hardest at "
        f"{at}, {count:.0f} blows/{units.counted}"
    )


def _if_struck(plan: StagePlan, value: float) -> float | None:
    return None if plan.verdict == GOES_DOWN else value


def _count(plan: StagePlan, units: Units) -> float | None:
    return None if plan.verdict == GOES_DOWN else units.blow_count(plan.set)


def _lines(cases: Sequence[CaseDrive], value: Value, units: Units) -> list[Line]:
    """Return a value of every station, case by case; gaps are NaN."""
    return [
        Line(
            np.array([_or_gap(value(plan)) for plan in drive.plans]),
            np.array([_depth(plan.stage, units) for plan in drive.plans]),
        )
        for drive in cases
    ]


def _resistances(cases: Sequence[CaseDrive], job: Job, units: Units) -> list[Line]:
    of_case = {
        course.case: [job.stages[place] for place in course.stages] for course in job.courses
    }
    return [
        Line(
            np.array([units.value(s.resistance, "force") for s in of_case[drive.case]]),
            np.array([_depth(stage, units) for stage in of_case[drive.case]]),
        )
        for drive in cases
    ]


def _or_gap(value: float | None) -> float:
    return math.nan if value is None else value


def _depth(stage: Stage, units: Units) -> float:
    return units.value(stage.penetration, "length") or 0.0


def _draw(
    axes: Axes,
    cases: Sequence[CaseDrive],
    told: CaseDrive,
    lines: Sequence[Line],
    colour: str = INK,
    band: str = BAND,
) -> None:
    """Draw one value of every case against depth, the band over all of them behind."""
    plain_grid(axes)
    values = np.concatenate([line.values for line in lines])
    depths = np.concatenate([line.depths for line in lines])
    known = np.isfinite(values)
    grid = np.unique(depths)
    least = [values[known & (depths == at)].min(initial=np.inf) for at in grid]
    most = [values[known & (depths == at)].max(initial=-np.inf) for at in grid]
    there = np.isfinite(least)
    axes.fill_betweenx(grid, least, most, where=there.tolist(), color=band, linewidth=0)
    for drive, line, style in zip(cases, lines, _styles(cases, told), strict=True):
        wide = drive is told
        axes.plot(
            line.values,
            line.depths,
            color=colour if wide else GREY,
            linewidth=1.7 if wide else 0.8,
            linestyle="-" if wide else style,
            marker="o" if line.values.size == 1 else "",
            markersize=4,
            zorder=3 if wide else 2,
        )


def _styles(cases: Sequence[CaseDrive], told: CaseDrive) -> list[tuple[int, tuple[float, ...]]]:
    others = [drive for drive in cases if drive is not told]
    return [
        OTHER_LINES[others.index(drive) % len(OTHER_LINES)] if drive is not told else (0, ())
        for drive in cases
    ]


def _draw_stress(axes: Axes, cases: Sequence[CaseDrive], told: CaseDrive, units: Units) -> None:
    """Draw the use of both stress limits, back to back."""

    def squeeze(plan: StagePlan) -> float | None:
        return _if_struck(plan, 100 * plan.compression_use)

    def pull(plan: StagePlan) -> float | None:
        return _if_struck(plan, -100 * plan.tension_use)

    sides = _lines(cases, squeeze, units), _lines(cases, pull, units)
    _draw(axes, cases, told, sides[0], COMPRESSION, "#bcd3e8")
    _draw(axes, cases, told, sides[1], TENSION, "#f2cdb3")
    used = np.concatenate([line.values for lines in sides for line in lines])
    most = max(115.0, 1.1 * np.abs(used[np.isfinite(used)]).max(initial=0.0))
    axes.set_xlim(-most, most)
    axes.axvline(0, color=INK, linewidth=0.8)
    for side, colour in ((-100, TENSION), (100, COMPRESSION)):
        axes.axvline(side, color=colour, linewidth=2)
    axes.set_xticks([-100, -50, 0, 50, 100], ["100", "50", "0", "50", "100"])
    axes.set_xlabel("stress, % of its limit")
    axes.set_title("tension", color=TENSION, loc="left")
    axes.set_title("compression", color=COMPRESSION, loc="right")


def _draw_depths(
    panels: Sequence[Axes], stages: Sequence[Stage], told: CaseDrive, units: Units
) -> None:
    """Mark how far the pile goes by itself, where it rests and where it stops."""
    first = panels[0]
    depths = [_depth(stage, units) for stage in stages]
    first.set_ylim(max(depths) + 0.02 * (max(depths) - min(depths)), min(0.0, *depths))
    first.set_ylabel(f"depth of the toe, {units.unit('length')}")
    settled = units.value(told.settled, "length")
    for axes in panels[1:]:
        if settled is not None:
            axes.axhspan(0, settled, facecolor="white", edgecolor=GREY, hatch="..", linewidth=0)
    if settled is not None:
        panels[2].text(
            0.5,
            0.5 * settled,
            "goes down\nunder the\nweight",
            transform=panels[2].get_yaxis_transform(),
            ha="center",
            va="center",
            bbox={"facecolor": "white", "edgecolor": "none", "pad": 1.5},
        )
    for plan in told.plans:
        if plan.stage.after_pause:
            _name_depth(first, plan, f"rest {plan.stage.after_pause / 3600:.0f} h", units)
    if told.failing is not None:
        for axes in panels:
            axes.axhline(
                _depth(told.failing.stage, units),
                color=TENSION,
                linewidth=1.6,
            )
        _name_depth(first, told.failing, told.failing.verdict, units)


def _name_depth(axes: Axes, plan: StagePlan, text: str, units: Units) -> None:
    axes.annotate(
        text,
        (1.0, _depth(plan.stage, units)),
        (-2, 2),
        xycoords=axes.get_yaxis_transform(),
        textcoords="offset points",
        ha="right",
        va="bottom",
        fontweight="bold",
        bbox={"facecolor": "white", "edgecolor": "none", "pad": 0.8, "alpha": 0.85},
    ).set_in_layout(False)


def _name_cases(figure: Figure, cases: Sequence[CaseDrive], told: CaseDrive) -> None:
    """Say which line is which case."""
    handles: list[Line2D | Patch] = []
    for drive, style in zip(cases, _styles(cases, told), strict=True):
        wide = drive is told
        label = f"case {short_name(drive.case)}" + ("" if drive.required else " (not required)")
        handles.append(
            Line2D(
                [],
                [],
                color=INK if wide else GREY,
                linewidth=1.7 if wide else 0.8,
                linestyle="-" if wide else style,
                label=label,
            )
        )
    if len(cases) > 1:
        handles.append(Patch(facecolor=BAND, label="all cases"))
    figure.legend(handles=handles, loc="outside lower left", ncols=min(4, len(handles)))
