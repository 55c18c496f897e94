"""The readings of a cone penetration test as a format reader finds them: columns to channels."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from matchup.errors import Problem
from matchup.inputs.findings import Findings
from matchup.model.sounding import FloatArray
from matchup.units import QUANTITIES, UnitError, parse_number, unit_factor


@dataclass(frozen=True, slots=True)
class Channel:
    """One column of readings.

    Parameters
    ----------
    place : str
        What the file calls it.
    values : (n,) float64 array
        In SI; NaN where void.
    typed : sequence of str
        The same as typed, with unit.
    """

    place: str
    values: FloatArray
    typed: Sequence[str]


@dataclass(frozen=True, slots=True)
class Stated:
    """A single value that a file states of a test.

    Parameters
    ----------
    value : float
        In SI.
    place : str
        What the file calls it.
    line : int or None
    typed : str
    """

    value: float
    place: str
    line: int | None
    typed: str


@dataclass(slots=True)
class Readings:
    """One test as a format reader found it.

    Parameters
    ----------
    file : str
        As the user named it.
    name : str
        Location or test id.
    lines : sequence of int or None
        Line of each row.
    wanted : mapping
        What the format calls each channel that it may hold, by the keys ``depth``, ``length``
        (penetration length, where the format tells it from depth), ``tip``, ``corrected_tip``,
        ``sleeve``, ``pore_pressure``.
    channels : dict
        The channels found, by the same keys.
    stated : dict
        Single values that the file states, by the keys ``area_ratio``, ``predrilled``, ``water``
        (as in `Sounding`) and ``final_depth``.
    notes : list of str
    one_test : bool
        Whether the format vouches that all rows are of one test.
    which : str
        How the user can name one of several tests, if these rows are of several.
    """

    file: str
    name: str
    lines: Sequence[int | None]
    wanted: Mapping[str, str]
    channels: dict[str, Channel] = field(default_factory=dict)
    stated: dict[str, Stated] = field(default_factory=dict)
    notes: list[str] = field(default_factory=list)
    one_test: bool = False
    which: str = "Keep the rows of one test."

    def value(self, key: str) -> float | None:
        """Return a single value, None where the file does not state it."""
        return self.stated[key].value if key in self.stated else None


@dataclass(frozen=True, slots=True)
class Column:
    """One column of readings as typed.

    Parameters
    ----------
    place : str
        What the file calls it.
    unit : str
        As the file states it.
    line : int or None
        Where the unit stands.
    cells : sequence of str
        Empty where void.
    void : float or None
        A number that stands for a void, in the column's own unit.
    """

    place: str
    unit: str
    line: int | None
    cells: Sequence[str]
    void: float | None = None


def add_column(readings: Readings, key: str, column: Column, findings: Findings) -> None:
    """Read a column's numbers into a channel of `readings`, or note why that can't be done."""
    quantity = "length" if key in ("depth", "length") else "stress"
    factor = unit_of(readings.file, column.line, column.place, column.unit, quantity, findings)
    values = np.full(len(column.cells), np.nan)
    for row, cell in enumerate(column.cells):
        if not cell:
            continue
        try:
            number = parse_number(cell)
        except UnitError as error:
            findings.add(readings.file, readings.lines[row], column.place, error.must, cell)
            continue
        if number != column.void:
            values[row] = number * factor
    typed = [f"{cell} {column.unit}" for cell in column.cells]
    readings.channels[key] = Channel(column.place, values, typed)


def unit_of(
    file: str, line: int | None, place: str, unit: str, quantity: str, findings: Findings
) -> float:
    """Return the factor to SI of a unit that the file states; NaN and a problem if it has none."""
    if not unit and quantity == "number":
        return 1.0
    if not unit:
        do = f"Write for example {QUANTITIES[quantity].examples}."
        findings.add(file, line, place, "must have its unit", "none", do)
        return np.nan
    try:
        return unit_factor(unit, quantity)
    except UnitError as error:
        findings.add(file, line, place, error.must, unit, error.do)
        return np.nan


def add_value(readings: Readings, key: str, column: Column, findings: Findings) -> None:
    """Read a single value, the first cell of `column`; an empty one is not stated."""
    cell = column.cells[0]
    if not cell:
        return
    quantity = "number" if key == "area_ratio" else "length"
    file, line, place = readings.file, column.line, column.place
    factor = unit_of(file, line, place, column.unit, quantity, findings)
    try:
        value = parse_number(cell) * factor
    except UnitError as error:
        findings.add(file, line, place, error.must, cell)
        return
    readings.stated[key] = Stated(value, place, line, f"{cell} {column.unit}".rstrip(" -"))


def condensed(problems: Iterable[Problem]) -> list[Problem]:
    """Return problems with those that differ only in line and value told once, with a count."""
    groups: dict[Problem, list[Problem]] = {}
    for problem in problems:
        groups.setdefault(replace(problem, line=None, found=""), []).append(problem)
    told = []
    for first, *more in groups.values():
        rows = counted(len(more), "more row")
        found = f"{first.found} (and so in {rows})" if more else first.found
        told.append(replace(first, found=found))
    return told


def counted(number: int, what: str) -> str:
    """Return a number with what is counted, in the plural but for one."""
    return f"{number} {what}" + ("s" if number != 1 else "")
