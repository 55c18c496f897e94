"""``matchup drive`` as a process: exit statuses, documents, files and screens."""

from __future__ import annotations

import csv
import json

import pytest

from tests import examples
from tests.cli.test_commands import FINAL, on_terminal, once, run

TUBE = str(examples.path("open_tube"))
LAYER = str(examples.path("dense_layer"))
TABLE = str(examples.path("own_table"))
STORK = ("--hammer", "Stork")


def test_yes_is_status_0_with_the_drive_below():
    done = once("drive", TUBE, *STORK)
    assert done.returncode == 0
    assert done.stderr == ""
    assert done.stdout.startswith("Yes: Stork reaches 26.0 m in every required case (best, high);")
    assert "Case high, station by station:" in done.stdout
    assert "What a set means" not in done.stdout


def test_no_is_status_3_with_the_depth_and_case_where_it_stops():
    done = once("drive", LAYER, "--hammer", "Plover")
    assert done.returncode == 3
    assert done.stdout.startswith("No: Plover refuses; at 9.5 m in case high, full stroke of")
    assert "as far" in done.stdout


def test_the_same_verdict_comes_from_rank_check_and_drive():
    ranked = json.loads(once("rank", LAYER, "--json").stdout)
    for name in ("Stork", "Gannet", "Thrush"):
        entries = [*ranked["options"], *ranked["rejected"]]
        entry = next(one for one in entries if one["hammer"] == name)
        for command in ("check", "drive"):
            told = json.loads(once(command, LAYER, "--hammer", name, "--json").stdout)
            for key in ("verdict", "governs", "reason", "stroke_m", "blows_total", "drive_minutes"):
                assert told[key] == entry[key], (name, command, key)
    assert next(e for e in ranked["rejected"] if e["hammer"] == "Gannet")["verdict"] == "refuses"


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (("drive", FINAL, *STORK), ["ground: must have a [ground]", "`check` answers for stages"]),
        (("drive", TUBE), ["hammer: must be named, since there are 19"]),
        (("drive", TUBE, "--hammer", "Storck"), ["hammer: must name a hammer", "'Stork'"]),
        (("drive", TUBE, *STORK, "--case", "mean"), ["case: must be a case of the job: low, best"]),
        (("drive", TUBE, *STORK, "--cushion", "oak"), ["cushion: must be left out"]),
        (("drive", TABLE, "--hammer", "Lapwing", "--cushion", "oak", "--sheets", "0"),
         ["sheets: must be >= 1"]),
        (("drive", TABLE, "--hammer", "Lapwing", "--thickness", "9"), ["thickness: must have a"]),
    ],
)  # fmt: skip
def test_a_wrong_selection_is_status_1_and_no_traceback(arguments, words):
    done = run(*arguments)
    assert done.returncode == 1
    assert done.stdout == ""
    assert "Traceback" not in done.stderr
    for word in words:
        assert word in done.stderr


def test_several_wrong_names_are_told_at_once():
    done = run("drive", TABLE, "--hammer", "Lapwng", "--case", "mean", "--thickness", "9 kN")
    assert done.returncode == 1
    assert "3 problems found." in done.stderr


def test_json_is_one_document_with_cases_stations_and_criterion():
    done = once("drive", TUBE, *STORK, "--criterion", "--json")
    document = json.loads(done.stdout)
    assert done.stderr == ""
    assert done.stdout.isascii()
    assert document["can"] is True
    assert [case["case"] for case in document["cases"]] == ["low", "best", "high"]
    assert [case["required"] for case in document["cases"]] == [False, True, True]
    restarts = [station for station in document["stations"] if station["rest_h"]]
    assert [station["rest_h"] for station in restarts] == [36.0] * 3
    assert all(len(station["modes"]) == 2 for station in document["stations"])
    assert document["criterion"]["needed_later_kN"] == 4800.0
    assert document["ground"][0] == "from: cpt_b2.gef"
    no = json.loads(once("drive", LAYER, "--hammer", "Plover", "--json").stdout)
    assert no["can"] is False
    assert no["criterion"] is None
    assert no["blows_total"] is None
    assert {case["stopped_by"] for case in no["cases"]} == {"refuses"}


def test_csv_holds_every_station_of_every_case(tmp_path):
    file = tmp_path / "drive.csv"
    done = run("drive", TABLE, "--hammer", "Lapwing", "--csv", str(file), "--json", "--quiet")
    document = json.loads(done.stdout)
    rows = list(csv.DictReader(file.read_text(encoding="utf-8").splitlines()))
    assert done.stderr == ""
    assert len(rows) == len(document["stations"])
    for row, station in zip(rows, document["stations"], strict=True):
        assert row["case"] == station["case"]
        assert float(row["penetration_ft"]) == pytest.approx(station["penetration_m"] / 0.3048)
        assert float(row["blows"]) == pytest.approx(station["blows"])


def test_a_case_and_cushions_may_be_chosen():
    low = run("drive", TABLE, "--hammer", "Lapwing", "--case", "low")
    assert "Case low, station by station:" in low.stdout
    chosen = run("drive", TABLE, "--hammer", "Lapwing", "--cushion", "oak", "--sheets", "12")
    assert "Lapwing on 12 sheets of oak" in chosen.stdout
    assert "the one cushion given (exact)" in chosen.stdout


def test_a_criterion_is_added_where_it_is_asked_for_and_the_hammer_drives():
    done = once("drive", TUBE, *STORK, "--criterion")
    assert "To prove 4800 kN long after driving" in done.stdout
    no = run("drive", LAYER, "--hammer", "Plover", "--criterion")
    assert no.returncode == 3
    assert "What a set means" not in no.stdout


@pytest.mark.parametrize("columns", [80, 100])
@pytest.mark.parametrize(
    "arguments",
    [
        ("drive", TABLE, "--hammer", "Lapwing", "--criterion"),
        ("drive", TUBE, *STORK, "--criterion"),
        ("rank", LAYER),
        ("check", TABLE, "--hammer", "Lapwing"),
        ("window", TUBE, *STORK, "--every-stage"),
        ("window", TABLE, "--hammer", "Lapwing", "--stage", "32.5 ft, low"),
    ],
)
def test_a_screen_of_a_drive_fits_a_terminal(columns, arguments):
    lines = on_terminal(arguments, COLUMNS=str(columns)).splitlines()
    # What shows progress clears its own line.
    told = [line.split("\x1b[2K")[-1].split("\x1b[?25h")[-1] for line in lines]
    assert max(map(len, told)) <= columns
    assert any(line.startswith("Ground:") for line in told)


def test_a_map_over_every_stage_says_which_close_it():
    done = run("window", LAYER, "--hammer", "Gannet", "--every-stage")
    assert done.returncode == 3
    assert "with one stroke for all stations: no stroke works." in done.stdout
    assert "at 10.5 m in case high (set not reached)" in done.stdout.replace("\n  ", " ")
    both = run("window", LAYER, "--hammer", "Gannet", "--every-stage", "--stage", "9.0 m, low")
    assert both.returncode == 1
    assert "stage: must be left out where every stage is looked at" in both.stderr


def test_a_blow_of_a_station_names_its_depth_and_case():
    done = run("blow", TUBE, *STORK, "--stroke", "0.5 m", "--stage", "17.0 m, high")
    assert done.returncode == 0
    assert done.stdout.startswith("Stork at 17.0 m in case high: stroke 0.50 m gives a set of")
