"""The job file's keys, as pydantic models whose values are already in SI."""

from __future__ import annotations

import math
import re
from collections.abc import Callable
from dataclasses import dataclass
from typing import Annotated, Any, Literal

from pydantic import (
    BaseModel,
    BeforeValidator,
    ConfigDict,
    Discriminator,
    Field,
    Tag,
    WithJsonSchema,
)

from matchup.errors import did_you_mean
from matchup.inputs.amounts import read_amount
from matchup.model.limits import RULES
from matchup.model.vibration import RELATIONS
from matchup.units import QUANTITIES, UnitError, example_of, parse_quantity

UNREAD = object()
"""Stands in for a value that could not be read, and is read as not a number."""


@dataclass(frozen=True)
class OfQuantity:
    """Marks a key as a text with a unit."""

    quantity: str


def _reader(quantity: str, may_be_zero: bool, may_be_negative: bool) -> Callable[[Any], float]:
    def read(value: Any) -> float:
        if value is UNREAD:
            return math.nan
        kind = QUANTITIES[quantity]
        if not isinstance(value, str):
            number = type(value) in (int, float) and math.isfinite(value)
            example = f'"{value} {kind.metric}"' if number else example_of(quantity)
            raise UnitError(
                f"must be a text with its unit ({kind.examples})", f"Write for example {example}."
            )
        read = parse_quantity(value, quantity)
        if not may_be_negative and (read < 0 or (read == 0 and not may_be_zero)):
            raise UnitError("must be >= 0" if may_be_zero else "must be > 0")
        return read

    return read


def _key(
    quantity: str, may_be_zero: bool = False, may_be_negative: bool = False
) -> tuple[Any, ...]:
    """Return what makes a number a text with its unit, above zero unless it says otherwise."""
    sign = "of either sign" if may_be_negative else "at least 0" if may_be_zero else "above 0"
    text = f"{quantity} with its unit ({QUANTITIES[quantity].examples}), {sign}"
    return (
        BeforeValidator(_reader(quantity, may_be_zero, may_be_negative)),
        WithJsonSchema({"type": "string", "description": text}),
        OfQuantity(quantity),
    )


Length = Annotated[float, *_key("length")]
LengthOrZero = Annotated[float, *_key("length", may_be_zero=True)]
Size = Annotated[float, *_key("size")]
SignedLength = Annotated[float, *_key("length", may_be_negative=True)]
Thickness = Annotated[float, *_key("thickness")]
SetPerBlow = Annotated[float, *_key("set")]
Area = Annotated[float, *_key("area")]
Mass = Annotated[float, *_key("mass")]
Force = Annotated[float, *_key("force", may_be_zero=True)]
Stress = Annotated[float, *_key("stress")]
Prestress = Annotated[float, *_key("stress", may_be_zero=True)]
Density = Annotated[float, *_key("density")]
Damping = Annotated[float, *_key("damping", may_be_zero=True)]
UnitWeight = Annotated[float, *_key("unit weight")]
Time = Annotated[float, *_key("time")]
Rate = Annotated[float, *_key("rate")]
PeakVelocity = Annotated[float, *_key("vibration")]
Inertia = Annotated[float, *_key("inertia")]
Duration = Annotated[float, *_key("time", may_be_zero=True)]
Angle = Annotated[float, *_key("angle")]
_SLOPE = re.compile(r"1\s*:\s*(\d+\.?\d*)", re.ASCII)


def _read_rake(value: Any) -> float:
    match = _SLOPE.fullmatch(value.strip()) if isinstance(value, str) else None
    if match is None:
        return _reader("angle", may_be_zero=True, may_be_negative=False)(value)
    return math.atan2(1.0, float(match[1]))


Rake = Annotated[
    float,
    BeforeValidator(_read_rake),
    WithJsonSchema(
        {"type": "string", "description": 'from the vertical: an angle, or a slope like "1:6"'}
    ),
    OfQuantity("angle"),
]


def _amount(what: str, example: str) -> tuple[Any, ...]:
    """Return what makes an amount a text with its unit."""
    text = f"{what}, at least 0: {example}"
    return (
        BeforeValidator(lambda value: read_amount(value, example)),
        WithJsonSchema({"type": "string", "description": text}),
    )


Money = Annotated[Any, *_amount("money in the currency", "2400 EUR")]
FuelUse = Annotated[Any, *_amount("fuel by hour of driving or MJ of blow energy", "25 l/h")]
FuelPrice = Annotated[Any, *_amount("money for a unit of fuel", "1.6 EUR/l")]
FuelCarbon = Annotated[Any, *_amount("carbon dioxide of a unit of fuel", "2.7 kg/l")]

