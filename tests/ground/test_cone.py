"""What is read from a sounding."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from matchup.errors import ModelError
from matchup.ground.basis import Ground
from matchup.ground.cone import (
    LEAST_STRESS,
    behaviour_index,
    corrected_tip,
    estimated_unit_weight,
    known,
    read_cone,
)
from matchup.model.ground import SOILS, Profile
from tests.grounds import KPA, MPA, WATER, sand, soft_over_dense, soft_over_dense_sounding, sounding

DEPTH = np.arange(0.0, 10.01, 0.1)


def even(tip: float, sleeve: float, **given):
    return sounding(DEPTH, np.full(DEPTH.shape, tip), sleeve, **given)


def test_the_tip_is_corrected_with_pore_pressure_and_area_ratio():
    pressure = np.full(DEPTH.shape, 200 * KPA)
    measured = even(1 * MPA, 10 * KPA, pore_pressure=pressure, area_ratio=0.8)
    tip, note = corrected_tip(measured)
    assert tip == pytest.approx(np.full(DEPTH.shape, 1.04 * MPA))  # qc + (1 - a) u2
    assert "u2" in note


@pytest.mark.parametrize("given", [{}, {"area_ratio": 0.8}, {"corrected": True}])
def test_a_tip_that_cannot_or_need_not_be_corrected_is_left_and_noted(given):
    tip, note = corrected_tip(even(1 * MPA, 10 * KPA, **given))
    assert tip == pytest.approx(np.full(DEPTH.shape, 1 * MPA))
    assert ("as corrected" in note) == ("corrected" in given)


def test_the_index_tells_sand_from_clay():
    stress = np.array([100 * KPA, 100 * KPA])
    tip, sleeve = np.array([15 * MPA, 0.8 * MPA]), np.array([75 * KPA, 30 * KPA])
    in_sand, in_clay = behaviour_index(tip, sleeve, 1.5 * stress, stress)
    assert in_sand < 2.05
    assert in_clay > 2.95


@given(st.floats(0.2, 50), st.floats(0.1, 9))
def test_the_index_falls_with_tip_and_rises_with_friction_ratio(tip, ratio):
    def index(tip: float, ratio: float) -> float:
        net, stress = np.array([tip * MPA]), np.array([80 * KPA])
        return float(behaviour_index(net + 100 * KPA, ratio / 100 * net, stress + 20e3, stress)[0])

    # Where friction ratio exceeds 0.06 % and the normalised tip is below 2950, as for all soils.
    assert index(1.1 * tip, ratio) < index(tip, ratio) < index(tip, 1.1 * ratio)


def test_layered_ground_is_classed_reading_by_reading():
    cone = read_cone(Ground(sounding=soft_over_dense_sounding(noise=0.0)))
    soil = np.array(SOILS)[cone.nodes.soil]
    inside = cone.nodes.depth
    assert set(soil[(inside > 3) & (inside < 11)]) == {"clay"}
    assert set(soil[inside > 12]) <= {"sand", "gravel"}
    assert any("from memory" in note for note in cone.notes)


def test_stress_of_an_even_unit_weight():
    cone = read_cone(Ground(sounding=even(10 * MPA, 50 * KPA), water=2.0, unit_weight=19e3))
    exact = 19e3 * cone.nodes.depth - WATER * np.maximum(cone.nodes.depth - 2, 0)
    assert cone.nodes.effective == pytest.approx(np.maximum(exact, LEAST_STRESS), rel=1e-9)
    assert not any("Cabal" in note for note in cone.notes)


def test_layers_give_stress_and_soil_where_they_are_known():
    cone = read_cone(Ground(soft_over_dense(), soft_over_dense_sounding()))
    nodes = cone.nodes
    assert nodes.effective == pytest.approx(
        np.maximum(soft_over_dense().effective_stress(nodes.depth), LEAST_STRESS)
    )
    assert (~cone.sandy == (nodes.layer == 1)).all()


def test_unit_weights_are_estimated_within_those_of_soil():
    weight = estimated_unit_weight(np.array([0.0, 0.5, 10, 90]) * MPA, np.full(4, 20 * KPA))
    assert np.all((weight >= 11e3) & (weight <= 23e3))
    assert weight[2] > weight[1]


def test_short_voids_are_bridged_and_long_ones_are_not():
    depth = np.arange(0.0, 6.0, 0.5)
    values = np.where((depth > 1.2) & (depth < 1.8) | (depth > 3.2), np.nan, depth)
    found = known(depth, values, np.array([0.0, 1.5, 3.0, 3.9, 4.5]))
    assert found[:4] == pytest.approx([0, 1.5, 3, 3.0])
    assert np.isnan(found[4])
    values[(depth > 0.8) & (depth < 2.2)] = np.nan
    assert np.isnan(known(depth, values, np.array([1.5]))).all()


def faults(ground: Ground) -> dict[str, str]:
    with pytest.raises(ModelError) as caught:
        read_cone(ground)
    return {fault.field: fault.must for fault in caught.value.faults}


def test_without_layers_water_and_sleeve_must_be_known():
    lacking = faults(Ground(sounding=even(10 * MPA, np.nan)))
    assert set(lacking) == {"water", "sounding.sleeve"}
    assert "0 to 10 m" in lacking["sounding.sleeve"]


def test_a_long_void_of_the_tip_is_told_with_its_place():
    measured = even(10 * MPA, 50 * KPA, water=0.0)
    measured.tip[(DEPTH > 4.05) & (DEPTH < 6.05)] = np.nan
    assert "below 4 m" in faults(Ground(sounding=measured))["sounding.tip"]


def test_a_pre_drilled_part_has_no_readings():
    measured = even(10 * MPA, 50 * KPA, water=0.0, predrilled=2.0)
    assert read_cone(Ground(sounding=measured)).nodes.depth[0] == pytest.approx(2.0)


def test_nodes_end_where_the_first_of_layers_and_readings_ends():
    short = Ground(Profile((sand(0, 8.0),), 0.0), even(10 * MPA, 50 * KPA))
    assert read_cone(short).nodes.depth[-1] == 8.0
    deep = Ground(Profile((sand(0, 20.0),), 0.0), even(10 * MPA, 50 * KPA))
    assert read_cone(deep).nodes.depth[-1] == pytest.approx(10.0)
