"""Distributions of factors against `scipy.stats`, and correlations that can't be."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats

from matchup.errors import ModelError
from matchup.model.doubt import (
    Correlation,
    Doubt,
    Doubtful,
    Lognormal,
    Percentiles,
    Triangular,
    Uniform,
)

SHARES = np.array([1e-6, 0.01, 0.1, 0.3, 0.5, 0.77, 0.9, 0.999, 1 - 1e-9])


@pytest.mark.parametrize(("mean", "cov"), [(1.0, 0.2), (0.9, 0.05), (1.3, 1.1)])
def test_a_lognormal_factor_has_the_quantiles_of_the_library(mean, cov):
    spread = math.sqrt(math.log(1 + cov**2))
    known = stats.lognorm(s=spread, scale=mean * math.exp(-(spread**2) / 2))
    assert known.mean() == pytest.approx(mean, rel=1e-12)
    assert known.std() == pytest.approx(mean * cov, rel=1e-12)
    # The far quantile is good to what 1 - 1e-9 holds of digits.
    assert Lognormal(mean, cov).quantile(SHARES) == pytest.approx(known.ppf(SHARES), rel=1e-9)


@pytest.mark.parametrize("mode", [0.8, 0.9, 1.0, 1.3])
def test_a_triangular_factor_has_the_quantiles_of_the_library(mode):
    known = stats.triang(c=(mode - 0.8) / 0.5, loc=0.8, scale=0.5)
    found = Triangular(0.8, mode, 1.3).quantile(SHARES)
    assert found == pytest.approx(known.ppf(SHARES), rel=1e-9)


def test_a_uniform_factor_has_the_quantiles_of_the_library():
    known = stats.uniform(loc=0.7, scale=0.6)
    assert Uniform(0.7, 1.3).quantile(SHARES) == pytest.approx(known.ppf(SHARES), rel=1e-12)


@pytest.mark.parametrize("shape", ["lognormal", "triangular"])
@pytest.mark.parametrize(
    ("low", "best", "high"), [(0.7, 1.0, 1.4), (0.8, 1.0, 1.2), (0.5, 0.9, 1.2), (0.9, 1.0, 1.15)]
)
def test_low_best_and_high_are_percentiles(shape, low, best, high):
    judged = Percentiles(low, best, high, shape)
    assert judged.quantile(np.array([0.1, 0.5, 0.9])) == pytest.approx([low, best, high], rel=1e-9)
    assert np.all(np.diff(judged.quantile(SHARES)) > 0)
    assert np.all(judged.quantile(SHARES) > 0)


def test_between_percentiles_the_triangle_is_the_library_s():
    """Back from the percentiles that the library gives of a triangle to that triangle."""
    known = stats.triang(c=0.35, loc=0.6, scale=0.9)
    judged = Percentiles(*known.ppf([0.1, 0.5, 0.9]), "triangular")
    assert judged.quantile(SHARES) == pytest.approx(known.ppf(SHARES), rel=1e-9)


def test_percentiles_in_geometric_progression_are_lognormal():
    spread = math.log(1.5) / stats.norm.ppf(0.9)
    known = stats.lognorm(s=spread, scale=1.2)
    judged = Percentiles(0.8, 1.2, 1.8)
    assert judged.quantile(SHARES) == pytest.approx(known.ppf(SHARES), rel=1e-9)


@pytest.mark.parametrize(
    "make",
    [
        lambda: Lognormal(0.0, 0.2),
        lambda: Lognormal(1.0, -0.2),
        lambda: Triangular(0.8, 0.7, 1.2),
        lambda: Triangular(0.8, 1.3, 1.2),
        lambda: Uniform(1.2, 0.8),
        lambda: Uniform(0.0, 0.8),
        lambda: Percentiles(1.0, 1.0, 1.2),
        lambda: Percentiles(0.8, 1.0, 0.9),
        lambda: Percentiles(0.8, 1.0, 1.2, "normal"),
        # One side is twice as wide as the other: no triangle is so skew.
        lambda: Percentiles(0.8, 1.0, 1.4, "triangular"),
        # The lower end would lie below zero.
        lambda: Percentiles(0.2, 1.0, 1.8, "triangular"),
    ],
)
def test_what_is_no_distribution_is_refused(make):
    with pytest.raises(ModelError):
        make()


def inputs(*names: str) -> tuple[Doubtful, ...]:
    return tuple(Doubtful("resistance", Lognormal(1.0, 0.2), name) for name in names)


@pytest.mark.parametrize(
    "pairs",
    [
        (Correlation("a", "x", 0.5),),
        (Correlation("a", "a", 0.5),),
        (Correlation("a", "b", 1.0),),
        (Correlation("a", "b", 0.5), Correlation("b", "a", 0.5)),
        # a goes with b and with c, which go against each other: impossible.
        (Correlation("a", "b", 0.9), Correlation("a", "c", 0.9), Correlation("b", "c", -0.9)),
    ],
)
def test_correlations_that_can_not_be_are_refused(pairs):
    with pytest.raises(ModelError, match="correlations"):
        Doubt(inputs("a", "b", "c"), pairs)


def test_only_resistances_depend_on_depth():
    Doubtful("toe", Uniform(0.5, 2.0), "deep toe", 18.0)
    with pytest.raises(ModelError, match="depth"):
        Doubtful("toe_quake", Uniform(0.5, 2.0), "deep quake", 18.0)
    with pytest.raises(ModelError, match="below `from`"):
        Doubtful("toe", Uniform(0.5, 2.0), "upside down", 18.0, 12.0)
