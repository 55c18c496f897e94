"""Answers in sentences with figures."""

from __future__ import annotations

from matchup.model.cushion import Stack
from matchup.model.job import Job
from matchup.report.shown import Units
from matchup.search.option import (
    NOT_ANALYSED,
    NOT_REACHED,
    OVER_COMPRESSION,
    OVER_TENSION,
    PILE_RUNS,
    REDUCED,
    REFUSES,
    Cure,
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
        hammers = "the hammer" if count == 1 else f"none of the {count} hammers"
        return f"{hammers} can drive this pile within the limits."
    best = options[0]
    objective = "fastest" if ranking.job.search.objective == "time" else "least energy"
    return (
        f"{len(options)} of {count} hammers can drive this pile within the limits; {objective}: "
        f"{best.hammer.name} at {units.text(best.target.stroke, 'stroke')}"
        f"{on_stack(best.stack, units)}, {units.text(best.target.blow_energy, 'energy')} a blow."
    )


def on_stack(stack: Stack, units: Units) -> str:
    """Return cushions in words, to stand behind a stroke."""
    words = "" if stack.pile is None else f" on {units.cushion_words(stack.pile)}"
    return words + ("" if stack.hammer is None else f" under {stack.hammer.text}")


def reason(option: Option, job: Job, units: Units) -> str:
    """Return in one sentence what an option does, or why the hammer fails and what would help."""
    plan = option.failing or option.target
    at = f"at stage {plan.stage.name!r} " if len(job.stages) > 1 else ""
    stroke = units.text(plan.stroke, "stroke")
    on = on_stack(option.stack, units)
    needed = units.text(plan.stage.set_needed, "set")
    if option.verdict == PILE_RUNS:
        resistance = units.text(plan.stage.resistance, "force")
        return (
            f"{at}pile, helmet, ram and what stands on it weigh more than the {resistance} of "
            "resistance"
        )
    if option.verdict == NOT_ANALYSED:
        return f"{at}{plan.why}{on}"
    if option.verdict in (NOT_REACHED, REFUSES):
        text = (
            f"{at}full stroke of {stroke}{on} gives a set of {units.text(plan.set, 'set')} where "
            f"{needed} is needed, with {_uses(plan)}"
        )
    elif option.verdict in (OVER_COMPRESSION, OVER_TENSION):
        text = f"{at}a set of {needed} needs {stroke}{on}, with {_uses(plan)}"
    else:
        text = (
            f"{at}a set of {units.text(plan.set, 'set')} ({needed} needed) at {stroke}{on}, with "
        )
        text += _uses(plan) + _held_back(option, units)
    return text + _cured(option.cure, option, units)


def _uses(plan: StagePlan) -> str:
    return (
        f"{100 * plan.compression_use:.0f}% of the compression limit and "
        f"{100 * plan.tension_use:.0f}% of the tension limit"
    )


def _held_back(option: Option, units: Units) -> str:
    """Return the stages whose stroke must stay below the target's, in words."""
    if option.verdict != REDUCED:
        return ""
    held = [
        f"{units.text(plan.stroke, 'stroke')} at {plan.stage.name!r}"
        for plan in option.plans
        if plan.stroke < option.target.stroke
    ]
    return f"; stroke kept to {', '.join(held)}"


def _cured(cure: Cure | None, option: Option, units: Units) -> str:
    """Return what would help, in words."""
    if cure is None:
        return ""
    words = []
    if cure.stack is not None:
        words.append(f"{units.cushion_words(cure.stack.pile)} would do")
    elif cure.stack_looked:
        words.append("no cushion up to twice the thickest allowed helps")
    if cure.set_within is not None:
        words.append(f"within the limits the set is {units.text(cure.set_within, 'set')}")
    if cure.ram_mass is not None:
        within = "" if cure.ram_within else ", though not within the stress limits"
        words.append(
            f"a ram of {units.text(cure.ram_mass, 'mass')} in place of "
            f"{units.text(option.hammer.ram_mass, 'mass')} would reach it{within}"
        )
    elif option.verdict in (NOT_REACHED, REFUSES):
        words.append("no ram up to eight times as heavy would reach it")
    return "; " + "; ".join(words) if words else ""


def basis(job: Job, units: Units) -> list[str]:
    """Return what the answer rests on: limits with their sources, defaults, warnings."""
    limits = job.limits
    lines = [
        f"Limits: compression {units.text(limits.compression, 'stress')} "
        f"({limits.compression_text}); tension {units.text(limits.tension, 'stress')} "
        f"({limits.tension_text})."
    ]
    lines += [f"Warning: {text}." for text in limits.warnings]
    notes = dict.fromkeys([*job.pile.notes, *(note for s in job.stages for note in s.notes)])
    if notes:
        lines.append("Taken by default: " + "; ".join(notes) + ".")
    lines += [f"Notice: {text.rstrip('.')}." for text in job.notices]
    return lines
