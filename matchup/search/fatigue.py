"""Damage of a whole drive at the details of a steel pile.

At every station the planned blow is marched again and the force in the section kept; its cycles
are counted, times the blows that the station stands for.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from matchup.analysis.single import Blow, compute_blow
from matchup.model.cushion import WEAR_STATES
from matchup.model.fatigue import Detail, Fatigue, rainflow
from matchup.model.job import Job
from matchup.model.pile import Pile
from matchup.search.option import GOES_DOWN, CaseDrive, Option, StagePlan
from matchup.wave.layout import Floats

LEAST_RANGE = 1e-3
"""Ranges below this share of the largest are left out: rounding, not stress. [-]"""


@dataclass(frozen=True, slots=True)
class Damage:
    """What a drive does to one detail in one ground case.

    Parameters
    ----------
    detail : Detail
    case : str
    largest : float
        Largest stress range of any blow, concentration included. [Pa]
    largest_at : float
        Penetration at which it occurs. [m]
    cycles : float
        Of all blows, half ones as halves. [-]
    damage : float
        Sum over the drive; the detail fails at 1. [-]
    """

    detail: Detail
    case: str
    largest: float
    largest_at: float
    cycles: float
    damage: float


def find_damage(job: Job, option: Option) -> tuple[Damage, ...]:
    """Return the damage, detail by detail, in every case of a drive that reaches its target.

    Raises
    ------
    AnalysisError
        If a blow can't be computed.
    """
    fatigue = job.fatigue
    if fatigue is None or not option.drives:
        return ()
    made: list[Damage] = []
    for case in option.cases:
        if case.reaches:
            made += _of_case(job, option, case, fatigue)
    order = [detail.name for detail in fatigue.details]
    return tuple(sorted(made, key=lambda one: order.index(one.detail.name)))


def _of_case(job: Job, option: Option, case: CaseDrive, fatigue: Fatigue) -> list[Damage]:
    cycles, damages, largest, deepest = np.zeros((4, len(fatigue.details)))
    for plan, blows in stations(case.plans):
        # Where nobody knows how worn the cushion is, the state that does the most damage counts.
        wears = (
            (plan.wear,) if plan.wear else (job.cushions.wears if job.cushions else WEAR_STATES[:1])
        )
        struck = [
            compute_blow(job, plan.stage, option.hammer, option.stack, wear, plan.stroke)
            for wear in wears
        ]
        for row, detail in enumerate(fatigue.details):
            worst = max((_of_blow(job.pile, blow, detail) for blow in struck), key=lambda w: w[0])
            damages[row] += blows * worst[0]
            cycles[row] += blows * worst[1]
            if worst[2] > largest[row]:
                largest[row], deepest[row] = worst[2], plan.stage.penetration
    return [
        Damage(detail, case.case, *map(float, figures))
        for detail, *figures in zip(fatigue.details, largest, deepest, cycles, damages, strict=True)
    ]


def stations(plans: Sequence[StagePlan]) -> list[tuple[StagePlan, float]]:
    """Return the stations that take blows, each with the blows that it stands for.

    Between two stations half of the way is driven at the set of either, as the drive's count of
    blows has it; the first one after the pile went down by its weight stands for all down to it.
    """
    blows = [0.0] * len(plans)
    for i in range(1, len(plans)):
        before, plan = plans[i - 1], plans[i]
        taken = _taken(plan) - _taken(before)
        if before.verdict == GOES_DOWN or plan.verdict == GOES_DOWN:
            blows[i] += taken
            continue
        share = before.set / (before.set + plan.set)
        blows[i] += taken * share
        blows[i - 1] += taken * (1 - share)
    return [(plan, count) for plan, count in zip(plans, blows, strict=True) if count > 0]


def _taken(plan: StagePlan) -> float:
    return 0.0 if plan.taken is None else plan.taken.blows


def _of_blow(pile: Pile, blow: Blow, detail: Detail) -> tuple[float, float, float]:
    """Return damage, cycles and largest range of one blow at a detail."""
    worst = (0.0, 0.0, 0.0)
    for stress in section_stresses(pile, blow, detail.at):
        ranges, counts = rainflow(detail.concentration * stress)
        top = float(ranges.max(initial=0.0))
        kept = ranges > LEAST_RANGE * top
        damage = detail.curve.damage(ranges[kept], counts[kept])
        worst = max(worst, (damage, float(counts[kept].sum()), top))
    return worst


def section_stresses(pile: Pile, blow: Blow, at: float) -> list[Floats]:
    """Return stress against time in the section at a distance from the pile's head [Pa].

    Where two parts meet, in both; compression is positive.
    """
    follower = pile.follower.length if pile.follower else 0.0
    at += follower
    distance = blow.waves.distance
    found = []
    top = 0.0
    for part in pile.column:
        bottom = top + part.length
        if top - 1e-6 <= at <= bottom + 1e-6:
            inside = np.flatnonzero((distance[:-1] >= top - 1e-6) & (distance[1:] <= bottom + 1e-6))
            middle = 0.5 * (distance[inside] + distance[inside + 1])
            segment = inside[np.argmin(np.abs(middle - at))]
            found.append(blow.waves.force[:, segment] / part.bearing_area)
        top = bottom
    return found
