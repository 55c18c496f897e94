"""Physics and algebra that every blow must obey, over random realistic jobs.

No number here comes from the program's past: energy and momentum are conserved, a pile at rest
stays at rest, answers scale as the equations do, and a batch is its blows.
"""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from matchup.analysis.blow import AUDIT_LIMIT, Strikes, strike
from matchup.analysis.chain import build_chains
from matchup.model.cushion import Spring
from matchup.model.job import Analysis
from matchup.wave.layout import COLUMNS, DIVERGED, ENDED, Bar, Blows, Grounds
from matchup.wave.march import march
from matchup.wave.rest import rest
from tests.chains import (
    Chain,
    Head,
    blow,
    build,
    default_segments,
    hit,
    random_chain,
    random_chains,
    soil,
    stepped_bar,
    strikes,
    uniform_bar,
)

seeds = st.integers(0, 2**31)
few = settings(max_examples=60, deadline=None)


def chain_of(seed: int) -> Chain:
    return random_chain(np.random.default_rng(seed))


# --- conservation -------------------------------------------------------------------------------


def test_the_energy_audit_closes_within_half_a_percent_on_nearly_all_random_jobs():
    # Asked: below 0.5 %; above 2 % the analysis refuses. What is lost is what the pile loses by
    # getting the mean of each step's head force; it falls with the square of the step.
    balance = np.abs([blow(chain).balance[0] for chain in random_chains(21, 300)])
    assert np.mean(balance < 0.005) > 0.9
    assert balance.max() < AUDIT_LIMIT


def test_the_energy_audit_closes_ever_better_with_shorter_steps():
    chains = random_chains(22, 30)
    coarse, fine = (
        np.array([abs(blow(chain, refinement).balance[0]) for chain in chains])
        for refinement in (1, 6)
    )
    assert fine.max() < 0.002
    assert fine.mean() < coarse.mean() / 4


@few
@given(seed=seeds, smith=st.booleans(), gravity=st.booleans())
def test_every_random_blow_ends_is_finite_and_passes_its_audit(seed, smith, gravity):
    chain = chain_of(seed)
    struck = blow(chain, 1.5, analysis=Analysis(gravity, "smith" if smith else "viscous"))
    assert struck.sound[0], struck.why_unsound(0)
    assert np.all(np.isfinite(struck.raw))


@few
@given(
    ram=st.floats(0.1, 10),
    k1=st.floats(0.5, 500),
    k2=st.floats(0.5, 500),
    helmet=st.floats(0.01, 1),
    e1=st.floats(0.3, 1),
    e2=st.floats(0.3, 1),
    segments=st.integers(5, 60),
    steps=st.integers(1, 400),
)
def test_a_free_pile_keeps_all_the_momentum_of_the_ram(
    ram, k1, k2, helmet, e1, e2, segments, steps
):
    head = Head(ram, 1.0, k1, helmet, k2, e1, e2)
    outcome = hit(uniform_bar(segments), head, steps=steps)
    assert outcome.row["momentum"] == pytest.approx(ram, rel=1e-10)


@few
@given(ram=st.floats(0.1, 10), k=st.floats(0.5, 200), segments=st.integers(20, 80))
def test_a_free_pile_and_elastic_cushions_lose_no_energy_that_the_audit_does_not_see(
    ram, k, segments
):
    head = Head(ram, 1.0, k, 0.1 * ram, 5 * k)
    outcome = hit(uniform_bar(segments), head, steps=3 * segments)
    # A free pile can only hold the energy that passed its head; nothing leaves through the soil.
    assert outcome.row["soil_work"] == pytest.approx(0.0, abs=1e-12)
    assert outcome.row["passed_most"] <= 0.5 * ram * (1 + 1e-3)


# --- rest ---------------------------------------------------------------------------------------


