"""Impact hammers. A hammer has settings, and a setting has a stroke.

The setting of most is the stroke itself, the drop height of the ram. That of others is an energy,
since something pushes the ram down as well, or since the energy is measured and kept; its stroke
is the one of the same blow energy, ram weight times stroke, and is called equivalent.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field, replace

from matchup.model.cost import Amount
from matchup.model.cushion import Spring
from matchup.model.rules import Rules

HAMMER_KINDS = ("drop", "hydraulic", "air", "double-acting")
BY_STROKE = ("drop", "air")
BY_ENERGY = ("double-acting",)
"""Kinds that can be set in one way only; hydraulic hammers may be set by either."""
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
        ``drop``, ``hydraulic``, ``air`` (single acting) or ``double-acting``.
    ram_mass : float
        [kg]
    stroke_min, stroke_max : float
        Range of the drop height, or of what the energy settings are equivalent to. [m]
    efficiency : float
        Share of the blow energy left at impact, in (0, 1]. [-]
    stroke_step : float or None
        Settings are ``stroke_min`` plus whole steps, and ``stroke_max``; None for a stroke
        that can be set freely. [m]
    blow_rate_max : float or None
        [1/s]
    blow_rate_full : float or None
        At the largest setting, where the rate falls in a straight line from `blow_rate_max` at the
        least one. [1/s]
    set_by_energy : bool
        Whether the setting is an energy, and strokes are equivalent.
    pace : float or None
        Largest blow rate that is asked of the crew. [1/s]
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
    blow_rate_full: float | None = None
    pace: float | None = None
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
    set_by_energy: bool = False
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
        self._check_rates(rules)
        rules.must(
            self.kind not in (BY_STROKE if self.set_by_energy else BY_ENERGY),
            "kind",
            f"must be one that is set by {'energy' if self.set_by_energy else 'stroke'}",
            self.kind,
        )
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

    def _check_rates(self, rules: Rules) -> None:
        rules.positive("pace", self.pace, "rate")
        rules.positive("lift_speed", self.lift_speed, "velocity")
        rules.positive("blow_rate_full", self.blow_rate_full, "rate")
        if self.blow_rate_full is None:
            return
        must = "must be given together with `blow_rate_max`, the rate at the least setting"
        rules.must(self.blow_rate_max is not None, "blow_rate_full", must, "")
        rules.must(
            not self.blow_rate_full > (self.blow_rate_max or math.inf),
            "blow_rate_full",
            "must be at most `blow_rate_max`",
            self.blow_rate_full,
            "rate",
        )
        must = "must be left out where `blow_rate_full` is given"
        rules.must(self.lift_speed is None, "lift_speed", must, self.lift_speed, "velocity")

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
        """Return the blow rate at a stroke [1/s]; None where the catalogue does not say."""
        rate = self._own_rate(stroke)
        return rate if rate is None or self.pace is None else min(rate, self.pace)

    def within(self, low: float, top: float) -> Hammer:
        """Return the hammer with its settings [m] from `low` to `top` alone."""
        full = None if self.blow_rate_full is None else self._own_rate(top)
        most = self.blow_rate_max if full is None else self._own_rate(low)
        return replace(
            self, stroke_min=low, stroke_max=top, blow_rate_max=most, blow_rate_full=full
        )

    def _own_rate(self, stroke: float) -> float | None:
        """Return the blow rate [1/s] that nobody slows.

        The rate falls in a straight line between both ends of the settings, where the catalogue
        gives them. Else the ram is lifted at its speed and falls; the catalogue's largest rate is
        never exceeded.
        """
        if self.blow_rate_full is not None and self.blow_rate_max is not None:
            span = self.stroke_max - self.stroke_min
            share = (stroke - self.stroke_min) / span if span > 0 else 1.0
            share = min(max(share, 0.0), 1.0)
            return self.blow_rate_max + share * (self.blow_rate_full - self.blow_rate_max)
        if self.lift_speed is None:
            return self.blow_rate_max
        fall = math.sqrt(2 * stroke / STANDARD_GRAVITY)
        lifted = 1 / (stroke / self.lift_speed + fall)
        return lifted if self.blow_rate_max is None else min(lifted, self.blow_rate_max)

    def share_at_impact(self, rake: float) -> float:
        """Return the share of the blow energy that is left at impact, along a raked pile.

        A ram that falls along a rake gains height by the cosine alone; an energy that is set is
        what the ram is given along its way.

        Parameters
        ----------
        rake : float
            Angle between the pile and the vertical. [rad]
        """
        return self.efficiency * (1.0 if self.set_by_energy else math.cos(rake))

    def stroke_of(self, energy: float) -> float:
        """Return the stroke [m] of a blow energy [J]."""
        return energy / (self.ram_mass * STANDARD_GRAVITY)

    def impact_velocity(self, stroke: float, rake: float = 0.0) -> float:
        """Return ``sqrt(2 g h share)`` with the share of the energy left at impact [m/s]."""
        return math.sqrt(2 * STANDARD_GRAVITY * stroke * self.share_at_impact(rake))
