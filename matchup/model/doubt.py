"""Doubt about the inputs: distributions of factors on values of the job, and correlations."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Protocol

import numpy as np

from matchup.model.rules import Rules
from matchup.model.sounding import FloatArray

FACTORS = {
    "resistance": "shaft and toe resistance",
    "shaft": "shaft resistance",
    "toe": "toe resistance",
    "setup": "set-up",
    "shaft_quake": "shaft quake",
    "toe_quake": "toe quake",
    "shaft_damping": "shaft damping",
    "toe_damping": "toe damping",
    "efficiency": "hammer efficiency",
    "cushion_stiffness": "pile cushion stiffness",
}
"""What may be in doubt, and in words."""
BY_DEPTH = ("resistance", "shaft", "toe")
"""Of these, what may be in doubt in a range of depth of its own."""
STROKES = ("adapt", "keep")
"""What the crew does: finds strokes that work in the ground it meets, or plays the planned ones."""
SHAPES = ("lognormal", "triangular")
PERCENTILE = 1.2815515655446004
"""Standard normal variate that is exceeded with a probability of 10 %. [-]"""
SKEWEST = (math.sqrt(0.9) - math.sqrt(0.5)) / (math.sqrt(0.5) - math.sqrt(0.1))
"""P90 - P50 over P50 - P10 of the triangular distribution whose mode is its upper end [-]."""


class Distribution(Protocol):
    """Of a factor on a value of the job."""

    def quantile(self, share: FloatArray) -> FloatArray:
        """Return the factors that are not exceeded with probabilities in (0, 1)."""

    @property
    def text(self) -> str:
        """The distribution in words."""


@dataclass(frozen=True, slots=True)
class Lognormal:
    """A lognormal factor.

    Parameters
    ----------
    mean : float
        [-]
    cov : float
        Coefficient of variation. [-]
    """

    mean: float
    cov: float

    def __post_init__(self) -> None:
        rules = Rules("lognormal")
        rules.positive("mean", self.mean)
        rules.positive("cov", self.cov)
        rules.close()

    def quantile(self, share: FloatArray) -> FloatArray:
        """Return the factors that are not exceeded with probabilities in (0, 1)."""
        spread = math.sqrt(math.log1p(self.cov**2))
        middle = math.log(self.mean) - 0.5 * spread**2
        return np.asarray(np.exp(middle + spread * _normal(share)))

    @property
    def text(self) -> str:
        """The distribution in words."""
        return f"lognormal, mean {self.mean:g}, coefficient of variation {self.cov:g}"


@dataclass(frozen=True, slots=True)
class Triangular:
    """A triangular factor: lower end, mode and upper end [-]."""

    low: float
    mode: float
    high: float

    def __post_init__(self) -> None:
        rules = Rules("triangular")
        rules.positive("low", self.low)
        rules.must(not self.high <= self.low, "high", "must be above `low`", self.high)
        rules.must(
            not (self.mode < self.low or self.mode > self.high),
            "mode",
            "must be from `low` to `high`",
            self.mode,
        )
        for name in ("mode", "high"):
            rules.positive(name, getattr(self, name))
        rules.close()

    def quantile(self, share: FloatArray) -> FloatArray:
        """Return the factors that are not exceeded with probabilities in (0, 1)."""
        span = self.high - self.low
        return self.low + span * _unit_triangle(share, (self.mode - self.low) / span)

    @property
    def text(self) -> str:
        """The distribution in words."""
        return f"triangular from {self.low:g} over {self.mode:g} to {self.high:g}"


@dataclass(frozen=True, slots=True)
class Uniform:
    """A uniform factor: both ends [-]."""

    low: float
    high: float

    def __post_init__(self) -> None:
        rules = Rules("uniform")
        rules.positive("low", self.low)
        rules.positive("high", self.high)
        rules.must(not self.high <= self.low, "high", "must be above `low`", self.high)
        rules.close()

    def quantile(self, share: FloatArray) -> FloatArray:
        """Return the factors that are not exceeded with probabilities in (0, 1)."""
        return self.low + (self.high - self.low) * share

    @property
    def text(self) -> str:
        """The distribution in words."""
        return f"uniform from {self.low:g} to {self.high:g}"


@dataclass(frozen=True, slots=True)
class Percentiles:
    """A factor as engineers state it: low, best and high, taken as P10, P50 and P90.

    ``lognormal`` has two pieces: below and above `best` the logarithm is normal, each side with
    the spread that its percentile asks for; with ``low * high == best**2`` it is the lognormal
    distribution. ``triangular`` is the one triangular distribution with these percentiles; there
    is none where one side is more than 1.62 times as wide as the other.

    Parameters
    ----------
    low, best, high : float
        [-]
    shape : str
        One of `SHAPES`.
    """

    low: float
    best: float
    high: float
    shape: str = "lognormal"

    def __post_init__(self) -> None:
        rules = Rules("low, best and high")
        rules.positive("low", self.low)
        rules.positive("best", self.best)
        rules.positive("high", self.high)
        rules.one_of("shape", self.shape, SHAPES)
        rules.must(not self.best <= self.low, "best", "must be above `low`", self.best)
        rules.must(not self.high <= self.best, "high", "must be above `best`", self.high)
        rules.close()
        if self.shape == "triangular":
            skew = (self.high - self.best) / (self.best - self.low)
            must = "must be as far from `low` as from `high` within a factor of 1.62, if triangular"
            do = "Or take the lognormal shape."
            rules.must(SKEWEST <= skew <= 1 / SKEWEST, "best", must, self.best, do=do)
            if not rules.faults:
                must = "must leave the lower end of the triangle above 0"
                rules.must(self._triangle()[0] > 0, "low", must, self.low, do=do)
        rules.close()

    def _triangle(self) -> tuple[float, float, float]:
        """Return lower end, mode and upper end of the triangular distribution."""
        skew = (self.high - self.best) / (self.best - self.low)
        below, above = 0.0, 1.0
        for _ in range(60):
            mode = 0.5 * (below + above)
            low, best, high = _unit_triangle(np.array([0.1, 0.5, 0.9]), mode).tolist()
            # The farther up the mode, the narrower the upper side.
            if (high - best) / (best - low) > skew:
                below = mode
            else:
                above = mode
        scale = (self.high - self.low) / (high - low)
        start = self.low - scale * low
        return start, start + mode * scale, start + scale

    def quantile(self, share: FloatArray) -> FloatArray:
        """Return the factors that are not exceeded with probabilities in (0, 1)."""
        if self.shape == "triangular":
            low, mode, high = self._triangle()
            return low + (high - low) * _unit_triangle(share, (mode - low) / (high - low))
        normal = _normal(share) / PERCENTILE
        side = np.where(normal < 0, self.best / self.low, self.high / self.best)
        return np.asarray(self.best * side**normal)

    @property
    def text(self) -> str:
        """The distribution in words."""
        return f"{self.shape}, P10 {self.low:g}, P50 {self.best:g}, P90 {self.high:g}"


@dataclass(frozen=True, slots=True)
class Doubtful:
    """One input in doubt: a factor on what the job says.

    Parameters
    ----------
    of : str
        A key of `FACTORS`.
    factor : Distribution
    top, bottom : float
        Depths between which it holds, for those of `BY_DEPTH`. [m]
    name : str
        In correlations and in the output.
    """

    of: str
    factor: Distribution
    name: str
    top: float = 0.0
    bottom: float = math.inf

    def __post_init__(self) -> None:
        rules = Rules(f"doubt about {self.name!r}")
        rules.must(bool(self.name.strip()), "name", "must not be empty", self.name)
        rules.one_of("of", self.of, tuple(FACTORS))
        rules.not_negative("from", self.top, "length")
        rules.must(not self.bottom <= self.top, "to", "must be below `from`", self.bottom, "length")
        whole = self.top == 0 and self.bottom == math.inf
        must = f"must be left out: only of {', '.join(BY_DEPTH)} it depends on depth"
        field, at = ("from", self.top) if self.top else ("to", self.bottom)
        rules.must(whole or self.of in BY_DEPTH, field, must, at, "length")
        rules.close()


@dataclass(frozen=True, slots=True)
class Correlation:
    """How two inputs go together.

    Parameters
    ----------
    first, second : str
        Names of inputs.
    value : float
        Correlation of the normal variates that both follow (a Gaussian copula). [-]
    """

    first: str
    second: str
    value: float


@dataclass(frozen=True, slots=True)
class Doubt:
    """What is in doubt, and how it is sampled.

    Parameters
    ----------
    inputs : tuple of Doubtful
    correlations : tuple of Correlation
    samples : int or None
        Least number of samples; None leaves it to the one who runs the job.
    standard_error : float or None
        The number of samples is doubled until no probability's standard error, and no
        percentile's over the median, exceeds it; None never doubles. [-]
    strokes : str
        One of `STROKES`.
    """

    inputs: tuple[Doubtful, ...]
    correlations: tuple[Correlation, ...] = ()
    samples: int | None = None
    standard_error: float | None = None
    strokes: str = "adapt"

    def __post_init__(self) -> None:
        rules = Rules("doubt")
        rules.must(bool(self.inputs), "inputs", "must name at least one input", "")
        names = [one.name for one in self.inputs]
        twice = sorted({name for name in names if names.count(name) > 1})
        rules.must(not twice, "inputs", "must have different names", ", ".join(twice))
        for one in self.correlations:
            for name in (one.first, one.second):
                must = f"must be between inputs of [doubt]: {', '.join(names)}"
                rules.must(name in names, "correlations", must, name)
            must = "must be between two different inputs"
            rules.must(one.first != one.second, "correlations", must, one.first)
            must = "must be above -1 and below 1"
            rules.must(-1 < one.value < 1, "correlations", must, one.value)
        pairs = [{one.first, one.second} for one in self.correlations]
        must = "must name each pair once"
        rules.must(all(pairs.count(p) == 1 for p in pairs), "correlations", must, "one twice")
        count, error = self.samples, self.standard_error
        rules.must(count is None or count >= 1, "samples", "must be >= 1", count)
        rules.must(
            error is None or 0 < error < 1, "standard_error", "must be above 0 and below 1", error
        )
        rules.one_of("strokes", self.strokes, STROKES)
        rules.close()
        least = float(np.linalg.eigvalsh(self.correlation_matrix()).min())
        must = "must be possible together: the matrix of correlations must be positive definite"
        rules.must(least > 1e-9, "correlations", must, f"a smallest eigenvalue of {least:.2g}")
        rules.close()

    def correlation_matrix(self) -> FloatArray:
        """Return the correlations of the normal variates, (inputs, inputs) [-]."""
        names = [one.name for one in self.inputs]
        matrix = np.eye(len(names))
        for one in self.correlations:
            row, column = names.index(one.first), names.index(one.second)
            matrix[row, column] = matrix[column, row] = one.value
        return matrix


def _normal(share: FloatArray) -> FloatArray:
    """Return standard normal variates."""
    from scipy.special import ndtri

    return np.asarray(ndtri(share))


def _unit_triangle(share: FloatArray, mode: float) -> FloatArray:
    """Return quantiles of the triangular distribution from 0 over `mode` to 1."""
    share = np.asarray(share, float)
    rising = np.sqrt(share * mode)
    falling = 1 - np.sqrt((1 - share) * (1 - mode))
    return np.where(share < mode, rising, falling)
