"""A ranking as table, text and document."""

from __future__ import annotations

from matchup.report.document import SCHEMA_VERSION, limits_document, option_document
from matchup.report.sentences import CAUTION, basis, reason, verdict_sentence
from matchup.report.shown import Units, percent
from matchup.report.table import Column, Table, wrapped
from matchup.search.option import Option, Ranking, StagePlan

SCHEDULES_SHOWN = 3
"""Stroke schedules printed with a ranking; `check` prints any hammer's."""


def options_table(options: tuple[Option, ...], units: Units) -> Table:
    """Return the table of options, best first."""
    stroke = units.unit("stroke")
    columns = (
        Column("verdict", "verdict", wrap=11),
        Column("hammer", "hammer", wrap=14),
        Column(units.key("stroke", "stroke"), f"stroke\n{stroke}", units.digits("stroke")),
        Column("cushion", "pile\ncushion", wrap=12),
        Column(units.key("set", "set"), f"set\n{units.unit('set')}", units.digits("set")),
        Column(f"blows_per_{units.counted.replace(' ', '')}", f"blows\n/{units.counted}", 0),
        Column(
            units.key("blow_energy", "energy"),
            f"energy\n{units.unit('energy')}",
            units.digits("energy"),
        ),
        Column("compression_percent", "compr.\n% limit", 0),
        Column("tension_percent", "tension\n% limit", 0),
        Column("governs", "governs", wrap=8, keep=3),
        Column("stroke_window", f"window\n{stroke}", keep=2),
        Column("reach", "reach", 2, keep=4),
        Column("blows_per_minute", "blows\n/min", 0, keep=1),
    )
    return Table(columns, tuple(_row(option, units) for option in options))


def _row(option: Option, units: Units) -> tuple[object, ...]:
    plan = option.target
    return (
        option.verdict,
        option.hammer.name,
        units.value(plan.stroke, "stroke"),
        units.cushion(option.stack.pile),
        units.value(plan.set, "set"),
        units.blow_count(plan.set),
        units.value(plan.blow_energy, "energy"),
        percent(option.compression_use),
        percent(option.tension_use),
        option.governs,
        _window(plan, units),
        f"> {option.reach:.1f}" if option.reach_is_open else option.reach,
        None if plan.blow_rate is None else 60 * plan.blow_rate,
    )


def _window(plan: StagePlan, units: Units) -> str | None:
    low, high = units.value(plan.low, "stroke"), units.value(plan.top, "stroke")
    return None if low is None or high is None else f"{low:.2f}-{high:.2f}"


def schedule_table(options: tuple[Option, ...], units: Units) -> Table:
    """Return what options do at every stage."""
    stroke = units.unit("stroke")
    columns = (
        Column("hammer", "hammer", wrap=14),
        Column("stage", "stage", wrap=18),
        Column(
            units.key("penetration", "length"),
            f"penetration\n{units.unit('length')}",
            units.digits("length"),
            keep=1,
        ),
        Column(units.key("stroke", "stroke"), f"stroke\n{stroke}", units.digits("stroke")),
        Column("stroke_window", f"window\n{stroke}"),
        Column(units.key("set", "set"), f"set\n{units.unit('set')}", units.digits("set")),
        Column(
            units.key("set_needed", "set"),
            f"needed\n{units.unit('set')}",
            units.digits("set"),
        ),
        Column(f"blows_per_{units.counted.replace(' ', '')}", f"blows\n/{units.counted}", 0),
        Column("compression_percent", "compr.\n% limit", 0),
        Column("tension_percent", "tension\n% limit", 0),
    )
    rows = tuple(
        (
            option.hammer.name if first else "",
            plan.stage.name,
            units.value(plan.stage.penetration, "length"),
            units.value(plan.stroke, "stroke"),
            _window(plan, units),
            units.value(plan.set, "set"),
            units.value(plan.stage.set_needed, "set"),
            units.blow_count(plan.set),
            percent(plan.compression_use),
            percent(plan.tension_use),
        )
        for option in options
        for first, plan in zip((True, *[False] * len(option.plans)), option.plans, strict=False)
    )
    return Table(columns, rows)


def runner_up_sentence(option: Option, units: Units) -> str:
    """Return the softer runner-up of an option in words."""
    softer = option.runner_up
    if softer is None:
        return ""
    extra = 100 * (softer.target.blow_energy / option.target.blow_energy - 1)
    return (
        f"Softer for {option.hammer.name}: {units.cushion_words(softer.stack.pile)} at "
        f"{units.text(softer.target.stroke, 'stroke')} costs {extra:.0f}% more energy for "
        f"{100 * softer.compression_use:.0f}% of the compression limit and "
        f"{100 * softer.tension_use:.0f}% of the tension limit."
    )


