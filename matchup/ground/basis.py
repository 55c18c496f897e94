"""What every resistance method starts from: the ground as known, and the choices left open."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from matchup.errors import Fault
from matchup.model.ground import Layer, Profile, ResistanceTable
from matchup.model.pile import Section
from matchup.model.rules import Rules
from matchup.model.sounding import FloatArray, Sounding

FACES = ("both", "outer")


@dataclass(frozen=True, slots=True)
class Ground:
    """All that is known of the ground; a method takes what it needs.

    Parameters
    ----------
    profile : Profile or None
        Layers.
    sounding : Sounding or None
        A cone penetration test. With layers, these give the soil and the effective stress.
    table : ResistanceTable or None
        The designer's own resistance by depth.
    water : float or None
        Depth of the water level for a sounding without layers; negative above ground, as
        offshore. None for the one that the sounding states. [m]
    unit_weight : float or None
        Total unit weight for a sounding without layers; None for an estimate from it. [N/m3]
    """

    profile: Profile | None = None
    sounding: Sounding | None = None
    table: ResistanceTable | None = None
    water: float | None = None
    unit_weight: float | None = None

    def __post_init__(self) -> None:
        rules = Rules("ground")
        rules.must(
            not (self.profile is None and self.sounding is None and self.table is None),
            "profile",
            "must be given: layers, a sounding or a table of resistance by depth",
            "nothing",
        )
        if self.water is not None:
            rules.must(math.isfinite(self.water), "water", "must be finite", self.water, "length")
        rules.positive("unit_weight", self.unit_weight, "unit weight")
        rules.close()

    @property
    def water_level(self) -> float | None:
        """Depth of the water level: of the layers, as given, or as the sounding states it [m]."""
        if self.profile is not None:
            return self.profile.water
        if self.water is not None:
            return self.water
        return self.sounding.water if self.sounding is not None else None


@dataclass(frozen=True, slots=True)
class Choices:
    """What the methods leave open.

    Parameters
    ----------
    faces : str
        Alm and Hamre 2001, open tubes: ``both`` puts half of the sand friction on either face and
        the full clay friction on both; ``outer`` puts the full friction on the outer face alone.
    interface_angle : float
        Alm and Hamre 2001: friction angle between sand and steel. [rad]
    inside : float or None
        Unit friction inside an open tube over that outside; None for the method's own. [-]
    companion : str or None
        Method that gives the shaft where the chosen one gives the toe alone.
    """

    faces: str = "both"
    interface_angle: float = math.radians(29)
    inside: float | None = None
    companion: str | None = None

    def __post_init__(self) -> None:
        rules = Rules("resistance method")
        rules.one_of("faces", self.faces, FACES)
        rules.must(
            0 < self.interface_angle < math.radians(60),
            "interface_angle",
            "must be above 0 and below 60 degrees",
            math.degrees(self.interface_angle),
        )
        if self.inside is not None:
            rules.must(0 <= self.inside <= 1, "inside", "must lie between 0 and 1", self.inside)
        rules.close()


@dataclass(frozen=True, slots=True)
class Task:
    """One question to a method.

    Parameters
    ----------
    ground : Ground
    section : Section
    tips : (m,) float64 array
        Penetrations, increasing. [m]
    choices : Choices
    bound : str
        ``low``, ``best`` or ``high``: which of its bounds a method that has bounds shall give.
    """

    ground: Ground
    section: Section
    tips: FloatArray
    choices: Choices = Choices()
    bound: str = "best"


Missing = Callable[[Ground, Section, Choices], list[Fault]]
"""What a method lacks, as faults; empty where it can go ahead."""


def layers_lack(
    ground: Ground, method: str, lack: Callable[[Layer], tuple[str, str] | None]
) -> list[Fault]:
    """Return faults for the layers that a method can't use.

    Parameters
    ----------
    lack : callable
        From a layer to the field and what must hold for it, or to None where all is there. Not
        asked of layers that state their unit resistances directly: every method takes those.
    """
    if ground.profile is None:
        return [Fault("profile", f"must be given as layers for {method}", "nothing")]
    faults = []
    for number, layer in enumerate(ground.profile.layers, 1):
        found = None if layer.states_both else lack(layer)
        if found is not None:
            field, must = found
            faults.append(Fault(f"layers.{number}.{field}", f"{must} ({layer.text})", "nothing"))
    return faults
