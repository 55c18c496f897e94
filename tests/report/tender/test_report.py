"""The tender report: complete, the same every time, whole or not at all, and safe for any text."""

from __future__ import annotations

import io
import json
import re
from base64 import b64decode
from dataclasses import replace
from functools import cache
from html.parser import HTMLParser
from pathlib import Path
from xml.etree import ElementTree

import openpyxl
import pytest

import matchup
from matchup.model.job import Job
from matchup.report.shown import Units
from matchup.report.table import AtLeast, Column, Table
from matchup.report.tender.bundle import NAMES
from matchup.report.tender.workbook import Sheet, workbook
from tests import examples, jobs

HOSTILE = (
    "<script>alert(1)</script>",
    '=HYPERLINK("http://x.invalid","a")',
    "A" * 300,
    "#set page; *bold* `c` @r $x_{1",
    "\u202eright to left\u202c \N{HAMMER}",
)
ORDER = (
    "The answer",
    "Hammers that drive the pile, best first",
    "Hammers that can't, nearest miss first",
    "Driving with",
    "Strokes and cushions for",
    "Two blows in detail",
    "Inputs as understood",
    "Methods, sources and what was taken by default",
    "Cautions",
    "How to get this report again",
)


@cache
def staged() -> matchup.ReportResult:
    return matchup.tender_report(examples.path("three_stages"))


@cache
def staged_files() -> dict[str, bytes]:
    return staged().files()


def driven_job() -> Job:
    """A whole drive with two hammers and two cushions."""
    job = matchup.load_job(examples.path("whole_drive"))
    assert job.cushions is not None
    chosen = tuple(h for h in job.hammers if h.name in ("Curlew", "Plover"))
    return replace(job, hammers=chosen, cushions=replace(job.cushions, sheets=(10, 11)))


@cache
def driven() -> matchup.ReportResult:
    return matchup.tender_report(driven_job())


def hostile_job() -> Job:
    hammers = tuple(
        jobs.hydraulic(2.0 + i, name=name, source=name) for i, name in enumerate(HOSTILE)
    )
    return replace(jobs.small_job(hammers=hammers), title=HOSTILE[0])


@cache
def hostile_files() -> dict[str, bytes]:
    return matchup.tender_report(hostile_job()).files()


class Reader(HTMLParser):
    """Collects the tags, the references and the texts of a page."""

    def __init__(self) -> None:
        super().__init__()
        self.tags: list[str] = []
        self.headings: list[tuple[str, str]] = []
        self.references: list[str] = []
        self.alts: list[str | None] = []
        self.text = ""

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)
        given = dict(attrs)
        self.references += [value or "" for name, value in attrs if name in ("src", "href")]
        if tag == "img":
            self.alts.append(given.get("alt"))

    def handle_data(self, data: str) -> None:
        if self.tags and self.tags[-1] in ("h1", "h2") and data.strip():
            self.headings.append((self.tags[-1], data))
        self.text += data


def read(page: bytes) -> Reader:
    reader = Reader()
    reader.feed(page.decode())
    return reader


def book(files: dict[str, bytes]) -> openpyxl.Workbook:
    return openpyxl.load_workbook(io.BytesIO(files["report.xlsx"]))


# --- the web page --------------------------------------------------------------------------------


def test_sections_stand_in_the_order_in_which_a_reviewer_reads():
    headings = read(staged_files()["report.html"]).headings
    assert headings[0] == ("h1", "Hollowmere landing, row B, three stages")
    told = [text for tag, text in headings if tag == "h2"]
    assert len(told) == len(ORDER)
    assert all(text.startswith(start) for text, start in zip(told, ORDER, strict=True))


def test_the_page_needs_nothing_from_anywhere():
    page = staged_files()["report.html"]
    reader = read(page)
    assert all(
        ref.startswith(("data:image/svg+xml;base64,", "#part-")) for ref in reader.references
    )
    assert not {"script", "link", "iframe", "object", "form"} & set(reader.tags)
    assert b"default-src 'none'" in page
    assert b"url(" not in page
    assert b"@import" not in page


def test_every_figure_is_sound_and_told_in_words():
    reader = read(staged_files()["report.html"])
    pictures = [ref for ref in reader.references if ref.startswith("data:")]
    assert len(pictures) == 5
    assert all(alt and len(alt) > 40 for alt in reader.alts)
    for picture in pictures:
        drawn = ElementTree.fromstring(b64decode(picture.partition(",")[2]))
        # Namespaces are names, not requests; nothing else names a place outside the file.
        for element in drawn.iter():
            assert all(
                not value.startswith("http")
                for name, value in element.attrib.items()
                if name.endswith("href")
            )


def test_the_answer_is_that_of_the_ranking():
    ranked = examples.ranking("three_stages")
    sentence = ranked.to_text(width=1000).splitlines()[0].partition(": ")[2]
    text = " ".join(read(staged_files()["report.html"]).text.split())
    assert sentence in text
    for option in (*ranked.options, *ranked.rejected):
        assert option.hammer.name in text