def ranking_text(ranking: Ranking, units: Units, width: int = 100) -> str:
    """Return the ranking for a terminal: answer first, then the options, then the failures."""
    job = ranking.job
    parts = [wrapped(f"{job.title}: {verdict_sentence(ranking, units)}", width)]
    if ranking.options:
        parts.append(options_table(ranking.options, units).to_text(width))
        best = ranking.options[:SCHEDULES_SHOWN]
        if len(job.stages) > 1:
            heading = (
                f"Stroke schedule of the best {len(best)}:" if len(best) > 1 else "Stroke schedule:"
            )
            parts.append(f"{heading}\n\n{schedule_table(best, units).to_text(width)}")
        softer = [runner_up_sentence(option, units) for option in best]
        if any(softer):
            parts.append("\n".join(wrapped(line, width, "  ") for line in softer if line))
    if ranking.rejected:
        lines = ["Hammers that can't, nearest miss first:"]
        for option in ranking.rejected:
            text = f"{option.hammer.name}: {option.verdict}; {reason(option, job, units)}."
            lines.append(wrapped(f"  {text}", width, "    "))
        parts.append("\n".join(lines))
    parts.append(foot(ranking, units, width))
    return "\n\n".join(parts)


def foot(ranking: Ranking, units: Units, width: int) -> str:
    """Return what an answer rests on, how it was found, and the caution."""
    lines = basis(ranking.job, units)
    if any(option.reach is not None for option in ranking.options):
        lines.append(
            "Reach: largest resistance still overcome within the limits at the needed set, over "
            "the target stage's."
        )
    lines.append(
        f"Searched: {certificates(ranking)}; {ranking.analyses} blows in {ranking.runtime:.1f} s."
    )
    lines.append(CAUTION)
    return "\n".join(wrapped(line, width, "  ") for line in lines)


def certificates(ranking: Ranking) -> str:
    """Return what certifies the options."""
    everyone = (*ranking.options, *ranking.rejected)
    if len({option.certificate for option in everyone}) == 1:
        return everyone[0].certificate
    return f"{everyone[0].hammer.name} by {everyone[0].certificate}, the others alike"


def check_text(ranking: Ranking, units: Units, width: int = 100) -> str:
    """Return the answer for one hammer: yes or no first, the reason, the margins."""
    job = ranking.job
    option = (*ranking.options, *ranking.rejected)[0]
    can = "Yes" if option.drives else "No"
    head = f"{can}: {option.hammer.name} {option.verdict}; {reason(option, job, units)}."
    parts = [wrapped(head, width), margins_table(option, ranking, units).to_text(width)]
    if len(job.stages) > 1 and option.drives:
        parts.append(schedule_table((option,), units).to_text(width))
    if option.runner_up is not None:
        parts.append(wrapped(runner_up_sentence(option, units), width, "  "))
    parts.append(foot(ranking, units, width))
    return "\n\n".join(parts)


def margins_table(option: Option, ranking: Ranking, units: Units) -> Table:
    """Return how far an option is from each limit; a negative margin is an excess."""
    job = ranking.job
    plan = option.failing or option.target
    stress = units.unit("stress")
    rows: list[tuple[object, ...]] = [
        (
            f"set, {units.unit('set')}",
            units.value(plan.set, "set"),
            f"at least {units.text(plan.stage.set_needed, 'set')}",
            None if plan.set <= 0 else 100 * (plan.set_share - 1),
        )
    ]
    for name, found, limit in (
        ("compression", max(p.compression for p in option.plans), job.limits.compression),
        ("tension", max(p.tension for p in option.plans), job.limits.tension),
    ):
        rows.append(
            (
                f"peak {name}, {stress}",
                units.value(found, "stress"),
                f"at most {units.text(limit, 'stress')}",
                None if found != found else 100 * (1 - found / limit),
            )
        )
    rows.append(("reach, of the resistance", option.reach, "at least 1", _reach_margin(option)))
    columns = (
        Column("what", "what"),
        Column("found", "found", 2),
        Column("needed", "needed"),
        Column("margin_percent", "margin\n%", 0),
    )
    return Table(columns, tuple(rows))


def _reach_margin(option: Option) -> float | None:
    return None if option.reach is None else 100 * (option.reach - 1)


def ranking_document(ranking: Ranking, units: Units) -> dict[str, object]:
    """Return the ranking as the JSON document."""
    job = ranking.job
    return {
        "schema_version": SCHEMA_VERSION,
        "title": job.title,
        "objective": job.search.objective,
        "limits": limits_document(job),
        "options": [
            option_document(option, job, units, place)
            for place, option in enumerate(ranking.options, 1)
        ],
        "rejected": [option_document(option, job, units, None) for option in ranking.rejected],
        "notices": list(job.notices),
        "analyses": ranking.analyses,
        "runtime_s": ranking.runtime,
    }


def check_document(ranking: Ranking, units: Units) -> dict[str, object]:
    """Return the answer for one hammer as the JSON document."""
    job = ranking.job
    option = (*ranking.options, *ranking.rejected)[0]
    place = 1 if option.drives else None
    return {
        "schema_version": SCHEMA_VERSION,
        "title": job.title,
        "can": option.drives,
        "limits": limits_document(job),
        **option_document(option, job, units, place),
        "notices": list(job.notices),
        "analyses": ranking.analyses,
        "runtime_s": ranking.runtime,
    }
