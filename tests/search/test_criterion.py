"""The termination criterion: every set computed anew as a single blow, every sum by hand."""

from __future__ import annotations

from dataclasses import replace
from functools import cache

import numpy as np
import pytest

from matchup.analysis.single import compute_blow
from matchup.model.job import Drive, Job
from matchup.model.limits import stress_limits
from matchup.model.stage import Stage
from matchup.search.criterion import MULTIPLES, Criterion, find_criterion
from matchup.search.option import Option
from matchup.search.ranking import rank_hammers
from tests import drives, jobs

CASES = {"low": 0.8, "best": 1.0, "high": 1.2}
SETUP = 1.5
HAMMER = jobs.hydraulic(6.0)


def job(capacity: float | None, **more: object) -> Job:
    stages = tuple(replace(one, setup=SETUP) for one in drives.stations(cases=CASES))
    made = drives.job(stages, hammers=(HAMMER,), **more)
    return replace(made, drive=Drive((), capacity, "by hand"))


TARGET = next(s for s in job(None).stages if s.name == "12.5 m, best")
LATER = SETUP * TARGET.shaft + TARGET.toe
CAPACITY = 1.1 * LATER


@cache
def found(capacity: float | None = CAPACITY) -> tuple[Criterion, Option]:
    asked = job(capacity)
    option = rank_hammers(asked, 1).options[0]
    return find_criterion(asked, option, 1), option


def blow(stage: Stage, option: Option, stroke: float, wear: str):
    """The blow by itself, and at 2 % more and less stroke the largest stresses."""
    asked = job(None)
    blows = [
        compute_blow(asked, stage, HAMMER, option.stack, wear, factor * stroke)
        for factor in (1.0, 0.98, 1.02)
    ]
    uses = [max(b.compression_use, b.tension_use) for b in blows]
    return blows[0].set, max(uses)


def by_hand(multiple: float) -> Stage:
    """The target with so many times the resistance."""
    shaft, toe = multiple * TARGET.shaft, multiple * TARGET.toe
    return replace(TARGET, name="by hand", shaft=shaft, toe=toe)


def test_it_is_about_the_best_case_at_the_target_and_the_settings_around_the_planned_one():
    criterion, option = found(None)
    plan = next(case.plans[-1] for case in option.cases if case.case == "best")
    assert criterion.stage == TARGET
    assert criterion.planned == plan.stroke
    steps = np.round((criterion.strokes - plan.stroke) / 0.1).astype(int)
    assert 0 in steps
    assert set(np.diff(steps)) == {1}
    assert max(steps) <= 3
    assert criterion.needed is None
    assert criterion.proving is None


def test_resistance_grows_by_set_up_of_the_shaft_alone():
    criterion, _ = found()
    for multiple, driving, later in zip(MULTIPLES, criterion.driving, criterion.later, strict=True):
        assert driving == pytest.approx(multiple * (TARGET.shaft + TARGET.toe))
        assert later == pytest.approx(multiple * (1.5 * TARGET.shaft + TARGET.toe))


@pytest.mark.parametrize("row", [0, 6, 9])
def test_sets_are_those_of_single_blows_in_the_wear_state_with_the_smaller_one(row):
    criterion, option = found()
    for column, stroke in enumerate(criterion.strokes):
        alone = [blow(by_hand(MULTIPLES[row]), option, stroke, wear) for wear in ("new", "worn")]
        assert criterion.sets[row, column] == pytest.approx(min(s for s, _ in alone), rel=1e-9)
        uses = max(use for _, use in alone)
        assert criterion.stress_uses[row, column] == pytest.approx(uses, rel=1e-9)


def test_a_smaller_set_means_more_resistance():
    """Where the pile moves at all: each column falls from the top to the bottom."""
    criterion, _ = found()
    for column in criterion.sets.T:
        moves = column[column > 0]
        assert np.all(np.diff(moves) < 0)


def test_the_proving_set_is_that_of_the_resistance_that_must_be_there_while_driving():
    criterion, option = found()
    assert criterion.needed == CAPACITY
    # Capacity long after driving, taken back to driving by the factor of the whole pile.
    multiple = CAPACITY / (1.5 * TARGET.shaft + TARGET.toe)
    proven = 0
    for stroke, proving in zip(criterion.strokes, criterion.proving, strict=True):
        alone = [blow(by_hand(multiple), option, stroke, wear) for wear in ("new", "worn")]
        least, most = min(s for s, _ in alone), max(use for _, use in alone)
        if most > 1 or least < 1e-3:
            assert np.isnan(proving)
        else:
            proven += 1
            assert proving == pytest.approx(least, rel=1e-9)
    assert proven >= 2


def test_a_set_below_the_refusal_set_proves_nothing():
    much = 2.6 * LATER
    criterion, _ = found(much)
    assert criterion.least == 1e-3
    told = criterion.proving[~np.isnan(criterion.proving)]
    assert np.all(told >= 1e-3)
    assert np.isnan(criterion.proving).any()


def test_a_stroke_that_breaks_a_limit_proves_nothing_and_one_that_holds_is_looked_for():
    asked = job(0.55 * LATER)
    option = rank_hammers(asked, 1).options[0]
    plain = find_criterion(asked, option, 1)
    # Limits between what the planned stroke and what lower ones do in so little ground.
    uses = plain.stress_uses[1]
    planned = int(np.argmin(np.abs(plain.strokes - plain.planned)))
    share = 0.93 * float(uses[: planned + 1].min())
    limits = stress_limits(
        jobs.concrete(),
        compression_stress=share * asked.limits.compression,
        tension_stress=share * asked.limits.tension,
    )
    tight = find_criterion(replace(asked, limits=limits), option, 1)
    shown = np.isin(np.round(tight.strokes, 6), np.round(plain.strokes, 6))
    assert np.isnan(tight.proving[shown]).all()
    lower = tight.strokes[~shown]
    assert np.all(lower < plain.strokes.min())
    for column in np.flatnonzero(~np.isnan(tight.proving)):
        assert tight.strokes[column] in lower


def test_strokes_that_can_be_set_freely_are_told_a_tenth_of_a_metre_apart():
    free = replace(HAMMER, stroke_step=None)
    asked = replace(job(None), hammers=(free,))
    option = rank_hammers(asked, 1).options[0]
    strokes = find_criterion(asked, option, 1).strokes
    assert strokes.size >= 4
    assert np.diff(strokes) == pytest.approx(0.1)


def test_without_a_best_case_the_costliest_target_counts():
    stages = drives.stations(cases={"low": 0.8, "high": 1.2})
    asked = drives.job(stages, hammers=(HAMMER,))
    option = rank_hammers(asked, 1).options[0]
    assert find_criterion(asked, option, 1).stage == option.target.stage


def test_a_pile_that_runs_at_little_resistance_has_no_set_there():
    light = tuple((d, 0.2 * shaft, 0.2 * toe) for d, shaft, toe in drives.GROUND)
    asked = drives.job(drives.stations(light, {"best": 1.0}, set_mm=8.0), hammers=(HAMMER,))
    option = rank_hammers(asked, 1).options[0]
    criterion = find_criterion(asked, option, 1)
    assert np.isnan(criterion.sets[0]).all()
    assert not np.isnan(criterion.sets[8]).any()
