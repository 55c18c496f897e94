"""Cone tests that can't be used: each says where, what must hold, what was found, what to do."""

from __future__ import annotations

import re

import pytest

from tests.inputs.ground_files import (
    AGS,
    BRO,
    CSV,
    GEF,
    bad,
    changed,
    good,
    only,
    told,
)

# --- units --------------------------------------------------------------------------------------


def test_unknown_and_missing_units_are_told_together(tmp_path):
    text = changed(GEF, ("2, MPa, qc", "2, mPa, qc"), ("3, MPa, fs", "3, , fs"))
    problems = bad(tmp_path, text)
    assert told(problems) == {
        (4, "column 2 (qc)", "must have a unit of stress, and 'mPa' is none", "mPa"),
        (5, "column 3 (fs)", "must have its unit", "none"),
    }
    assert "MPa" in problems[0].do


def test_a_unit_of_another_dimension_is_refused(tmp_path):
    problem = only(bad(tmp_path, changed(GEF, ("1, m, pen", "1, MPa, pen")), None))
    assert problem.place == "column 1 (penetration length)"
    assert problem.must == "must be a length, and 'MPa' is not a unit of length"


def test_ags_units(tmp_path):
    problem = only(bad(tmp_path, changed(AGS, ('"m","MN/m2"', '"m",""')), "B7"))
    assert (problem.line, problem.place, problem.found) == (24, "SCPT_RES", "none")
    problem = only(bad(tmp_path, changed(AGS, ('"m","MN/m2"', '"m","MPascal"')), "B7"))
    assert (problem.line, problem.place, problem.found) == (24, "SCPT_RES", "MPascal")
    text = "\n".join(
        line for line in AGS.splitlines() if not line.startswith('"UNIT","","","m","MN')
    )
    problem = only(bad(tmp_path, text, "B7"))
    assert (problem.place, problem.must) == ("SCPT", "must have a UNIT row")


def test_csv_without_units(tmp_path):
    problem = only(bad(tmp_path, changed(CSV, ("qc [MPa]", "qc"))))
    assert (problem.line, problem.must) == (1, "must have its unit in brackets")


def test_a_unit_that_makes_no_sense_of_the_values_is_found_out(tmp_path):
    problem = only(bad(tmp_path, changed(CSV, ("fs [kPa]", "fs [MPa]"))))
    assert (problem.line, problem.place, problem.found) == (3, "`fs`", "15 MPa")
    assert problem.must == "must be at most 5 MPa"
    assert problem.do.startswith("Check the unit")


# --- values -------------------------------------------------------------------------------------


def test_texts_in_a_number_column(tmp_path):
    text = changed(GEF, (" 0.50;0.015", " none;0.015"), (" 6.00;", "6,00;"))
    problem = only(bad(tmp_path, text))
    assert (problem.line, problem.place) == (24, "column 2 (qc)")
    assert problem.found == "none (and so in 1 more row)"
    problem = only(bad(tmp_path, changed(AGS, ('"0.500","15', '"x","15')), "B7"))
    assert (problem.line, problem.place, problem.found) == (27, "SCPT_RES", "x")
    problem = only(bad(tmp_path, changed(BRO, (",6.000,", ",6 .0,"))))
    assert (problem.place, problem.found) == ("coneResistance", "6 .0")
    problem = only(bad(tmp_path, changed(CSV, ("2.5,12", "2.5,n/a"))))
    assert (problem.line, problem.place, problem.found) == (4, "`qc`", "n/a")


def test_many_bad_rows_are_told_once(tmp_path):
    rows = "".join(f"{d},x\n" for d in range(1, 500))
    problem = only(bad(tmp_path, "depth [m],qc [MPa]\n" + rows))
    assert (problem.line, problem.found) == (2, "x (and so in 498 more rows)")


@pytest.mark.parametrize(
    ("text", "old", "new", "line"),
    [
        (GEF, " 6.00;", "-6.00;", 26),
        (AGS, '"0.500","15', '"-0.500","15', 27),
        (BRO, ",6.000,", ",-6.000,", None),
        (CSV, "1.0,0.5,", "1.0,-0.5,", 3),
    ],
)
def test_negative_cone_resistance(tmp_path, text, old, new, line):
    location = "B7" if text is AGS else None
    problem = only(bad(tmp_path, changed(text, (old, new)), location))
    assert problem.line == line
    assert problem.must == "must be at least -0.1 MPa"
    assert problem.found.startswith("-")
    assert "zero reading" in problem.do


def test_drift_of_the_zero_reading_is_set_to_zero_and_told(tmp_path):
    text = changed(CSV, ("0.5,0.4,", "0.5,-0.04,"))
    sounding = good(tmp_path, text)
    assert sounding.tip[0] == 0.0
    assert "`qc`: 1 value below zero, down to -0.04 MPa, set to zero." in sounding.notes


def test_voids_that_are_not_marked_are_not_readings(tmp_path):
    text = changed(CSV, ("2.5,12,,", "2.5,12,-9999,-999999"))
    assert told(bad(tmp_path, text)) == {
        (4, "`fs`", "must be at least -0.015 MPa", "-9999 kPa"),
        (4, "`u2`", "must be at least -5 MPa", "-999999 kPa"),
    }


