"""The ground as an engineer writes it down: layers, and a table of resistance by depth.

Depths are below the ground surface, which offshore is the sea bed. Nothing is extrapolated: a
depth below the last layer or row is an error.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np
from numpy.typing import ArrayLike

from matchup.model.hammer import STANDARD_GRAVITY
from matchup.model.rules import Rules
from matchup.model.sounding import FloatArray

SOILS = ("clay", "silt", "sand-clay", "sand-silt", "fine sand", "sand", "gravel", "rock")
COHESIVE = ("clay", "silt", "sand-clay")
"""Soils that may have an undrained strength."""
GRANULAR = ("silt", "sand-clay", "sand-silt", "fine sand", "sand", "gravel")
"""Soils that may have a density class."""
DENSITIES = ("very loose", "loose", "medium dense", "dense", "very dense")
CASES = ("low", "best", "high")
"""Ground cases that have a column of their own in a table of resistance by depth."""
KINDS = ("static", "driving")
"""Resistance long after driving, set-up included; and while driving."""
WATER_UNIT_WEIGHT = 1000 * STANDARD_GRAVITY
"""Fresh water of 1000 kg/m3; common practice, no published source. [N/m3]"""
TOUCH = 1e-6
"""Layers whose borders differ by less touch. [m]"""


@dataclass(frozen=True, slots=True)
class Layer:
    """One layer of soil; what is not known is None, and a method that needs it says so.

    Parameters
    ----------
    top, bottom : float
        Below ground surface. [m]
    soil : str
        One of `SOILS`.
    unit_weight : float
        Total, that is with the water in the pores. [N/m3]
    density : str or None
        One of `DENSITIES`.
    strength : float or None
        Undrained shear strength, at the top if `strength_bottom` is given. [Pa]
    strength_bottom : float or None
        The same at the bottom, linear in between; None where it is constant. [Pa]
    ocr : float or None
        Overconsolidation ratio. [-]
    beta, toe_factor : float or None
        Unit shaft and toe resistance over the effective vertical stress (beta, Nt). [-]
    unit_shaft, unit_toe : float or None
        Unit resistances given directly. [Pa]
    shaft_quake, toe_quake : float or None
        [m]
    shaft_damping, toe_damping : float or None
        Smith damping factor. [s/m]
    setup : float or None
        Shaft resistance long after driving over the one while driving. [-]
    """

    top: float
    bottom: float
    soil: str
    unit_weight: float
    density: str | None = None
    strength: float | None = None
    strength_bottom: float | None = None
    ocr: float | None = None
    beta: float | None = None
    toe_factor: float | None = None
    unit_shaft: float | None = None
    unit_toe: float | None = None
    shaft_quake: float | None = None
    toe_quake: float | None = None
    shaft_damping: float | None = None
    toe_damping: float | None = None
    setup: float | None = None

    def __post_init__(self) -> None:
        rules = Rules(f"layer {self.text}")
        rules.not_negative("top", self.top, "length")
        rules.must(
            math.isfinite(self.bottom) and self.bottom > self.top,
            "bottom",
            "must be below `top`",
            self.bottom,
            "length",
        )
        rules.one_of("soil", self.soil, SOILS)
        rules.must(
            math.isfinite(self.unit_weight) and self.unit_weight > WATER_UNIT_WEIGHT,
            "unit_weight",
            "must be the total unit weight, above that of water; a submerged one lacks that",
            self.unit_weight,
            "unit weight",
        )
        self._check_state(rules)
        for name in ("beta", "toe_factor"):
            rules.positive(name, getattr(self, name))
        for name in ("unit_shaft", "unit_toe"):
            rules.not_negative(name, getattr(self, name), "stress")
        for name in ("shaft_quake", "toe_quake"):
            rules.positive(name, getattr(self, name), "set")
        for name in ("shaft_damping", "toe_damping"):
            rules.not_negative(name, getattr(self, name), "damping")
        for name in ("ocr", "setup"):
            value = getattr(self, name)
            if value is not None:
                rules.must(math.isfinite(value) and value >= 1, name, "must be >= 1", value)
        rules.close()

    def _check_state(self, rules: Rules) -> None:
        if self.density is not None:
            rules.one_of("density", self.density, DENSITIES)
            rules.must(
                self.soil not in SOILS or self.soil in GRANULAR,
                "density",
                f"must be left out for {self.soil}",
                self.density,
            )
        rules.positive("strength", self.strength, "stress")
        rules.positive("strength_bottom", self.strength_bottom, "stress")
        rules.must(
            self.strength is None or self.soil not in SOILS or self.soil in COHESIVE,
            "strength",
            f"must be left out for {self.soil}: it is an undrained shear strength",
            self.strength,
            "stress",
        )
        rules.must(
            self.strength_bottom is None or self.strength is not None,
            "strength",
            "must be given with `strength_bottom`: it is the strength at the top",
            "",
        )

    @property
    def text(self) -> str:
        """Soil and depths in words, for messages."""
        return f"{self.soil}, {self.top:g}-{self.bottom:g} m"

    @property
    def states_both(self) -> bool:
        """Whether the layer states both unit resistances directly."""
        return self.unit_shaft is not None and self.unit_toe is not None

    def strength_at(self, depth: ArrayLike) -> FloatArray:
        """Return the undrained strength at depths of this layer, NaN without one.

        Parameters
        ----------
        depth : (n,) float64 array
            Below ground surface. [m]

        Returns
        -------
        (n,) float64 array
            [Pa]
        """
        top = math.nan if self.strength is None else self.strength
        bottom = top if self.strength_bottom is None else self.strength_bottom
        share = (np.asarray(depth, float) - self.top) / (self.bottom - self.top)
        return np.asarray(top + (bottom - top) * share)


@dataclass(frozen=True, slots=True)
class Profile:
    """Layers from the ground surface down, and where the water stands.

    Parameters
    ----------
    layers : tuple of Layer
        From the surface down, without gap.
    water : float
        Depth of the water level; negative where it stands above ground, as offshore. Pore water
        is at rest below it, and there is none above. [m]
    water_unit_weight : float
        [N/m3]
    name : str
    """

    layers: tuple[Layer, ...]
    water: float
    water_unit_weight: float = WATER_UNIT_WEIGHT
    name: str = "ground profile"

    def __post_init__(self) -> None:
        rules = Rules(self.name)
        rules.must(bool(self.layers), "layers", "must hold at least one layer", "none")
        rules.must(
            math.isfinite(self.water), "water", "must be a finite depth", self.water, "length"
        )
        rules.positive("water_unit_weight", self.water_unit_weight, "unit weight")
        if self.layers:
            rules.must(
                abs(self.layers[0].top) < TOUCH,
                "layers.1.top",
                "must be 0: layers start at the ground surface",
                self.layers[0].top,
                "length",
            )
        for number, (above, layer) in enumerate(pairwise(self.layers), 2):
            rules.must(
                abs(layer.top - above.bottom) < TOUCH,
                f"layers.{number}.top",
                f"must be the bottom of the layer above, {above.bottom:g} m",
                layer.top,
                "length",
            )
        for number, layer in enumerate(self.layers, 1):
            rules.must(
                not layer.unit_weight <= self.water_unit_weight,
                f"layers.{number}.unit_weight",
                "must be the total unit weight, above that of water",
                layer.unit_weight,
                "unit weight",
            )
        rules.close()

    @property
    def end(self) -> float:
        """Depth of the lowest layer's bottom [m]."""
        return self.layers[-1].bottom

    @property
    def borders(self) -> FloatArray:
        """Depths of the surface and of every layer's bottom, (layers + 1,) [m]."""
        return np.array([0.0, *(layer.bottom for layer in self.layers)])

    def must_reach(self, depth: ArrayLike) -> FloatArray:
        """Return depths as an array if all lie in the profile.

        Raises
        ------
        ModelError
            Nothing is known below the last layer.
        """
        return within(np.asarray(depth, float), 0.0, self.end, self.name)

    def place(self, depth: ArrayLike) -> np.ndarray[tuple[int, ...], np.dtype[np.int64]]:
        """Return the rows of the layers at depths; on a border, of the layer below."""
        places = np.searchsorted(self.borders, self.must_reach(depth), side="right") - 1
        return np.asarray(np.minimum(places, len(self.layers) - 1), np.int64)

    def layer_at(self, depth: float) -> Layer:
        """Return the layer at a depth; on a border, the one below."""
        return self.layers[int(self.place(depth))]

    def total_stress(self, depth: ArrayLike) -> FloatArray:
        """Return the total vertical stress, the weight of water above ground included.

        Parameters
        ----------
        depth : (n,) float64 array
            [m]

        Returns
        -------
        (n,) float64 array
            [Pa]
        """
        borders = self.borders
        weights = [layer.unit_weight for layer in self.layers]
        at_borders = np.concatenate(([0.0], np.cumsum(weights * np.diff(borders))))
        above_ground = self.water_unit_weight * max(-self.water, 0.0)
        return np.interp(self.must_reach(depth), borders, at_borders) + above_ground

    def water_pressure(self, depth: ArrayLike) -> FloatArray:
        """Return the pore pressure at rest, (n,) [Pa]."""
        return self.water_unit_weight * np.maximum(self.must_reach(depth) - self.water, 0.0)

    def effective_stress(self, depth: ArrayLike) -> FloatArray:
        """Return the effective vertical stress, (n,) [Pa]."""
        return self.total_stress(depth) - self.water_pressure(depth)


