"""A ranking as table, text and document."""

from __future__ import annotations

from matchup.report.document import option_document
from matchup.report.sentences import CAUTION, basis, reason, verdict_sentence
from matchup.report.shown import Units, percent
from matchup.report.table import Column, Table, wrapped
from matchup.search.option import Option, Ranking

SCHEMA_VERSION = 1


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
        Column("governs", "governs", wrap=8, keep=2),
        Column("stroke_window", f"window\n{stroke}", keep=1),
    )
    return Table(columns, tuple(_row(option, units) for option in options))


def _row(option: Option, units: Units) -> tuple[object, ...]:
    plan = option.target
    low, high = units.value(plan.low, "stroke"), units.value(plan.top, "stroke")
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
        f"{low:.2f}-{high:.2f}" if low is not None and high is not None else None,
    )


def ranking_text(ranking: Ranking, units: Units, width: int = 100) -> str:
    """Return the ranking for a terminal: answer first, then the options, then the failures."""
    job = ranking.job
    parts = [wrapped(f"{job.title}: {verdict_sentence(ranking, units)}", width)]
    if ranking.options:
        parts.append(options_table(ranking.options, units).to_text(width))
    if ranking.rejected:
        lines = ["Hammers that can't, nearest miss first:"]
        for option in ranking.rejected:
            text = f"{option.hammer.name} {option.verdict}: {reason(option, job, units)}."
            lines.append(wrapped(f"  {text}", width, "    "))
        parts.append("\n".join(lines))
    lines = basis(job, units)
    lines.append(
        f"Searched: {certificates(ranking)}; {ranking.analyses} blows in {ranking.runtime:.1f} s."
    )
    lines.append(CAUTION)
    parts.append("\n".join(wrapped(line, width, "  ") for line in lines))
    return "\n\n".join(parts)


def certificates(ranking: Ranking) -> str:
    """Return what certifies the options, the best hammer's first."""
    texts = [option.certificate for option in (*ranking.options, *ranking.rejected)]
    if len(set(texts)) == 1:
        return texts[0]
    return f"{texts[0]} for the first hammer, and so on for the others"


def ranking_document(ranking: Ranking, units: Units) -> dict[str, object]:
    """Return the ranking as the JSON document."""
    job = ranking.job
    limits = job.limits
    return {
        "schema_version": SCHEMA_VERSION,
        "title": job.title,
        "objective": job.search.objective,
        "limits": {
            "compression_MPa": limits.compression / 1e6,
            "tension_MPa": limits.tension / 1e6,
            "compression_rule": limits.compression_text,
            "tension_rule": limits.tension_text,
            "warnings": list(limits.warnings),
        },
        "options": [
            option_document(option, job, units, place)
            for place, option in enumerate(ranking.options, 1)
        ],
        "rejected": [option_document(option, job, units, None) for option in ranking.rejected],
        "notices": list(job.notices),
        "analyses": ranking.analyses,
        "runtime_s": ranking.runtime,
    }
