"""Units: one exact table of spellings, one table of quantities, and nothing guessed.

Parsers of free unit text read ``kn`` as a knot and ``mPa`` as a millipascal without a word; a
whitelist can't. Units are read only where files and options are read, and written only in reports.
"""

from __future__ import annotations

import difflib
import math
import re
from typing import NamedTuple

# Exact by definition: inch, foot and avoirdupois pound (international yard and pound agreement,
# 1959), standard gravity (ISO 80000-3). All other factors follow.
INCH = 0.0254
FOOT = 0.3048
POUND = 0.45359237
GRAVITY = 9.80665
POUND_FORCE = POUND * GRAVITY
KIP = 1000 * POUND_FORCE
PSI = POUND_FORCE / INCH**2

_MASS = {
    "kg": 1.0,
    "g": 1e-3,
    "t": 1e3,
    "Mg": 1e3,
    "tonne": 1e3,
    "tonnes": 1e3,
    "lb": POUND,
    "lbs": POUND,
    "lbm": POUND,
    "short ton": 2000 * POUND,
    "short tons": 2000 * POUND,
    "long ton": 2240 * POUND,
    "long tons": 2240 * POUND,
}
_FORCE = {
    "N": 1.0,
    "kN": 1e3,
    "MN": 1e6,
    "lbf": POUND_FORCE,
    "kip": KIP,
    "kips": KIP,
    "kgf": GRAVITY,
    "tf": 1e3 * GRAVITY,
}
_LENGTH = {
    "m": 1.0,
    "mm": 1e-3,
    "cm": 1e-2,
    "in": INCH,
    "inch": INCH,
    "inches": INCH,
    "ft": FOOT,
    "foot": FOOT,
    "feet": FOOT,
}
_STRESS = {
    "Pa": 1.0,
    "kPa": 1e3,
    "MPa": 1e6,
    "GPa": 1e9,
    "N/mm2": 1e6,
    "MN/m2": 1e6,
    "kN/m2": 1e3,
    "bar": 1e5,
    "psi": PSI,
    "ksi": 1e3 * PSI,
    "ksf": KIP / FOOT**2,
    "psf": POUND_FORCE / FOOT**2,
    "lbf/in2": PSI,
    "kgf/cm2": GRAVITY * 1e4,
}
_BLOW_COUNT = {
    "blows/25cm": 0.25,
    "blows/250mm": 0.25,
    "blows/0.25m": 0.25,
    "blows/ft": FOOT,
    "blows/in": INCH,
    "blows/m": 1.0,
    "blows/10cm": 0.1,
    "blows/20cm": 0.2,
    "blows/30cm": 0.3,
    "blows/foot": FOOT,
    "blows/inch": INCH,
}
_UNITS: dict[str, dict[str, float]] = {
    "length": _LENGTH,
    "area": {
        "m2": 1.0,
        "cm2": 1e-4,
        "mm2": 1e-6,
        "in2": INCH**2,
        "sq in": INCH**2,
        "ft2": FOOT**2,
        "sq ft": FOOT**2,
    },
    # Weight is accepted for mass, with standard gravity between them.
    "mass": _MASS | {unit: factor / GRAVITY for unit, factor in _FORCE.items()},
    "force": _FORCE,
    "stress": _STRESS,
    "stiffness": {
        "N/m": 1.0,
        "kN/m": 1e3,
        "MN/m": 1e6,
        "GN/m": 1e9,
        "N/mm": 1e3,
        "kN/mm": 1e6,
        "kN/cm": 1e5,
        "kip/in": KIP / INCH,
        "kips/in": KIP / INCH,
        "kip/ft": KIP / FOOT,
        "lbf/in": POUND_FORCE / INCH,
        "lb/in": POUND_FORCE / INCH,
    },
    "density": {
        "kg/m3": 1.0,
        "t/m3": 1e3,
        "g/cm3": 1e3,
        "lb/ft3": POUND / FOOT**3,
        "pcf": POUND / FOOT**3,
        "kN/m3": 1e3 / GRAVITY,
    },
    "unit weight": {
        "N/m3": 1.0,
        "kN/m3": 1e3,
        "lbf/ft3": POUND_FORCE / FOOT**3,
        "pcf": POUND_FORCE / FOOT**3,
    },
    "energy": {
        "J": 1.0,
        "kJ": 1e3,
        "MJ": 1e6,
        "N m": 1.0,
        "kN m": 1e3,
        "Nm": 1.0,
        "kNm": 1e3,
        "MNm": 1e6,
        "ft-lb": POUND_FORCE * FOOT,
        "ft-lbf": POUND_FORCE * FOOT,
        "ft-kip": KIP * FOOT,
        "ft-kips": KIP * FOOT,
        "kip-ft": KIP * FOOT,
    },
    "velocity": {"m/s": 1.0, "mm/s": 1e-3, "ft/s": FOOT, "in/s": INCH},
    "damping": {"s/m": 1.0, "ms/mm": 1.0, "s/ft": 1 / FOOT, "s/in": 1 / INCH},
    "rate": {"1/min": 1 / 60, "blows/min": 1 / 60, "bpm": 1 / 60, "1/s": 1.0, "Hz": 1.0},
    "number": {"-": 1.0, "blows": 1.0, "%": 0.01},
    "time": {"s": 1.0, "min": 60.0, "h": 3600.0, "d": 86400.0, "hours": 3600.0, "days": 86400.0},
    "angle": {"deg": math.pi / 180, "rad": 1.0},
    "inertia": {"m4": 1.0, "cm4": 1e-8, "mm4": 1e-12, "in4": INCH**4},
}


