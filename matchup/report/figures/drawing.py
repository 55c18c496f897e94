"""How every figure looks, and how it becomes a file.

A figure must read in black and white and for colour-blind readers: what colour says is also said
by lightness, hatching or line style, and labels stand beside what they name.
"""

from __future__ import annotations

import io
import warnings
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any

import matplotlib.style
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from matchup.report.table import wrapped

WIDTH = 6.7
"""Of every figure: the text width of a page. [inch]"""
TITLE_LINE = 93
"""Characters in a line of the title."""
LONGEST_NAME = 28
"""Characters of a name from a file; a longer one is cut."""
DOTS_PER_INCH = 200

INK = "#1a1a1a"
GREY = "#666666"
PALE = "#d9d9d9"
COMPRESSION = "#0a4f8f"
TENSION = "#c2500a"
WORKS = "#0b6e5d"

STYLE: dict[str, Any] = {
    # Part of matplotlib itself, and drawn as outlines: no font of the reader's machine is needed.
    "font.family": "DejaVu Sans",
    "font.size": 8,
    "axes.labelsize": 8,
    "axes.edgecolor": GREY,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.8,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.titlesize": 8,
    "axes.titlelocation": "left",
    "text.color": INK,
    # A dollar sign in a name is a dollar sign.
    "text.parse_math": False,
    "axes.formatter.use_mathtext": False,
    "xtick.color": INK,
    "ytick.color": INK,
    "xtick.labelsize": 7.5,
    "ytick.labelsize": 7.5,
    "hatch.linewidth": 0.6,
    "legend.frameon": False,
    "legend.fontsize": 7.5,
    "figure.constrained_layout.use": True,
    "figure.constrained_layout.w_pad": 0.07,
    "svg.fonttype": "path",
    # Names of parts within an SVG; any fixed text makes files of the same figure the same.
    "svg.hashsalt": "matchup",
    "pdf.fonttype": 42,
}


@contextmanager
def drawing() -> Iterator[None]:
    """Draw in the style of all figures, whatever the user's own settings are."""
    with matplotlib.style.context(["default", STYLE]), warnings.catch_warnings():
        # A name may hold signs that the font has not; they show as boxes.
        warnings.filterwarnings("ignore", message="Glyph .* missing from font")
        warnings.filterwarnings("ignore", message="Matplotlib currently does not support")
        yield


def new_figure(title: str, height: float) -> Figure:
    """Return an empty figure with a title that says the finding; `height` [inch] leaves it out."""
    text = wrapped(" ".join(title.split()), TITLE_LINE)
    figure = Figure(figsize=(WIDTH, height + 0.18 * (1 + text.count("\n"))))
    figure.suptitle(text, x=0.01, ha="left", fontsize=9, fontweight="bold")
    return figure


def settle(figure: Figure) -> None:
    """Lay a figure out for good, so that what is measured or drawn afterwards stays where it is."""
    figure.draw_without_rendering()
    figure.set_layout_engine("none")


def rendered(figure: Figure, kind: str) -> bytes:
    """Return a figure as an ``svg``, ``png`` or ``pdf`` file; the same one gives the same bytes."""
    undated: dict[str, dict[str, None]] = {
        "svg": {"Date": None},
        "pdf": {"CreationDate": None},
        "png": {},
    }
    out = io.BytesIO()
    with drawing():
        figure.savefig(out, format=kind, dpi=DOTS_PER_INCH, metadata=undated[kind])
    return out.getvalue()


def short_name(name: str) -> str:
    """Return a name from a file in one line that leaves room for the figure."""
    line = " ".join(name.split())
    return line if len(line) <= LONGEST_NAME else f"{line[: LONGEST_NAME - 3].rstrip()}..."


def plain_grid(axes: Axes, which: str = "both") -> None:
    """Draw a faint grid behind everything."""
    axes.grid(True, axis=which, color=PALE, linewidth=0.5)  # type: ignore[arg-type]
    axes.set_axisbelow(True)
