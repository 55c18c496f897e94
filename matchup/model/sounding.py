"""A sounding: what a cone penetration test measured, down the ground."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from matchup.model.rules import Rules

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Sounding:
    """A cone penetration test as measured, in SI.

    Parameters
    ----------
    name : str
        Location or test id.
    depth : (n,) float64 array
        Below ground surface (sea bed offshore), increasing strictly. [m]
    tip : (n,) float64 array
        Cone resistance qc; NaN where void. [Pa]
    sleeve : (n,) float64 array
        Sleeve friction fs; NaN where void or not measured. [Pa]
    pore_pressure : (n,) float64 array
        Pore pressure behind the cone u2; NaN where void or not measured. [Pa]
    corrected : bool
        Whether `tip` is already qt, corrected for the pore pressure behind the cone.
    area_ratio : float or None
        Net area ratio of the cone; None where not given. [-]
    predrilled : float
        Depth of the pre-drilled part. [m]
    water : float or None
        Groundwater depth below the surface where the file states it. [m]
    notes : tuple of str
        What the reader did or assumed, each a short plain sentence.
    """

    name: str
    depth: FloatArray
    tip: FloatArray
    sleeve: FloatArray
    pore_pressure: FloatArray
    corrected: bool = False
    area_ratio: float | None = None
    predrilled: float = 0.0
    water: float | None = None
    notes: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        rules = Rules(f"sounding {self.name!r}")
        rules.must(bool(self.name.strip()), "name", "must not be empty", self.name)
        rules.fraction("area_ratio", self.area_ratio)
        rules.not_negative("predrilled", self.predrilled, "length")
        if self.water is not None:
            rules.must(math.isfinite(self.water), "water", "must be finite", self.water, "length")
        shape = np.shape(self.depth)
        enough = len(shape) == 1 and shape[0] >= 2
        rules.must(enough, "depth", "must hold two readings or more", np.size(self.depth))
        for field in ("tip", "sleeve", "pore_pressure"):
            values: FloatArray = getattr(self, field)
            same = np.shape(values) == shape
            rules.must(same, field, "must have a value or NaN at every depth", np.size(values))
        if not rules.faults:
            self._check_values(rules)
        rules.close()

    def _check_values(self, rules: Rules) -> None:
        deeper = np.diff(self.depth) > 0
        rules.must(
            bool(np.all(np.isfinite(self.depth)) and np.all(deeper)),
            "depth",
            "must increase strictly",
            _first(self.depth[1:], ~deeper),
            "length",
        )
        above = self.depth < 0
        rules.must(not above.any(), "depth", "must be >= 0", _first(self.depth, above), "length")
        rules.must(not np.isnan(self.tip).all(), "tip", "must have a value somewhere", "voids only")
        for field in ("tip", "sleeve"):
            values: FloatArray = getattr(self, field)
            wrong = (values < 0) | np.isinf(values)
            rules.must(not wrong.any(), field, "must be >= 0", _first(values, wrong), "stress")
        wrong = np.isinf(self.pore_pressure)
        found = _first(self.pore_pressure, wrong)
        rules.must(not wrong.any(), "pore_pressure", "must be finite", found, "stress")


def _first(values: FloatArray, wrong: NDArray[np.bool_]) -> float:
    """Return the first value marked, or NaN where none is."""
    return float(values[wrong][0]) if wrong.any() else math.nan