class Quantity(NamedTuple):
    """A kind of value: its dimension, the units it is shown in, units and a value for hints."""

    dimension: str
    metric: str
    us: str
    examples: str
    sample: str


QUANTITIES = {
    "length": Quantity("length", "m", "ft", "m or ft", "12"),
    "size": Quantity("length", "mm", "in", "mm or in", "400"),
    "thickness": Quantity("length", "mm", "in", "mm or in", "25"),
    "set": Quantity("length", "mm", "in", "mm, in, blows/25cm or blows/ft", "4"),
    "stroke": Quantity("length", "m", "ft", "m or ft", "0.6"),
    "area": Quantity("area", "cm2", "in2", "cm2 or in2", "1200"),
    "mass": Quantity("mass", "kg", "lb", "kg, t, lb or, as a weight, kN or kip", "900"),
    "force": Quantity("force", "kN", "kip", "kN or kip", "500"),
    "stress": Quantity("stress", "MPa", "ksi", "MPa or ksi", "30"),
    "modulus": Quantity("stress", "MPa", "ksi", "MPa or ksi", "300"),
    "stiffness": Quantity("stiffness", "MN/m", "kip/in", "MN/m or kip/in", "500"),
    "density": Quantity("density", "kg/m3", "lb/ft3", "kg/m3 or lb/ft3", "2400"),
    "unit weight": Quantity("unit weight", "kN/m3", "lbf/ft3", "kN/m3 or pcf", "18"),
    "energy": Quantity("energy", "kJ", "ft-kip", "kJ or ft-kip", "50"),
    "velocity": Quantity("velocity", "m/s", "ft/s", "m/s or ft/s", "0.5"),
    "vibration": Quantity("velocity", "mm/s", "in/s", "mm/s or in/s", "5"),
    "inertia": Quantity("inertia", "cm4", "in4", "cm4 or in4", "20000"),
    "damping": Quantity("damping", "s/m", "s/ft", "s/m or s/ft", "0.3"),
    "rate": Quantity("rate", "1/min", "1/min", "1/min", "40"),
    "number": Quantity("number", "-", "-", "-", "0.85"),
    "time": Quantity("time", "h", "h", "min, h or d", "12"),
    "angle": Quantity("angle", "deg", "deg", "deg", "29"),
}

LARGEST = 1e30
"""No value of a job is as large in SI units, nor as small as its inverse."""
_AMBIGUOUS = {
    "ton": "t (1000 kg), short ton (2000 lb), long ton (2240 lb) or, as a weight, kip",
    "tons": "t (1000 kg), short ton (2000 lb), long ton (2240 lb) or, as a weight, kip",
    "k": "kip or kN",
    "#": "lb or lbf",
}
_PLAIN = str.maketrans(
    {"²": "2", "³": "3", "^": "", "·": " ", "\u2212": "-", "\u00a0": " ", "\u202f": " "}
)
"""Typographic variants made plain; the last three are a minus sign and no-break spaces."""
_NUMBER = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?", re.ASCII)


class UnitError(ValueError):
    """A text is no value of the quantity asked for.

    Parameters
    ----------
    must : str
        What must hold.
    do : str
        What to do; may be empty.
    """

    def __init__(self, must: str, do: str = ""):
        self.must = must
        self.do = do
        super().__init__(f"{must}. {do}".rstrip(". ") + ".")


def _tidy(unit: str) -> str:
    """Return a unit's spelling with typographic variants made plain."""
    return " ".join(unit.translate(_PLAIN).split()).replace(" /", "/").replace("/ ", "/")


def _dimension_of(unit: str) -> str | None:
    return next((name for name, units in _UNITS.items() if unit in units), None)


