"""Samples: points, correlations, and the stages and blows that follow from factors."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from scipy import integrate, stats

from matchup.analysis.rig import Rig
from matchup.analysis.sampling import SCRAMBLINGS, Sampler, Scales, factors, sampled_stages
from matchup.ground.basis import Ground
from matchup.ground.cases import Case, Pause
from matchup.ground.stages import resistance_stages
from matchup.model.doubt import Correlation, Doubt, Doubtful, Lognormal, Uniform
from matchup.model.ground import Profile
from matchup.model.stage import Stage
from tests import jobs
from tests.grounds import SQUARE, clay, pile, sand

WIDE = Uniform(0.5, 2.0)


def of(*keys: str) -> Doubt:
    return Doubt(tuple(Doubtful(key, WIDE, key) for key in keys))


# --- points -------------------------------------------------------------------------------------


def test_more_points_of_a_seed_continue_the_first_ones():
    whole = Sampler(3, 5).draw(64)
    again = Sampler(3, 5)
    parts = np.concatenate((again.draw(16), again.draw(16), again.draw(32)), axis=1)
    assert whole.shape == (SCRAMBLINGS, 64, 3)
    assert np.array_equal(whole, parts)
    assert not np.array_equal(whole, Sampler(3, 6).draw(64))
    assert whole.min() > 0
    assert whole.max() < 1


def test_each_scrambling_fills_every_interval_once():
    """Of 2**m points of a digital net, one lies in each of 2**m equal intervals; exact."""
    points = Sampler(4, 1).draw(128)
    for scrambling in points:
        for column in scrambling.T:
            assert sorted(np.floor(128 * column).astype(int)) == list(range(128))


def test_correlated_factors_have_the_stated_correlation_and_their_own_distributions():
    doubt = Doubt(
        (
            Doubtful("shaft", Lognormal(1.0, 0.3), "shaft"),
            Doubtful("toe", Lognormal(1.2, 0.5), "toe"),
            Doubtful("efficiency", Uniform(0.8, 1.0), "efficiency"),
        ),
        (Correlation("shaft", "toe", 0.6), Correlation("toe", "efficiency", -0.3)),
    )
    drawn = factors(doubt, Sampler(3, 3).draw(2**12).reshape(-1, 3))
    logs = np.log(drawn[:, :2])
    assert np.corrcoef(logs.T)[0, 1] == pytest.approx(0.6, abs=0.002)
    # Spearman's rank correlation of a Gaussian copula: 6 / pi * asin(r / 2), Pearson 1907; exact.
    ranked = stats.spearmanr(drawn[:, 1], drawn[:, 2]).statistic
    assert ranked == pytest.approx(6 / math.pi * math.asin(-0.15), abs=0.002)
    assert stats.spearmanr(drawn[:, 0], drawn[:, 2]).statistic == pytest.approx(0.0, abs=0.002)
    for column, one in zip(drawn.T, doubt.inputs, strict=True):
        shares = np.array([0.05, 0.5, 0.95])
        assert np.quantile(column, shares) == pytest.approx(one.factor.quantile(shares), rel=2e-3)


def test_without_correlations_factors_are_independent():
    doubt = Doubt(of("shaft", "toe").inputs, (Correlation("shaft", "toe", 0.9),))
    drawn = factors(doubt, Sampler(2, 3).draw(256).reshape(-1, 2), correlated=False)
    assert np.corrcoef(drawn.T)[0, 1] == pytest.approx(0.0, abs=0.01)


# --- stages -------------------------------------------------------------------------------------


def one_stage(doubt: Doubt, stage: Stage, *drawn: float) -> Stage:
    return sampled_stages(doubt, [stage], np.array([drawn])).stages[0]


def test_whole_factors_scale_what_they_name():
    keys = ("resistance", "shaft", "toe", "shaft_quake", "toe_quake", "shaft_damping")
    stage = jobs.MIDDLE
    found = one_stage(of(*keys, "toe_damping"), stage, 1.1, 1.2, 1.3, 1.4, 1.5, 1.6, 1.7)
    assert found.shaft == pytest.approx(1.1 * 1.2 * stage.shaft, rel=1e-12)
    assert found.toe == pytest.approx(1.1 * 1.3 * stage.toe, rel=1e-12)
    assert found.shaft_quake == pytest.approx(1.4 * stage.shaft_quake, rel=1e-12)
    assert found.toe_quake == pytest.approx(1.5 * stage.toe_quake, rel=1e-12)
    assert found.shaft_damping == pytest.approx(1.6 * stage.shaft_damping, rel=1e-12)
    assert found.toe_damping == pytest.approx(1.7 * stage.toe_damping, rel=1e-12)
    assert found.shaft_shape == stage.shaft_shape
    assert found.set_needed == stage.set_needed


@pytest.mark.parametrize(
    "shape",
    [
        (),
        ((0.0, 0.0), (10.0, 1.0)),
        ((1.0, 3.0), (4.0, 1.0), (4.5, 0.0), (8.0, 2.0), (12.0, 5.0)),
        ((2.0, 1.0), (9.0, 1.0)),
    ],
)
def test_ranges_of_depth_scale_their_part_of_the_shaft(shape):
    """Against the integral of the scaled intensity by `scipy.integrate.quad`."""
    doubt = Doubt(
        (
            Doubtful("shaft", WIDE, "upper", 0.0, 3.0),
            Doubtful("resistance", WIDE, "middle", 3.0, 7.0),
            Doubtful("shaft", WIDE, "lower", 5.0),
        )
    )
    stage = Stage("here", 10.0, 4e5, 2e5, 1e-3, shaft_shape=shape)
    at, value = np.array(shape or ((0.0, 1.0), (10.0, 1.0))).T
    found = one_stage(doubt, stage, 0.6, 1.4, 1.9)

    def intensity(z: float) -> float:
        return float(np.interp(z, at, value, left=0.0, right=0.0))

    def factor(z: float) -> float:
        return 0.6 * (z < 3) + (z >= 3) * (1.4 if z < 7 else 1.0) * (1.9 if z >= 5 else 1.0)

    points = [3.0, 5.0, 7.0, *at[(at > 0) & (at < 10)]]
    whole, _ = integrate.quad(intensity, 0, 10, points=points, limit=200)
    parts, _ = integrate.quad(lambda z: intensity(z) * factor(z), 0, 10, points=points, limit=200)
    # The jump at the end of a range has a thickness of some 1e-6 m.
    assert found.shaft == pytest.approx(4e5 * parts / whole, rel=2e-6)
    shaped_at, shaped = np.array(found.shaft_shape).T
    for z in (1.5, 2.5, 3.5, 4.2, 5.5, 6.5, 7.5, 9.9):
        wanted = intensity(z) * factor(z)
        here = np.interp(z, shaped_at, shaped, left=0.0, right=0.0)
        assert here == pytest.approx(wanted, rel=1e-5, abs=1e-9)
    # Of the three only `middle` is about the toe as well, and it has ended.
    assert found.toe == stage.toe


@pytest.mark.parametrize(("tip", "factor"), [(6.99, 1.0), (7.0, 1.5), (8.99, 1.5), (9.0, 1.0)])
def test_a_toe_on_a_border_stands_on_the_ground_below(tip, factor):
    doubt = Doubt((Doubtful("toe", WIDE, "toe", 7.0, 9.0),))
    stage = Stage("here", tip, 4e5, 2e5, 1e-3)
    assert one_stage(doubt, stage, 1.5).toe == pytest.approx(factor * 2e5, rel=1e-12)


def grounds(setup: float, given: bool) -> Profile:
    """Clay over sand with its set-up times a factor; `given` states unit resistances."""
    unit = {"unit_shaft": 30e3, "unit_toe": 2e6} if given else {}
    return Profile(
        (
            clay(0.0, 6.0, 40e3, ocr=1.3, setup=1.8 * setup, **unit),
            sand(6.0, 20.0, "dense", setup=1.8 * setup, **unit),
        ),
        water=1.0,
    )


@pytest.mark.parametrize("method", ["api 2011", "direct"])
@pytest.mark.parametrize("factor", [0.7, 1.0, 1.35])
def test_doubt_about_set_up_is_that_of_ground_with_other_set_up(method, factor):
    """Against stages made anew from layers whose set-up factors are changed."""

    def stages(setup: float) -> list[Stage]:
        made = resistance_stages(
            pile(SQUARE, 20.0),
            Ground(grounds(setup, method == "direct")),
            method,
            [4.0, 9.0, 14.0],
            1e-3,
            [Case("best")],
            pauses=[Pause(9.0, 36 * 3600.0), Pause(14.0, 100 * 24 * 3600.0)],
        )
        return [one.stage for one in made]

    anew = stages(factor)
    assert len(anew) == 5
    for before, after in zip(stages(1.0), anew, strict=True):
        found = one_stage(of("setup"), before, factor)
        assert found.shaft == pytest.approx(after.shaft, rel=1e-9)
        assert found.setup == pytest.approx(after.setup, rel=1e-9)
        assert found.toe == pytest.approx(after.toe, rel=1e-12)


def test_set_up_never_falls_below_one():
    stage = Stage("here", 10.0, 4e5, 2e5, 1e-3, setup=1.2, static=True)
    found = one_stage(of("setup"), stage, 0.5)
    assert (found.shaft, found.setup) == (pytest.approx(4.8e5), pytest.approx(1.0))


# --- hammer and cushion -------------------------------------------------------------------------


def blow(job, scales=None):
    one = [np.zeros(1, np.int64)] * 4
    return Rig(job, 1, scales=scales).answer(*one, np.array([0.6]))


def scales(efficiency: float = 1.0, cushion: float = 1.0) -> Scales:
    return Scales(np.array([efficiency]), np.array([cushion]))


def test_a_factor_on_efficiency_is_a_hammer_of_that_efficiency():
    job = jobs.job(hammers=(jobs.hydraulic(5.0),), cushions=jobs.space(sheets=(8,)))
    other = replace(job, hammers=(replace(job.hammers[0], efficiency=0.85 * 0.9),))
    for found, wanted in zip(blow(job, scales(0.9)), blow(other), strict=True):
        assert found == pytest.approx(wanted, rel=1e-12)


def test_efficiency_stays_at_most_one():
    job = jobs.job(hammers=(jobs.hydraulic(5.0),), cushions=jobs.space(sheets=(8,)))
    other = replace(job, hammers=(replace(job.hammers[0], efficiency=1.0),))
    for found, wanted in zip(blow(job, scales(1.5)), blow(other), strict=True):
        assert found == pytest.approx(wanted, rel=1e-12)


def test_a_factor_on_the_cushion_s_stiffness_is_a_cushion_of_that_modulus():
    material = replace(jobs.OAK, modulus=1.2 * jobs.OAK.modulus)
    job = jobs.job(hammers=(jobs.hydraulic(5.0),), cushions=jobs.space((jobs.OAK,), (8,)))
    other = replace(job, cushions=jobs.space((material,), (8,)))
    for found, wanted in zip(blow(job, scales(cushion=1.2)), blow(other), strict=True):
        assert found == pytest.approx(wanted, rel=1e-12)
