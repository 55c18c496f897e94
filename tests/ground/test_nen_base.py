"""The averaging of cone resistance around a toe, against its plain wording."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from matchup.errors import ModelError
from matchup.ground.basis import Choices, Ground
from matchup.ground.nen_base import averages, base_resistance
from matchup.ground.stages import resistance_stages
from tests.grounds import KPA, MPA, SQUARE, TUBE, H, pile, soft_over_dense, sounding

DEPTH = np.arange(0.0, 25.001, 0.02)


def in_plain_steps(depth, cone, tip, diameter):
    """The rule as it is worded: one depth below the toe after the other, reading by reading."""
    spacing = max(0.01, diameter / 50)

    def stations(top, end):
        return np.linspace(top, end, round((end - top) / spacing) + 1)

    def mean(values):
        values = np.asarray(values)
        if values.size == 1:
            return values[0]
        return (values.sum() - 0.5 * (values[0] + values[-1])) / (values.size - 1)

    below = np.interp(stations(tip, tip + 4 * diameter), depth, cone)
    above = np.interp(stations(max(tip - 8 * diameter, 0), tip), depth, cone)[::-1]
    results = []
    for end in range(below.size):
        if end * 4 / (below.size - 1) < 0.7 - 1e-9:
            continue
        first = mean(below[: end + 1])
        smallest, back = np.inf, []
        for value in below[: end + 1][::-1]:
            smallest = min(smallest, value)
            back.append(smallest)
        onward = []
        for value in above:
            smallest = min(smallest, value)
            onward.append(smallest)
        results.append((first, mean(back), mean(onward)))
    return min(results, key=lambda means: 0.5 * (means[0] + means[1]) + means[2])


@settings(max_examples=40, deadline=None)
@given(st.integers(0, 10**6), st.floats(0.2, 1.0), st.floats(1.0, 20.0))
def test_the_three_means_follow_the_wording(seed, diameter, tip):
    random = np.random.default_rng(seed)
    cone = 10 * MPA * np.exp(np.cumsum(random.normal(0, 0.05, DEPTH.size)))
    found = averages(DEPTH, cone, tip, diameter)
    assert found == pytest.approx(in_plain_steps(DEPTH, cone, tip, diameter), rel=1e-12)


def test_a_weak_layer_below_the_toe_is_seen_within_four_diameters():
    def base(top: float) -> float:
        cone = np.where((top < DEPTH) & (top + 0.4 > DEPTH), 1 * MPA, 15 * MPA)
        means = averages(DEPTH, cone, 12.0, 0.5)
        return float(base_resistance(*(np.array([m]) for m in means))[0])

    whole = 0.7 * 15 * MPA
    assert base(14.1) == pytest.approx(whole)  # 4.2 diameters below
    assert base(13.8) < whole  # 3.6 diameters below
    assert base(12.5) < base(13.8)


def test_ground_above_the_toe_counts_over_eight_diameters():
    deep = np.where(DEPTH < 7.9, 1 * MPA, 15 * MPA)
    near = np.where(DEPTH < 9.0, 1 * MPA, 15 * MPA)
    assert averages(DEPTH, deep, 12.0, 0.5)[2] == pytest.approx(15 * MPA)
    assert averages(DEPTH, near, 12.0, 0.5)[2] == pytest.approx(11.5 * MPA, rel=0.01)


def ground() -> Ground:
    return Ground(soft_over_dense(), sounding(DEPTH, np.full(DEPTH.shape, 8 * MPA), 50 * KPA))


def test_the_companion_gives_the_shaft_and_this_method_the_toe():
    choices = Choices(companion="api 2011")
    both = resistance_stages(
        pile(SQUARE), ground(), "nen 9997 base", [15.0], 1e-3, choices=choices
    )[1].stage
    alone = resistance_stages(pile(SQUARE), ground(), "api 2011", [15.0], 1e-3)[1].stage
    assert both.shaft == alone.shaft
    assert both.toe == pytest.approx(0.7 * 8 * MPA * 0.16)
    assert both.shaft_shape == alone.shaft_shape


def fields(section, choices, tip=15.0) -> dict[str, str]:
    with pytest.raises(ModelError) as caught:
        resistance_stages(pile(section), ground(), "nen 9997 base", [tip], 1e-3, choices=choices)
    return {fault.field: fault.must for fault in caught.value.faults}


def test_a_companion_must_be_named():
    assert set(fields(SQUARE, Choices())) == {"companion"}
    assert set(fields(SQUARE, Choices(companion="table"))) == {"companion"}


@pytest.mark.parametrize("section", [TUBE, H])
def test_open_sections_are_refused(section):
    assert set(fields(section, Choices(companion="api 2011"))) == {"section"}


def test_the_sounding_must_reach_four_diameters_below_the_toe():
    found = fields(SQUARE, Choices(companion="api 2011"), tip=23.5)
    assert "23.2 m" in found["penetration"]  # 25 m less 4 x 0.451 m
