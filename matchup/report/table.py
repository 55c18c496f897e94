"""A table as data, before it is text, CSV or anything else."""

from __future__ import annotations

import csv
import io
import textwrap
from collections.abc import Sequence
from dataclasses import dataclass

from tabulate import DataRow, TableFormat, tabulate

NARROW = TableFormat(
    lineabove=None,
    linebelowheader=None,
    linebetweenrows=None,
    linebelow=None,
    headerrow=DataRow("", " ", ""),
    datarow=DataRow("", " ", ""),
    padding=0,
    with_header_hide=None,
)
"""One space between columns: eleven of them have to fit 100 characters."""


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table.

    Parameters
    ----------
    key : str
        Plain name with its unit, for CSV and data frames: ``set_mm``.
    header : str
        Heading for people; may hold line breaks.
    digits : int or None
        Decimals of a number; None for text.
    wrap : int or None
        Widest text before it is wrapped; None never wraps.
    keep : int
        Columns with the lowest numbers are left out first where a line is too narrow; 9 stays.
    """

    key: str
    header: str
    digits: int | None = None
    wrap: int | None = None
    keep: int = 9


@dataclass(frozen=True, slots=True)
class Table:
    """Columns and rows; a value is a number, a text or None."""

    columns: tuple[Column, ...]
    rows: tuple[tuple[object, ...], ...]

    def to_text(self, width: int) -> str:
        """Return the table in at most `width` characters a line, leaving columns out if need be."""
        columns = list(range(len(self.columns)))
        left_out: list[str] = []
        text = self._render(columns)
        while max(map(len, text.splitlines())) > width:
            droppable = [i for i in columns if self.columns[i].keep < 9]
            if not droppable:
                break
            least = min(droppable, key=lambda i: self.columns[i].keep)
            columns.remove(least)
            left_out.append(" ".join(self.columns[least].header.split()))
            text = self._render(columns)
        if left_out:
            note = f"(left out for want of width: {', '.join(left_out)})"
            text += "\n" + "\n".join(textwrap.wrap(note, width))
        return text

    def _render(self, columns: Sequence[int]) -> str:
        picked = [self.columns[i] for i in columns]
        header = _lines([column.header for column in picked], at_bottom=True)
        body = [
            line
            for row in self.rows
            for line in _lines([_cell(row[i], c) for i, c in zip(columns, picked, strict=True)])
        ]
        text = tabulate(
            header + body,
            tablefmt=NARROW,
            disable_numparse=True,
            colalign=["left" if column.digits is None else "right" for column in picked],
        )
        lines = [line.rstrip() for line in text.splitlines()]
        lines.insert(len(header), "-" * max(map(len, lines)))
        return "\n".join(lines)

    def to_csv(self) -> str:
        """Return the table as CSV with plain numbers; absent values are empty."""
        out = io.StringIO()
        writer = csv.writer(out, lineterminator="\n")
        writer.writerow(column.key for column in self.columns)
        for row in self.rows:
            writer.writerow("" if value is None else value for value in row)
        return out.getvalue()

    def to_records(self) -> list[dict[str, object]]:
        """Return the rows as dictionaries."""
        keys = [column.key for column in self.columns]
        return [dict(zip(keys, row, strict=True)) for row in self.rows]


def _lines(cells: Sequence[str], at_bottom: bool = False) -> list[list[str]]:
    """Return the lines that a row of cells with line breaks takes up."""
    split = [cell.split("\n") for cell in cells]
    height = max(map(len, split))
    if at_bottom:
        full = [[""] * (height - len(lines)) + lines for lines in split]
    else:
        full = [lines + [""] * (height - len(lines)) for lines in split]
    return [list(line) for line in zip(*full, strict=True)]


def _cell(value: object, column: Column) -> str:
    if value is None:
        return "-"
    if column.digits is not None and isinstance(value, (int, float)):
        return f"{value:.{column.digits}f}"
    text = str(value)
    if column.wrap:
        text = "\n".join(textwrap.wrap(text, column.wrap)) or text
    return text


def wrapped(text: str, width: int, indent: str = "") -> str:
    """Return a paragraph in lines of at most `width`, later lines indented."""
    return "\n".join(textwrap.wrap(text, width, subsequent_indent=indent, break_on_hyphens=False))