@pytest.mark.parametrize("smith", [True, False])
def test_a_pile_at_rest_on_its_soil_stays_at_rest(smith):
    # Shaft and toe of a 20 m concrete pile; the ram hangs so softly that it does nothing.
    nodes, gravity = 41, 9.81
    bar = uniform_bar(nodes - 1, 20 / 3800, 1.1e6, 0.12)
    weight = np.full(nodes, 0.12 * 2400 * 0.5 * gravity)
    weight[[0, -1]] /= 2
    bar = Bar(bar.step, bar.impedance, bar.area, weight)
    strength = np.linspace(0, 15e3, nodes)
    stiffness = strength / 2.5e-3
    load = 800 * gravity
    toe = (100e3 / 4e-3, 100e3)
    settlement, settled = rest(
        load, weight, bar.impedance / bar.step, stiffness, strength, toe[0], toe[1]
    )
    assert settled
    grounds = Grounds(
        stiffness[None],
        strength[None],
        np.full((1, nodes), 0.2),
        np.array([[*toe, 0.5]]),
        settlement[None],
        smith,
    )
    # A ram of next to nothing and next to no weight, with the helmet's weight on the pile.
    head = Head(1e-9, 1e-3, 1e-6, 800.0, 3e8, gravity=gravity)
    outcome = hit(bar, head, grounds, steps=2000)
    np.testing.assert_allclose(outcome.toe, settlement[-1], rtol=1e-9)
    assert np.abs(outcome.toe_velocity).max() < 1e-9
    # Along the pile the force stays the weight above, less what the shaft has taken.
    taken = np.minimum(stiffness * settlement, strength)
    static = load + np.cumsum(weight[:-1]) - np.cumsum(taken[:-1])
    middle = 0.5 * (static[1:] + static[:-1])
    spread = 0.51 * np.abs(np.diff(static)) + 1e-3
    assert np.all(np.abs(outcome.envelope[1:-1, 0] - middle) <= spread)
    assert np.all(np.abs(outcome.envelope[1:-1, 1] - middle) <= spread)


# --- scaling and symmetry -----------------------------------------------------------------------


@few
@given(seed=seeds, forces=st.floats(0.1, 10))
def test_all_forces_and_masses_scaled_alike_leave_motion_and_scale_stress(seed, forces):
    # The equations are linear in force over mass: areas, ram, helmet, cushions and resistance
    # times the same factor give the same motion. With section and resistance scaled, stress stays.
    rng = np.random.default_rng(seed)
    segments = 30
    quake, toe_quake = rng.uniform(1e-3, 5e-3, 2)
    base = {
        "ram": rng.uniform(1e3, 8e3),
        "velocity": rng.uniform(2, 5),
        "k1": rng.uniform(1e9, 4e9),
        "helmet": rng.uniform(300, 1200),
        "k2": rng.uniform(1e8, 1e9),
        "e1": 0.8,
        "e2": 0.5,
    }
    impedance = rng.uniform(3e5, 2e6)
    shaft = {node: rng.uniform(5e3, 40e3) for node in range(8, segments)}
    toe = rng.uniform(100e3, 900e3)

    def run(factor):
        head = dict(base)
        for name in ("ram", "k1", "helmet", "k2"):
            head[name] = head[name] * factor
        bar = uniform_bar(segments, 5e-3, impedance * factor, 0.1 * factor)
        grounds = soil(
            segments + 1,
            {node: value * factor for node, value in shaft.items()},
            quake,
            0.2,
            (toe * factor / toe_quake, toe * factor, 0.5),
        )
        return hit(bar, Head(**head), grounds, steps=300, substeps=16)

    one, other = run(1.0), run(forces)
    np.testing.assert_allclose(other.toe, one.toe, rtol=1e-7, atol=1e-12)
    for name in ("peak_stress", "tension_stress"):
        assert other.row[name] == pytest.approx(one.row[name], rel=1e-7, abs=1.0)
    assert other.row["passed_most"] == pytest.approx(forces * one.row["passed_most"], rel=1e-7)


