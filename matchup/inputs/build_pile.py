"""From the job file's keys to the pile: its parts, and what is common to them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace
from typing import NamedTuple

from matchup.errors import ModelError
from matchup.inputs.job_keys import how_to_write
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import PartKeys, PileKeys, SectionKeys
from matchup.inputs.toml_lines import Path as KeyPath
from matchup.inputs.usual import note_unusual
from matchup.model.pile import (
    CONCRETE_DENSITY,
    STEEL_DENSITY,
    STEEL_MODULUS,
    TIMBER_DENSITY,
    TIMBER_MODULUS,
    Fill,
    Part,
    Pile,
    Section,
    concrete_modulus,
)

SHAPE_KEYS = {
    "square": (("width",), ()),
    "round": (("diameter",), ("toe_diameter",)),
    "pipe": (("diameter", "wall", "toe"), ()),
    "h": (("area", "depth", "width"), ("perimeter", "toe_area")),
    "other": (("area", "perimeter", "toe_area"), ()),
}
"""Keys that each shape needs, and those it may have."""
SIZE_KEYS = (
    "width",
    "diameter",
    "toe_diameter",
    "wall",
    "toe",
    "depth",
    "area",
    "perimeter",
    "toe_area",
)
OF_MATERIAL = ("strength", "strength_at_driving", "prestress", "modulus", "density")
OF_SHAPE = (*SIZE_KEYS, "fill")
"""Keys that belong to a material and to a shape: parts with their own take none of the pile's."""
NEEDED = ("material", "shape", "length", "strength")
ANY_SECTION = Section.square(1.0)
"""Stands in for a section that is told to be wrong, so that the rest of the pile is checked."""
SAME_LENGTH = 1e-3
"""Parts add up to a given length within so much. [m]"""


class Given(NamedTuple):
    """What the file says of one part.

    Parameters
    ----------
    keys : SectionKeys
        The part's own, completed by the pile's.
    path : KeyPath
        Of the part's own.
    own : SectionKeys
        As they stand there.
    name : str
        Empty for the only part.
    is_toe : bool
        Whether it is the lowest part.
    """

    keys: SectionKeys
    path: KeyPath
    own: SectionKeys
    name: str
    is_toe: bool

    def at(self, key: str) -> KeyPath:
        """Return the path of a key: the pile's own where the part takes it from there."""
        taken = getattr(self.own, key) is None and getattr(self.keys, key) is not None
        return ("pile", key) if taken else (*self.path, key)


def given_parts(keys: PileKeys) -> list[Given]:
    """Return what the file says of every part, head first, the follower left out."""
    if not keys.parts:
        # One part alone has no name, unless a plug or a follower makes it one of several.
        name = "pile" if keys.plug or keys.follower else ""
        return [Given(keys, ("pile",), keys, name, True)]
    last = len(keys.parts) - 1
    return [
        Given(
            _completed(own, keys),
            ("pile", "parts", place),
            own,
            own.name or f"part {place + 1}",
            place == last,
        )
        for place, own in enumerate(keys.parts)
    ]


def given_follower(keys: PileKeys) -> Given | None:
    """Return what the file says of the follower."""
    own = keys.follower
    if own is None:
        return None
    return Given(own, ("pile", "follower"), own, own.name or "follower", False)


def _completed(own: PartKeys, common: PileKeys) -> SectionKeys:
    """Return a part's keys, those that it leaves out taken from the pile."""
    left = {"length"}
    left |= set(OF_MATERIAL) if own.material else set()
    left |= set(OF_SHAPE) if own.shape else set()
    taken = {
        key: value
        for key in SectionKeys.model_fields
        if (value := getattr(own, key)) is not None
        or (key not in left and (value := getattr(common, key)) is not None)
    }
    return SectionKeys.model_construct(**taken)


def length_of(keys: PileKeys) -> float:
    """Return the pile's length by its keys alone; not a number where they do not say [m]."""
    lengths = [given.keys.length for given in given_parts(keys)]
    return math.fsum(math.nan if length is None else length for length in lengths)


def length_typed(text: JobText, keys: PileKeys) -> str:
    """Return the pile's length as typed, or the sum of its parts."""
    return text.typed(("pile", "length")) or f"{length_of(keys):g} m"


