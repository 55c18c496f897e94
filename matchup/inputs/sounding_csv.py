"""Cone penetration tests in a plain table: CSV or the first sheet of a workbook."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

import numpy as np

from matchup.inputs.columns import Record, Spec, read_records
from matchup.inputs.constants import constant_of
from matchup.inputs.findings import Findings, did_you_mean
from matchup.inputs.readings import Channel, Readings, Stated
from matchup.inputs.sounding_rules import sounding_of
from matchup.inputs.table import read_table
from matchup.model.sounding import Sounding

CHANNELS = {
    "depth": "depth",
    "tip": "qc",
    "corrected_tip": "qt",
    "sleeve": "fs",
    "pore_pressure": "u2",
}
CONSTANT = ("area_ratio", "predrilled", "water")
"""Columns that say the same in every row where they say anything."""
DERIVED = ("rf", "fr", "qn", "qnet", "bq", "u0", "u1", "u3", "ft", "ic")
"""Columns that tables often hold beside the readings; known so that they are not taken for
misspelt ones, and not used."""

COLUMNS = (
    Spec("location", "name"),
    Spec("depth", "length", required=True),
    Spec("qc", "stress", instead="cone_resistance"),
    Spec("qt", "stress", instead="corrected_cone_resistance"),
    Spec("fs", "stress", instead="sleeve_friction"),
    Spec("u2", "stress", instead="pore_pressure"),
    Spec("area_ratio", "number"),
    Spec("predrilled", "length"),
    Spec("water", "length"),
    *(Spec(name, "text") for name in DERIVED),
)


def read_csv(path: Path, findings: Findings, location: str | None = None) -> Sounding | None:
    """Return the sounding of a table with the unit in each header's brackets.

    Parameters
    ----------
    path : Path
    findings : Findings
        Of this file alone; takes problems, modified in place.
    location : str or None
        In the column ``location``; needed where the table has more than one.
    """
    table = read_table(path, findings)
    if table is None:
        return None
    records = read_records(table, COLUMNS, findings)
    for record in records:
        findings.problems += record.problems
    if findings.problems:
        return None
    name, records = _chosen(table.file, records, location, findings)
    if not records:
        return None
    wanted = {key: f"a column `{name}`" for key, name in CHANNELS.items()}
    lines = [record.line for record in records]
    readings = Readings(table.file, name or path.stem, lines, wanted)
    for key, column in CHANNELS.items():
        if any(column in record.values for record in records):
            readings.channels[key] = _channel(column, records)
    for key in CONSTANT:
        first = constant_of(table.file, records, key, findings)
        if first is not None:
            value, typed = first.number(key) or 0.0, first.typed[key]
            readings.stated[key] = Stated(value, f"`{key}`", first.line, typed)
    return sounding_of(readings, findings)


def _chosen(
    file: str, records: list[Record], location: str | None, findings: Findings
) -> tuple[str, list[Record]]:
    """Return the name and the rows of the location to read; no rows where that is in doubt."""
    there = list(dict.fromkeys(record.text("location") for record in records))
    listed = ", ".join(name or "(empty)" for name in there)
    if location is None and len(there) > 1:
        must = "must hold one location, or the one to read must be named"
        findings.add(file, None, "`location`", must, listed, "Name one of them.")
        return "", []
    if location is not None and location not in there:
        must = f"must hold the location {location}"
        found = listed if any(there) else "no such column"
        findings.add(file, None, "`location`", must, found, did_you_mean(location, there))
        return "", []
    name = there[0] if location is None else location
    return name, [record for record in records if record.text("location") == name]


def _channel(column: str, records: Sequence[Record]) -> Channel:
    numbers = [record.number(column) for record in records]
    values = np.array([np.nan if number is None else number for number in numbers])
    place = next(record.places[column] for record in records if column in record.places)
    return Channel(place.partition(" of ")[0], values, [r.typed.get(column, "") for r in records])