@few
@given(seed=seeds, factor=st.floats(0.2, 5))
def test_velocity_quake_and_strength_scaled_alike_scale_every_answer(seed, factor):
    # Without damping (whose velocity is absolute) and weight the chain is homogeneous of degree
    # one: velocity and strengths times a factor, stiffnesses as they were.
    rng = np.random.default_rng(seed)
    segments = 25
    shaft = {node: rng.uniform(5e3, 40e3) for node in range(5, segments)}
    quake, toe, toe_k = 2.5e-3, rng.uniform(1e5, 9e5), rng.uniform(5e7, 5e8)

    def run(scale):
        bar = uniform_bar(segments, 4e-3, 8e5)
        grounds = soil(
            segments + 1,
            {node: value * scale for node, value in shaft.items()},
            quake * scale,
            0.0,
            (toe_k, toe * scale, 0.0),
        )
        return hit(bar, Head(4e3, 3.0 * scale, 2e9, 600.0, 4e8, 0.8, 0.5), grounds, steps=200)

    one, other = run(1.0), run(factor)
    np.testing.assert_allclose(other.toe, factor * one.toe, rtol=1e-7, atol=1e-12)
    np.testing.assert_allclose(other.envelope, factor * one.envelope, rtol=1e-7, atol=1e-3)


def test_the_same_pile_cut_into_parts_of_one_kind_is_the_same_pile():
    # Twice the segments at half the length move the answer by the discretisation only; the same
    # segments listed as three parts move nothing at all.
    head = Head(4e3, 3.0, 2e9, 600.0, 4e8, 0.8, 0.5)
    whole = hit(uniform_bar(60, 5e-3, 1e6), head, steps=300)
    parts = hit(stepped_bar([(10, 1e6), (30, 1e6), (20, 1e6)], 5e-3 / 60), head, steps=300)
    np.testing.assert_array_equal(whole.envelope, parts.envelope)


# --- batches ------------------------------------------------------------------------------------


def mixed_batch(seed: int, count: int = 150):
    """Return chains of one pile with two stages and two hammers, and a mixed batch on them."""
    rng = np.random.default_rng(seed)
    one = random_chain(rng, "concrete")
    stage = one.stage
    half = type(stage)("half", stage.penetration / 2, stage.shaft / 2, stage.toe, 1e-3)
    hammer = one.hammer
    small = type(hammer)(
        "small", "drop", hammer.ram_mass / 2, 0.1, 2.0, 0.8, helmet_mass=hammer.helmet_mass
    )
    chains = build_chains(
        one.pile, [stage, half], [hammer, small], Analysis(), default_segments(one)
    )
    batch = Strikes(
        rng.integers(0, 2, count),
        rng.integers(0, 2, count),
        one.cushion.stiffness * rng.uniform(0.3, 3, count),
        rng.uniform(0.3, 0.9, count),
        rng.uniform(0.2, 1.3, count),
    )
    return chains, batch


def rows_of(batch: Strikes, rows) -> Strikes:
    return Strikes(*(None if column is None else column[rows] for column in batch))


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_a_blow_gives_the_same_answer_alone_in_a_batch_and_in_any_order(seed):
    chains, batch = mixed_batch(seed)
    together = strike(chains, batch, workers=1).raw
    order = np.random.default_rng(seed).permutation(batch.stroke.size)
    shuffled = strike(chains, rows_of(batch, order), workers=1).raw
    np.testing.assert_allclose(shuffled, together[order], rtol=1e-9, atol=1e-12)
    for row in (0, 7, 149):
        alone = strike(chains, rows_of(batch, [row]), workers=1).raw
        np.testing.assert_allclose(alone[0], together[row], rtol=1e-9, atol=1e-12)


def test_the_number_of_workers_changes_nothing():
    chains, batch = mixed_batch(4, 400)
    one, two = (strike(chains, batch, workers=workers).raw for workers in (1, 2))
    np.testing.assert_array_equal(one, two)


