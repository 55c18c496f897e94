"""Unit spellings read by `pint`, as an outside check on the project's own table.

`pint` is asked for each factor under the name that it knows the unit by. Where our spelling means
to it what it means to us, only powers are written its way; the others are listed here.
"""

from __future__ import annotations

import re
from functools import cache

import pint

REGISTRY = pint.UnitRegistry()

NAMES = {
    "t": "metric_ton",
    "tonne": "metric_ton",
    "tonnes": "metric_ton",
    "lb": "pound",
    "lbs": "pound",
    "lbm": "pound",
    "short ton": "short_ton",
    "short tons": "short_ton",
    "long ton": "long_ton",
    "long tons": "long_ton",
    "lbf": "force_pound",
    "kips": "kip",
    "tf": "metric_ton * standard_gravity",
    "in": "inch",
    "inches": "inch",
    "ft": "foot",
    "feet": "foot",
    "MN/m2": "MN/m**2",
    "ksf": "kip/foot**2",
    "psf": "force_pound/foot**2",
    "lbf/in2": "force_pound/inch**2",
    "lbf/in": "force_pound/inch",
    "sq in": "inch**2",
    "sq ft": "foot**2",
    "kip/in": "kip/inch",
    "kips/in": "kip/inch",
    "kip/ft": "kip/foot",
    "lb/ft3": "pound/foot**3",
    "lbf/ft3": "force_pound/foot**3",
    "pcf": "pound/foot**3",
    "N m": "newton * meter",
    "kN m": "kilonewton * meter",
    "Nm": "newton * meter",
    "kNm": "kilonewton * meter",
    "MNm": "meganewton * meter",
    "ft-lb": "foot * force_pound",
    "ft-lbf": "foot * force_pound",
    "ft-kip": "foot * kip",
    "ft-kips": "foot * kip",
    "kip-ft": "foot * kip",
    "ft/s": "foot/second",
    "in/s": "inch/second",
    "s/ft": "second/foot",
    "s/in": "second/inch",
    "1/min": "1/minute",
    "blows/min": "1/minute",
    "bpm": "1/minute",
    "1/s": "1/second",
    "Hz": "1/second",
    "-": "dimensionless",
    "blows": "dimensionless",
    "%": "percent",
    "min": "minute",
    "h": "hour",
    "hours": "hour",
    "d": "day",
    "days": "day",
    "deg": "degree",
    "rad": "radian",
    "m4": "meter**4",
    "cm4": "centimeter**4",
    "mm4": "millimeter**4",
    "in4": "inch**4",
}
"""Our spellings that `pint` reads otherwise, or does not read, by the name that it knows."""

SI = {
    "length": "meter",
    "area": "meter**2",
    "mass": "kilogram",
    "force": "newton",
    "stress": "pascal",
    "stiffness": "newton/meter",
    "density": "kilogram/meter**3",
    "energy": "joule",
    "velocity": "meter/second",
    "damping": "second/meter",
    "rate": "1/second",
    "number": "dimensionless",
    "unit weight": "newton/meter**3",
    "time": "second",
    "angle": "radian",
    "inertia": "meter**4",
}
WEIGHTS = {"mass": "newton", "density": "newton/meter**3"}
"""What stands for a mass through standard gravity."""


@cache
def factor(spelling: str, dimension: str) -> float:
    """Return what a value in a unit is multiplied by to be in SI, by `pint`."""
    if dimension == "stiffness" and spelling.startswith("lb/"):
        spelling = "lbf/" + spelling[3:]  # per length, only a force makes a stiffness
    if dimension == "unit weight" and spelling == "pcf":
        spelling = "lbf/ft3"  # of soil it is a force on a volume
    name = NAMES.get(spelling) or re.sub(r"([a-z])([23])\b", r"\1**\2", spelling)
    one = REGISTRY.Quantity(1.0, name)
    if dimension in WEIGHTS and one.is_compatible_with(WEIGHTS[dimension]):
        one = one / REGISTRY.standard_gravity
    return float(one.to(SI[dimension]).magnitude)


@cache
def length_of_count(spelling: str) -> float:
    """Return the length [m] that blows are counted over, by `pint`."""
    count, _, unit = re.fullmatch(r"blows/((\d*\.?\d*)(\D+))", spelling).groups()
    number = float(re.match(r"[\d.]*", count)[0] or 1)
    unit = re.sub(r"^[\d.]+", "", count)
    return float(REGISTRY.Quantity(number, NAMES.get(unit, unit)).to("meter").magnitude)
