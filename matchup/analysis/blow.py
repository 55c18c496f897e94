"""Blows: from strikes (stage, hammer, cushion, stroke) to set, stresses and energies."""

from __future__ import annotations

import math
import os
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass
from functools import cache
from typing import NamedTuple

import numpy as np

from matchup.analysis.chain import Chains, head_rows
from matchup.wave.layout import COLUMNS, DIVERGED, ENDED, LANES, Blows, Flags, Floats, Integers
from matchup.wave.march import march
from matchup.wave.record import record

LONGEST_BLOW = 2.0
"""A blow that has not come to rest by then is an error. [s]"""
AUDIT_LIMIT = 0.02
"""Largest energy unaccounted for over that put in; beyond it a blow is an error. [-]"""
FILLS_PER_QUEUE = 8
"""A queue is at least so many times longer than there are lanes, where there are blows enough."""
_AT = {name: column for column, name in enumerate(COLUMNS)}


class Strikes(NamedTuple):
    """Blows to compute, as columns.

    Parameters
    ----------
    stage, hammer : (blows,) int64 array
        Rows of ``chains.stages`` and ``chains.hammers``; the pile must not run there.
    stiffness, restitution : (blows,) float64 array
        Pile cushion. [N/m], [-]
    stroke : (blows,) float64 array
        [m]
    hammer_stiffness, hammer_restitution : (blows,) float64 array or None
        Hammer cushion in place of the hammer's own; NaN keeps that. [N/m], [-]
    """

    stage: Integers
    hammer: Integers
    stiffness: Floats
    restitution: Floats
    stroke: Floats
    hammer_stiffness: Floats | None = None
    hammer_restitution: Floats | None = None


@dataclass(frozen=True, slots=True)
class Struck:
    """Results of a batch of blows, as columns of equal length.

    Parameters
    ----------
    set : (blows,) float64 array
        Set of the blow. [m]
    compression, tension : (blows,) float64 array
        Largest stresses in the pile, both positive. [Pa]
    transferred : (blows,) float64 array
        Largest work done on the pile head. [J]
    balance : (blows,) float64 array
        Energy unaccounted for over that put in by ram and gravity. [-]
    sound : (blows,) bool array
        Whether the blow ended, stayed finite and passed its energy audit.
    raw : (blows, columns) float64 array
        As in `matchup.wave.layout.COLUMNS`.
    envelope : (blows or 0, nodes, 2) float64 array
        Largest and smallest force at the nodes. [N]
    trace : (steps or 0, 4) float64 array
        Of the first blow; as in `matchup.wave.march.march`.
    """

    set: Floats
    compression: Floats
    tension: Floats
    transferred: Floats
    balance: Floats
    sound: Flags
    raw: Floats
    envelope: Floats
    trace: Floats

    def why_unsound(self, row: int) -> str:
        """Return what is wrong with blow `row`."""
        status = int(self.raw[row, _AT["status"]])
        if status == DIVERGED:
            return "the computation diverged"
        if status != ENDED:
            return f"the blow had not come to rest after {LONGEST_BLOW:g} s"
        return (
            f"the energy audit is off by {100 * self.balance[row]:.1f} % of the energy put in, "
            f"more than {100 * AUDIT_LIMIT:g} %"
        )


def strike(
    chains: Chains,
    strikes: Strikes,
    detail: bool = False,
    least_steps: int = 0,
    workers: int | None = None,
) -> Struck:
    """Compute a batch of blows.

    Parameters
    ----------
    detail : bool
        Keep the envelope of every blow, and the trace of the first.
    least_steps : int
        March on at least so many steps, for testing the ending rule.
    workers : int or None
        Threads; None takes as many as there are processors.

    Notes
    -----
    A blow's result depends neither on the batch it is in nor on the number of workers.
    """
    head, substeps = head_rows(chains, *strikes[1:])
    ground = np.ascontiguousarray(chains.ground_of[strikes.stage, strikes.hammer])
    blows = Blows(ground, substeps, head)
    lasting = None if detail else _stopping_times(chains, strikes)
    count = strikes.stroke.size
    longest = max(math.ceil(LONGEST_BLOW / chains.bar.step), 2 * least_steps)
    out = np.zeros((count, len(COLUMNS)))
    envelope = np.zeros((count if detail else 0, chains.depth.size, 2))
    trace = np.zeros((longest if detail else 0, 4))

    def run(queue: Integers) -> None:
        march(
            chains.bar,
            chains.grounds,
            blows,
            queue,
            (least_steps, longest),
            out,
            envelope,
            trace if queue[0] == 0 else trace[:0],
        )

    workers = workers or os.cpu_count() or 1
    queues = _queues(substeps, lasting, workers)
    if workers == 1 or len(queues) == 1:
        for queue in queues:
            run(queue)
    else:
        list(_pool(workers).map(run, queues))
    return _results(chains, strikes, out, envelope, trace)


def record_forces(chains: Chains, strikes: Strikes, steps: int) -> Floats:
    """Return the force along the pile against time in the first of some blows.

    Returns
    -------
    (steps, segments) float64 array
        In the segments at the end of each step, compression positive. [N]
    """
    head, substeps = head_rows(chains, *strikes[1:])
    ground = np.ascontiguousarray(chains.ground_of[strikes.stage, strikes.hammer])
    forces = np.zeros((steps, chains.depth.size - 1))
    record(chains.bar, chains.grounds, Blows(ground, substeps, head), 0, forces)
    return forces


def _stopping_times(chains: Chains, strikes: Strikes) -> Floats:
    """Return roughly how long blows last: the time in which resistance stops the ram's momentum."""
    hammers = chains.hammers
    momentum = np.array([h.ram_mass * h.impact_velocity(1.0) for h in hammers])[strikes.hammer]
    resistance = chains.resistances[strikes.stage]
    surplus = resistance - chains.weights[strikes.hammer]
    return np.asarray(momentum * np.sqrt(strikes.stroke) / np.maximum(surplus, 1.0))


def _queues(substeps: Integers, lasting: Floats | None, workers: int) -> list[Integers]:
    """Return queues of rows with equal sub-steps, several for each worker if there are many.

    Blows that last longest come first, so that lanes run empty at about the same time.
    """
    queues: list[Integers] = []
    for kind in np.unique(substeps):
        rows = np.flatnonzero(substeps == kind)
        if lasting is not None:
            rows = rows[np.argsort(-lasting[rows], kind="stable")]
        fills = math.ceil(rows.size / LANES)
        parts = 1 if workers == 1 else min(fills, max(workers, fills // FILLS_PER_QUEUE))
        queues.extend(rows[part::parts] for part in range(parts))
    return queues


@cache
def _pool(workers: int) -> ThreadPoolExecutor:
    """Return the threads, started once: starting them takes as long as a dozen blows."""
    return ThreadPoolExecutor(workers)


def _results(
    chains: Chains, strikes: Strikes, out: Floats, envelope: Floats, trace: Floats
) -> Struck:
    quakes = chains.set_quakes[strikes.stage]
    balance = out[:, _AT["balance"]]
    sound = (out[:, _AT["status"]] == ENDED) & (np.abs(balance) <= AUDIT_LIMIT)
    steps = int(out[0, _AT["steps"]]) if trace.size else 0
    return Struck(
        np.maximum(out[:, _AT["toe_most"]] - quakes, 0.0),
        out[:, _AT["peak_stress"]],
        out[:, _AT["tension_stress"]],
        out[:, _AT["passed_most"]],
        balance,
        sound,
        out,
        envelope,
        trace[:steps],
    )
