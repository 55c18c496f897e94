"""Reach: a window is open at the ratio reported, and closed at 2 % more."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from matchup.analysis.cells import OPEN, Cells, job_demands
from matchup.analysis.rig import Rig
from matchup.analysis.window import WindowFinder
from matchup.model.cushion import Stack
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.limits import stress_limits
from matchup.search import reach
from matchup.search.option import NOT_ANALYSED, PILE_RUNS, Option
from matchup.search.plan import Planner
from matchup.search.reach import find_reach, scaled
from tests import jobs


def reaching(job: Job, workers: int = 1) -> list[Option]:
    return find_reach(job, Planner(Rig(job, workers)).options(), workers)[0]


def is_open(job: Job, hammer: Hammer, stack: Stack, ratio: float) -> bool:
    """Look for a window at the target stage, its resistance scaled, on a rig of its own."""
    target = scaled(job.stages[-1], ratio)
    rig = Rig(replace(job, stages=(target,), hammers=(hammer,)), 1)
    zero = np.zeros(1, np.int64)
    cell = Cells(zero, zero, np.array([rig.stacks.index(stack)]))
    return bool(WindowFinder(rig, job_demands(rig)).find(cell).state[0] == OPEN)


HAMMERS = (*(jobs.hydraulic(t) for t in (1.0, 2.0, 4.0)), jobs.drop(5.0))
LOOSE = stress_limits(jobs.concrete(), compression_stress=60e6, tension_stress=30e6)
JOBS = {
    "one stage": jobs.small_job(hammers=HAMMERS),
    "two stages": jobs.small_job(stages=(jobs.SOFT, jobs.FINAL), hammers=HAMMERS),
    "tight limits": jobs.small_job(
        hammers=HAMMERS,
        limits=stress_limits(jobs.concrete(), compression_stress=22e6, tension_stress=6.1e6),
    ),
    "loose limits": jobs.small_job(hammers=HAMMERS, limits=LOOSE),
    "reserve": jobs.small_job(hammers=HAMMERS, reserve=0.15),
    "steel": jobs.steel_job(),
}


@pytest.mark.parametrize("name", JOBS)
def test_at_the_ratio_reported_a_window_is_open_and_at_two_percent_more_it_is_not(
    name: str,
) -> None:
    job = JOBS[name]
    looked = 0
    for option in reaching(job):
        if option.reach is None or option.reach_is_open:
            continue
        looked += 1
        assert is_open(job, option.hammer, option.stack, option.reach), option.hammer.name
        assert not is_open(job, option.hammer, option.stack, 1.02 * option.reach)
    assert looked >= 2


def test_a_hammer_that_drives_reaches_at_least_the_stages_resistance() -> None:
    found = [option for job in JOBS.values() for option in reaching(job) if option.drives]
    assert len(found) >= 6
    assert all(option.reach is not None and option.reach >= 1 for option in found)


def test_a_hammer_too_weak_for_the_target_reaches_less_than_its_resistance() -> None:
    weak = [o for o in reaching(JOBS["loose limits"]) if not o.drives]
    assert weak
    assert all(option.reach is not None and option.reach < 1 for option in weak)


def test_a_hammer_that_fails_before_the_target_may_still_reach_more_than_its_resistance() -> None:
    """Reach is about the target stage: a failure on the way does not lower it."""
    hard = jobs.stage("boulder clay", 9.0, 1500.0, 2500.0)
    easy = replace(jobs.FINAL, set_needed=1e-3)
    job = jobs.small_job(stages=(hard, easy), hammers=(jobs.hydraulic(3.0),))
    (option,) = reaching(job)
    alone = reaching(replace(job, stages=(easy,)))[0]
    assert not option.drives
    assert option.reach is not None
    assert option.reach > 1
    assert is_open(job, option.hammer, option.stack, option.reach)
    assert not is_open(job, option.hammer, option.stack, 1.02 * option.reach)
    assert alone.reach is not None


def test_scaling_keeps_the_distribution_and_all_else() -> None:
    twice = scaled(jobs.MIDDLE, 2.0)
    assert (twice.shaft, twice.toe) == (2 * jobs.MIDDLE.shaft, 2 * jobs.MIDDLE.toe)
    assert replace(twice, name="", shaft=0.0, toe=1.0) == replace(
        jobs.MIDDLE, name="", shaft=0.0, toe=1.0
    )


def test_beyond_the_largest_ratio_looked_at_the_reach_is_said_to_be_open() -> None:
    tiny = replace(jobs.FINAL, shaft=100e3, toe=80e3)
    job = jobs.small_job(stages=(tiny,), hammers=(jobs.hydraulic(3.0),), limits=LOOSE)
    (option,) = reaching(job)
    assert option.drives
    assert option.reach_is_open
    assert option.reach == reach.HIGHEST
    assert is_open(job, option.hammer, option.stack, option.reach or 0)


def test_below_the_least_ratio_looked_at_there_is_no_reach() -> None:
    job = jobs.small_job(hammers=(jobs.hydraulic(0.1, helmet_mass=100.0),))
    (option,) = reaching(job)
    assert not option.drives
    assert option.reach is None
    assert not is_open(job, option.hammer, option.stack, reach.LOWEST)


def test_no_reach_is_looked_for_where_nothing_can_be_computed() -> None:
    job = jobs.small_job()
    for verdict in (NOT_ANALYSED, PILE_RUNS):
        options = [replace(o, verdict=verdict) for o in Planner(Rig(job, 1)).options()]
        assert find_reach(job, options, 1) == (options, 0)


def test_more_reserve_reaches_less() -> None:
    plain, careful = reaching(JOBS["one stage"]), reaching(JOBS["reserve"])
    pairs = [
        (a.reach, b.reach)
        for a, b in zip(plain, careful, strict=True)
        if a.stack == b.stack and a.drives and b.drives
    ]
    assert pairs
    assert all(a is not None and b is not None and b < a for a, b in pairs)


def test_reach_does_not_depend_on_the_number_of_workers() -> None:
    job = JOBS["two stages"]
    assert reaching(job, 1) == reaching(job, 2)
