"""Cures: what would let a failing hammer drive the pile, found by the solver and not guessed."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from matchup.analysis.cells import NO_SET, OPEN, RUNS, UNSOUND, Cells, job_demands
from matchup.analysis.rig import Rig
from matchup.analysis.window import WindowFinder
from matchup.model.cushion import CushionSpace
from matchup.model.hammer import Hammer
from matchup.search.option import (
    NOT_REACHED,
    OVER_COMPRESSION,
    OVER_TENSION,
    REFUSES,
    Cure,
    Option,
)
from matchup.search.plan import Planner
from matchup.search.steps import first_step
from matchup.wave.layout import Flags, Integers

BEYOND = 2
"""Cushions are looked at up to so many times the thickest allowed one."""
HEAVIER = 8.0
MASS_FINENESS = 1.05
"""Rams are looked at up to so many times as heavy, in steps of this ratio."""
MASS_STRIDE = 4
"""So many steps apart first."""


def find_cures(planner: Planner, options: Sequence[Option]) -> tuple[list[Option], int]:
    """Give each failing option its cure.

    Parameters
    ----------
    planner : Planner
        That the options come from.
    options : sequence of Option

    Returns
    -------
    options : list of Option
    spent : int
        Blows computed beyond the planner's own.
    """
    stressed = [o for o in options if o.verdict in (OVER_COMPRESSION, OVER_TENSION)]
    weak = [o for o in options if o.verdict in (NOT_REACHED, REFUSES)]
    cures = {option.hammer.name: Cure() for option in (*stressed, *weak)}
    spent = _thicker(planner, stressed, cures) if planner.rig.job.cushions else 0
    for option in stressed:
        cures[option.hammer.name] = _set_within(planner.finder, option, cures[option.hammer.name])
    uncured = [o for o in stressed if cures[o.hammer.name].stack is None]
    spent += _heavier(planner.rig, [*weak, *uncured], cures)
    return [replace(o, cure=cures.get(o.hammer.name)) for o in options], spent


def _thicker(planner: Planner, failing: Sequence[Option], cures: dict[str, Cure]) -> int:
    """Look for the thinnest cushions beyond the allowed ones that would do; return the blows."""
    if not failing:
        return 0
    rig = planner.rig
    assert rig.job.cushions is not None
    hammers = tuple(option.hammer for option in failing)
    job = replace(rig.job, hammers=hammers, cushions=_beyond(rig.job.cushions))
    beyond = Planner(Rig(job, rig.workers, rig.tell))
    places = range(len(beyond.rig.stacks))
    beyond.look([(row, c) for row in range(len(failing)) for c in places])
    for row, option in enumerate(failing):
        works = [beyond.rig.stacks[c] for c in places if beyond.works(row, c)]
        stack = min(works, key=lambda s: s.pile.thickness if s.pile else 0.0, default=None)
        cures[option.hammer.name] = Cure(stack=stack, stack_looked=True)
    return beyond.rig.spent


def _beyond(space: CushionSpace) -> CushionSpace:
    """Return the cushions thicker than the thickest allowed one."""
    if space.sheets:
        most = space.sheets[-1]
        return replace(space, sheets=tuple(range(most + 1, BEYOND * most + 1)))
    most_thick = space.thicknesses[-1]
    steps = most_thick * np.linspace(1, BEYOND, 21)[1:]
    return replace(space, thicknesses=tuple(float(t) for t in steps))


def _set_within(finder: WindowFinder, option: Option, cure: Cure) -> Cure:
    """Add the set at the largest stroke below which no limit breaks, at the failing stage."""
    cell = _failing_cell(finder.rig, option)
    lowest = np.zeros(1, np.int64)
    # A stroke is within the limits whether or not it reaches the set.
    loose = WindowFinder(finder.rig, finder.demands.without_set())
    if loose.strike(cell, lowest).state[0] != OPEN:
        return cure
    top = loose.strike(cell, loose.tops(cell, lowest))
    return replace(cure, set_within=float(top.set[0]), stroke_within=float(top.stroke[0]))


def _failing_cell(rig: Rig, option: Option) -> Cells:
    assert option.failing is not None
    places = (
        rig.job.stages.index(option.failing.stage),
        rig.job.hammers.index(option.hammer),
        rig.stacks.index(option.stack),
    )
    return Cells(*(np.array([place]) for place in places))


def _heavier(whole: Rig, failing: Sequence[Option], cures: dict[str, Cure]) -> int:
    """Look for the least ram mass that would do with the same cushions; return the blows.

    Of a hammer short of the set: that reaches it at the largest stroke. Of one stopped by
    stresses: that has an open window, as it reaches the set at a lower stroke.
    """
    if not failing:
        return 0
    last = int(np.ceil(np.log(HEAVIER) / np.log(MASS_FINENESS)))
    factors = MASS_FINENESS ** np.arange(last + 1)
    hammers = tuple(_with_ram(o.hammer, float(f)) for o in failing for f in factors)
    rig = Rig(replace(whole.job, hammers=hammers), whole.workers, whole.tell)
    finder = WindowFinder(rig, job_demands(rig))
    cells = [_failing_cell(whole, option) for option in failing]
    stage = np.concatenate([cell.stage for cell in cells])
    stack = np.concatenate([cell.cushion for cell in cells])
    weak = np.array([option.verdict in (NOT_REACHED, REFUSES) for option in failing])

    def would_do(rows: Integers, steps: Integers) -> Flags:
        state = finder.find(Cells(stage[rows], rows * factors.size + steps, stack[rows])).state
        reaches = (state != NO_SET) & (state != RUNS) & (state != UNSOUND)
        return np.asarray(np.where(weak[rows], reaches, state == OPEN))

    steps = first_step(would_do, len(failing), last, MASS_STRIDE)
    found = np.flatnonzero(steps <= last)
    cells_found = Cells(stage[found], found * factors.size + steps[found], stack[found])
    within = finder.find(cells_found).state == OPEN if found.size else []
    for option in failing:
        cures[option.hammer.name] = replace(cures[option.hammer.name], ram_looked=True)
    for row, fits in zip(found, within, strict=True):
        hammer = failing[int(row)].hammer
        mass = hammer.ram_mass * float(factors[steps[row]])
        cures[hammer.name] = replace(cures[hammer.name], ram_mass=mass, ram_within=bool(fits))
    return rig.spent


def _with_ram(hammer: Hammer, factor: float) -> Hammer:
    """Return the hammer with a ram so many times as heavy, its frame unchanged."""
    mass = hammer.ram_mass * factor
    whole = hammer.hammer_mass + mass - hammer.ram_mass if hammer.hammer_mass else None
    name = f"{hammer.name} x {factor:.4f}"
    return replace(hammer, name=name, ram_mass=mass, hammer_mass=whole)