def unit_factor(unit: str, quantity: str) -> float:
    """Return what a value in `unit` is multiplied by to be in SI.

    Parameters
    ----------
    unit : str
        A spelling of the table; case matters.
    quantity : str
        A key of `QUANTITIES`.

    Raises
    ------
    UnitError
        If the unit is unknown, ambiguous or of another dimension.
    """
    kind = QUANTITIES[quantity]
    units = _UNITS[kind.dimension]
    spelling = _tidy(unit)
    if spelling in units:
        return units[spelling]
    use = f"Use for example {kind.examples}."
    if spelling in _AMBIGUOUS:
        must = f"must have a unit without doubt, and {spelling!r} may be several"
        raise UnitError(must, f"Write {_AMBIGUOUS[spelling]}.")
    if _dimension_of(spelling) is not None:
        article = "an" if quantity[0] in "aeiou" else "a"
        must = f"must be {article} {quantity}, and {spelling!r} is not a unit of {quantity}"
        raise UnitError(must, use)
    same = [known for known in units if known.casefold() == spelling.casefold()]
    close = same or difflib.get_close_matches(spelling, units, n=1, cutoff=0.6)
    hint = f"Did you mean {close[0]!r}? " if close else ""
    raise UnitError(f"must have a unit of {quantity}, and {spelling!r} is none", f"{hint}{use}")


def parse_number(text: str) -> float:
    """Return the plain number that a text is.

    Raises
    ------
    UnitError
        If it is not a number of possible size written with a decimal point.
    """
    plain = text.translate(_PLAIN).strip()
    if not _NUMBER.fullmatch(plain):
        raise UnitError("must be a number with a decimal point and no thousands separator")
    return _sensible(float(plain))


def parse_quantity(text: str, quantity: str) -> float:
    """Return a text like ``"400 mm"`` or ``"60 blows/ft"`` as an SI value.

    A set may be given as a blow count; weight is accepted for mass.

    Parameters
    ----------
    text : str
    quantity : str
        A key of `QUANTITIES`.

    Raises
    ------
    UnitError
    """
    plain = text.translate(_PLAIN).strip()
    match = _NUMBER.match(plain)
    rest = plain[match.end() :] if match else plain
    unit = _tidy(rest)
    more = re.match(r"[\d.,']|\s+\d", rest) and unit not in _UNITS[QUANTITIES[quantity].dimension]
    if match is None or more:
        hint = "A decimal comma is not read here: write a point. " if "," in plain else ""
        raise UnitError(
            "must be one number with a unit",
            f"{hint}Write for example {example_of(quantity)}.",
        )
    return _sensible(_in_si(float(match.group()), unit, quantity))


def _sensible(value: float) -> float:
    """Return a value whose products and quotients neither overflow nor vanish."""
    if value != 0 and not 1 / LARGEST <= abs(value) <= LARGEST:
        raise UnitError("must be a number of possible size")
    return value


def _in_si(value: float, unit: str, quantity: str) -> float:
    if not unit:
        if quantity == "number":
            return value
        raise UnitError("must have a unit", f"Write for example {example_of(quantity)}.")
    count = unit.replace(" ", "")
    if quantity == "set" and count.startswith(("blows/", "blow/")):
        return _set_of_count(value, count.replace("blow/", "blows/"))
    return value * unit_factor(unit, quantity)


def _set_of_count(count: float, unit: str) -> float:
    if unit not in _BLOW_COUNT:
        raise UnitError(
            "must be a set or a blow count over a known length",
            f"Known: {', '.join(_BLOW_COUNT)}.",
        )
    if count <= 0:
        raise UnitError("must be a blow count > 0")
    return _BLOW_COUNT[unit] / count


def example_of(quantity: str) -> str:
    """Return how a value of the quantity may be written, for a hint."""
    kind = QUANTITIES[quantity]
    return kind.sample if kind.metric == "-" else f'"{kind.sample} {kind.metric}"'


def display_unit(quantity: str, system: str) -> str:
    """Return the unit that a quantity is shown in; `system` is ``metric`` or ``us``."""
    kind = QUANTITIES[quantity]
    return kind.us if system == "us" else kind.metric


def to_display(value: float, quantity: str, system: str) -> float:
    """Return an SI value in the unit that it is shown in."""
    return value / unit_factor(display_unit(quantity, system), quantity)


def format_quantity(value: float, quantity: str, system: str, digits: int = 4) -> str:
    """Return an SI value with its unit, to so many significant digits."""
    shown = to_display(value, quantity, system)
    unit = display_unit(quantity, system)
    return f"{shown:.{digits}g}" + ("" if unit == "-" else f" {unit}")
