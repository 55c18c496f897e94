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
from matchup.analysis.rig import Rig
from matchup.analysis.window import WindowFinder
from matchup.model.cushion import Stack
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.stage import Stage
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
    stacks : tuple of Stack
    strokes : (strokes,) float64 array
        [m]
    states : tuple of tuple of str
        By stack and stroke: ``open``, or what closes it.
    sets : (stacks, strokes) float64 array
        Least over the wear states. [m]
    compression_uses, tension_uses : (stacks, strokes) float64 array
        Largest over the wear states and the stroke tolerance, as fractions of the limits. [-]
    analyses : int
    """

    job: Job
    hammer: Hammer
    stage: Stage
    stacks: tuple[Stack, ...]
    strokes: Floats
    states: tuple[tuple[str, ...], ...]
    sets: Floats
    compression_uses: Floats
    tension_uses: Floats
    analyses: int

    @property
    def is_open(self) -> bool:
        """Whether any cell is open."""
        return any(state == OPEN_CELL for row in self.states for state in row)


def map_strokes(job: Job, hammer: Hammer, stage: Stage, workers: int | None = None) -> StrokeMap:
    """Map one hammer at one stage.

    Settings are shown whole where they are few; of many, evenly spaced ones, and those at which
    a window opens that would else lie between them.
    """
    rig = Rig(replace(job, hammers=(hammer,), stages=(stage,)), workers)
    finder = WindowFinder(rig, job_demands(rig))
    settings = finder.strokes[0]
    picked = np.unique(
        np.rint(np.linspace(0, settings.size - 1, min(MOST_STROKES, settings.size))).astype(int)
    )
    if rig.runs(0, 0):
        shape = (len(rig.stacks), picked.size)
        blank = np.full(shape, np.nan)
        states = ((RUNNING,) * shape[1],) * shape[0]
        strokes = settings[picked]
        return StrokeMap(
            job, hammer, stage, rig.stacks, strokes, states, blank, blank, blank, rig.spent
        )
    picked = np.union1d(picked, _hidden_windows(finder, picked))
    shape = (len(rig.stacks), picked.size)
    stack = np.repeat(np.arange(shape[0]), shape[1])
    at = np.tile(picked, shape[0])
    place = np.zeros(stack.size, np.int64)
    cells = Cells(place, place, stack)
    struck = finder.strike(cells, at)
    return StrokeMap(
        job=job,
        hammer=hammer,
        stage=stage,
        stacks=rig.stacks,
        strokes=settings[picked],
        states=tuple(
            tuple(STATE_OF[s] for s in row) for row in struck.state.reshape(shape).tolist()
        ),
        sets=struck.set.reshape(shape),
        compression_uses=(struck.compression / job.limits.compression).reshape(shape),
        tension_uses=(struck.tension / job.limits.tension).reshape(shape),
        analyses=rig.spent,
    )


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
