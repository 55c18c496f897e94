"""Windows: the strokes that reach the set and break no limit, for many cells at once.

A cell is one stage, hammer and pile cushion. Strokes lie on the hammer's own settings; a stroke
that can be set freely is planned in whole centimetres from the least stroke, since nobody sets it
finer. Stresses must also hold at 2 % more and less stroke than planned.

The set grows with the stroke, so the least stroke that reaches it is found by bracketing, all cells
in step. Tension need not grow with the stroke: from there on strokes are scanned upwards, close
enough that the 2 % on either side leave no gap between them.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from matchup.analysis.rig import Rig
from matchup.model.hammer import Hammer
from matchup.wave.layout import Flags, Floats, Integers

FREE_STROKE_STEP = 0.01
"""Steps in which a freely set stroke is planned. [m]"""
STROKE_TOLERANCE = 0.02
"""Stresses must also hold at so much more and less stroke than planned. [-]"""
SCAN_RATIO = 1.04
"""Ratio of strokes in a scan: their tolerances touch."""
TESTED = (1.0, 1.0 - STROKE_TOLERANCE, 1.0 + STROKE_TOLERANCE)

RUNS, UNSOUND, NO_SET, COMPRESSION, TENSION, OPEN = range(6)
"""State of a cell: the pile runs; a blow could not be trusted; the set is not reached at full
stroke; which limit breaks at every stroke that reaches the set; a window is open."""


class Cells(NamedTuple):
    """Combinations to look at, as columns of equal length: places in a `Rig`."""

    stage: Integers
    hammer: Integers
    cushion: Integers


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
    step = hammer.stroke_step or FREE_STROKE_STEP
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
class Windows:
    """The window of each cell, as columns of equal length.

    Where no window is open, `low` is the stroke that explains it: the largest one if the set is
    not reached, else the least one that reaches the set.

    Parameters
    ----------
    cells : Cells
    state : (cells,) int64 array
    low : (cells,) float64 array
        Lowest stroke of the window. [m]
    set : (cells,) float64 array
        Least set over the wear states at `low`. [m]
    compression, tension : (cells,) float64 array
        Largest stresses over the wear states and the stroke tolerance at `low`. [Pa]
    lifted : (cells,) bool array
        Whether tension closes the least stroke that reaches the set, and a window opens above.
    """

    cells: Cells
    state: Integers
    low: Floats
    set: Floats
    compression: Floats
    tension: Floats
    lifted: Flags


class WindowFinder:
    """Finds windows on one rig.

    Parameters
    ----------
    rig : Rig
    demands : Demands
    """

    def __init__(self, rig: Rig, demands: Demands):
        self.rig = rig
        self.demands = demands
        self.strokes = [settings(hammer) for hammer in rig.job.hammers]
        self._last = np.array([strokes.size - 1 for strokes in self.strokes])
        self._table = np.full((len(self.strokes), int(self._last.max()) + 1), np.nan)
        for row, strokes in enumerate(self.strokes):
            self._table[row, : strokes.size] = strokes

    def setting_numbers(self, hammer: Integers, strokes: Floats) -> Integers:
        """Return the setting numbers of strokes that are settings."""
        return np.array(
            [
                np.searchsorted(self.strokes[h], s - 1e-9)
                for h, s in zip(hammer, strokes, strict=True)
            ],
            np.int64,
        )

    def last_settings(self, hammer: Integers) -> Integers:
        """Return the numbers of the largest strokes."""
        return np.asarray(self._last[hammer])

    def sets(self, cells: Cells, at: Integers) -> tuple[Floats, Flags]:
        """Return the least set over the wear states at setting number `at`, and soundness."""
        least = np.full(at.size, np.inf)
        all_sound = np.ones(at.size, bool)
        for wear in range(len(self.rig.wears)):
            found, sound = self._sets_worn(cells, wear, at)
            least = np.minimum(least, found)
            all_sound &= sound
        return least, all_sound

    def stresses(self, cells: Cells, at: Integers) -> tuple[Floats, Floats, Flags]:
        """Return the largest stresses over wear states and stroke tolerance, and soundness."""
        stroke = self._table[cells.hammer, at]
        wears = len(self.rig.wears)
        kinds = [(wear, factor) for wear in range(wears) for factor in TESTED]
        tiled = [np.tile(column, len(kinds)) for column in cells]
        wear = np.repeat([wear for wear, _ in kinds], at.size)
        factor = np.repeat([factor for _, factor in kinds], at.size)
        answers = self.rig.answer(
            tiled[0], tiled[1], tiled[2], wear, np.tile(stroke, len(kinds)) * factor
        )
        shape = (len(kinds), at.size)
        return (
            answers.compression.reshape(shape).max(axis=0),
            answers.tension.reshape(shape).max(axis=0),
            np.asarray(answers.sound.reshape(shape).all(axis=0)),
        )

    def find(self, cells: Cells) -> Windows:
        """Return the lowest stroke of each cell's window, or why there is none."""
        count = cells.stage.size
        state = np.full(count, OPEN)
        state[self.rig.chains.ground_of[cells.stage, cells.hammer] < 0] = RUNS
        at = self._last[cells.hammer].copy()
        reached = np.zeros(count)
        alive = np.flatnonzero(state == OPEN)
        if alive.size:
            at[alive], reached[alive], state[alive] = self._reach_set(
                _take(cells, alive), at[alive]
            )
        compression = np.full(count, np.nan)
        tension = np.full(count, np.nan)
        alive = np.flatnonzero((state == OPEN) | (state == NO_SET))
        if alive.size:
            some = _take(cells, alive)
            compression[alive], tension[alive], sound = self.stresses(some, at[alive])
            judged = self.judge(
                some.stage, reached[alive], compression[alive], tension[alive], sound
            )
            # More stroke than the largest is not to be had: the set stops such a cell first.
            state[alive] = np.where(sound & (state[alive] == NO_SET), NO_SET, judged)
        closed = state == TENSION
        self._scan_above(cells, state, at, reached, compression, tension)
        low = self._table[cells.hammer, at]
        lifted = closed & (state == OPEN)
        return Windows(cells, state, low, reached, compression, tension, lifted)

    def judge(
        self, stage: Integers, set_: Floats, compression: Floats, tension: Floats, sound: Flags
    ) -> Integers:
        """Return the states of strokes, worst news first: of two broken limits the worse one."""
        use_compression = compression / self.demands.compression
        use_tension = tension / self.demands.tension
        state = np.full(stage.size, OPEN)
        state[set_ < self.demands.set_needed[stage]] = NO_SET
        state[use_tension > 1] = TENSION
        state[(use_compression > 1) & (use_compression >= use_tension)] = COMPRESSION
        state[~sound] = UNSOUND
        return state

    def _reach_set(self, cells: Cells, last: Integers) -> tuple[Integers, Floats, Integers]:
        """Return the least setting that reaches the set in every wear state, the set, the state.

        Wear state by wear state, each from where the one before got to: nearly always one of them
        decides, and the others take a single blow to confirm it.
        """
        at = np.zeros(last.size, np.int64)
        state = np.full(last.size, OPEN)
        for wear in range(len(self.rig.wears)):
            rows = np.flatnonzero(state == OPEN)
            if rows.size:
                at[rows], state[rows] = self._bracket(
                    _take(cells, rows), wear, at[rows], last[rows]
                )
        reached, sound = self.sets(cells, at)
        state[~sound] = UNSOUND
        return at, reached, state

    def _bracket(
        self, cells: Cells, wear: int, low: Integers, last: Integers
    ) -> tuple[Integers, Integers]:
        """Return the least setting from `low` to `last` that reaches the set in one wear state.

        The set grows with the stroke, nearly in a straight line, so the next guess is where the
        line through both ends of the bracket meets the needed set, kept inside the bracket; every
        third guess halves it.
        """
        needed = self.demands.set_needed[cells.stage]
        state = np.full(low.size, OPEN)
        low, high = low.copy(), last.copy()
        set_low, sound = self._sets_worn(cells, wear, low)
        state[~sound] = UNSOUND
        at_once = set_low >= needed
        high[at_once] = low[at_once]
        set_high = set_low.copy()
        rows = np.flatnonzero((state == OPEN) & ~at_once)
        if rows.size:
            set_high[rows], sound = self._sets_worn(_take(cells, rows), wear, high[rows])
            state[rows[set_high[rows] < needed[rows]]] = NO_SET
            state[rows[~sound]] = UNSOUND
        rounds = 0
        while (rows := np.flatnonzero((state == OPEN) & (high - low > 1))).size:
            rounds += 1
            span = high[rows] - low[rows]
            share = (needed[rows] - set_low[rows]) / (set_high[rows] - set_low[rows])
            if rounds % 3 == 0:
                share[:] = 0.5
            guess = low[rows] + np.clip(np.ceil(share * span).astype(np.int64), 1, span - 1)
            found, sound = self._sets_worn(_take(cells, rows), wear, guess)
            state[rows[~sound]] = UNSOUND
            enough = found >= needed[rows]
            high[rows[enough]], set_high[rows[enough]] = guess[enough], found[enough]
            low[rows[~enough]], set_low[rows[~enough]] = guess[~enough], found[~enough]
        return high, state

    def _sets_worn(self, cells: Cells, wear: int, at: Integers) -> tuple[Floats, Flags]:
        """Return the set in one wear state at setting number `at`, and soundness."""
        stroke = self._table[cells.hammer, at]
        answers = self.rig.answer(*cells, np.full(at.size, wear), stroke)
        return answers.set, answers.sound

    def scan_settings(self, hammer: int, first: int) -> Integers:
        """Return the settings above `first` whose tolerances leave no gap, up to the largest."""
        strokes = self.strokes[hammer]
        picked = []
        at = first
        while at < strokes.size - 1:
            farthest = np.searchsorted(strokes, strokes[at] * SCAN_RATIO, side="right") - 1
            at = max(at + 1, int(farthest))
            picked.append(at)
        return np.array(picked, np.int64)

    def _scan_above(
        self,
        cells: Cells,
        state: Integers,
        at: Integers,
        reached: Floats,
        compression: Floats,
        tension: Floats,
    ) -> None:
        """Look for a window above the least stroke where only tension breaks there.

        Compression grows with the stroke, so a cell that breaks it stays closed; tension may fall
        again. All arrays are modified in place where a window is found.
        """
        waiting = {
            int(i): list(self.scan_settings(int(cells.hammer[i]), int(at[i])))
            for i in np.flatnonzero(state == TENSION)
            if compression[i] <= self.demands.compression
        }
        while waiting := {i: ahead for i, ahead in waiting.items() if ahead}:
            rows = np.array(list(waiting))
            here = np.array([ahead.pop(0) for ahead in waiting.values()])
            some = _take(cells, rows)
            squeezed, pulled, sound = self.stresses(some, here)
            found, sound_too = self.sets(some, here)
            states = self.judge(some.stage, found, squeezed, pulled, sound & sound_too)
            for k, i in enumerate(rows):
                if states[k] == UNSOUND or squeezed[k] > self.demands.compression:
                    waiting.pop(int(i))
                elif states[k] == OPEN:
                    waiting.pop(int(i))
                    state[i], at[i], reached[i] = OPEN, here[k], found[k]
                    compression[i], tension[i] = squeezed[k], pulled[k]

    def tops(self, cells: Cells, lows: Floats) -> Floats:
        """Return the highest stroke of open windows, scanned upwards from their lowest.

        Parameters
        ----------
        cells : Cells
        lows : (cells,) float64 array
            Lowest strokes, as found by `find`. [m]

        Returns
        -------
        (cells,) float64 array
            [m]
        """
        tops = np.full(lows.size, np.nan)
        firsts = self.setting_numbers(cells.hammer, lows)
        best = {i: int(first) for i, first in enumerate(firsts)}
        waiting = {
            i: list(self.scan_settings(int(cells.hammer[i]), first)) for i, first in best.items()
        }
        closed: dict[int, int] = {}
        while waiting := {i: ahead for i, ahead in waiting.items() if ahead}:
            here = {i: ahead.pop(0) for i, ahead in waiting.items()}
            for i, fine in zip(here, self._fits(cells, here), strict=True):
                if fine:
                    best[i] = here[i]
                else:
                    closed[i] = here[i]
                    waiting.pop(i)
        while between := {i: (best[i] + closed[i]) // 2 for i in closed if closed[i] - best[i] > 1}:
            for i, fine in zip(between, self._fits(cells, between), strict=True):
                (best if fine else closed)[i] = between[i]
        for i, setting in best.items():
            tops[i] = self.strokes[int(cells.hammer[i])][setting]
        return tops

    def _fits(self, cells: Cells, settings_at: dict[int, int]) -> Sequence[bool]:
        """Return whether stresses hold at a setting of each cell."""
        rows = np.array(list(settings_at))
        at = np.array(list(settings_at.values()))
        squeezed, pulled, sound = self.stresses(_take(cells, rows), at)
        fine = sound & (squeezed <= self.demands.compression) & (pulled <= self.demands.tension)
        return [bool(value) for value in fine]


def _take(cells: Cells, rows: Integers) -> Cells:
    return Cells(cells.stage[rows], cells.hammer[rows], cells.cushion[rows])
