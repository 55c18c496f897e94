"""Cone tests that are cut off, damaged, several in one file, or something else altogether."""

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
    only,
    read,
    told,
)

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
            "must be a number with a decimal point and no thousands separator",
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