def test_the_page_echoes_inputs_defaults_and_files():
    text = " ".join(read(staged_files()["report.html"]).text.split())
    for words in (
        "cylinder strength at driving",
        "Taken by default: modulus 33.8 GPa",
        "AASHTO LRFD 10.7.8",
        "A screening aid",
        "seed 7",
    ):
        assert words in text
    for file, digest in staged().dossier.job.digests:
        assert f"{file}{digest}" in text.replace(" ", "")


def test_digests_are_those_of_the_files():
    import hashlib

    digests = dict(staged().dossier.job.digests)
    assert len(digests) == 3
    for file, digest in digests.items():
        assert hashlib.sha256(Path(file).read_bytes()).hexdigest() == digest


# --- the paper -----------------------------------------------------------------------------------


def test_the_paper_opens_with_its_text_and_title():
    pypdf = pytest.importorskip("pypdf")
    paper = pypdf.PdfReader(io.BytesIO(staged_files()["report.pdf"]))
    assert 4 <= len(paper.pages) <= 12
    assert paper.metadata.title == "Hollowmere landing, row B, three stages"
    text = " ".join("".join(page.extract_text() for page in paper.pages).split())
    assert "8 of 19 hammers can drive this pile" in text
    for start in ORDER:
        assert start in text
    width, height = paper.pages[0].mediabox[2:]
    assert (round(float(width)), round(float(height))) == (595, 842)


def test_us_units_come_on_letter_paper():
    pypdf = pytest.importorskip("pypdf")
    files = staged().files("us")
    paper = pypdf.PdfReader(io.BytesIO(files["report.pdf"]))
    assert [round(float(side)) for side in paper.pages[0].mediabox[2:]] == [612, 792]
    assert " ft on 4 sheets" in read(files["report.html"]).text


def test_without_the_typesetter_the_paper_is_left_out(monkeypatch, tmp_path):
    from matchup.report.tender import paper

    monkeypatch.setattr(paper, "can_be_typeset", lambda: False)
    assert "report.pdf" not in staged().write(tmp_path / "report")


# --- the workbook --------------------------------------------------------------------------------


def test_the_workbook_holds_the_numbers_of_the_ranking():
    options = book(staged_files())["Options"]
    headings = [cell.value for cell in options[1]]
    ranked = examples.ranking("three_stages").options
    for row, option in zip(options.iter_rows(min_row=2, values_only=True), ranked, strict=True):
        shown = dict(zip(headings, row, strict=True))
        assert shown["hammer"] == option.hammer.name
        assert shown["stroke m"] == pytest.approx(option.target.stroke, rel=1e-12)
        assert shown["set mm"] == pytest.approx(1e3 * option.target.set, rel=1e-12)
        assert shown["energy kJ"] == pytest.approx(option.target.blow_energy / 1e3, rel=1e-12)
        assert shown["reach"] == pytest.approx(option.reach, rel=1e-12)


def test_the_workbook_says_why_hammers_fail():
    rejected = book(staged_files())["Rejected"]
    headings = [cell.value for cell in rejected[1]]
    row = dict(zip(headings, [cell.value for cell in rejected[2]], strict=True))
    assert row["verdict"] == "overstresses in tension"
    assert "at stage 'final set'" in row["reason"]


def test_every_sheet_has_a_frozen_header_and_no_formula():
    for files in (staged_files(), hostile_files()):
        for sheet in book(files):
            assert sheet.freeze_panes == "A2"
            assert all(cell.font.bold for cell in sheet[1])
            cells = [cell for row in sheet.iter_rows() for cell in row]
            assert {cell.data_type for cell in cells} <= {"s", "n"}
            assert not any(cell.hyperlink for cell in cells)


def test_numbers_are_numbers_and_texts_stay_texts():
    columns = (Column("a", "name"), Column("b", "length\nm", 2), Column("c", "reach", 2))
    rows = (("=1+1", 1.23456, AtLeast(4.0)), ("0012", None, 1.0), ("http://x.invalid", 3, 2.0))
    made = workbook("title", [Sheet("One", Table(columns, rows))])
    sheet = openpyxl.load_workbook(io.BytesIO(made))["One"]
    assert [cell.value for cell in sheet[1]] == ["name", "length m", "reach"]
    assert [cell.value for cell in sheet["A"]] == ["name", "=1+1", "0012", "http://x.invalid"]
    assert [cell.data_type for cell in sheet["A"]] == ["s"] * 4
    assert [cell.value for cell in sheet["B"]][1:] == [1.23456, None, 3]
    assert sheet["B2"].number_format == "0.00"
    assert sheet["C2"].number_format == '0.00"+"'


# --- data beside them ----------------------------------------------------------------------------


def test_data_beside_it_are_those_of_the_commands():
    files = staged_files()
    ranked = json.loads(files["ranking.json"])
    assert ranked["runtime_s"] is None
    assert [o["hammer"] for o in ranked["options"]] == [
        o.hammer.name for o in examples.ranking("three_stages").options
    ]
    assert files["options.csv"].decode() == examples.ranking("three_stages").to_csv()
    assert files["drive.csv"].decode().count("\n") == 4


# --- the same again ------------------------------------------------------------------------------


