"""The cushion catalogue."""

from __future__ import annotations

from pathlib import Path

from matchup.errors import ModelError
from matchup.inputs.columns import Record, Spec, read_records
from matchup.inputs.findings import Findings
from matchup.inputs.table import RawTable, read_table
from matchup.model.cushion import CushionMaterial

COLUMNS = (
    Spec("name", "name", required=True),
    Spec("use", "text", required=True),
    Spec("modulus", "modulus", required=True),
    Spec("restitution", "number", required=True),
    Spec("sheet", "thickness"),
    Spec("worn_modulus", "modulus"),
    Spec("worn_thickness", "number"),
    Spec("worn_restitution", "number"),
    Spec("new_for", "number"),
    Spec("life", "number"),
    Spec("source", "text"),
)


def read_cushions(path: Path, findings: Findings) -> tuple[CushionMaterial, ...]:
    """Return the materials of a cushion catalogue; problems go to `findings`."""
    table = read_table(path, findings)
    if table is None:
        return ()
    records = read_records(table, COLUMNS, findings)
    check_names(table, records, findings)
    made = (_material(table, record, findings) for record in records)
    return tuple(material for material in made if material is not None)


def check_names(table: RawTable, records: list[Record], findings: Findings) -> None:
    """Note names that occur twice."""
    seen: dict[str, int] = {}
    for record in records:
        name = record.text("name")
        if not name:
            continue
        first = seen.setdefault(name.casefold(), record.line)
        if first != record.line:
            must = f"must be a name of its own; line {first} has it too"
            findings.add(table.file, record.line, "`name`", must, name)


def _material(table: RawTable, record: Record, findings: Findings) -> CushionMaterial | None:
    if record.broken or not {"name", "use", "modulus", "restitution"} <= set(record.values):
        return None
    numbers = {spec.name: record.number(spec.name) for spec in COLUMNS}
    worn_thickness = numbers["worn_thickness"]
    try:
        return CushionMaterial(
            name=record.text("name"),
            use=record.text("use").casefold(),
            modulus=numbers["modulus"] or 0.0,
            restitution=numbers["restitution"] or 0.0,
            sheet=numbers["sheet"],
            worn_modulus=numbers["worn_modulus"],
            worn_thickness=1.0 if worn_thickness is None else worn_thickness,
            worn_restitution=numbers["worn_restitution"],
            new_for=numbers["new_for"],
            life=numbers["life"],
            source=record.text("source"),
            extra=record.extra,
        )
    except ModelError as error:
        findings.add_model_error(
            error, table.file, {}, record.typed, record.places, line=record.line
        )
        return None
