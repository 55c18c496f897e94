"""The documents that scripts read: names that do not change, absent values null, plain JSON."""

from __future__ import annotations

import json
import math
from collections.abc import Iterator

import pytest

import matchup
from matchup.report.document import check_document, ranking_document
from matchup.report.shown import Units
from matchup.search.option import NOT_ANALYSED, PILE_RUNS
from tests import examples, jobs
from tests.report.plans import option, plan, ranking, running

METRIC = Units("metric")
OPTION_KEYS = {
    "rank", "hammer", "verdict", "governs", "reason", "cushion", "hammer_cushion", "stroke_m",
    "stroke_window_m", "schedule", "set_mm", "blow_energy_kJ", "transferred_energy_kJ",
    "peak_compression_MPa", "compression_use", "peak_tension_MPa", "tension_use",
    "blow_rate_per_min", "blows_total", "drive_minutes", "reach_ratio", "runner_up", "analyses",
}  # fmt: skip
STAGE_KEYS = {
    "stage", "case", "penetration_m", "stroke_m", "set_mm", "compression_use", "tension_use",
}  # fmt: skip
BLOW_KEYS = {
    "hammer", "stage", "case", "cushion", "wear", "stroke_m", "impact_velocity_m_s",
    "blow_energy_kJ", "transferred_energy_kJ", "set_mm", "blows_per_25cm",
    "toe_displacement_max_mm", "peak_compression_MPa", "peak_compression_at_m",
    "peak_tension_MPa", "peak_tension_at_m", "compression_use", "tension_use",
    "head_force_peak_kN", "energy_balance_error", "segments", "time_step_us",
}  # fmt: skip


def numbers(value: object) -> Iterator[float]:
    """Every number in a document."""
    if isinstance(value, dict):
        value = list(value.values())
    if isinstance(value, list):
        for item in value:
            yield from numbers(item)
    elif isinstance(value, float):
        yield value


def assert_plain(document: dict[str, object]) -> None:
    assert document["schema_version"] == 1
    assert all(map(math.isfinite, numbers(document)))
    assert json.loads(json.dumps(document, allow_nan=False)) == document


@pytest.mark.parametrize("name", examples.NAMES)
def test_a_ranking_has_the_keys_agreed_on(name):
    document = examples.ranking(name).to_dict()
    assert_plain(document)
    assert {"title", "objective", "limits", "options", "rejected", "runtime_s"} <= set(document)
    for place, entry in enumerate(document["options"], 1):
        assert set(entry) >= OPTION_KEYS
        assert entry["rank"] == place
        assert entry["cure"] is None
    for entry in document["rejected"]:
        assert set(entry) >= OPTION_KEYS
        assert entry["rank"] is None
        assert entry["stroke_window_m"] is None
        assert entry["reason"]
    stages = [stage for entry in document["options"] for stage in entry["schedule"]]
    assert all(set(stage) >= STAGE_KEYS for stage in stages)


def test_a_running_pile_has_nulls_for_what_no_blow_tells():
    failing = option(running(jobs.FINAL), verdict=PILE_RUNS)
    document = ranking_document(ranking([], [failing]), METRIC)
    assert_plain(document)
    entry = document["rejected"][0]
    for key in ("peak_compression_MPa", "peak_tension_MPa", "compression_use", "tension_use",
                "transferred_energy_kJ", "reach_ratio", "runner_up", "cure"):  # fmt: skip
        assert entry[key] is None
    assert entry["blows_per_25cm"] is None


def test_a_blow_that_cannot_be_trusted_leaves_no_number_that_is_none():
    lost = plan(set_mm=math.nan, compression=math.inf, tension=math.nan, verdict=NOT_ANALYSED)
    failing = option(lost, verdict=NOT_ANALYSED)
    assert_plain(check_document(ranking([], [failing]), METRIC))


def test_a_check_is_one_option_and_whether_it_can():
    able = examples.check("final_set", "Curlew").to_dict()
    unable = examples.check("final_set", "Plover").to_dict()
    for document, can in ((able, True), (unable, False)):
        assert_plain(document)
        assert set(document) >= OPTION_KEYS | {"can"}
        assert document["can"] is can
    assert set(unable["cure"]) == {
        "cushion", "ram_mass_kg", "ram_within_limits", "set_within_limits_mm",
        "stroke_within_limits_m",
    }  # fmt: skip


def test_a_window_lists_every_cell():
    result = examples.window("final_set", "Avocet")
    document = result.to_dict()
    assert_plain(document)
    assert len(document["cells"]) == len(result.map.stacks) * result.map.strokes.size
    assert set(document["cells"][0]) >= {
        "cushion", "stroke_m", "state", "set_mm", "compression_use", "tension_use",
    }  # fmt: skip
    assert document["open"] is True


def test_a_window_of_a_running_pile_is_all_nulls():
    light = jobs.stage("very soft", 4.0, 10.0, 5.0)
    document = matchup.window(jobs.small_job(stages=(light,)), "hydraulic 6 t").to_dict()
    assert_plain(document)
    cells = document["cells"]
    assert {cell["state"] for cell in cells} == {"pile runs"}
    assert {cell["set_mm"] for cell in cells} == {None}


def test_a_blow_has_the_keys_agreed_on_and_traces_when_asked():
    result = examples.best_blow("final_set", "Avocet")
    document = result.to_dict()
    assert_plain(document)
    assert set(document) >= BLOW_KEYS
    assert "trace" not in document
    traced = result.to_dict(traces=True)
    assert_plain(traced)
    assert set(traced["envelope"][0]) == {
        "distance_m", "compression_MPa", "tension_MPa", "compression_use", "tension_use",
    }  # fmt: skip
    lengths = {len(column) for column in traced["trace"].values()}
    assert set(traced["trace"]) == {
        "time_ms", "head_force_kN", "head_velocity_m_s", "toe_displacement_mm",
    }  # fmt: skip
    assert len(lengths) == 1


def test_documents_do_not_follow_the_display_but_in_their_sentences():
    metric, us = (examples.ranking("final_set").to_dict(display) for display in ("metric", "us"))
    for entry in (*metric["rejected"], *us["rejected"], *metric["options"], *us["options"]):
        del entry["reason"]
        entry["runner_up"] = None
    assert metric == us
