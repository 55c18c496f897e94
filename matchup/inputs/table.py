"""Tables as people have them: CSV of any usual make, or the first sheet of a workbook."""

from __future__ import annotations

import csv
import io
import re
import zipfile
from dataclasses import dataclass
from datetime import date, time
from pathlib import Path

from matchup.inputs.findings import Findings

SEPARATORS = (";", "\t", ",")
LARGEST_FILE = 20_000_000
"""A catalogue larger than this is not one. [bytes]"""


@dataclass(frozen=True, slots=True)
class Row:
    """A row of cells as typed, with its line in the file."""

    line: int
    cells: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class RawTable:
    """A header and rows of text.

    Parameters
    ----------
    file : str
        As the user named it.
    separator : str
        Between cells; empty for a workbook.
    header : Row
    rows : tuple of Row
        Blank ones left out; each as long as the header.
    """

    file: str
    separator: str
    header: Row
    rows: tuple[Row, ...]


def read_table(path: Path, findings: Findings) -> RawTable | None:
    """Read a table, or note why it can't be read.

    Parameters
    ----------
    path : Path
    findings : Findings
        Takes problems; modified in place.
    """
    data = read_bytes(path, findings)
    if data is None:
        return None
    file = str(path)
    if data[:2] == b"PK":
        rows = _workbook_rows(file, data, findings)
        separator = ""
    else:
        text = decode(file, data, findings)
        if text is None:
            return None
        separator, rows = _text_rows(file, text, findings)
    rows = [row for row in rows if any(cell.strip() for cell in row.cells)]
    if len(rows) < 2:
        what = "a header and at least one row"
        findings.add(
            file, None, "", f"must hold {what}", "an empty table" if not rows else "a header"
        )
        return None
    header = rows[0]
    width = max(i + 1 for i, cell in enumerate(header.cells) if cell.strip())
    body = []
    for row in rows[1:]:
        surplus = [cell for cell in row.cells[width:] if cell.strip()]
        if surplus:
            must = f"must have at most the header's {width} cells"
            do = "A separator inside a cell needs quotes around the cell."
            findings.add(file, row.line, "", must, f"{len(row.cells)} cells", do)
        padded = (*row.cells[:width], *[""] * (width - len(row.cells)))
        body.append(Row(row.line, tuple(cell.strip() for cell in padded)))
    cells = tuple(cell.strip() for cell in header.cells[:width])
    return RawTable(file, separator, Row(header.line, cells), tuple(body))


def read_bytes(path: Path, findings: Findings) -> bytes | None:
    """Return a file's bytes, or note why they can't be had."""
    try:
        if path.is_dir():
            findings.add(str(path), None, "", "must be a file", "a folder")
        elif not path.exists():
            near = ""
            if path.parent.is_dir():
                names = sorted(p.name for p in path.parent.iterdir() if p.suffix == path.suffix)
                near = f"There: {', '.join(names[:8])}." if names else ""
            findings.add(str(path), None, "", "must be a file that exists", "no such file", near)
        elif path.stat().st_size > LARGEST_FILE:
            must = f"must be at most {LARGEST_FILE // 1_000_000} MB"
            findings.add(str(path), None, "", must, f"{path.stat().st_size // 1_000_000} MB")
        else:
            return path.read_bytes()
    except (OSError, ValueError) as error:
        why = getattr(error, "strerror", None) or str(error)
        findings.add(str(path), None, "", "must be a file that can be read", why)
    return None


def decode(file: str, data: bytes, findings: Findings) -> str | None:
    """Return text in UTF-8, UTF-16 or Windows' western code page, or note that it is none."""
    if data[:2] in (b"\xff\xfe", b"\xfe\xff"):
        encodings = ["utf-16"]
    elif b"\x00" in data[:200]:
        little = data[1:2] == b"\x00"
        encodings = ["utf-16-le" if little else "utf-16-be"]
    else:
        encodings = ["utf-8-sig", "cp1252"]
    for encoding in encodings:
        try:
            text = data.decode(encoding)
        except UnicodeDecodeError:
            continue
        control = re.search(r"[\x00-\x08\x0e-\x1f]", text)
        if control is None:
            return text
    findings.add(file, None, "", "must be a text file", "binary data")
    return None


def _text_rows(file: str, text: str, findings: Findings) -> tuple[str, list[Row]]:
    skipped = 0
    first, _, rest = text.partition("\n")
    announced = re.fullmatch(r'"?sep=(.)"?', first.strip("\r\n ") or "")
    if announced or first.strip("\r\n").lower() == "sep=\t":
        separator = announced.group(1) if announced else "\t"
        text, skipped = rest, 1
    else:
        separator = _separator(text)
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True)
    rows: list[Row] = []
    before = 0
    try:
        for cells in reader:
            rows.append(Row(skipped + before + 1, tuple(cells)))
            before = reader.line_num
    except csv.Error as error:
        line = skipped + before + 1
        findings.add(file, line, "", "must be well-formed CSV", str(error), "Check the quotes.")
    return separator, rows


def _separator(text: str) -> str:
    """Return the separator that the first line with text uses most, quotes left out."""
    line = next((line for line in text.splitlines() if line.strip()), "")
    bare = re.sub(r'"[^"]*"', "", re.sub(r"\[[^\]]*\]", "", line))
    return max(SEPARATORS, key=bare.count) if any(map(bare.count, SEPARATORS)) else ","


def _workbook_rows(file: str, data: bytes, findings: Findings) -> list[Row]:
    import openpyxl
    from openpyxl.utils.exceptions import InvalidFileException

    try:
        book = openpyxl.load_workbook(io.BytesIO(data), read_only=True, data_only=True)
        sheet = book.worksheets[0]
        return [
            Row(line, tuple(_workbook_cell(value) for value in values))
            for line, values in enumerate(sheet.iter_rows(values_only=True), 1)
        ]
    except (
        InvalidFileException,
        zipfile.BadZipFile,
        KeyError,
        ValueError,
        IndexError,
        OSError,
        TypeError,
        AttributeError,
        SyntaxError,
    ):
        findings.add(file, None, "", "must be an XLSX workbook", "another or a damaged file")
        return []


def _workbook_cell(value: object) -> str:
    if value is None:
        return ""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, (date, time)):
        return value.isoformat()
    if isinstance(value, float) and value.is_integer() and abs(value) < 1e15:
        return str(int(value))
    return str(value)
