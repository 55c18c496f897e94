"""Resistance methods against the numbers in print.

All numbers are second-hand: read in digests or quotations of the named sources. What is only
from memory (the bounds of Stevens et al., the pair of Alm and Hamre) is not checked here.

* API RP 2GEO, 2011, main text.
* T. Alm and L. Hamre, Proc. 15th ICSMGE, Istanbul, 2001: sand from two digests, clay from one.
* R. S. Stevens, E. A. Wiltsie and T. H. Turton, OTC 4205, 1982: medium dense sand.
* NEN 9997-1: base resistance of a closed tube of 219 mm, three rows.
* B. H. Fellenius, in FHWA-NHI-16-009 (2016) Table 7-9.
* Rausche et al. 1996, in FHWA-NHI-16-009 Table 7-16; FHWA-NHI-16-010 section 12.6.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.integrate import quad

from matchup.ground import alm_hamre_2001 as alm_hamre
from matchup.ground import api_2011 as api
from matchup.ground import effective_stress, nen_base, stevens_1982
from matchup.ground.basis import Choices, Ground
from matchup.ground.soil import SETUP
from matchup.ground.stages import resistance_stages
from matchup.model.ground import Layer, Profile
from matchup.model.pile import Section
from tests.grounds import CLOSED, KPA, MPA, TUBE, WATER, clay, pile, sand, sounding, unit_of

# --- API RP 2GEO 2011, second-hand --------------------------------------------------------------

# Soil, density, beta, f_lim kPa, Nq, q_lim MPa, as printed.
API_SAND = [
    ("sand", "medium dense", 0.37, 81, 20, 5),
    ("sand", "dense", 0.46, 96, 40, 10),
    ("sand", "very dense", 0.56, 115, 50, 12),
    ("sand-silt", "medium dense", 0.29, 67, 12, 3),
    ("sand-silt", "dense", 0.37, 81, 20, 5),
    ("sand-silt", "very dense", 0.46, 96, 40, 10),
]


@pytest.mark.parametrize(("soil", "density", "beta", "f_lim", "nq", "q_lim"), API_SAND)
def test_api_sand_has_the_printed_factors_and_limits(soil, density, beta, f_lim, nq, q_lim):
    layer = Layer(0, 10, soil, 20e3, density=density)
    shaft, toe = api.unit(layer, np.array([50 * KPA, 1 * MPA]), np.full(2, math.nan))
    assert shaft / KPA == pytest.approx([beta * 50, f_lim], rel=1e-12)
    assert toe / KPA == pytest.approx([nq * 50, 1000 * q_lim], rel=1e-12)


@pytest.mark.parametrize(
    ("psi", "alpha"), [(0.25, 1.000), (0.5, 0.7071), (1, 0.5000), (2, 0.4204), (4, 0.3536)]
)
def test_api_clay_has_the_printed_alpha(psi, alpha):
    assert api.clay_alpha(np.array([psi])) == pytest.approx(alpha, abs=0.00005)


def test_api_clay_alpha_is_at_most_one():
    assert api.clay_alpha(np.array([0.01, 0.2])) == pytest.approx([1, 1], abs=0)


def test_api_clay_toe_is_nine_times_the_strength():
    assert api.clay_toe(np.array([40 * KPA])) == pytest.approx(360 * KPA, rel=1e-12)


def test_api_total_of_a_closed_pile_is_the_integral_of_the_printed_formulas():
    # Independent sum: scipy's quadrature of the formulas written out here. Static; in driving the
    # clay's shaft is divided by 2.0 (Rausche et al. 1996), the sand's by 1.0.
    ground = Ground(Profile((clay(0, 8.3, 30 * KPA, 50 * KPA), sand(8.3, 25, "dense")), 0.0))

    def in_clay(z: float) -> float:
        effective = (17e3 - WATER) * z
        strength = 30 * KPA + 20 * KPA * z / 8.3
        psi = strength / effective
        return min(0.5 * psi ** (-0.25 if psi > 1 else -0.5), 1.0) * strength

    def in_sand(z: float) -> float:
        return min(0.46 * ((17e3 - WATER) * 8.3 + (20e3 - WATER) * (z - 8.3)), 96 * KPA)

    perimeter = math.pi * 0.508
    clay_part = quad(in_clay, 0, 8.3, limit=200)[0] * perimeter
    sand_part = quad(in_sand, 8.3, 19.4, limit=200)[0] * perimeter
    toe_stress = 40 * ((17e3 - WATER) * 8.3 + (20e3 - WATER) * (19.4 - 8.3))
    found = resistance_stages(pile(CLOSED), ground, "api 2011", [19.4], 1e-3)[1].stage
    # 1e-5: straight lines between nodes 5 cm apart.
    assert found.shaft == pytest.approx(clay_part / 2.0 + sand_part, rel=1e-5)
    assert found.toe == pytest.approx(toe_stress * math.pi * 0.508**2 / 4, rel=1e-9)


# --- Alm and Hamre 2001, second-hand ------------------------------------------------------------

QT, STRESS, DELTA = 20 * MPA, 100 * KPA, math.radians(29)
# Height above the tip m, unit friction kPa, as printed.
FATIGUE = [(0, 146.34), (5, 77.64), (20, 32.68)]


@pytest.mark.parametrize(("height", "printed"), FATIGUE)
def test_alm_hamre_sand_friction_falls_off_as_printed(height, printed):
    initial = alm_hamre.sand_initial(np.array([QT]), np.array([STRESS]), DELTA)
    residual = alm_hamre.sand_residual(initial)
    rate = alm_hamre.decay(np.array([QT]), np.array([STRESS]))
    friction = residual + (initial - residual) * np.exp(-rate * height)
    assert friction / KPA == pytest.approx(printed, abs=0.005)


@pytest.mark.parametrize(("height", "printed"), FATIGUE)
def test_alm_hamre_friction_is_as_printed_through_sounding_and_layers(height, printed):
    # Effective stress is 100 kPa at 10 m in soil of 10 kN/m3 above the weight of water.
    depth = np.arange(0.0, 40.01, 0.02)
    ground = Ground(
        Profile((Layer(0, 40, "sand", 10e3 + WATER),), 0.0),
        sounding(depth, np.full(depth.shape, QT), 100 * KPA, corrected=True),
    )
    unit = unit_of("alm hamre 2001", ground, CLOSED, [10.0 + height])
    at_tip = unit.shaft_at(10.0 + height)
    assert np.interp(10.0, unit.depth, at_tip) / KPA == pytest.approx(printed, abs=0.005)


def test_alm_hamre_sand_toe_is_as_printed():
    toe = alm_hamre.sand_toe(np.array([QT]), np.array([STRESS]))
    assert toe / KPA == pytest.approx(8656, abs=0.5)


def test_alm_hamre_clay_follows_the_printed_formulas():
    # No worked value is at hand: the formulas, computed here by hand for qt 1 MPa, p0' 50 kPa and
    # fs 30 kPa: fres = 0.004 x 1000 x (1 - 0.0025 x 20) = 3.8 kPa; toe 600 kPa.
    tip, stress, sleeve = np.array([1 * MPA]), np.array([50 * KPA]), np.array([30 * KPA])
    assert alm_hamre.clay_residual(tip, stress, sleeve) / KPA == pytest.approx(3.8, rel=1e-12)
    assert alm_hamre.clay_toe(tip) / KPA == pytest.approx(600, rel=1e-12)
    # Kept between 0 and the initial friction.
    assert alm_hamre.clay_residual(tip, stress, np.array([2 * KPA])) == 2 * KPA
    assert alm_hamre.clay_residual(np.array([50 * MPA]), stress, sleeve) == 0


def test_alm_hamre_faces_differ_by_the_sources():
    # Sand: half on either face, or all outside; clay: all on both, or all outside.
    depth = np.arange(0.0, 20.01, 0.02)
    for soil, share in (("sand", 0.5), ("clay", 1.0)):
        ground = Ground(
            Profile((Layer(0, 20, soil, 20e3),), 0.0),
            sounding(depth, np.full(depth.shape, 2 * MPA), 40 * KPA),
        )
        both, outer = (
            resistance_stages(
                pile(TUBE), ground, "alm hamre 2001", [15.0], 1e-3, choices=Choices(faces=faces)
            )[1].modes[0]
            for faces in ("both", "outer")
        )
        inside = (0.762 - 2 * 0.019) / 0.762
        assert both.outer == pytest.approx(share * outer.outer, rel=1e-12)
        assert both.inner == pytest.approx(share * inside * outer.outer, rel=1e-12)
        assert outer.inner == 0


# --- Stevens, Wiltsie and Turton 1982, second-hand ----------------------------------------------


def test_stevens_medium_dense_sand_is_as_printed():
    stress = np.array([180 * KPA])
    assert stevens_1982.sand_shaft(stress) / KPA == pytest.approx(58.75, abs=0.005)
    assert stevens_1982.sand_toe(stress) / KPA == pytest.approx(3600, abs=0.5)


def test_stevens_medium_dense_sand_has_the_printed_limits():
    stress = np.array([2 * MPA])
    assert stevens_1982.sand_shaft(stress) / KPA == pytest.approx(81.3, rel=1e-12)
    assert stevens_1982.sand_toe(stress) / MPA == pytest.approx(5, rel=1e-12)


# --- NEN 9997-1, second-hand --------------------------------------------------------------------


@pytest.mark.parametrize(
    ("means", "stress", "force"),
    [
        ((17.97, 17.73, 13.91), 11.12, 419),
        ((13.25, 11.75, 11.75), 8.49, 320),
        ((17.64, 13.69, 12.99), 10.03, 378),
    ],
)
def test_nen_base_resistance_is_as_printed(means, stress, force):
    first, second, third = (np.array([mean * MPA]) for mean in means)
    base = nen_base.base_resistance(first, second, third)
    assert base / MPA == pytest.approx(stress, abs=0.005)
    area = Section.pipe(0.219, 0.01, "closed").toe_area
    assert base * area / KPA == pytest.approx(force, abs=0.5)


def test_nen_base_resistance_is_at_most_15_mpa():
    assert nen_base.base_resistance(*(np.array([60 * MPA]),) * 3) == 15 * MPA


def test_nen_base_resistance_of_even_ground_is_the_factor_times_the_cone_resistance():
    # All three means are the same: 0.5 x 0.7 x (qc + qc) = 0.7 qc.
    depth = np.arange(0.0, 30.0, 0.02)
    means = nen_base.averages(depth, np.full(depth.shape, 10 * MPA), 15.0, 0.4)
    assert means == pytest.approx((10 * MPA,) * 3, rel=1e-12)


# --- tables, second-hand ------------------------------------------------------------------------


def test_effective_stress_ranges_are_the_printed_ones():
    assert effective_stress.BETA == {
        "clay": (0.15, 0.35),
        "silt": (0.25, 0.50),
        "sand": (0.30, 0.90),
        "gravel": (0.35, 0.80),
    }
    assert effective_stress.TOE_FACTOR == {
        "clay": (3, 30),
        "silt": (20, 40),
        "sand": (30, 150),
        "gravel": (60, 300),
    }


@pytest.mark.parametrize(
    ("soil", "factor"),
    [
        ("clay", 2.0),
        ("silt", 1.5),
        ("sand-clay", 1.5),
        ("sand-silt", 1.2),
        ("fine sand", 1.2),
        ("sand", 1.0),
        ("gravel", 1.0),  # printed as sand-gravel
    ],
)
def test_static_shaft_resistance_is_reduced_by_the_printed_setup_factor(soil, factor):
    assert SETUP[soil] == factor
    layer = Layer(0, 20, soil, 20e3, beta=0.3, toe_factor=30)
    stages = resistance_stages(
        pile(CLOSED), Ground(Profile((layer,), 0.0)), "effective stress", [12.0], 1e-3
    )
    static = 0.3 * (20e3 - WATER) * 12.0**2 / 2 * math.pi * 0.508
    assert stages[0].stage.shaft == pytest.approx(static / factor, rel=1e-9)


@pytest.mark.parametrize(
    ("soil", "damping"), [("sand", 0.16), ("sand-silt", 0.33), ("silt", 0.49), ("clay", 0.65)]
)
def test_damping_follows_the_soil(soil, damping):
    # FHWA-NHI-16-010 section 12.6: non-cohesive, silty or clayey sand, cohesive silt, clay.
    layer = Layer(0, 20, soil, 20e3, unit_shaft=30 * KPA, unit_toe=2 * MPA)
    stage = resistance_stages(pile(CLOSED), Ground(Profile((layer,), 0.0)), "direct", [12.0], 1e-3)[
        0
    ].stage
    assert stage.shaft_damping == pytest.approx(damping, rel=1e-12)
    assert stage.toe_damping == 0.5
    assert stage.shaft_quake == pytest.approx(2.5e-3, rel=1e-12)


@pytest.mark.parametrize(
    ("layer", "quake"),
    [
        (Layer(0, 20, "sand", 20e3, density="dense"), 0.508 / 120),
        (Layer(0, 20, "sand", 20e3, density="loose"), 0.508 / 60),
        (Layer(0, 20, "clay", 20e3, strength=20 * KPA), 0.508 / 60),
        (Layer(0, 20, "rock", 23e3), 1e-3),
    ],
)
def test_toe_quake_of_a_displacing_pile_follows_the_ground(layer, quake):
    # FHWA-NHI-16-010 section 12.6: D/120 dense or hard, D/60 loose or soft, 1 mm hard rock.
    given = {"unit_shaft": 30 * KPA, "unit_toe": 2 * MPA}
    layer = Layer(0, 20, layer.soil, 20e3, layer.density, layer.strength, **given)
    ground = Ground(Profile((layer,), 0.0))
    stage = resistance_stages(pile(CLOSED), ground, "direct", [12.0], 1e-3)[0].stage
    assert stage.toe_quake == pytest.approx(quake, rel=1e-12)
    assert stage.toe_damping == (0.16 if layer.soil == "rock" else 0.5)
