"""The termination criterion: which set at which stroke proves the resistance that is asked for."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from matchup.analysis.cells import OPEN, UNSOUND, Cells, job_demands
from matchup.analysis.rig import Rig, Tell
from matchup.analysis.window import WindowFinder
from matchup.model.job import Job
from matchup.model.stage import Stage
from matchup.search.option import Option
from matchup.search.reach import scaled
from matchup.wave.layout import Floats, Integers

MULTIPLES = tuple(round(0.4 + 0.1 * i, 1) for i in range(15))
"""Of the target's resistance, for the table of sets."""
STROKES_EACH_WAY = 3
"""Strokes told below and above the planned one."""
APART = 0.1
"""Strokes that can be set freely are told so far apart. [m]"""


@dataclass(frozen=True, slots=True)
class Criterion:
    """What sets mean at the target, with the option's cushions.

    The distribution of the resistance is that of `stage`. Of the wear states the one with the
    smaller set counts, so that a set never proves more than it does in the other.

    Parameters
    ----------
    stage : Stage
    planned : float
        Stroke planned there. [m]
    strokes : (strokes,) float64 array
        [m]
    driving, later : (multiples,) float64 array
        Resistance while driving, and long after it, with the shaft's set-up. [N]
    sets : (multiples, strokes) float64 array
        NaN where a blow can't be trusted or the pile runs. [m]
    stress_uses : (multiples, strokes) float64 array
        Larger use of a stress limit. [-]
    needed : float or None
        Resistance long after driving to be proven; None where the job does not say. [N]
    proving : (strokes,) float64 array or None
        Set that proves it; NaN where none does: it would be below `least`, or a stress limit
        breaks. [m]
    least : float
        The refusal set: below it a blow does not mobilise the ground, and proves nothing. [m]
    """

    stage: Stage
    planned: float
    strokes: Floats
    driving: Floats
    later: Floats
    sets: Floats
    stress_uses: Floats
    needed: float | None
    proving: Floats | None
    least: float


def find_criterion(
    job: Job, option: Option, workers: int | None = None, tell: Tell | None = None
) -> Criterion:
    """Return the termination criterion of an option."""
    plan = next(
        (c.plans[-1] for c in option.cases if c.case == "best" and c.failing is None), option.target
    )
    stage = plan.stage
    multiples = list(MULTIPLES)
    needed = job.drive.capacity if job.drive else None
    if needed is not None:
        multiples.append(needed / _later(stage))
    least = min(one.set_needed for one in job.stages)
    stages = tuple(
        replace(scaled(stage, multiple), name=f"{row}", set_needed=least)
        for row, multiple in enumerate(multiples)
    )
    rig = Rig(replace(job, stages=stages, hammers=(option.hammer,), drive=None), workers, tell)
    finder = WindowFinder(rig, job_demands(rig).without_set())
    at = _settings(rig, rig.stacks.index(option.stack), plan.at, needed is not None)
    shape = (len(stages), at.size)
    sets, uses = np.full((2, *shape), np.nan)
    rows = [row for row in range(len(stages)) if not rig.runs(row, 0)]
    if rows:
        row = np.repeat(rows, at.size)
        zero = np.zeros(row.size, np.int64)
        cells = Cells(row, zero, zero + rig.stacks.index(option.stack))
        struck = finder.strike(cells, np.tile(at, len(rows)))
        found = np.where(struck.state != UNSOUND, struck.set, np.nan)
        sets[rows] = found.reshape(len(rows), at.size)
        limits = job.limits
        worst = np.maximum(struck.compression / limits.compression, struck.tension / limits.tension)
        uses[rows] = worst.reshape(len(rows), at.size)
    later = np.array([_later(one) for one in stages])
    # A stroke that breaks a limit, or hardly moves the pile, is none to prove anything with.
    provable = (sets[-1] >= least) & (uses[-1] <= 1)
    known = slice(0, len(MULTIPLES))
    return Criterion(
        stage=stage,
        planned=plan.stroke,
        strokes=finder.stroke(np.zeros(at.size, np.int64), at),
        driving=np.array([one.resistance for one in stages])[known],
        later=later[known],
        sets=sets[known],
        stress_uses=uses[known],
        needed=needed,
        proving=None if needed is None else np.where(provable, sets[-1], np.nan),
        least=least,
    )


def _settings(rig: Rig, stack: int, planned: int, to_prove: bool) -> Integers:
    """Return settings around the planned one, and the one nearest to it that can prove."""
    finder = WindowFinder(rig, job_demands(rig))
    strokes = finder.strokes[0]
    step = 1 if strokes.size < 2 else max(1, round(APART / (strokes[1] - strokes[0])))
    at = planned + step * np.arange(-STROKES_EACH_WAY, STROKES_EACH_WAY + 1)
    at = at[(at >= 0) & (at < strokes.size)]
    row = len(rig.job.stages) - 1
    if not to_prove or rig.runs(row, 0):
        return at
    cell = Cells(*(np.array([place]) for place in (row, 0, stack)))
    proving = finder.nearest(cell, np.array([planned]))
    return np.union1d(at, proving.at) if proving.state[0] == OPEN else at


def _later(stage: Stage) -> float:
    """Return the resistance long after driving: the shaft's set-up on top, the toe's never [N]."""
    return stage.setup * stage.shaft + stage.toe
