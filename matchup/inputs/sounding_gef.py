"""Cone penetration tests in GEF-CPT.

A header of ``#KEY = value, ...`` lines says which column holds which quantity, in which unit,
and which number stands for a void; rows of numbers follow after ``#EOH=``. Columns are numbered
from 1 in the file's own order; what a column holds is told by its quantity number.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import NamedTuple

from matchup.inputs.findings import Findings
from matchup.inputs.readings import Column, Readings, add_column, add_value
from matchup.inputs.sounding_rules import sounding_of
from matchup.model.sounding import Sounding
from matchup.units import UnitError, parse_number

QUANTITIES = {1: "length", 2: "tip", 3: "sleeve", 6: "pore_pressure", 11: "depth"} | {
    13: "corrected_tip"
}
"""Channel by quantity number, GEF-CPT-Report 1.1."""
WANTED = {
    "length": "a #COLUMNINFO with quantity 1 (penetration length)",
    "depth": "a #COLUMNINFO with quantity 11 (corrected depth)",
    "tip": "a #COLUMNINFO with quantity 2 (cone resistance)",
    "corrected_tip": "a #COLUMNINFO with quantity 13 (corrected cone resistance)",
    "sleeve": "a #COLUMNINFO with quantity 3 (sleeve friction)",
    "pore_pressure": "a #COLUMNINFO with quantity 6 (pore pressure u2)",
}
VARIABLES = {"3": "area_ratio", "13": "predrilled", "16": "final_depth"}
"""What is read by the number of its `#MEASUREMENTVAR`, GEF-CPT-Report 1.1."""
WATER = "14"

_ENTRY = re.compile(r"\s*#\s*(\w+)\s*=?\s*(.*?)\s*$")


class _Entry(NamedTuple):
    """A header line: where it stands, its value as typed and cut at commas."""

    line: int
    text: str
    parts: tuple[str, ...]


class _Row(NamedTuple):
    line: int
    cells: list[str]


_Header = dict[str, list[_Entry]]


def read_gef(
    file: str, text: str, findings: Findings, location: str | None = None
) -> Sounding | None:
    """Return the sounding of a GEF-CPT file, or note every problem.

    Parameters
    ----------
    file : str
        As the user named it.
    text : str
        What it holds.
    findings : Findings
        Of this file alone; takes problems, modified in place.
    location : str or None
        If given, must be the file's test id.
    """
    lines = text.replace("\r\n", "\n").replace("\r", "\n").split("\n")
    header, first = _header(lines)
    if first is None:
        must = "must have a line #EOH= that ends the header"
        do = "The file seems cut off: fetch it again."
        findings.add(file, len(lines), "#EOH", must, "none", do)
        return None
    if not _is_cone_test(file, header, findings):
        return None
    name = _text(header, "TESTID") or _text(header, "PROJECTID")
    if location is not None and location != name:
        findings.add(file, None, "#TESTID", f"must be {location}", name or "none")
    rows = _rows(file, lines[first:], first, header, findings)
    readings = Readings(file, name, [row.line for row in rows], WANTED)
    _read_columns(readings, header, rows, findings)
    _read_variables(readings, header, findings)
    if not findings.problems:
        _check_count(readings, header, findings)
    return sounding_of(readings, findings) if rows else None


def _header(lines: Sequence[str]) -> tuple[_Header, int | None]:
    """Return the header's entries by key, and the place of the line after it; None if cut off."""
    header: _Header = {}
    for place, line in enumerate(lines):
        match = _ENTRY.match(line)
        if match is None:
            continue
        key, text = match.group(1).upper(), match.group(2)
        if key == "EOH":
            return header, place + 1
        parts = tuple(part.strip() for part in text.split(","))
        header.setdefault(key, []).append(_Entry(place + 1, text, parts))
    return header, None


def _is_cone_test(file: str, header: _Header, findings: Findings) -> bool:
    """Return whether the header announces readable rows of a cone penetration test."""
    sound = True
    codes = [entry for key in ("REPORTCODE", "PROCEDURECODE") for entry in header.get(key, [])]
    for entry in codes[:1]:
        if "CPT" not in entry.parts[0].upper():
            must = "must be a cone penetration test (GEF-CPT-Report)"
            findings.add(file, entry.line, "#REPORTCODE", must, entry.parts[0])
            sound = False
    for entry in header.get("DATAFORMAT", []):
        if entry.text.upper() != "ASCII":
            findings.add(file, entry.line, "#DATAFORMAT", "must be ASCII", entry.text)
            sound = False
    return sound


def _text(header: _Header, key: str) -> str:
    return header[key][0].text if key in header else ""


