"""Tables as people have them: every encoding and separator gives the same cells."""

from __future__ import annotations

import datetime
import io
import os
import zipfile
from pathlib import Path

import openpyxl
import pytest

from matchup.inputs import table
from matchup.inputs.findings import Findings, shown_path
from matchup.inputs.table import read_bytes, read_table

ROWS = [["name", "mass [t]", "text"], ["Müller", "7.5", 'a "b"; c, d'], ["B", "", "x"]]
WANTED = [tuple(row) for row in ROWS]


def read(path: Path):
    findings = Findings()
    found = read_table(path, findings)
    return found, findings.ordered()


def rows_of(found) -> list[tuple[str, ...]]:
    return [found.header.cells, *(row.cells for row in found.rows)]


def text(separator: str, end: str = "\n") -> str:
    quoted = [['"' + cell.replace('"', '""') + '"' for cell in row] for row in ROWS]
    return "".join(separator.join(row) + end for row in quoted)


@pytest.mark.parametrize("separator", [",", ";", "\t"])
@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
@pytest.mark.parametrize(
    "encoding", ["utf-8", "utf-8-sig", "cp1252", "utf-16", "utf-16-le", "utf-16-be"]
)
def test_every_usual_make_of_csv_gives_the_same_cells(tmp_path, separator, end, encoding):
    path = tmp_path / "t.csv"
    path.write_bytes(text(separator, end).encode(encoding))
    found, problems = read(path)
    assert not problems
    assert rows_of(found) == WANTED
    assert found.separator == separator
    assert [row.line for row in found.rows] == [2, 3]


@pytest.mark.parametrize("line", ["sep=;", '"sep=;"', "SEP=;", "sep=\t"])
@pytest.mark.parametrize("end", ["\n", "\r\n"])
def test_a_line_that_announces_the_separator(tmp_path, line, end):
    separator = "\t" if "\t" in line else ";"
    path = tmp_path / "t.csv"
    path.write_bytes((line + end + text(separator, end)).encode())
    found, problems = read(path)
    assert not problems
    assert rows_of(found) == WANTED
    assert found.header.line == 2


