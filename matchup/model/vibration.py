"""Vibration of the ground at a distance from a pile that is struck: published relations.

Both give the peak particle velocity from the square root of the blow's energy over a power of the
distance. They are fits to measurements: scatter by a factor of two to either side is common
(common practice, no published source), and buildings respond in their own ways.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import NamedTuple

from matchup.model.rules import Rules

SOILS = ("dense", "medium", "loose")
"""Dense or very stiff; medium dense or stiff; loose, soft or organic."""


class Relation(NamedTuple):
    """A published relation ``v = factor * sqrt(W) / r**power``, v in mm/s, W in J, r in m.

    Parameters
    ----------
    text : str
        Source and formula, and how each is known.
    power : float
        Of the distance. [-]
    factors : mapping
        By soil.
    to_toe : bool
        Whether the distance is the slope to the pile's toe, or along the ground.
    energy, distance, depth : tuple of float
        Ranges that it was fitted in: of the blow energy [J], of the distance along the ground
        [m] and of the toe's depth [m].
    """

    text: str
    power: float
    factors: Mapping[str, float]
    to_toe: bool
    energy: tuple[float, float] = (0.0, math.inf)
    distance: tuple[float, float] = (0.0, math.inf)
    depth: tuple[float, float] = (0.0, math.inf)


RELATIONS = {
    "env 1993-5": Relation(
        "ENV 1993-5:1998 annex C, C sqrt(W)/r; formula second-hand, C by soil from memory, no "
        "range of validity at hand",
        1.0,
        {"dense": 1.0, "medium": 0.75, "loose": 0.5},
        to_toe=False,
    ),
    "bs 5228-2": Relation(
        "BS 5228-2, kp sqrt(W)/r^1.3, r the slope to the toe; formula second-hand, kp by soil and "
        "ranges from memory",
        1.3,
        {"dense": 3.0, "medium": 1.5, "loose": 1.0, "refusal": 5.0},
        to_toe=True,
        energy=(1.5e3, 85e3),
        distance=(1.0, 111.0),
        depth=(1.0, 27.0),
    ),
}


@dataclass(frozen=True, slots=True)
class Vibration:
    """What the ground may do at a place that is to be spared.

    Parameters
    ----------
    relation : str
        A key of `RELATIONS`.
    distance : float
        Along the ground from the pile. [m]
    limit : float
        Largest peak particle velocity. [m/s]
    soil : str or None
        Picks the relation's factor.
    factor : float or None
        In its place, for v in mm/s, W in J and r in m.
    """

    relation: str
    distance: float
    limit: float
    soil: str | None = None
    factor: float | None = None

    def __post_init__(self) -> None:
        rules = Rules("vibration")
        rules.one_of("relation", self.relation, tuple(RELATIONS))
        rules.positive("distance", self.distance, "length")
        rules.positive("limit", self.limit, "vibration")
        rules.positive("factor", self.factor)
        given = (self.soil is None) != (self.factor is None)
        must = "must be given, or `factor` in its place, and not both"
        rules.must(given, "soil", must, self.soil or "")
        published = RELATIONS.get(self.relation)
        if published is not None:
            if self.soil is not None:
                rules.one_of("soil", self.soil, tuple(published.factors))
            low, high = published.distance
            rules.must(
                not (self.distance < low or self.distance > high),
                "distance",
                f"must be {low:g} to {high:g} m, the range of {self.relation}",
                self.distance,
                "length",
            )
        rules.close()

    @property
    def published(self) -> Relation:
        """The relation."""
        return RELATIONS[self.relation]

    @property
    def used_factor(self) -> float:
        """Factor for v in mm/s, W in J and r in m."""
        if self.factor is not None:
            return self.factor
        assert self.soil is not None
        return self.published.factors[self.soil]

    def span(self, depth: float) -> float:
        """Return the distance [m] that the relation takes, with the toe at a depth [m]."""
        return math.hypot(self.distance, depth) if self.published.to_toe else self.distance

    def velocity(self, energy: float, depth: float) -> float:
        """Return the peak particle velocity.

        Parameters
        ----------
        energy : float
            Of the blow, ram weight times stroke. [J]
        depth : float
            Of the toe. [m]

        Returns
        -------
        float
            [m/s]
        """
        fallen: float = self.span(depth) ** self.published.power
        return 1e-3 * self.used_factor * math.sqrt(energy) / fallen
