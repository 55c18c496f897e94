"""Formulas of the site: vibration by hand, buckling against closed forms.

Vibration: ENV 1993-5:1998 annex C and BS 5228-2; the formulas second-hand, so what is checked is
the arithmetic; their factors by soil and ranges are from memory and checked by nothing here.
Buckling: Euler's cantilever is exact; the heavy cantilever is exact by the zero of a Bessel
function (Greenhill 1881), taken from `scipy`, and both together by the eigenvalues of a column of
finite differences.
"""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from scipy.linalg import eigh
from scipy.optimize import brentq
from scipy.special import jv

from matchup.errors import ModelError
from matchup.model.limits import stress_limits, wall_buckling_stress
from matchup.model.pile import Pile, Section
from matchup.model.stability import HEAVY_COLUMN, buckling_use
from matchup.model.vibration import RELATIONS, Vibration

# --- vibration ----------------------------------------------------------------------------------


def test_env_by_hand():
    """C 0.75, W 40 kJ at 20 m: 0.75 x 200 / 20 = 7.5 mm/s, whatever the depth."""
    place = Vibration("env 1993-5", 20.0, 0.01, factor=0.75)
    assert place.velocity(40e3, 5.0) == pytest.approx(7.5e-3)
    assert place.velocity(40e3, 15.0) == place.velocity(40e3, 5.0)


def test_bs_by_hand():
    """kp 1.5, W 40 kJ, 16 m along the ground and 12 m down: r 20 m, 300 / 49.129 = 6.106 mm/s."""
    place = Vibration("bs 5228-2", 16.0, 0.01, factor=1.5)
    assert place.velocity(40e3, 12.0) == pytest.approx(6.106e-3, abs=5e-7)


@pytest.mark.parametrize("relation", RELATIONS)
def test_four_times_the_energy_shakes_twice_as_much(relation):
    place = Vibration(relation, 16.0, 0.01, soil="medium")
    assert place.velocity(40e3, 12.0) == pytest.approx(2 * place.velocity(10e3, 12.0))


@pytest.mark.parametrize(
    ("changed", "field"),
    [
        ({"distance": 0.5}, "distance"),
        ({"distance": 112.0}, "distance"),
        ({"soil": "peat"}, "soil"),
        ({"soil": None}, "soil"),
        ({"factor": 2.0}, "soil"),
        ({"limit": 0.0}, "limit"),
        ({"relation": "ours"}, "relation"),
    ],
)
def test_what_the_relation_can_not_tell_is_refused(changed, field):
    with pytest.raises(ModelError) as caught:
        replace(Vibration("bs 5228-2", 16.0, 0.01, soil="medium"), **changed)
    assert field in [fault.field for fault in caught.value.faults]


# --- buckling -----------------------------------------------------------------------------------


def test_euler():
    """EI 1 MN m2 over 5 m, fixed below and free above: pi^2 / 100 MN."""
    assert buckling_use(1e6, 5.0, math.pi**2 / 100 * 1e6, 0.0) == pytest.approx(1.0, rel=1e-12)


def test_the_heavy_column_by_the_zero_of_a_bessel_function():
    zero = brentq(lambda x: jv(-1 / 3, x), 1.5, 2.2)
    assert pytest.approx(9 / 4 * zero**2, abs=5e-5) == HEAVY_COLUMN


def most_load(weight: float, cells: int = 400) -> float:
    """Load on a column of EI = L = 1 with its own weight at which it buckles, by differences.

    With the slope t along the column, EI t'' + (P + weight above) t = 0; t = 0 below, t' = 0 above.
    """
    h = 1 / cells
    x = h * np.arange(1, cells + 1)
    stiff = np.diag(np.full(cells, 2.0)) - np.eye(cells, k=1) - np.eye(cells, k=-1)
    stiff[-1, -1] = 1.0
    mass = np.eye(cells)
    mass[-1, -1] = 0.5
    own = np.diag(weight * (1 - x)) * mass
    return float(eigh(stiff / h**2 - own, mass, eigvals_only=True, subset_by_index=[0, 0])[0])


@pytest.mark.parametrize("share", [0.2, 0.5, 0.8])
def test_load_and_weight_together_are_on_the_safe_side_and_close(share):
    """Dunkerley's sum is never below the truth; it is within 3 % of it here."""
    weight = share * HEAVY_COLUMN
    use = buckling_use(1.0, 1.0, most_load(weight), weight)
    assert 1.0 - 2e-4 <= use <= 1.03  # 2e-4: the differences' own error, checked below


def test_the_differences_are_good_to_2e_4():
    assert most_load(0.0) == pytest.approx(math.pi**2 / 4, rel=2e-4)
    assert most_load(HEAVY_COLUMN) == pytest.approx(0.0, abs=2e-4)


@pytest.mark.parametrize(
    ("section", "inertia"),
    [
        (Section.square(0.4), 0.4 * 0.4**3 / 12),
        (Section.round(0.32), math.pi * 0.16**4 / 4),
        # A thin ring: pi r^3 t, to the square of t / 2 r.
        (Section.pipe(1.0, 0.002, "open"), math.pi * 0.499**3 * 0.002),
    ],
)
def test_second_moments_of_area(section, inertia):
    assert section.inertia == pytest.approx(inertia, rel=1e-5)


# --- walls --------------------------------------------------------------------------------------


def tube(slenderness: float) -> Pile:
    section = Section.pipe(1.2, 1.2 / slenderness, "open")
    return Pile.uniform("steel", section, 30.0, 210e9, 7850.0, 355e6)


def test_a_stocky_wall_yields_and_a_thin_one_buckles_without_a_jump():
    """Identities alone: the curve meets yield at D/t 60, falls, and never beats half of theory."""
    assert wall_buckling_stress(tube(59.0).toe) == 355e6
    assert wall_buckling_stress(tube(60.001).toe) == pytest.approx(355e6, rel=3e-4)
    stresses = [wall_buckling_stress(tube(s).toe) for s in (61, 80, 120, 200, 300)]
    assert stresses == sorted(stresses, reverse=True)
    for slenderness, stress in zip((61, 80, 120, 200, 300), stresses, strict=True):
        # A perfect cylinder: E t / (r sqrt(3 (1 - nu^2))), Timoshenko and Gere; exact.
        perfect = 210e9 * 2 / slenderness / math.sqrt(3 * (1 - 0.3**2))
        assert stress <= 0.5 * perfect


def test_the_wall_limits_compression_alone_and_only_where_it_is_lower():
    thin = tube(200.0)
    plain = stress_limits(thin, "aashto")
    kept = stress_limits(thin, "aashto", wall_buckling=0.9)
    assert kept.compression == pytest.approx(0.9 * wall_buckling_stress(thin.toe))
    assert kept.compression < plain.compression
    assert kept.tension == plain.tension
    assert "the wall buckles at" in plain.parts[0].warnings[0]
    assert not kept.parts[0].warnings
    assert stress_limits(tube(40.0), "aashto", wall_buckling=1.0).compression == 0.9 * 355e6
    solid = Pile.uniform("concrete", Section.square(0.4), 20.0, 34e9, 2400.0, 50e6)
    with pytest.raises(ModelError, match="must be left out"):
        stress_limits(solid, "aashto", wall_buckling=0.9)
