"""One blow: its waves in the pile, what the head feels of them, and the stresses they leave.

The three parts share their axes: the head's record stands over the waves with the same time, the
stress envelope beside them with the same position.
"""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from matplotlib.colors import LinearSegmentedColormap, TwoSlopeNorm
from matplotlib.figure import Figure
from matplotlib.ticker import FuncFormatter

from matchup.analysis.single import Blow
from matchup.model.pile import Pile
from matchup.report.figures.drawing import (
    COMPRESSION,
    GREY,
    INK,
    PALE,
    TENSION,
    drawing,
    new_figure,
    settle,
    short_name,
)
from matchup.report.shown import Units, share_text
from matchup.wave.layout import Floats

PASSAGES = 8
"""So many wave travels along the pile are shown at most; by then the extremes are past."""
HATCHED = 0.1
"""Tension beyond this share of the largest one is hatched. [-]"""
SHADES = LinearSegmentedColormap.from_list(
    "force", [(0.0, TENSION), (0.5, "#ffffff"), (0.75, "#7fa9cf"), (1.0, "#062c50")]
)


def blow_figure(blow: Blow, pile: Pile, units: Units) -> Figure:
    """Draw one blow.

    Parameters
    ----------
    blow : Blow
    pile : Pile
        The one that was struck.
    units : Units
    """
    with drawing():
        figure = new_figure(_finding(blow, units), 5.1)
        grid = figure.add_gridspec(2, 2, height_ratios=(1, 2.6), width_ratios=(2.1, 1))
        waves = figure.add_subplot(grid[1, 0])
        head = figure.add_subplot(grid[0, 0], sharex=waves)
        envelope = figure.add_subplot(grid[1, 1], sharey=waves)
        _draw_waves(figure, waves, blow, units)
        _draw_head(head, blow, pile, units)
        _draw_envelope(envelope, blow, units)
        _tell(figure.add_subplot(grid[0, 1]), blow, units)
        settle(figure)
    return figure


def _finding(blow: Blow, units: Units) -> str:
    use, side = max((blow.compression_use, "compression"), (blow.tension_use, "tension"))
    how = "is above its limit" if use > 1 else "is the nearer to its limit"
    return (
        f"{short_name(blow.hammer.name)} at {units.text(blow.stroke, 'stroke')}: a set of "
        f"{units.text(blow.set, 'set')}; {side} {how}, at {share_text(use)}"
    )


def _shown(si: Floats, quantity: str, units: Units) -> Floats:
    """Return values in the display unit."""
    return si * (units.value(1.0, quantity) or 1.0)


def _draw_waves(figure: Figure, axes: Axes, blow: Blow, units: Units) -> None:
    """Draw force as shade over time and position, the head on top."""
    travel = blow.segments * blow.time_step
    steps = min(blow.waves.time.size, PASSAGES * blow.segments)
    force = _shown(blow.waves.force[:steps], "force", units).T
    ends = 1e3 * np.concatenate(([0.0], blow.waves.time[:steps]))
    distance = _shown(blow.waves.distance, "length", units)
    norm = TwoSlopeNorm(0.0, min(force.min(), -1e-3 * force.max()), max(force.max(), 1e-9))
    # Lightness tells compression by its own scale; slight tension shall not look like much.
    norm.vmin = min(norm.vmin or 0.0, -0.35 * force.max())
    # Thousands of cells are a picture within the file, not as many shapes.
    shades = axes.pcolormesh(ends, distance, force, cmap=SHADES, norm=norm, rasterized=True)
    middle = 0.5 * (distance[1:] + distance[:-1])
    least = force.min()
    if least < -0.02 * force.max():
        axes.contourf(
            0.5 * (ends[1:] + ends[:-1]),
            middle,
            force,
            levels=[least, HATCHED * least],
            colors="none",
            hatches=["//////"],
        )
    axes.set_ylim(distance[-1], distance[0])
    axes.set_xlim(0, ends[-1])
    axes.set_ylabel(f"distance from the head, {units.unit('length')}")
    axes.set_xlabel("time from impact, ms")
    _draw_path(axes, travel, distance[-1], blow, units)
    bar = figure.colorbar(shades, ax=axes, location="bottom", aspect=45, pad=0.02)
    bar.set_label(f"force in the pile, {units.unit('force')}; tension negative and hatched")
    bar.outline.set_linewidth(0.5)


def _draw_path(axes: Axes, travel: float, toe: float, blow: Blow, units: Units) -> None:
    """Draw the way of the front down and up again, and the ground surface."""
    down, back = 1e3 * travel, 2e3 * travel
    axes.plot([0, down, back], [0, toe, 0], color=INK, linewidth=0.8, linestyle=(0, (5, 3)))
    above = float(blow.envelope.distance[-1]) - blow.stage.penetration
    surface = units.value(above, "length") or 0.0
    if surface > 0:
        axes.axhline(surface, color=INK, linewidth=0.8, linestyle=(0, (1, 2)))
        axes.annotate(
            "ground",
            (1.0, surface),
            (-3, -2),
            xycoords=("axes fraction", "data"),
            textcoords="offset points",
            ha="right",
            va="top",
            bbox={"facecolor": "white", "edgecolor": "none", "pad": 0.8, "alpha": 0.8},
        )


