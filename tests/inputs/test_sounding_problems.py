"""Cone tests that can't be used: each says where, what must hold, what was found, what to do."""

from __future__ import annotations

import io
import re
import zipfile

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from matchup.inputs.findings import Findings
from matchup.inputs.sounding import read_sounding
from tests.inputs.ground_files import (
    AGS,
    BOREHOLE,
    BRO,
    CSV,
    GEF,
    bad,
    bro_record,
    changed,
    good,
    read,
)


def only(problems):
    """Return the one problem; all of them in the message if there are more."""
    assert len(problems) == 1, "\n".join(map(str, problems))
    return problems[0]


def told(problems):
    return {(p.line, p.place, p.must, p.found) for p in problems}


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


# --- which test ---------------------------------------------------------------------------------


def test_several_locations_and_none_named(tmp_path):
    problem = only(bad(tmp_path, AGS))
    assert problem.place == "LOCA_ID"
    assert problem.found == "B7, B8"
    assert problem.do == "Name one of them."
    problem = only(bad(tmp_path, "location,depth [m],qc [MPa]\nA,1,2\nA,2,2\nB,1,2\nB,2,2\n"))
    assert problem.found == "A, B"
    twice = BRO.replace("<dispatchDocument>", "<dispatchDocument><d>").replace(
        "</CPT_O>", "</CPT_O></d>"
    )
    body = twice[twice.index("<d>") : twice.index("</d>") + 4]
    both = twice.replace(body, body + body.replace("CPT000000000000", "CPT000000000001"))
    problem = only(bad(tmp_path, both))
    assert problem.found == "CPT000000000000, CPT000000000001"
    assert good(tmp_path, both, "CPT000000000001").name == "CPT000000000001"


@pytest.mark.parametrize("text", [AGS, GEF, BRO, CSV])
def test_a_location_that_is_not_there(tmp_path, text):
    problem = only(bad(tmp_path, text, "B9"))
    assert "B9" in problem.must


def test_a_misspelt_location(tmp_path):
    text = AGS.replace('"B8"', '"Landing 8"')
    assert only(bad(tmp_path, text, "landing8")).do == "Did you mean `Landing 8`?"


# --- files that are something else, or not whole ------------------------------------------------


def test_ags_without_readings_names_the_group(tmp_path):
    problem = only(bad(tmp_path, AGS[: AGS.index('"GROUP","SCPT"')]))
    assert problem.place == "SCPT"
    assert problem.found == "the groups PROJ, LOCA, SCPG"


def test_ags_with_another_group_name(tmp_path):
    problem = only(bad(tmp_path, changed(AGS, ('"GROUP","SCPT"', '"GROUP","STCN"'))))
    assert problem.found == "the groups PROJ, LOCA, SCPG, STCN"


def test_an_older_ags_file(tmp_path):
    problem = only(bad(tmp_path, '"**PROJ"\n"*PROJ_ID","*PROJ_NAME"\n"HM","Hollowmere"\n'))
    assert problem.must == "must be AGS 4"


def test_ags_faults_of_form(tmp_path):
    text = changed(
        AGS,
        ('"DATA","B7","1","1.00"', '"DATUM","B7","1","1.00"'),
        ('"12.000","","",""', '"12.000","",""'),
        ('"DATA","B8","1","0.50"', '"DATA,"B8","1","0.50"'),
    )
    problems = bad(tmp_path, text, "B7")
    assert [p.line for p in problems if "begin with" in p.must] == [27]
    assert [(p.line, p.found) for p in problems if "cells, one" in p.must] == [(28, "6")]
    assert [p.line for p in problems if "quotes" in p.must] == [29]
    twice = AGS + AGS[AGS.index('"GROUP","SCPT"') :]
    assert "must be there once; it began in line 22" in {p.must for p in bad(tmp_path, twice)}


@pytest.mark.parametrize(
    ("old", "new", "must"),
    [
        ('"HEADING","LOCA_ID","SCPG_TESN","SCPT', '"X","LOCA_ID","SCPG_TESN","SCPT', "HEADING row"),
        ('"HEADING","LOCA_ID","SCPG_TESN","SCPT', '"HEADING","L","SCPG_TESN","SCPT', "LOCA_ID"),
    ],
)
def test_ags_without_heading(tmp_path, old, new, must):
    problems = bad(tmp_path, changed(AGS, (old, new)))
    assert any(must in problem.must and problem.place == "SCPT" for problem in problems)


def test_ags_without_rows(tmp_path):
    text = "".join(f"{line}\n" for line in AGS.splitlines()[:25])
    assert only(bad(tmp_path, text)).must == "must have DATA rows"


def test_gef_of_another_kind(tmp_path):
    problem = only(bad(tmp_path, changed(GEF, ("GEF-CPT-Report", "GEF-BORE-Report"))))
    assert (problem.line, problem.found) == (21, "GEF-BORE-Report")
    assert problem.must.startswith("must be a cone penetration test")
    problem = only(bad(tmp_path, changed(GEF, ("#EOH", "#DATAFORMAT= BINARY\n#EOH"))))
    assert (problem.line, problem.place, problem.found) == (22, "#DATAFORMAT", "BINARY")


