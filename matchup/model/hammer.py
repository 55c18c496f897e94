"""Impact hammers whose ram falls through a stroke."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from matchup.model.cost import Amount
from matchup.model.cushion import Spring
from matchup.model.rules import Rules

HAMMER_KINDS = ("drop", "hydraulic", "air")
NO_CUSHION = "none"
STANDARD_GRAVITY = 9.80665
"""Standard acceleration of free fall, exact by definition (ISO 80000-3). [m/s2]"""


@dataclass(frozen=True, slots=True)
class Hammer:
    """A row of the hammer catalogue.

    Parameters
    ----------
    name : str
    kind : str
        ``drop``, ``hydraulic`` or ``air`` (single acting).
    ram_mass : float
        [kg]
    stroke_min, stroke_max : float
        Range of the drop height. [m]
    efficiency : float
        Share of the ram's potential energy left at impact, in (0, 1]. [-]
    stroke_step : float or None
        Settings are ``stroke_min`` plus whole steps, and ``stroke_max``; None for a stroke
        that can be set freely. [m]
    blow_rate_max : float or None
        [1/s]
    lift_speed : float or None
        Speed at which the ram is lifted; limits the blow rate at long strokes. [m/s]
    rated_energy : float or None
        Of the data sheet, for display and checking only. [J]
    helmet_mass : float or None
        Helmet that belongs to this hammer; None takes the job's. [kg]
    cushion : Spring or None
        Hammer cushion; None for a ram that strikes the helmet.
    cushion_text : str
        The hammer cushion in words, for the output.
    hammer_mass : float or None
        Whole hammer with ram. [kg]
    rides_on_pile : bool
        Whether the hammer's frame stands on the helmet.
    available : bool
        A hammer that is not available fits no job.
    hammer_length : float or None
        With its helmet, from the pile's head to the top. [m]
    head_min, head_max : float or None
        Least and largest width of a pile that the helmet takes. [m]
    day_rate, mobilisation : Amount or None
        Money for a day with the hammer, and for bringing it to the site and back.
    fuel_use : Amount or None
        Fuel by hour of driving or MJ of blow energy.
    source : str
        Where the numbers come from.
    extra : dict
        Catalogue columns that the program does not use, as typed.
    """

    name: str
    kind: str
    ram_mass: float
    stroke_min: float
    stroke_max: float
    efficiency: float
    stroke_step: float | None = None
    blow_rate_max: float | None = None
    lift_speed: float | None = None
    rated_energy: float | None = None
    helmet_mass: float | None = None
    cushion: Spring | None = None
    cushion_text: str = NO_CUSHION
    hammer_mass: float | None = None
    rides_on_pile: bool = False
    available: bool = True
    hammer_length: float | None = None
    head_min: float | None = None
    head_max: float | None = None
    day_rate: Amount | None = None
    mobilisation: Amount | None = None
    fuel_use: Amount | None = None
    source: str = ""
    extra: dict[str, str] = field(default_factory=dict, compare=False)

    def __post_init__(self) -> None:
        rules = Rules(f"hammer {self.name!r}")
        rules.must(bool(self.name.strip()), "name", "must not be empty", self.name)
        rules.one_of("kind", self.kind, HAMMER_KINDS)
        rules.positive("ram_mass", self.ram_mass, "mass")
        rules.positive("stroke_min", self.stroke_min, "stroke")
        rules.positive("stroke_max", self.stroke_max, "stroke")
        rules.must(
            not self.stroke_max < self.stroke_min,
            "stroke_max",
            "must be >= `stroke_min`",
            self.stroke_max,
            "stroke",
        )
        rules.fraction("efficiency", self.efficiency)
        rules.positive("stroke_step", self.stroke_step, "stroke")
        rules.positive("blow_rate_max", self.blow_rate_max, "rate")
        rules.positive("lift_speed", self.lift_speed, "velocity")
        rules.positive("rated_energy", self.rated_energy, "energy")
        rules.positive("helmet_mass", self.helmet_mass, "mass")
        rules.positive("hammer_mass", self.hammer_mass, "mass")
        rules.positive("hammer_length", self.hammer_length, "length")
        rules.positive("head_min", self.head_min, "size")
        rules.positive("head_max", self.head_max, "size")
        if self.head_min is not None and self.head_max is not None:
            must = "must be >= `head_min`"
            rules.must(not self.head_max < self.head_min, "head_max", must, self.head_max, "size")
        for name in ("day_rate", "mobilisation", "fuel_use"):
            amount = getattr(self, name)
            rules.not_negative(name, None if amount is None else amount.value)
        if self.hammer_mass is not None:
            rules.must(
                not 0 < self.hammer_mass < self.ram_mass,
                "hammer_mass",
                "must be >= `ram_mass`, which it contains",
                self.hammer_mass,
                "mass",
            )
        if self.rides_on_pile:
            rules.must(
                self.hammer_mass is not None,
                "hammer_mass",
                "must be given for a hammer that rides on the pile",
                "",
            )
        rules.close()

    @property
    def frame_mass(self) -> float:
        """Mass [kg] that stands on the helmet between blows."""
        if not self.rides_on_pile or self.hammer_mass is None:
            return 0.0
        return self.hammer_mass - self.ram_mass

    def blow_energy(self, stroke: float) -> float:
        """Return ram weight times stroke [J]."""
        return self.ram_mass * STANDARD_GRAVITY * stroke

    def blow_rate(self, stroke: float) -> float | None:
        """Return the blow rate at a stroke [1/s]; None where the catalogue does not say.

        The ram is lifted at its speed and falls; the catalogue's largest rate is never exceeded.
        """
        if self.lift_speed is None:
            return self.blow_rate_max
        fall = math.sqrt(2 * stroke / STANDARD_GRAVITY)
        lifted = 1 / (stroke / self.lift_speed + fall)
        return lifted if self.blow_rate_max is None else min(lifted, self.blow_rate_max)

    def impact_velocity(self, stroke: float) -> float:
        """Return ``sqrt(2 g h efficiency)`` [m/s]."""
        return math.sqrt(2 * STANDARD_GRAVITY * stroke * self.efficiency)
