"""Plans played in many samples: the plan itself, a known threshold, and what stops them."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from scipy import stats

from matchup.model.doubt import Doubt, Doubtful, Lognormal, Triangular, Uniform
from matchup.model.job import Drive, Job
from matchup.model.limits import stress_limits
from matchup.model.stage import Stage
from matchup.search.doubt import find_odds
from matchup.search.influence import find_influences
from matchup.search.option import DRIVES, GOES_DOWN, OVER_TENSION, REFUSES, VERDICTS, Option
from matchup.search.player import Player
from matchup.search.ranking import LOOKED_AT, rank_hammers, with_odds
from tests import jobs

NEARLY_ONE = Uniform(1 - 1e-9, 1 + 1e-9)


def doubt(**more: object) -> Doubt:
    inputs = (
        Doubtful("resistance", Lognormal(1.0, 0.25), "resistance"),
        Doubtful("efficiency", Triangular(0.85, 1.0, 1.1), "efficiency"),
    )
    return Doubt(**{"inputs": inputs} | more)  # type: ignore[arg-type]


def stations(case: str, factor: float) -> list[Stage]:
    rows = [(2.0, 30, 30), (4.0, 90, 80), (6.0, 180, 150), (8.0, 300, 300), (10.0, 420, 380)]
    made = [
        jobs.stage(f"{z:g} m, {case}", z, factor * shaft, factor * toe, 1.0, case=case)
        for z, shaft, toe in rows
    ]
    made.append(jobs.stage(f"12.5 m, {case}", 12.5, factor * 560, factor * 470, 4.0, case=case))
    return made


def drive_job(of: Doubt | None = None) -> Job:
    """A drive in three cases, whose pile cushion wears while it goes on."""
    material = replace(jobs.OAK, new_for=60.0, life=2000.0)
    cases = {"low": 0.8, "best": 1.0, "high": 1.2}
    stages = [stage for case, factor in cases.items() for stage in stations(case, factor)]
    space = jobs.space((material,), (3, 6, 9))
    job = jobs.job(stages=stages, hammers=(jobs.hydraulic(5.0),), cushions=space)
    return replace(job, drive=Drive(), doubt=of or doubt())


def option_of(job: Job) -> Option:
    ranking = rank_hammers(job, 1)
    return (*ranking.options, *ranking.rejected)[0]


def at_one(strokes: str) -> Doubt:
    keys = ("shaft", "toe", "shaft_quake", "toe_damping", "cushion_stiffness")
    return Doubt(tuple(Doubtful(key, NEARLY_ONE, key) for key in keys), strokes=strokes)


@pytest.mark.parametrize("strokes", ["adapt", "keep"])
def test_where_nothing_differs_a_sample_is_the_plan_of_the_best_case(strokes):
    job = drive_job(at_one(strokes))
    option = option_of(job)
    assert option.drives
    best = next(case for case in option.cases if case.case == "best")
    assert best.plans[0].verdict == GOES_DOWN
    assert {plan.wear for plan in best.plans if plan.wear} == {"new", "worn"}
    odds = find_odds(job, option, 16, 1)
    assert odds.case == "best"
    assert odds.works.value == 1
    assert odds.blows.p10.value == pytest.approx(best.taken.blows, rel=1e-5)
    assert odds.blows.p90.value == pytest.approx(best.taken.blows, rel=1e-5)
    assert odds.seconds.p50.value == pytest.approx(best.taken.seconds, rel=1e-5)
    assert odds.stress_use.p50.value == pytest.approx(best.tightest.stress_use, rel=1e-5)


# --- a probability that is known ----------------------------------------------------------------


def one_stage_job(cov: float = 0.25) -> Job:
    """One stage; stresses don't matter: it works where the resistance is not too large."""
    of = Doubt((Doubtful("resistance", Lognormal(1.0, cov), "resistance"),))
    free = stress_limits(jobs.concrete(), compression_stress=200e6, tension_stress=200e6)
    hammers = (jobs.hydraulic(4.0, 0.8),)
    job = jobs.job(hammers=hammers, cushions=jobs.space(sheets=(8,)), limits=free)
    return replace(job, doubt=of)


def largest_factor_that_works(job: Job, option: Option) -> float:
    """By bisection, one blow after the other."""
    player = Player(job, option, 1)
    low, high = 1.0, 3.0
    assert player.play(np.array([[low], [high]])).works.tolist() == [True, False]
    while high - low > 1e-6:
        middle = 0.5 * (low + high)
        works = bool(player.play(np.array([[middle]])).works[0])
        low, high = (middle, high) if works else (low, middle)
    return low


def test_the_probability_of_driving_is_that_of_no_more_resistance_than_the_reach():
    job = one_stage_job()
    option = option_of(job)
    largest = largest_factor_that_works(job, option)
    spread = math.sqrt(math.log1p(0.25**2))
    wanted = stats.norm.cdf((math.log(largest) + spread**2 / 2) / spread)
    assert 0.05 < wanted < 0.95
    odds = find_odds(job, option, 1024)
    assert odds.samples == 1024
    # In one dimension a scrambled net misses by at most one sample in each scrambling.
    assert odds.works.value == pytest.approx(wanted, abs=1 / 128)
    assert abs(odds.works.value - wanted) < 4 * odds.works.error
    assert odds.short.value == pytest.approx(1 - odds.works.value, abs=1e-12)
    assert odds.refuses.value == 0
    # The largest stroke is all that helps, and keeping the planned one helps less.
    kept = find_odds(replace(job, doubt=replace(job.doubt, strokes="keep")), option, 256)
    assert kept.works.value < odds.works.value


