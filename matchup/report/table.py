"""A table as data, before it is text, CSV or anything else."""

from __future__ import annotations

import csv
import html
import io
import re
import textwrap
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import TypeVar

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


NO_BREAK = "\u00a0"
Row = TypeVar("Row")


class Marked(float):
    """A number that people see otherwise than just rounded; in files it is the number."""

    def shown(self, digits: int) -> str:
        """Return it as people see it, with so many decimals where there are any."""
        raise NotImplementedError


class AtLeast(Marked):
    """A lower bound: shown with a plus."""

    def shown(self, digits: int) -> str:
        """Return the number with a plus."""
        return f"{self:.{digits}f}+"


class Starred(Marked):
    """A number with a reservation that stands below the table: shown with a star."""

    def shown(self, digits: int) -> str:
        """Return the number with a star."""
        return f"{self:.{digits}f}*"


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
    short : mapping of str to str
        Short forms in which people see some of the texts; a file holds them whole.
    notes : mapping of str to str
        What some of the texts mean, told under the table where they occur.
    once : bool
        Whether people see a text that is the same as in the row above only there.
    """

    key: str
    header: str
    digits: int | None = None
    wrap: int | None = None
    keep: int = 9
    short: Mapping[str, str] = field(default_factory=dict)
    notes: Mapping[str, str] = field(default_factory=dict)
    once: bool = False


Field = tuple[Column, Callable[[Row], object]]
"""A column and what it shows of a row."""


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
            left_out.append(" ".join(self.columns[least].header.split()).replace("- ", ""))
            text = self._render(columns)
        notes = self._notes(columns)
        if left_out:
            notes.append(f"(left out for want of width: {', '.join(left_out)})")
        return "\n".join([text, *(wrapped(note, width) for note in notes)])

    def _render(self, columns: Sequence[int]) -> str:
        picked = [self.columns[i] for i in columns]
        header = _lines([column.header for column in picked], at_bottom=True)
        body = [
            line
            for above, row in zip((None, *self.rows), self.rows, strict=False)
            for line in _lines(
                [
                    "" if c.once and above and above[i] == row[i] else _cell(row[i], c)
                    for i, c in zip(columns, picked, strict=True)
                ]
            )
        ]
        text = tabulate(
            header + body,
            tablefmt=NARROW,
            disable_numparse=True,
            colalign=self._alignment(picked),
        )
        lines = [line.rstrip() for line in text.splitlines()]
        lines.insert(len(header), "-" * max(map(len, lines)))
        return "\n".join(lines)

    def shown(
        self, breaks: bool = False
    ) -> tuple[list[str], list[list[str]], list[str], list[str]]:
        """Return headings, rows, alignments and notes as people see them on a page.

        Headings may hold line breaks; texts only where `breaks` is asked for.
        A text that repeats what stands above it is left out where its column says so.
        """
        rows = []
        for above, row in zip((None, *self.rows), self.rows, strict=False):
            repeats = [
                c.once and above is not None and above[i] == row[i]
                for i, c in enumerate(self.columns)
            ]
            texts = [_cell(v, c) for v, c in zip(row, self.columns, strict=True)]
            texts = texts if breaks else [text.replace("\n", " ") for text in texts]
            rows.append(["" if same else t for same, t in zip(repeats, texts, strict=True)])
        headings = [column.header for column in self.columns]
        notes = self._notes(range(len(self.columns)))
        return headings, rows, self._alignment(self.columns), notes

    def to_html(self) -> str:
        """Return the table for a web page or a notebook; every text is escaped."""
        headings, rows, align, notes = self.shown(breaks=True)

        def cells(tag: str, texts: Sequence[str]) -> str:
            return "".join(
                f'<{tag} style="text-align: {side};">{html.escape(text)}</{tag.split()[0]}>'
                for text, side in zip(texts, align, strict=True)
            )

        head = cells('th scope="col"', headings)
        body = "".join(f"<tr>{cells('td', row)}</tr>" for row in rows)
        table = f"<table><thead><tr>{head}</tr></thead><tbody>{body}</tbody></table>"
        return "".join([table, *(f"<p>{html.escape(note)}</p>" for note in notes)])

    @staticmethod
    def _alignment(columns: Sequence[Column]) -> list[str]:
        return ["left" if column.digits is None else "right" for column in columns]

    def _notes(self, columns: Iterable[int]) -> list[str]:
        """Return what the texts in the columns shown mean, each once."""
        return [
            note
            for i in columns
            for text, note in self.columns[i].notes.items()
            if any(row[i] == text for row in self.rows)
        ]

    def beside(self, other: Table) -> Table:
        """Return the columns of both tables, row by row."""
        rows = tuple((*mine, *others) for mine, others in zip(self.rows, other.rows, strict=True))
        return Table((*self.columns, *other.columns), rows)

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


def tabled(rows: Sequence[Row], fields: Sequence[Field[Row]]) -> Table:
    """Return a table of things, each column with what it shows of a thing."""
    return Table(
        tuple(column for column, _ in fields),
        tuple(tuple(show(row) for _, show in fields) for row in rows),
    )


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
        if isinstance(value, Marked):
            return value.shown(column.digits)
        return f"{value:.{column.digits}f}"
    plain = f"{float(f'{value:.4g}'):g}" if isinstance(value, float) else str(value)
    text = column.short.get(plain, plain)
    if column.wrap:
        text = "\n".join(textwrap.wrap(text, column.wrap)) or text
    return text


def wrapped(text: str, width: int, indent: str = "") -> str:
    """Return a paragraph in lines of at most `width`, later lines indented.

    A number and what follows it, mostly its unit, stay in one line, and so do its thousands.
    """
    kept = re.sub(r"(?<=\d) (?=[a-zA-Z]|\d{3}\b)", NO_BREAK, text)
    lines = textwrap.wrap(kept, width, subsequent_indent=indent, break_on_hyphens=False)
    return "\n".join(lines).replace(NO_BREAK, " ")
