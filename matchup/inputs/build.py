"""From the job file's keys to model objects."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

from matchup.errors import ModelError
from matchup.inputs.findings import did_you_mean
from matchup.model.cushion import CushionMaterial, CushionSpace, HammerCushion, Spring
from matchup.model.hammer import Hammer
from matchup.model.job import Analysis, Search
from matchup.model.limits import RULES, StressLimits, stress_limits
from matchup.model.pile import (
    CONCRETE_DENSITY,
    STEEL_DENSITY,
    STEEL_MODULUS,
    TIMBER_DENSITY,
    TIMBER_MODULUS,
    Pile,
    Section,
    concrete_modulus,
)
from matchup.model.stage import (
    CORING_TOE_QUAKE,
    REFUSAL_SET,
    SHAFT_DAMPING,
    SHAFT_QUAKE,
    TOE_DAMPING,
    TOE_QUAKE_SHARE,
    Stage,
)
from matchup.units import UnitError, parse_quantity

if TYPE_CHECKING:
    from matchup.inputs.job_file import JobText
    from matchup.inputs.schema import JobKeys, PileKeys, StageKeys, ThicknessRange

SHAPE_KEYS = {
    "square": (("width",), ()),
    "round": (("diameter",), ()),
    "pipe": (("diameter", "wall", "toe"), ()),
    "h": (("area", "depth", "width"), ("perimeter", "toe_area")),
    "other": (("area", "perimeter", "toe_area"), ()),
}
"""Keys that each shape needs, and those it may have."""
SIZE_KEYS = ("width", "diameter", "wall", "toe", "depth", "area", "perimeter", "toe_area")
THICKNESS_STEP = 0.01
"""Step of a thickness range that names none. [m]"""


def build_pile(text: JobText, keys: PileKeys) -> Pile | None:
    """Return the pile, or note what is wrong with it."""
    section = _section(text, keys)
    modulus, modulus_note = _modulus(keys)
    density, density_note = _density(keys)
    if section is None:
        return None
    try:
        return Pile(
            material=keys.material,
            section=section,
            length=keys.length,
            modulus=modulus,
            density=density,
            strength=_strength(keys),
            prestress=keys.prestress or 0.0,
            notes=tuple(note for note in (modulus_note, density_note) if note),
        )
    except ModelError as error:
        strength = "strength_at_driving" if keys.strength_at_driving else "strength"
        text.wrong_model(error, ("pile",), {"strength": strength})
        return None


def _strength(keys: PileKeys) -> float:
    return keys.strength if keys.strength_at_driving is None else keys.strength_at_driving


def _section(text: JobText, keys: PileKeys) -> Section | None:
    needed, allowed = SHAPE_KEYS[keys.shape]
    sound = True
    for key in SIZE_KEYS:
        given = getattr(keys, key) is not None
        if key in needed and not given:
            text.wrong(("pile", key), f"must be given for the shape {keys.shape}")
            sound = False
        elif given and key not in (*needed, *allowed):
            also = ", ".join((*needed, *allowed))
            text.wrong(("pile", key), f"must be left out for the shape {keys.shape} (keys: {also})")
            sound = False
        elif given and key != "toe" and not getattr(keys, key) > 0:
            text.wrong(("pile", key), "must be > 0")
            sound = False
    if not sound:
        return None
    sizes = {key: getattr(keys, key) for key in (*needed, *allowed)}
    try:
        return getattr(Section, keys.shape)(**sizes)  # type: ignore[no-any-return]
    except ModelError as error:
        text.wrong_model(error, ("pile",), {})
        return None


def _modulus(keys: PileKeys) -> tuple[float, str]:
    if keys.modulus is not None:
        return keys.modulus, ""
    if keys.material == "concrete":
        modulus = concrete_modulus(max(_strength(keys), 0.0))
        source = "1820 sqrt(f'c in ksi), FHWA-NHI-16-009 Eq. 8-1, second-hand"
        return modulus, f"modulus {modulus / 1e9:.1f} GPa ({source})"
    if keys.material == "steel":
        return STEEL_MODULUS, "modulus 210 GPa (UFC 3-220-20, second-hand)"
    source = "middle of 8.6-10.3 GPa, FHWA-NHI-16-009 Table 8-3, second-hand"
    return TIMBER_MODULUS, f"modulus {TIMBER_MODULUS / 1e9:.2f} GPa ({source})"


def _density(keys: PileKeys) -> tuple[float, str]:
    if keys.density is not None:
        return keys.density, ""
    density, source = {
        "concrete": (CONCRETE_DENSITY, "common practice"),
        "steel": (STEEL_DENSITY, "FHWA-NHI-16-009 8.2, second-hand"),
        "timber": (TIMBER_DENSITY, "common practice"),
    }[keys.material]
    return density, f"density {density:g} kg/m3 ({source})"


def build_limits(text: JobText, keys: JobKeys, pile: Pile | None) -> StressLimits | None:
    """Return the stress limits, or note what is wrong with them."""
    given = keys.limits
    if given.rule is not None and given.rule not in RULES:
        do = did_you_mean(given.rule, RULES)
        text.wrong(("limits", "rule"), f"must be one of: {', '.join(RULES)}", do)
        return None
    if pile is None:
        return None
    try:
        return stress_limits(
            pile,
            given.rule,
            None if given.compression is None else float(given.compression),
            None if given.tension is None else float(given.tension),
            given.compression_stress,
            given.tension_stress,
        )
    except ModelError as error:
        text.wrong_model(error, ("limits",), {})
        return None


def build_stages(text: JobText, keys: JobKeys, pile: Pile | None) -> tuple[Stage, ...] | None:
    """Return the stages, or note what is wrong with them."""
    if not keys.stages:
        text.wrong(("stages",), "must hold at least one stage")
        return None
    names: dict[str, int] = {}
    made = []
    for place, stage in enumerate(keys.stages):
        first = names.setdefault(stage.name.casefold(), place)
        if first != place:
            text.wrong(("stages", place, "name"), f"must differ from the name of stage {first + 1}")
        if pile is None:
            continue
        if stage.penetration > pile.length:
            path = ("stages", place, "penetration")
            text.wrong(path, f"must be at most the pile's length {text.typed(('pile', 'length'))}")
        built = _stage(text, keys, place, stage, pile)
        if built is not None:
            made.append(built)
    return tuple(made) if len(made) == len(keys.stages) else None


def _stage(text: JobText, keys: JobKeys, place: int, given: StageKeys, pile: Pile) -> Stage | None:
    notes: list[str] = []
    path = ("stages", place)
    shape = _shaft_shape(text, (*path, "shaft_shape"), given)
    if shape is None:
        return None
    refusal = keys.target.refusal if keys.target else None
    needed = given.set if given.set is not None else refusal
    if needed is None:
        needed = REFUSAL_SET
        notes.append("refusal set 1.0 mm (248 blows per 250 mm, API RP 2A, second-hand)")
    try:
        return Stage(
            name=given.name,
            penetration=given.penetration,
            shaft=given.shaft,
            toe=given.toe,
            set_needed=needed,
            shaft_quake=_shaft_quake(given, notes),
            toe_quake=_toe_quake(given, pile, notes),
            shaft_damping=_shaft_damping(given, notes),
            toe_damping=_toe_damping(given, notes),
            shaft_shape=shape,
            notes=tuple(notes),
        )
    except ModelError as error:
        text.wrong_model(error, path, {})
        return None


def _shaft_quake(given: StageKeys, notes: list[str]) -> float:
    if given.shaft_quake is not None:
        return given.shaft_quake
    notes.append("shaft quake 2.5 mm (Smith 1960; FHWA-NHI-16-010 12.6, second-hand)")
    return SHAFT_QUAKE


def _toe_quake(given: StageKeys, pile: Pile, notes: list[str]) -> float:
    if given.toe_quake is not None:
        return given.toe_quake
    if not pile.section.displaces:
        notes.append("toe quake 2.5 mm (coring tubes and H sections; from memory)")
        return CORING_TOE_QUAKE
    soil = given.toe_soil or "dense"
    quake = TOE_QUAKE_SHARE[soil] * pile.section.width
    assumed = "" if given.toe_soil else "assumed "
    notes.append(
        f"toe quake {1e3 * quake:.1f} mm ({assumed}{soil} ground under the toe; "
        "FHWA-NHI-16-010 12.6, second-hand)"
    )
    return quake


def _shaft_damping(given: StageKeys, notes: list[str]) -> float:
    if given.shaft_damping is not None:
        return given.shaft_damping
    soil = given.soil or "sand"
    assumed = "" if given.soil else "assumed "
    notes.append(
        f"shaft damping {SHAFT_DAMPING[soil]:g} s/m ({assumed}{soil}; "
        "FHWA-NHI-16-010 12.6, second-hand)"
    )
    return SHAFT_DAMPING[soil]


def _toe_damping(given: StageKeys, notes: list[str]) -> float:
    if given.toe_damping is not None:
        return given.toe_damping
    notes.append("toe damping 0.5 s/m (FHWA-NHI-16-010 12.6, second-hand)")
    return TOE_DAMPING


def _shaft_shape(
    text: JobText, path: tuple[str | int, ...], given: StageKeys
) -> tuple[tuple[float, float], ...] | None:
    shape = given.shaft_shape
    if shape == "uniform":
        return ()
    if shape == "triangular":
        return ((0.0, 0.0), (given.penetration, 1.0))
    must = 'must be "uniform", "triangular" or rows of depth and intensity'
    do = 'For example [["0 m", 0.2], ["12 m", 1.0]].'
    if isinstance(shape, str):
        text.wrong(path, must, do)
        return None
    rows = []
    for row in shape:
        depth, intensity = row if len(row) == 2 else ("", "")
        if not isinstance(depth, str) or isinstance(intensity, str):
            text.wrong(path, must, do, found=str(row))
            return None
        try:
            rows.append((parse_quantity(depth, "length"), float(intensity)))
        except UnitError as error:
            text.wrong(path, error.must, error.do, found=f'"{depth}"')
            return None
    return tuple(rows)


def build_settings(text: JobText, keys: JobKeys) -> tuple[Analysis | None, Search | None]:
    """Return how blows are computed and options chosen."""
    analysis = Analysis(keys.analysis.gravity, keys.analysis.damping)
    try:
        search = Search(keys.search.objective, float(keys.search.reserve), keys.search.seed)
    except ModelError as error:
        text.wrong_model(error, ("search",), {})
        return analysis, None
    return analysis, search


def build_cushion_space(
    text: JobText, keys: JobKeys, pile: Pile | None, materials: Sequence[CushionMaterial]
) -> CushionSpace | None:
    """Return the pile cushions to choose from; None without a ``[pile_cushion]`` table."""
    given = keys.pile_cushion
    if given is None:
        return None
    path = ("pile_cushion",)
    if keys.catalog.cushions is None:
        text.wrong(("catalog", "cushions"), "must be given for a job with a [pile_cushion]")
        return None
    chosen = _materials(text, path, given.materials, materials)
    sheets = _sheets(text, keys)
    thicknesses = _thicknesses(text, (*path, "thickness"), given.thickness)
    area = given.area
    if area is None and pile is not None:
        if pile.section.text not in ("square", "round"):
            must = f"must be given for a pile of the shape {keys.pile.shape}"
            text.wrong((*path, "area"), must)
        area = pile.section.area
    if not chosen or sheets is None or thicknesses is None or area is None:
        return None
    try:
        return CushionSpace(chosen, sheets, thicknesses, area, tuple(dict.fromkeys(given.wear)))
    except ModelError as error:
        text.wrong_model(error, path, {})
        return None


def _materials(
    text: JobText,
    path: tuple[str | int, ...],
    names: Sequence[str],
    materials: Sequence[CushionMaterial],
) -> tuple[CushionMaterial, ...]:
    chosen = []
    for name in dict.fromkeys(names):
        found = [m for m in materials if m.name.casefold() == name.strip().casefold()]
        if found:
            chosen.append(found[0])
        elif materials:
            known = [material.name for material in materials]
            do = did_you_mean(name, known) or f"There are: {', '.join(known)}."
            must = "must be names in the cushion catalogue"
            text.wrong((*path, "materials"), must, do, found=f'"{name}"')
    if not names:
        text.wrong((*path, "materials"), "must name at least one cushion")
    return tuple(chosen) if len(chosen) == len(dict.fromkeys(names)) else ()


def _sheets(text: JobText, keys: JobKeys) -> tuple[int, ...] | None:
    assert keys.pile_cushion is not None
    given = keys.pile_cushion.sheets
    path = ("pile_cushion", "sheets")
    if given is None:
        return ()
    if isinstance(given, int):
        counts: Sequence[int] = [given]
    elif isinstance(given, list):
        counts = sorted(set(given))
    else:
        if given.to < given.from_:
            text.wrong(path, "must have `from` <= `to`")
            return None
        if given.to - given.from_ > 1000:
            text.wrong(path, "must be at most 1000 counts")
            return None
        counts = range(given.from_, given.to + 1)
    if not counts or min(counts) < 1:
        text.wrong(path, "must be counts >= 1")
        return None
    return tuple(counts)


def _thicknesses(
    text: JobText, path: tuple[str | int, ...], given: float | ThicknessRange | None
) -> tuple[float, ...] | None:
    if given is None:
        return ()
    if isinstance(given, float):
        if given <= 0:
            text.wrong(path, "must be > 0")
            return None
        return (given,)
    step = THICKNESS_STEP if given.step is None else given.step
    if not 0 < given.from_ <= given.to:
        text.wrong(path, "must have 0 < `from` <= `to`")
        return None
    if not step > 0 or (given.to - given.from_) / step > 1000:
        text.wrong(path, "must have a `step` > 0 that makes at most 1000 thicknesses")
        return None
    whole = int((given.to - given.from_) / step + 1e-9)
    made = [given.from_ + step * i for i in range(whole + 1)]
    if given.to - made[-1] > 1e-6:
        made.append(given.to)
    return tuple(made)


def build_hammer_cushions(
    text: JobText, keys: JobKeys, materials: Sequence[CushionMaterial]
) -> tuple[HammerCushion, ...]:
    """Return the hammer cushions to try; empty without a ``[hammer_cushion]`` table."""
    given = keys.hammer_cushion
    if given is None:
        return ()
    path = ("hammer_cushion",)
    chosen = _materials(text, path, given.materials, materials)
    for material in chosen:
        if material.use not in ("hammer", "both"):
            must = "must be cushions whose `use` is hammer or both"
            text.wrong((*path, "materials"), must, found=f"{material.name}, use {material.use}")
    thicknesses = _thicknesses(text, (*path, "thickness"), given.thickness)
    if not given.area > 0:
        text.wrong((*path, "area"), "must be > 0")
        return ()
    return tuple(
        HammerCushion(
            f"{1e3 * thickness:g} mm of {material.name}",
            Spring(material.modulus * given.area / thickness, material.restitution),
        )
        for material in chosen
        for thickness in thicknesses or ()
    )


def with_helmets(text: JobText, keys: JobKeys, hammers: Sequence[Hammer]) -> tuple[Hammer, ...]:
    """Return the hammers, those without a helmet of their own with the job's."""
    mass = keys.helmet.mass if keys.helmet else None
    if mass is not None and not mass > 0:
        text.wrong(("helmet", "mass"), "must be > 0")
        return tuple(hammers)
    without = [hammer.name for hammer in hammers if hammer.helmet_mass is None]
    if without and mass is None:
        must = "must be given for hammers whose catalogue row names no helmet"
        text.wrong(("helmet", "mass"), must, found=f"none for {', '.join(without)}")
    return tuple(
        replace(hammer, helmet_mass=mass) if hammer.helmet_mass is None and mass else hammer
        for hammer in hammers
    )
