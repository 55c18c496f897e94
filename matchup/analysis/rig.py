"""A rig: all that a job can strike with, and every blow that it has struck so far."""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from matchup.analysis.blow import Strikes
from matchup.analysis.chain import build_chains, enough_segments, pile_contact
from matchup.analysis.sampling import Scales
from matchup.analysis.stress import strike_stressed
from matchup.model.cushion import WEAR_STATES, Cushion, Spring, Stack
from matchup.model.job import Job
from matchup.wave.layout import Flags, Floats, Integers

Tell = Callable[[int], None]
"""Takes the number of blows about to be computed, for showing progress."""


class Answers(NamedTuple):
    """What a search needs to know of blows, as columns of equal length.

    Parameters
    ----------
    set, compression, tension : (blows,) float64 array
        [m], and largest stresses, both positive and, where the pile's parts have limits of their
        own, on the scale of the lowest part [Pa].
    transferred : (blows,) float64 array
        Largest work done on the pile head. [J]
    sound : (blows,) bool array
    """

    set: Floats
    compression: Floats
    tension: Floats
    transferred: Floats
    sound: Flags


class Rig:
    """Strikes the pile of a job, many blows at once, and computes none twice.

    Everything is named by its place: in the job's stages and hammers, and in `stacks`.

    Parameters
    ----------
    job : Job
    workers : int or None
        Threads; None takes as many as there are processors.
    tell : callable or None
        Called with the number of blows of every batch, before it is computed.
    scales : Scales or None
        Factors by stage on what is not of the ground; None for none.

    Attributes
    ----------
    stacks : tuple of Stack
        Every combination of cushions that the job allows: kind by kind, thin to thick.
    kinds, sizes : int
        Materials (of both cushions), and thicknesses of each; their product counts the stacks.
    wears : tuple of str
        Wear states that every plan must stand.
    spent : int
        Blows computed so far.
    spent_on : (hammers,) int64 array
        The same by hammer.
    """

    def __init__(
        self,
        job: Job,
        workers: int | None = None,
        tell: Tell | None = None,
        scales: Scales | None = None,
    ):
        self.job = job
        self.workers = workers
        self.tell = tell
        space = job.cushions
        piles: list[Cushion | None] = list(space.cushions()) if space else [None]
        self.stacks = tuple(Stack(p, h) for h in (job.hammer_cushions or (None,)) for p in piles)
        self.sizes = len(space.sheets or space.thicknesses) if space else 1
        self.kinds = len(self.stacks) // self.sizes
        self.wears = space.wears if space else WEAR_STATES[:1]
        self.segments = enough_segments(job.pile, space is not None, job.stages)
        self.chains = build_chains(job.pile, job.stages, job.hammers, job.analysis, self.segments)
        springs = [self.spring(stack.pile, wear) for stack in self.stacks for wear in self.wears]
        shape = (len(self.stacks), len(self.wears))
        self._stiffness = np.array([s.stiffness for s in springs]).reshape(shape)
        self._restitution = np.array([s.restitution for s in springs]).reshape(shape)
        others = [stack.hammer.spring if stack.hammer else None for stack in self.stacks]
        self._hammer_springs = np.array(
            [(s.stiffness, s.restitution) if s else (np.nan, np.nan) for s in others]
        )
        self._scales = scales or Scales(*np.ones((2, len(job.stages))))
        self._efficiencies = np.array([hammer.efficiency for hammer in job.hammers])
        self._known: dict[bytes, int] = {}
        self._answers = np.empty((0, 5))
        self._why: dict[tuple[int, int, int], str] = {}
        self.spent = 0
        self.spent_on = np.zeros(len(job.hammers), np.int64)

    def spring(self, cushion: Cushion | None, wear: str) -> Spring:
        """Return the spring between helmet and pile."""
        return cushion.spring(wear) if cushion else pile_contact(self.job.pile)

    def runs(self, stage: int, hammer: int) -> bool:
        """Return whether the pile's weight, with what stands on it, exceeds the resistance."""
        return bool(self.chains.ground_of[stage, hammer] < 0)

    def answer(
        self, stage: Integers, hammer: Integers, cushion: Integers, wear: Integers, stroke: Floats
    ) -> Answers:
        """Return the answers of blows, computing those not yet known in one batch.

        Parameters
        ----------
        stage, hammer, cushion, wear : (blows,) int64 array
            Places in ``job.stages``, ``job.hammers``, `stacks` and `wears`.
        stroke : (blows,) float64 array
            [m]
        """
        return self._pick(self._rows(stage, hammer, cushion, wear, stroke))

    def why_unsound(self, stage: int, hammer: int, cushion: int) -> str:
        """Return what was wrong with a blow of this cell; empty if nothing was."""
        return self._why.get((stage, hammer, cushion), "")

    def _rows(
        self, stage: Integers, hammer: Integers, cushion: Integers, wear: Integers, stroke: Floats
    ) -> Integers:
        keys = np.empty((stroke.size, 5))
        for column, values in enumerate((stage, hammer, cushion, wear, stroke)):
            keys[:, column] = values
        text = keys.tobytes()
        width = keys.itemsize * 5
        rows = np.empty(stroke.size, np.int64)
        fresh: list[int] = []
        for i in range(stroke.size):
            key = text[i * width : (i + 1) * width]
            row = self._known.get(key)
            if row is None:
                row = len(self._known)
                self._known[key] = row
                fresh.append(i)
            rows[i] = row
        if fresh:
            at = np.array(fresh)
            self._compute(stage[at], hammer[at], cushion[at], wear[at], stroke[at])
        return rows

    def _compute(
        self, stage: Integers, hammer: Integers, cushion: Integers, wear: Integers, stroke: Floats
    ) -> None:
        if self.tell:
            self.tell(stroke.size)
        struck, stressed = strike_stressed(
            self.chains,
            Strikes(
                stage,
                hammer,
                self._stiffness[cushion, wear] * self._scales.cushion[stage],
                self._restitution[cushion, wear],
                stroke * self._efficiency_scale(stage, hammer),
                *self._hammer_springs[cushion].T,
            ),
            self.job.limits,
            self.workers,
        )
        for i in np.flatnonzero(~struck.sound):
            place = (int(stage[i]), int(hammer[i]), int(cushion[i]))
            self._why[place] = f"at a stroke of {stroke[i]:.3g} m {struck.why_unsound(int(i))}"
        fresh = np.column_stack(
            (struck.set, stressed.compression, stressed.tension, struck.transferred, struck.sound)
        )
        if self.spent + stroke.size > len(self._answers):
            room = np.empty((2 * (self.spent + stroke.size), 5))
            room[: self.spent] = self._answers[: self.spent]
            self._answers = room
        self._answers[self.spent : self.spent + stroke.size] = fresh
        self.spent += stroke.size
        self.spent_on += np.bincount(hammer, minlength=self.spent_on.size)

    def _efficiency_scale(self, stage: Integers, hammer: Integers) -> Floats:
        """Return factors on efficiency, which act on the impact like factors on the stroke."""
        return np.minimum(self._scales.efficiency[stage], 1 / self._efficiencies[hammer])

    def _pick(self, rows: Integers) -> Answers:
        picked = self._answers[rows]
        return Answers(picked[:, 0], picked[:, 1], picked[:, 2], picked[:, 3], picked[:, 4] > 0)
