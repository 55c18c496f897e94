"""The report as a workbook: numbers as numbers, texts as texts, nothing that computes."""

from __future__ import annotations

import io
from collections.abc import Sequence
from datetime import UTC, datetime
from typing import NamedTuple

from xlsxwriter import Workbook
from xlsxwriter.format import Format

from matchup.report.table import AtLeast, Column, Table

WIDEST = 60
NARROWEST = 8
UNDATED = datetime(2000, 1, 1, tzinfo=UTC)
"""The date of making that workbooks carry, so that the same report is the same file."""
PLAIN = {"strings_to_formulas": False, "strings_to_urls": False, "strings_to_numbers": False}
"""No text of an input may become a formula, a link or a number."""


class Sheet(NamedTuple):
    """A sheet of the workbook."""

    name: str
    table: Table


def workbook(title: str, sheets: Sequence[Sheet]) -> bytes:
    """Return the tables as an XLSX workbook, a sheet for each."""
    out = io.BytesIO()
    book = Workbook(out, {"in_memory": True, **PLAIN})
    book.set_properties({"title": title, "created": UNDATED})
    formats = _Formats(book)
    for sheet in sheets:
        _write(book, sheet, formats)
    book.close()
    return out.getvalue()


class _Formats:
    """Number formats, each made once.

    Parameters
    ----------
    book : Workbook
    """

    def __init__(self, book: Workbook):
        self._book = book
        self._made: dict[str, Format] = {}
        self.heading = book.add_format(
            {"bold": True, "text_wrap": True, "valign": "bottom", "bottom": 1}
        )
        self.text = book.add_format({"text_wrap": True, "valign": "top"})

    def number(self, digits: int | None, at_least: bool) -> Format:
        """Return the format of a number with so many decimals."""
        code = "General" if digits is None else "0" + ("." + "0" * digits if digits else "")
        code += '"+"' if at_least else ""
        if code not in self._made:
            self._made[code] = self._book.add_format({"num_format": code, "valign": "top"})
        return self._made[code]


def _write(book: Workbook, sheet: Sheet, formats: _Formats) -> None:
    page = book.add_worksheet(sheet.name)
    page.freeze_panes(1, 0)
    page.set_landscape()
    page.fit_to_pages(1, 0)
    page.repeat_rows(0)
    for place, column in enumerate(sheet.table.columns):
        heading = " ".join(column.header.split())
        page.write_string(0, place, heading, formats.heading)
        page.set_column(place, place, _width(sheet.table, place, heading, column))
    for line, row in enumerate(sheet.table.rows, 1):
        for place, value in enumerate(row):
            column = sheet.table.columns[place]
            if isinstance(value, (int, float)) and not isinstance(value, bool):
                style = formats.number(column.digits, isinstance(value, AtLeast))
                page.write_number(line, place, float(value), style)
            elif value is not None:
                page.write_string(line, place, str(value), formats.text)


def _width(table: Table, place: int, heading: str, column: Column) -> int:
    """Return how wide a column must be for its longest word or text."""
    texts = [str(row[place]) for row in table.rows if isinstance(row[place], str)]
    longest = max([len(text) for text in texts], default=0)
    words = max(len(word) for word in heading.split()) if heading else 0
    return min(WIDEST, max(NARROWEST, words + 2, longest + 2 if column.digits is None else 0))
