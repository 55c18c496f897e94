"""The way to a target: a stroke for every stage, and what a drive takes down to each station.

On the way the stroke is kept as near to the target's as works. In a drive the pile may go down
under its weight, and the pile cushion ages by the blows that it took.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from typing import Any

import numpy as np

from matchup.analysis.cells import (
    COMPRESSION,
    EVERY_WEAR,
    NO_SET,
    OPEN,
    RUNS,
    TENSION,
    UNSOUND,
    Cells,
    Found,
)
from matchup.analysis.rig import Rig
from matchup.analysis.window import WindowFinder
from matchup.model.job import Course, Job
from matchup.search.option import (
    DRIVES,
    FINE,
    GOES_DOWN,
    NOT_ANALYSED,
    NOT_REACHED,
    OVER_COMPRESSION,
    OVER_TENSION,
    PILE_RUNS,
    REFUSES,
    CaseDrive,
    StagePlan,
    Taken,
)
from matchup.wave.layout import Integers

VERDICT_OF = {
    RUNS: PILE_RUNS,
    UNSOUND: NOT_ANALYSED,
    NO_SET: NOT_REACHED,
    COMPRESSION: OVER_COMPRESSION,
    TENSION: OVER_TENSION,
    OPEN: DRIVES,
}


def stage_plan(finder: WindowFinder, found: Found, row: int) -> StagePlan:
    """Return what was found at a row as a plan."""
    rig = finder.rig
    stage, hammer, stack = (int(found.cells[column][row]) for column in range(3))  # type: ignore[index]
    state = int(found.state[row])
    limits, demands = rig.job.limits, finder.demands
    stroke, set_ = float(found.stroke[row]), float(found.set[row])
    compression, tension = float(found.compression[row]), float(found.tension[row])
    short = demands.set_needed[stage] / set_ if set_ > 0 else 1e9
    excess = max(short, compression / demands.compression, tension / demands.tension) - 1
    energy = rig.job.hammers[hammer].blow_energy(stroke)
    wear = EVERY_WEAR if found.cells.wear is None else int(found.cells.wear[row])
    return StagePlan(
        stage=rig.job.stages[stage],
        at=int(found.at[row]),
        stroke=stroke,
        low=None,
        top=None,
        set=set_,
        compression=compression,
        tension=tension,
        compression_use=compression / limits.compression,
        tension_use=tension / limits.tension,
        blow_energy=energy,
        transferred=float(found.transferred[row]),
        blow_rate=rig.job.hammers[hammer].blow_rate(stroke),
        verdict=VERDICT_OF[state],
        shortfall=math.inf if state in (RUNS, UNSOUND) else float(excess),
        lifted=bool(found.lifted[row]),
        why=rig.why_unsound(stage, hammer, stack) if state == UNSOUND else "",
        wear=_wear_name(rig, stack, wear),
        energy_set=energy if rig.job.hammers[hammer].set_by_energy else None,
    )


def _wear_name(rig: Rig, stack: int, wear: int) -> str:
    """Return the one wear state that counts; nothing where there are several, or no cushion."""
    if wear != EVERY_WEAR:
        return rig.wears[wear]
    return rig.wears[0] if len(rig.wears) == 1 and rig.stacks[stack].pile else ""


@dataclass(slots=True)
class Walk:
    """One hammer and stack on its way along a course.

    Parameters
    ----------
    course : Course
    hammer, stack : int
        Places in a rig.
    target : StagePlan or None
        Where it is planned already; None where it comes like any other stage.
    wanted : sequence of int
        Setting numbers, stage by stage, to keep as near to as works.
    keeps : bool
        Whether the wanted settings are played as they are, even where a stress limit breaks.
    plans : list of StagePlan
        Filled on the way, until a stage fails.
    taken : Taken
    """

    course: Course
    hammer: int
    stack: int
    target: StagePlan | None
    wanted: Sequence[int]
    keeps: bool = False
    plans: list[StagePlan] = field(default_factory=list)
    taken: Taken = field(default_factory=Taken)

    @property
    def goes_on(self) -> bool:
        """Whether there is a stage ahead that can be got to."""
        ahead = len(self.plans) < len(self.course.stages)
        return ahead and (not self.plans or self.passes(self.plans[-1]))

    def passes(self, plan: StagePlan) -> bool:
        """Return whether the pile gets past a stage."""
        broken = plan.verdict in (OVER_COMPRESSION, OVER_TENSION)
        return plan.verdict in FINE or (self.keeps and broken)


def walk(finder: WindowFinder, walks: Sequence[Walk]) -> None:
    """Plan all stages of walks, side by side; each stops at a stage that fails.

    Parameters
    ----------
    finder : WindowFinder
    walks : sequence of Walk
        Modified in place; either all or none of them keep their strokes.
    """
    in_drive = finder.rig.job.drive is not None
    while going := [one for one in walks if one.goes_on]:
        for one, plan in zip(going, _plans_ahead(finder, going), strict=True):
            if in_drive:
                one.taken = _onward(finder, one, plan)
                plan = replace(plan, taken=one.taken)
            one.plans.append(plan)


def _plans_ahead(finder: WindowFinder, going: Sequence[Walk]) -> list[StagePlan]:
    """Return the plans of the next stage of walks."""
    look = _play if going[0].keeps else WindowFinder.nearest
    stages = [one.course.stages[len(one.plans)] for one in going]
    at_target = [stage == one.course.target for stage, one in zip(stages, going, strict=True)]
    ahead = [one.target if there else None for one, there in zip(going, at_target, strict=True)]
    rows = [row for row, plan in enumerate(ahead) if plan is None]
    if rows:
        cells = Cells(
            np.array([stages[row] for row in rows]),
            np.array([going[row].hammer for row in rows]),
            np.array([going[row].stack for row in rows]),
            np.array([_wear_ahead(finder, going[row], stages[row]) for row in rows]),
        )
        wanted = np.array([going[row].wanted[len(going[row].plans)] for row in rows])
        found = look(finder, cells, wanted)
        in_drive = finder.rig.job.drive is not None
        for place, row in enumerate(rows):
            plan = stage_plan(finder, found, place)
            ahead[row] = plan if at_target[row] else _on_the_way(plan, in_drive)
    return [plan for plan in ahead if plan is not None]


def _play(finder: WindowFinder, cells: Cells, at: Integers) -> Found:
    """Return what kept settings do; one that falls short ends a drive, whatever its stresses."""
    found = finder.play(cells, at)
    broken = (found.state == TENSION) | (found.state == COMPRESSION)
    found.state[broken & (found.set < finder.demands.set_needed[cells.stage])] = NO_SET
    return found


def _on_the_way(plan: StagePlan, in_drive: bool) -> StagePlan:
    """Return the plan with what its state means on the way to a target."""
    if plan.verdict == PILE_RUNS and in_drive:
        none = dict.fromkeys(("compression", "tension", "compression_use", "tension_use"), 0.0)
        none |= dict.fromkeys(("blow_energy", "transferred", "shortfall"), 0.0)
        still: dict[str, Any] = {**none, "stroke": math.nan, "set": math.inf}
        still |= dict.fromkeys(("blow_rate", "energy_set"))
        return replace(plan, verdict=GOES_DOWN, **still)
    if plan.verdict == NOT_REACHED:
        return replace(plan, verdict=REFUSES)
    return plan


def _wear_ahead(finder: WindowFinder, one: Walk, stage: int) -> int:
    """Return the wear state in which the cushion arrives at the next stage.

    In a drive it follows from the blows taken down to the last station, and as many more as its
    set foretells. At the target every wear state asked for counts, since it must be reached with
    a cushion of any; so it does where the catalogue does not say how long one stays new, and for
    stages given by hand.
    """
    rig = finder.rig
    cushion = rig.stacks[one.stack].pile
    new_for = None if cushion is None else cushion.material.new_for
    if rig.job.drive is None or new_for is None or stage == one.course.target:
        return EVERY_WEAR
    ahead = _at_pause(one, stage, finder).on_cushion
    if one.plans and one.plans[-1].verdict != GOES_DOWN:
        last = one.plans[-1]
        ahead += (rig.job.stages[stage].penetration - last.stage.penetration) / last.set
    wear = "new" if ahead < new_for else "worn"
    return rig.wears.index(wear) if wear in rig.wears else EVERY_WEAR


def _at_pause(one: Walk, stage: int, finder: WindowFinder) -> Taken:
    """Return what was taken before a stage; a used-up cushion is replaced at a pause."""
    cushion = finder.rig.stacks[one.stack].pile
    paused = finder.rig.job.stages[stage].after_pause > 0
    life = cushion.material.life if cushion else None
    if paused and life is not None and one.taken.on_cushion >= life:
        return replace(one.taken, on_cushion=0.0, cushions=one.taken.cushions + 1)
    return one.taken


def settled_depth(last: StagePlan, following: StagePlan, weight: float) -> float:
    """Return the penetration [m] between two stations at which resistance exceeds the weight."""
    low, high = last.stage.resistance, following.stage.resistance
    share = (weight - low) / (high - low) if high > low else 1.0
    length = following.stage.penetration - last.stage.penetration
    return last.stage.penetration + min(max(share, 0.0), 1.0) * length


def case_drives(job: Job, plans: Sequence[StagePlan], weight: float) -> tuple[CaseDrive, ...]:
    """Return a drive's plans by ground case; nothing for stages given by hand.

    Parameters
    ----------
    weight : float
        Of the pile and all that stands on it. [N]
    """
    if job.drive is None:
        return ()
    drives = []
    for course in job.courses:
        mine = tuple(plan for plan in plans if plan.stage.case == course.case)
        failing = next((plan for plan in mine if plan.verdict not in FINE), None)
        down = [i for i, plan in enumerate(mine) if plan.verdict == GOES_DOWN]
        settled = None
        if down:
            last = mine[down[-1]]
            after = mine[down[-1] + 1] if down[-1] + 1 < len(mine) else last
            settled = settled_depth(last, after, weight)
        drives.append(CaseDrive(course.case, course.required, mine, failing, settled))
    return tuple(drives)


def _onward(finder: WindowFinder, one: Walk, plan: StagePlan) -> Taken:
    """Return what the drive takes down to a station.

    Blows per length are taken to vary in a straight line between stations; where the pile goes
    down under its weight it takes none, down to where the resistance between stations exceeds it.
    """
    stage = one.course.stages[len(one.plans)]
    taken = _at_pause(one, stage, finder)
    if not one.plans or not one.passes(plan) or plan.verdict == GOES_DOWN:
        return taken
    last = one.plans[-1]
    length = plan.stage.penetration - last.stage.penetration
    if last.verdict == GOES_DOWN:
        weight = float(finder.rig.chains.weights[one.hammer])
        blows = (plan.stage.penetration - settled_depth(last, plan, weight)) / plan.set
        energy = blows * plan.blow_energy
        seconds = None if plan.blow_rate is None else blows / plan.blow_rate
    else:
        halves = (0.5 * length / last.set, 0.5 * length / plan.set)
        blows = sum(halves)
        energy = halves[0] * last.blow_energy + halves[1] * plan.blow_energy
        rates = (last.blow_rate, plan.blow_rate)
        seconds = None
        if rates[0] is not None and rates[1] is not None:
            seconds = halves[0] / rates[0] + halves[1] / rates[1]
    known = taken.seconds is not None and seconds is not None
    return replace(
        taken,
        blows=taken.blows + blows,
        seconds=taken.seconds + seconds if known else None,  # type: ignore[operator]
        on_cushion=taken.on_cushion + blows,
        energy=taken.energy + energy,
    )
