"""Odds of an option under doubt: plain figures, each with its standard error. SI units."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from matchup.wave.layout import Flags, Floats

PERCENTILES = (0.1, 0.5, 0.9)


class Estimate(NamedTuple):
    """A figure from samples, and its standard error."""

    value: float
    error: float


class Spread(NamedTuple):
    """Percentiles of a quantity."""

    p10: Estimate
    p50: Estimate
    p90: Estimate


class Indices(NamedTuple):
    """How much of a variance an input accounts for: alone, and with all that it acts with [-]."""

    first: Estimate
    total: Estimate


class Swing(NamedTuple):
    """What becomes of an option with all inputs at their medians, and one of them elsewhere.

    Parameters
    ----------
    factor : float
        On that input. [-]
    verdict : str
        Of the drive; a stress limit that breaks under kept strokes counts.
    depth : float or None
        Penetration at which it was stopped. [m]
    blows, seconds : float or None
        As far as it got; None where not known. [-], [s]
    """

    factor: float
    verdict: str
    depth: float | None
    blows: float | None
    seconds: float | None


@dataclass(frozen=True, slots=True)
class Influence:
    """What one input in doubt does to an option, the inputs taken as independent.

    Parameters
    ----------
    name : str
    works : Indices or None
        Of whether the target is reached within the limits; None where that is no question.
    time : Indices or None
        Of the time of the drive as far as it got, or of its blows where no time is known; None
        for stages given by hand.
    low, high : Swing
        With this input alone at its P10 and P90.
    """

    name: str
    works: Indices | None
    time: Indices | None
    low: Swing
    high: Swing


@dataclass(frozen=True, slots=True)
class Influences:
    """What matters to an option.

    Parameters
    ----------
    samples : int
        Drives played for the variances.
    inputs : tuple of Influence
        In the order of the job.
    middle : Swing
        With all inputs at their medians; its factor is 1.
    """

    samples: int
    inputs: tuple[Influence, ...]
    middle: Swing


@dataclass(frozen=True, slots=True)
class Odds:
    """What becomes of an option under doubt.

    Parameters
    ----------
    samples, scramblings : int
        All samples, and the independent sequences that they come from.
    strokes : str
        ``adapt`` or ``keep``.
    case : str
        Ground case that the factors act on; empty for stages given by hand.
    works, reaches : Estimate
        Probability of reaching depth and set of the target within the stress limits, and at all.
    refuses, short : Estimate
        Of refusal on the way, and of getting to the target without its set.
    breaks, compression, tension : Estimate
        Of breaking a stress limit, and each of them.
    others : tuple of (verdict, Estimate)
        What else stopped samples.
    refusal_depth : Spread or None
        Penetration at refusal or at the target without its set; None where it never came. [m]
    refusals : tuple of (penetration, probability)
        The same station by station; nothing for stages given by hand. [m], [-]
    blows, seconds : Spread or None
        Of the samples that reach the target; None where there are none or they are not known.
        [-], [s]
    stress_use : Spread or None
        Largest use of a stress limit, of all samples that took a blow. [-]
    influences : Influences or None
        What matters; None where it was not asked for.
    analyses : int
        Blows computed.
    """

    samples: int
    scramblings: int
    strokes: str
    case: str
    works: Estimate
    reaches: Estimate
    refuses: Estimate
    short: Estimate
    breaks: Estimate
    compression: Estimate
    tension: Estimate
    others: tuple[tuple[str, Estimate], ...]
    refusal_depth: Spread | None
    refusals: tuple[tuple[float, float], ...]
    blows: Spread | None
    seconds: Spread | None
    stress_use: Spread | None
    influences: Influences | None
    analyses: int

    @property
    def share_error(self) -> float:
        """Largest standard error of a probability [-]."""
        shares = (self.works, self.reaches, self.refuses, self.short, self.breaks)
        return max(share.error for share in shares)

    @property
    def drive_error(self) -> float:
        """Largest standard error of a percentile of blows or time, over the median [-]."""
        known = [spread for spread in (self.blows, self.seconds) if spread is not None]
        return max(
            (one.error / s.p50.value for s in known for one in s if s.p50.value > 0), default=0.0
        )

    @property
    def worst_error(self) -> float:
        """The larger of both [-]."""
        return max(self.share_error, self.drive_error)


def probability(held: Flags) -> Estimate:
    """Return a probability from the samples in which something held.

    The standard error follows from the scatter between scramblings. Where all of them agree there
    is none to be seen, and the error is that of one more sample that differs.

    Parameters
    ----------
    held : (scramblings, samples each) bool array
    """
    shares = held.mean(axis=1)
    scatter = float(shares.std(ddof=1)) / math.sqrt(len(shares))
    return Estimate(float(shares.mean()), max(scatter, 1 / (held.size + 1)))


def spread(values: Floats) -> Spread | None:
    """Return percentiles of a quantity, or None where it is never known.

    Parameters
    ----------
    values : (scramblings, samples each) float64 array
        NaN where it is not known. The standard error follows from the scatter between the
        percentiles of the scramblings, and is infinite where fewer than two of them know any.
    """
    if np.isnan(values).all():
        return None
    whole = np.nanquantile(values, PERCENTILES)
    knowing = values[~np.isnan(values).all(axis=1)]
    errors = np.full(len(PERCENTILES), np.inf)
    if len(knowing) > 1:
        each = np.nanquantile(knowing, PERCENTILES, axis=1)
        errors = each.std(axis=1, ddof=1) / math.sqrt(len(knowing))
    pairs = zip(whole.tolist(), errors.tolist(), strict=True)
    return Spread(*(Estimate(value, error) for value, error in pairs))