def test_an_announced_separator_that_is_none(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text("sep=|\na|b\n1|2\n")
    found, [problem] = read(path)
    assert found is None
    assert (problem.line, problem.place, problem.found) == (1, "sep", "|")


def test_a_separator_within_quotes_or_brackets_does_not_count(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text('"a,b,c";mass [t, or kip];x\n1;2;3\n')
    found, problems = read(path)
    assert not problems
    assert found.header.cells == ("a,b,c", "mass [t, or kip]", "x")


def test_blank_lines_keep_the_line_numbers(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text("\n\na,b\n\n , \n1,2\n\n3,4\n\n")
    found, problems = read(path)
    assert not problems
    assert found.header.line == 3
    assert [row.line for row in found.rows] == [6, 8]


def test_a_cell_over_several_lines_keeps_the_line_numbers(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text('a,b\n1,"x\ny\nz"\n2,w\n')
    found, _ = read(path)
    assert [row.line for row in found.rows] == [2, 5]


def test_short_rows_are_filled_and_widths_are_kept(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text("a,b,c\n1,2\n1,2,3,\n")
    found, _ = read(path)
    assert [row.cells for row in found.rows] == [("1", "2", ""), ("1", "2", "3")]
    assert [row.width for row in found.rows] == [2, 4]
    path.write_text("a;b;c\n1;2;3;;\n1;2;3;4\n")
    found, _ = read(path)
    assert [row.width for row in found.rows] == [3, 4]


def test_empty_columns_at_the_end_of_a_spreadsheet_are_no_surplus(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text("a,b,,\n1,2,,\n3,4,,\n")
    found, problems = read(path)
    assert not problems
    assert [row.width for row in found.rows] == [found.width, found.width]


@pytest.mark.parametrize(
    ("data", "must", "found", "do"),
    [
        (b"", "must hold a header and at least one row", "an empty table", ""),
        (b"\n \n,,\n", "must hold a header and at least one row", "an empty table", ""),
        (b"a,b\n", "must hold a header and at least one row", "a header alone", ""),
        (b"\xd0\xcf\x11\xe0\x00\x00", "must be a text file", "an old workbook (.xls)", ".xlsx"),
        (b"%PDF-1.7 \x00", "must be a text file", "a PDF file", "CSV"),
        (bytes(range(256)), "must be a text file", "binary data", ""),
        (b"\xff\xfe\x00\xd8", "must be a text file", "binary data", ""),
        (b"a\x81,b\n1,2", "must be a text file", "binary data", ""),
        (b"PK\x03\x04nothing", "must be an XLSX workbook", "another or a damaged file", ".xlsx"),
    ],
)
def test_what_is_no_table_is_said_to_be_none(tmp_path, data, must, found, do):
    path = tmp_path / "t.csv"
    path.write_bytes(data)
    table, [problem] = read(path)
    assert table is None
    assert (problem.must, problem.found) == (must, found)
    assert do in problem.do


def test_a_stray_byte_in_utf_8_does_not_garble_the_rest(tmp_path):
    path = tmp_path / "t.csv"
    path.write_bytes("name,x\nMüller,1\nMa".encode() + b"\xfcer,2\n")
    table, [problem] = read(path)
    assert table is None
    assert (problem.line, problem.must) == (3, "must be text in one encoding")
    assert problem.found == "the byte 0xfc among letters of UTF-8"
    assert "UTF-8" in problem.do


@pytest.mark.parametrize(
    ("body", "line"),
    [('a,b\n1,"2\n3,4\n', 2), ('a,b\n1,2\n"3"x,4\n', 3)],
)
def test_a_quote_that_does_not_fit_names_its_line(tmp_path, body, line):
    path = tmp_path / "t.csv"
    path.write_text(body)
    _, [problem] = read(path)
    assert problem.line == line
    assert "must be well-formed CSV" in problem.must
    assert problem.do == "Check the quotes."


def workbook(path: Path, rows: list[list[object]]) -> Path:
    book = openpyxl.Workbook()
    for row in rows:
        book.active.append(row)
    book.save(path)
    return path


def test_a_workbook_gives_the_cells_of_its_first_sheet(tmp_path):
    day = datetime.datetime(2025, 3, 12)
    rows = [["name", "mass [t]", "yes"], ["A", 7.5, True], [None, None, None], ["B", 9, False]]
    found, problems = read(workbook(tmp_path / "t.xlsx", [*rows, [day, 0.1, None]]))
    assert not problems
    assert found.separator == ""
    assert rows_of(found) == [
        ("name", "mass [t]", "yes"),
        ("A", "7.5", "yes"),
        ("B", "9", "no"),
        ("2025-03-12T00:00:00", "0.1", ""),
    ]
    assert [row.line for row in found.rows] == [2, 4, 5]


def test_cells_beside_the_table_of_a_workbook_are_columns_without_a_name(tmp_path):
    found, _ = read(workbook(tmp_path / "t.xlsx", [["a"], ["1", None, "note"]]))
    assert found.header.cells == ("a", "", "")
    assert found.rows[0].cells == ("1", "", "note")


def test_a_workbook_is_known_by_its_content(tmp_path):
    path = workbook(tmp_path / "t.xlsx", [["a"], [1]])
    found, problems = read(path.rename(tmp_path / "t.csv"))
    assert not problems
    assert found.rows[0].cells == ("1",)


def test_damaged_workbooks_never_raise(tmp_path):
    whole = workbook(tmp_path / "t.xlsx", [["a", "b"], [1, 2]]).read_bytes()
    path = tmp_path / "cut.xlsx"
    for end in range(3, len(whole), 97):
        path.write_bytes(whole[:end])
        assert read(path)[0] is None
    for at in range(30, len(whole), 53):
        path.write_bytes(whole[:at] + b"\xff\x00\xff" + whole[at + 3 :])
        found, problems = read(path)
        assert (found is None) == bool(problems)


def test_a_workbook_that_unpacks_without_end_is_not_unpacked(tmp_path):
    path = tmp_path / "bomb.xlsx"
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as packed:
        packed.writestr("xl/workbook.xml", bytes(210_000_000))
    _, [problem] = read(path)
    assert problem.must == "must be at most 200 MB when unpacked"


def test_a_workbook_that_says_it_has_a_million_rows(tmp_path):
    plain = workbook(tmp_path / "t.xlsx", [["a"], [1]])
    out = io.BytesIO()
    with zipfile.ZipFile(plain) as old, zipfile.ZipFile(out, "w") as new:
        for part in old.namelist():
            data = old.read(part)
            if part.endswith("sheet1.xml"):
                assert b'ref="A1:A2"' in data
                data = data.replace(b'ref="A1:A2"', b'ref="A1:XFD1048576"')
            new.writestr(part, data)
    plain.write_bytes(out.getvalue())
    found, problems = read(plain)
    assert not problems
    assert len(found.rows) == 1


def test_too_many_rows(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text("a\n" + "1\n" * (table.MOST_ROWS + 5))
    _, [problem] = read(path)
    assert problem.must == "must have at most 20000 rows"


def test_files_that_can_not_be_read(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)

    def problem(path: Path):
        findings = Findings()
        assert read_bytes(path, findings) is None
        [found] = findings.problems
        return found

    assert problem(tmp_path).found == "a folder"
    (tmp_path / "hammers.csv").write_text("x")
    missing = problem(Path("hamers.csv"))
    assert missing.must == "must be a file that exists"
    assert missing.do == "Did you mean `hammers.csv`?"
    assert problem(Path("zzz.csv")).do == "There: hammers.csv."
    assert problem(Path("zzz.xlsx")).do == ""
    assert problem(Path("no/such.csv")).do == "Its folder does not exist either."
    assert "file name too long" in problem(Path("x" * 300)).must
    assert problem(Path("a\0b")).file == r"a\x00b"
    os.mkfifo(tmp_path / "pipe")
    assert problem(Path("pipe")).found == "a device or a pipe"
    monkeypatch.setattr(table, "LARGEST_FILE", 0)
    assert problem(Path("hammers.csv")).must == "must be at most 0 MB"


def test_a_file_that_may_not_be_read(tmp_path, monkeypatch):
    path = tmp_path / "t.csv"
    path.write_text("a\n1\n")

    def refuse(self: Path) -> bytes:
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(Path, "read_bytes", refuse)
    _, [problem] = read(path)
    assert problem.must == "must be a file that can be read; this one can't: permission denied"


def test_paths_are_shown_without_detours(tmp_path, monkeypatch):
    here = tmp_path / "here"
    (here / "jobs").mkdir(parents=True)
    (tmp_path / "linked" / "deep").mkdir(parents=True)
    monkeypatch.chdir(here)
    assert shown_path(Path("jobs/../hammers.csv")) == "hammers.csv"
    assert shown_path(here / "jobs" / "a.csv") == os.path.join("jobs", "a.csv")
    assert shown_path(tmp_path / "b" / ".." / "a.csv") == str(tmp_path / "a.csv")
    assert shown_path(Path("../a.csv")) == os.path.join("..", "a.csv")
    assert shown_path(Path("a.csv")) == "a.csv"
    # With a link on the way, `..` leads elsewhere than the letters say.
    (here / "link").symlink_to(tmp_path / "linked" / "deep")
    assert shown_path(Path("link/../a.csv")) == "link/../a.csv"


def test_a_path_from_a_folder_that_is_gone_is_shown_as_typed(monkeypatch):
    def gone() -> str:
        raise FileNotFoundError

    monkeypatch.setattr(os, "getcwd", gone)
    assert shown_path(Path("b/../a.csv")) == "b/../a.csv"
