"""What a search answers: plans, options and the ranking. Plain data in SI units."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from matchup.model.cushion import Stack
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.stage import Stage
from matchup.search.bill import Bill
from matchup.search.odds import Odds

DRIVES = "drives"
REDUCED = "drives with reduced stroke"
NOT_REACHED = "does not reach the set"
REFUSES = "refuses"
OVER_TENSION = "overstresses in tension"
OVER_COMPRESSION = "overstresses in compression"
PILE_RUNS = "pile runs"
GOES_DOWN = "goes down under its weight"
"""Of a station on the way of a drive; not a failure."""
NOT_ANALYSED = "could not be analysed"
DOES_NOT_FIT = "does not fit"

VERDICTS = (
    NOT_ANALYSED,
    DOES_NOT_FIT,
    PILE_RUNS,
    OVER_COMPRESSION,
    OVER_TENSION,
    REFUSES,
    NOT_REACHED,
    REDUCED,
    DRIVES,
)
"""Worst news first."""
CAN_DRIVE = (DRIVES, REDUCED)
HOPELESS = 10.0
"""Shortfall from which it says no more how far a stage is from working. [-]"""
FINE = (DRIVES, GOES_DOWN)
"""Of one stage."""


@dataclass(frozen=True, slots=True)
class Taken:
    """What a drive took down to a station.

    Parameters
    ----------
    blows : float
        [-]
    seconds : float or None
        Of driving, pauses left out; None where a blow rate is not known. [s]
    on_cushion : float
        Blows that the pile cushion has taken. [-]
    cushions : int
        Pile cushions used so far, this one included.
    energy : float
        Of the blows, ram weight times stroke. [J]
    """

    blows: float = 0.0
    seconds: float | None = 0.0
    on_cushion: float = 0.0
    cushions: int = 1
    energy: float = 0.0


@dataclass(frozen=True, slots=True)
class StagePlan:
    """The stroke planned at one stage, and what it does.

    At a target it is the one that the objective asks for; on the way the one nearest to the
    target's that works. Where a stage fails, it is the one that explains it: the largest if the
    set is not reached, else the least that reaches the set.

    Parameters
    ----------
    stage : Stage
    at : int
        Setting number of the stroke.
    stroke : float
        [m]
    low, top : float or None
        Ends of the connected strokes around it that work; None where not looked for. [m]
    set : float
        Least over the wear states. [m]
    compression, tension : float
        Largest over the wear states and at 2 % more and less stroke. [Pa]
    compression_use, tension_use : float
        The same as fractions of the limits. [-]
    blow_energy, transferred : float
        Ram weight times stroke, and the least over the wear states of what reaches the pile. [J]
    blow_rate : float or None
        At this stroke; None where the catalogue does not say. [1/s]
    verdict : str
        Of this stage alone; `DRIVES` where the stroke works.
    shortfall : float
        How far the stage is from working: the largest excess over what is needed, the reserve kept
        back; infinite where no blow can tell. [-]
    lifted : bool
        Whether tension closes the least stroke that reaches the set, and a window opens above.
    why : str
        What went wrong where the verdict is `NOT_ANALYSED`.
    wear : str
        The one wear state planned for; empty for every one asked for.
    taken : Taken or None
        In a drive, what it took to get here from the first station.
    energy_set : float or None
        The hammer's setting where that is an energy, and the stroke its equivalent. [J]
    """

    stage: Stage
    at: int
    stroke: float
    low: float | None
    top: float | None
    set: float
    compression: float
    tension: float
    compression_use: float
    tension_use: float
    blow_energy: float
    transferred: float
    blow_rate: float | None
    verdict: str
    shortfall: float
    lifted: bool = False
    why: str = ""
    wear: str = ""
    taken: Taken | None = None
    energy_set: float | None = None

    @property
    def set_share(self) -> float:
        """Set over needed set [-]."""
        return self.set / self.stage.set_needed

    @property
    def distance(self) -> float:
        """The shortfall, but the same for all that are hopeless; infinite where no blow tells."""
        return min(self.shortfall, HOPELESS) if math.isfinite(self.shortfall) else math.inf

    @property
    def stress_use(self) -> float:
        """The larger use of a stress limit [-]."""
        return max(self.compression_use, self.tension_use)

    @property
    def speed(self) -> float | None:
        """Penetration speed [m/s]; None where the blow rate is not known."""
        return None if self.blow_rate is None else self.blow_rate * self.set


@dataclass(frozen=True, slots=True)
class CaseDrive:
    """The whole drive in one ground case, as far as it got.

    Parameters
    ----------
    case : str
    required : bool
        Whether an option must manage it.
    plans : tuple of StagePlan
        Station by station; empty where a hammer was ruled out before.
    failing : StagePlan or None
        The station that stops it.
    settled : float or None
        Penetration down to which the pile goes under its weight; None where the first station
        takes blows already. [m]
    bill : Bill or None
        Of the contract; None where the job gives no cost, or the target is not reached.
    """

    case: str
    required: bool
    plans: tuple[StagePlan, ...]
    failing: StagePlan | None
    settled: float | None
    bill: Bill | None = None

    @property
    def reaches(self) -> bool:
        """Whether the target is reached."""
        return bool(self.plans) and self.failing is None

    @property
    def taken(self) -> Taken:
        """Blows and time down to the last station that was reached."""
        takings = [plan.taken for plan in self.plans if plan.taken is not None]
        return takings[-1] if takings else Taken()

    @property
    def most_on_cushion(self) -> float:
        """The most blows that one pile cushion takes [-]."""
        return max((plan.taken.on_cushion for plan in self.plans if plan.taken), default=0.0)

    @property
    def hardest(self) -> StagePlan | None:
        """The station with the least set; None where none took a blow."""
        driven = [plan for plan in self.plans if plan.verdict != GOES_DOWN]
        return min(driven, key=lambda plan: plan.set, default=None)

    @property
    def tightest(self) -> StagePlan | None:
        """The station with the largest use of a stress limit; None where none took a blow."""
        driven = [plan for plan in self.plans if plan.verdict != GOES_DOWN]
        return max(driven, key=lambda plan: plan.stress_use, default=None)


@dataclass(frozen=True, slots=True)
class Misfit:
    """What keeps a hammer from being used on this pile and site.

    Parameters
    ----------
    what : str
        ``availability``, ``helmet``, ``capacity``, ``headroom``, ``blow rate``, ``stability`` or
        ``vibration``.
    words : str
        A sentence with a place, ``{}``, for each value.
    values : tuple of (value, quantity)
        In SI; the quantity is one of the units table, or ``share``.
    """

    what: str
    words: str
    values: tuple[tuple[float, str], ...] = ()


@dataclass(frozen=True, slots=True)
class Cure:
    """What would let a failing hammer drive the pile, each found by the solver.

    Parameters
    ----------
    stack : Stack or None
        The thinnest cushions beyond the allowed range that would do.
    stack_looked : bool
        Whether thicker cushions were looked at.
    ram_mass : float or None
        Least ram mass that would do with the nearest miss's cushions: that would reach the set
        at the largest stroke or, for a hammer stopped by stresses, work at a lower one. [kg]
    ram_looked : bool
        Whether heavier rams were looked at.
    ram_within : bool
        Whether that ram would also stay within the stress limits.
    set_within : float or None
        Set at the largest stroke below which no limit breaks, with the nearest miss's cushions. [m]
    stroke_within : float or None
        That stroke. [m]
    """

    stack: Stack | None = None
    stack_looked: bool = False
    ram_mass: float | None = None
    ram_looked: bool = False
    ram_within: bool = False
    set_within: float | None = None
    stroke_within: float | None = None


@dataclass(frozen=True, slots=True)
class Option:
    """The best plan of one hammer, or its nearest miss.

    Parameters
    ----------
    hammer : Hammer
    verdict : str
        One of `VERDICTS`.
    governs : str
        ``set``, ``compression``, ``tension``, ``stroke range``, ``blow rate``, ``refusal``,
        ``weight`` or ``fit``.
    stack : Stack
        Cushions.
    plans : tuple of StagePlan
        In the order of the stages; for a miss only those looked at until one failed.
    target : StagePlan
        The plan at the target; in a drive, of the required ground case that costs the most.
    cost : float
        What the objective makes of it; the least is the best, infinite for a miss.
    failing : StagePlan or None
        The stage that fails.
    runner_up : Option or None
        A softer cushion of the same hammer that costs little more energy.
    certificate : str
        What certifies that this is the hammer's best plan.
    analyses : int
        Blows computed to find it.
    reach : float or None
        Up to so many times the target stage's resistance, the hammer reaches the needed set within
        the limits with these cushions; below 1, the largest multiple at which it does. None where
        there is none or it was not looked for. [-]
    reach_is_open : bool
        Whether `reach` is only as far as was looked: the true one is no less.
    cure : Cure or None
        What would let a failing hammer drive the pile.
    cases : tuple of CaseDrive
        The whole drive by ground case; empty for stages given by hand.
    odds : Odds or None
        What becomes of it under the job's doubt; None where it was not looked at.
    misfits : tuple of Misfit
        What is in the way of a hammer that does not fit, for which no blow was computed.
    """

    hammer: Hammer
    verdict: str
    governs: str
    stack: Stack
    plans: tuple[StagePlan, ...]
    target: StagePlan
    cost: float
    failing: StagePlan | None = None
    runner_up: Option | None = None
    certificate: str = ""
    analyses: int = 0
    reach: float | None = None
    reach_is_open: bool = False
    cure: Cure | None = None
    cases: tuple[CaseDrive, ...] = ()
    odds: Odds | None = None
    misfits: tuple[Misfit, ...] = ()

    @property
    def tightest(self) -> StagePlan | None:
        """The station of a drive, over required cases, with the largest use of a stress limit."""
        plans = [case.tightest for case in self.cases if case.required]
        return max(
            (plan for plan in plans if plan is not None),
            key=lambda plan: plan.stress_use,
            default=None,
        )

    @property
    def slowest(self) -> CaseDrive | None:
        """The required case that takes the most blows; None for stages given by hand."""
        required = [case for case in self.cases if case.required]
        return max(required, key=lambda case: case.taken.blows, default=None)

    @property
    def bill(self) -> Bill | None:
        """Bill of the required case that costs the most, or takes the longest where none is known.

        None where the job gives no cost.
        """
        bills = [case.bill for case in self.cases if case.required and case.bill]
        return max(bills, key=lambda b: (b.total or 0.0, b.pile_time or 0.0), default=None)

    @property
    def drives(self) -> bool:
        """Whether the hammer can drive the pile."""
        return self.verdict in CAN_DRIVE

    @property
    def compression_use(self) -> float:
        """Worst over the stages [-]."""
        return max(plan.compression_use for plan in self.plans)

    @property
    def tension_use(self) -> float:
        """Worst over the stages [-]."""
        return max(plan.tension_use for plan in self.plans)


@dataclass(frozen=True)
class Ranking:
    """All hammers of a job, best first, and why the others fail.

    Parameters
    ----------
    job : Job
    options : tuple of Option
        Those that drive, best first.
    rejected : tuple of Option
        The others, nearest miss first.
    analyses : int
        Blows computed.
    runtime : float
        [s]
    """

    job: Job
    options: tuple[Option, ...]
    rejected: tuple[Option, ...]
    analyses: int
    runtime: float = field(compare=False)
