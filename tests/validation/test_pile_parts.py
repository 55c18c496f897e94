"""Piles of several parts against closed forms, through the model classes.

Sources. Impedance step, and waves in bars with an end mass: K. F. Graff, *Wave Motion in Elastic
Solids*, chapter 2; S. P. Timoshenko and J. N. Goodier, *Theory of Elasticity*, "Longitudinal impact
of bars". Each value follows from the equation given beside it: exact. That a front in a tapered
bar keeps its energy, force over root of area, is the transport equation of a discontinuity.
"""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from matchup.analysis.chain import build_chains, cut_bar
from matchup.model.job import Analysis
from matchup.model.limits import GivenLimits, part_limits
from matchup.model.pile import Fill, Part, Pile, Section, concrete_modulus
from tests import jobs
from tests.chains import bare_head, hit

G = 9.80665
STEEL = (210e9, 7850.0, 355e6)


def tube(length: float, wall: float = 0.012, name: str = "", diameter: float = 0.5) -> Part:
    section = Section.pipe(diameter, wall, "closed")
    return Part("steel", section, length, *STEEL, name=name)


def concrete(length: float, width: float = 0.35, name: str = "") -> Part:
    strength = 50e6
    modulus = concrete_modulus(strength)
    return Part("concrete", Section.square(width), length, modulus, 2400.0, strength, name=name)


def struck(pile: Pile, segments: int, ram: float, velocity: float = 2.0, share: float = 0.9):
    """March a ram directly on a weightless pile, until the front has run to a share of it."""
    bar, depth, part, _ = cut_bar(pile, 0.0, segments)
    head = bare_head(ram, velocity, float(bar.impedance[0]))
    return hit(bar, head, steps=int(share * bar.impedance.size)), depth, part


# --- impedance steps ------------------------------------------------------------------------------

UPPER = tube(12.0, 0.020, "upper")
LOWER = tube(12.0, 0.010, "lower")
FOLLOWER = tube(12.0, 0.020, "follower")


@pytest.mark.parametrize(
    "pile",
    [Pile((UPPER, LOWER)), Pile((LOWER, UPPER)), Pile((LOWER,), FOLLOWER)],
    ids=["thinner below", "thicker below", "follower"],
)
def test_a_step_of_the_impedance_transmits_its_share(pile):
    # 2 Z2 / (Z1 + Z2) of the force, with Z = E A / c by hand.
    above, below = (210e9 * p.section.area / math.sqrt(210e9 / 7850) for p in pile.column)
    # A ram that is stopped within a few steps: only the front counts.
    outcome, depth, part = struck(pile, 1200, ram=0.01 * above * 24 / 5172)
    peaks = outcome.envelope[:, 0]
    first = peaks[np.searchsorted(depth, 3.0)]
    second = peaks[np.searchsorted(depth, 18.0)]
    # The contact spring smears the front alike at every node.
    assert second / first == pytest.approx(2 * below / (above + below), rel=1e-9)
    assert part.tolist() == [0] * 600 + [1] * 600


def test_a_step_of_the_impedance_reflects_its_share():
    above, below = (p.impedance for p in (UPPER, LOWER))
    bar, _, _, _ = cut_bar(Pile((UPPER, LOWER)), 0.0, 1200)
    outcome = hit(bar, bare_head(0.01 * above * 24 / 5172, 2.0, above), steps=1150)
    # The tension that comes back up the upper part over the compression that went down it.
    node = 200
    down, back = outcome.envelope[node, 0], -outcome.envelope[node, 1]
    assert back / down == pytest.approx((above - below) / (above + below), rel=1e-9)


def test_parts_of_different_wave_speed_are_crossed_in_their_own_time():
    pile = Pile((concrete(9.3, name="upper"), tube(14.9, name="lower")))
    speeds = math.sqrt(concrete(1).modulus / 2400), math.sqrt(210e9 / 7850)
    whole = 9.3 / speeds[0] + 14.9 / speeds[1]
    bar, depth, part, _ = cut_bar(pile, 0.0, 64)
    assert bar.step * bar.impedance.size == pytest.approx(whole, rel=1e-12)
    assert depth[-1] == pytest.approx(24.2, rel=1e-12)
    assert abs(np.count_nonzero(part == 0) * bar.step - 9.3 / speeds[0]) < bar.step
    outcome = hit(bar, bare_head(2000.0, 2.0, pile.head.impedance), steps=80)
    arrived = np.flatnonzero(np.abs(outcome.toe_velocity) > 1e-6)[0]
    assert arrived * bar.step == pytest.approx(whole, abs=1.01 * bar.step)


