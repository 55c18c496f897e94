"""The laws of the march as scalar functions, compiled and as plain Python, and the static start.

The roots that the laws give in closed form are held against a general root finder here.
"""

from __future__ import annotations

import numba
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from matchup.wave.laws import (
    clipped,
    cushion_force,
    cushion_on_bar,
    larger,
    shaft_velocity,
    smaller,
    toe_velocity,
)
from matchup.wave.rest import rest

LAWS = (larger, smaller, clipped, cushion_force, cushion_on_bar, shaft_velocity, toe_velocity)

number = st.floats(-1e3, 1e3).map(lambda x: round(x, 6))
positive = st.floats(1e-3, 1e3).map(lambda x: round(x, 6))


def plain_python(law):
    """Return the law uncompiled; with NUMBA_DISABLE_JIT it already is."""
    return getattr(law, "py_func", law)


def both(law, *arguments):
    """Return a law's value, having checked that the compiled one gives what plain Python gives."""
    compiled = law(*arguments)
    plain = plain_python(law)(*arguments)
    # Fused multiply-add rounds once where plain Python rounds twice; with numbers up to 1e3 and
    # differences between them that leaves 1e-7 at the very most.
    assert compiled == pytest.approx(plain, rel=1e-9, abs=1e-7)
    return plain


@pytest.mark.skipif(bool(numba.config.DISABLE_JIT), reason="nothing is compiled then")
def test_all_laws_are_compiled():
    assert all(callable(law.py_func) for law in LAWS)


@given(number, number, number)
def test_larger_smaller_and_clipped_are_what_numpy_gives(a, b, c):
    low, high = min(b, c), max(b, c)
    assert both(larger, a, b) == max(a, b)
    assert both(smaller, a, b) == min(a, b)
    assert both(clipped, a, low, high) == np.clip(a, low, high)


# --- cushions -----------------------------------------------------------------------------------


def test_a_cushion_loads_along_its_stiffness_and_unloads_along_the_steeper_one():
    # By hand: 100 kN/mm to 2 mm, 400 kN/mm back: zero after 0.5 mm.
    loading, unloading = 1e8, 4e8
    assert both(cushion_force, 1e-3, 1e-3, loading, unloading) == pytest.approx(100e3)
    assert both(cushion_force, 2e-3, 2e-3, loading, unloading) == pytest.approx(200e3)
    assert both(cushion_force, 1.75e-3, 2e-3, loading, unloading) == pytest.approx(100e3)
    assert both(cushion_force, 1.5e-3, 2e-3, loading, unloading) == pytest.approx(0.0, abs=1e-6)
    assert both(cushion_force, 1.4e-3, 2e-3, loading, unloading) == 0.0


@given(number, positive, positive, st.floats(0.1, 1.0))
def test_a_cushion_never_pulls(compression, largest, loading, restitution):
    force = both(
        cushion_force, compression, max(largest, compression), loading, loading / restitution**2
    )
    assert force >= 0.0


@given(number, positive, positive, st.floats(0.3, 1.0), positive)
def test_a_cushion_on_a_bar_satisfies_its_implicit_equation(
    approach, largest, loading, restitution, give
):
    unloading = loading / restitution**2
    force = both(cushion_on_bar, approach, largest, loading, unloading, give)

    def excess(trial):
        compression = approach - give * trial
        force = plain_python(cushion_force)
        return force(compression, max(largest, compression), loading, unloading) - trial

    top = unloading * (abs(approach) + largest) + 1.0
    root = brentq(excess, 0.0, top, xtol=1e-13, rtol=1e-14)
    assert force == pytest.approx(root, rel=1e-9, abs=1e-9 * top)


# --- shaft and toe ------------------------------------------------------------------------------


@given(number, st.floats(-1, 1), st.floats(0, 10), positive, st.floats(0, 10), positive)
def test_the_shaft_velocity_satisfies_its_implicit_equation(
    push, mobilised, drag, impedance, half_stiffness, strength
):
    spring = mobilised * strength
    velocity = both(shaft_velocity, push, spring, drag, impedance, half_stiffness, strength)

    def excess(v):
        force = np.clip(spring + half_stiffness * v, -strength, strength)
        return push - force - (drag + impedance) * v

    top = (abs(push) + strength) / impedance + 1.0
    root = brentq(excess, -top, top, xtol=1e-13)
    assert velocity == pytest.approx(root, rel=1e-8, abs=1e-9 * top)


