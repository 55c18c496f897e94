"""One blow as page and tables."""

from __future__ import annotations

from matchup.analysis.cells import is_setting
from matchup.analysis.single import Blow
from matchup.model.job import Job
from matchup.report.closing import closing
from matchup.report.page import Headline, Page, Prose
from matchup.report.sentences import set_text, where
from matchup.report.shown import Units, share_text
from matchup.report.table import Column, Table


def blow_page(blow: Blow, job: Job, units: Units) -> Page:
    """Return one blow: what it does to pile and ground, then how far to trust it."""
    on = "" if blow.cushion is None else f" on {units.cushion_words(blow.cushion)} ({blow.wear})"
    gives = set_text(blow.set, blow.stage, job, units)
    head = (
        f"{blow.hammer.name} {where(blow.stage, job, units)}: {_setting(blow, units)}{on} gives "
        f"{gives}."
    )
    notices = blow_notices(blow, job, units)
    noticed = [Prose(tuple(notices))] if notices else []
    return [Headline(head), figures_table(blow, units), *noticed, *closing(job, units)]


def figures_table(blow: Blow, units: Units) -> Table:
    """Return what a blow comes to, each figure with a remark."""
    count = units.blow_count(blow.set)
    rows = [
        ("set", units.text(blow.set, "set"), f"largest toe displacement less {blow.set_rule}"),
        (
            f"blow count per {units.counted}",
            "-" if count is None else f"{count:.0f}",
            "",
        ),
        (
            "largest toe displacement",
            units.text(blow.toe_most, "set"),
            "from the unstressed soil",
        ),
        (
            "peak compression",
            units.text(blow.compression, "stress"),
            f"{share_text(blow.compression_use)} of the limit{_of(blow.compression_in)}, "
            f"{units.text(blow.compression_at, 'length')} from the head",
        ),
        (
            "peak tension",
            units.text(blow.tension, "stress"),
            f"{share_text(blow.tension_use)} of the limit{_of(blow.tension_in)}, "
            f"{units.text(blow.tension_at, 'length')} from the head",
        ),
        ("hammer cushion", "", units.retold(blow.hammer_cushion)),
        ("peak head force", units.text(blow.head_force, "force"), ""),
        (
            "blow energy",
            units.text(blow.blow_energy, "energy"),
            "the setting" if blow.hammer.set_by_energy else "ram weight times stroke",
        ),
        (
            "transferred energy",
            units.text(blow.transferred, "energy"),
            f"{100 * blow.transferred / blow.blow_energy:.0f}% of it reaches the pile",
        ),
        (
            "impact velocity",
            f"{units.value(blow.impact_velocity, 'velocity'):.2f} {units.unit('velocity')}",
            _efficiency(blow),
        ),
        (
            "energy audit",
            f"{100 * abs(blow.balance):.2f}%",
            "unaccounted for, of the energy put in by ram and gravity",
        ),
        (
            "computed with",
            f"{blow.segments} segments",
            f"step {1e6 * blow.time_step:.0f} us, over {1e3 * blow.duration:.0f} ms",
        ),
    ]
    columns = (
        Column("what", "what"),
        Column("value", "value"),
        Column("remark", "remark", wrap=60),
    )
    return Table(columns, tuple(rows))


def _setting(blow: Blow, units: Units) -> str:
    word = "set at" if blow.hammer.set_by_energy else "stroke"
    return f"{word} {units.setting(blow.hammer, blow.stroke)}"


def _efficiency(blow: Blow) -> str:
    """Return the share of the energy left at impact, and what a rake leaves of it."""
    whole, left = (f"{100 * share:.0f}%" for share in (blow.hammer.efficiency, blow.left_at_impact))
    return f"efficiency {whole}" + ("" if whole == left else f", along the rake {left}")


def _of(part: str) -> str:
    return f" of {part}" if part else ""


def blow_notices(blow: Blow, job: Job, units: Units) -> list[str]:
    """Return what lies outside the hammer's settings or the job's cushions, in words."""
    notices = []
    hammer, stroke = blow.hammer, blow.stroke
    if stroke < hammer.stroke_min * (1 - 1e-9):
        least = units.setting(hammer, hammer.stroke_min)
        notices.append(f"Notice: the setting is below the hammer's least of {least}.")
    elif hammer.stroke_step and not is_setting(hammer, stroke):
        step = units.setting(hammer, hammer.stroke_step)
        notices.append(f"Notice: the setting lies between the hammer's steps of {step}.")
    if blow.cushion and job.cushions and blow.cushion not in job.cushions.cushions():
        words = units.cushion_words(blow.cushion)
        notices.append(f"Notice: {words} are not among the job's cushions.")
    return notices


def envelope_table(blow: Blow, units: Units) -> Table:
    """Return the largest stresses along the pile."""
    stress, length = units.unit("stress"), units.unit("length")
    columns = (
        Column(units.key("distance", "length"), f"from head\n{length}", 2),
        Column(units.key("compression", "stress"), f"compression\n{stress}", 2),
        Column(units.key("tension", "stress"), f"tension\n{stress}", 2),
    )
    envelope = blow.envelope
    rows = tuple(
        (
            units.value(float(x), "length"),
            units.value(float(c), "stress"),
            units.value(float(t), "stress"),
        )
        for x, c, t in zip(envelope.distance, envelope.compression, envelope.tension, strict=True)
    )
    return Table(columns, rows)


def trace_table(blow: Blow, units: Units) -> Table:
    """Return head and toe against time."""
    columns = (
        Column("time_ms", "time\nms", 3),
        Column(units.key("head_force", "force"), f"head force\n{units.unit('force')}", 1),
        Column(
            units.key("head_velocity", "velocity"), f"head velocity\n{units.unit('velocity')}", 3
        ),
        Column(units.key("toe_displacement", "set"), f"toe displacement\n{units.unit('set')}", 3),
    )
    trace = blow.trace
    rows = tuple(
        (
            1e3 * float(time),
            units.value(float(force), "force"),
            units.value(float(velocity), "velocity"),
            units.value(float(toe), "set"),
        )
        for time, force, velocity, toe in zip(
            trace.time,
            trace.head_force,
            trace.head_velocity,
            trace.toe_displacement,
            strict=True,
        )
    )
    return Table(columns, rows)
