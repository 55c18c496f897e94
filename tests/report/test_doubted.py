"""Odds and what they hang on, as tables, sentences, documents and a figure."""

from __future__ import annotations

import json
from dataclasses import replace
from functools import cache

import pytest

import matchup
from matchup.errors import InputError
from matchup.model.doubt import Doubt, Doubtful, Lognormal
from matchup.report.doubted import doubt_blocks, hangs_on, odds_document, odds_table
from matchup.report.figures.doubt import doubt_figure
from matchup.report.figures.drawing import rendered
from matchup.report.page import page_text
from matchup.report.shown import Units
from matchup.search.odds import Estimate, Indices, Influence, Influences, Odds, Spread, Swing
from matchup.search.option import DRIVES, NOT_REACHED, OVER_TENSION
from tests import examples
from tests.report.plans import option, ranking

METRIC = Units("metric")
NONE = Estimate(0.0, 0.001)
DOUBT = Doubt((Doubtful("shaft", Lognormal(1.0, 0.2), "shaft resistance"),), standard_error=0.001)


def spread(*values: float) -> Spread:
    return Spread(*(Estimate(value, 0.01 * value) for value in values))


def odds(**more: object) -> Odds:
    given = {
        "samples": 1024,
        "scramblings": 8,
        "strokes": "adapt",
        "case": "best",
        "works": Estimate(0.876, 0.009),
        "reaches": Estimate(0.876, 0.009),
        "refuses": Estimate(0.02, 0.002),
        "short": NONE,
        "breaks": Estimate(0.104, 0.008),
        "compression": NONE,
        "tension": Estimate(0.104, 0.008),
        "others": (),
        "refusal_depth": spread(17.0, 18.0, 20.5),
        "refusals": ((17.0, 0.008), (18.0, 0.012)),
        "blows": spread(1050.0, 1270.0, 1450.0),
        "seconds": spread(600.0, 720.0, 780.0),
        "stress_use": spread(0.8, 0.9, 0.99),
        "influences": None,
        "analyses": 1000,
    }
    return Odds(**given | more)  # type: ignore[arg-type]


def indices(total: float, error: float = 0.05) -> Indices:
    return Indices(Estimate(0.5 * total, error), Estimate(total, error))


def influences(works: bool = True) -> Influences:
    low = Swing(0.7, OVER_TENSION, 18.0, 900.0, 540.0)
    high = Swing(1.4, NOT_REACHED, 21.0, 1500.0, 900.0)
    middle = Swing(1.0, DRIVES, None, 1200.0, 720.0)
    calm = replace_swing(middle, 0.9), replace_swing(middle, 1.1)
    rows = [
        ("shaft resistance", 0.3, 0.8, (low, high)),
        ("toe resistance below 18 m", 0.7, 0.1, (low, high)),
        ("hammer efficiency", 0.1, 0.5, calm),
        ("shaft quake", 0.05, 0.01, calm),
    ]
    inputs = tuple(
        Influence(name, indices(verdict) if works else None, indices(time), *ends)
        for name, verdict, time, ends in rows
    )
    return Influences(1024, inputs, middle)


def replace_swing(swing: Swing, factor: float) -> Swing:
    return swing._replace(factor=factor)


def told(*options, doubt: Doubt = DOUBT) -> str:
    found = ranking(options)
    found = replace(found, job=replace(found.job, doubt=doubt))
    return page_text(doubt_blocks(found, METRIC), 100)


def test_a_lone_option_s_odds_in_a_sentence():
    text = " ".join(told(replace(option(), odds=odds())).split())
    assert "works in 87.6% of 1024 samples (standard error 0.9 points)" in text
    assert "; 10.4% break the tension limit, 2.0% meet refusal on the way." in text
    assert "shaft resistance lognormal, mean 1, coefficient of variation 0.2" in text
    assert "factors on case best" in text
    assert "stroke nearest to the planned one that works" in text
    # The largest standard errors: 0.9 points, and 1450 * 0.01 / 1270.
    assert "at most 0.9 points of a probability, and 1.1% of the median" in text
    assert "standard error asked for, 0.001, is not met" in text


def test_of_several_options_the_surest_is_named():
    first = replace(option(), odds=odds())
    second = option()
    second = replace(
        second,
        hammer=replace(second.hammer, name="Surest"),
        odds=odds(works=Estimate(1.0, 0.001)),
    )
    text = " ".join(told(first, second).split())
    assert "the best 2 of 2: the surest is Surest, which works in all 1024 samples" in text


def test_where_nothing_was_played_nothing_is_told():
    assert doubt_blocks(ranking([option()]), METRIC) == []


