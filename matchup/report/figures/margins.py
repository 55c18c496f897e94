"""How far hammers are from what is asked of them, all on one scale."""

from __future__ import annotations

from collections.abc import Sequence

from matplotlib.axes import Axes
from matplotlib.figure import Figure

from matchup.report.figures.drawing import (
    COMPRESSION,
    INK,
    PALE,
    TENSION,
    drawing,
    new_figure,
    settle,
    short_name,
)
from matchup.report.options import margins_table
from matchup.report.shown import Units
from matchup.search.option import DOES_NOT_FIT, NOT_ANALYSED, PILE_RUNS, Option, Ranking

FURTHEST = 100.0
"""Margins beyond this are drawn at the edge. [%]"""
MOST_SHOWN = 24
MARKS = (
    ("set", "D", INK),
    ("compression", "s", COMPRESSION),
    ("tension", "o", TENSION),
)
"""What is asked, its marker and colour."""
NO_BLOW = (PILE_RUNS, NOT_ANALYSED, DOES_NOT_FIT)


def margins_figure(options: Sequence[Option], ranking: Ranking, units: Units) -> Figure:
    """Draw the margins of set and stresses of some hammers, one line each.

    What falls short lies to the left of zero and is filled; what is met is a ring to the right.
    """
    shown = options[:MOST_SHOWN]
    with drawing():
        figure = new_figure(_finding(options, shown), 0.75 + 0.2 * len(shown))
        axes = figure.subplots()
        for row, option in enumerate(shown):
            _draw_row(axes, row, option, ranking, units)
        axes.axvline(0, color=INK, linewidth=1.6)
        axes.set_ylim(len(shown) - 0.4, -1.1)
        axes.set_xlim(-1.08 * FURTHEST, 1.08 * FURTHEST)
        axes.set_yticks(range(len(shown)), [short_name(o.hammer.name) for o in shown])
        axes.tick_params(axis="y", length=0)
        axes.spines["left"].set_visible(False)
        axes.set_xlabel(
            "margin to what is asked, % (set above the needed one, stress below its limit)"
        )
        axes.text(-2, -0.75, "falls short", ha="right", va="center", fontweight="bold")
        axes.text(2, -0.75, "is met", ha="left", va="center", fontweight="bold")
        _name_marks(axes)
        settle(figure)
    return figure


def _finding(options: Sequence[Option], shown: Sequence[Option]) -> str:
    name = short_name(options[0].hammer.name)
    if len(options) == 1:
        option = options[0]
        return f"{name} {option.verdict}"
    more = f" (the nearest {len(shown)} of {len(options)})" if len(shown) < len(options) else ""
    return f"{name} comes nearest of those that can't drive this pile{more}"


def _draw_row(axes: Axes, row: int, option: Option, ranking: Ranking, units: Units) -> None:
    axes.axhline(row, color=PALE, linewidth=0.6, zorder=0)
    if option.verdict in NO_BLOW:
        axes.text(-2, row, option.verdict, ha="right", va="center", style="italic")
        return
    for what, _, _, margin in margins_table(option, ranking, units).rows:
        for name, marker, colour in MARKS:
            if name in str(what).split() and isinstance(margin, float):
                _draw_mark(axes, row, margin, marker, colour)


def _draw_mark(axes: Axes, row: int, margin: float, marker: str, colour: str) -> None:
    """Draw one margin; an arrow stands for one beyond the edge."""
    at = min(max(margin, -FURTHEST), FURTHEST)
    if at != margin:
        axes.plot([1.045 * at], [row], ">" if margin > 0 else "<", color=colour, markersize=3)
    axes.plot(
        [at],
        [row],
        marker,
        color=colour if margin < 0 else "white",
        markeredgecolor=colour,
        markersize=5,
    )


def _name_marks(axes: Axes) -> None:
    """Say what the markers mean, above the first line and in their own shape."""
    handles = [
        axes.plot([], [], marker, color=colour, label=name, linestyle="none", markersize=5)[0]
        for name, marker, colour in MARKS
    ]
    axes.figure.legend(handles=handles, loc="outside lower left", ncols=len(handles))
