"""Waves in the pile itself: reflection, resistance, free and fixed ends, against closed forms.

All values here follow from the equation of the elastic bar (exact). Impedance and impact velocity
are one unless said otherwise; no gravity.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from tests.chains import Head, bare_head, cushioned_head, hit, soil, stepped_bar, uniform_bar

# A light ram on soft cushions: ram and helmet have left after 0.37 L/c, before anything is back.
SHORT = Head(0.05, 1.0, 5.0, 0.02, 20.0)


def sent_at_head(outcome, steps: int) -> np.ndarray:
    """Return the force sent down in each of the first `steps` steps, before anything is back."""
    return outcome.force[:steps]


def returned_at_head(outcome, first: int, steps: int, impedance: float = 1.0) -> np.ndarray:
    """Return the force arriving at a free head: its velocity is ``-2 U / Z``."""
    assert np.all(outcome.force[first : first + steps] == 0.0)
    return -0.5 * impedance * outcome.velocity[first : first + steps]


# --- change of section --------------------------------------------------------------------------


@pytest.mark.parametrize("second", [0.25, 0.8, 1.0, 1.5, 4.0])
def test_a_change_of_section_reflects_and_transmits_the_printed_shares(second):
    reflected_formula = (second - 1) / (second + 1)
    transmitted_formula = 2 * second / (second + 1)
    bar = stepped_bar([(100, 1.0), (300, second)], 0.01)
    outcome = hit(bar, SHORT, steps=400)
    sent = sent_at_head(outcome, 150)
    back = returned_at_head(outcome, 200, 150)
    # 1e-12: waves move on unchanged, so only rounding is left.
    np.testing.assert_allclose(back, reflected_formula * sent, atol=1e-12)
    assert outcome.envelope[250, 0] == pytest.approx(transmitted_formula * sent.max(), rel=1e-12)


# --- side resistance ----------------------------------------------------------------------------


def test_a_side_resistance_sends_half_of_itself_up_and_takes_half_from_the_wave():
    resistance, node = 0.2, 100
    bar = uniform_bar(400, travel=4.0)
    # A heavy ram on a cushion keeps the wave above R/2 for good; the quake is tiny, so that the
    # resistance is mobilised in the first steps of the wave.
    head = cushioned_head(20.0, 1.0, 1.0, 1.0)
    grounds = soil(bar.weight.size, shaft={node: resistance}, quake=1e-9)
    free = hit(bar, head, steps=390)
    held = hit(bar, head, grounds, steps=390)
    # Sent up: until 2 L/c of the upper part the head feels nothing, then R/2 more than it sends.
    np.testing.assert_array_equal(held.force[:200], free.force[:200])
    up = 0.5 * (held.force - held.velocity)
    # Velocity is known at the end of a step, force as its mean: 1e-3 for the change within a step.
    late = slice(250, 380)
    np.testing.assert_allclose(up[late], 0.5 * resistance, atol=1e-3)
    # Sent down: below the node the largest force is R/2 short of what it was.
    below = free.envelope[200, 0] - held.envelope[200, 0]
    assert below == pytest.approx(0.5 * resistance, rel=1e-9)


def test_several_side_resistances_add_up_along_the_way():
    bar = uniform_bar(400, travel=4.0)
    head = cushioned_head(20.0, 1.0, 1.0, 1.0)
    strengths = {110: 0.05, 130: 0.1, 150: 0.15}
    held = hit(bar, head, soil(bar.weight.size, shaft=strengths, quake=1e-9), steps=390)
    free = hit(bar, head, steps=390)
    taken = free.envelope[:, 0] - held.envelope[:, 0]
    assert taken[200] == pytest.approx(0.5 * sum(strengths.values()), rel=1e-9)


# --- free ends ----------------------------------------------------------------------------------


def test_a_pulse_crosses_a_free_bar_in_its_travel_time_and_comes_back_as_tension():
    segments = 200
    bar = uniform_bar(segments)
    outcome = hit(bar, SHORT, steps=600)
    moved = np.flatnonzero(np.abs(outcome.toe) > 0)
    assert moved[0] == segments  # the step after exactly L/c
    # A free end turns force round with its sign; the head, free again, turns it back.
    sent = sent_at_head(outcome, segments)
    np.testing.assert_allclose(returned_at_head(outcome, 400, 150), -sent[:150], atol=1e-12)
    assert -outcome.envelope[100, 1] == pytest.approx(sent.max(), rel=1e-12)


def test_the_toe_of_a_free_bar_moves_on_by_twice_the_pulse_every_round_trip():
    # Closed form: 2 v t for a pulse of velocity v and length t; in general twice the integral of
    # the velocity, and v = F/Z.
    segments = 200
    bar = uniform_bar(segments)
    outcome = hit(bar, SHORT, steps=1200)
    pulse = outcome.force[:segments].sum() * bar.step
    formula = 2 * pulse
    between = outcome.toe[[390, 790, 1190]]
    np.testing.assert_allclose(between, formula * np.array([1, 2, 3]), rtol=1e-12)
    # All the momentum that ram and helmet have lost is in the pile, and none of it is lost there.
    assert outcome.row["momentum"] == pytest.approx(SHORT.ram * SHORT.velocity, rel=1e-12)


@pytest.mark.parametrize("mass_ratio", [0.3, 0.5, 1.0, 2.0])
def test_the_largest_tension_of_a_free_pile_before_two_travel_times_is_as_by_formula(mass_ratio):
    # exact: Z v0 (1 - exp(-2 mp/M)) for a ram directly on the pile.
    segments = 1000
    bar = uniform_bar(segments)  # its mass is Z L/c = 1
    ram = 1.0 / mass_ratio
    formula = 1 - math.exp(-2 * mass_ratio)
    outcome = hit(bar, bare_head(ram, 1.0, 1.0), steps=2 * segments)
    program = -outcome.envelope[:, 1].min()
    # The front that comes back decays by the mass ratio per L/c: it is known to one and a half
    # steps, and smeared over ln(1e4)/1e4 M/Z (see `bare_head`). The node next to the head, where
    # the tension is largest, still has the ram's push of two steps before.
    late = 1.5 * mass_ratio / segments + math.log(1e4) / 1e4
    push = 2 * mass_ratio / segments
    assert program == pytest.approx(formula, abs=late + push)


# --- fixed and yielding toes --------------------------------------------------------------------


def test_a_fixed_toe_doubles_the_force_and_sends_it_back():
    segments = 200
    bar = uniform_bar(segments)
    fixed = soil(bar.weight.size, toe=(2e6 / bar.step, 1e12, 0.0))
    outcome = hit(bar, SHORT, fixed, steps=600)
    sent = sent_at_head(outcome, segments)
    # 2e-6: the toe spring is a million times as stiff as the bar asks for within a step.
    assert outcome.envelope[-1, 0] == pytest.approx(2 * sent.max(), rel=2e-6)
    np.testing.assert_allclose(returned_at_head(outcome, 400, 150), sent[:150], atol=2e-6)


def test_a_viscous_toe_of_the_piles_impedance_swallows_the_wave():
    # exact: (J R - Z)/(J R + Z) = 0. The viscous damper works while the toe spring is pressed.
    segments = 200
    bar = uniform_bar(segments)
    strength = 1e-9
    grounds = soil(bar.weight.size, toe=(1e9, strength, 1 / strength), smith=False)
    outcome = hit(bar, SHORT, grounds, steps=600)
    # The damper starts to work a step after the wave has pressed the spring: that step comes back.
    assert np.abs(outcome.velocity[401:550]).max() < 1e-6


RIGID_PLASTIC = [
    # resistance [N], toe damping [s/m], set [m] as printed in mm; exact.
    (1000e3, 0.0, 29.580e-3),
    (2000e3, 0.0, 17.951e-3),
    (2000e3, 0.5, 8.044e-3),
]


@pytest.mark.parametrize(("resistance", "damping", "printed"), RIGID_PLASTIC)
def test_ram_on_a_long_pile_drives_a_rigid_plastic_toe_by_the_printed_set(
    resistance, damping, printed
):
    # M 5000 kg, v0 4.2 m/s, steel A 0.02 m2, E 210 GPa, rho 7850, L 40 m, no gravity.
    ram, velocity, area, length = 5000.0, 4.2, 0.02, 40.0
    wave_speed = math.sqrt(210e9 / 7850)
    impedance = 210e9 * area / wave_speed
    arriving = 2 * impedance * velocity
    until = ram / impedance * math.log(arriving / resistance)
    formula = 2 * ram * velocity / impedance * (1 - resistance / arriving)
    formula -= resistance * until / impedance
    formula *= impedance / (impedance + damping * resistance)
    segments = 1000
    bar = uniform_bar(segments, length / wave_speed, impedance, area)
    quake = 1e-6
    grounds = soil(bar.weight.size, toe=(resistance / quake, resistance, damping))
    # The first passage ends at 3 L/c, when the reflection from the head would be back.
    assert until < 2 * length / wave_speed
    outcome = hit(bar, bare_head(ram, velocity, impedance), grounds, steps=3 * segments)
    program = outcome.row["toe_most"]
    assert formula == pytest.approx(printed, abs=0.5e-6)
    # "Rigid" is a quake of 1e-6 m: the toe goes at the most so much further. The damping of a step
    # goes by the spring force expected from the step before: on a spring that goes from nothing to
    # its full force within one step, the first step of 8 us is without, at up to 2 v0.
    undamped = 2 * velocity * bar.step if damping else 0.0
    assert program == pytest.approx(formula, abs=quake + undamped + 2e-4 * formula)


# --- resistance read from the head --------------------------------------------------------------


@pytest.mark.parametrize("toe", [0.0, 0.12])
def test_the_head_record_gives_back_the_resistance_along_the_pile(toe):
    # [F(t1) + F(t2)]/2 + [v(t1) - v(t2)] Z/2 with t2 = t1 + 2L/c equals the total resistance while
    # all of it is mobilised: the Case method of Goble and Rausche; FHWA-NHI-16-010, chapter 10,
    # as quoted second-hand. Also exact, from the waves along the pile.
    segments = 200
    bar = uniform_bar(segments)
    strengths = {80: 0.03, 120: 0.05, 160: 0.02, segments: 0.04}
    grounds = soil(bar.weight.size, shaft=strengths, quake=1e-9, toe=(toe / 1e-9, toe, 0.0))
    # A heavy ram on a soft cushion pushes smoothly, and every node keeps moving down. The helmet is
    # lighter than in `cushioned_head`: its inertia would show in the head force.
    outcome = hit(bar, Head(20.0, 1.0, 2.0, 2e-7, 5e4), grounds, steps=4 * segments)
    # The trace holds the mean force of a step and the velocity at its end. The wave from below is
    # constant within a step, so what the force gains until the end is what the velocity gains.
    force = outcome.force[:-1]
    velocity = outcome.velocity[:-1] - 0.5 * np.diff(outcome.force)
    first = np.arange(100, 350)
    second = first + 2 * segments
    formula = 0.5 * (force[first] + force[second]) + 0.5 * (velocity[first] - velocity[second])
    assert np.all(outcome.toe_velocity[segments + 20 :] > 0)
    total = sum(strengths.values()) + toe
    error = np.abs(formula - total)
    # A straight line through the forces of two steps; 6e-4 in the few steps in which the front of
    # a reflection arrives and bends the force.
    assert np.quantile(error, 0.95) < 2e-5
    assert error.max() < 6e-4
