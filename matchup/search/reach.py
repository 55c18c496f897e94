"""Reach: how much more resistance a choice survives."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from matchup.analysis.cells import OPEN, Cells, job_demands
from matchup.analysis.rig import Rig, Tell
from matchup.analysis.window import WindowFinder
from matchup.model.job import Job
from matchup.model.stage import Stage
from matchup.search.option import DRIVES, NOT_ANALYSED, PILE_RUNS, Option
from matchup.search.steps import first_step
from matchup.wave.layout import Flags, Integers

LOWEST, HIGHEST = 0.2, 4.0
"""Multiples of the stage's resistance between which the reach is looked for. [-]"""
STEPS = 70
"""From 1 to `HIGHEST`, each by the same ratio: 2 %."""
FINENESS = HIGHEST ** (1 / STEPS)
STRIDE = 2
"""Resistances are looked at so many steps apart, and step by step where a window closes."""


def scaled(stage: Stage, ratio: float) -> Stage:
    """Return a stage with the same distribution of `ratio` times the resistance."""
    return replace(
        stage, name=f"{stage.name} x {ratio:.4f}", shaft=ratio * stage.shaft, toe=ratio * stage.toe
    )


def find_reach(
    job: Job, options: Sequence[Option], workers: int | None = None, tell: Tell | None = None
) -> tuple[list[Option], int]:
    """Give each option the multiple of the target's resistance up to which it works.

    The target stage's resistance, shaft and toe alike, is scaled in steps, for all hammers at once,
    each with its own cushions. Where the target stage works, steps are taken upwards until its
    window closes for the first time: it may open again further up, where tension is less, but an
    answer that hangs on more resistance than expected is none. Where it fails, steps are taken
    downwards until a window opens.

    Returns
    -------
    options : list of Option
    spent : int
        Blows computed.
    """
    whole = [o for o in options if o.verdict not in (NOT_ANALYSED, PILE_RUNS)]
    if not whole:
        return list(options), 0
    below = math.floor(math.log(1 / LOWEST) / math.log(FINENESS))
    ratios = HIGHEST ** (np.arange(-below, STEPS + 1) / STEPS)
    targets = list({option.target.stage.name: option.target.stage for option in whole}.values())
    stages = tuple(scaled(stage, float(ratio)) for stage in targets for ratio in ratios)
    hammers = tuple(option.hammer for option in whole)
    rig = Rig(replace(job, stages=stages, hammers=hammers, drive=None), workers, tell)
    finder = WindowFinder(rig, job_demands(rig))
    # Place of each option's target, at once its resistance, among the scaled ones.
    at_one = np.array([targets.index(o.target.stage) * ratios.size + below for o in whole])
    stack = np.array([rig.stacks.index(option.stack) for option in whole])
    works = np.array([option.target.verdict == DRIVES for option in whole])
    upward, downward = np.flatnonzero(works), np.flatnonzero(~works)

    def is_open(rows: Integers, at: Integers) -> Flags:
        return np.asarray(finder.find(Cells(at_one[rows] + at, rows, stack[rows])).state == OPEN)

    closes = first_step(lambda r, n: ~is_open(upward[r], n), upward.size, STEPS, STRIDE)
    opens = first_step(lambda r, n: is_open(downward[r], -n), downward.size, below, STRIDE)
    found: dict[str, tuple[float | None, bool]] = {}
    for row, step in zip(upward, closes - 1, strict=True):
        found[whole[row].hammer.name] = (float(ratios[below + step]), bool(step == STEPS))
    for row, step in zip(downward, opens, strict=True):
        reach = float(ratios[below - step]) if step <= below else None
        found[whole[row].hammer.name] = (reach, False)
    return [_with_reach(option, found.get(option.hammer.name)) for option in options], rig.spent


def _with_reach(option: Option, found: tuple[float | None, bool] | None) -> Option:
    if found is None:
        return option
    return replace(option, reach=found[0], reach_is_open=found[1])
