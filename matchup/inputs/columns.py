"""From raw tables to rows of checked values: names, units, numbers."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass, field
from itertools import pairwise
from typing import NamedTuple

from matchup.errors import ModelError, Problem
from matchup.inputs.amounts import tidy_unit
from matchup.inputs.findings import Findings, did_you_mean, shown_fault
from matchup.inputs.table import RawTable, Row
from matchup.model.cost import Amount
from matchup.units import QUANTITIES, UnitError, parse_number, unit_factor

_HEADER = re.compile(r"([^\[\]()]*?)\s*(?:[\[(]\s*([^\[\]()]*?)\s*[\])])?")
_MONTHS = (
    "jan|feb|mar|apr|may|jun|jul|aug|sep|sept|oct|nov|dec|mrz|mär|mai|okt|dez|maa|mei"
    "|fév|fev|avr|aoû|aou|déc|ene|abr|ago|dic|gen|mag|giu|lug|set|ott"
)
_MONTH = f"(?:{_MONTHS})"
_DATE = re.compile(
    rf"\d{{4}}-\d{{1,2}}-\d{{1,2}}(?:[T ][\d:.]+)?|\d{{1,2}}[./]\d{{1,2}}[./]\d{{2,4}}"
    rf"|\d{{1,2}}[-./ ]{{1,2}}{_MONTH}\.?(?:[-./ ]\d{{2,4}})?|{_MONTH}\.?[-./ ]\d{{1,4}}",
    re.IGNORECASE | re.ASCII,
)
_COMMA = re.compile(r"[+-]?\d+,\d+", re.ASCII)
_POINT = re.compile(r"[+-]?\d*\.\d+", re.ASCII)
_WHOLE = re.compile(r"[+-]?\d+", re.ASCII)
_YES = {"yes", "y", "true", "1"}
_NO = {"no", "n", "false", "0"}
COMMA_REMEDY = (
    "A decimal comma, or a comma inside a cell, needs quotes around the cell; "
    "or separate the cells with semicolons."
)


class Spec(NamedTuple):
    """A column that a catalogue may have.

    Parameters
    ----------
    name : str
    kind : str
        ``name``, ``text``, ``yes_no``, ``amount`` (its unit stays as typed), or a quantity of
        the units table.
    required : bool
    instead : str
        Another name under which the same value may come; its values go by `name`.
    example : str
        Unit of an amount, for hints.
    """

    name: str
    kind: str
    required: bool = False
    instead: str = ""
    example: str = ""


@dataclass
class Record:
    """A row as values.

    Parameters
    ----------
    file : str
    line : int
    label : str
        The row's name as typed, for messages.
    values : dict
        SI numbers, texts and truth values by column; a column that is empty here is absent, and a
        number that could not be read is not a number.
    typed : dict
        The same as typed, units included.
    units : dict
        Units of amounts.
    places : dict
        What the file calls each column, in the order of the columns.
    extra : dict
        Columns that are not known, as typed.
    unread : set of str
        Columns that are told to be wrong already; nothing more is told of them.
    torn : bool
        Whether the cells do not belong to their columns, so that none can be read.
    noted : list of (place, Problem)
        With the places of their columns in the row.
    instead : Problem or None
        What to tell in place of any problem of a row whose cells may have been shifted.
    """

    file: str
    line: int
    label: str = ""
    values: dict[str, float | str | bool] = field(default_factory=dict)
    typed: dict[str, str] = field(default_factory=dict)
    units: dict[str, str] = field(default_factory=dict)
    places: dict[str, str] = field(default_factory=dict)
    extra: dict[str, str] = field(default_factory=dict)
    unread: set[str] = field(default_factory=set)
    torn: bool = False
    noted: list[tuple[int, Problem]] = field(default_factory=list)
    instead: Problem | None = None

    @property
    def problems(self) -> list[Problem]:
        """Problems in the order of the columns, for the reader to pass on or leave out."""
        if self.noted and self.instead:
            return [self.instead]
        return [problem for _, problem in sorted(self.noted, key=lambda pair: pair[0])]

    def number(self, name: str) -> float | None:
        """Return a number or None; not a number where it could not be read."""
        value = self.values.get(name, math.nan if name in self.unread else None)
        return value if isinstance(value, float) else None

    def amount(self, name: str) -> Amount | None:
        """Return an amount or None; its value is not a number where it could not be read."""
        value = self.number(name)
        return None if value is None else Amount(value, self.units.get(name, ""))

    def needed(self, name: str) -> float:
        """Return a number that every row must have; not a number where it could not be read."""
        value = self.number(name)
        return math.nan if value is None else value

    def text(self, name: str) -> str:
        """Return a text, empty where there is none."""
        value = self.values.get(name)
        return value if isinstance(value, str) else ""

    def has(self, name: str) -> bool:
        """Return whether the row gives a value, readable or not."""
        return name in self.values

    def wrong(self, name: str, must: str, found: str | None = None, do: str = "") -> None:
        """Note a problem of a column, unless its value could not be read in the first place."""
        if name not in self.unread:
            place = self.places.get(name, f"`{name}`" + (f" of {self.label}" if self.label else ""))
            shown = self.typed.get(name, "") if found is None else found
            order = [*self.places].index(name) if name in self.places else len(self.places)
            self.noted.append((order, Problem(self.file, self.line, place, must, shown, do)))

    def wrong_model(self, error: ModelError) -> None:
        """Note what a model object says of itself, with the text as typed."""
        for fault in error.faults:
            typed = self.typed.get(fault.field) or shown_fault(fault)
            self.wrong(fault.field, fault.must, typed, fault.do)


class _Known(NamedTuple):
    place: int
    spec: Spec
    header: str
    unit: str
    factor: float


class _Header(NamedTuple):
    """Columns that can be read, those that are not known, and those that are told to be wrong."""

    known: list[_Known]
    unknown: list[tuple[int, str]]
    unread: set[str]


def read_records(table: RawTable, specs: Sequence[Spec], findings: Findings) -> list[Record]:
    """Return the rows of a table as values; problems of the header go to `findings`.

    Parameters
    ----------
    table : RawTable
    specs : sequence of Spec
    findings : Findings
        Modified in place.
    """
    header = _match_header(table, specs, findings)
    records = [_record(table, row, header) for row in table.rows]
    _check_decimal_signs(table, records, header.known)
    if header.unknown:
        names = ", ".join(name for _, name in header.unknown)
        findings.notice(table.file, table.header.line, f"kept aside, not used: {names}")
    return records


def check_names(records: Sequence[Record]) -> None:
    """Note names that occur twice."""
    seen: dict[str, int] = {}
    for record in records:
        name = record.text("name")
        first = seen.setdefault(name.casefold(), record.line) if name else record.line
        if first != record.line:
            record.wrong("name", f"must be a name of its own; line {first} has it too")


def _match_header(table: RawTable, specs: Sequence[Spec], findings: Findings) -> _Header:
    by_name = {spec.name: spec for spec in specs}
    by_name |= {spec.instead: spec for spec in specs if spec.instead}
    header = _Header([], [], set())
    taken: dict[str, str] = {}
    slips: set[str] = set()
    line = table.header.line
    for place, cell in enumerate(table.header.cells):
        match = _HEADER.fullmatch(cell)
        name, unit = (match.group(1), match.group(2) or "") if match else (cell, "")
        key = re.sub(r"[\s-]+", "_", name.strip()).casefold()
        spec = by_name.get(key)
        if spec is None:
            near = _near_column(key, by_name)
            if near:
                must = "must be a known column, or a name unlike them"
                findings.add(table.file, line, cell, must, f"`{name}`", f"Did you mean `{near}`?")
                slips.add(by_name[near].name)
            elif cell or any(row.cells[place] for row in table.rows):
                header.unknown.append((place, cell or f"column {place + 1} without a name"))
        elif spec.name in taken:
            must = f"must be given once, and `{taken[spec.name]}` is there already"
            findings.add(table.file, line, cell, must)
        else:
            taken[spec.name] = cell
            factor = _header_factor(table.file, line, cell, spec, unit, findings)
            if factor is None:
                header.unread.add(spec.name)
            else:
                header.known.append(_Known(place, spec, name.strip(), unit, factor))
    header.unread.update(slips - set(taken))
    for spec in specs:
        if spec.required and spec.name not in {*taken, *header.unread}:
            also = f" (or `{spec.instead}`)" if spec.instead else ""
            findings.add(table.file, line, spec.name, f"must have a column `{spec.name}`{also}")
            header.unread.add(spec.name)
    return header


def _near_column(key: str, names: Sequence[str] | dict[str, Spec]) -> str:
    """Return the known column that a name is a slip of, if any: its start, turned or misspelt."""
    turned = sorted(key.split("_"))
    for name in names:
        if key and (name.startswith(f"{key}_") or turned == sorted(name.split("_"))):
            return name
    hint = did_you_mean(key, names, cutoff=0.8)
    return hint.split("`")[1] if hint else ""


def _header_factor(
    file: str, line: int, cell: str, spec: Spec, unit: str, findings: Findings
) -> float | None:
    if spec.kind not in QUANTITIES and (spec.kind != "amount" or unit):
        return 1.0
    if spec.kind == "amount":
        do = f"Write for example `{spec.name} [{spec.example}]`."
        findings.add(file, line, cell, "must have its unit in brackets", do=do)
        return None
    if not unit:
        if spec.kind == "number":
            return 1.0
        example = QUANTITIES[spec.kind].metric
        do = f"Write for example `{spec.name} [{example}]`."
        findings.add(file, line, cell, "must have its unit in brackets", do=do)
        return None
    try:
        return unit_factor(unit, spec.kind)
    except UnitError as error:
        findings.add(file, line, cell, error.must, f"[{unit}]", error.do)
        return None


def _record(table: RawTable, row: Row, header: _Header) -> Record:
    label = next((row.cells[k.place] for k in header.known if k.spec.kind == "name"), "")
    record = Record(table.file, row.line, label, unread=set(header.unread))
    record.extra = {name: row.cells[place] for place, name in header.unknown if row.cells[place]}
    do = COMMA_REMEDY if table.separator == "," else "Leave out what is too much."
    must = f"must have the header's {table.width} cells"
    misfit = Problem(table.file, row.line, label, must, f"{row.width} cells", do)
    if row.width > table.width:
        record.torn = True
        record.values = {"name": label} if label else {}
        record.noted.append((0, misfit))
        return record
    if row.width < table.width and _may_be_shifted(table, row):
        record.instead = misfit
    for column in header.known:
        _read_cell(record, row.cells[column.place], column, table.separator)
    return record


def _may_be_shifted(table: RawTable, row: Row) -> bool:
    """Return whether a decimal comma may have made two cells of one."""
    neighbours = pairwise(row.cells)
    return table.separator == "," and any(
        _WHOLE.fullmatch(a) and _WHOLE.fullmatch(b) for a, b in neighbours
    )


def _read_cell(record: Record, cell: str, column: _Known, separator: str) -> None:
    name = column.spec.name
    of = f" of {record.label}" if record.label and column.spec.kind != "name" else ""
    record.places[name] = f"`{column.header}`{of}"
    if not cell:
        if column.spec.required:
            record.wrong(name, "must not be empty")
            record.unread.add(name)
        return
    unit = "" if column.unit == "-" else column.unit
    record.typed[name] = f"{cell} {unit}".strip()
    if column.spec.kind == "amount":
        record.units[name] = tidy_unit(unit)
    try:
        record.values[name] = _value(cell, column, separator)
    except UnitError as error:
        record.wrong(name, error.must, cell, error.do)
        record.values[name] = math.nan
        record.unread.add(name)


def _value(cell: str, column: _Known, separator: str) -> float | str | bool:
    """Return a cell's value.

    Raises
    ------
    UnitError
        Saying what must hold and what to do.
    """
    kind = column.spec.kind
    if kind == "text":
        return cell
    if kind == "yes_no":
        if cell.casefold() not in _YES | _NO:
            raise UnitError("must be yes or no")
        return cell.casefold() in _YES
    if _DATE.fullmatch(cell):
        what = "name" if kind == "name" else "number"
        must = f"must be a {what}; this looks like one that a spreadsheet turned into a date"
        raise UnitError(must, f"Format the column as text and type the {what} again.")
    if kind == "name":
        return cell
    if _COMMA.fullmatch(cell):
        if separator == ",":
            must = "must be a number with a decimal point where commas separate the cells"
            raise UnitError(must, "Write a point, or save the table with semicolons.")
        cell = cell.replace(",", ".")
    return parse_number(cell) * column.factor


def _check_decimal_signs(
    table: RawTable, records: Sequence[Record], known: Sequence[_Known]
) -> None:
    """Note columns that write some decimals with a comma and some with a point."""
    if table.separator == ",":
        return
    for column in known:
        if column.spec.kind not in (*QUANTITIES, "amount"):
            continue
        first: dict[bool, int] = {}
        for row, record in zip(table.rows, records, strict=True):
            cell = row.cells[column.place]
            if record.torn or not (_COMMA.fullmatch(cell) or _POINT.fullmatch(cell)):
                continue
            first.setdefault("," in cell, row.line)
            other = first.get("," not in cell)
            if other is not None:
                must = f"must write decimals as line {other} does: with a comma, or with a point"
                record.wrong(column.spec.name, must, cell)
                break
