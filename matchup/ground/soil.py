"""What published tables say of a soil by its class: set-up, damping and toe quake.

A value that a layer states itself wins over every table.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from matchup.model.ground import SOILS
from matchup.model.rules import Rules
from matchup.model.sounding import FloatArray
from matchup.model.stage import (
    CORING_TOE_QUAKE,
    SHAFT_DAMPING,
    SHAFT_QUAKE,
    TOE_DAMPING,
    TOE_QUAKE_SHARE,
)

SETUP = {
    "clay": 2.0,
    "silt": 1.5,
    "sand-clay": 1.5,
    "sand-silt": 1.2,
    "fine sand": 1.2,
    "sand": 1.0,
    "gravel": 1.0,
    "rock": 1.0,
}
"""Shaft resistance long after driving over the one while driving; Rausche et al. 1996, in
FHWA-NHI-16-009 Table 7-16, as quoted second-hand. The table's sand-gravel stands for gravel; it
has no rock, which is taken as without set-up: our choice. [-]"""
DAMPING_CLASS = {
    "clay": "clay",
    "silt": "silt",
    "sand-clay": "silty sand",
    "sand-silt": "silty sand",
    "fine sand": "sand",
    "sand": "sand",
    "gravel": "sand",
    "rock": "sand",
}
"""Row of `matchup.model.stage.SHAFT_DAMPING` for each soil; rock has none and is taken as
non-cohesive: our choice."""
ROCK_TOE_QUAKE = 1e-3
"""Hard rock; FHWA-NHI-16-010 section 12.6, as quoted second-hand. [m]"""
ROCK_TOE_DAMPING = 0.16
"""Hard rock; FHWA-NHI-16-010 section 12.6, as quoted second-hand. [s/m]"""
HARD_CLAY = 200e3
"""Undrained strength from which cohesive soil counts as hard; our choice. [Pa]"""
TABLE_SOURCE = "FHWA-NHI-16-010 12.6, second-hand"
DAY = 86400.0

Codes = NDArray[np.int64]
Flags = NDArray[np.bool_]

_SETUP = np.array([SETUP[soil] for soil in SOILS])
_DAMPING = np.array([SHAFT_DAMPING[DAMPING_CLASS[soil]] for soil in SOILS])
_ROCK = SOILS.index("rock")


@dataclass(frozen=True, slots=True)
class SetupLaw:
    """How shaft resistance grows after driving: linear in the logarithm of time.

    The growth starts at `start`, and at `end` the whole setup factor is there. Both are our
    choice, no published source.

    Parameters
    ----------
    start, end : float
        After the last blow. [s]
    """

    start: float = 3600.0
    end: float = 28 * DAY

    def __post_init__(self) -> None:
        rules = Rules("setup")
        rules.positive("start", self.start)
        rules.must(
            math.isfinite(self.end) and self.end > self.start,
            "end",
            "must be later than `start`",
            self.end,
        )
        rules.close()

    def factor(self, setup: FloatArray, elapsed: float) -> FloatArray:
        """Return shaft resistance after a pause over that while driving.

        Parameters
        ----------
        setup : (n,) float64 array
            The same long after driving. [-]
        elapsed : float
            Since the last blow. [s]

        Returns
        -------
        (n,) float64 array
            [-]
        """
        share = self.share(elapsed)
        # Without a pause an unknown set-up does not matter.
        return np.asarray(1 + (setup - 1) * share) if share else np.ones_like(setup)

    def share(self, elapsed: float) -> float:
        """Return the share of the set-up that is regained so long after the last blow [-]."""
        if elapsed <= self.start:
            return 0.0
        return min(math.log10(elapsed / self.start) / math.log10(self.end / self.start), 1.0)

    @property
    def text(self) -> str:
        """The law in words."""
        return (
            "set-up of the shaft, linear in the logarithm of time from "
            f"{time_text(self.start)} to {time_text(self.end)}; toe unchanged"
        )


def time_text(seconds: float) -> str:
    """Return a time in hours or, from one day on, in days."""
    return f"{seconds / 3600:.3g} h" if seconds < DAY else f"{seconds / DAY:.3g} d"


class Pair(NamedTuple):
    """Quakes and damping that go with a method.

    Every soil has the same shaft quake [m], shaft damping, toe damping [s/m] and toe quake [m].
    """

    shaft_quake: float
    shaft_damping: float
    toe_quake: float
    toe_damping: float
    source: str


def pair_source(pair: Pair | None) -> str:
    """Return where quakes and damping come from."""
    return pair.source if pair else f"tables by soil, {TABLE_SOURCE}"


def pair_note(pair: Pair | None) -> str:
    """Return where quakes and damping come from, and how they vary, as a note."""
    return f"quakes and damping: {pair_source(pair)}; along the shaft the mean by resistance"


class Own(NamedTuple):
    """What layers state of themselves, NaN where they don't: (n,) float64 arrays."""

    setup: FloatArray
    shaft_quake: FloatArray
    shaft_damping: FloatArray
    toe_quake: FloatArray
    toe_damping: FloatArray

    def at(self, places: Codes | Flags) -> Own:
        """Return the same at some of the nodes."""
        return Own(*(values[places] for values in self))


def _or(own: FloatArray, other: FloatArray | float) -> FloatArray:
    return np.where(np.isnan(own), other, own)


def setup_factors(soil: Codes, own: Own) -> FloatArray:
    """Return setup factors, (n,) [-], of soils by their place in `SOILS`."""
    return _or(own.setup, _SETUP[soil])


def shaft_quakes(own: Own, pair: Pair | None) -> FloatArray:
    """Return shaft quakes, (n,) [m]."""
    return _or(own.shaft_quake, pair.shaft_quake if pair else SHAFT_QUAKE)


def shaft_dampings(soil: Codes, own: Own, pair: Pair | None) -> FloatArray:
    """Return Smith shaft damping, (n,) [s/m]."""
    return _or(own.shaft_damping, pair.shaft_damping if pair else _DAMPING[soil])


def toe_dampings(soil: Codes, own: Own, pair: Pair | None) -> FloatArray:
    """Return Smith toe damping, (m,) [s/m]."""
    table = np.where(soil == _ROCK, ROCK_TOE_DAMPING, TOE_DAMPING)
    return _or(own.toe_damping, pair.toe_damping if pair else table)


def toe_quakes(
    soil: Codes, hard: Flags, own: Own, pair: Pair | None, width: float | None
) -> FloatArray:
    """Return toe quakes.

    Parameters
    ----------
    soil : (m,) int64 array
        Place in `SOILS` under the toe.
    hard : (m,) bool array
        Whether the ground under the toe is dense or hard.
    own : Own
        At the toe.
    pair : Pair or None
        The method's own.
    width : float or None
        Of a pile that displaces its whole outline; None for a coring one. [m]

    Returns
    -------
    (m,) float64 array
        [m]
    """
    if pair is not None:
        return _or(own.toe_quake, pair.toe_quake)
    if width is None:
        return _or(own.toe_quake, np.full(soil.shape, CORING_TOE_QUAKE))
    share = np.where(hard, TOE_QUAKE_SHARE["dense"], TOE_QUAKE_SHARE["loose"])
    return _or(own.toe_quake, np.where(soil == _ROCK, ROCK_TOE_QUAKE, share * width))
