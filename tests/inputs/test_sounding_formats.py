"""Cone tests in each format: the numbers by hand from the file, and what the format allows."""

from __future__ import annotations

import io

import numpy as np
import openpyxl
import pytest

from tests.inputs.ground_files import AGS, BRO, CSV, GEF, bro_record, changed, good, read

NAN = np.nan


def holds(values, expected):
    np.testing.assert_allclose(values, expected, rtol=1e-12, atol=0)


# --- GEF ----------------------------------------------------------------------------------------


def test_gef_by_hand(tmp_path):
    sounding = good(tmp_path, GEF)
    assert sounding.name == "B7"
    holds(sounding.depth, [0.5, 0.999, 1.498, 1.997, 2.496])
    holds(sounding.tip, [0.4e6, 0.5e6, 0.6e6, 6e6, 12e6])
    holds(sounding.sleeve, [NAN, 15e3, 16e3, 40e3, NAN])
    assert sounding.area_ratio == 0.8
    assert sounding.predrilled == 0.5
    assert not sounding.corrected
    assert "Depth is corrected for inclination, as the file gives it." in sounding.notes
    assert "Depth zero lies at 3.40 m in height system 00000." in sounding.notes


def test_gef_voids_are_each_columns_own(tmp_path):
    holds(good(tmp_path, GEF).pore_pressure, [NAN, 12e3, 15e3, 20e3, NAN])
    _, problems = read(tmp_path, changed(GEF, ("15.0;1.0;1.498", "-9999.0;1.0;1.498")))
    (problem,) = problems
    assert (problem.line, problem.place) == (25, "column 4 (pore pressure)")
    assert (problem.must, problem.found) == ("must be at least -5 MPa", "-9999.0 kPa")
    assert "voids" in problem.do


def test_gef_deepest_rows_stay_without_sleeve_and_pore_pressure(tmp_path):
    sounding = good(tmp_path, GEF)
    assert sounding.depth[-1] == 2.496
    assert sounding.tip[-1] == 12e6
    assert np.isnan(sounding.sleeve[-1])
    assert np.isnan(sounding.pore_pressure[-1])


@pytest.mark.parametrize(
    ("unit", "factor"), [("kPa", 1e-3), ("MN/m2", 1.0), ("N/mm2", 1.0), ("bar", 0.1)]
)
def test_gef_obeys_the_unit_of_a_column(tmp_path, unit, factor):
    text = changed(GEF, ("2, MPa, qc", f"2, {unit}, qc"))
    sounding = good(tmp_path, text)
    holds(sounding.tip, np.array([0.4e6, 0.5e6, 0.6e6, 6e6, 12e6]) * factor)
    holds(sounding.sleeve, [NAN, 15e3, 16e3, 40e3, NAN])


def test_gef_columns_go_by_quantity_and_not_by_order(tmp_path):
    """Column numbers point into the row; quantity numbers say what stands there."""
    rows = "1.0;0.010;0.5;!\n2.0;0.020;6.0;!\n"
    text = (
        "#GEFID= 1, 1, 0\n#COLUMN= 3\n#COLUMNINFO= 3, MPa, qc, 2\n#COLUMNINFO= 1, m, length, 1\n"
        "#COLUMNINFO= 2, MPa, fs, 3\n#COLUMNSEPARATOR= ;\n#RECORDSEPARATOR= !\n#EOH=\n" + rows
    )
    sounding = good(tmp_path, text)
    holds(sounding.tip, [0.5e6, 6e6])
    holds(sounding.sleeve, [10e3, 20e3])
    assert "Depth is the penetration length, not corrected for inclination." in sounding.notes
    assert "The file has no pore pressure u2." in sounding.notes
    assert sounding.name == "b7"


def test_gef_without_separators_voids_and_positive_depths(tmp_path):
    """As older files are: blanks between numbers, lines as records, depth as a level."""
    text = (
        "#GEFID = 1,0,0\r\n#PROCEDURECODE = CPT-Report,1,0,0\r\n#TESTID = A1   \r\n"
        "#COLUMNINFO =  1,m,length,1\r\n#COLUMNINFO =  2,MPa,cone,2\r\n#COLUMN =  2\r\n"
        "#LASTSCAN =  2\r\n#EOH =\r\n -5.0000E-01  2.0000E-02\r\n -1.0000E+00  2.5000E+01\r\n\x1a"
    )
    sounding = good(tmp_path, text)
    assert sounding.name == "A1"
    holds(sounding.depth, [0.5, 1.0])
    holds(sounding.tip, [2e4, 25e6])
    assert "Depths are negative in the file; taken as measured downwards." in sounding.notes


def test_gef_records_may_share_a_line(tmp_path):
    head, rows = GEF.split("#EOH=\n")
    joined = head + "#EOH=\n" + rows.replace("\n", " ")
    assert len(good(tmp_path, joined).depth) == 5