@pytest.mark.parametrize("seed", range(40))
def test_rounding_of_travel_times_stays_within_a_step_and_keeps_the_whole(seed):
    rng = np.random.default_rng(seed)
    kinds = (tube, concrete)
    count = int(rng.integers(1, 6))
    parts = tuple(kinds[rng.integers(2)](float(rng.uniform(0.2, 20))) for _ in range(count))
    pile = Pile(parts, tube(3.0) if seed % 2 else None, shoe_mass=80.0 * (seed % 3))
    segments = int(rng.integers(20, 120))
    bar, depth, part, _ = cut_bar(pile, G, segments)
    times = np.array([p.travel_time for p in pile.column])
    counts = np.bincount(part)
    assert counts.sum() * bar.step == pytest.approx(times.sum(), rel=1e-12)
    assert counts.sum() >= segments
    off = np.abs(counts * bar.step - times)
    long = times >= bar.step
    if counts.sum() == segments:
        assert np.all(off[long] < bar.step * (1 + 1e-9))
    # Length, weight and section are kept whatever is rounded.
    assert depth[-1] == pytest.approx(sum(p.length for p in pile.column), rel=1e-12)
    assert bar.weight.sum() == pytest.approx(G * pile.mass, rel=1e-12)
    for number, one in enumerate(pile.column):
        assert bar.area[part == number] == pytest.approx(one.section.area, rel=1e-12)


# --- a mass at the toe ----------------------------------------------------------------------------


def test_a_driving_shoe_gives_way_like_a_mass_at_the_end_of_a_bar():
    # A constant wave F meets the mass: m v' = 2 F - Z v, v = 2 F / Z (1 - exp(-Z t / m)).
    length, mass = 20.0, 400.0
    part = tube(length)
    bar, _, _, _ = cut_bar(Pile((part,), shoe_mass=mass), 0.0, 2000)
    heavy = 1e5  # kg: within the time looked at the ram slows down by 2 %
    outcome = hit(bar, bare_head(heavy, 1.0, part.impedance, stiff=1e6), steps=3600)
    time = np.arange(1, 3601) * bar.step
    since = time - length / part.wave_speed
    # The wave that arrives has decayed by exp(-Z t / M) since impact at the head.
    rate, fall = part.impedance / mass, part.impedance / heavy
    after = since > 0
    exact = 2 * rate / (rate - fall) * (np.exp(-fall * since) - np.exp(-rate * since))
    found = outcome.toe_velocity[after]
    # One step makes 2 Z dt / m of the velocity; the heavier segment answers half a step late, and
    # the contact spring smears the front over ln(1e6) / 1e6 M / Z, one step.
    assert found == pytest.approx(exact[after], abs=1.5 * 2 * rate * bar.step)
    assert found[-1] == pytest.approx(exact[-1], rel=2e-3)


# --- taper ----------------------------------------------------------------------------------------


def test_a_tapered_pile_has_the_volume_of_a_frustum():
    section = Section.round(0.40, 0.22)
    part = Part("timber", section, 14.0, 9.45e9, 800.0, 9e6)
    volume = math.pi * 14 / 12 * (0.40**2 + 0.40 * 0.22 + 0.22**2)
    assert part.mass == pytest.approx(800 * volume, rel=1e-12)
    bar, _, _, ends = cut_bar(Pile((part,)), G, 30)
    assert bar.weight.sum() == pytest.approx(G * 800 * volume, rel=1e-12)
    # More of it is above.
    assert bar.weight[1] > 2.5 * bar.weight[-2]
    diameters = 0.40 - 0.18 * np.arange(31) / 30
    areas = math.pi / 4 * diameters**2
    # Stresses are reckoned on the section where they occur.
    assert ends[:, 0] == pytest.approx(areas[:-1], rel=1e-12)
    assert ends[:, 1] == pytest.approx(areas[1:], rel=1e-12)


def test_a_front_in_a_tapered_pile_keeps_its_energy():
    # Force over the root of the area stays; so the stress grows as the diameter falls.
    part = Part("timber", Section.round(0.40, 0.20), 14.0, 9.45e9, 800.0, 9e6)
    outcome, depth, _ = struck(Pile((part,)), 2000, ram=0.6, share=0.95)
    diameter = 0.40 - 0.20 * depth / 14
    front = outcome.envelope[:, 0] / diameter
    near, far = np.searchsorted(depth, (1.0, 12.6))
    # The pulse is 0.6 kg over Z = 0.35 MN s/m long, 0.01 of the pile; what the taper sends back
    # of it meets the front nowhere.
    assert front[far] / front[near] == pytest.approx(1.0, rel=5e-3)


def test_a_tapered_pile_without_taper_is_the_uniform_one():
    plain = Part("timber", Section.round(0.3), 12.0, 9.45e9, 800.0, 9e6)
    tapered = replace(plain, section=Section.round(0.3, 0.3))
    for one, other in zip(
        cut_bar(Pile((plain,)), G, 25).bar, cut_bar(Pile((tapered,)), G, 25).bar, strict=True
    ):
        assert np.asarray(one) == pytest.approx(np.asarray(other), rel=1e-12)


# --- composite, plug ------------------------------------------------------------------------------


