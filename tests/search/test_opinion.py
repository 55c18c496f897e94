"""The second opinion: formulas asked with the option's own figures, and beside every answer."""

from __future__ import annotations

from dataclasses import replace

import pytest

import matchup
from matchup.analysis.formulas import FORMULAS
from matchup.search.opinion import second_opinion
from tests import jobs


@pytest.fixture(scope="module")
def result():
    return matchup.rank(jobs.small_job(), formulas=True)


def test_the_danish_formula_is_asked_with_the_plan_and_the_pile(result):
    job, option = result.job, result.options[0]
    energy = option.hammer.ram_mass * 9.80665 * option.target.stroke * option.hammer.efficiency
    stiffness, length = job.pile.toe.modulus * 0.35**2, job.pile.length
    by_hand = energy / (option.target.set + (0.5 * energy * length / stiffness) ** 0.5)
    found = second_opinion(option, job)
    assert found.resistances["Danish"] == pytest.approx(by_hand, rel=1e-12)
    assert found.stage is option.target.stage


def test_no_resistance_is_told_of_a_pile_that_does_not_move_or_runs_away(result):
    option = result.options[0]
    for set_ in (0.0, 1.0):
        moved = replace(option, target=replace(option.target, set=set_))
        told = second_opinion(moved, result.job).resistances
        assert told["modified Gates"] is None
        assert told["MnDOT"] is None


def test_formulas_stand_beside_every_answer_with_their_warning_and_decide_nothing(result):
    plain = matchup.rank(result.job)
    names = [option.hammer.name for option in (*result.options, *result.rejected)]
    assert [o.hammer for o in result.opinions] == names
    assert [o.hammer.name for o in plain.options] == [o.hammer.name for o in result.options]
    text = result.to_text()
    assert "decide nothing" in text
    assert "second-hand" in text
    assert "Danish" not in plain.to_text()
    document = result.to_dict()
    assert set(document["formulas"]) == set(names)
    assert "formulas" not in plain.to_dict()
    header = result.to_csv().splitlines()[0].split(",")
    assert header[-len(FORMULAS) :] == [f"{f.name.replace(' ', '_')}_kN" for f in FORMULAS]
    assert header[: -len(FORMULAS)] == plain.to_csv().splitlines()[0].split(",")


def test_a_check_may_ask_for_them_too():
    checked = matchup.check(jobs.small_job(), jobs.HAMMERS[1].name, formulas=True)
    assert "Danish" in checked.to_text("us")
    assert len(checked.opinions) == 1