@settings(max_examples=2000)
@given(
    push=number,
    mobilised=st.floats(-1, 1),
    drag=st.floats(0, 10),
    strength=positive,
    half_share=st.floats(0, 0.4),
    toe_mobilised=st.floats(-3, 1),
    toe_drag=st.floats(0, 100),
    toe_strength=positive,
    toe_half_share=st.floats(0, 0.6),
    impedance=positive,
)
def test_the_toe_velocity_satisfies_its_implicit_equation(
    push,
    mobilised,
    drag,
    strength,
    half_share,
    toe_mobilised,
    toe_drag,
    toe_strength,
    toe_half_share,
    impedance,
):
    # Four passes are enough while spring stiffness times half a step is at most the impedance: jobs
    # have 0.01 to 0.3. Far beyond, a gap and the strength can come within one step, and Newton's
    # method may go back and forth between the two.
    half_stiffness, toe_half = half_share * impedance, toe_half_share * impedance
    spring, stretch = mobilised * strength, toe_mobilised * toe_strength
    toe = (stretch, toe_drag, toe_strength, toe_half)
    velocity = both(toe_velocity, push, spring, drag, strength, half_stiffness, toe, impedance)

    def excess(v):
        side = np.clip(spring + half_stiffness * v, -strength, strength)
        static = np.clip(stretch + toe_half * v, 0.0, toe_strength)
        reaction = max(static + toe_drag * v, 0.0)
        return push - (impedance + drag) * v - side - reaction

    top = (abs(push) + strength + toe_strength) / impedance + 1.0
    root = brentq(excess, -top, top, xtol=1e-13)
    assert velocity == pytest.approx(root, rel=1e-7, abs=1e-8 * top)


def test_a_gap_under_the_toe_stays_open_until_the_toe_is_back():
    # By hand: the spring stands at -30 N, 3 mm below a toe of 10 N/mm; half a step of 1 m/s closes
    # 0.5 mm of it, so the toe feels nothing and the wave alone decides: 2 D / Z.
    assert both(toe_velocity, 2.0, 0.0, 0.0, 0.0, 0.0, (-30.0, 0.0, 100.0, 5.0), 2.0) == 1.0
    # Pressed to its strength it takes all of that and no more: (2 D - R) / Z.
    toe = (100.0, 0.0, 100.0, 5.0)
    assert both(toe_velocity, 104.0, 0.0, 0.0, 0.0, 0.0, toe, 2.0) == pytest.approx(2.0)


# --- the static start ---------------------------------------------------------------------------


def test_a_rigid_pile_rests_where_its_springs_carry_its_weight():
    # By hand: 30 kN + 10 kN on springs of 2, 3 and 5 kN/mm, all elastic: 4 mm.
    weight = np.array([10e3, 10e3, 10e3])
    shaft = np.array([0.0, 2e6, 3e6])
    settlement, settled = rest(10e3, weight, np.full(2, 1e12), shaft, np.full(3, 1e6), 5e6, 1e6)
    assert settled
    np.testing.assert_allclose(settlement, 4e-3, rtol=1e-5)


def test_springs_that_yield_under_the_weight_leave_the_rest_to_the_others():
    # By hand: 40 kN; the spring of 3 kN/mm yields at 6 kN, so the other two carry 34 kN on
    # 2 + 5 kN/mm.
    weight = np.array([10e3, 10e3, 10e3])
    shaft = np.array([0.0, 2e6, 3e6])
    strength = np.array([0.0, 1e6, 6e3])
    settlement, settled = rest(10e3, weight, np.full(2, 1e12), shaft, strength, 5e6, 1e6)
    assert settled
    np.testing.assert_allclose(settlement, 34e3 / 7e6, rtol=1e-5)


def test_an_elastic_pile_on_its_toe_shortens_by_the_force_in_each_segment():
    # By hand: 10 kN load, 2 kN at each of four nodes, 1 kN/mm segments: forces 12, 14, 16 kN.
    settlement, settled = rest(
        10e3, np.full(4, 2e3), np.full(3, 1e6), np.zeros(4), np.zeros(4), 2e6, 50e3
    )
    assert settled
    toe = 18e3 / 2e6
    by_hand = toe + np.array([42e-3, 30e-3, 16e-3, 0.0])
    np.testing.assert_allclose(settlement, by_hand, rtol=1e-9)


def test_a_pile_heavier_than_its_resistance_has_no_equilibrium():
    _, settled = rest(
        10e3, np.full(4, 2e3), np.full(3, 1e9), np.full(4, 1e6), np.full(4, 2e3), 2e6, 5e3
    )
    assert not settled


@settings(max_examples=300)
@given(st.integers(0, 10_000))
def test_the_static_start_balances_every_node_of_random_piles(seed):
    rng = np.random.default_rng(seed)
    nodes = int(rng.integers(3, 80))
    weight = rng.uniform(0.1e3, 2e3, nodes)
    stiffness = rng.uniform(1e7, 1e10, nodes - 1)
    strength = rng.uniform(0, 5e3, nodes) * (rng.random(nodes) < 0.8)
    quakes = rng.uniform(0.5e-3, 10e-3, nodes)
    toe_strength = rng.uniform(0, 50e3)
    toe_quake = rng.uniform(1e-3, 10e-3)
    load = rng.uniform(0, 20e3)
    share = (load + weight.sum()) / (strength.sum() + toe_strength + 1.0)
    if share > 0.98:  # bring it to a weight close below the resistance
        weight, load = weight * 0.98 / share, load * 0.98 / share
    settlement, settled = rest(
        load, weight, stiffness, strength / quakes, strength, toe_strength / toe_quake, toe_strength
    )
    assert settled
    out = weight - np.clip(strength / quakes * settlement, -strength, strength)
    out[0] += load
    out[-1] -= np.clip(toe_strength / toe_quake * settlement[-1], 0.0, toe_strength)
    pull = stiffness * np.diff(settlement)
    out[:-1] += pull
    out[1:] -= pull
    assert np.abs(out).max() < 1e-8 * (load + weight.sum() + 1.0)