def _draw_head(axes: Axes, blow: Blow, pile: Pile, units: Units) -> None:
    """Draw force, and velocity times impedance: they part when waves come back."""
    trace = blow.trace
    time = 1e3 * trace.time
    force = _shown(trace.head_force, "force", units)
    moving = _shown(pile.head.impedance_at(0.0) * trace.head_velocity, "force", units)
    axes.fill_between(time, force, moving, color=PALE, linewidth=0)
    axes.plot(time, moving, color=INK, linewidth=1.1, linestyle=(0, (4, 2)))
    axes.plot(time, force, color=COMPRESSION, linewidth=1.6)
    axes.axhline(0, color=GREY, linewidth=0.6)
    back = 2e3 * blow.segments * blow.time_step
    axes.axvline(back, color=INK, linewidth=0.8, linestyle=(0, (5, 3)))
    axes.set_ylabel(f"at the head, {units.unit('force')}")
    axes.tick_params(labelbottom=False)
    axes.annotate(
        f"back from the toe after {back:.1f} ms",
        (back, 0.0),
        (4, -4),
        xycoords=("data", "axes fraction"),
        textcoords="offset points",
        va="top",
    )
    axes.set_title("force", loc="left", color=COMPRESSION, fontweight="bold")
    axes.set_title("dashed: velocity x impedance; grey: waves from below", loc="right")


def _draw_envelope(axes: Axes, blow: Blow, units: Units) -> None:
    """Draw the largest stresses along the pile as shares of their limits, so both have room."""
    envelope = blow.envelope
    distance = _shown(envelope.distance, "length", units)
    sides = (
        (1, envelope.compression_use, blow.compression, blow.compression_use, blow.compression_at),
        (-1, envelope.tension_use, blow.tension, blow.tension_use, blow.tension_at),
    )
    for sign, uses, peak, use, at in sides:
        colour, fill = (COMPRESSION, "#7fa9cf") if sign > 0 else (TENSION, "#f2c6a8")
        shares = 100 * sign * uses
        axes.fill_betweenx(
            distance,
            0,
            shares,
            facecolor=fill,
            edgecolor=TENSION,
            hatch="" if sign > 0 else "//////",
            linewidth=0,
        )
        axes.plot(shares, distance, color=colour, linewidth=1.6)
        axes.axvline(100 * sign, color=colour, linewidth=2.2)
        place = units.value(at, "length") or 0.0
        axes.plot([100 * sign * use], [place], "o", color=INK, markersize=4, zorder=4)
        _name_peak(axes, sign, peak, use, place, distance[-1], units)
        if peak:
            word = "compression" if sign > 0 else "tension"
            title = f"{word}\nlimit {units.text(peak / use, 'stress')}"
            axes.set_title(title, color=colour, loc="right" if sign > 0 else "left")
    axes.axvline(0, color=INK, linewidth=0.8)
    axes.tick_params(labelleft=False)
    most = max(115.0, 110 * blow.compression_use, 110 * blow.tension_use)
    axes.set_xlim(-most, most)
    axes.set_xlabel("largest stress, % of the limit")
    axes.xaxis.set_major_formatter(FuncFormatter(_unsigned))


def _name_peak(
    axes: Axes, sign: int, peak: float, use: float, place: float, length: float, units: Units
) -> None:
    """Write the peak stress beside its point, on the side where there is room."""
    text = f"{units.text(peak, 'stress')}\n{share_text(use)}"
    down = 1 if place < 0.85 * length else -1
    inwards = use > 0.55
    axes.annotate(
        text,
        (100 * sign * use, place),
        (-4 * sign if inwards else 4 * sign, -4 * down),
        textcoords="offset points",
        ha="right" if (sign > 0) == inwards else "left",
        va="top" if down > 0 else "bottom",
        bbox={"facecolor": "white", "edgecolor": "none", "pad": 0.8, "alpha": 0.8},
    ).set_in_layout(False)


def _unsigned(value: float, _: int) -> str:
    return f"{abs(value):g}"


def _tell(axes: Axes, blow: Blow, units: Units) -> None:
    """Write the figures that the pictures do not show."""
    axes.axis("off")
    cushion = units.cushion_words(blow.cushion)
    lines = (
        f"{cushion}" + (f", {blow.wear}" if blow.cushion else ""),
        f"needed set {units.text(blow.stage.set_needed, 'set')}",
        f"blow energy {units.text(blow.blow_energy, 'energy')}",
        f"into the pile {units.text(blow.transferred, 'energy')}",
        f"head force {units.text(blow.head_force, 'force')}",
        f"resistance {units.text(blow.stage.resistance, 'force')}",
    )
    axes.text(0.02, 1.0, "\n".join(lines), va="top", linespacing=1.5, transform=axes.transAxes)
