"""The hammer catalogue."""

from __future__ import annotations

import math
from pathlib import Path

from matchup.errors import ModelError, did_you_mean
from matchup.inputs.columns import Record, Spec, check_names, read_records
from matchup.inputs.cushions import CushionCatalogue
from matchup.inputs.findings import Findings
from matchup.inputs.table import read_table
from matchup.inputs.usual import note_unusual_row
from matchup.model.cushion import Spring
from matchup.model.hammer import NO_CUSHION, Hammer

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
    Spec("hammer_length", "length"),
    Spec("head_min", "size"),
    Spec("head_max", "size"),
    Spec("day_rate", "amount", example="EUR"),
    Spec("mobilisation", "amount", example="EUR"),
    Spec("fuel_use", "amount", example="l/h"),
    Spec("source", "text"),
)

NOT_MODELLED = ("diesel", "double-acting", "vibratory")
"""Kinds that a catalogue may hold and this version can't compute."""
BY_NAME = ("hammer_cushion", "hammer_cushion_thickness", "hammer_cushion_area")
BY_SPRING = ("hammer_cushion_stiffness", "hammer_cushion_restitution")


def read_hammers(
    path: Path, catalogue: CushionCatalogue | None, findings: Findings
) -> tuple[Hammer, ...]:
    """Return the hammers of a catalogue that can be used; problems go to `findings`.

    Hammers of a kind that this version can't compute are left out with a notice.

    Parameters
    ----------
    path : Path
    catalogue : CushionCatalogue or None
        For hammer cushions given by name; None leaves the names unchecked.
    findings : Findings
        Modified in place.
    """
    table = read_table(path, findings)
    if table is None:
        return ()
    before = len(findings.problems)
    records = read_records(table, COLUMNS, findings)
    check_names(records)
    hammers: list[Hammer] = []
    left_out: dict[str, str] = {}
    for record in records:
        kind = record.text("kind").casefold().replace(" ", "-")
        if kind in NOT_MODELLED:
            left_out[record.label] = f"{kind} hammers can't be computed yet"
            findings.notice(table.file, record.line, _left_out(record, left_out))
            continue
        hammer = _hammer(record, catalogue)
        findings.problems += record.problems
        if hammer is not None:
            hammers.append(hammer)
            for text in note_unusual_row(record, "hammer"):
                findings.notice(table.file, record.line, text)
    if not hammers and len(findings.problems) == before:
        found = "none: " + "; ".join(f"{name} ({why})" for name, why in left_out.items())
        findings.add(table.file, None, "", "must hold a hammer that can be used", found)
    return tuple(hammers)


def _left_out(record: Record, reasons: dict[str, str]) -> str:
    return f"{record.label} left out; {reasons[record.label]}"


def _hammer(record: Record, catalogue: CushionCatalogue | None) -> Hammer | None:
    if record.torn:
        return None
    cushion, text = _cushion(record, catalogue)
    number = record.number
    try:
        made = Hammer(
            name=record.text("name"),
            kind=record.text("kind").casefold(),
            ram_mass=record.needed("ram_mass"),
            stroke_min=record.needed("stroke_min"),
            stroke_max=record.needed("stroke_max"),
            efficiency=record.needed("efficiency"),
            stroke_step=number("stroke_step"),
            blow_rate_max=number("blow_rate_max"),
            lift_speed=number("lift_speed"),
            rated_energy=number("rated_energy"),
            helmet_mass=number("helmet_mass"),
            cushion=cushion,
            cushion_text=text,
            hammer_mass=number("hammer_mass"),
            rides_on_pile=record.values.get("rides_on_pile") is True,
            available=record.values.get("available") is not False,
            hammer_length=number("hammer_length"),
            head_min=number("head_min"),
            head_max=number("head_max"),
            day_rate=record.amount("day_rate"),
            mobilisation=record.amount("mobilisation"),
            fuel_use=record.amount("fuel_use"),
            source=record.text("source"),
            extra=record.extra,
        )
    except ModelError as error:
        record.wrong_model(error)
        return None
    return None if record.problems or record.unread else made


def _cushion(record: Record, catalogue: CushionCatalogue | None) -> tuple[Spring | None, str]:
    """Return a row's hammer cushion and its description."""
    by_name = [column for column in BY_NAME if record.has(column)]
    by_spring = [column for column in BY_SPRING if record.has(column)]
    if not by_name and not by_spring:
        return None, NO_CUSHION
    if by_name and by_spring:
        must = "must be given in one way: name, thickness and area, or stiffness and restitution"
        record.wrong(by_name[0], must, f"`{by_name[0]}` and `{by_spring[0]}`")
        return None, ""
    for column in BY_NAME if by_name else BY_SPRING:
        value = record.number(column)
        if not record.has(column):
            record.wrong(column, f"must be given with `{(by_name or by_spring)[0]}`")
        elif value is not None and value <= 0:
            record.wrong(column, "must be > 0")
    return _named(record, catalogue) if by_name else _spring(record)


def _spring(record: Record) -> tuple[Spring | None, str]:
    stiffness, restitution = map(record.needed, BY_SPRING)
    if restitution > 1:
        record.wrong(BY_SPRING[1], "must be above 0 and at most 1")
    if not (stiffness > 0 and 0 < restitution <= 1):
        return None, ""
    return Spring(stiffness, restitution), f"{stiffness / 1e6:g} MN/m, restitution {restitution:g}"


def _named(record: Record, catalogue: CushionCatalogue | None) -> tuple[Spring | None, str]:
    called = record.text("hammer_cushion")
    if catalogue is None or not called or catalogue.is_broken(called):
        return None, called
    material = catalogue.find(called)
    if material is None:
        do = did_you_mean(called, catalogue.names)
        record.wrong("hammer_cushion", "must be a name in the cushion catalogue", do=do)
        return None, called
    if material.use not in ("hammer", "both"):
        must = "must be a cushion whose `use` is hammer or both"
        record.wrong("hammer_cushion", must, f"{called}, whose use is {material.use}")
    thickness, area = map(record.needed, BY_NAME[1:])
    if not (thickness > 0 and area > 0) or math.isnan(thickness * area):
        return None, called
    text = f"{1e3 * thickness:g} mm of {material.name} on {1e4 * area:g} cm2"
    return Spring(material.modulus * area / thickness, material.restitution), text
