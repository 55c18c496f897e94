"""Cures: what would let a failing hammer drive the pile, found by the solver and not guessed."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from matchup.analysis.rig import Rig, Tell
from matchup.analysis.window import OPEN, Cells, WindowFinder, job_demands
from matchup.model.cushion import CushionSpace
from matchup.model.job import Job
from matchup.search.option import (
    DRIVES,
    NOT_REACHED,
    OVER_COMPRESSION,
    OVER_TENSION,
    REFUSES,
    Cure,
    Option,
)
from matchup.search.plan import Planner
from matchup.wave.layout import Flags, Floats

BEYOND = 2
"""Cushions are looked at up to so many times the thickest allowed one."""
HEAVIER = 8.0
MASS_FINENESS = 1.05
"""Rams are looked at up to so many times as heavy, in steps of this ratio."""


def find_cures(
    job: Job, options: Sequence[Option], workers: int | None = None, tell: Tell | None = None
) -> tuple[list[Option], int]:
    """Give each failing option its cure.

    Returns
    -------
    options : list of Option
    spent : int
        Blows computed.
    """
    stressed = [o for o in options if o.verdict in (OVER_COMPRESSION, OVER_TENSION)]
    weak = [o for o in options if o.verdict in (NOT_REACHED, REFUSES)]
    cures: dict[str, Cure] = {}
    spent = 0
    for find, failing in ((_thicker, stressed), (_heavier, weak)):
        if failing:
            found, blows = find(job, failing, workers, tell)
            cures |= found
            spent += blows
    return [replace(o, cure=cures.get(o.hammer.name)) for o in options], spent


def _thicker(
    job: Job, failing: Sequence[Option], workers: int | None, tell: Tell | None
) -> tuple[dict[str, Cure], int]:
    """Look for thicker cushions than allowed, and for the set that the limits leave room for."""
    space = job.cushions
    hammers = tuple(option.hammer for option in failing)
    cures = {}
    spent = 0
    better: dict[str, Cure] = {}
    if space is not None:
        planner = Planner(
            Rig(replace(job, hammers=hammers, cushions=_beyond(space)), workers, tell)
        )
        places = range(len(planner.rig.stacks))
        planner.look([(row, c) for row in range(len(failing)) for c in places])
        for row, option in enumerate(failing):
            works = [
                planner.rig.stacks[c]
                for c in places
                if all(p.verdict == DRIVES for p in planner.stage_plans(row, c))
            ]
            stack = min(works, key=lambda s: s.pile.thickness if s.pile else 0.0, default=None)
            better[option.hammer.name] = Cure(stack=stack, stack_looked=True)
        spent += planner.rig.spent
    rig = Rig(replace(job, hammers=hammers), workers, tell)
    finder = WindowFinder(rig, job_demands(rig))
    for row, option in enumerate(failing):
        cure = better.get(option.hammer.name, Cure())
        cures[option.hammer.name] = replace(cure, set_within=_set_within(finder, row, option))
    return cures, spent + rig.spent


def _beyond(space: CushionSpace) -> CushionSpace:
    """Return the cushions thicker than the thickest allowed one."""
    if space.sheets:
        most = space.sheets[-1]
        return replace(space, sheets=tuple(range(most + 1, BEYOND * most + 1)))
    most_thick = space.thicknesses[-1]
    steps = most_thick * np.linspace(1, BEYOND, 21)[1:]
    return replace(space, thicknesses=tuple(float(t) for t in steps))


def _set_within(finder: WindowFinder, row: int, option: Option) -> float | None:
    """Return the set at the largest stroke below which no limit breaks, at the failing stage."""
    assert option.failing is not None
    stage = finder.rig.job.stages.index(option.failing.stage)
    stack = finder.rig.stacks.index(option.stack)
    cell = Cells(np.array([stage]), np.array([row]), np.array([stack]))
    compression, tension, sound = finder.stresses(cell, np.array([0]))
    demands = finder.demands
    if not sound[0] or compression[0] > demands.compression or tension[0] > demands.tension:
        return None
    top = finder.tops(cell, finder.strokes[row][:1])
    least, _ = finder.sets(cell, finder.setting_numbers(cell.hammer, top))
    return float(least[0])


def _heavier(
    job: Job, failing: Sequence[Option], workers: int | None, tell: Tell | None
) -> tuple[dict[str, Cure], int]:
    """Look for the least ram mass that reaches the set at the same largest stroke and cushions."""
    count = int(np.ceil(np.log(HEAVIER) / np.log(MASS_FINENESS)))
    factors = MASS_FINENESS ** np.arange(count + 1)
    low = np.zeros(len(failing), int)
    high = np.full(len(failing), count + 1)
    spent = 0
    while (rows := np.flatnonzero(high - low > 1)).size:
        middle = (low[rows] + high[rows]) // 2
        finder, cells = _with_rams(
            job, [failing[int(r)] for r in rows], factors[middle], workers, tell
        )
        enough = _reaches(finder, cells)
        spent += finder.rig.spent
        high[rows[enough]] = middle[enough]
        low[rows[~enough]] = middle[~enough]
    cures = {option.hammer.name: Cure() for option in failing}
    found = np.flatnonzero(high <= count)
    if found.size:
        some = [failing[int(r)] for r in found]
        finder, cells = _with_rams(job, some, factors[high[found]], workers, tell)
        fits = finder.find(cells).state == OPEN
        spent += finder.rig.spent
        for row, within in zip(found, fits, strict=True):
            hammer = failing[int(row)].hammer
            mass = hammer.ram_mass * float(factors[high[row]])
            cures[hammer.name] = Cure(ram_mass=mass, ram_within=bool(within))
    return cures, spent


def _with_rams(
    job: Job,
    options: Sequence[Option],
    factors: Floats,
    workers: int | None,
    tell: Tell | None,
) -> tuple[WindowFinder, Cells]:
    """Return a finder for the options' hammers with heavier rams, and their failing cells."""
    hammers = []
    for option, factor in zip(options, factors, strict=True):
        hammer = option.hammer
        mass = hammer.ram_mass * float(factor)
        whole = hammer.hammer_mass + mass - hammer.ram_mass if hammer.hammer_mass else None
        hammers.append(replace(hammer, ram_mass=mass, hammer_mass=whole))
    rig = Rig(replace(job, hammers=tuple(hammers)), workers, tell)
    finder = WindowFinder(rig, job_demands(rig))
    stages = [job.stages.index(o.failing.stage) for o in options if o.failing is not None]
    stacks = [rig.stacks.index(option.stack) for option in options]
    return finder, Cells(np.array(stages), np.arange(len(options)), np.array(stacks))


def _reaches(finder: WindowFinder, cells: Cells) -> Flags:
    """Return whether the largest stroke reaches the needed set."""
    runs = finder.rig.chains.ground_of[cells.stage, cells.hammer] < 0
    enough = np.zeros(runs.size, bool)
    rows = np.flatnonzero(~runs)
    if rows.size:
        some = Cells(*(column[rows] for column in cells))
        least, sound = finder.sets(some, finder.last_settings(some.hammer))
        enough[rows] = sound & (least >= finder.demands.set_needed[some.stage])
    return enough
