"""Layers, profile and table check themselves; stresses are those of water at rest."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from matchup.errors import ModelError
from matchup.model.ground import Layer, Profile, ResistanceColumn, ResistanceTable
from tests.grounds import KPA, WATER, clay, sand, soft_over_dense


def faults(make) -> dict[str, str]:
    with pytest.raises(ModelError) as caught:
        make()
    return {fault.field: fault.must for fault in caught.value.faults}


def test_effective_stress_by_hand():
    profile = soft_over_dense()
    # 20 kN/m3 to 2.13 m, 17 below, water at 1 m.
    by_hand = [0, 20e3, 20e3 * 2.13 - WATER * 1.13, 20e3 * 2.13 + 17e3 * 2 - WATER * 3.13]
    assert profile.effective_stress([0, 1, 2.13, 4.13]) == pytest.approx(by_hand, rel=1e-12)


def test_water_above_ground_changes_total_but_not_effective_stress():
    shore, sea = Profile((sand(0, 10),), 0.0), Profile((sand(0, 10),), -25.0)
    depth = np.linspace(0, 10, 7)
    assert sea.total_stress(depth) - shore.total_stress(depth) == pytest.approx(25 * WATER)
    assert sea.effective_stress(depth) == pytest.approx(shore.effective_stress(depth), abs=1e-6)


def test_a_border_belongs_to_the_layer_below():
    profile = soft_over_dense()
    assert profile.layer_at(2.13).soil == "clay"
    assert profile.layer_at(2.1299).soil == "sand"
    assert profile.layer_at(30.0).density == "dense"


def test_strength_is_linear_over_its_layer():
    layer = clay(2, 6, 20 * KPA, 40 * KPA)
    assert layer.strength_at([2, 3, 6]) == pytest.approx([20 * KPA, 25 * KPA, 40 * KPA])
    assert clay(0, 4, 20 * KPA).strength_at([1, 3]) == pytest.approx([20 * KPA] * 2)
    assert np.isnan(sand(0, 4).strength_at([1.0])).all()


@given(st.floats(30.001, 1e4) | st.floats(-1e4, -1e-3))
def test_nothing_is_known_outside_the_profile(depth):
    for ask in (soft_over_dense().effective_stress, soft_over_dense().layer_at):
        found = faults(lambda ask=ask: ask(depth))
        assert found == {"penetration": "must lie where the ground is known, from 0 to 30 m"}


def test_every_broken_rule_of_a_layer_is_told_at_once():
    found = faults(lambda: Layer(3, 2, "mud", -5, ocr=0.5, beta=0, unit_toe=-1, setup=0.9))
    assert set(found) == {
        "bottom",
        "soil",
        "unit_weight",
        "ocr",
        "beta",
        "unit_toe",
        "setup",
    }


def test_a_submerged_unit_weight_is_refused():
    assert "total" in faults(lambda: Layer(0, 2, "sand", 9e3))["unit_weight"]


@pytest.mark.parametrize("soil", ["clay", "rock"])
def test_density_is_for_granular_soil(soil):
    assert set(faults(lambda: Layer(0, 2, soil, 20e3, density="dense"))) == {"density"}


@pytest.mark.parametrize("soil", ["sand", "fine sand", "sand-silt", "gravel", "rock"])
def test_undrained_strength_is_for_cohesive_soil(soil):
    assert set(faults(lambda: Layer(0, 2, soil, 20e3, strength=5e3))) == {"strength"}


def test_strength_at_the_bottom_needs_one_at_the_top():
    assert set(faults(lambda: Layer(0, 2, "clay", 20e3, strength_bottom=5e3))) == {"strength"}


def test_layers_leave_no_gap_and_start_at_the_surface():
    found = faults(lambda: Profile((sand(0.5, 2), sand(2.1, 3), sand(2.9, 5)), 0.0))
    assert set(found) == {"layers.1.top", "layers.2.top", "layers.3.top"}
    assert "2 m" in found["layers.2.top"]


def test_a_profile_needs_layers_and_a_water_level():
    assert set(faults(lambda: Profile((), float("nan")))) == {"layers", "water"}


def test_salt_water_is_heavier_than_a_very_light_soil():
    light = Layer(0, 2, "clay", 10e3, strength=5e3)
    found = faults(lambda: Profile((light,), -10.0, water_unit_weight=10.05e3))
    assert set(found) == {"layers.1.unit_weight"}


def test_a_table_checks_rows_cases_and_order():
    column = ResistanceColumn((0.0, 1.0), (1.0, 1.0))
    assert set(faults(lambda: ResistanceTable((1.0,), {}))) == {"depth", "columns"}
    assert set(faults(lambda: ResistanceTable((2.0, 1.0), {"best": column}))) == {"depth"}
    assert set(faults(lambda: ResistanceTable((1.0, 2.0), {"mean": column}))) == {"columns"}
    short = ResistanceColumn((0.0,), (1.0, -1.0))
    assert set(faults(lambda: ResistanceTable((1.0, 2.0), {"best": short}))) == {
        "best.shaft",
        "best.toe",
    }
    less = ResistanceColumn((0.0, 0.5), (1.0, 1.0))
    swapped = {"low": column, "high": less}
    assert set(faults(lambda: ResistanceTable((1.0, 2.0), swapped))) == {"high"}
    afloat = ResistanceColumn((3.0, 4.0), (1.0, 1.0))
    assert set(faults(lambda: ResistanceTable((0.0, 2.0), {"best": afloat}))) == {"best.shaft"}