def build_pile(text: JobText, keys: PileKeys) -> Pile | None:
    """Return the pile, or note what is wrong with it."""
    if text.is_unread("pile", "parts"):
        return None
    _check_parts(text, keys)
    parts = [_part(text, given) for given in given_parts(keys)]
    follower = given_follower(keys)
    stands = _part(text, follower) if follower else None
    parts = _plugged(text, keys, parts)
    made = [part for part in parts if part is not None]
    rake = keys.rake or 0.0
    note_unusual(text, ("pile", "shoe_mass"), keys.shoe_mass, "pile shoe_mass")
    try:
        if len(made) < len(parts) or (follower and stands is None):
            # What concerns the pile as a whole is told all the same.
            Pile((ANY_PART,), None, keys.shoe_mass or 0.0, rake)
            return None
        return Pile(tuple(made), stands, keys.shoe_mass or 0.0, rake)
    except ModelError as error:
        text.wrong_model(error, ("pile",))
        return None


def _check_parts(text: JobText, keys: PileKeys) -> None:
    """Note parts that do not fit together."""
    if keys.parts is None:
        return
    if not keys.parts:
        text.wrong(("pile", "parts"), "must hold at least one part, or be left out")
        return
    whole = math.fsum(math.nan if p.length is None else p.length for p in keys.parts)
    if keys.length is not None and abs(keys.length - whole) > SAME_LENGTH:
        must = f"must be the sum of the lengths of its parts, {whole:g} m, or be left out"
        text.wrong(("pile", "length"), must)
    givens = given_parts(keys)
    for key in SectionKeys.model_fields:
        value = getattr(keys, key)
        if value is not None and key != "length" and all(g.at(key)[1] != key for g in givens):
            text.notice(("pile", key), "has no effect: every part has its own")
    seen: set[str] = set()
    for given in givens:
        if given.name.casefold() in seen:
            text.wrong((*given.path, "name"), "must differ from the names of the other parts")
        seen.add(given.name.casefold())


def _part(text: JobText, given: Given) -> Part | None:
    """Return one part, or note what is wrong with it."""
    keys = given.keys
    for key in NEEDED:
        if getattr(keys, key) is None:
            path = (*given.path, key)
            text.wrong(path, "must be given", how_to_write(path), found="")
    section = _section(text, given)
    if keys.material is None or keys.length is None or keys.strength is None:
        return None
    modulus, modulus_note = _modulus(keys)
    density, density_note = _density(keys)
    try:
        part = Part(
            material=keys.material,
            section=section or ANY_SECTION,
            length=keys.length,
            modulus=modulus,
            density=density,
            strength=_strength(keys),
            prestress=keys.prestress or 0.0,
            name=given.name,
            fill=_fill(text, given),
            notes=tuple(filter(None, (_strength_note(text, given), modulus_note, density_note))),
        )
    except ModelError as error:
        strength = "strength_at_driving" if keys.strength_at_driving else "strength"
        for fault in error.faults:
            path = given.at(strength if fault.field == "strength" else fault.field)
            text.wrong_model(
                ModelError(error.name, [fault]), path[:-1], {fault.field: str(path[-1])}
            )
        return None
    if section is None or text.is_unread(*given.at("material")):
        return None
    _note_unusual(text, given)
    return part


def _note_unusual(text: JobText, given: Given) -> None:
    young = given.keys.strength_at_driving
    note_unusual(text, given.at("strength_at_driving"), young, "concrete strength")
    for key in ("strength", "modulus", "density"):
        value = getattr(given.keys, key)
        note_unusual(text, given.at(key), value, f"{given.keys.material} {key}")
    for key in ("length", "prestress", "width", "diameter", "toe_diameter", "wall", "depth"):
        note_unusual(text, given.at(key), getattr(given.own, key), f"pile {key}")


def _strength(keys: SectionKeys) -> float:
    assert keys.strength is not None
    return keys.strength if keys.strength_at_driving is None else keys.strength_at_driving


def _strength_note(text: JobText, given: Given) -> str:
    """Return what to say of a strength at driving; note one that can't be."""
    keys = given.keys
    if keys.strength_at_driving is None:
        return ""
    path = given.at("strength_at_driving")
    if keys.material != "concrete":
        text.wrong(path, "must be left out for a pile that is not of concrete")
    young, full = text.typed(path), text.typed(given.at("strength"))
    if keys.strength is not None and keys.strength_at_driving > keys.strength:
        text.notice(path, f"{young} is above the strength, {full}")
    return "strength at driving {} in place of {}".format(*(t.strip("\"'") for t in (young, full)))


