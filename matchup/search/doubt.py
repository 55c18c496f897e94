"""Doubt: what becomes of a planned option when the inputs are not what the job says.

Every sample is one ground with one hammer state. The samples of an option are walked side by side
like the ground cases of a drive, so that each step of all of them is one batch of blows.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, fields, replace
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from matchup.analysis.cells import Cells, job_demands
from matchup.analysis.rig import Rig, Tell
from matchup.analysis.sampling import SCRAMBLINGS, Sampler, factors, sampled_stages
from matchup.analysis.window import WindowFinder
from matchup.model.doubt import Doubt
from matchup.model.job import Course, Job
from matchup.search.option import (
    DRIVES,
    GOES_DOWN,
    NOT_REACHED,
    OVER_COMPRESSION,
    OVER_TENSION,
    REFUSES,
    VERDICTS,
    Option,
)
from matchup.search.way import Walk, find_targets, stage_plan, walk, wanted_on_the_way
from matchup.wave.layout import Flags, Floats, Integers

MOST_SAMPLES = 2**16
"""More are not drawn, whatever standard error is asked for."""
STAGES_AT_ONCE = 20_000
"""Of all samples together in one rig, for want of memory."""
BROKEN = (OVER_COMPRESSION, OVER_TENSION)
PERCENTILES = (0.1, 0.5, 0.9)


class Estimate(NamedTuple):
    """A figure from samples, and its standard error."""

    value: float
    error: float


class Spread(NamedTuple):
    """Percentiles of a quantity."""

    p10: Estimate
    p50: Estimate
    p90: Estimate


@dataclass(frozen=True, slots=True)
class Outcomes:
    """What became of samples, as columns of equal length.

    Parameters
    ----------
    verdict : (samples,) int64 array
        Place in `VERDICTS` of what stopped the sample, or `DRIVES` where the target is reached.
    depth : (samples,) float64 array
        Penetration at which it was stopped; NaN where it was not. [m]
    compression, tension : (samples,) bool array
        Whether the stress limit breaks: with strokes kept at any stage that was struck, with
        strokes adapted where no stroke that reaches the set holds it.
    stress_use : (samples,) float64 array
        Largest use of a stress limit at strokes played; NaN where none was. [-]
    blows, seconds : (samples,) float64 array
        Of the drive as far as it got; NaN where not known. [-], [s]
    """

    verdict: Integers
    depth: Floats
    compression: Flags
    tension: Flags
    stress_use: Floats
    blows: Floats
    seconds: Floats

    @property
    def reaches(self) -> Flags:
        """Which samples reach the target."""
        return np.asarray(self.verdict == VERDICTS.index(DRIVES))

    @property
    def works(self) -> Flags:
        """Which samples reach the target within the stress limits."""
        return np.asarray(self.reaches & ~self.compression & ~self.tension)

    def stopped_by(self, *verdicts: str) -> Flags:
        """Return which samples were stopped by one of some verdicts."""
        return np.isin(self.verdict, [VERDICTS.index(verdict) for verdict in verdicts])


@dataclass(frozen=True, slots=True)
class Odds:
    """What becomes of an option under doubt.

    Parameters
    ----------
    samples, scramblings : int
        All samples, and the independent sequences that they come from.
    strokes : str
        ``adapt`` or ``keep``.
    case : str
        Ground case that the factors act on; empty for stages given by hand.
    works, reaches : Estimate
        Probability of reaching depth and set of the target within the stress limits, and at all.
    refuses, short : Estimate
        Of refusal on the way, and of getting to the target without its set.
    breaks, compression, tension : Estimate
        Of breaking a stress limit, and each of them.
    others : tuple of (verdict, Estimate)
        What else stopped samples.
    refusal_depth : Spread or None
        Penetration at refusal or at the target without its set; None where it never came. [m]
    refusals : tuple of (penetration, probability)
        The same station by station; nothing for stages given by hand. [m], [-]
    blows, seconds : Spread or None
        Of the samples that reach the target; None where there are none or they are not known.
        [-], [s]
    stress_use : Spread or None
        Largest use of a stress limit, of all samples that took a blow. [-]
    analyses : int
        Blows computed.
    """

    samples: int
    scramblings: int
    strokes: str
    case: str
    works: Estimate
    reaches: Estimate
    refuses: Estimate
    short: Estimate
    breaks: Estimate
    compression: Estimate
    tension: Estimate
    others: tuple[tuple[str, Estimate], ...]
    refusal_depth: Spread | None
    refusals: tuple[tuple[float, float], ...]
    blows: Spread | None
    seconds: Spread | None
    stress_use: Spread | None
    analyses: int

    @property
    def worst_error(self) -> float:
        """Largest standard error of a probability, or of a percentile over the median [-]."""
        shares = (self.works, self.reaches, self.refuses, self.short, self.breaks)
        errors = [share.error for share in shares]
        for spread in (self.blows, self.seconds):
            if spread is not None:
                errors += [one.error / spread.p50.value for one in spread if spread.p50.value > 0]
        return max(errors)


def find_odds(
    job: Job,
    option: Option,
    samples: int,
    workers: int | None = None,
    tell: Tell | None = None,
) -> Odds:
    """Return what becomes of an option under the job's doubt.

    Parameters
    ----------
    job : Job
        With a `doubt`.
    option : Option
    samples : int
        At least; what is drawn is a power of two of each scrambling. Doubled until the job's
        standard error is kept.
    """
    assert job.doubt is not None
    player = Player(job, option, workers, tell)
    sampler = Sampler(len(job.doubt.inputs), job.search.seed)
    each = 2 ** math.ceil(math.log2(max(1, samples / SCRAMBLINGS)))
    parts: list[Outcomes] = []
    while True:
        points = sampler.draw(each)
        rows = factors(job.doubt, points.reshape(-1, points.shape[-1]))
        shape = (SCRAMBLINGS, each)
        parts.append(_by_column(lambda c, to=shape: c[0].reshape(to), player.play(rows)))
        odds = _odds(_by_column(np.hstack, *parts), player)
        enough = job.doubt.standard_error is None or odds.worst_error <= job.doubt.standard_error
        if enough or 2 * odds.samples > MOST_SAMPLES:
            return odds
        each = odds.samples // SCRAMBLINGS


# --- playing ------------------------------------------------------------------------------------


class Player:
    """Plays one option with many factors on its inputs.

    Parameters
    ----------
    job : Job
    option : Option
    workers : int or None
    tell : callable or None
    """

    def __init__(
        self, job: Job, option: Option, workers: int | None = None, tell: Tell | None = None
    ):
        assert job.doubt is not None
        self.doubt: Doubt = job.doubt
        cushions, others = job.cushions, job.hammer_cushions
        if cushions is not None and option.stack.pile is not None:
            cushions = cushions.holding(option.stack.pile)
        if option.stack.hammer is not None:
            others = (option.stack.hammer,)
        self.job = replace(
            job,
            hammers=(option.hammer,),
            cushions=cushions,
            hammer_cushions=others,
            drive=None if job.drive is None else replace(job.drive, required=()),
        )
        self.case = base_case(job)
        self.stages = [stage for stage in job.stages if stage.case == self.case]
        planned = {plan.stage.name: plan for plan in option.plans if plan.verdict != GOES_DOWN}
        at = option.target.at
        self.kept = [
            planned[stage.name].at if stage.name in planned else at for stage in self.stages
        ]
        self.workers, self.tell = workers, tell
        self.spent = 0

    def play(self, drawn: Floats) -> Outcomes:
        """Return what becomes of samples.

        Parameters
        ----------
        drawn : (samples, inputs) float64 array
            Factors. [-]
        """
        size = max(1, STAGES_AT_ONCE // len(self.stages))
        parts = [self._play(drawn[at : at + size]) for at in range(0, len(drawn), size)]
        return _by_column(np.concatenate, *parts)

    def _play(self, drawn: Floats) -> Outcomes:
        sampled = sampled_stages(self.doubt, self.stages, drawn)
        job = replace(self.job, stages=sampled.stages)
        rig = Rig(job, self.workers, self.tell, sampled.scales)
        finder = WindowFinder(rig, job_demands(rig))
        if self.doubt.strokes == "keep":
            walks = [Walk(course, 0, 0, None, self.kept, keeps=True) for course in job.courses]
        else:
            walks = self._adapting(finder, job.courses)
        walk(finder, walks)
        self.spent += rig.spent
        return _outcomes(walks, finder)

    def _adapting(self, finder: WindowFinder, courses: Sequence[Course]) -> list[Walk]:
        """Return walks whose targets are planned as they would be in their own ground."""
        targets = np.array([course.target for course in courses])
        zero = np.zeros(targets.size, np.int64)
        objective = self.job.search.objective
        found = find_targets(finder, Cells(targets, zero, zero), objective)
        made = []
        for row, course in enumerate(courses):
            target = stage_plan(finder, found, row)
            wanted = wanted_on_the_way(finder, 0, target.at, objective)
            made.append(Walk(course, 0, 0, target, [wanted] * len(course.stages)))
        return made


def base_case(job: Job) -> str:
    """Return the ground case that factors act on: the best one, or else the first required one."""
    courses = job.courses
    if any(course.case == "best" for course in courses):
        return "best"
    return next(course.case for course in courses if course.required)


def _outcomes(walks: Sequence[Walk], finder: WindowFinder) -> Outcomes:
    """Return what became of walks that went as far as they could."""
    rows = [_outcome(one, finder) for one in walks]
    columns = list(zip(*rows, strict=True))
    return Outcomes(
        np.array(columns[0], np.int64),
        np.array(columns[1], np.float64),
        np.array(columns[2], np.bool_),
        np.array(columns[3], np.bool_),
        *(np.array(column, np.float64) for column in columns[4:]),
    )


def _outcome(one: Walk, finder: WindowFinder) -> tuple[object, ...]:
    last = one.plans[-1]
    passed = one.passes(last)
    # Where strokes adapt, one that breaks a limit is not played but explains why there is none.
    over = [plan for plan in one.plans if one.keeps or plan.verdict in BROKEN]
    uses = [plan.stress_use for plan in one.plans if plan.stress_use > 0]
    seconds = one.taken.seconds
    in_drive = finder.rig.job.drive is not None
    return (
        VERDICTS.index(DRIVES if passed else last.verdict),
        math.nan if passed else last.stage.penetration,
        any(plan.compression > finder.demands.compression for plan in over),
        any(plan.tension > finder.demands.tension for plan in over),
        max(uses, default=math.nan),
        one.taken.blows if in_drive else math.nan,
        seconds if in_drive and seconds is not None else math.nan,
    )


def _by_column(change: Callable[..., NDArray[Any]], *parts: Outcomes) -> Outcomes:
    """Return outcomes with each column made of those of the parts."""
    names = [field.name for field in fields(Outcomes)]
    return Outcomes(*(change([getattr(part, name) for part in parts]) for name in names))


# --- figures ------------------------------------------------------------------------------------


def _odds(found: Outcomes, player: Player) -> Odds:
    """Return the figures of outcomes whose columns are (scramblings, samples each)."""
    reaches = found.reaches
    refused = found.stopped_by(REFUSES, NOT_REACHED)
    others = [VERDICTS[place] for place in np.unique(found.verdict)]
    told = (DRIVES, REFUSES, NOT_REACHED, *BROKEN)
    return Odds(
        samples=reaches.size,
        scramblings=len(reaches),
        strokes=player.doubt.strokes,
        case=player.case,
        works=probability(found.works),
        reaches=probability(reaches),
        refuses=probability(found.stopped_by(REFUSES)),
        short=probability(found.stopped_by(NOT_REACHED)),
        breaks=probability(found.compression | found.tension),
        compression=probability(found.compression),
        tension=probability(found.tension),
        others=tuple((v, probability(found.stopped_by(v))) for v in others if v not in told),
        refusal_depth=spread(np.where(refused, found.depth, np.nan)),
        refusals=_by_depth(found.depth[refused], reaches.size),
        blows=spread(np.where(reaches, found.blows, np.nan)),
        seconds=spread(np.where(reaches, found.seconds, np.nan)),
        stress_use=spread(found.stress_use),
        analyses=player.spent,
    )


def probability(held: Flags) -> Estimate:
    """Return a probability from the samples in which something held.

    The standard error follows from the scatter between scramblings. Where all of them agree there
    is none to be seen, and the error is that of one more sample that differs.

    Parameters
    ----------
    held : (scramblings, samples each) bool array
    """
    shares = held.mean(axis=1)
    scatter = float(shares.std(ddof=1)) / math.sqrt(len(shares))
    return Estimate(float(shares.mean()), max(scatter, 1 / (held.size + 1)))


def spread(values: Floats) -> Spread | None:
    """Return percentiles of a quantity, or None where it is never known.

    Parameters
    ----------
    values : (scramblings, samples each) float64 array
        NaN where it is not known. The standard error follows from the scatter between the
        percentiles of the scramblings, and is infinite where fewer than two of them know any.
    """
    if np.isnan(values).all():
        return None
    whole = np.nanquantile(values, PERCENTILES)
    knowing = values[~np.isnan(values).all(axis=1)]
    errors = np.full(len(PERCENTILES), np.inf)
    if len(knowing) > 1:
        each = np.nanquantile(knowing, PERCENTILES, axis=1)
        errors = each.std(axis=1, ddof=1) / math.sqrt(len(knowing))
    pairs = zip(whole.tolist(), errors.tolist(), strict=True)
    return Spread(*(Estimate(value, error) for value, error in pairs))


def _by_depth(depths: Floats, samples: int) -> tuple[tuple[float, float], ...]:
    """Return the probability of being stopped at each penetration."""
    at, counts = np.unique(depths, return_counts=True)
    return tuple(zip(at.tolist(), (counts / samples).tolist(), strict=True))
