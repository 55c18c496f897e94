"""The hammer catalogue."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Protocol

from matchup.errors import ModelError
from matchup.inputs.columns import Record, Spec, read_records
from matchup.inputs.cushions import check_names
from matchup.inputs.findings import Findings, did_you_mean
from matchup.inputs.table import RawTable, read_table
from matchup.model.cushion import CushionMaterial, Spring
from matchup.model.hammer import Hammer

COLUMNS = (
    Spec("name", "name", required=True),
    Spec("kind", "text", required=True),
    Spec("ram_mass", "mass", required=True, instead="ram_weight"),
    Spec("stroke_min", "stroke", required=True),
    Spec("stroke_max", "stroke", required=True),
    Spec("efficiency", "number", required=True),
    Spec("stroke_step", "stroke"),
    Spec("blow_rate_max", "rate"),
    Spec("lift_speed", "velocity"),
    Spec("rated_energy", "energy"),
    Spec("helmet_mass", "mass", instead="helmet_weight"),
    Spec("hammer_cushion", "text"),
    Spec("hammer_cushion_thickness", "thickness"),
    Spec("hammer_cushion_area", "area"),
    Spec("hammer_cushion_stiffness", "stiffness"),
    Spec("hammer_cushion_restitution", "number"),
    Spec("hammer_mass", "mass", instead="hammer_weight"),
    Spec("rides_on_pile", "yes_no"),
    Spec("available", "yes_no"),
    Spec("source", "text"),
)


class _Wrong(Protocol):
    """Notes what is wrong with a row's hammer cushion."""

    def __call__(self, must: str, found: str, place: str = ..., do: str = ...) -> None: ...


LATER_KINDS = ("double-acting", "diesel")
"""Kinds that a catalogue may hold and this version can't yet compute."""


def read_hammers(
    path: Path, materials: Sequence[CushionMaterial] | None, findings: Findings
) -> tuple[Hammer, ...]:
    """Return the hammers of a catalogue that can be used; problems go to `findings`.

    Hammers of a kind that this version can't compute, or that are not available, are left out
    with a notice.

    Parameters
    ----------
    path : Path
    materials : sequence of CushionMaterial or None
        The cushion catalogue, for hammer cushions given by name; None leaves the names unchecked.
    """
    table = read_table(path, findings)
    if table is None:
        return ()
    records = read_records(table, COLUMNS, findings)
    check_names(table, records, findings)
    hammers = []
    for record in records:
        kind = record.text("kind").casefold()
        if kind in LATER_KINDS:
            name = record.text("name")
            findings.notices.append(
                f"{table.file}, line {record.line}: {name} left out; "
                f"{kind} hammers can't be computed yet"
            )
            continue
        hammer = _hammer(table, record, materials, findings)
        if hammer is not None and not hammer.available:
            findings.notices.append(f"{table.file}: {hammer.name} left out; it is not available")
        elif hammer is not None:
            hammers.append(hammer)
    if not hammers and not findings.problems:
        findings.add(table.file, None, "", "must hold a hammer that is available", "none")
    return tuple(hammers)


def _hammer(
    table: RawTable, record: Record, materials: Sequence[CushionMaterial] | None, findings: Findings
) -> Hammer | None:
    cushion, text = _cushion(table, record, materials, findings)
    required = {spec.name for spec in COLUMNS if spec.required}
    if record.broken or not required <= set(record.values):
        return None
    number = record.number
    try:
        return Hammer(
            name=record.text("name"),
            kind=record.text("kind").casefold(),
            ram_mass=number("ram_mass") or 0.0,
            stroke_min=number("stroke_min") or 0.0,
            stroke_max=number("stroke_max") or 0.0,
            efficiency=number("efficiency") or 0.0,
            stroke_step=number("stroke_step"),
            blow_rate_max=number("blow_rate_max"),
            lift_speed=number("lift_speed"),
            rated_energy=number("rated_energy"),
            helmet_mass=number("helmet_mass"),
            cushion=cushion,
            cushion_text=text,
            hammer_mass=number("hammer_mass"),
            rides_on_pile=bool(record.values.get("rides_on_pile", False)),
            available=bool(record.values.get("available", True)),
            source=record.text("source"),
            extra=record.extra,
        )
    except ModelError as error:
        findings.add_model_error(
            error, table.file, {}, record.typed, record.places, line=record.line
        )
        return None


def _cushion(
    table: RawTable, record: Record, materials: Sequence[CushionMaterial] | None, findings: Findings
) -> tuple[Spring | None, str]:
    """Return a row's hammer cushion and its description."""
    by_name = ("hammer_cushion", "hammer_cushion_thickness", "hammer_cushion_area")
    by_spring = ("hammer_cushion_stiffness", "hammer_cushion_restitution")
    given = set(record.values)
    if not given & {*by_name, *by_spring}:
        return None, "none"
    name = record.text("name")

    def wrong(must: str, found: str, place: str = "hammer_cushion", do: str = "") -> None:
        record.broken = True
        findings.add(table.file, record.line, f"`{place}` of {name}", must, found, do)

    if given & set(by_name) and given & set(by_spring):
        wrong(
            "must be given in one way: name, thickness and area, or stiffness and restitution",
            "both",
        )
        return None, ""
    wanted = by_name if given & set(by_name) else by_spring
    missing = [column for column in wanted if column not in given]
    if missing:
        wrong(f"must come with {' and '.join(f'`{m}`' for m in missing)}", "nothing there")
        return None, ""
    for column in wanted:
        value = record.number(column)
        if value is not None and value <= 0:
            wrong("must be > 0", record.typed[column], column)
            return None, ""
    if wanted is by_spring:
        return _spring(record, wrong)
    return _from_catalogue(record, materials, wrong)


def _spring(record: Record, wrong: _Wrong) -> tuple[Spring | None, str]:
    stiffness = record.number("hammer_cushion_stiffness") or 0.0
    restitution = record.number("hammer_cushion_restitution") or 0.0
    if restitution > 1:
        place = "hammer_cushion_restitution"
        wrong("must be above 0 and at most 1", record.typed[place], place)
        return None, ""
    return Spring(stiffness, restitution), f"{stiffness / 1e6:g} MN/m, restitution {restitution:g}"


def _from_catalogue(
    record: Record, materials: Sequence[CushionMaterial] | None, wrong: _Wrong
) -> tuple[Spring | None, str]:
    called = record.text("hammer_cushion")
    if materials is None:
        return None, called
    found = [m for m in materials if m.name.casefold() == called.casefold()]
    if not found:
        names = [material.name for material in materials]
        hint = did_you_mean(called, names)
        wrong("must be a name in the cushion catalogue", called, do=hint)
        return None, ""
    material = found[0]
    if material.use not in ("hammer", "both"):
        wrong("must be a cushion whose `use` is hammer or both", f"{called}, use {material.use}")
        return None, ""
    thickness = record.number("hammer_cushion_thickness") or 0.0
    area = record.number("hammer_cushion_area") or 0.0
    stiffness = material.modulus * area / thickness
    text = f"{1e3 * thickness:g} mm of {material.name} on {1e4 * area:g} cm2"
    return Spring(stiffness, material.restitution), text