def test_a_diverging_blow_is_caught_and_spoils_no_other():
    # A queue longer than there are lanes; in every third blow squares run over the largest float,
    # or there is none to begin with, and another blow takes its lane. Contacts and soil laws
    # bound every force, so that no realistic number makes the march diverge.
    bar = uniform_bar(20, 5e-3, 1e6)
    good = Head(4e3, 3.0, 2e9, 600.0, 4e8, 0.8, 0.5).row()
    rows = np.array([good] * 40)
    rows[::3, 1] = 1e200
    rows[::6, 1] = np.nan
    grounds = soil(21, dict.fromkeys(range(5, 21), 50e3), 2.5e-3, 0.2, (1e8, 3e5, 0.5))
    blows = Blows(np.zeros(40, np.int64), np.full(40, 4, np.int64), rows)
    out = np.zeros((40, len(COLUMNS)))
    none = np.zeros((0, 21, 2)), np.zeros((0, 4))
    march(bar, grounds, blows, np.arange(40), (0, 100_000), out, *none)
    is_bad = np.arange(40) % 3 == 0
    assert np.all(out[is_bad, 0] == DIVERGED)
    assert np.all(out[is_bad, 1] < 1000)
    assert np.all(out[~is_bad, 0] == ENDED)
    np.testing.assert_array_equal(out[~is_bad], np.broadcast_to(out[1], (26, len(COLUMNS))))


def test_keeping_the_detail_of_a_blow_changes_nothing():
    chains, batch = mixed_batch(5, 20)
    plain, detailed = (strike(chains, batch, detail=detail, workers=1) for detail in (False, True))
    np.testing.assert_array_equal(plain.raw, detailed.raw)
    # The envelope's extremes are the reported ones; on a uniform pile stress is force over area.
    area = chains.bar.area[0]
    tallest = detailed.envelope[:, :, 0].max(axis=1) / area
    deepest = -detailed.envelope[:, :, 1].min(axis=1) / area
    np.testing.assert_allclose(tallest, detailed.compression, rtol=1e-12)
    np.testing.assert_allclose(np.maximum(deepest, 0), detailed.tension, rtol=1e-12)


def test_every_column_of_the_result_is_filled():
    chains, batch = mixed_batch(6, 16)
    raw = strike(chains, batch, workers=1).raw
    assert raw.shape == (16, len(COLUMNS))
    assert np.all(np.isfinite(raw))


# --- monotone behaviour -------------------------------------------------------------------------


def test_the_set_grows_with_the_stroke_on_realistic_jobs():
    for chain in random_chains(23, 90):
        strokes = np.linspace(0.6 * chain.stroke, 1.6 * chain.stroke, 25)
        struck = strike(build(chain), strikes(chain, strokes), workers=1)
        moved = struck.raw[:, COLUMNS.index("toe_most")]
        growth = np.diff(moved) / moved[:-1]
        # Beyond 20 mm a blow, fewer than 50 blows a metre, ram and helmet come down on the moving
        # pile a second and third time, and whether such an impact still joins the largest toe
        # displacement changes with the stroke: drops up to 1.3 % were seen in 240 jobs, 0.4 mm.
        assert np.all(growth[moved[:-1] < 20e-3] > 0)
        assert np.all(growth > -0.02)
        assert moved[-1] > moved[0]


def test_more_resistance_gives_less_set():
    for chain in random_chains(24, 60):
        sets = []
        for factor in (0.8, 1.0, 1.25):
            stage = chain.stage
            changed = type(stage)(
                "changed",
                stage.penetration,
                stage.shaft * factor,
                stage.toe * factor,
                1e-3,
                stage.shaft_quake,
                stage.toe_quake,
                stage.shaft_damping,
                stage.toe_damping,
                stage.shaft_shape,
            )
            sets.append(blow(chain._replace(stage=changed)).set[0])
        assert sets[0] >= sets[1] >= sets[2]


def test_a_softer_cushion_lowers_the_largest_head_force():
    for chain in random_chains(25, 60):
        forces = []
        for factor in (0.25, 1.0):
            softer = Spring(chain.cushion.stiffness * factor, chain.cushion.restitution)
            struck = blow(chain._replace(cushion=softer))
            forces.append(struck.raw[0, COLUMNS.index("force_most")])
        assert forces[0] < forces[1] * 1.02
