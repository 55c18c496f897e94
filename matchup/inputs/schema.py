"""The job file's keys, as pydantic models whose values are already in SI."""

from __future__ import annotations

from typing import Annotated, Any, Literal

from pydantic import BaseModel, BeforeValidator, ConfigDict, Field, WithJsonSchema

from matchup.model.limits import RULES
from matchup.units import QUANTITIES, UnitError, parse_quantity


def _reader(quantity: str) -> BeforeValidator:
    def read(value: Any) -> float:
        if not isinstance(value, str):
            kind = QUANTITIES[quantity]
            example = f'"{value} {kind.metric}"' if isinstance(value, (int, float)) else ""
            do = f"Write for example {example}." if example else ""
            raise UnitError(f"must be a text with its unit ({kind.examples})", do)
        return parse_quantity(value, quantity)

    return BeforeValidator(read)


def _as_text(quantity: str) -> WithJsonSchema:
    kind = QUANTITIES[quantity]
    return WithJsonSchema(
        {"type": "string", "description": f"{quantity} with its unit: {kind.examples}"}
    )


Length = Annotated[float, _reader("length"), _as_text("length")]
Thickness = Annotated[float, _reader("thickness"), _as_text("thickness")]
SetPerBlow = Annotated[float, _reader("set"), _as_text("set")]
Area = Annotated[float, _reader("area"), _as_text("area")]
Mass = Annotated[float, _reader("mass"), _as_text("mass")]
Force = Annotated[float, _reader("force"), _as_text("force")]
Stress = Annotated[float, _reader("stress"), _as_text("stress")]
Density = Annotated[float, _reader("density"), _as_text("density")]
Damping = Annotated[float, _reader("damping"), _as_text("damping")]


class Keys(BaseModel):
    """A table of the job file: unknown keys are errors, and types are taken as they are."""

    model_config = ConfigDict(extra="forbid", strict=True)


class CatalogKeys(Keys):
    """Paths of the catalogues, relative to the job file."""

    hammers: str
    cushions: str | None = None


class PileKeys(Keys):
    """The pile; which sizes a shape needs is checked when it is built."""

    material: Literal["concrete", "steel", "timber"]
    shape: Literal["square", "round", "pipe", "h", "other"]
    length: Length
    strength: Stress
    strength_at_driving: Stress | None = None
    prestress: Stress | None = None
    modulus: Stress | None = None
    density: Density | None = None
    width: Length | None = None
    diameter: Length | None = None
    wall: Length | None = None
    toe: Literal["open", "closed"] | None = None
    depth: Length | None = None
    area: Area | None = None
    perimeter: Length | None = None
    toe_area: Area | None = None


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


class PileCushionKeys(Keys):
    """The pile cushions to choose from."""

    materials: list[str]
    sheets: int | list[int] | SheetRange | None = None
    thickness: Thickness | ThicknessRange | None = None
    wear: list[Literal["new", "worn"]] = ["new", "worn"]
    area: Area | None = None


class HammerCushionKeys(Keys):
    """Hammer cushions to try in place of the catalogue's."""

    materials: list[str]
    thickness: Thickness | ThicknessRange
    area: Area


class StageKeys(Keys):
    """One stage by hand."""

    name: str
    penetration: Length
    shaft: Force
    toe: Force
    set: SetPerBlow | None = None
    shaft_shape: str | list[list[str | float | int]] = "uniform"
    soil: Literal["sand", "silty sand", "silt", "clay"] | None = None
    toe_soil: Literal["dense", "loose"] | None = None
    shaft_quake: SetPerBlow | None = None
    toe_quake: SetPerBlow | None = None
    shaft_damping: Damping | None = None
    toe_damping: Damping | None = None


class TargetKeys(Keys):
    """What stages without a `set` of their own must reach."""

    refusal: SetPerBlow


class LimitsKeys(Keys):
    """Driving stress limits."""

    rule: Annotated[
        str | None, WithJsonSchema({"enum": [*RULES], "description": "a published rule"})
    ] = None
    compression: float | int | None = None
    tension: float | int | None = None
    compression_stress: Stress | None = None
    tension_stress: Stress | None = None


class SearchKeys(Keys):
    """How the best option is chosen."""

    objective: Literal["energy", "time"] = "energy"
    reserve: float | int = 0.0
    seed: int = 7


class AnalysisKeys(Keys):
    """How a blow is computed."""

    gravity: bool = True
    damping: Literal["smith", "viscous"] = "smith"


class JobKeys(Keys):
    """A job file."""

    title: str
    display: Literal["metric", "us"] = "metric"
    catalog: CatalogKeys
    pile: PileKeys
    helmet: HelmetKeys | None = None
    pile_cushion: PileCushionKeys | None = None
    hammer_cushion: HammerCushionKeys | None = None
    stages: list[StageKeys]
    target: TargetKeys | None = None
    limits: LimitsKeys
    search: SearchKeys = SearchKeys()
    analysis: AnalysisKeys = AnalysisKeys()


def job_schema() -> dict[str, Any]:
    """Return the JSON Schema of the job file."""
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        **JobKeys.model_json_schema(),
        "title": "matchup job file",
    }
