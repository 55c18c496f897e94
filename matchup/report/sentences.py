"""Answers in sentences with figures."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence

from matchup.model.cushion import Stack
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.limits import NOT_LIMITED, Limit, StressLimits
from matchup.model.stage import Stage
from matchup.report.bills import per_pile_text
from matchup.report.shown import Units, share_text
from matchup.report.siting import site_lines
from matchup.search.cure import BEYOND, HEAVIER
from matchup.search.option import (
    DOES_NOT_FIT,
    NOT_ANALYSED,
    NOT_REACHED,
    PILE_RUNS,
    REDUCED,
    REFUSES,
    Cure,
    Misfit,
    Option,
    Ranking,
    StagePlan,
)

CAUTION = (
    "A screening aid: confirm by trial driving and dynamic testing; local codes and the licensed "
    "engineer in charge decide."
)
STAGES_NAMED = 4
"""Of more stages with a reduced stroke, only the number is told."""
SHORT_OF_SET = (NOT_REACHED, REFUSES)


def verdict_sentence(ranking: Ranking, units: Units) -> str:
    """Return the answer of a ranking in one sentence."""
    options = ranking.options
    count = len(options) + len(ranking.rejected)
    if not options:
        return _nobody(ranking.rejected)
    best = options[0]
    plan = best.target
    who = "the hammer" if count == 1 else f"{len(options)} of {count} hammers"
    objective, figure = "least energy", f"{units.text(plan.blow_energy, 'energy')} a blow"
    asked = ranking.job.search.objective
    if asked == "time":
        objective, speed = "fastest", units.speed(plan.speed)
        figure = "its blow rate not known" if speed is None else f"{speed:.2f} {units.speed_unit}"
    if best.slowest is not None:
        taken = best.slowest.taken
        figure += f", {taken.blows:.0f} blows"
        figure += "" if taken.seconds is None else f" in {taken.seconds / 60:.0f} min"
    if ranking.job.cost is not None and best.bill is not None:
        objective = "least cost" if asked == "cost" else objective
        figure += f", {per_pile_text(best.bill, ranking.job.cost)}"
    return (
        f"{who} can drive this pile within the limits; {objective}: {best.hammer.name} at "
        f"{units.setting(best.hammer, plan.stroke)}{on_stack(best.stack, units)}, {figure}."
    )


def _nobody(rejected: Sequence[Option]) -> str:
    """Return that no hammer can, and why the nearest can't."""
    nearest = rejected[0]
    name, count = nearest.hammer.name, len(rejected)
    if nearest.verdict == DOES_NOT_FIT:
        return f"{name} {DOES_NOT_FIT}." if count == 1 else f"none of the {count} hammers fits."
    if nearest.verdict == NOT_ANALYSED:
        return f"{name} {NOT_ANALYSED}." if count == 1 else f"none of {count} could be analysed."
    why = nearest.verdict if nearest.verdict == PILE_RUNS else f"it {nearest.verdict}"
    if count == 1:
        return f"{name} can't drive this pile within the limits: {why}."
    return (
        f"none of the {count} hammers can drive this pile within the limits; the nearest is "
        f"{name}: {why}."
    )


def cushions(stack: Stack, units: Units) -> str:
    """Return the cushions of a stack in words; nothing where none is chosen."""
    words = [] if stack.pile is None else [units.cushion_words(stack.pile)]
    words += [] if stack.hammer is None else [units.retold(stack.hammer.text)]
    return " under ".join(words)


def on_stack(stack: Stack, units: Units) -> str:
    """Return cushions in words, to stand behind a stroke."""
    words = cushions(stack, units)
    return f" on {words}" if stack.pile else (f" under {words}" if words else "")


def where(stage: Stage, job: Job, units: Units) -> str:
    """Return a stage in words: by name, in a drive by depth, case and rest."""
    if job.drive is None:
        return f"at stage {stage.name!r}"
    case = f" in case {stage.case}" if len(job.courses) > 1 else ""
    rest = f", after {units.rest(stage.after_pause)} of rest" if stage.after_pause else ""
    return f"at {units.depth(stage.penetration)}{case}{rest}"


