"""The pile: a straight elastic bar of one section and one material."""

from __future__ import annotations

import math
from dataclasses import dataclass

from matchup.model.rules import Rules

MATERIALS = ("concrete", "steel", "timber")

CONCRETE_DENSITY = 2400.0
"""Reinforced and prestressed concrete; common practice, no published source. [kg/m3]"""
STEEL_MODULUS = 210e9
"""Upper end of 200-210 GPa, UFC 3-220-20 (2025) 6-9.2, as quoted second-hand. [Pa]"""
STEEL_DENSITY = 7850.0
"""FHWA-NHI-16-009 section 8.2, as quoted second-hand. [kg/m3]"""
TIMBER_MODULUS = 9.45e9
"""Middle of 8.6-10.3 GPa, FHWA-NHI-16-009 Table 8-3, as quoted second-hand. [Pa]"""
TIMBER_DENSITY = 800.0
"""Treated softwood; common practice, no published source. [kg/m3]"""
POUND_PER_SQUARE_INCH = 6894.757293168361
"""Exact to the digits shown: pound-force (NIST SP 811) over square inch. [Pa]"""


def concrete_modulus(strength: float) -> float:
    """Return the modulus of concrete from its cylinder strength.

    Parameters
    ----------
    strength : float
        Cylinder strength f'c. [Pa]

    Returns
    -------
    float
        Modulus of elasticity. [Pa]

    Notes
    -----
    ``E [ksi] = 1820 sqrt(f'c [ksi])``, stated for a unit weight of 145 lb/ft3.

    References
    ----------
    .. [1] FHWA-NHI-16-009, "Design and Construction of Driven Pile Foundations," vol. I, 2016,
       Eq. 8-1, as quoted second-hand.
    """
    ksi = 1000 * POUND_PER_SQUARE_INCH
    return 1820 * math.sqrt(strength / ksi) * ksi


@dataclass(frozen=True, slots=True)
class Core:
    """The soil that an open section takes in: inside a tube, between the flanges of an H.

    Parameters
    ----------
    shape : str
        ``tube`` or ``H``.
    area : float
        Of the soil: with the area of the pile's material, that of the whole outline. [m2]
    perimeter : float
        Of the faces on it, so far as they come on top of the outline's perimeter. [m]
    """

    shape: str
    area: float
    perimeter: float


