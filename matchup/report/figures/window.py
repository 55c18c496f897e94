"""Where a hammer works in the plane of stroke and cushion, and what closes each edge."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import groupby
from typing import NamedTuple

import numpy as np
from matplotlib.axes import Axes
from matplotlib.cm import ScalarMappable
from matplotlib.colors import BoundaryNorm, ListedColormap
from matplotlib.figure import Figure
from matplotlib.patches import Patch
from matplotlib.ticker import MaxNLocator
from numpy.typing import NDArray
from scipy import ndimage

from matchup.model.cushion import Stack
from matchup.report.figures.drawing import (
    COMPRESSION,
    GREY,
    INK,
    TENSION,
    drawing,
    new_figure,
    settle,
    short_name,
)
from matchup.report.mapped import map_answer, map_place
from matchup.report.shown import Units
from matchup.search.stroke_map import (
    OPEN_CELL,
    PULLED,
    RUNNING,
    SHORT,
    SQUEEZED,
    UNTRUSTED,
    StrokeMap,
)
from matchup.wave.layout import Flags, Floats

ACROSS = 2
"""Panels side by side."""
BANDS = (0, 50, 70, 80, 90, 100)
"""Shades of the open part, by the use of the nearer stress limit. [%]"""
SHADES = ("#eef7f4", "#cfe8e0", "#a6d3c6", "#74b8a6", "#3f9682")


class Look(NamedTuple):
    """How what closes a part of the plane is drawn, and named."""

    name: str
    hatch: str
    colour: str


CLOSED = {
    SHORT: Look("set not reached", "...", GREY),
    SQUEEZED: Look("compression above its limit", "////", COMPRESSION),
    PULLED: Look("tension above its limit", "\\\\\\\\", TENSION),
    RUNNING: Look("pile runs under the weight", "||", GREY),
    UNTRUSTED: Look("could not be analysed", "xxx", GREY),
}


class _Panel(NamedTuple):
    """Cushions of one kind: rows of the map, and the ends of cells in the plane."""

    rows: NDArray[np.int64]
    label: str
    strokes: Floats
    sizes: Floats
    counted: bool


def window_figure(
    found: StrokeMap, units: Units, chosen: tuple[Stack, float] | None = None
) -> Figure:
    """Draw where a hammer works.

    Parameters
    ----------
    found : StrokeMap
    units : Units
    chosen : (stack, stroke) or None
        Marked where it lies in the plane.
    """
    panels = _panels(found, units)
    down = -(-len(panels) // ACROSS)
    most = max(panel.rows.size for panel in panels)
    height = min(2.9, 0.8 + 0.16 * most)
    with drawing():
        title = f"{map_place(found, units)}: {map_answer(found, units)}"
        figure = new_figure(title, height * down + 0.55)
        across = min(ACROSS, len(panels))
        grid = figure.subplots(down, across, squeeze=False, sharex=True)
        for axes in grid.flat[len(panels) :]:
            axes.remove()
        used = list(grid.flat[: len(panels)])
        for axes, panel in zip(used, panels, strict=True):
            _draw_panel(axes, found, panel, units)
            _mark(axes, found, panel, units, chosen)
        if found.is_open:
            _shade_key(figure, used)
        unnamed = _name_parts(figure, used, found, panels)
        if unnamed:
            keys = [_patch(CLOSED[state]) for state in unnamed]
            figure.legend(handles=keys, loc="outside lower left", ncols=len(keys))
        settle(figure)
    return figure


def _panels(found: StrokeMap, units: Units) -> list[_Panel]:
    """Return the cushions kind by kind."""
    strokes = _ends(np.array([units.value(float(s), "stroke") for s in found.strokes]))
    panels = []
    rows = range(len(found.stacks))
    for _, group in groupby(rows, key=lambda row: _kind(found.stacks[row])):
        of = np.array(list(group))
        first = found.stacks[of[0]]
        cushions = [found.stacks[row].pile for row in of]
        counted = all(c is not None and c.sheets for c in cushions)
        sizes = [
            0.0
            if c is None
            else float(c.sheets)
            if counted and c.sheets
            else (units.value(c.thickness, "thickness") or 0.0)
            for c in cushions
        ]
        label = _panel_label(first, counted, units)
        panels.append(_Panel(of, label, strokes, _ends(np.array(sizes)), counted))
    return panels


def _kind(stack: Stack) -> tuple[str, str]:
    return (
        stack.pile.material.name if stack.pile else "",
        stack.hammer.text if stack.hammer else "",
    )


def _panel_label(stack: Stack, counted: bool, units: Units) -> str:
    if stack.pile is None:
        label = "no pile cushion"
    elif counted:
        label = f"sheets of {short_name(stack.pile.material.name)}"
    else:
        name = short_name(stack.pile.material.name)
        label = f"thickness of {name}, {units.unit('thickness')}"
    if stack.hammer:
        label += f"\nunder {short_name(units.retold(stack.hammer.text))}"
    return label


def _ends(middles: Floats) -> Floats:
    """Return where the cells around some values end."""
    if middles.size == 1:
        half = 0.5 * abs(middles[0]) * 0.1 or 0.5
        return np.array([middles[0] - half, middles[0] + half])
    between = 0.5 * (middles[1:] + middles[:-1])
    return np.concatenate(([2 * middles[0] - between[0]], between, [2 * middles[-1] - between[-1]]))


def _states(found: StrokeMap, panel: _Panel) -> NDArray[np.str_]:
    return np.array([found.states[row] for row in panel.rows])


def _draw_panel(axes: Axes, found: StrokeMap, panel: _Panel, units: Units) -> None:
    states = _states(found, panel)
    use = 100 * np.maximum(found.compression_uses, found.tension_uses)[panel.rows]
    shaded = np.ma.masked_where(states != OPEN_CELL, use)
    norm = BoundaryNorm(BANDS, len(SHADES), clip=True)
    axes.pcolormesh(
        panel.strokes, panel.sizes, shaded, cmap=ListedColormap(SHADES), norm=norm, rasterized=False
    )
    for state, look in CLOSED.items():
        for left, bottom, right, top in _runs(states == state, panel):
            axes.fill(
                [left, right, right, left],
                [bottom, bottom, top, top],
                facecolor="none",
                edgecolor=look.colour,
                hatch=look.hatch,
                linewidth=0,
                alpha=0.55,
            )
        for xs, ys in _edges(states == OPEN_CELL, states == state, panel):
            axes.plot(xs, ys, color=look.colour if state != SHORT else INK, linewidth=1.8)
    axes.set_xlim(panel.strokes[0], panel.strokes[-1])
    axes.set_ylim(panel.sizes[0], panel.sizes[-1])
    if found.stacks[panel.rows[0]].pile is None:
        # One row has no height for a label at its side.
        axes.set_title(panel.label)
        axes.set_yticks([])
    else:
        axes.set_ylabel(panel.label)
    axes.set_xlabel(f"stroke, {units.unit('stroke')}")
    axes.tick_params(labelbottom=True)
    if panel.counted:
        axes.yaxis.set_major_locator(MaxNLocator(integer=True))


def _runs(mask: Flags, panel: _Panel) -> list[tuple[float, float, float, float]]:
    """Return rectangles that fill the cells of a mask: left, bottom, right, top."""
    rectangles = []
    for row in range(mask.shape[0]):
        edges = np.flatnonzero(np.diff(np.concatenate(([0], mask[row].astype(int), [0]))))
        for first, after in edges.reshape(-1, 2):
            rectangles.append(
                (
                    float(panel.strokes[first]),
                    float(panel.sizes[row]),
                    float(panel.strokes[after]),
                    float(panel.sizes[row + 1]),
                )
            )
    return rectangles


def _edges(
    inside: Flags, outside: Flags, panel: _Panel
) -> list[tuple[tuple[float, float], tuple[float, float]]]:
    """Return the lines between open cells and neighbours that one thing closes."""
    lines = []
    x, y = panel.strokes, panel.sizes
    for row, column in np.argwhere(inside):
        for up, right in ((0, 1), (0, -1), (1, 0), (-1, 0)):
            other = row + up, column + right
            if not (0 <= other[0] < inside.shape[0] and 0 <= other[1] < inside.shape[1]):
                continue
            if not outside[other]:
                continue
            if right:
                at = x[column + max(right, 0)]
                lines.append(((at, at), (y[row], y[row + 1])))
            else:
                at = y[row + max(up, 0)]
                lines.append(((x[column], x[column + 1]), (at, at)))
    return lines


def _mark(
    axes: Axes,
    found: StrokeMap,
    panel: _Panel,
    units: Units,
    chosen: tuple[Stack, float] | None,
) -> None:
    """Mark the chosen stroke and cushion where they lie in this panel."""
    if chosen is None or chosen[0] not in [found.stacks[row] for row in panel.rows]:
        return
    row = [found.stacks[row] for row in panel.rows].index(chosen[0])
    x = units.value(chosen[1], "stroke") or 0.0
    y = 0.5 * (panel.sizes[row] + panel.sizes[row + 1])
    axes.plot([x], [y], marker="o", markersize=6, color="white", markeredgecolor=INK, zorder=5)
    label = axes.annotate(
        "chosen",
        (x, y),
        (6, 6),
        textcoords="offset points",
        fontweight="bold",
        zorder=6,
        bbox={"facecolor": "white", "edgecolor": "none", "pad": 1.0, "alpha": 0.85},
    )
    label.set_in_layout(False)


def _shade_key(figure: Figure, used: Sequence[Axes]) -> None:
    shades = ScalarMappable(BoundaryNorm(BANDS, len(SHADES)), ListedColormap(SHADES))
    bar = figure.colorbar(
        shades, ax=list(used), location="bottom", shrink=0.55, aspect=45, pad=0.03
    )
    bar.set_label("works; highest stress in % of its limit")
    bar.ax.tick_params(length=0)


def _name_parts(
    figure: Figure, used: Sequence[Axes], found: StrokeMap, panels: Sequence[_Panel]
) -> list[str]:
    """Write into each closed part what closes it; return the states for which none has room."""
    figure.draw_without_rendering()
    seen: list[str] = []
    named = set()
    for axes, panel in zip(used, panels, strict=True):
        states = _states(found, panel)
        for state, look in CLOSED.items():
            parts, count = ndimage.label(states == state)
            seen += [state] if count else []
            for part in range(1, count + 1):
                if _name_part(axes, parts == part, panel, look):
                    named.add(state)
    return [state for state in CLOSED if state in seen and state not in named]


def _name_part(axes: Axes, part: Flags, panel: _Panel, look: Look) -> bool:
    """Write a name into a part of the plane if it has room; return whether it has."""
    depth = ndimage.distance_transform_cdt(np.pad(part, 1))[1:-1, 1:-1]
    middles_x = 0.5 * (panel.strokes[1:] + panel.strokes[:-1])
    middles_y = 0.5 * (panel.sizes[1:] + panel.sizes[:-1])
    cells = np.argwhere(part)
    far = np.abs(cells - cells.mean(axis=0)).sum(axis=1)
    places = cells[np.lexsort((far, -depth[part]))]
    words = look.name.split()
    half = -(-len(words) // 2)
    for text in (look.name, f"{' '.join(words[:half])}\n{' '.join(words[half:])}"):
        label = axes.text(
            0,
            0,
            text,
            ha="center",
            va="center",
            color=look.colour if look.colour != GREY else INK,
            fontsize=7.5,
            linespacing=0.95,
            bbox={"facecolor": "white", "edgecolor": "none", "pad": 0.8, "alpha": 0.9},
        )
        label.set_in_layout(False)
        for row, column in places[:40]:
            label.set_position((middles_x[column], middles_y[row]))
            box = label.get_window_extent().padded(3).transformed(axes.transData.inverted())
            columns = (panel.strokes[:-1] < box.x1) & (panel.strokes[1:] > box.x0)
            rows = (panel.sizes[:-1] < box.y1) & (panel.sizes[1:] > box.y0)
            whole = box.x0 >= panel.strokes[0] and box.x1 <= panel.strokes[-1]
            whole = whole and box.y0 >= panel.sizes[0] and box.y1 <= panel.sizes[-1]
            if whole and part[np.ix_(rows, columns)].all():
                return True
        label.remove()
    return False


def _patch(look: Look) -> Patch:
    return Patch(
        facecolor="white", edgecolor=look.colour, hatch=look.hatch, label=look.name, linewidth=0.5
    )
