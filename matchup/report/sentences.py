"""Answers in sentences with figures."""

from __future__ import annotations

from matchup.model.job import Job
from matchup.report.shown import Units
from matchup.search.option import (
    NOT_ANALYSED,
    NOT_REACHED,
    OVER_COMPRESSION,
    OVER_TENSION,
    PILE_RUNS,
    REFUSES,
    Option,
    Ranking,
    StagePlan,
)

CAUTION = (
    "A screening aid: confirm by trial driving and dynamic testing; local codes and the licensed "
    "engineer in charge decide."
)


def verdict_sentence(ranking: Ranking, units: Units) -> str:
    """Return the answer of a ranking in one sentence."""
    options = ranking.options
    count = len(options) + len(ranking.rejected)
    if not options:
        return f"None of the {count} hammers can drive this pile within the limits."
    best = options[0]
    can = f"{len(options)} of {count} hammers" if len(options) > 1 else f"1 of {count} hammers"
    cushion = "" if best.stack.pile is None else f" on {units.cushion(best.stack.pile)}"
    return (
        f"{can} can drive this pile within the limits; least energy: {best.hammer.name} at "
        f"{units.text(best.target.stroke, 'stroke')}{cushion}, "
        f"{units.text(best.target.blow_energy, 'energy')} a blow."
    )


def reason(option: Option, job: Job, units: Units) -> str:
    """Return in one sentence what an option does, or why the hammer fails."""
    plan = option.failing or option.target
    at = f"stage {plan.stage.name!r}"
    stroke = units.text(plan.stroke, "stroke")
    cushion = "" if option.stack.pile is None else f" on {units.cushion(option.stack.pile)}"
    of_many = "" if option.stack.pile is None else ", the nearest of the cushions"
    needed = units.text(plan.stage.set_needed, "set")
    if option.verdict == PILE_RUNS:
        resistance = units.text(plan.stage.resistance, "force")
        return (
            f"at {at} pile, helmet and what stands on it weigh more than the {resistance} of "
            "resistance"
        )
    if option.verdict == NOT_ANALYSED:
        return f"at {at}{cushion}: {plan.why}"
    if option.verdict in (NOT_REACHED, REFUSES):
        extra = _uses(plan, job, units) if max(plan.compression_use, plan.tension_use) > 1 else ""
        return (
            f"at {at} its full stroke of {stroke}{cushion}{of_many}, gives a set of "
            f"{units.text(plan.set, 'set')} where {needed} is needed{extra}"
        )
    if option.verdict in (OVER_COMPRESSION, OVER_TENSION):
        return (
            f"at {at} the set of {needed} needs a stroke of {stroke}{cushion}{of_many}"
            f"{_uses(plan, job, units)}"
        )
    return (
        f"at {at} a set of {units.text(plan.set, 'set')} ({needed} needed) at {stroke}{cushion}"
        f"{_uses(plan, job, units)}"
    )


def _uses(plan: StagePlan, job: Job, units: Units) -> str:
    compression = units.text(plan.compression, "stress")
    tension = units.text(plan.tension, "stress")
    return (
        f", with {compression} in compression ({100 * plan.compression_use:.0f}% of the limit of "
        f"{units.text(job.limits.compression, 'stress')}) and {tension} in tension "
        f"({100 * plan.tension_use:.0f}% of {units.text(job.limits.tension, 'stress')})"
    )


def basis(job: Job, units: Units) -> list[str]:
    """Return what the answer rests on: limits with their sources, defaults, warnings."""
    limits = job.limits
    lines = [
        f"Limits: compression {units.text(limits.compression, 'stress')} "
        f"({limits.compression_text}); tension {units.text(limits.tension, 'stress')} "
        f"({limits.tension_text})."
    ]
    lines += [f"Warning: {text}." for text in limits.warnings]
    notes: dict[str, list[str]] = {}
    for note in job.pile.notes:
        notes.setdefault(note, [])
    for stage in job.stages:
        for note in stage.notes:
            notes.setdefault(note, []).append(stage.name)
    if notes:
        lines.append("Taken by default: " + "; ".join(notes) + ".")
    lines += [f"Notice: {text.rstrip('.')}." for text in job.notices]
    return lines
