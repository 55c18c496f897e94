"""Fatigue of steel piles from driving: strength of details and damage by cycles."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from matchup.model.rules import Rules

Floats = npt.NDArray[np.float64]

REFERENCE_CYCLES = 2e6
"""Cycles that a detail stands at its category; EN 1993-1-9, from memory. [-]"""
KNEE_CYCLES = 5e6
CUT_OFF_CYCLES = 1e8
"""Where the slope changes from 3 to 5, and beyond which ranges do no damage; EN 1993-1-9, from
memory. [-]"""
CURVE_TEXT = "EN 1993-1-9, direct stress: slope 3 to 5e6 cycles, 5 to 1e8, none below; from memory"


@dataclass(frozen=True, slots=True)
class Curve:
    """Cycles to failure by stress range.

    Parameters
    ----------
    category : float
        Stress range at two million cycles, divided by its partial factor. [Pa]
    slope : float or None
        Of a curve of one slope, without an end; None for that of EN 1993-1-9. [-]
    """

    category: float
    slope: float | None = None

    def __post_init__(self) -> None:
        rules = Rules("curve")
        rules.positive("category", self.category, "stress")
        must = "must be >= 1"
        rules.must(self.slope is None or self.slope >= 1, "slope", must, self.slope)
        rules.close()

    def cycles(self, ranges: Floats) -> Floats:
        """Return the cycles to failure at stress ranges [Pa]; infinite where they do no damage."""
        with np.errstate(divide="ignore", over="ignore"):
            if self.slope is not None:
                return np.asarray(REFERENCE_CYCLES * (self.category / ranges) ** self.slope)
            knee = self.category * (REFERENCE_CYCLES / KNEE_CYCLES) ** (1 / 3)
            end = knee * (KNEE_CYCLES / CUT_OFF_CYCLES) ** (1 / 5)
            steep = REFERENCE_CYCLES * (self.category / ranges) ** 3
            flat = KNEE_CYCLES * (knee / ranges) ** 5
        return np.where(ranges >= knee, steep, np.where(ranges >= end, flat, math.inf))

    def damage(self, ranges: Floats, counts: Floats) -> float:
        """Return the damage of cycles by Palmgren and Miner; at 1 the detail fails [-]."""
        return float(np.sum(counts / self.cycles(ranges)))


@dataclass(frozen=True, slots=True)
class Detail:
    """A weld, a splice or another place that fatigue is asked of.

    Parameters
    ----------
    name : str
    at : float
        From the head of the pile. [m]
    curve : Curve
    concentration : float
        Stress at the detail over that of the section. [-]
    """

    name: str
    at: float
    curve: Curve
    concentration: float = 1.0

    def __post_init__(self) -> None:
        rules = Rules(f"detail {self.name!r}")
        rules.must(bool(self.name.strip()), "name", "must not be empty", self.name)
        rules.not_negative("at", self.at, "length")
        must = "must be >= 1"
        rules.must(self.concentration >= 1, "concentration", must, self.concentration)
        rules.close()


@dataclass(frozen=True, slots=True)
class Fatigue:
    """What is asked of fatigue.

    Parameters
    ----------
    details : tuple of Detail
    allowed : float
        Damage that driving may do, of the 1 at which a detail fails; the rest is for service. [-]
    text : str
        Where the curve comes from.
    """

    details: tuple[Detail, ...]
    allowed: float = 1.0
    text: str = CURVE_TEXT

    def __post_init__(self) -> None:
        rules = Rules("fatigue")
        rules.must(bool(self.details), "details", "must hold at least one detail", "none")
        rules.fraction("allowed", self.allowed)
        names = [detail.name for detail in self.details]
        twice = sorted({name for name in names if names.count(name) > 1})
        rules.must(not twice, "details", "must have different names", ", ".join(twice))
        rules.close()


def rainflow(history: Floats) -> tuple[Floats, Floats]:
    """Return ranges and counts of the cycles in a history, by rainflow counting.

    Parameters
    ----------
    history : (points,) float64 array

    Returns
    -------
    ranges : (cycles,) float64 array
        In the unit of the history.
    counts : (cycles,) float64 array
        1 for a whole cycle, 0.5 for a half one.

    References
    ----------
    .. [1] ASTM E1049-85, section 5.4.4, from memory; its worked example as well.
    """
    ranges: list[float] = []
    counts: list[float] = []
    points: list[float] = []
    for point in _turning_points(history).tolist():
        points.append(point)
        while len(points) >= 3:
            last, before = abs(points[-1] - points[-2]), abs(points[-2] - points[-3])
            if last < before:
                break
            ranges.append(before)
            if len(points) == 3:
                # The range holds the start of the history: half a cycle.
                counts.append(0.5)
                del points[0]
            else:
                counts.append(1.0)
                del points[-3:-1]
    rest = np.abs(np.diff(points))
    return (
        np.concatenate((np.array(ranges), rest)),
        np.concatenate((np.array(counts), np.full(rest.size, 0.5))),
    )


def _turning_points(history: Floats) -> Floats:
    """Return the ends and all peaks and valleys of a history."""
    apart = history[np.concatenate(([True], np.diff(history) != 0))]
    if apart.size < 3:
        return apart
    turns = np.diff(apart)[1:] * np.diff(apart)[:-1] < 0
    return apart[np.concatenate(([True], turns, [True]))]