def needed_set(stage: Stage, job: Job) -> float:
    """Return the least set of a stage with the job's reserve on top [m]."""
    return (1 + job.search.reserve) * stage.set_needed


def reason(option: Option, job: Job, units: Units) -> str:
    """Return in one sentence what an option does, or why the hammer fails and what would help."""
    if option.misfits:
        return "; ".join(misfit_text(misfit, units) for misfit in option.misfits)
    plan = option.failing or option.target
    at = f"{where(plan.stage, job, units)}, " if len(job.stages) > 1 else ""
    if option.verdict == PILE_RUNS:
        resistance = units.text(plan.stage.resistance, "force")
        return (
            f"{at}pile, helmet, ram and what stands on it weigh more than the {resistance} of "
            "resistance"
        )
    on = on_stack(option.stack, units)
    if option.verdict == NOT_ANALYSED:
        return f"{at}{plan.why}{on}"
    if option.drives:
        uses = _uses(option.compression_use, option.tension_use, job)
        stroke = units.setting(option.hammer, plan.stroke)
        does = f"{stroke}{on} gives {set_text(plan.set, plan.stage, job, units)}"
    else:
        uses = _uses(plan.compression_use, plan.tension_use, job)
        does = _failing_stroke(option, plan, job, units)
    helps = _held_back(option, job, units) + _cured(option.cure, option, units)
    return f"{at}{does}; {uses}{helps}"


def misfit_text(misfit: Misfit, units: Units) -> str:
    """Return what is in the way of a hammer, with its figures."""
    shown = [
        share_text(value) if quantity == "share" else units.text(value, quantity)
        for value, quantity in misfit.values
    ]
    return misfit.words.format(*shown)


def _failing_stroke(option: Option, plan: StagePlan, job: Job, units: Units) -> str:
    """Return the stroke that explains a failure, and the set that it gives."""
    hammer = option.hammer
    stroke = f"{units.setting(hammer, plan.stroke)}{on_stack(option.stack, units)}"
    word = "setting" if hammer.set_by_energy else "stroke"
    gives = f"gives {set_text(plan.set, plan.stage, job, units)}"
    if option.verdict in SHORT_OF_SET and _is_held(hammer, job):
        return f"the largest stroke allowed here, {stroke}, {gives}"
    if hammer.stroke_min == hammer.stroke_max:
        return f"its only {word} of {stroke} {gives}"
    if option.verdict in SHORT_OF_SET:
        return f"full {word} of {stroke} {gives}"
    if plan.stroke <= hammer.stroke_min:
        return f"already its lowest {word} of {stroke} {gives}"
    if hammer.stroke_step:
        return f"the lowest step that reaches the set, {stroke}, {gives}"
    needed = units.text(needed_set(plan.stage, job), "set")
    return f"a set of {needed} needs a {word} of {stroke}"


def _is_held(hammer: Hammer, job: Job) -> bool:
    """Return whether the site allows less than the hammer's own longest stroke."""
    return any(h.name == hammer.name and h.stroke_max > hammer.stroke_max for h in job.hammers)


def set_text(set_: float, stage: Stage, job: Job, units: Units) -> str:
    """Return a set beside the needed one, in words."""
    needed = needed_set(stage, job)
    reached, asked = units.together(set_, needed, "set")
    asked += " needed with the reserve" if job.search.reserve else " needed"
    if set_ < needed:
        return f"a set of {reached} of the {asked}"
    return f"a set of {reached} ({asked})"


def _uses(compression: float, tension: float, job: Job) -> str:
    """Return the use of both stress limits."""
    keep = job.search.reserve
    allowed = f", where the reserve leaves {share_text(1 - keep)}" if keep else ""
    return (
        f"compression is at {share_text(compression)} and tension at {share_text(tension)} of "
        f"the limit{allowed}"
    )


