"""Tables as people have them: CSV of any usual make, or the first sheet of a workbook."""

from __future__ import annotations

import csv
import hashlib
import io
import re
import zipfile
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date, time
from pathlib import Path

from matchup.errors import Problem
from matchup.inputs.findings import Findings, did_you_mean, shown_path

SEPARATORS = (";", "\t", ",")
LARGEST_FILE = 20_000_000
"""A catalogue larger than this is not one, packed or unpacked tenfold. [bytes]"""
MOST_ROWS = 20_000


@dataclass(frozen=True, slots=True)
class Row:
    """A row of cells as typed, with its line in the file.

    Parameters
    ----------
    line : int
    cells : tuple of str
        As many as the header has.
    width : int
        How many there were.
    """

    line: int
    cells: tuple[str, ...]
    width: int


@dataclass(frozen=True, slots=True)
class RawTable:
    """A header and rows of text.

    Parameters
    ----------
    file : str
        As it is shown.
    separator : str
        Between cells; empty for a workbook.
    header : Row
    rows : tuple of Row
        Blank ones left out.
    """

    file: str
    separator: str
    header: Row
    rows: tuple[Row, ...]

    @property
    def width(self) -> int:
        """How many cells a row may have."""
        return len(self.header.cells)


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
    file = shown_path(path)
    if data[:2] == b"PK":
        separator, rows = "", _workbook_rows(file, data, findings)
    else:
        text = decode(file, data, findings)
        separator, rows = ("", None) if text is None else _text_rows(file, text, findings)
    if rows is None:
        return None
    rows = [(line, cells) for line, cells in rows if any(cells)][: MOST_ROWS + 1]
    if len(rows) < 2:
        must = "must hold a header and at least one row"
        findings.add(file, None, "", must, "a header alone" if rows else "an empty table")
        return None
    if len(rows) > MOST_ROWS:
        findings.add(file, None, "", f"must have at most {MOST_ROWS} rows")
        return None
    width = _width(separator, [cells for _, cells in rows])
    header, *body = [_row(line, cells, width, separator) for line, cells in rows]
    return RawTable(file, separator, header, tuple(body))


_Cells = tuple[str, ...]


def _row(line: int, cells: _Cells, width: int, separator: str) -> Row:
    count = len(cells) if separator == "," else _last(cells)
    return Row(line, (*cells[:width], *[""] * (width - len(cells))), count)


def _last(cells: _Cells) -> int:
    """Return how many cells there are up to the last that is not blank."""
    return max((place for place, cell in enumerate(cells, 1) if cell), default=0)


def _width(separator: str, rows: Sequence[_Cells]) -> int:
    """Return how many columns a table has.

    Where commas separate the cells, one cell too many may be a decimal comma even if the last is
    blank, so that the header counts as it is. Cells beside the table of a workbook are columns.
    """
    if separator == "":
        return max(map(_last, rows))
    return len(rows[0]) if separator == "," else _last(rows[0])


def read_bytes(path: Path, findings: Findings) -> bytes | None:
    """Return a file's bytes, or note why they can't be had."""
    findings.begin(shown_path(path))
    fault = file_fault(path)
    if fault is None:
        try:
            data = path.read_bytes()
            findings.digests[shown_path(path)] = hashlib.sha256(data).hexdigest()
            return data
        except OSError as error:
            fault = _unreadable(path, error)
    findings.problems.append(fault)
    return None


def file_fault(path: Path) -> Problem | None:
    """Return what is wrong with a path that is no file to read; None where nothing is."""
    file = shown_path(path)
    try:
        if path.is_dir():
            return Problem(file, None, "", "must be a file", "a folder")
        if not path.exists():
            return Problem(file, None, "", "must be a file that exists", "", _neighbours(path))
        if not path.is_file():
            return Problem(file, None, "", "must be a file", "a device or a pipe")
        if path.stat().st_size > LARGEST_FILE:
            must = f"must be at most {LARGEST_FILE // 1_000_000} MB"
            return Problem(file, None, "", must, f"{path.stat().st_size // 1_000_000} MB")
    except OSError as error:
        return _unreadable(path, error)
    return None


def _unreadable(path: Path, error: OSError) -> Problem:
    why = error.strerror or str(error)
    must = f"must be a file that can be read; this one can't: {why[:1].lower()}{why[1:]}"
    return Problem(shown_path(path), None, "", must, "")


def _neighbours(path: Path) -> str:
    """Return a hint at the files that are there instead."""
    if not path.parent.is_dir():
        return "Its folder does not exist either."
    names = sorted(p.name for p in path.parent.iterdir() if p.suffix == path.suffix)
    if not names:
        return ""
    near = did_you_mean(path.stem, [Path(name).stem for name in names])
    return near.replace("`?", f"{path.suffix}`?") or f"There: {', '.join(names[:8])}."


