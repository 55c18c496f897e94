"""The second opinion of dynamic formulas on an option."""

from __future__ import annotations

from typing import NamedTuple

from matchup.analysis.formulas import FORMULAS, LastBlow
from matchup.model.job import Job
from matchup.model.stage import Stage
from matchup.search.option import Option


class Opinion(NamedTuple):
    """What dynamic formulas make of an option's blow at the target.

    Parameters
    ----------
    hammer : str
    stage : Stage
    energy, set : float
        Ram weight times stroke, and set. [J], [m]
    resistances : dict of str to (float or None)
        By formula; None where it gives none for such a blow. [N]
    """

    hammer: str
    stage: Stage
    energy: float
    set: float
    resistances: dict[str, float | None]


def second_opinion(option: Option, job: Job) -> Opinion:
    """Return what every dynamic formula makes of energy and set at the target."""
    plan, pile = option.target, job.pile
    blow = LastBlow(
        kind=option.hammer.kind,
        energy=plan.blow_energy,
        efficiency=option.hammer.share_at_impact(pile.rake),
        set=plan.set,
        length=pile.length,
        stiffness=pile.length / sum(part.length / part.stiffness for part in pile.parts),
    )
    found: dict[str, float | None] = {}
    for formula in FORMULAS:
        value = formula.resistance(blow) if plan.set > 0 else 0.0
        # Beyond the sets that they were fitted to, the logarithms turn negative.
        found[formula.name] = value if value > 0 else None
    return Opinion(option.hammer.name, plan.stage, plan.blow_energy, plan.set, found)