def test_the_table_of_odds_holds_percentages_and_percentiles():
    drive = replace(option(), odds=odds(), cases=(None,))
    (row,) = odds_table([drive], METRIC).to_records()
    assert row["works_percent"] == pytest.approx(87.6)
    assert row["works_error_percent"] == pytest.approx(0.9)
    assert row["over_tension_percent"] == pytest.approx(10.4)
    assert row["refusal_depth_p50_m"] == pytest.approx(18.0)
    assert row["blows_p90"] == pytest.approx(1450.0)
    assert row["minutes_p50"] == pytest.approx(12.0)
    assert "reaches_percent" not in row
    kept = replace(drive, odds=odds(strokes="keep", reaches=Estimate(0.95, 0.01)))
    assert odds_table([kept], METRIC).to_records()[0]["reaches_percent"] == pytest.approx(95.0)


def test_what_else_stops_samples_has_a_column_where_it_occurs():
    (row,) = odds_table([replace(option(), odds=odds())], METRIC).to_records()
    assert "other_percent" not in row
    others = (("pile runs", Estimate(0.03, 0.01)), ("could not be analysed", Estimate(0.01, 0.01)))
    (row,) = odds_table([replace(option(), odds=odds(others=others))], METRIC).to_records()
    assert row["other_percent"] == pytest.approx(4.0)
    assert row["stress_percent_p90"] == pytest.approx(99.0)
    text = " ".join(told(replace(option(), odds=odds(others=others))).split())
    assert "3.0% end as 'pile runs'" in text


def test_what_the_verdict_and_the_time_hang_on():
    assert hangs_on(odds(influences=influences())) == (
        "The verdict hangs on toe resistance below 18 m (70% of its variance); the time of the "
        "drive hangs on shaft resistance (80% of its variance) and hammer efficiency (50% of its "
        "variance)."
    )
    calm = hangs_on(odds(influences=influences(works=False)), shares=False)
    assert calm.startswith("The verdict is in no doubt: every one of 1024 drives works; the time")
    unsure = influences()
    unsure = replace(
        unsure,
        inputs=tuple(replace(i, works=indices(0.6, 0.5), time=None) for i in unsure.inputs),
    )
    assert hangs_on(odds(influences=unsure)) == "The verdict hangs on no single input for sure."


def test_the_document_has_every_figure_with_its_error():
    document = odds_document(odds(influences=influences()))
    assert json.loads(json.dumps(document, allow_nan=False)) == document
    assert document["works"] == {"value": 0.876, "standard_error": 0.009}
    assert document["minutes"]["p90"]["value"] == pytest.approx(13.0)
    assert document["refusals"][0] == {"penetration_m": 17.0, "probability": 0.008}
    first = document["influences"]["inputs"][0]
    assert first["verdict"]["total_order"]["value"] == 0.3
    assert first["p10"]["verdict"] == OVER_TENSION
    assert first["p90"]["minutes"] == pytest.approx(15.0)
    alone = Spread(*(Estimate(1.0, float("inf")),) * 3)
    assert odds_document(odds(blows=alone))["blows"]["p10"]["standard_error"] is None


def test_the_figure_is_the_same_every_time():
    found = odds(influences=influences())
    assert rendered(doubt_figure(found), "svg") == rendered(doubt_figure(found), "svg")
    assert len(doubt_figure(found).axes) == 2
    by_hand = influences()
    still = by_hand.middle._replace(blows=None, seconds=None)
    by_hand = replace(by_hand, middle=still)
    assert len(doubt_figure(odds(influences=by_hand)).axes) == 1


# --- from a job ---------------------------------------------------------------------------------


@cache
def checked() -> matchup.CheckResult:
    return matchup.check(examples.path("whole_drive_in_doubt"), "Curlew", samples=16)


def test_a_check_plays_samples_and_tells_what_matters():
    result = checked()
    text = result.to_text()
    assert "Under doubt: Curlew works in" in text
    assert "The verdict" in text
    assert "One input at a time" in text
    document = result.to_dict()
    assert document["odds"]["samples"] == 16
    assert len(document["odds"]["influences"]["inputs"]) == 6
    assert {"p10", "p50", "p90"} == set(document["odds"]["minutes"])


def test_no_samples_where_none_are_asked_for():
    job = replace(checked().job, hammers=checked().job.hammers[:1])
    assert matchup.check(job).option.odds is None
    asking = replace(job, doubt=replace(job.doubt, samples=8))
    assert matchup.check(asking, samples=0).option.odds is None
    assert matchup.check(asking).option.odds.samples == 8


def test_samples_without_doubt_are_refused():
    with pytest.raises(InputError, match="in doubt"):
        matchup.rank(examples.path("final_set"), samples=16)
