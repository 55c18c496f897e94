"""Every verdict, what governs it, and rankings that go on where a hammer can't be analysed."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from matchup.analysis import rig as rig_module
from matchup.model.job import Job
from matchup.model.limits import stress_limits
from matchup.report.sentences import reason
from matchup.report.shown import Units
from matchup.search import option as o
from matchup.search.option import Option, Ranking
from matchup.search.ranking import rank_hammers
from tests import jobs

PILE = jobs.concrete()
CUSHIONS = jobs.space(sheets=(3, 9))
HEAVY_GROUND = jobs.stage("boulder clay", 9.0, 1500.0, 2500.0)
RUNNING = jobs.stage("peat", 2.0, 30.0, 20.0, shaft_damping=0.65)


def one(hammer: object, **more: object) -> Job:
    return jobs.job(PILE, hammers=(hammer,), cushions=CUSHIONS, **more)  # type: ignore[arg-type]


def limited(compression: float, tension: float) -> Job:
    limits = stress_limits(PILE, compression_stress=compression, tension_stress=tension)
    return one(jobs.hydraulic(3.0), limits=limits)


def answer(job: Job) -> Option:
    ranking = rank_hammers(job, 1)
    return (*ranking.options, *ranking.rejected)[0]


CASES: dict[str, tuple[Callable[[], Job], str, str]] = {
    "enough of everything": (lambda: one(jobs.hydraulic(3.0)), o.DRIVES, "set"),
    "a hammer too large at its least stroke": (
        lambda: one(jobs.hydraulic(9.0, stroke_min=0.5)),
        o.DRIVES,
        "stroke range",
    ),
    "soft ground on the way": (
        lambda: one(jobs.hydraulic(3.0), stages=(jobs.SOFT, jobs.FINAL)),
        o.REDUCED,
        "set",
    ),
    "a hammer too small": (lambda: one(jobs.hydraulic(1.0)), o.NOT_REACHED, "set"),
    "hard ground on the way": (
        lambda: one(
            jobs.hydraulic(3.0), stages=(HEAVY_GROUND, replace(jobs.FINAL, set_needed=1e-3))
        ),
        o.REFUSES,
        "refusal",
    ),
    "weak concrete": (lambda: limited(9e6, 9e6), o.OVER_COMPRESSION, "compression"),
    "no tension allowed": (lambda: limited(30e6, 0.2e6), o.OVER_TENSION, "tension"),
    "a helmet too small": (lambda: one(jobs.hydraulic(3.0, head_max=0.3)), o.DOES_NOT_FIT, "fit"),
    "no ground to stand on": (
        lambda: one(jobs.hydraulic(3.0), stages=(RUNNING, jobs.FINAL)),
        o.PILE_RUNS,
        "weight",
    ),
}


@pytest.mark.parametrize("name", CASES)
def test_each_verdict_occurs_with_what_governs_it(name: str) -> None:
    make, verdict, governs = CASES[name]
    job = make()
    found = answer(job)
    assert (found.verdict, found.governs) == (verdict, governs)
    assert found.drives == (verdict in o.CAN_DRIVE)
    assert (found.failing is None) == found.drives
    sentence = reason(found, job, Units("metric"))
    assert any(sign.isdigit() for sign in sentence)
    assert "nan" not in sentence


def test_the_cases_and_the_unsound_blow_below_cover_every_verdict() -> None:
    covered = {verdict for _, verdict, _ in CASES.values()}
    assert covered | {o.NOT_ANALYSED} == set(o.VERDICTS)


def test_a_window_that_only_opens_above_a_stroke_closed_by_tension_is_governed_by_tension() -> None:
    job = jobs.large_jobs()["reserve"]
    oak = jobs.space((jobs.OAK,), (20,))
    found = answer(replace(job, cushions=oak, hammers=job.hammers[:1]))
    assert found.target.lifted
    assert (found.drives, found.governs) == (True, "tension")


def test_the_fastest_plan_is_governed_by_the_limit_that_ends_its_window() -> None:
    base = limited(24e6, 20e6)
    found = answer(replace(base, search=replace(base.search, objective="time")))
    assert found.drives
    assert found.target.stroke < found.hammer.stroke_max
    assert found.governs == "compression"


def test_a_stroke_held_back_at_a_stage_lies_below_the_targets_and_is_told() -> None:
    job = CASES["soft ground on the way"][0]()
    found = answer(job)
    held = found.plans[0]
    assert held.top is not None
    assert held.top < found.target.stroke
    kept = f"stroke kept to {held.stroke:.2f} m at 'soft clay'"
    assert kept in reason(found, job, Units("metric"))


def test_a_pile_that_runs_is_an_answer_with_no_blow_spent_on_it() -> None:
    job = one(jobs.hydraulic(3.0), stages=(RUNNING,))
    ranking = rank_hammers(job, 1)
    assert ranking.options == ()
    assert [option.verdict for option in ranking.rejected] == [o.PILE_RUNS]
    assert ranking.analyses == 0


def test_without_gravity_no_pile_runs() -> None:
    job = one(jobs.hydraulic(3.0), stages=(RUNNING,))
    weightless = replace(job, analysis=replace(job.analysis, gravity=False))
    assert answer(weightless).verdict != o.PILE_RUNS


def spoil(monkeypatch: pytest.MonkeyPatch, hammer: str) -> None:
    """Make every blow of one hammer fail its energy audit."""
    strike = rig_module.strike_stressed

    def spoiled(chains, strikes, *more):  # type: ignore[no-untyped-def]
        struck, stressed = strike(chains, strikes, *more)
        names = np.array([h.name for h in chains.hammers])[strikes.hammer]
        bad = names == hammer
        spoiled = replace(
            struck, sound=struck.sound & ~bad, balance=np.where(bad, 0.05, struck.balance)
        )
        return spoiled, stressed

    monkeypatch.setattr(rig_module, "strike_stressed", spoiled)


def names(options: tuple[Option, ...]) -> list[str]:
    return [option.hammer.name for option in options]


def without_figures(ranking: Ranking, hammer: str) -> list[Option]:
    return [x for x in (*ranking.options, *ranking.rejected) if x.hammer.name != hammer]


def test_a_hammer_that_cannot_be_analysed_is_listed_and_the_others_are_ranked_as_ever(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    job = jobs.small_job(stages=(jobs.SOFT, jobs.FINAL))
    whole = rank_hammers(job, 1)
    bad = whole.options[0].hammer.name
    spoil(monkeypatch, bad)
    ranking = rank_hammers(job, 1)
    assert without_figures(ranking, bad) == without_figures(whole, bad)
    (listed,) = (option for option in ranking.rejected if option.hammer.name == bad)
    assert (listed.verdict, listed.governs) == (o.NOT_ANALYSED, "analysis")
    sentence = reason(listed, job, Units("metric"))
    assert "energy audit is off by 5.0 %" in sentence
    assert "at a stroke of " in sentence
    assert listed.reach is None
    assert listed.cure is None


def test_options_are_ranked_by_energy_and_misses_by_how_far_they_fall_short() -> None:
    hammers = tuple(jobs.hydraulic(t) for t in (1.0, 6.0, 1.5, 3.0, 2.0))
    ranking = rank_hammers(jobs.small_job(hammers=hammers), 1)
    energies = [option.target.blow_energy for option in ranking.options]
    assert energies == sorted(energies)
    short = [option.failing.shortfall for option in ranking.rejected if option.failing]
    assert short == sorted(short)
    assert len(energies) >= 2
    assert len(short) >= 2
    assert sorted(names(ranking.options) + names(ranking.rejected)) == sorted(
        hammer.name for hammer in hammers
    )


def test_the_nearest_miss_is_the_cushion_whose_failing_figure_is_nearest() -> None:
    job = jobs.small_job(hammers=(jobs.hydraulic(1.5),))
    miss = answer(job)
    assert miss.verdict == o.NOT_REACHED
    rig = rig_module.Rig(job, 1)
    short = []
    for stack in range(len(rig.stacks)):
        cell = jobs.scan(rig, 0, 0, stack)
        uses = cell.compression[-1] / job.limits.compression, cell.tension[-1] / job.limits.tension
        short.append(max(job.stages[0].set_needed / cell.sets[-1], *uses) - 1)
    assert min(short) < sorted(short)[1]
    assert miss.stack == rig.stacks[short.index(min(short))]
    assert miss.failing is not None
    assert miss.failing.shortfall == pytest.approx(min(short))
    assert miss.failing.stroke == job.hammers[0].stroke_max


def test_where_several_verdicts_apply_the_worst_news_is_told() -> None:
    """The pile runs in the peat with any cushion, and the hammer is too small at the end."""
    found = answer(one(jobs.hydraulic(1.0), stages=(RUNNING, jobs.FINAL)))
    assert found.verdict == o.PILE_RUNS