SHAPE_OF_SHAFT = 'must be "uniform", "triangular" or rows of depth and intensity'
SHAPE_EXAMPLE = 'For example [["0 m", 0.2], ["12 m", 1.0]].'
Rows = tuple[tuple[float, float], ...]


def _read_shaft_shape(value: Any) -> str | Rows:
    if value in ("uniform", "triangular"):
        return str(value)
    if isinstance(value, str):
        raise UnitError(SHAPE_OF_SHAFT, did_you_mean(value, ["uniform", "triangular"]))
    if not isinstance(value, list) or not value or not all(isinstance(r, list) for r in value):
        raise UnitError(SHAPE_OF_SHAFT, SHAPE_EXAMPLE)
    return tuple(_read_row(row) for row in value)


def _read_row(row: list[Any]) -> tuple[float, float]:
    depth, intensity = row if len(row) == 2 else ("", "")
    if not isinstance(depth, str) or type(intensity) not in (int, float):
        raise UnitError(SHAPE_OF_SHAFT, SHAPE_EXAMPLE)
    try:
        return parse_quantity(depth, "length"), float(intensity)
    except UnitError as error:
        raise UnitError(f'{error.must} (depth "{depth}")', error.do) from None


_ROW = {
    "type": "array",
    "prefixItems": [{"type": "string"}, {"type": "number", "minimum": 0}],
    "minItems": 2,
    "maxItems": 2,
}
ShaftShape = Annotated[
    Any,
    BeforeValidator(_read_shaft_shape),
    WithJsonSchema(
        {"anyOf": [{"enum": ["uniform", "triangular"]}, {"type": "array", "items": _ROW}]}
    ),
]


_FORMS = {str: "one", int: "one", list: "list", dict: "range"}


def _form(value: Any) -> str | None:
    """Return which of its forms a key with several has; None for none of them."""
    return "one" if value is UNREAD else _FORMS.get(type(value))


def _by_form(must: str) -> Discriminator:
    return Discriminator(_form, custom_error_type="form", custom_error_message=must)


class Keys(BaseModel):
    """A table of the job file: unknown keys are errors, and types are taken as they are."""

    model_config = ConfigDict(extra="forbid", strict=True)


def _read_share(value: Any) -> float:
    if type(value) not in (int, float):
        raise UnitError("must be a number above 0 and at most 1, without a unit")
    if not 0 < value <= 1:
        do = f"Write {value / 100:g}." if 2 <= value <= 100 else ""
        raise UnitError("must be above 0 and at most 1", do)
    return float(value)


Share = Annotated[
    float,
    BeforeValidator(_read_share),
    WithJsonSchema({"type": "number", "exclusiveMinimum": 0, "maximum": 1}),
]


class CatalogKeys(Keys):
    """Paths of the catalogues, relative to the job file."""

    hammers: str
    cushions: str | None = None


class LimitsKeys(Keys):
    """Driving stress limits."""

    rule: Annotated[str, WithJsonSchema({"enum": [*RULES]})] | None = None
    compression: Share | None = None
    tension: Share | None = None
    compression_stress: Stress | None = None
    tension_stress: Stress | None = None
    bending: float = 0.0
    wall_buckling: Share | None = None


class FillKeys(Keys):
    """Concrete in a tube."""

    strength: Stress
    modulus: Stress | None = None
    density: Density | None = None


class SectionKeys(Keys):
    """Material and section; which sizes a shape needs is checked when it is built."""

    material: Literal["concrete", "steel", "timber"] | None = None
    shape: Literal["square", "round", "pipe", "h", "other"] | None = None
    length: Length | None = None
    strength: Stress | None = None
    strength_at_driving: Stress | None = None
    prestress: Prestress | None = None
    modulus: Stress | None = None
    density: Density | None = None
    width: Size | None = None
    diameter: Size | None = None
    toe_diameter: Size | None = None
    wall: Thickness | None = None
    toe: Literal["open", "closed"] | None = None
    depth: Size | None = None
    area: Area | None = None
    perimeter: Size | None = None
    toe_area: Area | None = None
    fill: FillKeys | None = None


class PartKeys(SectionKeys):
    """A part of the pile; what it leaves out is the pile's. Or a follower, which gives all."""

    name: str | None = None
    limits: LimitsKeys | None = None


class PlugKeys(Keys):
    """Soil that goes along in an open section, from the toe up."""

    length: Length
    density: Density


class PileKeys(SectionKeys):
    """The pile: of one part, or what its parts have in common."""

    parts: list[PartKeys] | None = None
    follower: PartKeys | None = None
    plug: PlugKeys | None = None
    shoe_mass: Mass | None = None
    rake: Rake | None = None


