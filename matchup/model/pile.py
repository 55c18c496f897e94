"""The pile: a straight elastic bar of one part or more, each of one section and material."""

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
STEEPEST_RAKE = math.radians(45)
"""Beyond it a pile is not driven by a ram that falls. [rad]"""
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
    ends : (float, float) or None
        Of a tapered section the areas at head and toe, with `area` and `perimeter` the means in
        between; None where it is the same throughout. [m2]
    inertia : float or None
        Least second moment of area, of a tapered section that of the toe; None where the shape
        does not tell it. [m4]
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
    ends: tuple[float, float] | None = None
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
    def round(cls, diameter: float, toe_diameter: float | None = None) -> Section:
        """Return a solid round section, tapered in a straight line to `toe_diameter` if given."""
        area = math.pi * diameter**2 / 4
        if toe_diameter is None:
            inertia = math.pi * diameter**4 / 64
            return cls("round", area, math.pi * diameter, area, diameter, inertia=inertia)
        rules = Rules("pile section")
        rules.positive("toe_diameter", toe_diameter, "length")
        must = "must be at most the diameter, which is that of the head"
        rules.must(not toe_diameter > diameter, "toe_diameter", must, toe_diameter, "length")
        rules.close()
        toe = math.pi * toe_diameter**2 / 4
        mean = math.pi / 2 * (diameter + toe_diameter)
        return cls(
            "round, tapered",
            _mean(area, toe),
            mean,
            toe,
            toe_diameter,
            ends=(area, toe),
            inertia=math.pi * toe_diameter**4 / 64,
        )

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
            inertia=math.pi * (diameter**4 - inside**4) / 64,
            wall=wall,
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

    def area_at(self, share: float) -> float:
        """Return the area [m2] at a share of the length from the head."""
        if self.ends is None:
            return self.area
        head, toe = map(math.sqrt, self.ends)
        return (head + (toe - head) * share) ** 2

    def area_between(self, low: float, high: float) -> float:
        """Return the mean area [m2] between two shares of the length from the head."""
        return self.area if self.ends is None else _mean(self.area_at(low), self.area_at(high))


def _mean(one: float, other: float) -> float:
    """Return the mean area of a cone's frustum between two circles."""
    return (one + math.sqrt(one * other) + other) / 3


@dataclass(frozen=True, slots=True)
class Fill:
    """Concrete that fills a tube while it is driven, and strains with it.

    Parameters
    ----------
    area : float
        [m2]
    modulus, density, strength : float
        [Pa], [kg/m3], cylinder strength at driving [Pa]
    """

    area: float
    modulus: float
    density: float
    strength: float

    def __post_init__(self) -> None:
        rules = Rules("fill")
        rules.positive("area", self.area, "area")
        rules.positive("modulus", self.modulus, "modulus")
        rules.positive("density", self.density, "density")
        rules.positive("strength", self.strength, "stress")
        rules.close()