def test_samples_are_doubled_until_the_standard_error_is_kept():
    job = one_stage_job()
    option = option_of(job)
    once = find_odds(job, option, 16)
    assert once.samples == 16
    asked = replace(job, doubt=replace(job.doubt, standard_error=0.004))
    odds = find_odds(asked, option, 16)
    assert odds.worst_error <= 0.004
    assert odds.samples > 16
    # The samples drawn in steps are those drawn at once.
    whole = find_odds(job, option, odds.samples)
    assert whole.works == odds.works
    assert whole.stress_use == odds.stress_use


@pytest.mark.parametrize("strokes", ["adapt", "keep"])
def test_same_seed_same_answer_with_any_number_of_workers(strokes):
    job = drive_job(doubt(strokes=strokes))
    option = option_of(job)
    once = find_odds(job, option, 64, 1, influences=True)
    assert find_odds(job, option, 64, 3, influences=True) == once
    other = replace(job, search=replace(job.search, seed=8))
    assert find_odds(other, option, 64).blows != once.blows


def test_samples_played_in_several_rigs_are_those_played_in_one(monkeypatch):
    job = drive_job()
    option = option_of(job)
    once = find_odds(job, option, 64)
    monkeypatch.setattr("matchup.search.player.STAGES_AT_ONCE", 60)
    assert find_odds(job, option, 64) == once


# --- what stops samples -------------------------------------------------------------------------


def play(job: Job, *drawn: float):
    player = Player(job, option_of(job), 1)
    return player, player.play(np.array(drawn)[:, None])


def alone(strokes: str) -> Doubt:
    resistance = Doubtful("resistance", Uniform(0.1, 9.0), "resistance")
    return Doubt((resistance,), strokes=strokes)


@pytest.mark.parametrize("strokes", ["adapt", "keep"])
def test_far_more_resistance_is_refusal_at_the_first_station_that_can_not_be_passed(strokes):
    player, found = play(drive_job(alone(strokes)), 1.0, 5.0)
    assert [VERDICTS[place] for place in found.verdict] == [DRIVES, REFUSES]
    assert math.isnan(found.depth[0])
    assert found.works.tolist() == [True, False]
    assert found.blows[1] > 0
    # Each station by itself, at full stroke where strokes adapt: the first that is not passed.
    stopped = []
    for stage in player.stages:
        single = replace(player.job, drive=None, stages=(replace(stage, case=""),))
        odds = Player(single, option_of(drive_job()), 1)
        odds.planned = [player.planned[player.stages.index(stage)]]
        alone_there = odds.play(np.array([[5.0]]))
        if not alone_there.reaches[0]:
            stopped.append(stage.penetration)
    assert found.depth[1] == stopped[0]


def test_kept_strokes_go_on_where_a_limit_breaks_and_adapted_ones_stay_within():
    _, kept = play(drive_job(alone("keep")), 1.0, 0.75)
    assert kept.reaches.tolist() == [True, True]
    assert kept.tension.tolist() == [False, True]
    assert kept.works.tolist() == [True, False]
    assert kept.stress_use[0] < 1 < kept.stress_use[1]
    _, adapted = play(drive_job(alone("adapt")), 1.0, 0.75)
    assert adapted.works.tolist() == [True, True]
    assert adapted.stress_use.max() <= 1
    # Less stroke, more blows.
    assert adapted.blows[1] > kept.blows[1]
    assert adapted.blows[0] == kept.blows[0]


def test_where_no_stroke_works_a_broken_limit_stops_a_sample():
    _, found = play(drive_job(alone("adapt")), 1.0, 0.3)
    assert [VERDICTS[place] for place in found.verdict] == [DRIVES, OVER_TENSION]
    assert found.tension.tolist() == [False, True]
    assert found.depth[1] < 12.5


# --- what matters -------------------------------------------------------------------------------


def test_an_input_that_does_nothing_has_no_share():
    """Toe resistance below the pile's toe acts on no stage; resistance does all there is."""
    of = Doubt(
        (
            Doubtful("resistance", Lognormal(1.0, 0.25), "resistance"),
            Doubtful("toe", Lognormal(1.0, 0.25), "far below", 50.0),
        )
    )
    job = drive_job(of)
    found = find_influences(Player(job, option_of(job)), 512)
    does, nothing = found.inputs
    assert nothing.time.first.value == pytest.approx(0, abs=1e-12)
    assert nothing.time.total.value == pytest.approx(0, abs=1e-12)
    assert does.time.total.value == pytest.approx(1, abs=0.1)
    assert (nothing.low.blows, nothing.high.blows) == (found.middle.blows, found.middle.blows)
    assert does.low.blows < found.middle.blows
    p10 = math.exp(-math.log1p(0.0625) / 2 - 1.2815515655446004 * math.sqrt(math.log1p(0.0625)))
    assert does.low.factor == pytest.approx(p10, rel=1e-9)
    assert found.samples == 4 * 128


def test_the_best_options_get_odds():
    job = replace(jobs.small_job(), doubt=doubt())
    job = replace(job, hammers=tuple(jobs.hydraulic(2.0 + t) for t in range(8)))
    ranking = rank_hammers(job)
    assert len(ranking.options) > LOOKED_AT
    found = with_odds(ranking, 16)
    known = [option.odds is not None for option in found.options]
    assert known == [True] * LOOKED_AT + [False] * (len(known) - LOOKED_AT)
    assert all(option.odds is None for option in found.rejected)
    assert found.analyses > ranking.analyses
