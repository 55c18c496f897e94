"""From the job file's keys to the pile and its stress limits."""

from __future__ import annotations

import math

from matchup.errors import ModelError, did_you_mean
from matchup.inputs.job_keys import how_to_write
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import JobKeys, LimitsKeys, PileKeys
from matchup.inputs.usual import note_unusual
from matchup.model.limits import RULES, GivenLimits, StressLimits, stress_limits
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

SHAPE_KEYS = {
    "square": (("width",), ()),
    "round": (("diameter",), ()),
    "pipe": (("diameter", "wall", "toe"), ()),
    "h": (("area", "depth", "width"), ("perimeter", "toe_area")),
    "other": (("area", "perimeter", "toe_area"), ()),
}
"""Keys that each shape needs, and those it may have."""
SIZE_KEYS = ("width", "diameter", "wall", "toe", "depth", "area", "perimeter", "toe_area")
ANY_SECTION = Section.square(1.0)
"""Stands in for a section that is told to be wrong, so that the rest of the pile is checked."""


def build_pile(text: JobText, keys: PileKeys) -> Pile | None:
    """Return the pile, or note what is wrong with it."""
    section = _section(text, keys)
    modulus, modulus_note = _modulus(keys)
    density, density_note = _density(keys)
    try:
        pile = Pile(
            material=keys.material,
            section=section or ANY_SECTION,
            length=keys.length,
            modulus=modulus,
            density=density,
            strength=_strength(keys),
            prestress=keys.prestress or 0.0,
            notes=tuple(filter(None, (_strength_note(text, keys), modulus_note, density_note))),
        )
    except ModelError as error:
        strength = "strength_at_driving" if keys.strength_at_driving else "strength"
        text.wrong_model(error, ("pile",), {"strength": strength})
        return None
    if section is None or text.is_unread("pile", "material"):
        return None
    _note_unusual(text, keys)
    return pile


def _note_unusual(text: JobText, keys: PileKeys) -> None:
    note_unusual(
        text, ("pile", "strength_at_driving"), keys.strength_at_driving, "concrete strength"
    )
    for key in ("strength", "modulus", "density"):
        note_unusual(text, ("pile", key), getattr(keys, key), f"{keys.material} {key}")
    for key in ("length", "prestress", "width", "diameter", "wall", "depth"):
        note_unusual(text, ("pile", key), getattr(keys, key), f"pile {key}")


def _strength(keys: PileKeys) -> float:
    return keys.strength if keys.strength_at_driving is None else keys.strength_at_driving


def _strength_note(text: JobText, keys: PileKeys) -> str:
    """Return what to say of a strength at driving; note one that can't be."""
    if keys.strength_at_driving is None:
        return ""
    path = ("pile", "strength_at_driving")
    if keys.material != "concrete":
        text.wrong(path, "must be left out for a pile that is not of concrete")
    young, full = text.typed(path), text.typed(("pile", "strength"))
    if keys.strength_at_driving > keys.strength:
        text.notice(path, f"{young} is above the strength, {full}")
    return "strength at driving {} in place of {}".format(*(t.strip("\"'") for t in (young, full)))


def _section(text: JobText, keys: PileKeys) -> Section | None:
    if text.is_unread("pile", "shape"):
        return None
    needed, allowed = SHAPE_KEYS[keys.shape]
    sound = True
    for key in SIZE_KEYS:
        value = getattr(keys, key)
        if key in needed and value is None:
            must = f"must be given for the shape {keys.shape}"
            text.wrong(("pile", key), must, how_to_write(("pile", key)))
            sound = False
        elif value is not None and key not in (*needed, *allowed):
            also = ", ".join((*needed, *allowed))
            text.wrong(("pile", key), f"must be left out for the shape {keys.shape} (keys: {also})")
            sound = False
    sizes = {key: getattr(keys, key) for key in (*needed, *allowed)}
    if not sound or any(size is not None and size != size for size in sizes.values()):
        return None
    try:
        return getattr(Section, keys.shape)(**sizes)  # type: ignore[no-any-return]
    except ModelError as error:
        text.wrong_model(error, ("pile",))
        return None


def _modulus(keys: PileKeys) -> tuple[float, str]:
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
    if not _is_known(text, keys.limits.rule):
        return None
    given = GivenLimits(**keys.limits.model_dump())
    try:
        if pile is not None:
            limits = stress_limits(pile, *given)
            _note_overridden(text, keys.limits)
            return limits
        if not text.is_unread("pile", "material"):
            given.check(keys.pile.material)
    except ModelError as error:
        text.wrong_model(error, ("limits",))
    return None


def _is_known(text: JobText, rule: str | None) -> bool:
    if text.is_unread("limits", "rule"):
        return False
    if rule is None or rule in RULES:
        return True
    do = did_you_mean(rule, RULES)
    text.wrong(("limits", "rule"), f"must be one of: {', '.join(RULES)}", do)
    return False


def _note_overridden(text: JobText, given: LimitsKeys) -> None:
    compression = given.compression or given.compression_stress
    if given.rule and compression and (given.tension or given.tension_stress):
        text.notice(("limits", "rule"), "has no effect: both limits are given")
