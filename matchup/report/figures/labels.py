"""Labels beside points, none over another."""

from __future__ import annotations

from collections.abc import Sequence

from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.transforms import Bbox

PLACES = (
    (5, 0, "left", "center"),
    (0, 5, "center", "bottom"),
    (0, -5, "center", "top"),
    (-5, 0, "right", "center"),
    (4, 4, "left", "bottom"),
    (4, -4, "left", "top"),
    (-4, 4, "right", "bottom"),
    (-4, -4, "right", "top"),
    (0, 13, "center", "bottom"),
    (0, -13, "center", "top"),
)
"""Where a label may stand: points to the right of and above its own, and its alignment."""
MARK = 3.5
"""Half the size of a marker, which no label may cover. [point]"""


def label_points(
    figure: Figure,
    axes: Axes,
    points: Sequence[tuple[float, float]],
    texts: Sequence[str],
    weights: Sequence[str],
) -> None:
    """Write a text beside every point where there is room, the first ones first.

    Parameters
    ----------
    points : sequence of (x, y)
        In the units of the axes.
    texts : sequence of str
        An empty one is left out.
    weights : sequence of str
        Font weights.
    """
    figure.draw_without_rendering()
    inch = figure.dpi / 72
    shown = axes.transData.transform(points)
    taken = [
        Bbox.from_extents(x - MARK * inch, y - MARK * inch, x + MARK * inch, y + MARK * inch)
        for x, y in shown
    ]
    inside = axes.get_window_extent()
    for point, text, weight in zip(points, texts, weights, strict=True):
        for right, up, across, along in PLACES if text else ():
            label = axes.annotate(
                text,
                point,
                (right, up),
                textcoords="offset points",
                ha=across,
                va=along,
                fontsize=7.5,
                fontweight=weight,
            )
            label.set_in_layout(False)
            box = label.get_window_extent().padded(2)
            fits = inside.x0 <= box.x0 and box.x1 <= inside.x1
            fits = fits and inside.y0 <= box.y0 and box.y1 <= inside.y1
            if fits and not any(box.overlaps(other) for other in taken):
                taken.append(box)
                break
            label.remove()