def _held_back(option: Option, job: Job, units: Units) -> str:
    """Return the stages whose stroke must stay below the target's, in words."""
    if option.verdict != REDUCED:
        return ""
    held = [plan for plan in option.plans if plan.stroke < option.target.stroke]
    if len(held) > STAGES_NAMED:
        low, high = (units.setting(option.hammer, f(p.stroke for p in held)) for f in (min, max))
        between = low if low == high else f"{low} to {high}"
        what = "stages" if job.drive is None else "stations"
        return f"; stroke kept to {between} at {len(held)} of {len(option.plans)} {what}"
    named = [
        f"{units.setting(option.hammer, plan.stroke)} "
        + (f"at {plan.stage.name!r}" if job.drive is None else where(plan.stage, job, units))
        for plan in held
    ]
    return f"; stroke kept to {', '.join(named)}"


def _cured(cure: Cure | None, option: Option, units: Units) -> str:
    """Return what would help, in words."""
    if cure is None:
        return ""
    words = []
    if cure.set_within is not None and cure.stroke_within is not None:
        words.append(
            f"within the limits it reaches a set of {units.text(cure.set_within, 'set')}, at "
            f"{units.setting(option.hammer, cure.stroke_within)}"
        )
    if cure.stack is not None:
        words.append(f"{cushions(cure.stack, units)}, more than allowed, would do")
    elif cure.stack_looked:
        words.append(f"no cushion up to {BEYOND} times the thickest allowed helps")
    if cure.ram_looked:
        words.append(_ram(cure, option, units))
    return "".join(f"; {part}" for part in words)


def _ram(cure: Cure, option: Option, units: Units) -> str:
    """Return which ram would do, in words."""
    short = option.verdict in SHORT_OF_SET
    if cure.ram_mass is None:
        return f"no ram up to {HEAVIER:g} times as heavy {'would reach it' if short else 'helps'}"
    ram = (
        f"a ram of {units.text(cure.ram_mass, 'mass')} in place of "
        f"{units.text(option.hammer.ram_mass, 'mass')} would"
    )
    if not short:
        return f"{ram} do, at a lower stroke"
    return f"{ram} reach it" + ("" if cure.ram_within else ", though not within the stress limits")


def softer_sentence(option: Option, objective: str, units: Units) -> str:
    """Return what the softer runner-up of an option gains and costs, in words."""
    softer = option.runner_up
    if softer is None:
        return ""
    changes = [
        f"{name} from {share_text(before)} to {share_text(after)}"
        for name, before, after in (
            ("compression", option.compression_use, softer.compression_use),
            ("tension", option.tension_use, softer.tension_use),
        )
        if f"{before:.2f}" != f"{after:.2f}"
    ]
    return (
        f"Softer for {option.hammer.name}: {cushions(softer.stack, units)} at "
        f"{units.setting(option.hammer, softer.target.stroke)}; {', '.join(changes)} of the limit, "
        f"{_at_what_cost(option, softer, objective)}."
    )


def _at_what_cost(option: Option, runner_up: Option, objective: str) -> str:
    """Return what the runner-up takes more of than the best plan, in words."""
    best, softer = option.target, runner_up.target
    what, ratio = "energy", softer.blow_energy / best.blow_energy
    if objective == "time":
        if not best.speed or not softer.speed:
            return "at a speed not known"
        what, ratio = "speed", softer.speed / best.speed
    if objective == "cost":
        if math.isinf(option.cost) or math.isinf(runner_up.cost):
            return "at a cost not known"
        what, ratio = "cost", runner_up.cost / option.cost
    change = f"{100 * abs(ratio - 1):.0f}%"
    if change == "0%":
        return f"at the same {what}"
    return f"for {change} {'more' if ratio > 1 else 'less'} {what}"