def test_a_filled_tube_has_the_stiffness_and_mass_of_both_by_hand():
    # 406.4 x 10 mm, E 210 GPa, filled with concrete of 30 GPa: by hand, areas from the circles.
    outer, inner = 0.4064, 0.3864
    steel = math.pi / 4 * (outer**2 - inner**2)
    core = math.pi / 4 * inner**2
    assert 1e4 * steel == pytest.approx(124.5, abs=0.1)
    assert 1e4 * core == pytest.approx(1172.6, abs=0.1)
    part = replace(
        tube(20.0, 0.010, diameter=outer), fill=Fill(core, 30e9, 2400.0, 40e6), name="filled"
    )
    stiffness = 210e9 * steel + 30e9 * core
    assert stiffness / 1e9 == pytest.approx(6.133, abs=1e-3)
    mass = 7850 * steel + 2400 * core
    assert mass == pytest.approx(379.2, abs=0.1)
    assert part.stiffness == pytest.approx(stiffness, rel=1e-12)
    assert part.mass == pytest.approx(20 * mass, rel=1e-12)
    assert part.wave_speed == pytest.approx(math.sqrt(stiffness / mass), rel=1e-12)
    assert part.impedance == pytest.approx(math.sqrt(stiffness * mass), rel=1e-12)
    # One strain in both: of a force of 1 MN the steel bears its share of the stiffness.
    in_steel = 1e6 * 210e9 / stiffness
    assert 1e6 / part.bearing_area == pytest.approx(in_steel, rel=1e-12)


def test_a_filled_tube_is_limited_by_what_its_fill_can_bear():
    inner = 0.3864
    fill = Fill(math.pi / 4 * inner**2, 30e9, 2400.0, 40e6)
    part = replace(tube(20.0, 0.010, diameter=0.4064), fill=fill)
    limits = part_limits(part, GivenLimits("aashto"))
    # 0.85 f'c in the concrete is 7 times as much in the steel, below 0.9 fy.
    assert limits.squeeze.stress == pytest.approx(7 * 0.85 * 40e6, rel=1e-12)
    assert limits.squeeze.stress < 0.9 * 355e6
    # In tension the steel bears alone.
    force = limits.pull.stress * part.bearing_area
    assert force == pytest.approx(0.9 * 355e6 * part.section.area, rel=1e-12)
    strong = replace(part, fill=replace(fill, strength=90e6))
    assert part_limits(strong, GivenLimits("aashto")).squeeze.stress == 0.9 * 355e6


def test_a_plug_adds_mass_and_no_stiffness():
    open_tube = replace(tube(20.0), section=Section.pipe(0.5, 0.012, "open"))
    core = open_tube.section.core
    plugged = replace(open_tube, carried=1900 * core.area)
    assert plugged.stiffness == open_tube.stiffness
    added = 1900 * math.pi / 4 * 0.476**2
    assert plugged.mass_per_length == pytest.approx(7850 * open_tube.section.area + added)
    ratio = open_tube.mass_per_length / plugged.mass_per_length
    assert plugged.wave_speed / open_tube.wave_speed == pytest.approx(math.sqrt(ratio))


# --- rake, weight, shaft --------------------------------------------------------------------------


def test_a_raked_pile_by_hand():
    # 1:4, 14.04 degrees: cos 0.97014. Drop of 1 m at 55 %: v = sqrt(2 x 9.80665 x 0.55 x 0.97014).
    pile = Pile((tube(18.0),), rake=math.atan(1 / 4))
    cosine = 4 / math.sqrt(17)
    assert cosine == pytest.approx(0.97014, abs=5e-6)
    hammer = jobs.drop(5.0)
    assert hammer.impact_velocity(1.0, pile.rake) == pytest.approx(3.2350, abs=5e-5)
    stage = jobs.stage("x", 15.0, 800.0, 700.0)
    upright = replace(pile, rake=0.0)
    chains, plumb = (build_chains(p, [stage], [hammer], Analysis(), 40) for p in (pile, upright))
    assert chains.weights == pytest.approx(cosine * plumb.weights, rel=1e-12)
    assert chains.gravity == pytest.approx(cosine * G, rel=1e-12)
    # At rest the springs bear the component of the weight along the pile, the ram left out.
    grounds, row = chains.grounds, int(chains.ground_of[0, 0])
    settlement = grounds.settlement[row]
    borne = (grounds.stiffness[row] * settlement).sum() + grounds.toe[row, 0] * settlement[-1]
    weight = G * cosine * (pile.mass + hammer.helmet_mass)
    assert borne == pytest.approx(weight, rel=1e-9)


def test_a_follower_stays_above_the_ground_and_its_weight_is_borne_below():
    pile = Pile((tube(18.0),), follower=tube(4.0, name="follower"))
    stage = jobs.stage("x", 18.0, 800.0, 700.0)
    hammer = jobs.drop(5.0)
    chains = build_chains(pile, [stage], [hammer], Analysis(), 44)
    strength = chains.grounds.strength[0]
    # With the pile's head at the surface, all of the shaft is below the follower.
    assert strength.sum() == pytest.approx(800e3, rel=1e-12)
    above = chains.depth < 4.0 - 0.6
    assert strength[above] == pytest.approx(0.0, abs=1e-9)
    assert chains.weights[0] == pytest.approx(
        G * (pile.mass + hammer.helmet_mass + hammer.ram_mass), rel=1e-12
    )
    assert pile.length == 18.0
