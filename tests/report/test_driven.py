"""What a whole drive says: the answer, cases, stations, remarks, criterion; at every width."""

from __future__ import annotations

import csv
import io
import json
import math
import re
from dataclasses import replace
from functools import cache

import pytest

import matchup
from matchup.model.job import Drive
from matchup.report.driven import answer, cases_table, chosen_case, drive_page, stations_table
from matchup.report.page import page_text
from matchup.report.sentences import where
from matchup.report.shown import Units
from matchup.search.option import (
    DRIVES,
    GOES_DOWN,
    NOT_REACHED,
    REFUSES,
    CaseDrive,
    StagePlan,
    Taken,
)
from tests import drives, examples, jobs
from tests.report.plans import option, plan, ranking, sheets

METRIC, US = Units("metric"), Units("us")
STAGES = drives.stations(cases={"low": 0.8, "high": 1.2}, pauses={8.0: 50400.0})
JOB = replace(jobs.job(stages=STAGES), drive=Drive(basis=("from: layers.csv", "method: by hand")))


def of(name: str) -> object:
    return next(stage for stage in STAGES if stage.name == name)


def at(name: str, blows: float, **more: object) -> StagePlan:
    """A plan at a station of `STAGES` with what was taken down to it."""
    given = {"stage": of(name), "wear": "new", "taken": Taken(blows, blows * 1.2, blows)}
    return plan(**given | more)  # type: ignore[arg-type]


def down(name: str) -> StagePlan:
    nothing = {"compression": 0.0, "tension": 0.0, "transferred": 0.0, "blow_rate": None}
    return at(name, 0.0, stroke=math.nan, set_mm=math.inf, verdict=GOES_DOWN, **nothing)


LOW = CaseDrive(
    "low", True, (down("2 m, low"), at("4 m, low", 30.0, set_mm=20.0)), None, settled=2.63
)
HIGH = CaseDrive(
    "high",
    True,
    (
        at("6 m, high", 120.0, compression=0.61, tension=0.9968),
        at("8 m, high", 250.0),
        at("8 m, high, again", 250.0, set_mm=3.0),
        at("12.5 m, high", 640.0, stroke=0.6, compression=0.7, wear=""),
    ),
    None,
    None,
)


def driving(*cases: CaseDrive, **more: object):
    plans = tuple(plan for case in cases for plan in case.plans)
    return option(*plans, cases=cases, target=cases[-1].plans[-1], **more)


def text(told, width: int = 100, case: str | None = None, job=JOB) -> str:
    shown = ranking([told], job=job) if told.drives else ranking([], [told], job=job)
    return page_text(drive_page(shown, METRIC, case), width)


# --- the answer ----------------------------------------------------------------------------------


def test_yes_tells_depth_cases_blows_time_and_cushions():
    assert answer(driving(LOW, HIGH), JOB, METRIC) == (
        "Yes: Curlew on 4 sheets of oak reaches 12.5 m in every required case (low, high); at most "
        "640 blows and 13 min of driving (case high)."
    )
    last = replace(HIGH.plans[-1], taken=Taken(640.0, None, 90.0, cushions=3))
    three = replace(HIGH, plans=(*HIGH.plans[:-1], last))
    assert answer(driving(LOW, three), JOB, METRIC).endswith(
        "at most 640 blows (case high); 3 pile cushions."
    )


def test_one_required_case_is_named_alone():
    told = answer(driving(replace(LOW, required=False), HIGH), JOB, METRIC)
    assert "reaches 12.5 m in case high; 640 blows and 13 min of driving." in told


def test_no_tells_the_verdict_with_depth_and_case():
    failing = at("8 m, high, again", 250.0, stroke=1.2, set_mm=0.6, verdict=REFUSES)
    case = replace(HIGH, plans=(*HIGH.plans[:2], failing), failing=failing)
    told = driving(LOW, case, verdict=REFUSES, failing=failing)
    assert answer(told, JOB, METRIC).startswith(
        "No: Curlew refuses; at 8.0 m in case high, after 14 h of rest, full stroke of 1.20 m on 4 "
        "sheets of oak gives a set of 0.6 mm of the 1.0 mm needed"
    )


@pytest.mark.parametrize(
    ("units", "name", "said"),
    [
        (METRIC, "6 m, low", "at 6.0 m in case low"),
        (US, "6 m, low", "at 19.69 ft in case low"),
        (METRIC, "8 m, low, again", "at 8.0 m in case low, after 14 h of rest"),
    ],
)
def test_a_station_is_told_by_depth_case_and_rest_in_the_units_of_the_reader(units, name, said):
    assert where(of(name), JOB, units) == said


def test_a_job_with_one_case_does_not_name_it_and_stages_by_hand_have_names():
    one = replace(JOB, stages=tuple(stage for stage in STAGES if stage.case == "low"))
    assert where(of("6 m, low"), one, METRIC) == "at 6.0 m"
    assert where(jobs.FINAL, jobs.small_job(), METRIC) == "at stage 'final set'"