def _section(text: JobText, given: Given) -> Section | None:
    keys = given.keys
    if keys.shape is None or text.is_unread(*given.at("shape")):
        return None
    needed, allowed = SHAPE_KEYS[keys.shape]
    sound = True
    for key in SIZE_KEYS:
        value = getattr(keys, key)
        if key in needed and value is None:
            # Above the toe it does not matter whether a tube is open.
            if key != "toe" or given.is_toe:
                must = f"must be given for the shape {keys.shape}"
                text.wrong((*given.path, key), must, how_to_write((*given.path, key)))
                sound = False
        elif value is not None and key not in (*needed, *allowed):
            also = ", ".join((*needed, *allowed))
            must = f"must be left out for the shape {keys.shape} (keys: {also})"
            text.wrong(given.at(key), must)
            sound = False
    sizes = {key: getattr(keys, key) for key in (*needed, *allowed)}
    if keys.shape == "pipe":
        sizes["toe"] = keys.toe or "open"
    if not sound or any(size is not None and size != size for size in sizes.values()):
        return None
    try:
        return getattr(Section, keys.shape)(**sizes)  # type: ignore[no-any-return]
    except ModelError as error:
        for fault in error.faults:
            path = given.at(fault.field)
            text.wrong_model(ModelError(error.name, [fault]), path[:-1])
        return None


def _fill(text: JobText, given: Given) -> Fill | None:
    """Return the concrete in a tube, or note that there can be none."""
    fill, keys = given.keys.fill, given.keys
    if fill is None:
        return None
    if keys.shape != "pipe" or (given.is_toe and keys.toe != "closed"):
        must = "must be left out for a pile that is not a tube, at the toe a closed one"
        text.wrong(given.at("fill"), must)
        return None
    if keys.diameter is None or keys.wall is None or math.isnan(fill.strength):
        return None
    inside = keys.diameter - 2 * keys.wall
    if not inside > 0:
        return None
    modulus = concrete_modulus(fill.strength) if fill.modulus is None else fill.modulus
    density = CONCRETE_DENSITY if fill.density is None else fill.density
    return Fill(math.pi * inside**2 / 4, modulus, density, fill.strength)


def _plugged(text: JobText, keys: PileKeys, parts: Sequence[Part | None]) -> list[Part | None]:
    """Return the parts, the length with a soil plug as one of its own."""
    plug, toe = keys.plug, parts[-1]
    if plug is None or toe is None or math.isnan(plug.length) or math.isnan(plug.density):
        return list(parts)
    core = toe.section.core
    if core is None:
        must = "must be left out for a section that takes in no soil, or whose core is not known"
        text.wrong(("pile", "plug"), must)
        return list(parts)
    if plug.length > toe.length:
        text.wrong(("pile", "plug", "length"), f"must be at most {toe.length:g} m, the part's")
        return list(parts)
    carried = plug.density * core.area
    note = f"soil plug of {plug.length:g} m at all stages ({plug.density:g} kg/m3 in {core.shape})"
    if toe.length - plug.length < SAME_LENGTH:
        return [*parts[:-1], replace(toe, carried=carried, notes=(*toe.notes, note))]
    upper = replace(toe, length=toe.length - plug.length)
    lower = replace(
        toe, length=plug.length, carried=carried, name=f"{toe.name}, plugged", notes=(note,)
    )
    return [*parts[:-1], upper, lower]


ANY_PART = Part("steel", ANY_SECTION, 1.0, STEEL_MODULUS, STEEL_DENSITY, 1e8)


def _modulus(keys: SectionKeys) -> tuple[float, str]:
    if keys.modulus is not None:
        return keys.modulus, ""
    if keys.material == "concrete" and not math.isnan(_strength(keys)):
        modulus = concrete_modulus(_strength(keys))
        source = "1820 sqrt(f'c in ksi), FHWA-NHI-16-009 Eq. 8-1, second-hand"
        return modulus, f"modulus {modulus / 1e9:.1f} GPa ({source})"
    if keys.material == "timber":
        source = "middle of 8.6-10.3 GPa, FHWA-NHI-16-009 Table 8-3, second-hand"
        return TIMBER_MODULUS, f"modulus {TIMBER_MODULUS / 1e9:.2f} GPa ({source})"
    return STEEL_MODULUS, "modulus 210 GPa (UFC 3-220-20, second-hand)"


def _density(keys: SectionKeys) -> tuple[float, str]:
    if keys.density is not None:
        return keys.density, ""
    density, source = {
        "concrete": (CONCRETE_DENSITY, "common practice"),
        "steel": (STEEL_DENSITY, "FHWA-NHI-16-009 8.2, second-hand"),
        "timber": (TIMBER_DENSITY, "common practice"),
    }[keys.material or "steel"]
    return density, f"density {density:g} kg/m3 ({source})"
