"""Unit resistance as a curve over nodes: integrals, means, cuts, loosened parts, thinning."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from scipy.integrate import quad

from matchup.ground.basis import Ground
from matchup.ground.thin import TOLERANCE, kept_nodes, strictly_deeper, with_longest
from matchup.ground.unit import integral, mean_around
from tests.grounds import CLOSED, soft_over_dense, soft_over_dense_sounding, unit_of

JUMP_DEPTH = np.array([0.0, 2.0, 2.0, 5.0, 9.0])
JUMP_VALUE = np.array([0.0, 4.0, 1.0, 1.0, 5.0])


def jump(z: float) -> float:
    return 2 * z if z < 2 else 1.0 if z < 5 else 1.0 + (z - 5)


@given(st.floats(0, 9))
def test_the_integral_over_a_jump_is_exact(end):
    exact = quad(jump, 0, end, points=[2, 5] if end > 5 else [2] if end > 2 else None)[0]
    assert integral(JUMP_DEPTH, JUMP_VALUE, np.array([end])) == pytest.approx(exact, abs=1e-9)


@given(st.floats(0, 9), st.floats(0.01, 20))
def test_a_mean_is_that_of_a_window_that_shrinks_at_the_ends(centre, reach):
    half = min(reach, centre, 9 - centre)
    assume(half > 1e-3)
    points = [p for p in (2.0, 5.0) if centre - half < p < centre + half]
    exact = quad(jump, centre - half, centre + half, points=points or None)[0] / (2 * half)
    found = mean_around(JUMP_DEPTH, JUMP_VALUE, np.array([centre]), reach)
    assert found == pytest.approx(exact, rel=1e-6, abs=1e-9)


@given(st.floats(0, 9), st.floats(0.01, 20))
def test_a_mean_leaves_a_straight_line_as_it_is(centre, reach):
    found = mean_around(JUMP_DEPTH, 3 + 2 * JUMP_DEPTH, np.array([centre]), reach)
    assert found == pytest.approx(3 + 2 * centre, rel=1e-7)


def shaft_force(unit, tip: float) -> float:
    cut = unit.down_to(tip)
    return float(np.trapezoid(cut.shaft_at(tip), cut.depth))


@given(st.floats(0.05, 29.9))
def test_a_cut_ends_at_the_toe_and_keeps_the_integral(tip):
    unit = unit_of("api 2011", Ground(soft_over_dense()), CLOSED, [10.0])
    cut = unit.down_to(tip)
    assert cut.depth[-1] == tip
    whole = integral(unit.depth, unit.initial, np.array([tip]))
    assert shaft_force(unit, tip) == pytest.approx(whole, rel=1e-9)


def test_a_cut_at_a_border_has_the_value_above_it():
    unit = unit_of("api 2011", Ground(soft_over_dense()), CLOSED, [10.0])
    above, below = unit.initial[unit.depth == 11.37]
    assert above != pytest.approx(below, rel=0.1)
    assert unit.down_to(11.37).initial[-1] == above


@given(st.floats(0.05, 29.0), st.floats(0, 1))
def test_a_loosened_part_keeps_its_share_and_the_rest_all(to, share):
    unit = unit_of("api 2011", Ground(soft_over_dense()), CLOSED, [10.0])
    upper = shaft_force(unit, to)
    weak = unit.loosened(to, share)
    assert shaft_force(weak, to) == pytest.approx(share * upper, rel=1e-9, abs=1e-6)
    whole = shaft_force(unit, 30.0) - (1 - share) * upper
    assert shaft_force(weak, 30.0) == pytest.approx(whole, rel=1e-9)


@pytest.mark.parametrize("to", [2.13, 6.0, 30.0, 99.0])
def test_ground_is_loosened_to_a_border_a_node_and_the_end(to):
    unit = unit_of("api 2011", Ground(soft_over_dense()), CLOSED, [10.0])
    reached = min(to, 30.0)
    weak = shaft_force(unit.loosened(to, 0.25), 30.0)
    expected = shaft_force(unit, 30.0) - 0.75 * shaft_force(unit, reached)
    assert weak == pytest.approx(expected, rel=1e-12)


def test_thinned_curves_stay_within_the_tolerance():
    ground = Ground(soft_over_dense(), soft_over_dense_sounding())
    unit = unit_of("alm hamre 2001", ground, CLOSED, [20.0])
    curve = unit.shaft_at(20.0)
    kept = with_longest(unit.depth, kept_nodes(unit.depth, curve[None, :]))
    depth = strictly_deeper(unit.depth[kept])
    assert np.all(np.diff(depth) > 0)
    away = np.min(np.abs(unit.depth[:, None] - JUMPS[None, :]), axis=1) > 1e-5
    off = np.abs(np.interp(unit.depth, depth, curve[kept]) - curve)[away]
    assert off.max() <= 1.0001 * TOLERANCE * curve.max()


JUMPS = np.array([2.13, 11.37])


def test_what_is_straight_needs_its_ends_alone():
    depth = np.linspace(0, 10, 500)
    assert kept_nodes(depth, np.array([3 * depth + 1])).tolist() == [0, 499]
    assert kept_nodes(JUMP_DEPTH, JUMP_VALUE[None, :]).tolist() == [0, 1, 2, 3, 4]
