"""Which hammers may be used at all on this pile and site, and how; no blow is computed for it.

A hammer that could strike too fast is slowed where its crew sets the pace, and one whose blows
would shake the neighbours too much keeps to the strokes that do not. What is left is searched.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from matchup.analysis.cells import settings
from matchup.model.cushion import Stack
from matchup.model.hammer import STANDARD_GRAVITY, Hammer
from matchup.model.job import Job
from matchup.model.pile import Pile
from matchup.model.site import Site, Standing
from matchup.model.stability import buckling_use
from matchup.model.vibration import Vibration
from matchup.search.option import DOES_NOT_FIT, Misfit, Option, StagePlan

PACED = ("drop", "hydraulic")
"""Kinds whose crew sets the blow rate; air drives the ram at a pace of its own."""

ROUNDING = 1e-9
"""Of sizes that are the same in other units. [-]"""


@dataclass(frozen=True, slots=True)
class Fitting:
    """The hammers of a job sorted out.

    Parameters
    ----------
    hammers : tuple of Hammer
        That fit, as they may be used here.
    unfit : tuple of Option
        One for each of the others, with all that is in its way.
    notes : tuple of str
        How hammers may be used otherwise than their rows say.
    """

    hammers: tuple[Hammer, ...]
    unfit: tuple[Option, ...]
    notes: tuple[str, ...]


def sort_hammers(job: Job) -> Fitting:
    """Return which hammers fit and how they may be used, and why the others do not."""
    fit: list[Hammer] = []
    unfit: list[Option] = []
    slowed: list[str] = []
    held: list[str] = []
    for hammer in job.hammers:
        found = misfits(job, hammer)
        if found:
            unfit.append(_unfit(job, hammer, found))
            continue
        used = _slowed(job.site, hammer)
        if used is not hammer:
            slowed.append(hammer.name)
        quiet = _held(job, used)
        if quiet is not used:
            held.append(f"{hammer.name} {quiet.stroke_min:.2f} to {quiet.stroke_max:.2f} m")
        fit.append(quiet)
    notes = []
    if slowed and job.site and job.site.blow_rate_max:
        rate = 60 * job.site.blow_rate_max
        notes.append(f"slowed to the site's {rate:g} blows/min: {', '.join(slowed)}")
    if held:
        notes.append(f"strokes kept to, for vibration: {', '.join(held)}")
    return Fitting(tuple(fit), tuple(unfit), tuple(notes))


def misfits(job: Job, hammer: Hammer) -> tuple[Misfit, ...]:
    """Return all that keeps a hammer from being used here."""
    found = [_available(hammer), _helmet(job, hammer)]
    site = job.site
    if site is not None:
        found += [
            _capacity(site, hammer),
            _capacity_with_pile(job, site, hammer),
            _headroom(job, site, hammer),
            _rate(site, hammer),
        ]
        if site.standing is not None:
            found.append(_stands(job, site, site.standing, hammer))
        if site.vibration is not None:
            found.append(_shakes(job, site.vibration, hammer))
    return tuple(one for one in found if one is not None)


def _available(hammer: Hammer) -> Misfit | None:
    if hammer.available:
        return None
    return Misfit("availability", "its catalogue row says that it is not available")


def _helmet(job: Job, hammer: Hammer) -> Misfit | None:
    width = _head_width(job.pile)
    side, bound = "least", hammer.head_min
    if bound is None or width >= bound * (1 - ROUNDING):
        side, bound = "most", hammer.head_max
        if bound is None or width <= bound * (1 + ROUNDING):
            return None
    words = f"its helmet takes piles of at {side} {{}}, and this one is {{}} wide"
    return Misfit("helmet", words, ((bound, "thickness"), (width, "thickness")))


def _head_width(pile: Pile) -> float:
    """Return the width of the pile's head [m]; a tapered one is told by its toe."""
    head = pile.head.section
    return head.width if head.ends is None else 2 * math.sqrt(head.ends[0] / math.pi)


def _lifted(hammer: Hammer) -> float | None:
    """Return the mass of hammer and helmet [kg]; None where the catalogue does not say."""
    return None if hammer.hammer_mass is None else hammer.hammer_mass + (hammer.helmet_mass or 0.0)


def _capacity(site: Site, hammer: Hammer) -> Misfit | None:
    mass = _lifted(hammer)
    if mass is None or site.capacity is None or mass <= site.capacity:
        return None
    words = "hammer and helmet weigh {}, and the rig carries {}"
    return Misfit("capacity", words, ((mass, "mass"), (site.capacity, "mass")))


def _capacity_with_pile(job: Job, site: Site, hammer: Hammer) -> Misfit | None:
    mass, most = _lifted(hammer), site.capacity_with_pile
    if mass is None or most is None or mass + job.pile.mass <= most:
        return None
    words = "hammer, helmet and pile weigh {}, and the rig carries {} with the pile"
    return Misfit("capacity", words, ((mass + job.pile.mass, "mass"), (most, "mass")))


def _above_ground(job: Job, site: Site) -> float:
    return job.pile.length if site.above_ground is None else site.above_ground


def _headroom(job: Job, site: Site, hammer: Hammer) -> Misfit | None:
    if site.headroom is None or hammer.hammer_length is None:
        return None
    height = _above_ground(job, site) + hammer.hammer_length
    if height <= site.headroom:
        return None
    words = "pile and hammer stand {} high, and there are {} of headroom"
    return Misfit("headroom", words, ((height, "length"), (site.headroom, "length")))


