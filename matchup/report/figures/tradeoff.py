"""What one pays in energy, stress and time: the options of a ranking side by side."""

from __future__ import annotations

from collections.abc import Sequence

from matplotlib.axes import Axes
from matplotlib.figure import Figure

from matchup.report.figures.drawing import (
    GREY,
    TENSION,
    WORKS,
    drawing,
    new_figure,
    plain_grid,
    settle,
    short_name,
)
from matchup.report.figures.labels import label_points
from matchup.report.figures.margins import margins_figure
from matchup.report.shown import Units
from matchup.search.option import Option, Ranking
from matchup.search.tradeoff import is_beaten

MOST_IN_TITLE = 5
MOST_NAMED = 24
"""Names written at most, the best first."""


def ranking_figure(ranking: Ranking, units: Units) -> Figure:
    """Draw the trade-off of the hammers that drive, or how near the others come."""
    if not ranking.options:
        return margins_figure(ranking.rejected, ranking, units)
    return tradeoff_figure(ranking, units)


def tradeoff_figure(ranking: Ranking, units: Units) -> Figure:
    """Draw highest stress use against blow energy and, where it is known, against speed.

    An option that none of the others beats in all three is a full dot, any other one a ring.
    """
    options = ranking.options
    leading = [not is_beaten(option, options) for option in options]
    use = [100 * max(o.compression_use, o.tension_use) for o in options]
    allowed = 100 * (1 - ranking.job.search.reserve)
    energy = [units.value(o.target.blow_energy, "energy") for o in options]
    parts = [(energy, f"blow energy, {units.unit('energy')} (less is better)")]
    what = "energy and stress"
    times, label, word = _times(options, units)
    if any(times):
        parts.append((times, label))
        what = f"energy, stress and {word}"
    with drawing():
        figure = new_figure(_finding(options, leading, what), 3.1)
        panels = figure.subplots(1, len(parts), sharey=True, squeeze=False)[0]
        panels[0].set_ylabel("highest stress over the drive, % of its limit")
        for axes, (values, label) in zip(panels, parts, strict=True):
            axes.set_xlabel(label)
            _draw(axes, values, use, leading)
            axes.axhline(allowed, color=TENSION, linewidth=1.6)
        panels[0].annotate(
            "limit" if allowed == 100 else f"limit less the reserve, {allowed:.3g}%",
            (0, allowed),
            (3, 3),
            xycoords=("axes fraction", "data"),
            textcoords="offset points",
            color=TENSION,
        )
        for axes, (values, _) in zip(panels, parts, strict=True):
            _name(figure, axes, options, values, use, leading)
        settle(figure)
    return figure


def _times(options: Sequence[Option], units: Units) -> tuple[list[float | None], str, str]:
    """Return the time of a whole drive, else the speed at the target; its label; a word for it."""
    drives = [option.slowest for option in options]
    if any(drives):
        seconds = [None if drive is None else drive.taken.seconds for drive in drives]
        label = "time of driving, min (less is better)"
        return [None if s is None else s / 60 for s in seconds], label, "time"
    label = f"speed at the target, {units.speed_unit} (more is better)"
    return [units.speed(option.target.speed) for option in options], label, "speed"


def _finding(options: Sequence[Option], leading: Sequence[bool], what: str) -> str:
    ahead = [short_name(o.hammer.name) for o, leads in zip(options, leading, strict=True) if leads]
    if len(options) == 1:
        return f"{ahead[0]} alone drives"
    if len(ahead) == 1:
        return f"{ahead[0]} is the best in {what} at once"
    named = f"{len(ahead)} hammers"
    if len(ahead) <= MOST_IN_TITLE:
        named = f"{', '.join(ahead[:-1])} and {ahead[-1]}"
    beaten = len(options) - len(ahead)
    rest = f"; {beaten} more (rings) {'is' if beaten == 1 else 'are'} beaten"
    return f"Between {named} it is a choice of {what}{rest if beaten else ''}"


def _draw(
    axes: Axes,
    values: Sequence[float | None],
    use: Sequence[float],
    leading: Sequence[bool],
) -> None:
    plain_grid(axes)
    for x, y, leads in zip(values, use, leading, strict=True):
        if x is not None:
            face = WORKS if leads else "white"
            axes.plot(
                [x],
                [y],
                "o",
                color=face,
                markeredgecolor=WORKS if leads else GREY,
                markersize=5.5,
                zorder=3,
            )
    # Room at the edges for names.
    axes.margins(0.14, 0.12)


def _name(
    figure: Figure,
    axes: Axes,
    options: Sequence[Option],
    values: Sequence[float | None],
    use: Sequence[float],
    leading: Sequence[bool],
) -> None:
    """Write names beside the dots, those of the leading options first."""
    known = [i for i, value in enumerate(values) if value is not None]
    order = sorted(known, key=lambda i: (not leading[i], i))
    label_points(
        figure,
        axes,
        [(values[i] or 0.0, use[i]) for i in order],
        [short_name(options[i].hammer.name) if n < MOST_NAMED else "" for n, i in enumerate(order)],
        [leading[i] for i in order],
    )
