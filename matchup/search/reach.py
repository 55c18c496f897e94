"""Reach: how much more resistance a choice survives."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from matchup.analysis.rig import Rig, Tell
from matchup.analysis.window import OPEN, Cells, WindowFinder, job_demands
from matchup.model.job import Job
from matchup.model.stage import Stage
from matchup.search.option import DRIVES, NOT_ANALYSED, PILE_RUNS, Option
from matchup.wave.layout import Flags, Integers

FINENESS = 1.02
"""Resistances looked at lie so far apart, as a ratio. [-]"""
LOWEST, HIGHEST = 0.2, 4.0
"""Ratios to the stage's resistance between which the reach is looked for. [-]"""
STRIDE = 4
"""Where the target stage fails, lower resistances are tried first so many steps apart."""


def scaled(stage: Stage, ratio: float) -> Stage:
    """Return a stage with the same distribution of `ratio` times the resistance."""
    return replace(
        stage, name=f"{stage.name} x {ratio:.4f}", shaft=ratio * stage.shaft, toe=ratio * stage.toe
    )


def find_reach(
    job: Job, options: Sequence[Option], workers: int | None = None, tell: Tell | None = None
) -> tuple[list[Option], int]:
    """Give each option the largest resistance that it overcomes within the limits.

    The target stage's resistance, shaft and toe alike, is scaled in steps of 2 %, for all hammers
    at once, each with its own cushions. Where the target stage works, the step at which its window
    closes is found by bisection upwards. Where it fails, less resistance need not open it at once
    (in easy driving tension grows, and a pile may run), so strides are taken down to the first
    that opens it, and the step is found within the last stride.

    Returns
    -------
    options : list of Option
    spent : int
        Blows computed.
    """
    whole = [o for o in options if o.verdict not in (NOT_ANALYSED, PILE_RUNS)]
    if not whole:
        return list(options), 0
    below = int(np.floor(np.log(LOWEST) / np.log(FINENESS)))
    above = int(np.ceil(np.log(HIGHEST) / np.log(FINENESS)))
    ratios = FINENESS ** np.arange(below, above + 1)
    stages = tuple(scaled(job.stages[-1], float(ratio)) for ratio in ratios)
    hammers = tuple(option.hammer for option in whole)
    rig = Rig(replace(job, stages=stages, hammers=hammers), workers, tell)
    finder = WindowFinder(rig, job_demands(rig))
    stack = np.array([rig.stacks.index(option.stack) for option in whole])

    def is_open(at: Integers, rows: Integers) -> Flags:
        return np.asarray(finder.find(Cells(at, rows, stack[rows])).state == OPEN)

    # Resistance number -1 stands for less than the lowest; the one past the end for more.
    low = np.full(len(whole), -below)
    high = np.full(len(whole), ratios.size)
    failing = np.array([option.target.verdict != DRIVES for option in whole])
    high[failing] = low[failing]
    while (rows := np.flatnonzero(failing)).size:
        low[rows] = np.maximum(high[rows] - STRIDE, -1)
        some = rows[low[rows] >= 0]
        opened = np.ones(len(whole), bool)
        opened[some] = is_open(low[some], some) if some.size else False
        failing &= ~opened
        high[failing] = low[failing]
    while (rows := np.flatnonzero(high - low > 1)).size:
        middle = (low[rows] + high[rows]) // 2
        fits = is_open(middle, rows)
        low[rows[fits]] = middle[fits]
        high[rows[~fits]] = middle[~fits]
    found = {
        option.hammer.name: (float(ratios[at]) if at >= 0 else None, bool(at == ratios.size - 1))
        for option, at in zip(whole, low, strict=True)
    }
    return [_with_reach(option, found.get(option.hammer.name)) for option in options], rig.spent


def _with_reach(option: Option, found: tuple[float | None, bool] | None) -> Option:
    if found is None:
        return option
    return replace(option, reach=found[0], reach_is_open=found[1])
