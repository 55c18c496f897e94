"""Tables as people read them, and as files hold them."""

from __future__ import annotations

import csv
import io
import re

import pytest

from matchup.report.options import options_table, schedule_table
from matchup.report.shown import Units
from matchup.report.table import AtLeast, Column, Table, wrapped
from tests import examples
from tests.report import plans

NAME = Column("name", "name")
SET = Column("set_mm", "set\nmm", 1)


def table(*rows: tuple[object, ...], columns: tuple[Column, ...] = (NAME, SET)) -> Table:
    return Table(columns, rows)


def body(text: str) -> list[str]:
    """The lines under the rule, notes left out."""
    lines = text.splitlines()
    rule = next(i for i, line in enumerate(lines) if set(line) == {"-"})
    return [line for line in lines[rule + 1 :] if not line.startswith(("*", "(", "range:"))]


# --- width ---------------------------------------------------------------------------------------


@pytest.mark.parametrize("name", examples.NAMES)
@pytest.mark.parametrize("width", [100, 80])
def test_every_line_of_an_example_fits(name, width):
    text = examples.ranking(name).to_text(width=width)
    assert max(map(len, text.splitlines())) <= width


@pytest.mark.parametrize("name", examples.NAMES)
def test_at_100_columns_nothing_is_left_out_and_every_hammer_takes_one_line(name):
    result = examples.ranking(name)
    text = options_table(result.options, Units(result.job.display)).to_text(100)
    assert "left out" not in text
    assert len(body(text)) == len(result.options)


@pytest.mark.parametrize("name", examples.NAMES)
def test_at_80_columns_what_decides_stays(name):
    result = examples.ranking(name)
    text = options_table(result.options, Units(result.job.display)).to_text(80)
    header = text.split("---")[0]
    for word in ("verdict", "hammer", "stroke", "cushion", "set", "energy", "limit", "reach"):
        assert word in header
    assert "left out for want of width: blows /min, window" in text
    assert len(body(text)) == len(result.options)


@pytest.mark.parametrize("name", ["three_stages", "dolphin_tube"])
def test_a_schedule_at_80_columns_keeps_strokes_and_sets(name):
    result = examples.ranking(name)
    text = schedule_table(result.options[:3], Units(result.job.display)).to_text(80)
    assert max(map(len, text.splitlines())) <= 80
    header = text.split("---")[0]
    assert "stroke" in header
    assert "needed" in header


def test_columns_are_left_out_from_the_lowest_keep_upwards_and_named():
    columns = (
        NAME,
        Column("a", "first\none", 0, keep=2),
        Column("b", "second", 0, keep=1),
        Column("c", "third", 0),
    )
    wide = table(("Heron", 1, 2, 3), columns=columns)
    assert "left out" not in wide.to_text(40)
    assert "left out for want of width: second" in wide.to_text(19).replace("\n", " ")
    narrow = wide.to_text(13).replace("\n", " ")
    assert "left out for want of width: second, first one" in narrow
    assert "third" in narrow


def test_a_table_that_cannot_get_narrower_is_shown_whole():
    assert "Heron" in table(("Heron", 1.0)).to_text(3)


def test_long_texts_wrap_within_their_column():
    column = Column("hammer", "hammer", wrap=14)
    text = table(("a hammer of a long name", 1.0), columns=(column, SET)).to_text(100)
    assert len(body(text)) == 2
    assert max(map(len, body(text))) <= 14 + 1 + 3


# --- alignment -----------------------------------------------------------------------------------


def test_decimal_points_stand_under_each_other():
    text = table(("a", 4.25), ("b", 112.31), ("c", 0.0), ("d", -7)).to_text(100)
    points = {line.rindex(".") for line in body(text)}
    assert len(points) == 1


@pytest.mark.parametrize("name", examples.NAMES)
def test_decimal_points_of_an_example_stand_under_each_other(name):
    result = examples.ranking(name)
    shown = options_table(result.options, Units(result.job.display)).to_text(100)
    spans = [[m.start() for m in re.finditer(r"\.", line)] for line in body(shown)]
    # Stroke, set and energy come first; the window's own points follow.
    assert len({tuple(span[:3]) for span in spans}) == 1