def test_gef_corrected_depth_with_voids_gives_way_to_length(tmp_path):
    text = changed(
        GEF,
        ("#COLUMNSEPARATOR", "#COLUMNVOID= 6, -1\n#COLUMNSEPARATOR"),
        (";2.496;", ";-1;"),
    )
    sounding = good(tmp_path, text)
    holds(sounding.depth, [0.5, 1.0, 1.5, 2.0, 2.5])
    assert "Depth is the penetration length, not corrected for inclination." in sounding.notes


def test_gef_says_when_there_are_more_rows_than_announced(tmp_path):
    text = changed(GEF, ("LASTSCAN= 5", "LASTSCAN= 3"))
    sounding = good(tmp_path, text)
    assert len(sounding.depth) == 5
    assert "The header announces 3 rows; all 5 are read." in sounding.notes


def test_gef_takes_qt_only_where_qc_can_not_be_corrected(tmp_path):
    text = changed(
        GEF,
        ("5, degrees, inclination, 8", "5, MPa, qt, 13"),
    )
    measured = good(tmp_path, text)
    assert not measured.corrected
    holds(measured.tip, [0.4e6, 0.5e6, 0.6e6, 6e6, 12e6])
    corrected = good(tmp_path, changed(text, ("#MEASUREMENTVAR= 3, 0.80, -, net area ratio\n", "")))
    assert corrected.corrected
    assert corrected.area_ratio is None
    holds(corrected.tip, [1e6] * 5)


# --- AGS 4 --------------------------------------------------------------------------------------


@pytest.mark.parametrize("ends", ["\n", "\r\n"])
def test_ags_by_hand(tmp_path, ends):
    sounding = good(tmp_path, AGS.replace("\n", ends), "B7")
    assert sounding.name == "B7"
    holds(sounding.depth, [0.5, 1.0, 2.0])
    holds(sounding.tip, [0.4e6, 0.5e6, 12e6])
    holds(sounding.sleeve, [NAN, 15e3, NAN])
    holds(sounding.pore_pressure, [NAN, 12e3, NAN])
    assert sounding.area_ratio == 0.8


def test_ags_units_are_each_columns_own(tmp_path):
    """qc in MN/m2 beside fs in kN/m2 is usual; the dictionary since 4.0.3 suggests MPa for all."""
    text = changed(
        AGS, ('"m","MN/m2","kN/m2","kN/m2"', '"ft","MPa","MPa","bar"'), ('"15.000"', '"0.015"')
    )
    sounding = good(tmp_path, text, "B7")
    holds(sounding.depth, [0.1524, 0.3048, 0.6096])
    holds(sounding.sleeve, [NAN, 15e3, NAN])
    holds(sounding.pore_pressure, [NAN, 12e5, NAN])


def test_ags_pushes_at_one_location_are_joined(tmp_path):
    sounding = good(tmp_path, AGS, "B8")
    holds(sounding.depth, [0.5, 1.0, 1.5])
    holds(sounding.tip, [1e6, 3e6, 6e6])
    holds(sounding.sleeve, [8e3, 9e3, NAN])
    assert "Pushes joined: B8/1, B8/2." in sounding.notes
    assert "1 row at the depth of another; their mean is taken." in sounding.notes
    assert any("groundwater level of 1.20 m" in note for note in sounding.notes)
    assert sounding.water is None
    assert len(good(tmp_path, AGS, "B8/2").depth) == 2


def test_ags_without_the_general_group_says_what_is_lost(tmp_path):
    start, end = AGS.index('"GROUP","SCPG"'), AGS.index('"GROUP","SCPT"')
    sounding = good(tmp_path, AGS[:start] + AGS[end:], "B7")
    assert sounding.area_ratio is None
    assert "The group SCPG is missing, so the cone's area ratio is not known." in sounding.notes


def test_ags_faults_in_other_groups_do_not_matter(tmp_path):
    text = changed(AGS, ('"HM","Hollowmere', '"HM,"Hollowmere'))
    assert good(tmp_path, text, "B7").name == "B7"


def test_ags_needs_no_name_where_there_is_one_location(tmp_path):
    lines = [line for line in AGS.splitlines() if not line.startswith('"DATA","B8"')]
    assert good(tmp_path, "\n".join(lines)).name == "B7"


def test_ags_that_ends_above_its_final_depth_says_so(tmp_path):
    sounding = good(tmp_path, changed(AGS, ('"SCP","2.00"', '"SCP","9.00"')), "B7")
    assert "Readings end at 2.00 m, above the stated final depth of 9.00 m." in sounding.notes


# --- BRO-XML ------------------------------------------------------------------------------------


def test_bro_by_hand(tmp_path):
    sounding = good(tmp_path, BRO)
    assert sounding.name == "CPT000000000000"
    holds(sounding.depth, [0.5, 0.999, 1.997, 2.496])
    holds(sounding.tip, [0.4e6, 0.5e6, 6e6, 12e6])
    holds(sounding.sleeve, [NAN, 15e3, 40e3, NAN])
    holds(sounding.pore_pressure, [NAN, 12e3, 20e3, NAN])
    assert sounding.area_ratio == 0.8
    assert sounding.predrilled == 0.5
    assert "Rows were out of depth order and have been sorted." in sounding.notes
    assert "Depth zero lies at 3.400 m NAP." in sounding.notes


