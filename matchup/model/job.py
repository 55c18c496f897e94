"""A job: everything that one run needs, in SI units."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass

from matchup.model.cost import Cost
from matchup.model.cushion import CushionSpace, HammerCushion
from matchup.model.doubt import Doubt
from matchup.model.fatigue import Fatigue
from matchup.model.hammer import Hammer
from matchup.model.limits import StressLimits
from matchup.model.pile import Pile
from matchup.model.rules import Rules
from matchup.model.site import Site
from matchup.model.stage import Stage

OBJECTIVES = ("energy", "time", "cost")
DAMPINGS = ("smith", "viscous")
LARGEST_SEED = 2**31
"""Random number generators take less than 2**32, and a seed is counted up by the hammers."""


@dataclass(frozen=True, slots=True)
class Search:
    """How the best option is chosen.

    Parameters
    ----------
    objective : str
        ``energy``: least blow energy at the target stage; ``time``: fastest penetration there, in
        a whole drive least time of it; ``cost``: least cost of the contract.
    reserve : float
        Share kept back from set and limits, in [0, 1). [-]
    seed : int
        Of every random choice.
    """

    objective: str = "energy"
    reserve: float = 0.0
    seed: int = 7

    def __post_init__(self) -> None:
        rules = Rules("search")
        rules.one_of("objective", self.objective, OBJECTIVES)
        rules.must(0 <= self.reserve < 1, "reserve", "must be >= 0 and < 1", self.reserve)
        rules.must(
            0 <= self.seed <= LARGEST_SEED, "seed", f"must be 0 to {LARGEST_SEED}", self.seed
        )
        rules.close()


@dataclass(frozen=True, slots=True)
class Analysis:
    """How a blow is computed.

    Parameters
    ----------
    gravity : bool
        Whether weight acts, with a static start before the blow.
    damping : str
        ``smith`` (on the static reaction at the moment) or ``viscous`` (on the ultimate one).
    """

    gravity: bool = True
    damping: str = "smith"

    def __post_init__(self) -> None:
        rules = Rules("analysis")
        rules.one_of("damping", self.damping, DAMPINGS)
        rules.close()


@dataclass(frozen=True, slots=True)
class Course:
    """The stages of one ground case in driving order; the last one is the target.

    Parameters
    ----------
    case : str
        Empty for stages given by hand.
    stages : tuple of int
        Places in ``job.stages``.
    required : bool
        Whether an option must manage it.
    """

    case: str
    stages: tuple[int, ...]
    required: bool = True

    @property
    def target(self) -> int:
        """Place of the target in ``job.stages``."""
        return self.stages[-1]


@dataclass(frozen=True, slots=True)
class Drive:
    """What makes a job's stages stations of a whole drive and not moments chosen by hand.

    The pile may run under its weight on the way, and the cushion ages by the blows that it took.

    Parameters
    ----------
    required : tuple of str
        Ground cases that an option must manage; empty means all.
    capacity : float or None
        Resistance long after driving that the last set must prove. [N]
    capacity_text : str
        How it follows from what the job gives.
    basis : tuple of str
        What the resistances rest on, line by line: method, its validity, assumptions.
    """

    required: tuple[str, ...] = ()
    capacity: float | None = None
    capacity_text: str = ""
    basis: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Job:
    """A job.

    Parameters
    ----------
    title : str
    hammers : tuple of Hammer
        In catalogue order, each with its helmet.
    pile : Pile
    cushions : CushionSpace or None
        Allowed pile cushions; None for a helmet that sits on the pile.
    hammer_cushions : tuple of HammerCushion
        Alternatives to the hammers' own; empty for those alone.
    stages : tuple of Stage
        In driving order within each ground case; the last one of a case is its target.
    limits : StressLimits
    search : Search
    analysis : Analysis
    drive : Drive or None
        None for stages given by hand.
    doubt : Doubt or None
        What is in doubt; None where nothing is said of it.
    cost : Cost or None
        What the contract pays for.
    site : Site or None
        What rig and surroundings allow.
    fatigue : Fatigue or None
        What is asked of fatigue from driving.
    display : str
        ``metric`` or ``us``: units of tables.
    file : str or None
        The job file as the user named it.
    notices : tuple of str
        What the readers noticed and did not refuse.
    digests : tuple of (str, str)
        Every file that was read, as it is shown, and its SHA-256.
    """

    title: str
    hammers: tuple[Hammer, ...]
    pile: Pile
    cushions: CushionSpace | None
    stages: tuple[Stage, ...]
    limits: StressLimits
    hammer_cushions: tuple[HammerCushion, ...] = ()
    search: Search = Search()
    analysis: Analysis = Analysis()
    drive: Drive | None = None
    doubt: Doubt | None = None
    cost: Cost | None = None
    site: Site | None = None
    fatigue: Fatigue | None = None
    display: str = "metric"
    file: str | None = None
    notices: tuple[str, ...] = ()
    digests: tuple[tuple[str, str], ...] = ()

    def __post_init__(self) -> None:
        rules = Rules("job")
        rules.one_of("display", self.display, ("metric", "us"))
        rules.must(bool(self.hammers), "hammers", "must hold at least one hammer", "")
        rules.must(bool(self.stages), "stages", "must hold at least one stage", "")
        for name, items in (("hammers", self.hammers), ("stages", self.stages)):
            counted = Counter(item.name for item in items)
            twice = sorted(name for name, count in counted.items() if count > 1)
            rules.must(not twice, name, "must have different names", ", ".join(twice))
        cases = {stage.case for stage in self.stages}
        for case in self.drive.required if self.drive else ():
            known = ", ".join(sorted(cases))
            rules.must(case in cases, "ground.required", f"must be cases: {known}", case)
        self._check_objective(rules)
        self._check_site(rules)
        for stage in self.stages:
            rules.must(
                not stage.penetration > self.pile.length * (1 + 1e-9),
                f"stages.{stage.name}.penetration",
                "must be at most the pile's length",
                stage.penetration,
                "length",
            )
        for hammer in self.hammers:
            rules.must(
                hammer.helmet_mass is not None,
                "helmet.mass",
                "must be given for hammers whose catalogue row names no helmet",
                f"none for {hammer.name}",
            )
        rules.close()

    def _check_objective(self, rules: Rules) -> None:
        """Hold the objective against what can be known."""
        objective = self.search.objective
        rules.must(
            objective == "energy" or any(h.blow_rate(h.stroke_max) for h in self.hammers),
            "search.objective",
            "must be energy where no hammer's catalogue row gives `blow_rate_max` or `lift_speed`",
            objective,
        )
        rules.must(
            objective != "cost" or self.cost is not None,
            "search.objective",
            "must be energy or time in a job that gives no cost",
            objective,
        )
        rules.must(
            objective != "cost" or any(h.day_rate and h.mobilisation for h in self.hammers),
            "search.objective",
            "must be energy or time where no hammer's row gives `day_rate` and `mobilisation`",
            objective,
        )

    def _check_site(self, rules: Rules) -> None:
        """Hold the site against pile and stages."""
        site = self.site
        if site is None:
            return
        rules.must(
            site.above_ground is None or not site.above_ground > self.pile.length,
            "site.above_ground",
            "must be at most the pile's length",
            site.above_ground,
            "length",
        )
        if site.standing is not None:
            rules.must(
                bool(site.standing.inertia) or all(p.section.inertia for p in self.pile.parts),
                "site.inertia",
                "must be given: the shape of the pile does not tell it",
                "",
            )
            must = "must be left out for a raked pile, which can't stand free"
            safety = site.standing.safety
            rules.must(not self.pile.rake, "site.buckling_safety", must, safety)
        if site.vibration is not None:
            low, high = site.vibration.published.depth
            outside = [s.penetration for s in self.stages if not low <= s.penetration <= high]
            rules.must(
                not outside,
                "site.vibration.relation",
                f"must be one for toes as deep as here; {site.vibration.relation} is for {low:g} "
                f"to {high:g} m",
                outside[0] if outside else 0.0,
                "length",
            )

    @property
    def courses(self) -> tuple[Course, ...]:
        """The stages by ground case, in the order in which the cases first occur."""
        stages: dict[str, list[int]] = {}
        for place, stage in enumerate(self.stages):
            stages.setdefault(stage.case, []).append(place)
        required = self.drive.required if self.drive else ()
        return tuple(
            Course(case, tuple(places), not required or case in required)
            for case, places in stages.items()
        )