# --- cases ---------------------------------------------------------------------------------------


def test_cases_tell_how_far_they_get_and_where_it_is_hardest_and_most_stressed():
    rows = cases_table(driving(LOW, HIGH), METRIC).to_records()
    assert [row["answer"] for row in rows] == ["reaches the target"] * 2
    assert rows[0]["settled_m"] == pytest.approx(2.63)
    assert rows[1]["settled_m"] is None
    assert rows[1]["got_to_m"] == 12.5
    assert rows[1]["blows"] == 640
    assert rows[1]["hardest_at_m"] == 8.0
    assert rows[1]["largest_stress_percent"] == pytest.approx(99.68)
    assert (rows[1]["stress"], rows[1]["stress_at_m"]) == ("tension", 6.0)


def test_a_case_that_need_not_be_managed_says_so_and_one_not_looked_at_too():
    failing = at("4 m, low", 30.0, verdict=NOT_REACHED)
    some = replace(LOW, required=False, plans=(LOW.plans[0], failing), failing=failing)
    never = CaseDrive("high", True, (), None, None)
    rows = cases_table(driving(some, HIGH), METRIC).to_records()
    assert rows[0]["answer"] == "does not reach the set (not required)"
    told = option(cases=(LOW, never), target=LOW.plans[-1], verdict=DRIVES)
    row = cases_table(told, METRIC).to_records()[1]
    assert row["answer"] == "not looked at"
    assert row["blows"] is None
    assert not never.reaches


def test_cushions_are_counted_only_where_there_are_some():
    bare = driving(LOW, HIGH, stack=replace(sheets(4), pile=None))
    assert "cushions" not in cases_table(bare, METRIC).to_records()[0]


# --- stations ------------------------------------------------------------------------------------


def test_a_station_gone_down_through_has_no_figures_of_a_blow():
    row = stations_table((LOW,), METRIC).to_records()[0]
    for key in ("stroke_m", "set_mm", "blows_per_25cm", "compression_percent", "tension_percent",
                "transferred_kJ", "blows_per_minute", "wear"):  # fmt: skip
        assert row[key] is None, key
    assert row["verdict"] == GOES_DOWN
    assert row["blows"] == 0


def test_no_share_reads_100_that_is_not():
    shown = stations_table((HIGH,), METRIC).to_text(100)
    assert " 99.7 " in shown
    over = replace(HIGH.plans[0], tension_use=1.0003)
    assert ">100" in stations_table((replace(HIGH, plans=(over,)),), METRIC).to_text(100)
    under = replace(HIGH.plans[0], tension_use=0.99996)
    table = stations_table((replace(HIGH, plans=(under,)),), METRIC)
    assert "<100" in table.to_text(100)
    assert table.to_records()[0]["tension_percent"] == pytest.approx(99.996)


def test_columns_that_say_nothing_are_not_there():
    bare = tuple(replace(plan, wear="") for plan in HIGH.plans[:1])
    row = stations_table((replace(HIGH, plans=bare),), METRIC).to_records()[0]
    assert not {"rest_h", "wear", "verdict"} & set(row)
    assert "case" not in row


def test_the_cushion_is_new_worn_or_either():
    rows = stations_table((HIGH,), METRIC).to_records()
    assert [row["wear"] for row in rows] == ["new", "new", "new", "either"]


def test_depths_have_as_many_decimals_as_they_need():
    assert "\n  8.0 " in stations_table((HIGH,), METRIC).to_text(100)
    odd = replace(of("8 m, high"), penetration=8.25)
    quarter = replace(HIGH, plans=(replace(HIGH.plans[1], stage=odd),))
    assert " 8.25 " in stations_table((quarter,), METRIC).to_text(100)


def test_a_target_looked_at_by_itself_is_shown_without_blows_so_far():
    alone = replace(HIGH.plans[-1], taken=None, verdict=NOT_REACHED)
    case = replace(HIGH, plans=(alone,), failing=alone)
    row = stations_table((case,), METRIC).to_records()[0]
    assert (row["blows"], row["minutes"]) == (0, None)


# --- the page ------------------------------------------------------------------------------------


def test_the_case_shown_is_the_one_asked_for_else_the_failing_else_the_slowest():
    told = driving(LOW, HIGH)
    assert chosen_case(told, None) is HIGH
    assert chosen_case(told, "low") is LOW
    failing = replace(LOW.plans[-1], verdict=REFUSES)
    stuck = replace(LOW, plans=(LOW.plans[0], failing), failing=failing)
    miss = driving(stuck, HIGH, verdict=REFUSES, failing=failing)
    assert chosen_case(miss, None) is stuck
    assert "Case high, station by station:" in text(told)
    assert "Other cases, shown by --case: low." in text(told)
    assert "--case" not in text(told, case="low")


def test_what_goes_down_under_its_weight_is_said():
    assert "Down to 2.6 m pile and hammer go down under their weight." in text(
        driving(LOW, HIGH), case="low"
    )
    assert "under their weight" not in text(driving(LOW, HIGH), case="high")


