"""The hammer catalogue."""

from __future__ import annotations

import math
from collections.abc import Sequence
from pathlib import Path

from matchup.errors import ModelError, did_you_mean
from matchup.inputs.columns import Record, Spec, check_names, read_records
from matchup.inputs.cushions import CushionCatalogue
from matchup.inputs.findings import Findings
from matchup.inputs.table import read_table
from matchup.inputs.usual import note_unusual_row
from matchup.model.cushion import Spring
from matchup.model.hammer import BY_ENERGY, BY_STROKE, NO_CUSHION, STANDARD_GRAVITY, Hammer

COLUMNS = (
    Spec("name", "name", required=True),
    Spec("kind", "text", required=True),
    Spec("ram_mass", "mass", required=True, instead="ram_weight"),
    Spec("stroke_min", "stroke"),
    Spec("stroke_max", "stroke"),
    Spec("efficiency", "number", required=True),
    Spec("stroke_step", "stroke"),
    Spec("energy_min", "energy"),
    Spec("energy_min_share", "number"),
    Spec("energy_step", "energy"),
    Spec("blow_rate_max", "rate"),
    Spec("blow_rate_full", "rate"),
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

NOT_MODELLED = ("diesel", "vibratory")
"""Kinds that a catalogue may hold and this version can't compute."""
OF_STROKE = ("stroke_min", "stroke_max", "stroke_step")
OF_ENERGY = ("energy_min", "energy_min_share", "energy_step")
"""Columns of hammers that are set by stroke, and by energy."""
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
    _check_stroke_columns(records, table.header.line, findings)
    hammers: list[Hammer] = []
    left_out: dict[str, str] = {}
    for record in records:
        if _is_left_out(record):
            left_out[record.label] = f"{_kind(record)} hammers can't be computed yet"
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


def _check_stroke_columns(records: Sequence[Record], line: int, findings: Findings) -> None:
    """Note columns for strokes that no row has, where some hammer needs them."""
    needy = [r for r in records if not r.torn and not _is_left_out(r) and not _is_by_energy(r)]
    for name in OF_STROKE[:2]:
        if needy and not any(name in record.places or name in record.unread for record in records):
            findings.add(needy[0].file, line, name, f"must have a column `{name}`")
            for record in needy:
                record.unread.add(name)


def _is_by_energy(record: Record) -> bool:
    """Return whether a row's hammer is set by energy: by its kind, or by the columns it fills."""
    kind = _kind(record)
    if kind not in (*BY_STROKE, *BY_ENERGY):
        return any(map(record.has, OF_ENERGY)) and not any(map(record.has, OF_STROKE))
    return kind in BY_ENERGY


def _kind(record: Record) -> str:
    return record.text("kind").casefold().replace(" ", "-")


def _is_left_out(record: Record) -> bool:
    return _kind(record) in NOT_MODELLED


def _settings(record: Record) -> tuple[float, float, float | None]:
    """Return least and largest stroke and step [m] of a row, whose energies are converted."""
    if not _is_by_energy(record):
        for name in OF_ENERGY:
            if record.has(name):
                record.wrong(name, "must be left out for a hammer that is set by its stroke")
        for name in OF_STROKE[:2]:
            if not record.has(name):
                record.wrong(name, "must be given for a hammer that is set by its stroke")
                record.unread.add(name)
        strokes = record.needed("stroke_min"), record.needed("stroke_max")
        return *strokes, record.number("stroke_step")
    for name in OF_STROKE:
        if record.has(name):
            record.wrong(name, "must be left out for a hammer that is set by its energy")
            record.unread.add(name)
    rated, step = record.number("rated_energy"), record.number("energy_step")
    if not record.has("rated_energy"):
        record.wrong("rated_energy", "must be given for a hammer that is set by its energy")
        record.unread.add("rated_energy")
    weight = record.needed("ram_mass") * STANDARD_GRAVITY
    if rated is None or not rated > 0 or not weight > 0:
        return math.nan, math.nan, None
    least = _least_energy(record, rated)
    if step is not None and not step > 0:
        record.wrong("energy_step", "must be > 0")
        step = None
    return least / weight, rated / weight, None if step is None else step / weight


def _least_energy(record: Record, rated: float) -> float:
    """Return the least setting [J]; the rated energy where nothing is said of another."""
    least, share = record.number("energy_min"), record.number("energy_min_share")
    if least is not None and share is not None:
        record.wrong("energy_min", "must be left out where `energy_min_share` is given")
    if share is not None and not 0 < share <= 1:
        record.wrong("energy_min_share", "must be above 0 and at most 1")
        return rated
    if least is not None and not 0 < least <= rated:
        record.wrong("energy_min", "must be above 0 and at most the rated energy")
        return rated
    return share * rated if share is not None else least or rated


def _left_out(record: Record, reasons: dict[str, str]) -> str:
    return f"{record.label} left out; {reasons[record.label]}"


def _hammer(record: Record, catalogue: CushionCatalogue | None) -> Hammer | None:
    if record.torn:
        return None
    cushion, text = _cushion(record, catalogue)
    stroke_min, stroke_max, stroke_step = _settings(record)
    number = record.number
    try:
        made = Hammer(
            name=record.text("name"),
            kind=_kind(record),
            ram_mass=record.needed("ram_mass"),
            stroke_min=stroke_min,
            stroke_max=stroke_max,
            efficiency=record.needed("efficiency"),
            stroke_step=stroke_step,
            blow_rate_max=number("blow_rate_max"),
            blow_rate_full=number("blow_rate_full"),
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
            set_by_energy=_is_by_energy(record),
            extra=record.extra,
        )
    except ModelError as error:
        if _is_by_energy(record):
            # Of the energies all is told already.
            record.unread.update(OF_STROKE)
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
