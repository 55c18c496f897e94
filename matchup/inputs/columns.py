"""From raw tables to rows of checked values: names, units, numbers."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

from matchup.inputs.findings import Findings, did_you_mean
from matchup.inputs.table import RawTable
from matchup.units import QUANTITIES, UnitError, parse_number, unit_factor

_HEADER = re.compile(r"^\s*([^\[\]]*?)\s*(?:\[\s*([^\]]*?)\s*\])?\s*$")
_DATE = re.compile(
    r"\d{4}-\d{2}-\d{2}(T[\d:]+)?( [\d:]+)?|\d{1,2}[./]\d{1,2}[./]\d{2,4}"
    r"|\d{1,2}[-. ][A-Za-z]{3}\.?|[A-Za-z]{3}[-. ]\d{2,4}"
)
_YES = {"yes", "y", "true", "1"}
_NO = {"no", "n", "false", "0"}


class Spec(NamedTuple):
    """A column that a catalogue may have.

    Parameters
    ----------
    name : str
    kind : str
        ``name``, ``text``, ``yes_no``, or a quantity of the units table.
    required : bool
    instead : str
        Another name under which the same value may come; its values go by `name`.
    """

    name: str
    kind: str
    required: bool = False
    instead: str = ""


@dataclass
class Record:
    """A row as values.

    Parameters
    ----------
    line : int
    values : dict
        SI numbers, texts and truth values by column; a column that is empty here is absent.
    typed : dict
        The same as typed, units included.
    places : dict
        What the file calls each column.
    extra : dict
        Columns that are not known, as typed.
    broken : bool
        Whether a value could not be read.
    """

    line: int
    values: dict[str, float | str | bool] = field(default_factory=dict)
    typed: dict[str, str] = field(default_factory=dict)
    places: dict[str, str] = field(default_factory=dict)
    extra: dict[str, str] = field(default_factory=dict)
    broken: bool = False

    def number(self, name: str) -> float | None:
        """Return a number or None."""
        value = self.values.get(name)
        return value if isinstance(value, float) else None

    def text(self, name: str) -> str:
        """Return a text, empty where there is none."""
        value = self.values.get(name)
        return value if isinstance(value, str) else ""


class _Known(NamedTuple):
    place: int
    spec: Spec
    header: str
    unit: str
    factor: float


def read_records(table: RawTable, specs: Sequence[Spec], findings: Findings) -> list[Record]:
    """Return the rows of a table as values, noting every problem and unknown column.

    Parameters
    ----------
    table : RawTable
    specs : sequence of Spec
    findings : Findings
        Modified in place.
    """
    known, unknown = _match_header(table, specs, findings)
    records = [_record(table, row.line, row.cells, known, unknown, findings) for row in table.rows]
    _check_decimal_signs(table, known, findings)
    if unknown:
        names = ", ".join(name for _, name in unknown)
        findings.notices.append(f"{table.file}: kept aside, not used: {names}")
    return records


def _match_header(
    table: RawTable, specs: Sequence[Spec], findings: Findings
) -> tuple[list[_Known], list[tuple[int, str]]]:
    by_name = {spec.name: spec for spec in specs}
    by_name |= {spec.instead: spec for spec in specs if spec.instead}
    known: list[_Known] = []
    unknown: list[tuple[int, str]] = []
    taken: dict[str, str] = {}
    line = table.header.line
    for place, cell in enumerate(table.header.cells):
        match = _HEADER.match(cell)
        name, unit = (match.group(1), match.group(2)) if match else (cell, None)
        key = re.sub(r"[\s-]+", "_", name.strip()).casefold()
        spec = by_name.get(key)
        if spec is None:
            hint = did_you_mean(key, by_name) if key else ""
            if hint:
                findings.add(table.file, line, cell, "must be a known column", f"`{name}`", hint)
            elif cell:
                unknown.append((place, cell))
            continue
        if spec.name in taken:
            must = f"must be given once, and `{taken[spec.name]}` is there already"
            findings.add(table.file, line, cell, must)
            continue
        taken[spec.name] = cell
        factor = _header_factor(table.file, line, cell, spec, unit, findings)
        if factor is not None:
            known.append(_Known(place, spec, name.strip(), unit or "", factor))
    for spec in specs:
        if spec.required and spec.name not in taken:
            also = f" (or `{spec.instead}`)" if spec.instead else ""
            findings.add(table.file, line, spec.name, f"must have a column `{spec.name}`{also}")
    return known, unknown


def _header_factor(
    file: str, line: int, cell: str, spec: Spec, unit: str | None, findings: Findings
) -> float | None:
    if spec.kind not in QUANTITIES:
        return 1.0
    if unit is None or unit == "":
        if spec.kind == "number":
            return 1.0
        examples = QUANTITIES[spec.kind].examples
        do = f"Write for example `{spec.name} [{examples.split()[0].rstrip(',')}]`."
        findings.add(file, line, cell, "must have its unit in brackets", "none", do)
        return None
    try:
        return unit_factor(unit, spec.kind)
    except UnitError as error:
        findings.add(file, line, cell, error.must, f"[{unit}]", error.do)
        return None


def _record(
    table: RawTable,
    line: int,
    cells: Sequence[str],
    known: Sequence[_Known],
    unknown: Sequence[tuple[int, str]],
    findings: Findings,
) -> Record:
    record = Record(line, extra={name: cells[place] for place, name in unknown if cells[place]})
    label = next((cells[k.place] for k in known if k.spec.kind == "name"), "")
    for column in known:
        cell = cells[column.place]
        name = column.spec.name
        place = f"`{column.header}`" + (f" of {label}" if label and name != "name" else "")
        record.places[name] = place
        if not cell:
            if column.spec.required:
                record.broken = True
                findings.add(table.file, line, place, "must not be empty")
            continue
        unit = column.unit if column.unit not in ("", "-") else ""
        record.typed[name] = f"{cell} {unit}".strip()
        value = _value(table, line, place, cell, column, findings)
        if value is None:
            record.broken = True
        else:
            record.values[name] = value
    return record


def _value(
    table: RawTable, line: int, place: str, cell: str, column: _Known, findings: Findings
) -> float | str | bool | None:
    kind = column.spec.kind
    if kind == "name":
        if _DATE.fullmatch(cell):
            must = "must be a name; this looks like one that a spreadsheet turned into a date"
            do = "Format the column as text and type the name again."
            findings.add(table.file, line, place, must, cell, do)
            return None
        return cell
    if kind == "text":
        return cell
    if kind == "yes_no":
        if cell.casefold() in _YES | _NO:
            return cell.casefold() in _YES
        findings.add(table.file, line, place, "must be yes or no", cell)
        return None
    plain = cell
    if re.fullmatch(r"[+-]?\d+,\d+", cell):
        if table.separator == ",":
            must = "must be a number with a decimal point where commas separate the cells"
            do = "Write a point, or save the table with semicolons."
            findings.add(table.file, line, place, must, cell, do)
            return None
        plain = cell.replace(",", ".")
    try:
        return parse_number(plain) * column.factor
    except UnitError as error:
        findings.add(table.file, line, place, error.must, cell, error.do)
        return None


def _check_decimal_signs(table: RawTable, known: Sequence[_Known], findings: Findings) -> None:
    """Note columns that write some decimals with a comma and some with a point."""
    if table.separator == ",":
        return
    for column in known:
        if column.spec.kind not in QUANTITIES:
            continue
        cells = [(row.line, row.cells[column.place]) for row in table.rows]
        commas = [(line, cell) for line, cell in cells if re.fullmatch(r"[+-]?\d+,\d+", cell)]
        points = [(line, cell) for line, cell in cells if re.fullmatch(r"[+-]?\d*\.\d+", cell)]
        if commas and points:
            line, cell = max(commas[0], points[0])
            other = min(commas[0], points[0])
            must = f"must write decimals in one way; line {other[0]} has {other[1]}"
            findings.add(table.file, line, f"`{column.header}`", must, cell)
