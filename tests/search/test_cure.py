"""Cures: what is named does cure, and a little less does not."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from matchup.analysis.rig import Rig
from matchup.model.cushion import Cushion, Stack
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.limits import stress_limits
from matchup.report.sentences import reason
from matchup.report.shown import Units
from matchup.search.cure import find_cures
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
from tests import jobs


def cured(job: Job) -> list[Option]:
    planner = Planner(Rig(job, 1))
    return find_cures(planner, planner.options())[0]


def limited(compression: float, tension: float, **more: object) -> Job:
    limits = stress_limits(jobs.concrete(), compression_stress=compression, tension_stress=tension)
    given: dict[str, object] = {
        "cushions": jobs.space(sheets=(2, 3, 4, 5)),
        "hammers": (jobs.hydraulic(3.0), jobs.hydraulic(5.0, stroke_step=None)),
    }
    return jobs.job(limits=limits, **given | more)  # type: ignore[arg-type]


STRESSED = {
    "compression": limited(17e6, 20e6),
    "tension": limited(40e6, 6e6, cushions=jobs.space(sheets=(2, 3))),
    "compression, two stages": limited(17e6, 20e6, stages=(jobs.MIDDLE, jobs.FINAL)),
    "thicknesses": limited(17e6, 20e6, cushions=jobs.space(thicknesses=(0.05, 0.1))),
}


def works(job: Job, hammer: Hammer, cushion: Cushion) -> bool:
    """Whether every stage works with this one cushion, by a search that holds nothing else."""
    assert job.cushions is not None
    alone = replace(
        job.cushions,
        materials=(cushion.material,),
        sheets=(cushion.sheets,) if cushion.sheets else (),
        thicknesses=() if cushion.sheets else (cushion.thickness,),
    )
    (option,) = Planner(Rig(replace(job, hammers=(hammer,), cushions=alone), 1)).options()
    return option.drives


def sheets_more(cushion: Cushion, more: int) -> Cushion:
    assert cushion.sheets is not None
    assert cushion.material.sheet is not None
    count = cushion.sheets + more
    return replace(cushion, sheets=count, thickness=count * cushion.material.sheet)


@pytest.mark.parametrize("name", STRESSED)
def test_the_thicker_cushion_named_works_and_one_sheet_less_does_not(name: str) -> None:
    job = STRESSED[name]
    named = 0
    for option in cured(job):
        if option.cure is None or option.cure.stack is None:
            continue
        named += 1
        assert option.verdict in (OVER_COMPRESSION, OVER_TENSION)
        cushion = option.cure.stack.pile
        assert cushion is not None
        assert job.cushions is not None
        assert works(job, option.hammer, cushion)
        if cushion.sheets:
            assert cushion.sheets > job.cushions.sheets[-1]
            assert not works(job, option.hammer, sheets_more(cushion, -1))
        else:
            assert cushion.thickness > job.cushions.thicknesses[-1]
            less = cushion.thickness - 0.05 * job.cushions.thicknesses[-1]
            assert not works(job, option.hammer, replace(cushion, thickness=less))
    assert named


def test_of_all_materials_the_thinnest_cushion_that_works_is_named() -> None:
    job = STRESSED["compression"]
    option = next(o for o in cured(job) if o.cure and o.cure.stack)
    assert option.cure is not None
    assert option.cure.stack is not None
    named = option.cure.stack.pile
    assert named is not None
    assert job.cushions is not None
    for material in job.cushions.materials:
        assert material.sheet is not None
        for sheets in range(6, 11):
            cushion = Cushion(material, sheets * material.sheet, named.area, sheets)
            if cushion.thickness < named.thickness - 1e-9:
                assert not works(job, option.hammer, cushion)


def test_where_no_cushion_up_to_twice_the_thickest_helps_it_says_so() -> None:
    job = limited(8e6, 20e6)
    for option in cured(job):
        assert option.verdict == OVER_COMPRESSION
        assert option.cure is not None
        assert (option.cure.stack, option.cure.stack_looked) == (None, True)
        text = reason(option, job, Units("metric"))
        assert "no cushion up to 2 times the thickest allowed helps" in text
    assert job.cushions is not None
    thick = jobs.space(sheets=range(6, 11))
    assert not any(o.drives for o in Planner(Rig(replace(job, cushions=thick), 1)).options())


def test_without_a_pile_cushion_none_is_looked_for() -> None:
    limits = stress_limits(jobs.tube(), compression_stress=100e6, tension_stress=100e6)
    options = cured(jobs.steel_job(limits=limits))
    assert any(option.verdict == OVER_COMPRESSION for option in options)
    for option in options:
        assert option.cure is not None
        assert (option.cure.stack, option.cure.stack_looked) == (None, False)


@pytest.mark.parametrize(
    "job",
    [STRESSED["compression"], limited(40e6, 2.5e6)],
    ids=["compression", "tension"],
)
def test_the_set_within_the_limits_is_that_of_the_largest_stroke_below_which_none_breaks(
    job: Job,
) -> None:
    rig = Rig(job, 1)
    named = 0
    for hammer, option in enumerate(cured(job)):
        if option.drives:
            continue
        assert option.cure is not None
        cell = jobs.scan(rig, 0, hammer, rig.stacks.index(option.stack))
        limits = job.limits.compression, job.limits.tension
        if not cell.holds(0, *limits):
            assert option.cure.set_within is None
            continue
        named += 1
        top = jobs.plain_top(cell, 0, *limits)
        assert option.cure.set_within == pytest.approx(cell.sets[top], rel=1e-9)
        assert option.cure.stroke_within == pytest.approx(cell.strokes[top])
        assert option.cure.set_within < job.stages[0].set_needed
    assert named


WEAK = (jobs.hydraulic(1.0), jobs.hydraulic(2.0), jobs.drop(1.5, 0.8))
LOOSE = stress_limits(jobs.concrete(), compression_stress=60e6, tension_stress=30e6)
SHORT = {
    "at the target": jobs.small_job(hammers=WEAK, limits=LOOSE),
    "on the way": jobs.small_job(
        stages=(jobs.stage("boulder clay", 9.0, 1200.0, 1500.0), jobs.SOFT),
        hammers=WEAK,
        limits=LOOSE,
    ),
    "with reserve": jobs.small_job(hammers=WEAK, limits=LOOSE, reserve=0.1),
}


def full_set(job: Job, hammer: Hammer, stack: Stack, stage: int) -> float:
    """Return the least set over the wear states at the largest stroke."""
    rig = Rig(replace(job, hammers=(hammer,)), 1)
    wear = np.arange(len(rig.wears))
    same = [np.full(wear.size, place) for place in (stage, 0, rig.stacks.index(stack))]
    return float(rig.answer(*same, wear, np.full(wear.size, hammer.stroke_max)).set.min())


@pytest.mark.parametrize("name", SHORT)
def test_the_ram_named_reaches_the_set_at_full_stroke_and_five_percent_less_does_not(
    name: str,
) -> None:
    job = SHORT[name]
    named = 0
    for option in cured(job):
        if option.drives:
            assert option.cure is None
            continue
        assert option.verdict in (NOT_REACHED, REFUSES)
        assert option.cure is not None
        assert option.failing is not None
        mass = option.cure.ram_mass
        assert mass is not None
        named += 1
        stage = job.stages.index(option.failing.stage)
        needed = (1 + job.search.reserve) * option.failing.stage.set_needed
        for factor, enough in ((1.0, True), (1 / 1.05, False)):
            heavier = replace(option.hammer, ram_mass=factor * mass)
            assert (full_set(job, heavier, option.stack, stage) >= needed) == enough
    assert named >= 2


def test_the_ram_named_is_said_to_stay_within_the_limits_only_if_it_does() -> None:
    told = set()
    for tension in (2e6, 20e6):
        job = limited(40e6, tension, hammers=WEAK, cushions=jobs.space(sheets=(4, 8)))
        for option in cured(job):
            cure = option.cure
            if cure is None or cure.ram_mass is None:
                continue
            heavier = replace(option.hammer, ram_mass=cure.ram_mass)
            assert option.stack.pile is not None
            assert works(job, heavier, option.stack.pile) == cure.ram_within
            told.add(cure.ram_within)
            sentence = reason(option, job, Units("metric"))
            assert ("though not within the stress limits" in sentence) != cure.ram_within
    assert told == {True, False}


def test_where_no_ram_up_to_eight_times_as_heavy_would_do_it_says_so() -> None:
    job = jobs.small_job(hammers=(jobs.drop(0.1, 0.3, helmet_mass=400.0),))
    (option,) = cured(job)
    assert option.cure == Cure(ram_looked=True)
    assert "no ram up to 8 times as heavy" in reason(option, job, Units("metric"))
    assert option.failing is not None
    heavier = replace(option.hammer, ram_mass=8 * option.hammer.ram_mass)
    assert full_set(job, heavier, option.stack, 0) < job.stages[0].set_needed


def test_a_hammer_that_rides_on_the_pile_keeps_its_frame_when_its_ram_grows() -> None:
    rider = replace(jobs.hydraulic(2.0), rides_on_pile=True, hammer_mass=5000.0)
    light = replace(rider, name="of ram alone", rides_on_pile=False, hammer_mass=None)
    job = jobs.small_job(hammers=(rider, light))
    on_pile, hung = cured(job)
    assert on_pile.failing is not None
    assert on_pile.cure is not None
    mass = on_pile.cure.ram_mass
    assert mass is not None
    heavier = replace(rider, ram_mass=mass, hammer_mass=5000.0 + mass - rider.ram_mass)
    assert heavier.frame_mass == pytest.approx(rider.frame_mass)
    needed = job.stages[0].set_needed
    assert full_set(job, heavier, on_pile.stack, 0) >= needed
    assert hung.cure is not None


def test_hammers_that_drive_get_no_cure_and_cost_no_blow() -> None:
    job = jobs.small_job()
    planner = Planner(Rig(job, 1))
    options = planner.options()
    spent = planner.rig.spent
    assert all(option.verdict == DRIVES for option in options)
    assert find_cures(planner, options) == (options, 0)
    assert planner.rig.spent == spent