def basis(job: Job, units: Units) -> list[str]:
    """Return what the answer rests on: limits with their sources, defaults, warnings.

    The ground of a whole drive is told apart, since there is so much of it.
    """
    return [*rests_on(job, units), *warned(job)]


def warned(job: Job) -> list[str]:
    """Return warnings, and what the readers noticed."""
    return [
        *(f"Warning: {text}." for text in job.limits.warnings),
        *(f"Notice: {text.rstrip('.')}." for text in job.notices),
    ]


def rests_on(job: Job, units: Units) -> list[str]:
    """Return limits with their sources, and what was taken by default."""
    limits = job.limits
    lines = _limits(limits, units)
    keep = job.search.reserve
    if keep:
        lines.append(
            f"Reserve: {100 * keep:.3g}% kept back from set and limits: the set must be "
            f"{1 + keep:.4g} times the one needed, stresses at most {100 * (1 - keep):.3g}% of the "
            "limits."
        )
    lines += site_lines(job, units)
    if notes := _notes(job, units):
        lines.append(f"Taken by default: {'; '.join(notes)}.")
    return lines


def _limits(limits: StressLimits, units: Units) -> list[str]:
    """Return the stress limits, parts with the same ones told together."""
    told: dict[str, list[str]] = {}
    for part in limits.parts:
        both = (_limit(part.squeeze, units), _limit(part.pull, units))
        text = f"compression {both[0]}; tension {both[1]}"
        if part.squeeze == part.pull:
            text = f"compression and tension {both[0]}"
        told.setdefault(text, []).append(part.part)
    if len(told) == 1:
        return [f"Limits: {text}." for text in told]
    return [f"Limits of {' and '.join(names)}: {text}." for text, names in told.items()]


def _limit(limit: Limit, units: Units) -> str:
    """Return a stress limit with its rule, clause, formula and the numbers in it."""
    if limit == NOT_LIMITED:
        return limit.text
    values = [f"{name} {units.text(value, 'stress')}" for name, value in limit.values]
    told = f"{limit.text}; {', '.join(values)}" if values else limit.text
    return f"{units.text(limit.stress, 'stress')} ({told})"


def _notes(job: Job, units: Units) -> list[str]:
    """Return what was taken by default, with the stages for what is not the same at all."""
    stages: dict[str, list[str]] = {}
    for stage in job.stages if job.drive is None else ():
        for note in stage.notes:
            stages.setdefault(note, []).append(repr(stage.name))
    return [units.retold(note) for note in job.pile.notes] + [
        units.retold(note) + ("" if len(names) == len(job.stages) else f" at {' and '.join(names)}")
        for note, names in stages.items()
    ]


def searched(ranking: Ranking, timed: bool = True) -> str:
    """Return how the answers were found, hammers of one kind of answer told together.

    Parameters
    ----------
    timed : bool
        Whether to tell the time it took, which is never the same twice.
    """
    groups: dict[str, list[list[int]]] = {}
    everyone = [o for o in (*ranking.options, *ranking.rejected) if not o.misfits]
    if not everyone:
        return "Searched: nothing; no blow was computed for hammers that do not fit."
    for option in everyone:
        numbers = [int(number) for number in re.findall(r"\d+", option.certificate)]
        groups.setdefault(re.sub(r"\d+", "#", option.certificate), []).append(numbers)
    told = []
    for shape, found in groups.items():
        kind, _, text = shape.partition(": ")
        for column in zip(*found, strict=True):
            low, high = min(column), max(column)
            text = text.replace("#", f"{low}" if low == high else f"{low} to {high}", 1)
        many = f"{len(found)} hammer{'s' if len(found) > 1 else ''}: " if len(groups) > 1 else ""
        told.append(many + text + (" (exact)" if kind == "exact" else ""))
    spent = (
        f"{ranking.analyses} blows" + (f" in {ranking.runtime:.1f} s" if timed else "")
        if ranking.analyses
        else "no blow was needed, the weight decides"
    )
    return f"Searched: {'; '.join(told)}; {spent}."
