"""Labels beside points, none over another."""

from __future__ import annotations

from collections.abc import Sequence

from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.transforms import Bbox

from matchup.report.figures.drawing import GREY

PLACES = (
    (5, 0, "left", "center"),
    (0, 5, "center", "bottom"),
    (0, -5, "center", "top"),
    (-5, 0, "right", "center"),
    (4, 4, "left", "bottom"),
    (4, -4, "left", "top"),
    (-4, 4, "right", "bottom"),
    (-4, -4, "right", "top"),
)
"""Where a label may stand: points to the right of and above its own, and its alignment."""
FAR_PLACES = (
    *((22, up, "left", "center") for up in (22, -22, 36, -36, 50, 64)),
    *((-22, up, "right", "center") for up in (22, -22, 36, -36, 50, 64)),
    *((48, up, "left", "center") for up in (30, -30, 44, 58, 72, 86)),
)
"""Where one that must not be left out may stand as well, joined to its point by a line."""
LINE = {"arrowstyle": "-", "linewidth": 0.6, "color": GREY, "shrinkA": 0, "shrinkB": 3}
MARK = 3.5
"""Half the size of a marker, which no label may cover. [point]"""


def label_points(
    figure: Figure,
    axes: Axes,
    points: Sequence[tuple[float, float]],
    texts: Sequence[str],
    weighty: Sequence[bool],
) -> None:
    """Write a text beside every point where there is room, the first ones first.

    Parameters
    ----------
    points : sequence of (x, y)
        In the units of the axes.
    texts : sequence of str
        An empty one is left out.
    weighty : sequence of bool
        Whose text is bold, and stands further away rather than nowhere.
    """
    figure.draw_without_rendering()
    inch = figure.dpi / 72
    shown = axes.transData.transform(points)
    taken = [
        Bbox.from_extents(x - MARK * inch, y - MARK * inch, x + MARK * inch, y + MARK * inch)
        for x, y in shown
    ]
    inside = axes.get_window_extent()
    for point, text, is_bold in zip(points, texts, weighty, strict=True):
        places = (*PLACES, *FAR_PLACES) if is_bold else PLACES
        for place in places if text else ():
            right, up, across, along = place
            label = axes.annotate(
                text,
                point,
                (right, up),
                textcoords="offset points",
                ha=across,
                va=along,
                fontsize=7.5,
                fontweight="bold" if is_bold else "normal",
                # Over lines and grid, under the points.
                zorder=2.5,
                bbox={"facecolor": "white", "edgecolor": "none", "pad": 0.3, "alpha": 0.8},
            )
            label.set_in_layout(False)
            box = label.get_window_extent().padded(2)
            fits = inside.x0 <= box.x0 and box.x1 <= inside.x1
            fits = fits and inside.y0 <= box.y0 and box.y1 <= inside.y1
            if fits and not any(box.overlaps(other) for other in taken):
                taken.append(box)
                if place in FAR_PLACES:
                    _join(axes, point, (right, up))
                break
            label.remove()


def _join(axes: Axes, point: tuple[float, float], offset: tuple[float, float]) -> None:
    line = axes.annotate("", point, offset, textcoords="offset points", arrowprops=LINE)
    line.set_in_layout(False)
