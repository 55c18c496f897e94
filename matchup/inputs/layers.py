"""Ground as the designer writes it down: a table of layers, or of resistance by depth."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

from matchup.errors import ModelError
from matchup.inputs.columns import Record, Spec, read_records
from matchup.inputs.constants import constant_of
from matchup.inputs.findings import Findings
from matchup.inputs.table import RawTable, read_table
from matchup.model.ground import CASES, Layer, Profile, ResistanceColumn, ResistanceTable

LAYER_COLUMNS = (
    Spec("top", "length", required=True),
    Spec("bottom", "length", required=True),
    Spec("soil", "text", required=True),
    Spec("unit_weight", "unit weight", required=True),
    Spec("density", "text"),
    Spec("strength", "stress", instead="undrained_strength"),
    Spec("strength_bottom", "stress"),
    Spec("ocr", "number"),
    Spec("beta", "number"),
    Spec("toe_factor", "number"),
    Spec("unit_shaft", "stress"),
    Spec("unit_toe", "stress"),
    Spec("shaft_quake", "set"),
    Spec("toe_quake", "set"),
    Spec("shaft_damping", "damping"),
    Spec("toe_damping", "damping"),
    Spec("setup", "number"),
)
"""Columns that say something of one layer, named as the fields of `Layer`."""
PROFILE_COLUMNS = (
    Spec("water", "length"),
    Spec("water_unit_weight", "unit weight"),
    Spec("remark", "text", instead="source"),
)
"""Columns of the whole profile: a value in one row is enough, others must be the same."""

PARTS = ("shaft", "toe")
RESISTANCE_COLUMNS = (
    Spec("depth", "length", required=True, instead="penetration"),
    *(Spec(f"{part}_{case}", "force") for case in CASES for part in PARTS),
    Spec("kind", "text"),
    Spec("setup", "number"),
    Spec("remark", "text", instead="source"),
)
"""``kind`` and ``setup`` are of the whole table: a value in one row is enough."""


def read_layers(path: Path, findings: Findings) -> Profile | None:
    """Return the ground profile of a table of layers, or note every problem.

    Parameters
    ----------
    path : Path
    findings : Findings
        Takes problems; modified in place.
    """
    table = read_table(path, findings)
    if table is None:
        return None
    before = len(findings.problems)
    records = read_records(table, LAYER_COLUMNS + PROFILE_COLUMNS, findings)
    layers = [_layer(record) for record in records]
    for record in records:
        findings.problems += record.problems
    whole: dict[str, Any] = {}
    for column in ("water", "water_unit_weight"):
        if first := constant_of(table.file, records, column, findings):
            whole[column] = first.number(column)
    if "water" not in whole and ("water" not in _header(table) or len(findings.problems) == before):
        must = "must have the depth of the water level in one row"
        do = "Write for example a column `water [m]`; a level above the ground is negative."
        findings.add(table.file, table.header.line, "`water`", must, "none", do)
    if len(findings.problems) > before:
        return None
    try:
        return Profile(tuple(layer for layer in layers if layer), name=path.stem, **whole)
    except ModelError as error:
        _add_profile_error(error, table, records, findings)
        return None


def _layer(record: Record) -> Layer | None:
    given: dict[str, Any] = {}
    for spec in LAYER_COLUMNS:
        if spec.name in record.values:
            value = record.values[spec.name]
            given[spec.name] = value.casefold() if isinstance(value, str) else value
    required = {spec.name for spec in LAYER_COLUMNS if spec.required}
    if record.problems or not required <= set(given):
        return None
    try:
        return Layer(**given)
    except ModelError as error:
        record.wrong_model(error)
        return None


def _add_profile_error(
    error: ModelError, table: RawTable, records: Sequence[Record], findings: Findings
) -> None:
    """Note what a profile says of itself; its fields count layers, the file has lines."""
    lines: dict[str, int | None] = {}
    typed: dict[str, str] = {}
    places: dict[str, str] = {}
    for number, record in enumerate(records, 1):
        for column, place in record.places.items():
            field = f"layers.{number}.{column}"
            lines[field], places[field] = record.line, place
            typed[field] = record.typed.get(column, "")
            if column in record.values:
                typed.setdefault(column, record.typed[column])
                lines.setdefault(column, record.line)
                places.setdefault(column, place)
    findings.add_model_error(error, table.file, lines, typed, places)


def read_resistance_table(path: Path, findings: Findings) -> ResistanceTable | None:
    """Return the designer's own resistance by depth, or note every problem.

    Parameters
    ----------
    path : Path
    findings : Findings
        Takes problems, and a notice where the table does not say whether its resistances are
        those while driving; modified in place.
    """
    table = read_table(path, findings)
    if table is None:
        return None
    before = len(findings.problems)
    records = read_records(table, RESISTANCE_COLUMNS, findings)
    for record in records:
        findings.problems += record.problems
    _check_depths(table, records, findings)
    cases = _cases(table, records, findings)
    kind = constant_of(table.file, records, "kind", findings)
    setup = constant_of(table.file, records, "setup", findings)
    if len(findings.problems) > before:
        return None
    if kind is None:
        findings.notices.append(
            f"{table.file}: no column `kind`; the resistances are taken as those while driving"
        )
    columns = {
        case: ResistanceColumn(*(_values(records, f"{part}_{case}") for part in PARTS))
        for case in cases
    }
    try:
        return ResistanceTable(
            depth=_values(records, "depth"),
            columns=columns,
            kind=kind.text("kind").casefold() if kind else "driving",
            setup=setup.number("setup") if setup else None,
            name=path.stem,
        )
    except ModelError as error:
        _add_table_error(error, table, {"kind": kind, "setup": setup}, findings)
        return None


def _header(table: RawTable) -> set[str]:
    """Return the names of the columns, units left out."""
    return {cell.partition("[")[0].strip().casefold() for cell in table.header.cells}


def _check_depths(table: RawTable, records: Sequence[Record], findings: Findings) -> None:
    above: Record | None = None
    for record in records:
        depth = record.number("depth")
        if depth is None:
            continue
        last = above.number("depth") if above else None
        if above and last is not None and depth <= last:
            must = f"must be deeper than line {above.line}, {above.typed['depth']}"
            place, found = record.places["depth"], record.typed["depth"]
            findings.add(table.file, record.line, place, must, found)
        above = record


def _cases(table: RawTable, records: Sequence[Record], findings: Findings) -> list[str]:
    """Return the cases that have columns; each must have both, with a value in every row."""
    there, readable = _header(table), set(records[0].places)
    cases = [case for case in CASES if {f"{part}_{case}" for part in PARTS} & there]
    if not cases:
        must = "must have columns `shaft_best` and `toe_best`, or those of low or high"
        findings.add(table.file, table.header.line, "", must, "none")
    for column in (f"{part}_{case}" for case in cases for part in PARTS):
        if column not in there:
            must = "must be given: shaft and toe come together"
            findings.add(table.file, table.header.line, f"`{column}`", must, "no such column")
            continue
        for record in records if column in readable else ():
            value = record.number(column)
            if column not in record.typed:
                must = "must have a value in every row"
                findings.add(table.file, record.line, f"`{column}`", must, "none")
            elif value is not None and value < 0:
                typed = record.typed[column]
                findings.add(table.file, record.line, f"`{column}`", "must be >= 0", typed)
    return cases


def _values(records: Sequence[Record], column: str) -> tuple[float, ...]:
    return tuple(record.number(column) or 0.0 for record in records)


def _add_table_error(
    error: ModelError, table: RawTable, whole: dict[str, Record | None], findings: Findings
) -> None:
    """Note what a resistance table says of itself, in the file's words."""
    places = {f"{case}.{part}": f"`{part}_{case}`" for case in CASES for part in PARTS}
    places |= {case: f"`shaft_{case}`, `toe_{case}`" for case in CASES} | {"depth": "`depth`"}
    given = {key: record for key, record in whole.items() if record}
    findings.add_model_error(
        error,
        table.file,
        {key: record.line for key, record in given.items()},
        {key: record.typed[key] for key, record in given.items()},
        places | {key: f"`{key}`" for key in given},
    )
