"""From the job file's keys to pile cushions, hammer cushions and helmets."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace

from matchup.errors import ModelError, did_you_mean
from matchup.inputs.build_pile import given_follower, given_parts
from matchup.inputs.cushions import CushionCatalogue
from matchup.inputs.findings import some
from matchup.inputs.job_keys import how_to_write
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import JobKeys, SheetRange, ThicknessRange
from matchup.inputs.toml_lines import Path as KeyPath
from matchup.inputs.usual import note_unusual
from matchup.model.cushion import CushionMaterial, CushionSpace, HammerCushion, Spring
from matchup.model.hammer import NO_CUSHION, Hammer
from matchup.model.pile import Pile

THICKNESS_STEP = 0.01
"""Step of a thickness range that names none. [m]"""
MOST_CHOICES = 1000
"""Sheet counts or thicknesses that a range may make."""


def check_catalogue(text: JobText, keys: JobKeys, hammers: Sequence[Hammer]) -> None:
    """Note that the cushion catalogue is missing, where something needs it."""
    if keys.catalog.cushions is not None:
        return
    tables = [name for name in ("pile_cushion", "hammer_cushion") if getattr(keys, name)]
    needs = [f"[{name}]" for name in tables]
    named = [h.name for h in hammers if h.cushion is None and h.cushion_text != NO_CUSHION]
    if named:
        needs.append(f"the hammer cushions of {some(named)}")
    if needs:
        path = ("catalog", "cushions")
        do = 'For example `cushions = "cushions.csv"`.'
        text.wrong(path, f"must be given for {' and '.join(needs)}", do)


def build_cushion_space(
    text: JobText, keys: JobKeys, pile: Pile | None, catalogue: CushionCatalogue
) -> CushionSpace | None:
    """Return the pile cushions to choose from; None without a ``[pile_cushion]`` table."""
    given = keys.pile_cushion
    if given is None:
        return None
    path = ("pile_cushion",)
    chosen = _materials(text, path, given.materials, catalogue, "pile")
    sheets = _sheets(text, given.sheets)
    thicknesses = _thicknesses(text, (*path, "thickness"), given.thickness)
    if given.sheets is None and given.thickness is None:
        text.wrong((*path, "sheets"), "must be given, or `thickness`")
        return None
    area = _area(text, keys, pile)
    if chosen is None or sheets is None or thicknesses is None or area is None:
        return None
    try:
        return CushionSpace(chosen, sheets, thicknesses, area, tuple(dict.fromkeys(given.wear)))
    except ModelError as error:
        text.wrong_model(error, path)
        return None


def _area(text: JobText, keys: JobKeys, pile: Pile | None) -> float | None:
    """Return the area that the cushion carries on: given, or that of a solid head."""
    assert keys.pile_cushion is not None
    path = ("pile_cushion", "area")
    if keys.pile_cushion.area is not None:
        note_unusual(text, path, keys.pile_cushion.area, "stack area")
        return keys.pile_cushion.area
    head = given_follower(keys.pile) or given_parts(keys.pile)[0]
    shape = head.keys.shape
    if shape not in ("square", "round", None) and not text.is_unread(*head.at("shape")):
        must = f"must be given for a pile of the shape {shape}"
        text.wrong(path, must, how_to_write(path))
        return None
    return pile.head.section.area_at(0.0) if pile else None


def _materials(
    text: JobText, path: KeyPath, names: Sequence[str], catalogue: CushionCatalogue, use: str
) -> tuple[CushionMaterial, ...] | None:
    """Return the materials that are named, for a use; None where one can't be had."""
    path = (*path, "materials")
    if not names:
        text.wrong(path, "must name at least one cushion")
        return None
    chosen: dict[str, CushionMaterial | None] = {}
    for place, name in enumerate(names):
        found = catalogue.find(name)
        chosen[found.name if found else name] = found
        if found is not None and found.use not in (use, "both"):
            must = f"must be a cushion whose `use` is {use} or both"
            text.wrong((*path, place), must, found=f"{found.name}, whose use is {found.use}")
            chosen[found.name] = None
        elif found is None and not catalogue.is_broken(name):
            known = catalogue.names
            do = did_you_mean(name, known) or f"There are: {some(known)}."
            text.wrong((*path, place), "must be a name in the cushion catalogue", do)
    materials = tuple(filter(None, chosen.values()))
    return materials if len(materials) == len(chosen) else None


