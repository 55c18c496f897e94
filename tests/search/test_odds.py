"""Odds and indices against closed forms, and that their standard errors are honest."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats

from matchup.analysis.sampling import SCRAMBLINGS, Sampler, factors
from matchup.model.doubt import Doubt, Doubtful, Lognormal
from matchup.search.influence import saltelli_design, sobol_indices
from matchup.search.odds import probability, spread

COVS = (0.1, 0.25, 0.15)
DOUBT = Doubt(tuple(Doubtful("resistance", Lognormal(1.0, cov), f"{cov}") for cov in COVS))
TERMS = np.array([stats.lognorm(s=math.sqrt(math.log1p(c * c))).std() for c in COVS])


def product(seed: int, each: int) -> np.ndarray:
    """A linear response in logarithms: the product of lognormal factors, (scramblings, each)."""
    points = Sampler(3, seed).draw(each)
    return factors(DOUBT, points.reshape(-1, 3)).prod(axis=1).reshape(SCRAMBLINGS, each)


def exact() -> stats.rv_continuous:
    """The product of lognormal factors is lognormal: variances of logarithms add; exact."""
    variance = sum(math.log1p(cov**2) for cov in COVS)
    return stats.lognorm(s=math.sqrt(variance), scale=math.exp(-variance / 2))


def test_percentiles_of_a_product_of_lognormals():
    found = spread(product(1, 512))
    for one, share in zip(found, (0.1, 0.5, 0.9), strict=True):
        wanted = exact().ppf(share)
        assert abs(one.value - wanted) < 4 * one.error
        assert one.error < 0.01 * wanted


def test_a_probability_of_a_product_of_lognormals():
    wanted = exact().cdf(1.2)
    found = probability(product(1, 512) <= 1.2)
    assert abs(found.value - wanted) < 4 * found.error
    assert found.error < 0.01


def test_errors_are_as_large_as_they_say():
    """Over 200 seeds, error over standard error follows Student's t with 7 degrees of freedom.

    Its standard deviation is sqrt(7/5) = 1.18; 0.2 is about three standard errors of that.
    """
    wanted = exact().cdf(1.2)
    found = [probability(product(seed, 32) <= 1.2) for seed in range(200)]
    scores = np.array([(one.value - wanted) / one.error for one in found])
    assert scores.std() == pytest.approx(math.sqrt(7 / 5), abs=0.2)
    # Unbiased: the mean of 200 scores scatters by 1.18 / sqrt(200).
    assert abs(scores.mean()) < 3 * 1.18 / math.sqrt(200)


def rate(errors: list[float], counts: list[int]) -> float:
    """Return the slope of errors over counts in logarithms."""
    return float(np.polyfit(np.log(counts), np.log(errors), 1)[0])


def test_errors_fall_at_the_expected_rate():
    """Plain random samples: -1/2. Scrambled nets: -2/3 of a probability in three dimensions, whose
    border is a surface, and -3/2 of the mean of what is smooth up to its bounds, as a product of
    uniform factors is; Owen 1997 and He and Wang 2015, from memory, so that no more is held to
    here than that both are clearly better than plain samples, and how much.
    """
    counts = [2**m for m in range(4, 11)]
    shares, means = [], []
    for each in counts:
        values = np.array([product(seed, each) for seed in range(12)])
        shares.append(float((values <= 1.2).mean(axis=2).std()))
        points = np.array([Sampler(3, seed).draw(each) for seed in range(12)])
        means.append(float((0.5 + points).prod(axis=3).mean(axis=2).std()))
    assert rate(shares, counts) < -0.6
    assert rate(means, counts) < -1.3


def test_unanimous_samples_leave_the_doubt_of_one_more():
    found = probability(np.ones((8, 16), bool))
    assert found == (1.0, pytest.approx(1 / 129))


def test_percentiles_are_of_the_samples_that_know():
    values = np.full((8, 16), np.nan)
    assert spread(values) is None
    values[0] = np.arange(16.0)
    alone = spread(values)
    assert alone.p50.value == pytest.approx(7.5)
    assert math.isinf(alone.p50.error)
    values[:] = np.arange(16.0)
    values[:, 10:] = np.nan
    assert spread(values).p50.value == pytest.approx(4.5)


# --- indices ------------------------------------------------------------------------------------

A, B = 7.0, 0.1


def ishigami(points: np.ndarray) -> np.ndarray:
    """sin x1 + a sin2 x2 + b x3^4 sin x1, each x uniform from -pi to pi."""
    x = math.pi * (2 * points - 1)
    first = np.sin(x[..., 0])
    return first + A * np.sin(x[..., 1]) ** 2 + B * x[..., 2] ** 4 * first


def ishigami_indices() -> tuple[list[float], list[float]]:
    """First- and total-order indices by integration; exact (Ishigami and Homma 1990)."""
    one = 0.5 * (1 + B * math.pi**4 / 5) ** 2
    two = A**2 / 8
    both = B**2 * math.pi**8 * (1 / 18 - 1 / 50)
    whole = one + two + both
    return [one / whole, two / whole, 0.0], [(one + both) / whole, two / whole, both / whole]


def test_indices_of_the_ishigami_function():
    first, total = ishigami_indices()
    # Printed in many papers, second-hand: 0.3139, 0.4424, 0 and 0.5576, 0.4424, 0.2437.
    assert first == pytest.approx([0.3139, 0.4424, 0.0], abs=5e-5)
    assert total == pytest.approx([0.5576, 0.4424, 0.2437], abs=5e-5)
    found = sobol_indices(ishigami(saltelli_design(3, 5 * 2**13, 1)))
    for one, s, t in zip(found, first, total, strict=True):
        for estimate, wanted in ((one.first, s), (one.total, t)):
            assert abs(estimate.value - wanted) < max(4 * estimate.error, 1e-3)
            assert estimate.error < 0.01


def test_indices_are_those_of_the_library():
    values = ishigami(saltelli_design(3, 5 * 2**10, 4))
    flat = values.reshape(5, -1)
    known = stats.sobol_indices(
        func={"f_A": flat[:1], "f_B": flat[1:2], "f_AB": flat[2:, None, :]}, n=flat.shape[1]
    )
    found = sobol_indices(values)
    ours = np.array([[one.first.value, one.total.value] for one in found]).T
    assert ours[0] == pytest.approx(known.first_order.ravel(), rel=1e-9, abs=1e-12)
    assert ours[1] == pytest.approx(known.total_order.ravel(), rel=1e-9, abs=1e-12)


def test_what_never_varies_has_no_indices():
    assert sobol_indices(np.ones((5, 8, 16))) is None
