"""What windows are looked for in: cells, settings and demands; and what was found there."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from matchup.analysis.rig import Rig
from matchup.model.hammer import Hammer
from matchup.wave.layout import Flags, Floats, Integers

FREE_STROKE_STEP = 0.01
"""Steps in which a freely set stroke is planned. [m]"""
FREE_SHARE = 0.01
"""Steps in which a freely set energy is planned, of the largest. [-]"""
EVERY_WEAR = -1
RUNS, UNSOUND, NO_SET, COMPRESSION, TENSION, OPEN = range(6)
"""State of a cell or a stroke: the pile runs; a blow could not be trusted; the set is not reached
(in a cell: at full stroke); which limit breaks (in a cell: at every stroke that reaches the set);
it works."""

COLUMNS = ("state", "at", "stroke", "set", "compression", "tension", "transferred", "lifted")


class Cells(NamedTuple):
    """Combinations to look at, as columns of equal length: places in a `Rig`.

    Parameters
    ----------
    stage, hammer, cushion : (cells,) int64 array
    wear : (cells,) int64 array or None
        The one wear state that counts, or `EVERY_WEAR`; None stands for every one in all cells.
    """

    stage: Integers
    hammer: Integers
    cushion: Integers
    wear: Integers | None = None

    def take(self, rows: Integers) -> Cells:
        """Return the cells at `rows`."""
        wear = None if self.wear is None else self.wear[rows]
        return Cells(self.stage[rows], self.hammer[rows], self.cushion[rows], wear)

    def worn(self, wear: int) -> Integers:
        """Return the rows in which a wear state counts."""
        if self.wear is None:
            return np.arange(self.stage.size)
        return np.flatnonzero((self.wear == wear) | (self.wear == EVERY_WEAR))


class Demands(NamedTuple):
    """What a blow must meet.

    Parameters
    ----------
    set_needed : (stages,) float64 array
        Least set, reserve included. [m]
    compression, tension : float
        Largest stresses, reserve taken off. [Pa]
    """

    set_needed: Floats
    compression: float
    tension: float

    def without_set(self) -> Demands:
        """Return the same without a set to be reached."""
        return self._replace(set_needed=np.zeros_like(self.set_needed))


def job_demands(rig: Rig) -> Demands:
    """Return the demands of the rig's job, its reserve kept back."""
    job = rig.job
    keep = job.search.reserve
    return Demands(
        np.array([(1 + keep) * stage.set_needed for stage in job.stages]),
        (1 - keep) * job.limits.compression,
        (1 - keep) * job.limits.tension,
    )


def settings(hammer: Hammer) -> Floats:
    """Return the strokes [m] that can be planned, from the least in steps, and the largest."""
    free = FREE_SHARE * hammer.stroke_max if hammer.set_by_energy else FREE_STROKE_STEP
    step = hammer.stroke_step or free
    span = hammer.stroke_max - hammer.stroke_min
    whole = math.floor(span / step + 1e-9)
    strokes: Floats = hammer.stroke_min + step * np.arange(whole + 1, dtype=np.float64)
    if hammer.stroke_max - strokes[-1] > 1e-6:
        return np.concatenate((strokes, [hammer.stroke_max]))
    strokes[-1] = hammer.stroke_max
    return strokes


def is_setting(hammer: Hammer, stroke: float) -> bool:
    """Return whether a stroke [m] is one of the hammer's settings."""
    return bool(np.isclose(settings(hammer), stroke, rtol=0, atol=1e-6).any())


@dataclass(frozen=True, slots=True)
class Found:
    """What one stroke of each cell does, as columns of equal length.

    Where nothing works in a cell, it is the stroke that explains it: the largest one if the set is
    not reached, else the least one that reaches the set.

    Parameters
    ----------
    cells : Cells
    state : (cells,) int64 array
    at : (cells,) int64 array
        Setting number.
    stroke : (cells,) float64 array
        [m]
    set : (cells,) float64 array
        Least set over the wear states. [m]
    compression, tension : (cells,) float64 array
        Largest stresses over the wear states and the stroke tolerance. [Pa]
    transferred : (cells,) float64 array
        Least energy over the wear states that reaches the pile. [J]
    lifted : (cells,) bool array
        Whether tension closes the least stroke that reaches the set, and this one lies above.
    """

    cells: Cells
    state: Integers
    at: Integers
    stroke: Floats
    set: Floats
    compression: Floats
    tension: Floats
    transferred: Floats
    lifted: Flags

    def put(self, rows: Integers, other: Found, from_rows: Integers | None = None) -> None:
        """Overwrite all but `cells` at `rows` by another's, modifying the columns in place."""
        for name in COLUMNS:
            column = getattr(other, name)
            getattr(self, name)[rows] = column if from_rows is None else column[from_rows]