def test_a_restart_tells_the_gain_and_what_the_blows_do():
    assert (
        "Restart at 8.0 m after 14 h: shaft resistance 1.40 times that before; it drives, "
        "83 blows/25 cm at 0.50 m."
    ) in text(driving(LOW, HIGH)).replace("\n  ", " ")


def test_a_cushion_used_beyond_its_life_is_warned_of():
    assert "Warning" not in text(driving(LOW, HIGH))
    oak = replace(jobs.OAK, new_for=100.0, life=500.0)
    ageing = replace(sheets(4), pile=replace(sheets(4).pile, material=oak))
    warned = text(driving(LOW, HIGH, stack=ageing)).replace("\n  ", " ")
    assert (
        "Warning: in case high one pile cushion takes 640 blows, more than its life of 500; it is "
        "replaced at pauses only, so plan one earlier."
    ) in warned


def test_the_ground_stands_line_by_line_before_the_limits():
    lines = text(driving(LOW, HIGH)).splitlines()
    place = lines.index("Ground:")
    assert lines[place + 1 : place + 3] == ["  from: layers.csv", "  method: by hand"]
    assert any(line.startswith("Limits: ") for line in lines[place:])


# --- the examples --------------------------------------------------------------------------------

SHOWN = {
    "whole_drive": "Curlew",
    "soft_over_dense": "Plover",
    "dense_layer": "Plover",
    "open_tube": "Stork",
    "own_table": "Lapwing",
}


@cache
def shown(name: str) -> matchup.api.DriveResult:
    return matchup.drive(examples.path(name), SHOWN[name], criterion=True)


@pytest.mark.parametrize("name", SHOWN)
@pytest.mark.parametrize("width", [80, 100])
def test_every_line_fits_and_depth_stroke_set_and_stresses_stay(name, width):
    told = shown(name).to_text(width=width)
    assert max(map(len, told.splitlines())) <= width
    stations = told.split("station by station:")[1].split("---")[0]
    for word in ("depth", "shaft", "toe", "stroke", "set", "compr.", "tension", "so far"):
        assert word in stations


def test_both_modes_of_an_open_tube_are_shown_at_any_width():
    for width in (80, 100):
        stations = shown("open_tube").to_text(width=width).split("station by station:")[1]
        assert "coring" in stations.split("---")[0]
        assert "plugged" in stations.split("---")[0]


@pytest.mark.parametrize("name", SHOWN)
def test_the_document_is_plain_and_complete(name):
    document = shown(name).to_dict()
    assert json.loads(json.dumps(document, allow_nan=False)) == document
    job = shown(name).job
    assert [case["case"] for case in document["cases"]] == [c.case for c in job.courses]
    assert document["ground"] == list(job.drive.basis)
    for station in document["stations"]:
        driven = station["verdict"] != GOES_DOWN
        for key in ("stroke_m", "set_mm", "compression_MPa", "transferred_energy_kJ"):
            assert (station[key] is not None) == driven, key
        assert station["shaft_kN"] >= 0
    if document["can"]:
        assert {station["penetration_m"] for station in document["stations"]} == {
            stage.penetration for stage in job.stages
        }


def test_frame_and_csv_hold_every_station_of_every_case():
    result = shown("own_table")
    rows = list(csv.DictReader(io.StringIO(result.to_csv())))
    assert len(rows) == len(result.to_frame()) == len(result.job.stages)
    assert {row["case"] for row in rows} == {"low", "best", "high"}
    assert "penetration_ft" in rows[0]
    assert "penetration_m" in csv.DictReader(io.StringIO(result.to_csv("metric"))).fieldnames


def test_a_criterion_tells_what_a_set_means_and_which_proves_the_load():
    told = shown("open_tube").to_text().split("What a set means at 26.0 m, planned stroke")[1]
    assert "resistance distributed as in case best" in told.replace("\n", " ")
    assert re.search(r"To prove 4800 kN long after driving \(2400 kN times the safety factor 2\)",
                     told.replace("\n  ", " "))  # fmt: skip
    assert "Long after driving: shaft times 1.16 for set-up, toe unchanged." in told
    assert "wear states" not in told, "there is no cushion to wear"
    document = shown("open_tube").to_dict()["criterion"]
    assert document["needed_later_kN"] == pytest.approx(4800.0)
    assert len(document["sets_mm"]) == len(document["resistance_later_kN"])


def test_sets_whose_stroke_breaks_a_limit_are_starred():
    told = shown("own_table").to_text().split("What a set means")[1].split("Ground:")[0]
    assert "* breaks a stress limit." in told
    assert re.search(r"\d\.\d{3}\*", told)
    assert re.search(r"\d\.\d{3}(?!\*) ", told)


def test_without_set_up_none_is_counted_on():
    assert "no set-up is known or counted on" in shown_without_setup()


def shown_without_setup() -> str:
    result = matchup.drive(drives.job(hammers=(jobs.hydraulic(6.0),)), criterion=True)
    return result.to_text()
