"""The plan of every hammer against all cushions and settings, computed one by one."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import pytest

from matchup.analysis.rig import Rig
from matchup.model.cushion import Stack
from matchup.model.job import Job
from matchup.model.limits import stress_limits
from matchup.search import plan
from matchup.search.option import CAN_DRIVE, Option
from tests import jobs

TIGHT = stress_limits(jobs.concrete(), compression_stress=19e6, tension_stress=3.4e6)
JOBS = {
    "one stage": jobs.small_job(),
    "three stages, tight limits": jobs.job(
        stages=(jobs.SOFT, jobs.MIDDLE, jobs.FINAL),
        cushions=jobs.space(sheets=(3, 9, 15)),
        limits=TIGHT,
        hammers=(jobs.hydraulic(3.0), jobs.hydraulic(6.0), jobs.drop(6.0, 0.8)),
    ),
    "two stages": jobs.job(stages=(jobs.SOFT, jobs.FINAL), cushions=jobs.space(sheets=(3, 9, 15))),
    "steel": jobs.steel_job(),
    "timber": jobs.timber_job(),
    "free strokes": jobs.job(
        cushions=jobs.space(sheets=range(1, 9)),
        hammers=(jobs.hydraulic(5.0, stroke_step=None), jobs.drop(6.0), jobs.drop(8.0)),
    ),
    "hammer cushions": jobs.small_job(hammer_cushions=(jobs.STIFF_BLOCK, jobs.SOFT_BLOCK)),
}


@dataclass(frozen=True)
class Works:
    """A cushion that works at every stage, from the plain scan."""

    stack: Stack
    place: int
    energy: float
    compression: float
    uses: tuple[float, float]
    stroke: float
    speed: float | None


def working(job: Job, hammer: int, rig: Rig) -> list[Works]:
    """Return every cushion whose window is open at every stage."""
    keep = job.search.reserve
    limits = ((1 - keep) * job.limits.compression, (1 - keep) * job.limits.tension)
    found = []
    for place, stack in enumerate(rig.stacks):
        cells = [jobs.scan(rig, s, hammer, place) for s in range(len(job.stages))]
        windows = [
            jobs.plain_window(cell, (1 + keep) * stage.set_needed, *limits)
            for cell, stage in zip(cells, job.stages, strict=True)
        ]
        if any(w.state != "open" for w in windows):
            continue
        cell, low = cells[-1], windows[-1].at
        stroke, top = cell.strokes[low], jobs.plain_top(cell, low, *limits)
        rates = [job.hammers[hammer].blow_rate(s) for s in cell.strokes]
        inside = [(r or 0.0) * cell.sets[i] for i, r in enumerate(rates) if low <= i <= top]
        found.append(
            Works(
                stack,
                place,
                jobs.energy(job.hammers[hammer], stroke),
                cell.compression[low],
                (
                    max(c.compression[w.at] for c, w in zip(cells, windows, strict=True))
                    / job.limits.compression,
                    max(c.tension[w.at] for c, w in zip(cells, windows, strict=True))
                    / job.limits.tension,
                ),
                stroke,
                max(inside),
            )
        )
    return found


def options(job: Job, workers: int = 1) -> list[Option]:
    return plan.Planner(Rig(job, workers)).options()


def sheets(stack: Stack) -> int:
    return (stack.pile.sheets or 0) if stack.pile else 0


@pytest.mark.parametrize("name", JOBS)
def test_the_option_takes_the_least_energy_over_all_cushions(name: str) -> None:
    job = JOBS[name]
    rig = Rig(job, 1)
    for hammer, option in enumerate(options(job)):
        works = working(job, hammer, rig)
        assert option.drives == bool(works), option.hammer.name
        if not works:
            continue
        least = min(w.energy for w in works)
        assert option.target.blow_energy == pytest.approx(least, rel=1e-12)
        tied = [w for w in works if math.isclose(w.energy, least, rel_tol=1e-12)]
        best = min(tied, key=lambda w: (sheets(w.stack), w.compression, w.place))
        assert option.stack == best.stack
        assert option.certificate.startswith("exact")


def test_hammers_that_drive_and_that_fail_both_occur_in_the_jobs_compared() -> None:
    found = [option.drives for job in JOBS.values() for option in options(job)]
    assert 3 <= sum(found) < len(found)


def test_of_equal_energy_the_fewest_sheets_win_and_then_the_lower_compression() -> None:
    job = JOBS["one stage"]
    rig = Rig(job, 1)
    works = working(job, 1, rig)
    least = min(w.energy for w in works)
    tied = [w for w in works if math.isclose(w.energy, least, rel_tol=1e-12)]
    fewest = min(sheets(w.stack) for w in tied)
    finalists = [w for w in tied if sheets(w.stack) == fewest]
    assert len(tied) > len(finalists) > 1, "the job must hold a tie of energy and of sheets"
    option = options(job)[1]
    assert sheets(option.stack) == fewest
    assert option.target.compression == pytest.approx(min(w.compression for w in finalists))


def test_of_cushions_alike_in_all_the_first_of_the_catalogue_wins() -> None:
    twin = replace(jobs.PLYWOOD, name="twin of plywood")
    for materials in ((jobs.PLYWOOD, twin), (twin, jobs.PLYWOOD)):
        job = jobs.job(cushions=jobs.space(materials, (4, 8)))
        for option in options(job):
            assert option.stack.pile is not None
            assert option.stack.pile.material is materials[0]


@pytest.mark.parametrize("name", JOBS)
def test_the_runner_up_is_the_softest_that_gains_five_points_for_five_percent_energy(
    name: str,
) -> None:
    job = JOBS[name]
    rig = Rig(job, 1)
    for hammer, option in enumerate(options(job)):
        works = working(job, hammer, rig)
        if not works:
            assert option.runner_up is None
            continue
        best = next(w for w in works if w.stack == option.stack)
        near = [w for w in works if w.energy <= 1.05 * best.energy]
        gaining = [
            w
            for w in near
            if all(w.uses[i] <= best.uses[i] for i in (0, 1))
            and any(w.uses[i] <= best.uses[i] - 0.05 for i in (0, 1))
        ]
        if not gaining:
            assert option.runner_up is None
            continue
        softest = min(gaining, key=lambda w: (max(w.uses), w.place))
        assert option.runner_up is not None
        assert option.runner_up.stack == softest.stack
        assert option.runner_up.target.blow_energy <= 1.05 * option.target.blow_energy
        assert option.runner_up.compression_use <= option.compression_use
        assert option.runner_up.tension_use <= option.tension_use
        assert option.runner_up.verdict in CAN_DRIVE


def test_some_runner_up_costs_more_energy_and_some_option_has_none() -> None:
    found = [option for job in JOBS.values() for option in options(job) if option.drives]
    assert any(
        o.runner_up is not None and o.runner_up.target.blow_energy > o.target.blow_energy
        for o in found
    )
    assert any(o.runner_up is None for o in found)


@pytest.mark.parametrize("name", ["one stage", "two stages"])
def test_for_the_objective_time_the_fastest_stroke_and_cushion_are_taken(name: str) -> None:
    job = JOBS[name]
    job = replace(job, search=replace(job.search, objective="time"))
    rig = Rig(job, 1)
    compared = 0
    for hammer, option in enumerate(options(job)):
        works = working(job, hammer, rig)
        assert option.drives == bool(works)
        if works:
            compared += 1
            fastest = max(w.speed or 0.0 for w in works)
            assert option.target.speed == pytest.approx(fastest, rel=1e-9)
    assert compared >= 2


def test_the_fastest_plan_takes_more_energy_than_the_cheapest() -> None:
    job = JOBS["one stage"]
    fast = options(replace(job, search=replace(job.search, objective="time")))
    for quick, cheap in zip(fast, options(job), strict=True):
        assert quick.target.blow_energy > cheap.target.blow_energy
        assert (quick.target.speed or 0) > (cheap.target.speed or 0)


def test_a_hammer_whose_blow_rate_is_unknown_still_gets_a_plan_for_the_objective_time() -> None:
    unknown = jobs.hydraulic(6.0, blow_rate_max=None)
    known = jobs.hydraulic(6.0, name="known")
    option = options(jobs.small_job(hammers=(unknown, known), objective="time"))[0]
    assert option.drives
    assert option.target.speed is None
    assert option.target.blow_rate is None


@pytest.mark.parametrize("reserve", [0.1, 0.25])
def test_the_reserve_is_kept_back_from_set_and_stresses_at_every_stage(reserve: float) -> None:
    job = jobs.job(
        stages=(jobs.SOFT, jobs.FINAL),
        cushions=jobs.space(sheets=(3, 6, 9, 14, 20)),
        reserve=reserve,
    )
    rig = Rig(job, 1)
    for hammer, option in enumerate(options(job)):
        works = working(job, hammer, rig)
        assert option.drives == bool(works)
        if not option.drives:
            continue
        assert option.target.blow_energy == pytest.approx(min(w.energy for w in works))
        for stage_plan in option.plans:
            assert stage_plan.set >= (1 + reserve) * stage_plan.stage.set_needed
            assert max(stage_plan.compression_use, stage_plan.tension_use) <= 1 - reserve
    assert any(option.drives for option in options(job))


def test_a_reserve_costs_energy_somewhere_and_saves_it_nowhere() -> None:
    job = JOBS["one stage"]
    plain = options(job)
    careful = options(replace(job, search=replace(job.search, reserve=0.3)))
    pairs = [(a.target, b.target) for a, b in zip(plain, careful, strict=True) if b.drives]
    assert pairs
    assert all(b.blow_energy >= a.blow_energy for a, b in pairs)
    assert any(b.blow_energy > a.blow_energy for a, b in pairs)


def test_every_plan_meets_set_and_limits_when_its_blows_are_computed_anew() -> None:
    job = JOBS["three stages, tight limits"]
    rig = Rig(job, 1)
    for option in options(job):
        if not option.drives:
            continue
        hammer, place = job.hammers.index(option.hammer), rig.stacks.index(option.stack)
        for number, stage_plan in enumerate(option.plans):
            cell = jobs.scan(rig, number, hammer, place)
            at = min(
                range(len(cell.strokes)), key=lambda i: abs(cell.strokes[i] - stage_plan.stroke)
            )
            assert cell.strokes[at] == pytest.approx(stage_plan.stroke, rel=1e-12)
            assert cell.sets[at] >= stage_plan.stage.set_needed
            assert cell.holds(at, job.limits.compression, job.limits.tension)
            assert stage_plan.set == pytest.approx(cell.sets[at], rel=1e-9)
            assert stage_plan.top is not None
            assert stage_plan.low <= stage_plan.stroke <= stage_plan.top


def test_options_do_not_depend_on_the_number_of_workers() -> None:
    job = JOBS["three stages, tight limits"]
    assert options(job, 1) == options(job, 2)


def test_a_cushion_that_fails_the_target_is_not_looked_at_elsewhere() -> None:
    """What prunes: of a hammer too weak for the target no blow is spent on the other stages."""
    weak = (jobs.hydraulic(1.0),)
    several = jobs.small_job(stages=(jobs.SOFT, jobs.MIDDLE, jobs.FINAL), hammers=weak)
    alone = jobs.small_job(hammers=weak)
    rigs = Rig(several, 1), Rig(alone, 1)
    for rig in rigs:
        assert not plan.Planner(rig).options()[0].drives
    assert rigs[0].spent == rigs[1].spent > 0