def test_all_voids(tmp_path):
    text = re.sub(r";( [06]|12)\.\d\d;", ";-9999.0;", GEF)
    problem = only(bad(tmp_path, text))
    assert problem.found == "voids only"
    assert problem.must == (
        "must have a cone resistance: a #COLUMNINFO with quantity 2 (cone resistance)"
    )
    problem = only(bad(tmp_path, re.sub(r'(,"[\d.]+")(,"\d+\.000")', r'\1,""', AGS), "B8/2"))
    assert problem.must == "must have a cone resistance: SCPT_RES"


# --- depth --------------------------------------------------------------------------------------


def test_depth_that_does_not_increase(tmp_path):
    problem = only(bad(tmp_path, "depth [m],qc [MPa]\n1,2\n1,3\n1,4\n"))
    assert (problem.must, problem.found) == ("must have readings at two depths or more", "1")


def test_two_tests_in_one_table_are_not_mixed(tmp_path):
    text = "depth [m],qc [MPa]\n1,2\n5,3\n9,4\n1,20\n5,30\n9,40\n"
    problem = only(bad(tmp_path, text))
    assert (problem.line, problem.found) == (5, "1.00 m to 9.00 m again")
    assert problem.do == "Keep the rows of one test."


def test_two_tests_at_one_location_can_be_named(tmp_path):
    text = changed(
        AGS, ('"B8","2","1.50"', '"B8","2","0.10"'), ('"B8","2","1.00"', '"B8","2","0.90"')
    )
    text = changed(text, ('"B8","1","0.50"', '"B8","1","0.05"'))
    problem = only(bad(tmp_path, text, "B8"))
    assert problem.do == "Name one push: B8/1, B8/2."
    assert good(tmp_path, text, "B8/1").tip.max() == 2e6


def test_rows_slightly_out_of_order_are_sorted(tmp_path):
    sounding = good(tmp_path, "depth [m],qc [MPa]\n1,2\n1.3,4\n1.2,3\n2,5\n")
    assert list(sounding.tip) == [2e6, 3e6, 4e6, 5e6]
    assert "Rows were out of depth order and have been sorted." in sounding.notes


def test_rows_from_the_bottom_up_are_sorted(tmp_path):
    sounding = good(tmp_path, "depth [m],qc [MPa]\n3,4\n2,3\n1,2\n")
    assert list(sounding.tip) == [2e6, 3e6, 4e6]


def test_depths_on_both_sides_of_the_surface(tmp_path):
    problem = only(bad(tmp_path, "depth [m],qc [MPa]\n-0.5,2\n0.5,3\n1,4\n"))
    assert (problem.line, problem.place, problem.found) == (2, "`depth`", "-0.5 m")
    assert problem.do == "Take out the rows above the surface."


def test_no_depth_column(tmp_path):
    lines = [line for line in GEF.splitlines() if not re.match(r"#COLUMNINFO= [16]", line)]
    problem = only(bad(tmp_path, "\n".join(lines)))
    assert problem.must == (
        "must have a depth: a #COLUMNINFO with quantity 1 (penetration length) or "
        "a #COLUMNINFO with quantity 11 (corrected depth)"
    )
    problem = only(bad(tmp_path, changed(AGS, ("SCPT_DPTH", "SCPT_DEPTH")), "B7"))
    assert problem.must == "must have a depth: SCPT_DPTH"
    problem = only(bad(tmp_path, changed(CSV, ("depth [m]", "level [m]"))))
    assert problem.must == "must have a column `depth`"


def test_a_row_without_depth(tmp_path):
    problem = only(bad(tmp_path, changed(AGS, ('"B7","1","1.00"', '"B7","1",""')), "B7"))
    assert (problem.line, problem.place, problem.must) == (27, "SCPT_DPTH", "must not be void")


# --- what the file states of the cone -----------------------------------------------------------


def test_an_impossible_area_ratio(tmp_path):
    problem = only(bad(tmp_path, changed(GEF, ("3, 0.80, -", "3, 80, -"))))
    assert (problem.line, problem.place) == (18, "#MEASUREMENTVAR 3")
    assert (problem.must, problem.found) == ("must be above 0 and at most 1", "80")
    problem = only(bad(tmp_path, changed(AGS, ('"PC","","0.80"', '"PC","","no"')), "B7"))
    assert (problem.line, problem.place, problem.found) == (18, "SCPG_CAR", "no")
    problem = only(bad(tmp_path, changed(BRO, ('uom="1">0.80', 'uom="1">1.80'))))
    assert (problem.place, problem.found) == ("coneSurfaceQuotient", "1.80")


def test_predrilled_depth_obeys_its_unit(tmp_path):
    assert good(tmp_path, changed(GEF, ("0.50, m,", "500, mm,"))).predrilled == 0.5
    problem = only(bad(tmp_path, changed(GEF, ("0.50, m,", "0.50, ,"))))
    assert (problem.line, problem.place) == (19, "#MEASUREMENTVAR 13")
    problem = only(bad(tmp_path, changed(BRO, ('uom="m">0.50', 'uom="M">0.50'))))
    assert problem.place == "predrilledDepth"


def test_a_constant_column_that_changes(tmp_path):
    problem = only(bad(tmp_path, changed(CSV, ("1.0,0.5,15,12,,,,", "1.0,0.5,15,12,0.7,,,"))))
    assert (problem.line, problem.place, problem.found) == (3, "`area_ratio`", "0.7")
    assert problem.must == "must be the same in every row; line 2 has 0.8"