@dataclass(frozen=True, slots=True)
class Part:
    """A length of pile of one section and one material.

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
    name : str
        Empty for the only part of a pile.
    fill : Fill or None
        Of a tube. Stresses of the part are then those of the tube.
    carried : float
        Mass per length that goes along and adds no stiffness: a soil plug. [kg/m]
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
    name: str = ""
    fill: Fill | None = None
    carried: float = 0.0
    notes: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        rules = Rules("pile")
        rules.one_of("material", self.material, MATERIALS)
        rules.positive("length", self.length, "length")
        rules.positive("modulus", self.modulus, "modulus")
        rules.positive("density", self.density, "density")
        rules.positive("strength", self.strength, "stress")
        rules.not_negative("prestress", self.prestress, "stress")
        rules.not_negative("carried", self.carried)
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
        rules.must(
            self.section.ends is None or (self.fill is None and not self.carried),
            "section",
            "must not be tapered where it is filled or plugged",
            self.section.text,
        )
        rules.close()

    @property
    def stiffness(self) -> float:
        """``E A``, of a tapered part the mean, with its fill [N]."""
        filled = self.fill.modulus * self.fill.area if self.fill else 0.0
        return self.modulus * self.section.area + filled

    @property
    def mass_per_length(self) -> float:
        """With fill and plug [kg/m]."""
        filled = self.fill.density * self.fill.area if self.fill else 0.0
        return self.density * self.section.area + filled + self.carried

    @property
    def mass(self) -> float:
        """Mass [kg]."""
        return self.mass_per_length * self.length

    @property
    def wave_speed(self) -> float:
        """``sqrt(E A / m)`` with mass per length `m`; of a plain part ``sqrt(E / rho)`` [m/s]."""
        return math.sqrt(self.stiffness / self.mass_per_length)

    @property
    def travel_time(self) -> float:
        """Of a wave from its head to its toe [s]."""
        return self.length / self.wave_speed

    @property
    def impedance(self) -> float:
        """``E A / c``, of a tapered part the mean [N s/m]."""
        return self.stiffness / self.wave_speed

    def impedance_at(self, share: float) -> float:
        """Return the impedance at a share of the length from the head [N s/m]."""
        return self.impedance * self.section.area_at(share) / self.section.area

    @property
    def bearing_area(self) -> float:
        """Force over the stress in the part's own material [m2].

        Of a filled tube its steel and, by the ratio of the moduli, its fill.
        """
        return self.stiffness / self.modulus


@dataclass(frozen=True, slots=True)
class Pile:
    """One pile.

    Parameters
    ----------
    parts : tuple of Part
        Head first.
    follower : Part or None
        Stands on the pile, under the helmet, and stays above the ground. The joint is taken as
        rigid.
    shoe_mass : float
        Of a driving shoe at the toe. [kg]
    rake : float
        Angle between the pile and the vertical. [rad]
    """

    parts: tuple[Part, ...]
    follower: Part | None = None
    shoe_mass: float = 0.0
    rake: float = 0.0

    def __post_init__(self) -> None:
        rules = Rules("pile")
        rules.must(bool(self.parts), "parts", "must hold at least one part", "none")
        rules.not_negative("shoe_mass", self.shoe_mass, "mass")
        must = f"must be 0 to {math.degrees(STEEPEST_RAKE):.0f} deg from the vertical"
        rules.must(0 <= self.rake <= STEEPEST_RAKE, "rake", must, self.rake, "angle")
        rules.close()

    @classmethod
    def uniform(
        cls,
        material: str,
        section: Section,
        length: float,
        modulus: float,
        density: float,
        strength: float,
        prestress: float = 0.0,
    ) -> Pile:
        """Return a pile of one part."""
        return cls((Part(material, section, length, modulus, density, strength, prestress),))

    @property
    def column(self) -> tuple[Part, ...]:
        """All that the wave runs through, from the helmet to the toe."""
        return (self.follower, *self.parts) if self.follower else self.parts

    @property
    def head(self) -> Part:
        """The part under the helmet."""
        return self.column[0]

    @property
    def toe(self) -> Part:
        """The lowest part."""
        return self.parts[-1]

    @property
    def section(self) -> Section:
        """The section of the toe, which the ground meets."""
        return self.toe.section

    @property
    def length(self) -> float:
        """Without a follower [m]."""
        return sum(part.length for part in self.parts)

    @property
    def mass(self) -> float:
        """Of all that the wave runs through [kg]."""
        return sum(part.mass for part in self.column) + self.shoe_mass

    @property
    def notes(self) -> tuple[str, ...]:
        """Which values are defaults, and their source; what is assumed of the pile as a whole."""
        several = len(self.column) > 1
        told = [
            f"{part.name}: {note}" if several else note
            for part in self.column
            for note in part.notes
        ]
        if several:
            told.append("joints taken as rigid: tension passes")
        if self.rake:
            degrees = math.degrees(self.rake)
            told.append(
                f"rake {degrees:.1f} deg: weight and falling rams count by its cosine, "
                "penetrations are along the pile"
            )
        return tuple(told)
