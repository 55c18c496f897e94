"""Windows: the strokes that reach the set and break no limit, for many cells at once.

A cell is one stage, hammer and stack of cushions. Strokes lie on the hammer's own settings; a
stroke that can be set freely is planned in whole centimetres from the least stroke, since nobody
sets it finer. Stresses must also hold at 2 % more and less stroke than planned.

The set grows with the stroke, so the least stroke that reaches it is found by bracketing, all cells
in step. Tension need not grow with the stroke: strokes are scanned, close enough that the 2 % on
either side leave no gap between them.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np

from matchup.analysis.cells import (
    COMPRESSION,
    NO_SET,
    OPEN,
    RUNS,
    TENSION,
    UNSOUND,
    Cells,
    Demands,
    Found,
    settings,
)
from matchup.analysis.rig import Answers, Rig
from matchup.wave.layout import Flags, Floats, Integers

STROKE_TOLERANCE = 0.02
"""Stresses must also hold at so much more and less stroke than planned. [-]"""
SCAN_RATIO = 1.04
"""Ratio of strokes in a scan: their tolerances touch."""
TESTED = (1.0, 1.0 - STROKE_TOLERANCE, 1.0 + STROKE_TOLERANCE)


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

    def stroke(self, hammer: Integers, at: Integers) -> Floats:
        """Return the strokes of setting numbers [m]."""
        return np.asarray(self._table[hammer, at])

    def last_settings(self, hammer: Integers) -> Integers:
        """Return the numbers of the largest strokes."""
        return np.asarray(self._last[hammer])

    def nearest_settings(self, hammer: Integers, stroke: Floats) -> Integers:
        """Return the numbers of the settings nearest to strokes [m]."""
        away = np.abs(self._table[hammer] - stroke[:, None])
        return np.asarray(np.nanargmin(away, axis=1))

    # --- what a stroke does ---------------------------------------------------------------------

    def sets(self, cells: Cells, at: Integers) -> tuple[Floats, Floats, Flags]:
        """Return the least set and transferred energy over the wear states, and soundness."""
        least, transferred = np.full((2, at.size), np.inf)
        sound = np.ones(at.size, bool)
        for wear in range(len(self.rig.wears)):
            if (rows := cells.worn(wear)).size:
                worn = self._strike_worn(cells.take(rows), wear, at[rows])
                least[rows] = np.minimum(least[rows], worn.set)
                transferred[rows] = np.minimum(transferred[rows], worn.transferred)
                sound[rows] &= worn.sound
        return least, transferred, sound

    def stresses(
        self, cells: Cells, at: Integers, tested: Sequence[float] = TESTED
    ) -> tuple[Floats, Floats, Flags]:
        """Return the largest stresses over wear states and stroke tolerance, and soundness."""
        stroke = self.stroke(cells.hammer, at)
        # One row for each wear state that counts in a cell, and of these for each tested stroke.
        counted = [cells.worn(wear) for wear in range(len(self.rig.wears))]
        row = np.tile(np.concatenate(counted), len(tested))
        wear = np.tile(np.repeat(np.arange(len(counted)), list(map(len, counted))), len(tested))
        factor = np.repeat(tested, row.size // len(tested))
        some = cells.take(row)
        answers = self.rig.answer(some.stage, some.hammer, some.cushion, wear, stroke[row] * factor)
        compression, tension = np.zeros(at.size), np.zeros(at.size)
        sound = np.ones(at.size, bool)
        np.maximum.at(compression, row, answers.compression)
        np.maximum.at(tension, row, answers.tension)
        np.logical_and.at(sound, row, answers.sound)
        return compression, tension, sound

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

    def strike(self, cells: Cells, at: Integers, tested: Sequence[float] = TESTED) -> Found:
        """Return what setting number `at` does in each cell; the pile must not run there."""
        compression, tension, sound = self.stresses(cells, at, tested)
        set_, transferred, sound_too = self.sets(cells, at)
        state = self.judge(cells.stage, set_, compression, tension, sound & sound_too)
        return Found(
            cells=cells,
            state=state,
            at=at.copy(),
            stroke=self.stroke(cells.hammer, at),
            set=set_,
            compression=compression,
            tension=tension,
            transferred=transferred,
            lifted=np.zeros(at.size, bool),
        )

    def glance(self, cells: Cells, at: Integers) -> Found:
        """Return the same, with the tolerance only where the stroke itself works."""
        found = self.strike(cells, at, TESTED[:1])
        rows = np.flatnonzero(found.state == OPEN)
        if rows.size:
            found.put(rows, self.strike(cells.take(rows), at[rows]))
        return found

    def _strike_worn(self, cells: Cells, wear: int, at: Integers) -> Answers:
        """Return what setting number `at` does in one wear state."""
        stroke = self.stroke(cells.hammer, at)
        same = np.full(at.size, wear)
        return self.rig.answer(cells.stage, cells.hammer, cells.cushion, same, stroke)

    # --- the least stroke that works ------------------------------------------------------------

    def find(self, cells: Cells) -> Found:
        """Return the lowest stroke of each cell's window, or why there is none."""
        found = self._nothing(cells)
        alive = np.flatnonzero(found.state == OPEN)
        if not alive.size:
            return found
        some = cells.take(alive)
        at, state = self._reach_set(some)
        found.at[alive], found.state[alive] = at, state
        found.stroke[alive] = self.stroke(some.hammer, at)
        found.set[alive], _, _ = self.sets(some, at)
        judged = alive[state != UNSOUND]
        if judged.size:
            struck = self.strike(cells.take(judged), found.at[judged])
            # More stroke than the largest is not to be had: the set stops such a cell first.
            short = (found.state[judged] == NO_SET) & (struck.state != UNSOUND)
            struck.state[short] = NO_SET
            found.put(judged, struck)
        self._look_above(found)
        return found

    def _nothing(self, cells: Cells) -> Found:
        """Return what is known before a blow: where the pile runs; the largest strokes."""
        count = cells.stage.size
        runs = self.rig.chains.ground_of[cells.stage, cells.hammer] < 0
        at = self.last_settings(cells.hammer).copy()
        return Found(
            cells=cells,
            state=np.where(runs, RUNS, OPEN),
            at=at,
            stroke=self.stroke(cells.hammer, at),
            set=np.zeros(count),
            compression=np.full(count, np.nan),
            tension=np.full(count, np.nan),
            transferred=np.full(count, np.nan),
            lifted=np.zeros(count, bool),
        )

    def _reach_set(self, cells: Cells) -> tuple[Integers, Integers]:
        """Return the least setting that reaches the set in every wear state, and the state.

        Wear state by wear state, each from where the one before got to: nearly always one of them
        decides, and the others take a single blow to confirm it.
        """
        at = np.zeros(cells.stage.size, np.int64)
        state = np.full(at.size, OPEN)
        last = self.last_settings(cells.hammer)
        for wear in range(len(self.rig.wears)):
            rows = np.intersect1d(np.flatnonzero(state == OPEN), cells.worn(wear))
            if rows.size:
                at[rows], state[rows] = self._bracket(cells.take(rows), wear, at[rows], last[rows])
        _, _, sound = self.sets(cells, at)
        state[~sound] = UNSOUND
        return at, state

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
        first = self._strike_worn(cells, wear, low)
        set_low = first.set.copy()
        state[~first.sound] = UNSOUND
        at_once = set_low >= needed
        high[at_once] = low[at_once]
        set_high = set_low.copy()
        rows = np.flatnonzero((state == OPEN) & ~at_once)
        if rows.size:
            full = self._strike_worn(cells.take(rows), wear, high[rows])
            set_high[rows] = full.set
            state[rows[full.set < needed[rows]]] = NO_SET
            state[rows[~full.sound]] = UNSOUND
        rounds = 0
        while (rows := np.flatnonzero((state == OPEN) & (high - low > 1))).size:
            rounds += 1
            span = high[rows] - low[rows]
            share = (needed[rows] - set_low[rows]) / (set_high[rows] - set_low[rows])
            if rounds % 3 == 0:
                share[:] = 0.5
            guess = low[rows] + np.clip(np.ceil(share * span).astype(np.int64), 1, span - 1)
            tried = self._strike_worn(cells.take(rows), wear, guess)
            state[rows[~tried.sound]] = UNSOUND
            enough = tried.set >= needed[rows]
            high[rows[enough]], set_high[rows[enough]] = guess[enough], tried.set[enough]
            low[rows[~enough]], set_low[rows[~enough]] = guess[~enough], tried.set[~enough]
        return high, state

    def _look_above(self, found: Found) -> None:
        """Look for a window above the least stroke where only tension breaks there.

        Compression grows with the stroke, so a cell that breaks it stays closed; tension may fall
        again. `found` is modified in place where a window opens.
        """
        squeezed = found.compression > self.demands.compression
        rows = np.flatnonzero((found.state == TENSION) & ~squeezed)
        if not rows.size:
            return

        def settles(tried: Found) -> Flags:
            hopeless = tried.compression > self.demands.compression
            return np.asarray((tried.state == OPEN) | (tried.state == UNSOUND) | hopeless)

        above, _, settled = self._scan(found.cells.take(rows), found.at[rows], True, settles)
        opened = np.flatnonzero(settled & (above.state == OPEN))
        above.lifted[opened] = True
        found.put(rows[opened], above, opened)

    # --- other strokes that work ----------------------------------------------------------------

    def play(self, cells: Cells, at: Integers, briefly: bool = False) -> Found:
        """Return what given settings do, whatever comes of it; nothing where the pile runs.

        With `briefly`, stresses are only those of the stroke itself where it does not work.
        """
        found = self._nothing(cells)
        alive = np.flatnonzero(found.state == OPEN)
        if alive.size:
            look = self.glance if briefly else self.strike
            found.put(alive, look(cells.take(alive), at[alive]))
        return found

    def nearest(self, cells: Cells, wanted: Integers) -> Found:
        """Return the stroke nearest to a wanted setting that works: it, a lower, or a higher one.

        Where stresses break at the wanted setting, lower ones are scanned while they reach the
        set; after that, and where the set falls short, the window's lowest stroke is taken.
        """
        found = self.play(cells, wanted, briefly=True)
        rows = np.flatnonzero((found.state == TENSION) | (found.state == COMPRESSION))
        if rows.size:

            def settles(tried: Found) -> Flags:
                short = tried.set < self.demands.set_needed[tried.cells.stage]
                return np.asarray((tried.state == OPEN) | (tried.state == UNSOUND) | short)

            below, _, settled = self._scan(cells.take(rows), found.at[rows], False, settles)
            opened = np.flatnonzero(settled & (below.state == OPEN))
            found.put(rows[opened], below, opened)
        rows = np.flatnonzero((found.state != OPEN) & (found.state != RUNS))
        if rows.size:
            found.put(rows, self.find(cells.take(rows)))
        return found

    def ends(self, cells: Cells, at: Integers) -> tuple[Integers, Integers]:
        """Return the lowest and the highest of the connected settings around `at` that work."""
        return self._end(cells, at, False), self._end(cells, at, True)

    def tops(self, cells: Cells, at: Integers) -> Integers:
        """Return the highest of the connected settings from `at` on that work."""
        return self._end(cells, at, True)

    def _end(self, cells: Cells, at: Integers, up: bool) -> Integers:
        """Return the last setting that works on a scan from `at`, by bisection at its end."""
        beyond, within, met = self._scan(cells, at, up, lambda tried: tried.state != OPEN)
        closed = beyond.at
        # A scan that met no closed setting ended at the last one, which works.
        within[~met] = closed[~met]
        while (rows := np.flatnonzero(np.abs(closed - within) > 1)).size:
            middle = (within[rows] + closed[rows]) // 2
            works = self.strike(cells.take(rows), middle).state == OPEN
            within[rows[works]] = middle[works]
            closed[rows[~works]] = middle[~works]
        return within

    def _scan(
        self, cells: Cells, start: Integers, up: bool, settles: Callable[[Found], Flags]
    ) -> tuple[Found, Integers, Flags]:
        """Scan settings away from `start`, which is not looked at again, until one settles.

        Returns
        -------
        found : Found
            The setting that settled, or else the last one looked at, `start` where none was.
        before : (cells,) int64 array
            The setting looked at before that one.
        settled : (cells,) bool array
        """
        found = self._nothing(cells)
        found.at[:] = start
        before = start.copy()
        ladders = [
            self.rungs(int(hammer), int(at), up)
            for hammer, at in zip(cells.hammer, start, strict=True)
        ]
        lengths = np.array([ladder.size for ladder in ladders])
        settled = np.zeros(start.size, bool)
        rung = 0
        while (rows := np.flatnonzero(~settled & (lengths > rung))).size:
            here = np.array([ladders[row][rung] for row in rows])
            tried = self.glance(cells.take(rows), here)
            before[rows] = found.at[rows]
            found.put(rows, tried)
            settled[rows] = settles(tried)
            rung += 1
        return found, before, settled

    def rungs(self, hammer: int, first: int, up: bool) -> Integers:
        """Return the settings away from `first` whose tolerances leave no gap, to the last one."""
        strokes = self.strokes[hammer]
        picked = []
        at = first
        while at < strokes.size - 1 if up else at > 0:
            if up:
                farthest = np.searchsorted(strokes, strokes[at] * SCAN_RATIO, side="right") - 1
                at = max(at + 1, int(farthest))
            else:
                farthest = np.searchsorted(strokes, strokes[at] / SCAN_RATIO, side="left")
                at = min(at - 1, int(farthest))
            picked.append(at)
        return np.array(picked, np.int64)