def _rate(site: Site, hammer: Hammer) -> Misfit | None:
    """Return that a hammer strikes too fast at every stroke, and can't be slowed."""
    slowest = hammer.blow_rate(hammer.stroke_max)
    most = site.blow_rate_max
    if most is None or slowest is None or hammer.kind in PACED or slowest <= most:
        return None
    words = "its blow rate of {} can't be lowered, and at most {} are allowed"
    return Misfit("blow rate", words, ((slowest, "rate"), (most, "rate")))


def _slowed(site: Site | None, hammer: Hammer) -> Hammer:
    """Return the hammer at the site's pace."""
    most = site.blow_rate_max if site else None
    fastest = hammer.blow_rate(hammer.stroke_min)
    if most is None or fastest is None or fastest <= most:
        return hammer
    return replace(hammer, pace=most)


def _stands(job: Job, site: Site, standing: Standing, hammer: Hammer) -> Misfit | None:
    """Return that a free-standing pile would buckle under helmet, ram and what stands on it."""
    pile = job.pile
    stiffness = min(
        part.modulus * (standing.inertia or part.section.inertia or 0.0) for part in pile.parts
    )
    length = _above_ground(job, site) + standing.fixity
    load = STANDARD_GRAVITY * (hammer.ram_mass + (hammer.helmet_mass or 0.0) + hammer.frame_mass)
    weight = STANDARD_GRAVITY * pile.mass * length / pile.length
    use = buckling_use(stiffness, length, load, weight)
    if use * standing.safety <= 1:
        return None
    words = (
        "standing free over {}, the pile with the hammer on it is at {} of its buckling load, and "
        "{} is allowed"
    )
    values = ((length, "length"), (use, "share"), (1 / standing.safety, "share"))
    return Misfit("stability", words, values)


# --- vibration ----------------------------------------------------------------------------------


def least_depth(job: Job, vibration: Vibration) -> float:
    """Return the depth [m] of the toe at which a blow shakes the most: the stage nearest to it."""
    low = vibration.published.depth[0]
    return max(low, min(stage.penetration for stage in job.stages))


def quiet_strokes(job: Job, vibration: Vibration, hammer: Hammer) -> list[float]:
    """Return the strokes [m] that shake no more than is allowed, within the relation's range.

    The stage with its toe nearest to the neighbour counts for the whole drive.
    """
    return [
        stroke
        for stroke in _told_strokes(vibration, hammer)
        if vibration.velocity(hammer.blow_energy(stroke), _least_depth(job)) <= vibration.limit
    ]


def _told_strokes(vibration: Vibration, hammer: Hammer) -> list[float]:
    """Return the strokes [m] whose energy lies in the relation's range."""
    low, high = vibration.published.energy
    return [s for s in settings(hammer).tolist() if low <= hammer.blow_energy(s) <= high]


def _least_depth(job: Job) -> float:
    return min(stage.penetration for stage in job.stages)


def _shakes(job: Job, vibration: Vibration, hammer: Hammer) -> Misfit | None:
    """Return that a hammer shakes too much even at its least stroke, or can't be told of."""
    told = _told_strokes(vibration, hammer)
    if not told:
        ends = [hammer.blow_energy(s) for s in (hammer.stroke_min, hammer.stroke_max)]
        words = "its blows of {} to {} lie outside {} to {}, where the relation can tell vibration"
        values = (*ends, *vibration.published.energy)
        return Misfit("vibration", words, tuple((energy, "energy") for energy in values))
    if quiet_strokes(job, vibration, hammer):
        return None
    least = hammer.blow_energy(told[0])
    words = "its least blow of {} shakes the ground at {} with {}, and {} is allowed"
    values_and = (
        (least, "energy"),
        (vibration.distance, "length"),
        (vibration.velocity(least, _least_depth(job)), "vibration"),
        (vibration.limit, "vibration"),
    )
    return Misfit("vibration", words, values_and)


def _held(job: Job, hammer: Hammer) -> Hammer:
    """Return the hammer with the strokes that shake no more than is allowed."""
    vibration = job.site.vibration if job.site else None
    if vibration is None:
        return hammer
    quiet = quiet_strokes(job, vibration, hammer)
    if (quiet[0], quiet[-1]) == (hammer.stroke_min, hammer.stroke_max):
        return hammer
    return hammer.within(quiet[0], quiet[-1])


# --- telling ------------------------------------------------------------------------------------


def _unfit(job: Job, hammer: Hammer, found: Sequence[Misfit]) -> Option:
    """Return an option without a blow."""
    nothing = math.nan
    plan = StagePlan(
        stage=job.stages[-1],
        at=0,
        stroke=nothing,
        low=None,
        top=None,
        set=nothing,
        compression=nothing,
        tension=nothing,
        compression_use=nothing,
        tension_use=nothing,
        blow_energy=nothing,
        transferred=nothing,
        blow_rate=None,
        verdict=DOES_NOT_FIT,
        shortfall=math.inf,
    )
    return Option(
        hammer=hammer,
        verdict=DOES_NOT_FIT,
        governs="fit",
        stack=Stack(),
        plans=(plan,),
        target=plan,
        cost=math.inf,
        failing=plan,
        misfits=tuple(found),
    )
