"""The whole drive: strokes, blows, wear and verdicts, each station against a plain scan."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import cache
from itertools import pairwise

import numpy as np
import pytest

from matchup.analysis.rig import Rig
from matchup.model.hammer import STANDARD_GRAVITY
from matchup.model.job import Job
from matchup.model.limits import stress_limits
from matchup.search.option import FINE, GOES_DOWN, PILE_RUNS, Option, Ranking
from matchup.search.plan import Planner
from matchup.search.ranking import rank_hammers
from tests import drives, jobs

TIGHT = stress_limits(jobs.concrete(), compression_stress=22e6, tension_stress=5.0e6)
PAUSED = drives.stations(pauses={9.5: 86400.0})
TUBE = ((3.0, 60.0, 25.0), (6.0, 150.0, 90.0), (9.0, 320.0, 160.0), (11.0, 480.0, 1900.0),
        (13.0, 620.0, 500.0), (16.0, 750.0, 700.0))  # fmt: skip
JOBS = {
    "concrete": drives.job(),
    "tight limits, a pause": drives.job(PAUSED, limits=TIGHT),
    "three cases, one not required": drives.job(
        drives.stations(cases={"low": 0.7, "best": 1.0, "high": 1.6}), required=("low", "best")
    ),
    "steel tube through a dense layer": drives.job(
        drives.stations(TUBE),
        pile=jobs.tube(),
        hammers=(jobs.hydraulic(3.0, 1.5), jobs.hydraulic(7.0, 1.5), jobs.drop(6.0, 1.2)),
        cushions=None,
    ),
    "cushions that never age": drives.job(
        cushions=jobs.space(sheets=(5, 9)), hammers=(jobs.hydraulic(4.0), jobs.drop(6.0))
    ),
}


@cache
def options(name: str, objective: str = "energy") -> tuple[Option, ...]:
    job = JOBS[name]
    job = replace(job, search=replace(job.search, objective=objective))
    return tuple(Planner(Rig(job, 1)).options())


@cache
def rig_of(name: str) -> Rig:
    return Rig(JOBS[name], 1)


@cache
def plain(name: str, case: str, hammer: int, stack: int, fastest: bool) -> drives.PlainDrive:
    rig = rig_of(name)
    course = next(course for course in rig.job.courses if course.case == case)
    return drives.plain_drive(rig, course, hammer, stack, fastest)


def required(name: str) -> list[str]:
    return [course.case for course in JOBS[name].courses if course.required]


# --- the best cushion, by planning every one -----------------------------------------------------


@pytest.mark.parametrize("name", JOBS)
def test_the_option_takes_the_least_energy_of_all_cushions_planned_one_by_one(name):
    """The costliest required target counts; a cushion works if every required case does."""
    rig = rig_of(name)
    for h, option in enumerate(options(name)):
        hammer = rig.job.hammers[h]
        costs = {}
        for stack in range(len(rig.stacks)):
            mine = [plain(name, case, h, stack, False) for case in required(name)]
            if all(drive.reaches for drive in mine):
                costs[stack] = max(jobs.energy(hammer, d.steps[-1].stroke) for d in mine)
        assert option.drives == bool(costs), hammer.name
        if costs:
            assert option.target.blow_energy == pytest.approx(min(costs.values()), rel=1e-12)
            assert math.isclose(costs[rig.stacks.index(option.stack)], min(costs.values()))
        assert option.analyses > 0


@pytest.mark.parametrize("name", ["concrete", "tight limits, a pause"])
def test_for_the_objective_time_the_whole_drive_is_the_fastest_of_all_cushions(name):
    """Time of driving in the slowest required case."""
    rig = rig_of(name)
    compared = 0
    for h, option in enumerate(options(name, "time")):
        seconds = {}
        for stack in range(len(rig.stacks)):
            mine = [plain(name, case, h, stack, True) for case in required(name)]
            if all(drive.reaches for drive in mine):
                seconds[stack] = max(drive.seconds for drive in mine)
        assert option.drives == bool(seconds)
        if seconds:
            compared += 1
            least = max(c.taken.seconds for c in option.cases if c.required)
            assert least == pytest.approx(min(seconds.values()), rel=1e-9)
            assert option.cost == pytest.approx(least)
    assert compared >= 2


def test_hammers_that_drive_and_that_fail_on_the_way_and_at_the_target_all_occur():
    found = [option for name in JOBS for option in options(name)]
    assert sum(option.drives for option in found) >= 5
    failing = [option.failing for option in found if option.failing]
    assert any(plan.stage.set_needed < 2e-3 for plan in failing), "none fails on the way"
    assert any(plan.stage.set_needed > 2e-3 for plan in failing), "none fails at a target"


# --- every station -------------------------------------------------------------------------------


@pytest.mark.parametrize("name", JOBS)
def test_strokes_sets_and_stresses_of_every_station_are_those_of_a_plain_scan(name):
    rig = rig_of(name)
    looked = 0
    for h, option in enumerate(options(name)):
        stack = rig.stacks.index(option.stack)
        for case in option.cases:
            steps = plain(name, case.case, h, stack, False).steps
            assert len(case.plans) == len(steps)
            for plan, step in zip(case.plans, steps, strict=True):
                assert plan.stage == step.stage
                assert (plan.verdict in FINE) == (step.verdict != "fails")
                assert (plan.verdict == GOES_DOWN) == (step.verdict == "goes down")
                if step.verdict == "goes down":
                    continue
                looked += 1
                assert plan.stroke == pytest.approx(step.stroke, rel=1e-12)
                assert plan.set == pytest.approx(step.set, rel=1e-9)
                assert plan.compression == pytest.approx(step.compression, rel=1e-9)
                assert plan.tension == pytest.approx(step.tension, rel=1e-9)
                assert plan.wear == ("" if step.wear is None else rig.wears[step.wear])
    assert looked >= 10


@pytest.mark.parametrize("name", JOBS)
def test_blows_and_time_are_the_trapezoid_over_the_stations(name):
    rig = rig_of(name)
    for h, option in enumerate(options(name)):
        for case in option.cases:
            if not case.reaches:
                continue
            mine = plain(name, case.case, h, rig.stacks.index(option.stack), False)
            assert case.taken.blows == pytest.approx(mine.blows, rel=1e-9)
            assert case.taken.seconds == pytest.approx(mine.seconds, rel=1e-9)
            assert case.taken.cushions == mine.cushions
            assert case.taken.on_cushion == pytest.approx(mine.on_cushion, rel=1e-9)
            driven = [plan for plan in case.plans if plan.verdict != GOES_DOWN]
            depth = [plan.stage.penetration for plan in driven]
            whole = float(np.trapezoid([1 / plan.set for plan in driven], depth))
            first = case.plans[case.plans.index(driven[0]) - 1] if case.settled else None
            if first is not None:
                whole += (depth[0] - case.settled) / driven[0].set
            assert case.taken.blows == pytest.approx(whole, rel=1e-9)


def test_blows_only_grow_and_a_station_at_which_a_drive_stops_takes_none():
    for name in JOBS:
        for option in options(name):
            for case in option.cases:
                blows = [plan.taken.blows for plan in case.plans]
                assert blows == sorted(blows)
                if case.failing is not None and len(blows) > 1:
                    assert blows[-1] == blows[-2]


# --- self-weight ---------------------------------------------------------------------------------


def test_self_weight_penetration_is_where_resistance_exceeds_the_weight():
    """Pile, helmet and ram by hand; resistance between stations in a straight line."""
    job = JOBS["concrete"]
    hammer = job.hammers[1]
    pile = 0.35**2 * 14.0 * 2400.0
    weight = STANDARD_GRAVITY * (pile + hammer.helmet_mass + hammer.ram_mass)
    option = options("concrete")[1]
    for case, factor in drives.CASES.items():
        drive = next(one for one in option.cases if one.case == case)
        depths = [row[0] for row in drives.GROUND]
        totals = [1e3 * factor * (row[1] + row[2]) for row in drives.GROUND]
        assert drive.settled == pytest.approx(np.interp(weight, totals, depths), rel=1e-9)
        for plan in drive.plans:
            goes_down = plan.stage.penetration < drive.settled
            assert (plan.verdict == GOES_DOWN) == goes_down
            if goes_down:
                assert plan.taken.blows == 0
                assert math.isnan(plan.stroke)
                assert plan.stress_use == 0


def test_where_the_first_station_takes_blows_already_nothing_goes_down():
    firm = ((2.0, 300.0, 200.0), *drives.GROUND[3:])
    option = Planner(Rig(drives.job(drives.stations(firm)), 1)).options()[1]
    assert all(case.settled is None for case in option.cases)
    assert option.cases[0].plans[0].taken.blows == 0


def test_a_pile_that_runs_at_a_required_target_is_no_drive():
    soft = tuple((depth, 20.0, 10.0) for depth, _, _ in drives.GROUND)
    rig = Rig(drives.job(drives.stations(soft)), 1)
    for option in Planner(rig).options():
        assert option.verdict == PILE_RUNS
        assert not any(case.reaches for case in option.cases)
    assert rig.spent == 0


# --- wear ----------------------------------------------------------------------------------------


def wear_of(job: Job) -> Option:
    return Planner(Rig(job, 1)).options()[0]


ONE = {"best": 1.0}
EVEN = tuple((float(d), 40.0 * d, 60.0 * d) for d in range(4, 13))


def ageing(new_for: float, life: float, pauses: dict[float, float] | None = None) -> Job:
    """One cushion and one hammer in ground that grows evenly harder."""
    oak = replace(jobs.OAK, new_for=new_for, life=life)
    return drives.job(
        drives.stations(EVEN, ONE, pauses=pauses or {}, gain=1.1),
        cushions=jobs.space((oak,), sheets=(8,)),
        hammers=(jobs.hydraulic(6.0),),
    )


def test_a_cushion_is_new_for_its_first_blows_and_worn_after():
    """It arrives at a station with the blows so far, and as many more as the last set foretells."""
    option = wear_of(ageing(150.0, 1e6))
    (case,) = option.cases
    assert case.reaches
    states = [plan.wear for plan in case.plans[:-1] if plan.verdict != GOES_DOWN]
    assert set(states) == {"new", "worn"}
    assert states == sorted(states)
    driven = [plan for plan in case.plans[:-1] if plan.verdict != GOES_DOWN]
    for last, plan in pairwise(driven):
        ahead = last.taken.on_cushion + 1.0 / last.set
        assert plan.wear == ("new" if ahead < 150 else "worn")
    assert case.plans[-1].wear == "", "the target is planned for every wear state"


def test_a_used_up_cushion_is_replaced_at_a_pause_and_nowhere_else():
    never = wear_of(ageing(30.0, 60.0)).cases[0]
    assert never.taken.cushions == 1
    assert never.taken.on_cushion == never.taken.blows > 60
    twice = wear_of(ageing(30.0, 60.0, {8.0: 3600.0, 11.0: 3600.0})).cases[0]
    assert twice.taken.cushions == 3
    after = [plan for plan in twice.plans if plan.stage.after_pause]
    assert [plan.taken.on_cushion for plan in after] == [0.0, 0.0]
    assert [plan.wear for plan in after] == ["new", "new"]
    before = [twice.plans[twice.plans.index(plan) - 1] for plan in after]
    assert all(plan.wear == "worn" for plan in before)
    assert twice.most_on_cushion < never.most_on_cushion


def test_a_cushion_with_life_left_stays_at_a_pause():
    case = wear_of(ageing(30.0, 5000.0, {8.0: 3600.0})).cases[0]
    assert case.taken.cushions == 1
    at = next(i for i, plan in enumerate(case.plans) if plan.stage.after_pause)
    assert case.plans[at].taken == case.plans[at - 1].taken
    assert case.plans[at].wear == "worn"


def test_where_the_catalogue_does_not_say_how_long_a_cushion_stays_new_every_state_counts():
    for option in options("cushions that never age"):
        assert all(plan.wear == "" for plan in option.plans)


# --- cases and verdicts --------------------------------------------------------------------------


def test_a_case_that_is_not_required_may_fail():
    name = "three cases, one not required"
    some = [option for option in options(name) if option.drives]
    assert some
    failed = [case for option in some for case in option.cases if not case.reaches]
    assert failed
    assert {case.case for case in failed} == {"high"}
    everything = replace(JOBS[name], drive=replace(JOBS[name].drive, required=()))
    stricter = Planner(Rig(everything, 1)).options()
    assert sum(option.drives for option in stricter) < len(some)


def test_a_hammer_that_sticks_in_a_dense_layer_says_in_which_case_and_where():
    options_ = options("steel tube through a dense layer")
    stuck = [o for o in options_ if o.verdict == "refuses"]
    assert stuck
    for option in stuck:
        assert option.failing.stage.penetration == 11.0
        assert option.failing.stage.case == "high"
        reached = {case.case: case.reaches for case in option.cases}
        assert not reached["high"]
        assert option.governs == "refusal"


def test_the_station_told_of_a_failure_is_the_one_farthest_from_working():
    """What would help in the low case must not be told where the high case needs more."""
    weak = (jobs.hydraulic(1.2),)
    option = Planner(Rig(drives.job(hammers=weak), 1)).options()[0]
    assert not option.drives
    assert option.failing.stage.case == "high"
    assert option.failing in option.plans
    lengths = {case.case: len(case.plans) for case in option.cases}
    assert lengths["high"] > 1, "a miss is driven as far as it gets"


def test_a_miss_is_walked_with_its_nearest_cushion_in_every_case():
    job = drives.job(hammers=(jobs.hydraulic(2.0),))
    option = Planner(Rig(job, 1)).options()[0]
    assert not option.drives
    for case in option.cases:
        assert case.plans[0].stage.penetration == 2.0
        assert case.failing is case.plans[-1]
        assert all(plan.taken is not None for plan in case.plans)


# --- the ranking ---------------------------------------------------------------------------------


@cache
def ranked(name: str, workers: int = 1) -> Ranking:
    return rank_hammers(JOBS[name], workers)


def test_the_answer_does_not_depend_on_the_number_of_workers():
    one, two = ranked("tight limits, a pause"), ranked("tight limits, a pause", 2)
    assert one.options == two.options
    assert one.rejected == two.rejected
    assert one.analyses == two.analyses


def test_far_fewer_blows_are_spent_than_a_scan_of_every_station_takes():
    name = "concrete"
    job, rig = JOBS[name], Rig(JOBS[name], 1)
    settings = sum(len(jobs.all_settings(hammer)) for hammer in job.hammers)
    every = settings * len(job.stages) * len(rig.stacks) * len(rig.wears) * 3
    spent = sum(option.analyses for option in options(name))
    print(f"{spent} blows spent, {every} in a scan of all settings")
    assert spent < every / 10


def test_the_nearest_miss_comes_first_and_hopeless_ones_by_their_reach():
    distances = [o.failing.distance for o in ranked("steel tube through a dense layer").rejected]
    assert distances == sorted(distances)
    few = (jobs.drop(1.0), jobs.drop(1.6), jobs.drop(1.3))
    weak = replace(JOBS["steel tube through a dense layer"], hammers=few)
    hopeless = rank_hammers(weak, 1).rejected
    assert len({option.failing.distance for option in hopeless}) == 1
    reaches = [option.reach or 0.0 for option in hopeless]
    assert reaches == sorted(reaches, reverse=True)
    assert reaches[0] > reaches[-1]
