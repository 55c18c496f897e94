"""What the site allows: rig, headroom, neighbours."""

from __future__ import annotations

from dataclasses import dataclass

from matchup.model.rules import Rules
from matchup.model.vibration import Vibration


@dataclass(frozen=True, slots=True)
class Standing:
    """A pile that must carry the hammer standing free, before the ground or a leader holds it.

    Parameters
    ----------
    safety : float
        Buckling load over what is there, at least. [-]
    fixity : float
        Depth below ground at which the pile is taken to be fixed. [m]
    inertia : float or None
        Least second moment of area, for sections that do not tell it. [m4]
    """

    safety: float
    fixity: float
    inertia: float | None = None

    def __post_init__(self) -> None:
        rules = Rules("standing")
        rules.must(not self.safety < 1, "safety", "must be >= 1", self.safety)
        rules.not_negative("fixity", self.fixity, "length")
        rules.positive("inertia", self.inertia, "inertia")
        rules.close()


@dataclass(frozen=True, slots=True)
class Site:
    """Limits of rig and surroundings; None where there is none.

    Parameters
    ----------
    capacity : float or None
        Of rig or crane, for hammer and helmet. [kg]
    capacity_with_pile : float or None
        The same with the pile hanging in the leader too. [kg]
    headroom : float or None
        Over the ground, for the pile and the hammer on it. [m]
    above_ground : float or None
        Length of pile above ground when the hammer is set on it; None for the whole pile. [m]
    blow_rate_max : float or None
        [1/s]
    vibration : Vibration or None
    standing : Standing or None
    """

    capacity: float | None = None
    capacity_with_pile: float | None = None
    headroom: float | None = None
    above_ground: float | None = None
    blow_rate_max: float | None = None
    vibration: Vibration | None = None
    standing: Standing | None = None

    def __post_init__(self) -> None:
        rules = Rules("site")
        rules.positive("capacity", self.capacity, "mass")
        rules.positive("capacity_with_pile", self.capacity_with_pile, "mass")
        rules.positive("headroom", self.headroom, "length")
        rules.positive("above_ground", self.above_ground, "length")
        rules.positive("blow_rate_max", self.blow_rate_max, "rate")
        rules.close()