def test_gef_faults_of_header(tmp_path):
    text = changed(
        GEF,
        ("5, degrees, inclination, 8", "5, kPa, inclination, 6"),
        ("3, MPa, fs, 3", "9, MPa, fs, 3"),
        ("1, m, penetration length, 1", "one, m, penetration length, 1"),
        ("#COLUMNVOID= 2, -9999.0", "#COLUMNVOID= 2, void"),
    )
    assert told(bad(tmp_path, text)) == {
        (
            3,
            "#COLUMNINFO",
            "must have column number, unit, name and quantity number",
            "one, m, penetration length, 1",
        ),
        (5, "column 9 (fs)", "must be one of the 6 columns (#COLUMN)", "9"),
        (
            7,
            "column 5 (inclination)",
            "must be the only one with quantity 6",
            "5, kPa, inclination, 6",
        ),
        (
            9,
            "#COLUMNVOID",
            "must be a finite number with a decimal point and no thousands separator",
            "2, void",
        ),
    }


def test_gef_cut_off(tmp_path):
    """In the header, between rows, within a row, after a number's first digit."""
    assert only(bad(tmp_path, GEF[: GEF.index("#EOH")])).must == (
        "must have a line #EOH= that ends the header"
    )
    problem = only(bad(tmp_path, GEF[: GEF.index("2.50;12")]))
    assert (problem.place, problem.found) == ("#LASTSCAN", "4 rows")
    problem = only(bad(tmp_path, GEF[: GEF.index(";-9999.0;-8888.0;1.0;2.4")]))
    assert (problem.line, problem.must) == (27, "must have 6 values, one for each column")
    problem = only(bad(tmp_path, GEF[: GEF.index("#EOH")] + "#EOH=\n"))
    assert problem.must == "must be followed by rows of readings"


def test_ags_cut_off(tmp_path):
    assert only(bad(tmp_path, AGS[: AGS.index('"12.000"') + 4], "B7")).line == 28


def test_bro_cut_off(tmp_path):
    problem = only(bad(tmp_path, BRO[: BRO.index("0.040")]))
    assert problem.must == "must be complete, well-formed XML"
    assert problem.line
    assert "fetch it again" in problem.do
    short = changed(
        BRO, (bro_record("2.500", "2.496", "12.000", "-999999", "-999999"), "2.5,2.496")
    )
    problem = only(bad(tmp_path, short))
    assert (problem.must, problem.found) == ("must have 25 values", "2 in record 4")
    empty = re.sub("(<cptcommon:values>)[^<]*", r"\1", BRO, count=1)
    assert only(bad(tmp_path, empty)).place == "values"


def test_bro_borehole(tmp_path):
    problem = only(bad(tmp_path, BOREHOLE))
    assert problem.must == "must be a cone penetration test"
    assert problem.found == "a borehole description (BHR_GT_O)"


def test_xml_that_swells_is_refused(tmp_path):
    """Entities within entities would fill the memory; the parser stops them."""
    entities = '<!ENTITY a "aaaaaaaaaa">' + "".join(
        f'<!ENTITY {chr(98 + n)} "{10 * f"&{chr(97 + n)};"}">' for n in range(9)
    )
    problem = only(bad(tmp_path, f"<!DOCTYPE x [{entities}]><x>&j;</x>"))
    assert problem.must == "must be complete, well-formed XML"


def test_other_xml(tmp_path):
    assert only(bad(tmp_path, "<gpx><trk/></gpx>")).found == "<gpx>"


def test_empty_and_binary_and_missing(tmp_path):
    assert only(bad(tmp_path, "")).found == "an empty file"
    assert only(bad(tmp_path, "\r\n \r\n")).found == "an empty file"
    assert only(bad(tmp_path, bytes(range(256)) * 4)).must == "must be a text file"
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w") as archive:
        archive.writestr("a.txt", "a")
    assert bad(tmp_path, stream.getvalue())[0].must == "must be an XLSX workbook"
    findings = Findings()
    assert read_sounding(tmp_path / "none.gef", findings) is None
    assert only(findings.problems).must == "must be a file that exists"
    assert read_sounding(tmp_path, Findings()) is None


def test_the_ending_of_the_name_does_not_matter(tmp_path):
    for name in ("a.csv", "a.xml", "a.ags", "a", "a.GEF"):
        sounding, _ = read(tmp_path, GEF, name)
        assert sounding is not None


# --- anything -----------------------------------------------------------------------------------

FILES = {"gef": GEF, "ags": AGS, "bro": BRO, "csv": CSV}
CHANGES = st.lists(
    st.tuples(
        st.floats(0, 1),
        st.integers(0, 30),
        st.sampled_from(
            [
                "",
                "\n",
                "-",
                "9",
                ";",
                ",",
                '"',
                "!",
                "#",
                "<",
                "\x00",
                "1e999",
                "nan",
                "MPa",
                "é",
                " ",
            ]
        ),
    ),
    min_size=1,
    max_size=4,
)


@settings(
    max_examples=300,
    deadline=2000,
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)
@given(st.sampled_from(sorted(FILES)), CHANGES)
def test_mutilated_files_never_raise(tmp_path, kind, changes):
    """Whatever is cut out or put in: a sounding that holds its own rules, or problems."""
    text = FILES[kind]
    for share, cut, put in changes:
        place = int(share * len(text))
        text = text[:place] + put + text[place + cut :]
    location = "B7" if kind == "ags" else None
    read(tmp_path, text.encode("utf-8", "surrogatepass"), location=location)