@dataclass(frozen=True, slots=True)
class Section:
    """A cross-section as the solver and the ground see it.

    Parameters
    ----------
    text : str
        In words, for the output.
    area : float
        Area of the pile's material. [m2]
    perimeter : float
        Along which the shaft resistance acts. [m]
    toe_area : float
        On which the toe bears. [m2]
    width : float
        Width or diameter, the size that toe quakes are given by. [m]
    displaces : bool
        True for a full-displacement pile (solid or closed), False for a coring one.
    core : Core or None
        Soil taken in by an open tube, or by an H whose perimeter and toe area are not given.
    inertia : float or None
        Least second moment of area; None where the shape does not tell it. [m4]
    wall : float or None
        Of a tube. [m]
    """

    text: str
    area: float
    perimeter: float
    toe_area: float
    width: float
    displaces: bool = True
    core: Core | None = None
    inertia: float | None = None
    wall: float | None = None

    def __post_init__(self) -> None:
        rules = Rules("pile section")
        for name in ("area", "perimeter", "toe_area", "width"):
            rules.positive(name, getattr(self, name), "area" if "area" in name else "length")
        rules.positive("inertia", self.inertia, "inertia")
        rules.positive("wall", self.wall, "thickness")
        rules.close()

    @classmethod
    def square(cls, width: float) -> Section:
        """Return a solid square section."""
        return cls("square", width**2, 4 * width, width**2, width, inertia=width**4 / 12)

    @classmethod
    def round(cls, diameter: float) -> Section:
        """Return a solid round section."""
        area = math.pi * diameter**2 / 4
        inertia = math.pi * diameter**4 / 64
        return cls("round", area, math.pi * diameter, area, diameter, inertia=inertia)

    @classmethod
    def pipe(cls, diameter: float, wall: float, toe: str) -> Section:
        """Return a tube; `toe` is ``open`` (bears on its annulus) or ``closed``."""
        rules = Rules("pile section")
        rules.one_of("toe", toe, ("open", "closed"))
        rules.positive("diameter", diameter, "length")
        rules.positive("wall", wall, "length")
        rules.must(
            not wall > diameter / 2, "wall", "must be at most half the diameter", wall, "length"
        )
        rules.close()
        area = math.pi * (diameter - wall) * wall
        closed = toe == "closed"
        inside = diameter - 2 * wall
        core = Core("tube", math.pi * inside**2 / 4, math.pi * inside)
        return cls(
            f"pipe, toe {toe}",
            area,
            math.pi * diameter,
            area + core.area if closed else area,
            diameter,
            closed,
            None if closed else core,
            math.pi * (diameter**4 - inside**4) / 64,
            wall,
        )

    @classmethod
    def h(
        cls,
        area: float,
        depth: float,
        width: float,
        perimeter: float | None = None,
        toe_area: float | None = None,
    ) -> Section:
        """Return an H section; perimeter and toe area are the box's unless given.

        The faces of the steel section are those of the box and twice the width; the thickness of
        the web is neglected.
        """
        rules = Rules("pile section")
        rules.must(
            not area > depth * width, "area", "must be at most depth times width", area, "area"
        )
        rules.close()
        box = 2 * (depth + width)
        core = Core("H", depth * width - area, 2 * width)
        own = perimeter is not None or toe_area is not None
        return cls(
            "H",
            area,
            perimeter or box,
            toe_area or depth * width,
            depth,
            False,
            None if own else core,
        )

    @classmethod
    def other(cls, area: float, perimeter: float, toe_area: float) -> Section:
        """Return a section by its figures; its width is that of a square of the toe area."""
        return cls("other", area, perimeter, toe_area, math.sqrt(toe_area))


@dataclass(frozen=True, slots=True)
class Pile:
    """One pile.

    Parameters
    ----------
    material : str
        ``concrete``, ``steel`` or ``timber``.
    section : Section
    length : float
        [m]
    modulus : float
        Modulus of elasticity while driving. [Pa]
    density : float
        [kg/m3]
    strength : float
        At driving: concrete's cylinder strength, steel's yield stress, timber's reference
        value in compression along the grain. [Pa]
    prestress : float
        Effective prestress, a compression. [Pa]
    notes : tuple of str
        Which values are defaults, and their source.
    """

    material: str
    section: Section
    length: float
    modulus: float
    density: float
    strength: float
    prestress: float = 0.0
    notes: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        rules = Rules("pile")
        rules.one_of("material", self.material, MATERIALS)
        rules.positive("length", self.length, "length")
        rules.positive("modulus", self.modulus, "modulus")
        rules.positive("density", self.density, "density")
        rules.positive("strength", self.strength, "stress")
        rules.not_negative("prestress", self.prestress, "stress")
        rules.must(
            not self.prestress >= self.strength,
            "prestress",
            "must be below the strength",
            self.prestress,
            "stress",
        )
        rules.must(
            self.material == "concrete" or self.prestress == 0,
            "prestress",
            "must be left out for a pile that is not of concrete",
            self.prestress,
            "stress",
        )
        rules.close()

    @property
    def wave_speed(self) -> float:
        """``sqrt(E / rho)`` [m/s]."""
        return math.sqrt(self.modulus / self.density)

    @property
    def impedance(self) -> float:
        """``E A / c`` [N s/m]."""
        return self.modulus * self.section.area / self.wave_speed

    @property
    def mass(self) -> float:
        """Mass [kg]."""
        return self.density * self.section.area * self.length