class HelmetKeys(Keys):
    """The helmet for hammers whose row names none."""

    mass: Mass


class SheetRange(Keys):
    """Counts of sheets."""

    from_: int = Field(alias="from")
    to: int


class ThicknessRange(Keys):
    """Thicknesses in steps; without `step` every 10 mm."""

    from_: Thickness = Field(alias="from")
    to: Thickness
    step: Thickness | None = None


Sheets = Annotated[
    Annotated[int, Tag("one")]
    | Annotated[list[int], Tag("list")]
    | Annotated[SheetRange, Tag("range")],
    _by_form("must be a count, a list of counts or a table like { from = 4, to = 18 }"),
]
Thicknesses = Annotated[
    Annotated[Thickness, Tag("one")] | Annotated[ThicknessRange, Tag("range")],
    _by_form('must be a text with its unit or a table like { from = "80 mm", to = "300 mm" }'),
]


class PileCushionKeys(Keys):
    """The pile cushions to choose from."""

    materials: list[str]
    sheets: Sheets | None = None
    thickness: Thicknesses | None = None
    wear: list[Literal["new", "worn"]] = ["new", "worn"]
    area: Area | None = None


class HammerCushionKeys(Keys):
    """Hammer cushions to try in place of the catalogue's."""

    materials: list[str]
    thickness: Thicknesses
    area: Area


class StageKeys(Keys):
    """One stage by hand."""

    name: str
    penetration: Length
    shaft: Force
    toe: Force
    set: SetPerBlow | None = None
    shaft_shape: ShaftShape = "uniform"
    soil: Literal["sand", "silty sand", "silt", "clay"] | None = None
    toe_soil: Literal["dense", "loose"] | None = None
    shaft_quake: SetPerBlow | None = None
    toe_quake: SetPerBlow | None = None
    shaft_damping: Damping | None = None
    toe_damping: Damping | None = None


class LoosenedKeys(Keys):
    """An upper part of the way that was made easy before driving."""

    to: Length
    share: float
    how: Literal["pre-drilled", "jetted", "vibrated"] = "pre-drilled"


class PauseKeys(Keys):
    """A stop of the drive: a splice, the end of a shift."""

    penetration: Length
    lasts: Time


Cases = Annotated[
    Annotated[list[str], Tag("list")] | Annotated[dict[str, float], Tag("range")],
    _by_form('must be a list like ["low", "best", "high"] or a table like { low = 0.8 }'),
]
Plug = Literal["smaller", "larger", "coring", "plugged"]


class GroundKeys(Keys):
    """The ground, from which a method makes the stages; paths are relative to the job file."""

    layers: str | None = None
    cone_test: str | None = None
    location: str | None = None
    table: str | None = None
    water: SignedLength | None = None
    unit_weight: UnitWeight | None = None
    method: str
    shaft_method: str | None = None
    faces: Literal["both", "outer"] = "both"
    interface_angle: Angle | None = None
    inside: float | None = None
    start: Length
    every: Length
    cases: Cases = ["low", "best", "high"]
    required: list[str] | None = None
    plug: dict[str, Plug] = {}
    loosened: list[LoosenedKeys] = []
    pauses: list[PauseKeys] = []
    setup_starts: Time | None = None
    setup_ends: Time | None = None


class TargetKeys(Keys):
    """What must be reached: of hand-given stages only the refusal set, of a drive all of it."""

    refusal: SetPerBlow | None = None
    penetration: Length | None = None
    set: SetPerBlow | None = None
    load: Force | None = None
    safety_factor: float | None = None
    resistance_factor: float | None = None


class SearchKeys(Keys):
    """How the best option is chosen."""

    objective: Literal["energy", "time", "cost"] = "energy"
    reserve: float = 0.0
    seed: int = 7


class AnalysisKeys(Keys):
    """How a blow is computed."""

    gravity: bool = True
    damping: Literal["smith", "viscous"] = "smith"


class LognormalKeys(Keys):
    """A lognormal factor."""

    mean: float = 1.0
    cov: float


class TriangularKeys(Keys):
    """A triangular factor: lower end, mode, upper end."""

    low: float
    mode: float = 1.0
    high: float


class UniformKeys(Keys):
    """A uniform factor: both ends."""

    low: float
    high: float


class FactorKeys(Keys):
    """A factor on what the job says: one distribution, of shaft and toe between two depths."""

    lognormal: LognormalKeys | None = None
    triangular: TriangularKeys | None = None
    uniform: UniformKeys | None = None
    low: float | None = None
    best: float | None = None
    high: float | None = None
    shape: Literal["lognormal", "triangular"] | None = None
    from_: Length | None = Field(default=None, alias="from")
    to: Length | None = None
    name: str | None = None