def test_bro_goes_by_local_names(tmp_path):
    text = changed(BRO, ("cptcommon:", "c:"), ("xmlns:cptcommon", "xmlns:c"), ("/1.1", "/9.9"))
    holds(good(tmp_path, text).depth, [0.5, 0.999, 1.997, 2.496])


def test_bro_obeys_stated_separators(tmp_path):
    values = BRO[BRO.index("<cptcommon:values>") + 18 : BRO.index("</cptcommon:values>")]
    other = values.replace(",", "|").replace(".", ",").replace(";", "/")
    text = changed(
        BRO,
        (values, other),
        (
            'decimalSeparator="." tokenSeparator="," blockSeparator=";"',
            'decimalSeparator="," tokenSeparator="|" blockSeparator="/"',
        ),
    )
    holds(good(tmp_path, text).tip, [0.4e6, 0.5e6, 6e6, 12e6])


def test_bro_records_in_any_order_are_one_test(tmp_path):
    rows = [bro_record(f"{d}", "-999999", f"{d}", "-999999", "-999999") for d in (9, 1, 8, 2, 7, 3)]
    values = BRO[BRO.index("<cptcommon:values>") + 18 : BRO.index("</cptcommon:values>")]
    sounding = good(tmp_path, changed(BRO, (values, ";".join(rows))))
    holds(sounding.depth, [1, 2, 3, 7, 8, 9])
    holds(sounding.tip, sounding.depth * 1e6)


def test_bro_says_when_the_test_was_withdrawn(tmp_path):
    text = changed(BRO, ("</CPT_O>", "<r><deregistered>ja</deregistered></r></CPT_O>"))
    assert "The registry has withdrawn this test." in good(tmp_path, text).notes


# --- tables -------------------------------------------------------------------------------------


def test_csv_by_hand(tmp_path):
    sounding = good(tmp_path, CSV)
    holds(sounding.depth, [0.5, 1.0, 2.5])
    holds(sounding.tip, [0.4e6, 0.5e6, 12e6])
    holds(sounding.sleeve, [NAN, 15e3, NAN])
    holds(sounding.pore_pressure, [NAN, 12e3, NAN])
    assert (sounding.area_ratio, sounding.predrilled, sounding.water) == (0.8, 0.5, 1.2)


def test_csv_as_a_spreadsheet_saves_it(tmp_path):
    text = "\ufeff" + CSV.replace(",", ";").replace(".", ",")
    holds(good(tmp_path, text).tip, [0.4e6, 0.5e6, 12e6])
    holds(good(tmp_path, CSV.encode("utf-16")).tip, [0.4e6, 0.5e6, 12e6])


def test_csv_with_locations(tmp_path):
    text = "location,depth [ft],cone_resistance [ksf]\nA,1,2\nB,1,4\nA,2,6\nB,2,8\n"
    sounding = good(tmp_path, text, "A")
    holds(sounding.depth, [0.3048, 0.6096])
    kip_per_square_foot = 47880.25898033584  # NIST SP 811, pound-force per square foot, times 1000
    holds(sounding.tip, np.array([2, 6]) * kip_per_square_foot)


def test_workbook(tmp_path):
    book = openpyxl.Workbook()
    for line in CSV.splitlines():
        cells = [float(c) if c[:1].isdigit() else c or None for c in line.split(",")]
        book.active.append(cells)
    stream = io.BytesIO()
    book.save(stream)
    holds(good(tmp_path, stream.getvalue()).tip, [0.4e6, 0.5e6, 12e6])


# --- what is only noted -------------------------------------------------------------------------


def test_readings_above_the_predrilled_depth_are_kept_and_told(tmp_path):
    sounding = good(tmp_path, changed(GEF, ("13, 0.50, m", "13, 1.20, m")))
    assert len(sounding.depth) == 5
    assert "2 readings above the pre-drilled depth of 1.20 m, kept." in sounding.notes


def test_ags_area_ratios_that_differ_between_pushes_are_not_used(tmp_path):
    text = changed(AGS, ('"DATA","B8","2","PC","","0.75"', '"DATA","B8","2","PC","","0.60"'))
    sounding = good(tmp_path, text, "B8")
    assert sounding.area_ratio is None
    assert "Area ratios differ between pushes (0.75, 0.60); none is used." in sounding.notes
    assert good(tmp_path, text, "B8/2").area_ratio == 0.6


def test_bro_from_another_reference_point_and_with_groundwater(tmp_path):
    text = changed(
        BRO,
        (">maaiveld<", ">kade<"),
        ("</CPT_O>", "<groundwaterLevel>1.4</groundwaterLevel></CPT_O>"),
    )
    sounding = good(tmp_path, text)
    assert "Depths are from: kade." in sounding.notes
    assert any("groundwater level of 1.4 m" in note for note in sounding.notes)
    assert sounding.water is None