def test_the_same_job_gives_the_same_bytes():
    first = hostile_files()
    second = matchup.tender_report(hostile_job(), workers=1).files()
    assert set(first) == set(second)
    for name, data in first.items():
        assert data == second[name], name


# --- which option, and when the answer is no -----------------------------------------------------


def test_any_option_can_be_told_in_full():
    report = matchup.tender_report(hostile_job(), detail=HOSTILE[1])
    assert report.dossier.detail.hammer.name == HOSTILE[1]
    with pytest.raises(matchup.InputError, match="must name a hammer of the job"):
        matchup.tender_report(hostile_job(), detail="nobody")


def test_a_report_of_no_still_tells_why():
    weak = replace(jobs.small_job(), hammers=(jobs.hydraulic(0.6, name="Wren"),))
    report = matchup.tender_report(weak)
    assert not report.can
    reader = read(report.files()["report.html"])
    told = [text for tag, text in reader.headings if tag == "h2"]
    assert "Why Wren can't" in told
    assert ORDER[1] not in told


def test_a_pile_that_runs_has_no_blow_to_tell_of():
    heavy = jobs.hydraulic(400.0, name="Albatross")
    report = matchup.tender_report(replace(jobs.small_job(), hammers=(heavy,)))
    assert report.dossier.blows == ()
    assert b"pile runs" in report.files()["report.html"]


# --- a whole drive -------------------------------------------------------------------------------


def test_a_drive_is_told_case_by_case_and_station_by_station():
    report = driven()
    files = report.files()
    text = " ".join(read(files["report.html"]).text.split())
    assert "Case high, station by station:" in text
    assert "What a set means at 21.0 m" in text
    drive = book(files)["Drive"]
    plans = [plan for case in report.dossier.detail.cases for plan in case.plans]
    assert drive.max_row == len(plans) + 1
    headings = [cell.value for cell in drive[1]]
    depths = [row[headings.index("depth m")] for row in drive.iter_rows(2, values_only=True)]
    assert depths == pytest.approx([plan.stage.penetration for plan in plans])


def test_a_drive_that_fails_at_its_target_is_told_as_far_as_it_gets():
    report = matchup.tender_report(driven_job(), detail="Plover")
    assert report.dossier.detail.failing is not None
    assert report.dossier.map.stage == report.dossier.detail.failing.stage
    files = report.files()
    assert "Why Plover can't" in read(files["report.html"]).text
    drive = book(files)["Drive"]
    plans = [plan for case in report.dossier.detail.cases for plan in case.plans]
    assert drive.max_row == len(plans) + 1


def test_a_drive_is_drawn_with_all_its_cases():
    from matchup.report.driven import chosen_case
    from matchup.report.figures.drive import drive_figure

    dossier = driven().dossier
    told = chosen_case(dossier.detail, None)
    figure = drive_figure(dossier.detail, told, dossier.job, Units("metric"))
    labels = [text.get_text() for text in figure.legends[0].get_texts()]
    assert labels == ["case low", "case best", "case high", "all cases"]
    stroke = figure.axes[1].lines
    struck = [plan.stroke for plan in told.plans if plan.verdict == "drives"]
    shown = [float(x) for x in stroke[-1].get_xdata() if x == x]
    assert shown == pytest.approx(struck)


# --- writing -------------------------------------------------------------------------------------


def test_a_report_is_written_whole_and_not_over_another(tmp_path):
    folder = tmp_path / "new" / "report"
    names = staged().write(folder)
    assert sorted(path.name for path in folder.iterdir()) == sorted(names) == sorted(NAMES)
    (folder / "mine.txt").write_text("mine")
    with pytest.raises(matchup.InputError, match="must not hold a report yet"):
        staged().write(folder)
    staged().write(folder, force=True)
    assert (folder / "mine.txt").read_text() == "mine"


def test_a_failed_report_leaves_nothing(tmp_path, monkeypatch):
    write = Path.write_bytes

    def full(self: Path, data: bytes) -> int:
        if self.name.startswith("ranking"):
            raise OSError(28, "No space left on device")
        return write(self, data)

    monkeypatch.setattr(Path, "write_bytes", full)
    with pytest.raises(matchup.InputError, match="No space left on device"):
        staged().write(tmp_path / "report")
    assert not list(tmp_path.iterdir())


# --- hostile texts -------------------------------------------------------------------------------


def test_hostile_names_are_shown_as_text():
    page = hostile_files()["report.html"].decode()
    reader = read(hostile_files()["report.html"])
    assert "script" not in reader.tags
    assert reader.headings[0] == ("h1", HOSTILE[0])
    assert "&lt;script&gt;alert(1)&lt;/script&gt;" in page
    pypdf = pytest.importorskip("pypdf")
    paper = pypdf.PdfReader(io.BytesIO(hostile_files()["report.pdf"]))
    text = "".join(page.extract_text() for page in paper.pages)
    assert "#set page; *bold* `c` @r $x_{1" in re.sub(r"\s+", " ", text)
    assert not any("/Annots" in page for page in paper.pages)
    cells = {
        cell.value for sheet in book(hostile_files()) for row in sheet.iter_rows() for cell in row
    }
    assert set(HOSTILE) <= cells
