"""The map of one hammer: stroke against cushion, where it works and what stops it."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from matchup.analysis.cells import (
    COMPRESSION,
    NO_SET,
    OPEN,
    RUNS,
    TENSION,
    UNSOUND,
    Cells,
    job_demands,
)
from matchup.analysis.rig import Rig, Tell
from matchup.analysis.window import WindowFinder
from matchup.model.cushion import Stack
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.stage import Stage
from matchup.search.fit import sort_hammers
from matchup.wave.layout import Floats, Integers

MOST_STROKES = 24
"""Strokes shown at most."""

OPEN_CELL = "open"
SHORT = "set not reached"
SQUEEZED = "compression"
PULLED = "tension"
RUNNING = "pile runs"
UNTRUSTED = "could not be analysed"
STATE_OF = {
    OPEN: OPEN_CELL,
    NO_SET: SHORT,
    COMPRESSION: SQUEEZED,
    TENSION: PULLED,
    RUNS: RUNNING,
    UNSOUND: UNTRUSTED,
}


@dataclass(frozen=True, slots=True)
class StrokeMap:
    """Stroke against cushion for one hammer and stage.

    Parameters
    ----------
    job : Job
    hammer : Hammer
    stage : Stage
        The one looked at, or the target where all are.
    stacks : tuple of Stack
    strokes : (strokes,) float64 array
        [m]
    states : tuple of tuple of str
        By stack and stroke: ``open``, or what closes it.
    closed_at : tuple of tuple of str
        By stack and stroke: name of the stage that closes it; empty where it is open.
    sets : (stacks, strokes) float64 array
        Least over the wear states, at the stage that closes the cell or else the target. [m]
    compression_uses, tension_uses : (stacks, strokes) float64 array
        Largest over the wear states and the stroke tolerance, as fractions of the limits, at the
        same stage; where a cell is open, over all stages looked at. [-]
    analyses : int
    everywhere : bool
        Whether every stage of every required ground case was looked at.
    """

    job: Job
    hammer: Hammer
    stage: Stage
    stacks: tuple[Stack, ...]
    strokes: Floats
    states: tuple[tuple[str, ...], ...]
    closed_at: tuple[tuple[str, ...], ...]
    sets: Floats
    compression_uses: Floats
    tension_uses: Floats
    analyses: int
    everywhere: bool = False

    @property
    def is_open(self) -> bool:
        """Whether any cell is open."""
        return any(state == OPEN_CELL for row in self.states for state in row)


def map_strokes(
    job: Job,
    hammer: Hammer,
    stage: Stage | None,
    workers: int | None = None,
    tell: Tell | None = None,
) -> StrokeMap:
    """Map one hammer at one stage, or at all of them.

    Settings are shown whole where they are few; of many, evenly spaced ones, and those at which
    a window opens that would else lie between them.

    Parameters
    ----------
    stage : Stage or None
        None for every stage of every required ground case: a cell is open where it works at all
        of them. The targets come first, since they ask for the larger set; a closed cell is not
        looked at any further.
    """
    fitting = sort_hammers(replace(job, hammers=(hammer,)))
    if fitting.hammers:
        (hammer,) = fitting.hammers
    unfit = tuple(f"{o.hammer.name} {o.verdict}; `check` says why" for o in fitting.unfit)
    job = replace(job, notices=(*job.notices, *fitting.notes, *unfit))
    looked = _stages(job) if stage is None else (stage,)
    drive = job.drive if stage is None else None
    rig = Rig(replace(job, hammers=(hammer,), stages=looked, drive=drive), workers, tell)
    finder = WindowFinder(rig, job_demands(rig))
    settings = finder.strokes[0]
    picked = np.unique(
        np.rint(np.linspace(0, settings.size - 1, min(MOST_STROKES, settings.size))).astype(int)
    )
    if not rig.runs(0, 0):
        picked = np.union1d(picked, _hidden_windows(finder, picked))
    shape = (len(rig.stacks), picked.size)
    stack = np.repeat(np.arange(shape[0]), shape[1])
    at = np.tile(picked, shape[0])
    state = np.full(stack.size, OPEN)
    closed_at = np.full(stack.size, "", dtype=object)
    sets, compression, tension = np.full((3, stack.size), np.nan)
    for place, one in enumerate(looked):
        rows = np.flatnonzero(state == OPEN)
        if rig.runs(place, 0):
            # On the way of a drive the pile may go down under its weight.
            if job.drive is None or stage is not None:
                state[rows], closed_at[rows] = RUNS, one.name
            continue
        if not rows.size:
            break
        same = np.zeros(rows.size, np.int64)
        struck = finder.strike(Cells(same + place, same, stack[rows]), at[rows])
        closed = struck.state != OPEN
        state[rows] = struck.state
        closed_at[rows[closed]] = one.name
        # A closed cell tells of the stage that closes it, an open one of the worst.
        sets[rows] = np.where(closed | np.isnan(sets[rows]), struck.set, sets[rows])
        for most, found in ((compression, struck.compression), (tension, struck.tension)):
            most[rows] = np.where(closed, found, np.fmax(most[rows], found))
    return StrokeMap(
        job=job,
        hammer=hammer,
        stage=looked[0],
        stacks=rig.stacks,
        strokes=settings[picked],
        states=tuple(tuple(STATE_OF[s] for s in row) for row in state.reshape(shape).tolist()),
        closed_at=tuple(map(tuple, closed_at.reshape(shape).tolist())),
        sets=sets.reshape(shape),
        compression_uses=(compression / job.limits.compression).reshape(shape),
        tension_uses=(tension / job.limits.tension).reshape(shape),
        analyses=rig.spent,
        everywhere=stage is None,
    )


def _stages(job: Job) -> tuple[Stage, ...]:
    """Return the stages of required courses, the targets first."""
    courses = [course for course in job.courses if course.required]
    targets = [course.target for course in courses]
    others = [place for course in courses for place in course.stages[:-1]]
    return tuple(job.stages[place] for place in (*targets, *others))


def _hidden_windows(finder: WindowFinder, picked: Integers) -> Integers:
    """Return the lowest settings of windows that lie wholly between the picked ones."""
    stacks = np.arange(len(finder.rig.stacks))
    place = np.zeros(stacks.size, np.int64)
    windows = finder.find(Cells(place, place, stacks))
    opened = np.flatnonzero(windows.state == OPEN)
    if not opened.size:
        return np.empty(0, np.int64)
    cells = Cells(place[opened], place[opened], stacks[opened])
    first = windows.at[opened]
    last = finder.tops(cells, first)
    after = np.searchsorted(picked, first)
    return np.unique(first[(after == picked.size) | (picked[after % picked.size] > last)])
