"""What an option hangs on: each input's swing, and its share of the doubt."""

from __future__ import annotations

import textwrap
from collections.abc import Sequence

from matplotlib.axes import Axes
from matplotlib.figure import Figure

from matchup.report.doubted import hangs_on, minutes
from matchup.report.figures.drawing import (
    GREY,
    INK,
    PALE,
    TENSION,
    WORKS,
    drawing,
    new_figure,
    plain_grid,
    settle,
)
from matchup.search.odds import Indices, Influence, Influences, Odds, Swing
from matchup.search.option import CAN_DRIVE, NOT_REACHED, OVER_COMPRESSION, OVER_TENSION, REFUSES

BAR = 0.36
"""Height of one of two bars in a line."""
LINE = 20
"""Characters in a line of an input's name."""
FULL = 110.0
"""End of the axis of shares. [%]"""
ROOM = 0.5
"""For the words beside a bar, over the span of all bars. [-]"""
SHORT = {
    NOT_REACHED: "no set",
    REFUSES: "refuses",
    OVER_TENSION: "tension",
    OVER_COMPRESSION: "compr.",
}
"""What fails at the end of a bar."""


def doubt_figure(odds: Odds) -> Figure:
    """Draw, for every input, what becomes of the drive at its P10 and P90, and its shares.

    Swings are left out for stages given by hand, which take no time.
    """
    found = odds.influences
    assert found is not None
    inputs = sorted(found.inputs, key=lambda one: _weight(one, found))
    swings = found.middle.blows is not None
    with drawing():
        figure = new_figure(hangs_on(odds, shares=False), 1.1 + 0.36 * len(inputs))
        panels = figure.subplots(1, 1 + swings, sharey=True, squeeze=False)[0]
        panels[0].set_yticks(range(len(inputs)), [_name(one) for one in inputs])
        panels[0].set_ylim(-0.6, len(inputs) - 0.4)
        if swings:
            _draw_swings(panels[0], inputs, found)
        _draw_shares(panels[-1], inputs)
        for axes in panels:
            axes.tick_params(axis="y", length=0)
            axes.spines["left"].set_visible(False)
        settle(figure)
    return figure


def _name(one: Influence) -> str:
    return textwrap.fill(textwrap.shorten(one.name, 2 * LINE, placeholder="..."), LINE)


def _time(swing: Swing) -> float:
    known = minutes(swing.seconds)
    return known if known is not None else (swing.blows or 0.0)


def _weight(one: Influence, found: Influences) -> float:
    """Return by how much an input swings the time, or its share of the verdict's doubt."""
    if found.middle.blows is None:
        return 0.0 if one.works is None else one.works.total.value
    return abs(_time(one.high) - _time(one.low))


def _draw_swings(axes: Axes, inputs: Sequence[Influence], found: Influences) -> None:
    """Draw the time at both ends of each input; an end that fails is a cross with its verdict."""
    middle = _time(found.middle)
    what = "blows" if found.middle.seconds is None else "minutes"
    plain_grid(axes, "x")
    axes.axvline(middle, color=INK, linewidth=1.0)
    for row, one in enumerate(inputs):
        ends = (_time(one.low), _time(one.high))
        axes.barh(row, ends[1] - ends[0], left=ends[0], height=BAR, color=PALE, edgecolor=GREY)
        for swing, end, other in zip((one.low, one.high), ends, ends[::-1], strict=True):
            works = swing.verdict in CAN_DRIVE
            axes.plot(
                end, row, "o" if works else "X", color=WORKS if works else TENSION, markersize=5
            )
            right = end > other or (end == other and swing is one.high)
            axes.annotate(
                f"{swing.factor:.2f}" + ("" if works else f" {SHORT.get(swing.verdict, 'fails')}"),
                (end, row),
                (6 if right else -6, 0),
                textcoords="offset points",
                ha="left" if right else "right",
                va="center",
                fontsize=7,
            )
    times = [_time(swing) for one in inputs for swing in (one.low, one.high)]
    span = max(times) - min(times) or 1.0
    axes.set_xlim(min(times) - ROOM * span, max(times) + ROOM * span)
    axes.set_xlabel(f"{what} of driving at P10 and P90,\nthe factor beside; a cross fails")


def _draw_shares(axes: Axes, inputs: Sequence[Influence]) -> None:
    """Draw shares of the variance, alone within those with all that an input acts with."""
    plain_grid(axes, "x")
    times = [(row, one.time) for row, one in enumerate(inputs) if one.time]
    verdicts = [(row, one.works) for row, one in enumerate(inputs) if one.works]
    if times:
        _draw_bars(axes, times, BAR / 2, WORKS, "", "time")
    if verdicts:
        _draw_bars(axes, verdicts, -BAR / 2, TENSION, "////", "verdict")
    axes.set_xlim(0, FULL)
    axes.set_xlabel("share of the variance with all it acts with, %;\na line is the standard error")
    if axes.get_legend_handles_labels()[0]:
        axes.figure.legend(loc="outside lower right", ncols=2)


def _draw_bars(
    axes: Axes,
    known: Sequence[tuple[int, Indices]],
    up: float,
    colour: str,
    hatch: str,
    name: str,
) -> None:
    axes.barh(
        [row + up for row, _ in known],
        [100 * max(indices.total.value, 0.0) for _, indices in known],
        height=BAR,
        xerr=[100 * indices.total.error for _, indices in known],
        error_kw={"ecolor": INK, "elinewidth": 0.8},
        color="white" if hatch else colour,
        edgecolor=colour,
        hatch=hatch,
        label=name,
    )