def test_a_lower_bound_has_a_plus_and_stays_a_number_in_a_file():
    reach = Column("reach", "reach", 2)
    bound = table((AtLeast(4.0),), columns=(reach,))
    assert body(bound.to_text(100)) == ["4.00+"]
    assert bound.to_csv() == "reach\n4.0\n"


def test_what_is_absent_is_a_dash_for_people_and_empty_in_a_file():
    absent = table((None, None))
    assert body(absent.to_text(100)) == ["-      -"]
    assert absent.to_csv() == "name,set_mm\n,\n"


# --- text stays text -----------------------------------------------------------------------------

ODD = ["1e5", "=cmd", "007", "nan", "+3", "1,5", "12 %", "True", "-", "<b>x</b>", 'a"b', "Größe"]


@pytest.mark.parametrize("name", ODD)
def test_names_stay_text(name):
    named = table((name, 1.0))
    assert body(named.to_text(100))[0].startswith(name)
    assert list(csv.reader(io.StringIO(named.to_csv())))[1] == [name, "1.0"]
    assert named.to_records() == [{"name": name, "set_mm": 1.0}]


def test_html_escapes_every_text():
    column = Column("a", "<i>header</i>", notes={"<b>x</b>": "<script>"})
    html = table(("<b>x</b>", 1.0), columns=(column, SET)).to_html()
    assert "<b>" not in html
    assert "<i>" not in html
    assert "<script>" not in html
    assert "&lt;b&gt;x&lt;/b&gt;" in html


def test_html_of_no_rows_is_a_table():
    assert "<table>" in table().to_html()


# --- short forms, notes, repeats -----------------------------------------------------------------


def test_a_reduced_stroke_is_marked_for_people_and_told_whole_in_a_file():
    reduced = plans.option(verdict="drives with reduced stroke", governs="stroke range")
    shown = options_table([reduced], Units("metric"))
    text = shown.to_text(100)
    assert body(text)[0].startswith("drives* ")
    assert "* at an earlier stage with less stroke" in text
    assert "range: the stroke is at an end of the hammer's own range" in text
    assert "drives with reduced stroke" in shown.to_csv()
    assert "stroke range" in shown.to_csv()


@pytest.mark.parametrize("governs", ["set", "compression", "tension", "stroke range", "refusal"])
def test_what_governs_takes_one_line(governs):
    shown = options_table([plans.option(governs=governs)], Units("metric"))
    assert len(body(shown.to_text(100))) == 1
    assert governs in shown.to_csv()


def test_a_note_goes_with_its_column():
    column = Column("governs", "governs", keep=1, notes={"range": "range: an end"})
    noted = table(("a name", "range"), columns=(NAME, column))
    assert "range: an end" in noted.to_text(40)
    assert "range: an end" not in noted.to_text(9)
    assert "range: an end" not in table(("a", "set"), columns=(NAME, column)).to_text(40)


def test_a_hammer_is_named_once_for_people_and_in_every_row_of_a_file():
    both = plans.option(plans.plan(), plans.plan())
    schedule = schedule_table([both], Units("metric"))
    assert schedule.to_text(100).count("Curlew") == 1
    assert schedule.to_csv().count("Curlew") == 2


def test_a_hammer_cushion_has_a_column_where_there_is_a_choice():
    from tests.jobs import SOFT_BLOCK

    chosen = plans.option(stack=plans.sheets(4, SOFT_BLOCK))
    assert "soft block" in options_table([chosen], Units("metric")).to_text(100)
    assert "hammer_cushion" not in options_table([plans.option()], Units("metric")).to_csv()


def test_the_fastest_are_ranked_by_a_speed_that_is_shown():
    # 0.5 blows a second of 4.2 mm each.
    shown = options_table([plans.option()], Units("metric"), "time")
    assert "m/min" in shown.to_text(100)
    assert shown.to_records()[0]["speed_m_per_min"] == pytest.approx(0.126)


# --- paragraphs ----------------------------------------------------------------------------------


def test_a_number_and_its_unit_stay_in_one_line():
    text = "a stroke of 0.60 m and a ram of 3150 kg in place of 3000 kg, at 4 mm"
    for width in range(12, 60):
        lines = wrapped(text, width).splitlines()
        assert not any(re.search(r"\d$", line) for line in lines)
        assert " ".join(lines) == text