@dataclass(frozen=True, slots=True)
class ResistanceColumn:
    """Resistance by depth in one ground case.

    Parameters
    ----------
    shaft, toe : tuple of float
        Whole shaft and toe resistance when the toe is at each depth. [N]
    """

    shaft: tuple[float, ...]
    toe: tuple[float, ...]


@dataclass(frozen=True, slots=True)
class ResistanceTable:
    """The designer's own resistance by depth; linear between rows.

    Parameters
    ----------
    depth : tuple of float
        Penetrations, increasing. [m]
    columns : dict of str to ResistanceColumn
        By case: ``low``, ``best``, ``high``, at least one of them.
    kind : str
        ``driving``, or ``static``: long after driving, set-up included.
    setup : float or None
        Shaft resistance long after driving over the one while driving. [-]
    name : str
    """

    depth: tuple[float, ...]
    columns: dict[str, ResistanceColumn] = field(default_factory=dict)
    kind: str = "driving"
    setup: float | None = None
    name: str = "resistance table"

    def __post_init__(self) -> None:
        rules = Rules(self.name)
        rules.must(len(self.depth) > 1, "depth", "must have two rows or more", len(self.depth))
        rules.must(
            all(math.isfinite(d) and d >= 0 for d in self.depth)
            and all(a < b for a, b in pairwise(self.depth)),
            "depth",
            "must be finite, >= 0 and increasing",
            list(self.depth),
        )
        rules.one_of("kind", self.kind, KINDS)
        if self.setup is not None:
            rules.must(
                math.isfinite(self.setup) and self.setup >= 1, "setup", "must be >= 1", self.setup
            )
        rules.must(bool(self.columns), "columns", "must hold at least one case", "none")
        for case, column in self.columns.items():
            rules.one_of("columns", case, CASES)
            self._check_column(rules, f"{case}.shaft", column.shaft)
            self._check_column(rules, f"{case}.toe", column.toe)
        for less, more in pairwise(case for case in CASES if case in self.columns):
            self._check_order(rules, less, more)
        rules.close()

    def _check_column(self, rules: Rules, name: str, values: Sequence[float]) -> None:
        rules.must(
            len(values) == len(self.depth), name, "must have a value in every row", len(values)
        )
        for value in values:
            rules.not_negative(name, value, "force")
        if name.endswith("shaft") and values and self.depth and self.depth[0] == 0:
            rules.must(values[0] == 0, name, "must be 0 at depth 0", values[0], "force")

    def _check_order(self, rules: Rules, less: str, more: str) -> None:
        small, large = self.columns[less], self.columns[more]
        rules.must(
            all(
                a + b <= c + d
                for a, b, c, d in zip(small.shaft, small.toe, large.shaft, large.toe, strict=False)
            ),
            more,
            f"must have a total of at least that of `{less}` in every row",
            "less",
        )

    def must_reach(self, depth: ArrayLike) -> FloatArray:
        """Return penetrations as an array if all lie between first and last row.

        Raises
        ------
        ModelError
            Nothing is known outside the rows.
        """
        return within(np.asarray(depth, float), self.depth[0], self.depth[-1], self.name)


def within(depth: FloatArray, top: float, end: float, name: str) -> FloatArray:
    """Return penetrations if all lie where the ground is known.

    Parameters
    ----------
    depth : (n,) float64 array or one number in an array
        [m]
    top, end : float
        Where it is known. [m]
    name : str
        Of what knows it, for the message.

    Raises
    ------
    ModelError
        With every depth outside.
    """
    rules = Rules(name)
    outside = ~((depth >= top - TOUCH) & (depth <= end + TOUCH))
    for value in depth[outside].tolist() if depth.ndim else [float(depth)] * bool(outside):
        rules.must(
            False,
            "penetration",
            f"must lie where the ground is known, from {top:g} to {end:g} m",
            value,
            "length",
        )
    rules.close()
    return np.clip(depth, top, end)
