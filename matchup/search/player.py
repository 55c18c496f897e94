"""One option played in many samples of what is in doubt.

Every sample is one ground with one state of hammer and cushion. Samples are walked side by side
like the ground cases of a drive, so that each step of all of them is one batch of blows.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from matchup.analysis.cells import job_demands
from matchup.analysis.rig import Rig, Tell
from matchup.analysis.sampling import sampled_stages
from matchup.analysis.window import WindowFinder
from matchup.model.doubt import Doubt
from matchup.model.job import Job
from matchup.search.option import (
    DRIVES,
    GOES_DOWN,
    OVER_COMPRESSION,
    OVER_TENSION,
    VERDICTS,
    Option,
)
from matchup.search.way import Walk, walk
from matchup.wave.layout import Flags, Floats, Integers

STAGES_AT_ONCE = 20_000
"""Of all samples together in one rig, for want of memory."""
BROKEN = (OVER_COMPRESSION, OVER_TENSION)


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
        struck = {plan.stage.name: plan for plan in option.plans if plan.verdict != GOES_DOWN}
        # Where no stroke is planned, it is the target's.
        self.planned = [struck.get(stage.name, option.target).at for stage in self.stages]
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
        return by_column(np.concatenate, *parts)

    def _play(self, drawn: Floats) -> Outcomes:
        sampled = sampled_stages(self.doubt, self.stages, drawn)
        job = replace(self.job, stages=sampled.stages)
        rig = Rig(job, self.workers, self.tell, sampled.scales)
        finder = WindowFinder(rig, job_demands(rig))
        keeps = self.doubt.strokes == "keep"
        walks = [Walk(course, 0, 0, None, self.planned, keeps) for course in job.courses]
        walk(finder, walks)
        self.spent += rig.spent
        return _outcomes(walks, finder)


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


def by_column(change: Callable[..., NDArray[Any]], *parts: Outcomes) -> Outcomes:
    """Return outcomes with each column made of those of the parts."""
    names = [field.name for field in fields(Outcomes)]
    return Outcomes(*(change([getattr(part, name) for part in parts]) for name in names))