def _sheets(text: JobText, given: int | list[int] | SheetRange | None) -> tuple[int, ...] | None:
    path = ("pile_cushion", "sheets")
    if given is None:
        return ()
    if isinstance(given, SheetRange):
        if given.to < given.from_:
            text.wrong(path, "must have `from` <= `to`")
            return None
        if given.to - given.from_ >= MOST_CHOICES:
            text.wrong(path, f"must be at most {MOST_CHOICES} counts")
            return None
        counts: Sequence[int] = range(given.from_, given.to + 1)
    else:
        counts = sorted({given} if isinstance(given, int) else set(given))
    if not counts or counts[0] < 1:
        text.wrong(path, "must be counts >= 1")
        return None
    return tuple(counts)


def _thicknesses(
    text: JobText, path: KeyPath, given: float | ThicknessRange | None
) -> tuple[float, ...] | None:
    if given is None:
        return ()
    if not isinstance(given, ThicknessRange):
        note_unusual(text, path, given, "stack thickness")
        return (given,)
    step = THICKNESS_STEP if given.step is None else given.step
    if given.from_ > given.to:
        text.wrong(path, "must have `from` <= `to`")
        return None
    if (given.to - given.from_) / step >= MOST_CHOICES:
        do = "Give a larger `step`." if given.step else "Give a `step`; without one it is 10 mm."
        text.wrong(path, f"must make at most {MOST_CHOICES} thicknesses", do)
        return None
    note_unusual(text, (*path, "from"), given.from_, "stack thickness")
    note_unusual(text, (*path, "to"), given.to, "stack thickness")
    whole = int((given.to - given.from_) / step + 1e-9)
    made = [given.from_ + step * i for i in range(whole + 1)]
    if given.to - made[-1] > 1e-6:
        made.append(given.to)
    return tuple(made)


def build_hammer_cushions(
    text: JobText, keys: JobKeys, catalogue: CushionCatalogue
) -> tuple[HammerCushion, ...]:
    """Return the hammer cushions to try; empty without a ``[hammer_cushion]`` table."""
    given = keys.hammer_cushion
    if given is None:
        return ()
    path = ("hammer_cushion",)
    chosen = _materials(text, path, given.materials, catalogue, "hammer")
    thicknesses = _thicknesses(text, (*path, "thickness"), given.thickness)
    note_unusual(text, (*path, "area"), given.area, "stack area")
    if chosen is None or thicknesses is None or text.is_unread(*path, "area"):
        return ()
    return tuple(
        HammerCushion(
            f"{1e3 * thickness:g} mm of {material.name}",
            Spring(material.modulus * given.area / thickness, material.restitution),
        )
        for material in chosen
        for thickness in thicknesses
        if not math.isnan(thickness)
    )


def with_helmets(text: JobText, keys: JobKeys, hammers: Sequence[Hammer]) -> tuple[Hammer, ...]:
    """Return the hammers, those without a helmet of their own with the job's."""
    if text.is_unread("helmet", "mass"):
        return tuple(hammers)
    mass = keys.helmet.mass if keys.helmet else None
    path = ("helmet", "mass")
    without = [hammer.name for hammer in hammers if hammer.helmet_mass is None]
    if without and mass is None:
        must = f"must be given: the catalogue has no helmet for {some(without)}"
        text.wrong(path, must, 'Write [helmet] and below it, for example, `mass = "900 kg"`.')
    if mass is not None and hammers and not without:
        text.notice(path, "has no effect: every hammer's row names its helmet")
    note_unusual(text, path, mass, "helmet mass")
    return tuple(
        replace(hammer, helmet_mass=mass) if hammer.helmet_mass is None else hammer
        for hammer in hammers
    )