def _rows(
    file: str, lines: Sequence[str], first: int, header: _Header, findings: Findings
) -> list[_Row]:
    """Return the rows of cells below the header; cut short ones go to `findings`."""
    between = _text(header, "COLUMNSEPARATOR")
    ends = _text(header, "RECORDSEPARATOR") or "\n"
    numbers = [_whole(entry.parts[0]) or 0 for entry in header.get("COLUMNINFO", [])]
    count = _whole(_text(header, "COLUMN")) or max(numbers, default=0)
    rows = []
    line = first + 1
    for record in "\n".join(lines).split(ends):
        start = line + record[: len(record) - len(record.lstrip())].count("\n")
        line += (record + ends).count("\n")
        if not record.strip():
            continue
        cells = record.split(between) if between else record.split()
        cells = [cell.strip() for cell in cells]
        while len(cells) > count and not cells[-1]:
            cells.pop()
        if len(cells) == count:
            rows.append(_Row(start, cells))
            continue
        must = f"must have {count} values, one for each column"
        do = "Check #COLUMN, #COLUMNSEPARATOR and #RECORDSEPARATOR, and whether the row is cut off."
        findings.add(file, start, "", must, f"{len(cells)}", do)
    return rows


def _read_columns(
    readings: Readings, header: _Header, rows: Sequence[_Row], findings: Findings
) -> None:
    voids = {entry.parts[0]: entry for entry in header.get("COLUMNVOID", [])}
    for entry in header.get("COLUMNINFO", []):
        number, quantity = _whole(entry.parts[0]), _whole(entry.parts[-1])
        if len(entry.parts) < 4 or not number or quantity is None:
            must = "must have column number, unit, name and quantity number"
            findings.add(readings.file, entry.line, "#COLUMNINFO", must, entry.text)
            continue
        key = QUANTITIES.get(quantity)
        if key is None:
            continue
        place = f"column {number} ({', '.join(entry.parts[2:-1])})"
        if key in readings.channels:
            must = f"must be the only one with quantity {quantity}"
            findings.add(readings.file, entry.line, place, must, entry.text)
            continue
        if rows and number > len(rows[0].cells):
            must = f"must be one of the {len(rows[0].cells)} columns (#COLUMN)"
            findings.add(readings.file, entry.line, place, must, f"{number}")
            continue
        void = _void(readings.file, voids.get(entry.parts[0]), findings)
        cells = [row.cells[number - 1] for row in rows]
        column = Column(place, entry.parts[1], entry.line, cells, void)
        add_column(readings, key, column, findings)


def _void(file: str, entry: _Entry | None, findings: Findings) -> float | None:
    if entry is None:
        return None
    try:
        return parse_number(entry.parts[-1])
    except UnitError as error:
        findings.add(file, entry.line, "#COLUMNVOID", error.must, entry.text)
        return None


def _read_variables(readings: Readings, header: _Header, findings: Findings) -> None:
    """Read area ratio, pre-drilled and final depth; note what else bears on depths."""
    for entry in header.get("MEASUREMENTVAR", []):
        number, cell, unit = (*entry.parts, "", "")[:3]
        if number in VARIABLES:
            column = Column(f"#MEASUREMENTVAR {number}", unit, entry.line, [cell])
            add_value(readings, VARIABLES[number], column, findings)
        elif number == WATER and cell:
            readings.notes.append(
                f"A groundwater level of {cell} {unit} is stated without its datum and is not used."
            )
    for entry in header.get("MEASUREMENTTEXT", []):
        if entry.parts[0] == "9":
            readings.notes.append(f"Depths are from: {', '.join(entry.parts[1:])}.")
    for entry in header.get("ZID", []):
        if len(entry.parts) > 1:
            readings.notes.append(
                f"Depth zero lies at {entry.parts[1]} m in height system {entry.parts[0]}."
            )


def _check_count(readings: Readings, header: _Header, findings: Findings) -> None:
    """Note rows that the header announces and that are not there."""
    if not readings.lines:
        findings.add(readings.file, None, "#EOH", "must be followed by rows of readings", "none")
        return
    for entry in header.get("LASTSCAN", []):
        count, announced = len(readings.lines), _whole(entry.text)
        if announced is not None and count < announced:
            must = f"must be followed by the {announced} rows that it announces"
            do = "The file seems cut off: fetch it again."
            findings.add(readings.file, entry.line, "#LASTSCAN", must, f"{count} rows", do)
        elif announced is not None and count > announced:
            readings.notes.append(f"The header announces {announced} rows; all {count} are read.")


def _whole(text: str) -> int | None:
    """Return the whole number that a text is, or None."""
    return int(text) if re.fullmatch(r"\d{1,9}", text.strip()) else None
