"""A stage: one moment of the drive as the ground sees it."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from typing import NamedTuple

from matchup.model.rules import Rules

SHAFT_QUAKE = 2.5e-3
"""Smith 1960; FHWA-NHI-16-010 section 12.6, as quoted second-hand. [m]"""
CORING_TOE_QUAKE = 2.5e-3
"""Coring tubes and H sections; from memory. [m]"""
TOE_QUAKE_SHARE = {"dense": 1 / 120, "loose": 1 / 60}
"""Of the pile's width, for displacement piles in dense or hard and in loose or soft ground;
FHWA-NHI-16-010 section 12.6, as quoted second-hand. [-]"""
SHAFT_DAMPING = {"sand": 0.16, "silty sand": 0.33, "silt": 0.49, "clay": 0.65}
"""Smith shaft damping by soil; FHWA-NHI-16-010 section 12.6, as quoted second-hand. [s/m]"""
TOE_DAMPING = 0.5
"""Smith toe damping; FHWA-NHI-16-010 section 12.6, as quoted second-hand. [s/m]"""
REFUSAL_SET = 0.250 / 248
"""Set of a blow at 248 blows per 250 mm; API RP 2A, as quoted second-hand in Tomlinson and
Woodward, *Pile Design and Construction Practice*, section 3.1.6. [m]"""


class StageMode(NamedTuple):
    """One way in which a pile may go down, and what it meets then.

    Parameters
    ----------
    name : str
        For example ``coring`` or ``plugged``.
    shaft, toe : float
        [N]
    """

    name: str
    shaft: float
    toe: float

    @property
    def resistance(self) -> float:
        """Shaft and toe together [N]."""
        return self.shaft + self.toe


@dataclass(frozen=True, slots=True)
class Stage:
    """Penetration, resistance and needed set at one moment of the drive.

    Parameters
    ----------
    name : str
    penetration : float
        Embedded length. [m]
    shaft, toe : float
        Ultimate static resistance to driving. [N]
    set_needed : float
        Least set per blow. [m]
    shaft_quake, toe_quake : float
        [m]
    shaft_damping, toe_damping : float
        Smith damping factor, or its viscous counterpart. [s/m]
    shaft_shape : tuple of (depth, intensity)
        Shaft resistance per length, to any scale, at depths below the ground surface;
        straight in between, nothing outside. Empty means uniform over the penetration.
    case : str
        Ground case; empty for stages given by hand.
    after_pause : float
        Rest before this stage, at the same penetration as the stage before it; zero for none. [s]
    setup : float
        Shaft resistance long after driving over the one of this stage. [-]
    static : bool
        Whether the method gives resistance long after driving, from which that of this stage
        follows by the set-up.
    regained : float
        Share of the set-up that the shaft has regained in the pause. [-]
    modes : tuple of StageMode
        Of an open section, every way in which it may go down; one of them gave `shaft` and `toe`.
    notes : tuple of str
        Which values are defaults, and their source.
    """

    name: str
    penetration: float
    shaft: float
    toe: float
    set_needed: float
    shaft_quake: float = SHAFT_QUAKE
    toe_quake: float = CORING_TOE_QUAKE
    shaft_damping: float = SHAFT_DAMPING["sand"]
    toe_damping: float = TOE_DAMPING
    shaft_shape: tuple[tuple[float, float], ...] = ()
    case: str = ""
    after_pause: float = 0.0
    setup: float = 1.0
    static: bool = False
    regained: float = 0.0
    modes: tuple[StageMode, ...] = ()
    notes: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        rules = Rules(f"stage {self.name!r}")
        rules.positive("penetration", self.penetration, "length")
        rules.not_negative("shaft", self.shaft, "force")
        rules.not_negative("toe", self.toe, "force")
        rules.positive("set", self.set_needed, "set")
        rules.positive("shaft_quake", self.shaft_quake, "set")
        rules.positive("toe_quake", self.toe_quake, "set")
        rules.not_negative("shaft_damping", self.shaft_damping, "damping")
        rules.not_negative("toe_damping", self.toe_damping, "damping")
        rules.not_negative("after_pause", self.after_pause)
        rules.must(
            math.isfinite(self.setup) and self.setup >= 1, "setup", "must be >= 1", self.setup
        )
        rules.must(0 <= self.regained <= 1, "regained", "must be from 0 to 1", self.regained)
        if self.shaft_shape:
            self._check_shape(rules)
        rules.close()

    def _check_shape(self, rules: Rules) -> None:
        # Texts only where they are needed: samples make stages by the ten thousand.
        depths, shares = zip(*self.shaft_shape, strict=True)
        if any(a >= b for a, b in pairwise(depths)):
            found = ", ".join(f"{depth:g} m" for depth in depths)
            rules.must(False, "shaft_shape", "must have depths that increase", found)
        if not all(0 <= share < math.inf for share in shares):
            found = ", ".join(f"{share:g}" for share in shares)
            rules.must(False, "shaft_shape", "must have intensities >= 0", found)
        inside = any(s > 0 for d, s in self.shaft_shape if not d > self.penetration)
        if len(depths) < 2 or depths[0] >= self.penetration or not inside:
            must = "must have two rows or more and a positive intensity within the penetration"
            found = ", ".join(f"{depth:g} m: {share:g}" for depth, share in self.shaft_shape)
            rules.must(False, "shaft_shape", must, found)

    @property
    def resistance(self) -> float:
        """Shaft and toe together [N]."""
        return self.shaft + self.toe