FACTOR_EXAMPLE = "{ lognormal = { mean = 1.0, cov = 0.2 } }"
FactorsByDepth = Annotated[
    Annotated[FactorKeys, Tag("range")] | Annotated[list[FactorKeys], Tag("list")],
    _by_form(f"must be a table like {FACTOR_EXAMPLE}, or a list of such, by depth"),
]
PAIRS_MUST = "must be a list of two inputs and their correlation each"
PAIRS_EXAMPLE = 'For example [["shaft", "toe", 0.5]].'


def _read_pairs(value: Any) -> tuple[tuple[str, str, float], ...]:
    def is_pair(row: Any) -> bool:
        kinds = tuple(map(type, row)) if isinstance(row, list) else ()
        return kinds in ((str, str, float), (str, str, int))

    if not isinstance(value, list) or not all(map(is_pair, value)):
        raise UnitError(PAIRS_MUST, PAIRS_EXAMPLE)
    return tuple((first, second, float(number)) for first, second, number in value)


_PAIR = {
    "type": "array",
    "prefixItems": [{"type": "string"}, {"type": "string"}, {"type": "number"}],
    "minItems": 3,
    "maxItems": 3,
}
Pairs = Annotated[
    Any, BeforeValidator(_read_pairs), WithJsonSchema({"type": "array", "items": _PAIR})
]


class DoubtKeys(Keys):
    """What is in doubt, as factors on what the job says, and how it is sampled."""

    resistance: FactorsByDepth | None = None
    shaft: FactorsByDepth | None = None
    toe: FactorsByDepth | None = None
    setup: FactorKeys | None = None
    shaft_quake: FactorKeys | None = None
    toe_quake: FactorKeys | None = None
    shaft_damping: FactorKeys | None = None
    toe_damping: FactorKeys | None = None
    efficiency: FactorKeys | None = None
    cushion_stiffness: FactorKeys | None = None
    correlations: Pairs = ()
    samples: int | None = None
    standard_error: float | None = None
    strokes: Literal["adapt", "keep"] = "adapt"


class CostKeys(Keys):
    """What the contract pays for; money is a text with the currency behind the number."""

    currency: str
    piles: int
    rigs: int = 1
    shift: Time
    move: Duration
    rig_day: Money | None = None
    crew_day: Money | None = None
    mobilisation: Money | None = None
    splices: int = 0
    splice_time: Duration | None = None
    splice_price: Money | None = None
    cushion_time: Duration | None = None
    fuel_use: FuelUse | None = None
    fuel_price: FuelPrice | None = None
    fuel_co2: FuelCarbon | None = None


class VibrationKeys(Keys):
    """What the ground may do at a place that is to be spared."""

    relation: Annotated[str, WithJsonSchema({"enum": [*RELATIONS]})]
    distance: Length
    limit: PeakVelocity
    soil: str | None = None
    factor: float | None = None


class SiteKeys(Keys):
    """What rig and surroundings allow."""

    capacity: Mass | None = None
    capacity_with_pile: Mass | None = None
    headroom: Length | None = None
    above_ground: Length | None = None
    blow_rate_max: Rate | None = None
    buckling_safety: float | None = None
    fixity: LengthOrZero | None = None
    inertia: Inertia | None = None
    vibration: VibrationKeys | None = None


class DetailKeys(Keys):
    """A weld, a splice or another place that fatigue is asked of."""

    name: str
    at: LengthOrZero
    concentration: float = 1.0
    category: Stress | None = None


class FatigueKeys(Keys):
    """Fatigue of a steel pile from driving."""

    category: Stress
    partial_factor: float = 1.0
    slope: float | None = None
    allowed: Share = 1.0
    details: list[DetailKeys] = []


class JobKeys(Keys):
    """A job file."""

    title: str
    display: Literal["metric", "us"] = "metric"
    catalog: CatalogKeys
    pile: PileKeys
    helmet: HelmetKeys | None = None
    pile_cushion: PileCushionKeys | None = None
    hammer_cushion: HammerCushionKeys | None = None
    stages: list[StageKeys] | None = None
    ground: GroundKeys | None = None
    target: TargetKeys | None = None
    limits: LimitsKeys
    search: SearchKeys = SearchKeys()
    analysis: AnalysisKeys = AnalysisKeys()
    doubt: DoubtKeys | None = None
    cost: CostKeys | None = None
    site: SiteKeys | None = None
    fatigue: FatigueKeys | None = None


def job_schema() -> dict[str, Any]:
    """Return the JSON Schema of the job file."""
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        **JobKeys.model_json_schema(),
        "title": "matchup job file",
    }