_SIGNATURES = {
    b"\xd0\xcf\x11\xe0": ("an old workbook (.xls)", "Save it as .xlsx or as CSV."),
    b"%PDF": ("a PDF file", "Save the table as .xlsx or as CSV."),
    b"PK": ("a workbook or an archive", ""),
}


def decode(file: str, data: bytes, findings: Findings) -> str | None:
    """Return text in UTF-8, UTF-16 or Windows' western code page, or note that it is none."""
    known = next((known for known in _SIGNATURES if data.startswith(known)), None)
    if _is_garbled(file, data, findings):
        return None
    for encoding in _encodings(data) if known is None else []:
        try:
            text = data.decode(encoding)
        except UnicodeDecodeError:
            continue
        if not re.search(r"[\x00-\x08\x0e-\x1f]", text):
            return text
    what, do = ("binary data", "") if known is None else _SIGNATURES[known]
    findings.add(file, None, "", "must be a text file", what, do)
    return None


_SEVERAL_BYTES = re.compile(
    rb"[\xc2-\xdf][\x80-\xbf]|[\xe0-\xef][\x80-\xbf]{2}|[\xf0-\xf4][\x80-\xbf]{3}"
)
"""A letter of UTF-8; in a text of Windows, an unlikely row of accents and marks."""


def _is_garbled(file: str, data: bytes, findings: Findings) -> bool:
    """Note that a text in UTF-8 has a byte that is none, which would garble all other letters."""
    try:
        data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        if _encodings(data)[0] != "utf-8-sig" or not _SEVERAL_BYTES.search(data):
            return False
        line = data[: error.start].count(b"\n") + 1
        found = f"the byte {data[error.start]:#04x} among letters of UTF-8"
        do = "Type the line again, and save the file as UTF-8."
        findings.add(file, line, "", "must be text in one encoding", found, do)
        return True
    return False


def _encodings(data: bytes) -> list[str]:
    """Return the encodings to try; without a mark, UTF-16 shows by zeros in every other byte."""
    if data[:2] in (b"\xff\xfe", b"\xfe\xff"):
        return ["utf-16"]
    for first, encoding in ((1, "utf-16-le"), (0, "utf-16-be")):
        half = data[first:200:2]
        if half.count(0) > len(half) / 2:
            return [encoding]
    return ["utf-8-sig", "cp1252"]


_Rows = list[tuple[int, _Cells]]


def _text_rows(file: str, text: str, findings: Findings) -> tuple[str, _Rows | None]:
    first, *rest = re.split(r"\r\n|\r|\n", text, maxsplit=1)
    announced = re.fullmatch(r'"?sep=(.*?)"?', first.rstrip(" "), re.IGNORECASE)
    skipped = 0
    if announced:
        separator, text, skipped = announced.group(1) or "\t", "".join(rest), 1
        if separator not in SEPARATORS:
            must = "must name a separator: semicolon, comma or tab"
            findings.add(file, 1, "sep", must, separator)
            return "", None
    else:
        separator = _separator(text)
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True)
    rows: _Rows = []
    before = 0
    try:
        for cells in reader:
            rows.append((skipped + before + 1, tuple(map(_tidy, cells))))
            before = reader.line_num
    except csv.Error as error:
        line = skipped + before + 1
        must = f"must be well-formed CSV; here it is not ({error})"
        findings.add(file, line, "", must, do="Check the quotes.")
        return separator, rows if len(rows) > 1 else None
    return separator, rows


def _separator(text: str) -> str:
    """Return the separator that the first line with text uses most, quotes left out."""
    line = next((line for line in text.splitlines() if line.strip()), "")
    bare = re.sub(r'"[^"]*"', "", re.sub(r"\[[^\]]*\]", "", line))
    return max(SEPARATORS, key=bare.count) if any(map(bare.count, SEPARATORS)) else ","


def _workbook_rows(file: str, data: bytes, findings: Findings) -> _Rows | None:
    import openpyxl

    try:
        unpacked = sum(part.file_size for part in zipfile.ZipFile(io.BytesIO(data)).infolist())
        if unpacked > 10 * LARGEST_FILE:
            must = f"must be at most {10 * LARGEST_FILE // 1_000_000} MB when unpacked"
            findings.add(file, None, "", must, f"{unpacked // 1_000_000} MB")
            return None
        book = openpyxl.load_workbook(io.BytesIO(data), read_only=True, data_only=True)
        sheet = book.worksheets[0]
        # What a workbook says of its size may be a million empty rows.
        sheet.reset_dimensions()
        return [
            (line, tuple(_tidy(_workbook_cell(value)) for value in values))
            for line, values in enumerate(sheet.iter_rows(values_only=True), 1)
        ]
    except Exception:
        # A damaged workbook raises whatever the readers of its parts raise.
        do = "Save it as .xlsx or as CSV again."
        findings.add(file, None, "", "must be an XLSX workbook", "another or a damaged file", do)
        return None


def _tidy(cell: str) -> str:
    """Return a cell on one line; people break the lines of headers."""
    return " ".join(cell.split())


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
