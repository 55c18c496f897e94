"""Catalogues: every problem is told with its line and what to do; what is odd is noticed."""

from __future__ import annotations

import csv
import io
from pathlib import Path

import openpyxl
import pytest

from matchup.errors import InputError
from matchup.inputs.cushions import COLUMNS as CUSHION_COLUMNS
from matchup.inputs.cushions import read_cushions
from matchup.inputs.findings import Findings
from matchup.inputs.hammers import COLUMNS, read_hammers
from matchup.model.cost import Amount
from tests import pint_units
from tests.inputs.written import CUSHIONS, HAMMERS, JOB, replaced

HEAD = [
    "name",
    "kind",
    "ram_mass [t]",
    "stroke_min [m]",
    "stroke_max [m]",
    "efficiency [-]",
    "helmet_mass [kg]",
]
GOOD = ["A", "drop", "9", "0.2", "1.0", "0.55", "950"]


def write(separator: str, *rows: list[str]) -> str:
    out = io.StringIO()
    csv.writer(out, delimiter=separator, lineterminator="\n").writerows(rows)
    return out.getvalue()


def changed(**cells: str) -> list[str]:
    plain = [cell.split(" ")[0] for cell in HEAD]
    return [cells.get(name, old) for name, old in zip(plain, GOOD, strict=True)]


def headed(**cells: str) -> list[str]:
    return [cells.get(cell.split(" ")[0], cell) for cell in HEAD]


@pytest.fixture
def hammers(tmp_path, monkeypatch):
    """Read a hammer catalogue; return hammers, problems and notices."""
    monkeypatch.chdir(tmp_path)

    def read(text: str | bytes, cushions: str | None = CUSHIONS):
        findings = Findings()
        catalogue = None
        if cushions is not None:
            Path("cushions.csv").write_text(cushions)
            catalogue = read_cushions(Path("cushions.csv"), findings)
        Path("h.csv").write_bytes(text.encode() if isinstance(text, str) else text)
        found = read_hammers(Path("h.csv"), catalogue, findings)
        return found, findings.ordered(), findings.notices

    return read


@pytest.fixture
def cushions(tmp_path, monkeypatch):
    """Read a cushion catalogue; return it, problems and notices."""
    monkeypatch.chdir(tmp_path)

    def read(text: str):
        findings = Findings()
        Path("c.csv").write_text(text)
        return read_cushions(Path("c.csv"), findings), findings.ordered(), findings.notices

    return read


def told(problem) -> tuple[object, ...]:
    return problem.file, problem.line, problem.place, problem.must, problem.found, problem.do


# --- what is read --------------------------------------------------------------------------------


def test_units_of_any_right_dimension_and_weights_are_read(hammers):
    us = write(
        ",",
        [
            "NAME",
            "Kind",
            "ram weight [kip]",
            "Stroke-Min [ft]",
            "stroke_max (in)",
            "efficiency [%]",
            "blow_rate_max [1/min]",
            "rated_energy [ft-kip]",
            "helmet_weight [lb]",
        ],
        ["A", "Drop", "20", "1", "48", "55", "40", "80", "1500"],
    )
    [hammer], problems, notices = hammers(us)
    assert not problems
    assert not notices
    assert hammer.kind == "drop"
    assert hammer.ram_mass == pytest.approx(20 * pint_units.factor("kip", "mass"))
    assert hammer.stroke_min == pytest.approx(0.3048)
    assert hammer.stroke_max == pytest.approx(4 * 0.3048)
    assert hammer.efficiency == pytest.approx(0.55)
    assert hammer.blow_rate_max == pytest.approx(40 / 60)
    assert hammer.rated_energy == pytest.approx(80 * pint_units.factor("ft-kip", "energy"))
    assert hammer.helmet_mass == pytest.approx(1500 * 0.45359237)


@pytest.mark.parametrize("separator", [";", "\t"])
def test_decimal_commas_where_commas_do_not_separate(hammers, separator):
    row = changed(ram_mass="7,5", stroke_max="1,25", efficiency="0,55")
    [hammer], problems, _ = hammers(write(separator, HEAD, row))
    assert not problems
    assert (hammer.ram_mass, hammer.stroke_max, hammer.efficiency) == (7500.0, 1.25, 0.55)


def test_headers_and_names_that_are_broken_into_lines(hammers):
    head = headed(ram_mass="ram\nmass\n[t]")
    [hammer], problems, _ = hammers(write(",", head, changed(name="A\nlong  name")))
    assert not problems
    assert (hammer.name, hammer.ram_mass) == ("A long name", 9000.0)


def test_columns_in_any_order(hammers):
    turned = [list(reversed(row)) for row in (HEAD, GOOD)]
    [hammer], problems, _ = hammers(write(",", *turned))
    assert not problems
    assert (hammer.name, hammer.ram_mass, hammer.helmet_mass) == ("A", 9000.0, 950.0)


def test_a_workbook_is_a_catalogue(hammers, tmp_path):
    book = openpyxl.Workbook()
    book.active.append(HEAD)
    book.active.append(["A", "drop", 9, 0.2, 1, 0.55, 950])
    book.save(tmp_path / "h.xlsx")
    [hammer], problems, _ = hammers((tmp_path / "h.xlsx").read_bytes())
    assert not problems
    assert (hammer.ram_mass, hammer.stroke_max, hammer.efficiency) == (9000.0, 1.0, 0.55)


def test_other_columns_are_kept_aside_with_one_notice(hammers):
    head = [*HEAD, "plant no.", "colour [RAL]", "hammer_id"]
    found, problems, notices = hammers(write(",", head, [*GOOD, "17", "900", "x"]))
    assert not problems
    assert notices == ["h.csv, line 1: kept aside, not used: plant no., colour [RAL], hammer_id"]
    assert found[0].extra == {"plant no.": "17", "colour [RAL]": "900", "hammer_id": "x"}


def test_cells_without_a_header_are_kept_aside(hammers):
    found, problems, notices = hammers(write(",", [*HEAD, ""], [*GOOD, "note"]))
    assert not problems
    assert "column 8 without a name" in notices[0]
    assert found[0].extra == {"column 8 without a name": "note"}


def test_every_column_of_a_hammer_is_seen(hammers):
    known = {spec.name for spec in COLUMNS}
    head = {
        "name": ("name", "A"),
        "kind": ("kind", "air"),
        "ram_mass": ("ram_mass [t]", "9"),
        "stroke_min": ("stroke_min [m]", "0.2"),
        "stroke_max": ("stroke_max [m]", "1"),
        "efficiency": ("efficiency", "0.5"),
        "stroke_step": ("stroke_step [m]", "0.1"),
        "blow_rate_max": ("blow_rate_max [1/s]", "0.5"),
        "lift_speed": ("lift_speed [m/s]", "0.7"),
        "rated_energy": ("rated_energy [kJ]", "88"),
        "helmet_mass": ("helmet_mass [kg]", "950"),
        "hammer_cushion": ("hammer_cushion", "NYLON"),
        "hammer_cushion_thickness": ("hammer_cushion_thickness [mm]", "130"),
        "hammer_cushion_area": ("hammer_cushion_area [m2]", "0.2"),
        "hammer_mass": ("hammer_mass [t]", "12"),
        "rides_on_pile": ("rides_on_pile", "Yes"),
        "available": ("available", "true"),
        "hammer_length": ("hammer_length [m]", "5.5"),
        "head_min": ("head_min [mm]", "200"),
        "head_max": ("head_max [in]", "24"),
        "day_rate": ("day_rate [EUR]", "900"),
        "mobilisation": ("mobilisation [EUR]", "4000"),
        "fuel_use": ("fuel_use [l / h]", "30"),
        "source": ("source", "invented"),
    }
    rest = {"hammer_cushion_stiffness", "hammer_cushion_restitution", "blow_rate_full"}
    rest |= {"energy_min", "energy_min_share", "energy_step"}
    assert set(head) | rest == known
    [hammer], problems, _ = hammers(write(",", *map(list, zip(*head.values(), strict=True))))
    assert not problems
    assert (hammer.name, hammer.kind, hammer.source) == ("A", "air", "invented")
    numbers = (hammer.ram_mass, hammer.stroke_min, hammer.stroke_max, hammer.efficiency)
    assert numbers == (9000, 0.2, 1, 0.5)
    more = (hammer.stroke_step, hammer.blow_rate_max, hammer.lift_speed, hammer.rated_energy)
    assert more == (0.1, 0.5, 0.7, 88e3)
    assert (hammer.helmet_mass, hammer.hammer_mass, hammer.rides_on_pile) == (950, 12000, True)
    assert (hammer.hammer_length, hammer.head_min) == (5.5, 0.2)
    assert hammer.head_max == pytest.approx(0.6096)
    money = (hammer.day_rate, hammer.mobilisation)
    assert money == (Amount(900, "EUR"), Amount(4000, "EUR"))
    assert hammer.fuel_use == Amount(30, "l/h")
    assert hammer.cushion.stiffness == pytest.approx(1300e6 * 0.2 / 0.13)
    assert hammer.cushion.restitution == 0.92
    assert hammer.cushion_text == "130 mm of nylon on 2000 cm2"

    spring = [*HEAD, "hammer_cushion_stiffness [MN/m]", "hammer_cushion_restitution"]
    [hammer], problems, _ = hammers(write(",", spring, [*GOOD, "1500", "0.8"]))
    assert not problems
    assert (hammer.cushion.stiffness, hammer.cushion.restitution) == (1.5e9, 0.8)


def test_every_column_of_a_cushion_is_seen(cushions):
    head = {
        "name": ("name", "oak"),
        "use": ("use", "Both"),
        "modulus": ("modulus [GPa]", "0.4"),
        "restitution": ("restitution", "0.5"),
        "sheet": ("sheet [in]", "1"),
        "worn_modulus": ("worn_modulus [MPa]", "700"),
        "worn_thickness": ("worn_thickness [%]", "80"),
        "worn_restitution": ("worn_restitution", "0.4"),
        "new_for": ("new_for [blows]", "300"),
        "life": ("life", "1500"),
        "price": ("price [EUR]", "24"),
        "source": ("source", "invented"),
    }
    assert set(head) == {spec.name for spec in CUSHION_COLUMNS}
    found, problems, notices = cushions(write(",", *map(list, zip(*head.values(), strict=True))))
    assert not problems
    assert not notices
    [oak] = found.materials
    assert (oak.name, oak.use, oak.source) == ("oak", "both", "invented")
    assert (oak.modulus, oak.restitution, oak.sheet) == pytest.approx((0.4e9, 0.5, 0.0254))
    worn = (oak.worn_modulus, oak.worn_thickness, oak.worn_restitution)
    assert worn == pytest.approx((700e6, 0.8, 0.4))
    assert (oak.new_for, oak.life) == (300, 1500)
    assert oak.price == Amount(24, "EUR")


# --- what is refused -----------------------------------------------------------------------------

DATE = "must be a name; this looks like one that a spreadsheet turned into a date"
POINT = "must be a number with a decimal point where commas separate the cells"
NUMBER = "must be a number with a decimal point and no thousands separator"
SIZE = "must be a number of possible size"
SHARE = "must be above 0 and at most 1"


@pytest.mark.parametrize(
    ("cells", "place", "must", "found", "do"),
    [
        ({"ram_mass": "7,5"}, "`ram_mass` of A", POINT, "7,5", "semicolons"),
        ({"ram_mass": "7.500,5"}, "`ram_mass` of A", NUMBER, "7.500,5", ""),
        ({"ram_mass": "x"}, "`ram_mass` of A", NUMBER, "x", ""),
        ({"ram_mass": "nan"}, "`ram_mass` of A", NUMBER, "nan", ""),
        ({"ram_mass": "inf"}, "`ram_mass` of A", NUMBER, "inf", ""),
        (
            {"ram_mass": "1e999"},
            "`ram_mass` of A",
            "must be a number of possible size",
            "1e999",
            "",
        ),
        ({"ram_mass": ""}, "`ram_mass` of A", "must not be empty", "", ""),
        ({"ram_mass": "0"}, "`ram_mass` of A", "must be > 0", "0 t", ""),
        ({"ram_mass": "-9"}, "`ram_mass` of A", "must be > 0", "-9 t", ""),
        ({"stroke_min": "1.2"}, "`stroke_max` of A", "must be >= `stroke_min`", "1.0 m", ""),
        ({"efficiency": "1.2"}, "`efficiency` of A", SHARE, "1.2", ""),
        ({"efficiency": "55"}, "`efficiency` of A", SHARE, "55", "Write 0.55."),
        ({"efficiency": "0"}, "`efficiency` of A", SHARE, "0", ""),
        (
            {"kind": "hydrualic"},
            "`kind` of A",
            "must be one of: drop, hydraulic, air, double-acting",
            "hydrualic",
            "Did you mean `hydraulic`?",
        ),
        ({"name": ""}, "`name`", "must not be empty", "", ""),
        ({"name": "12-Mar"}, "`name`", DATE, "12-Mar", "Format the column as text"),
        ({"name": "2025-03-12"}, "`name`", DATE, "2025-03-12", "Format"),
        ({"name": "2025-03-12T00:00:00"}, "`name`", DATE, "2025-03-12T00:00:00", "Format"),
        ({"name": "03/12/2025"}, "`name`", DATE, "03/12/2025", "Format"),
        ({"name": "12. Mai"}, "`name`", DATE, "12. Mai", "Format"),
        ({"name": "Dec-19"}, "`name`", DATE, "Dec-19", "Format"),
        (
            {"stroke_max": "01. Mai"},
            "`stroke_max` of A",
            "must be a number; this looks like one that a spreadsheet turned into a date",
            "01. Mai",
            "type the number again",
        ),
    ],
)
def test_a_bad_cell_is_told_with_file_line_place_and_what_was_typed(
    hammers, cells, place, must, found, do
):
    good = ["B", *GOOD[1:]]
    read, [problem], _ = hammers(write(",", HEAD, good, changed(**cells)))
    assert told(problem)[:5] == ("h.csv", 3, place, must, found)
    assert do in problem.do
    assert bool(do) == bool(problem.do)
    assert [hammer.name for hammer in read] == ["B"]


@pytest.mark.parametrize("name", ["Martin 4", "D-19", "10 Ton", "Marten-12", "3.5", "1/2"])
def test_names_that_look_a_little_like_dates_are_names(hammers, name):
    [hammer], problems, _ = hammers(write(",", HEAD, changed(name=name)))
    assert not problems
    assert hammer.name == name


def test_a_row_with_one_bad_cell_still_tells_its_other_faults(hammers):
    row = changed(kind="dropp", ram_mass="x", stroke_min="2", efficiency="3", helmet_mass="-1")
    _, problems, _ = hammers(write(",", HEAD, row))
    assert [problem.place for problem in problems] == [
        "`kind` of A",
        "`ram_mass` of A",
        "`stroke_max` of A",
        "`efficiency` of A",
        "`helmet_mass` of A",
    ]


@pytest.mark.parametrize(
    ("head", "place", "must", "found", "do"),
    [
        (
            headed(ram_mass="ram_mass [ton]"),
            "ram_mass [ton]",
            "must have a unit without doubt, and 'ton' may be several",
            "[ton]",
            "Write t (1000 kg), short ton (2000 lb), long ton (2240 lb) or, as a weight, kip.",
        ),
        (headed(ram_mass="ram_mass"), "ram_mass", "must have its unit in brackets", "", "[kg]"),
        (headed(ram_mass="ram_mass []"), "ram_mass []", "must have its unit in brackets", "", "kg"),
        (
            headed(stroke_max="stroke_max [kg]"),
            "stroke_max [kg]",
            "must be a stroke, and 'kg' is not a unit of stroke",
            "[kg]",
            "m or ft",
        ),
        (
            headed(stroke_max="stroke_max [mtr]"),
            "stroke_max [mtr]",
            "must have a unit of stroke, and 'mtr' is none",
            "[mtr]",
            "Use for example m or ft.",
        ),
        (
            headed(ram_mass="ram_weigth [kN]"),
            "ram_weigth [kN]",
            "must be a known column, or a name unlike them",
            "`ram_weigth`",
            "Did you mean `ram_weight`?",
        ),
        (
            headed(stroke_max="max stroke [m]"),
            "max stroke [m]",
            "must be a known column, or a name unlike them",
            "`max stroke`",
            "Did you mean `stroke_max`?",
        ),
        (
            headed(helmet_mass="helmet [kg]"),
            "helmet [kg]",
            "must be a known column, or a name unlike them",
            "`helmet`",
            "Did you mean `helmet_mass`?",
        ),
        (
            [*HEAD, "helmet_weight [kN]"],
            "helmet_weight [kN]",
            "must be given once, and `helmet_mass [kg]` is there already",
            "",
            "",
        ),
        (headed(kind="sort"), "kind", "must have a column `kind`", "", ""),
        (
            headed(ram_mass="tonnage"),
            "ram_mass",
            "must have a column `ram_mass` (or `ram_weight`)",
            "",
            "",
        ),
    ],
)
def test_a_bad_header_is_told_once_and_not_again_for_every_row(
    hammers, head, place, must, found, do
):
    rows = [[name, *GOOD[1:], *[""] * (len(head) - len(HEAD))] for name in "ABC"]
    _, [problem], _ = hammers(write(",", head, *rows))
    assert told(problem)[:5] == ("h.csv", 1, place, must, found)
    assert do in problem.do


def test_several_problems_come_together_in_file_order(hammers):
    head = headed(helmet_mass="helmet_mass [m]")
    rows = [changed(ram_mass="x"), changed(name="B", stroke_min="9"), changed(name="a")]
    _, problems, _ = hammers(write(",", head, *rows))
    assert [(p.line, p.place) for p in problems] == [
        (1, "helmet_mass [m]"),
        (2, "`ram_mass` of A"),
        (3, "`stroke_max` of B"),
        (4, "`name`"),
    ]
    assert problems[3].must == "must be a name of its own; line 2 has it too"


def test_unquoted_decimal_commas_are_told_once_a_row(hammers):
    shifted = "A,drop,7,5,0.2,1.0,0.55,950\n"
    _, [problem], _ = hammers(",".join(HEAD) + "\n" + shifted)
    assert told(problem)[:5] == ("h.csv", 2, "A", "must have the header's 7 cells", "8 cells")
    assert "needs quotes around the cell; or separate the cells with semicolons" in problem.do
    # The last column is empty, so that what was shifted still has nothing too much in it.
    _, [problem], _ = hammers(",".join(HEAD) + "\nA,drop,7,5,0.2,1.0,0.55,\n")
    assert problem.found == "8 cells"
    # Empty cells at the end left out.
    _, [problem], _ = hammers(",".join([*HEAD, "a", "b"]) + "\nA,drop,7,5,0.2,1,0.55\n")
    assert (problem.must, problem.found) == ("must have the header's 9 cells", "7 cells")


def test_quoted_decimal_commas_are_told_cell_by_cell(hammers):
    row = changed(ram_mass="7,5", stroke_max="1,0")
    _, problems, _ = hammers(write(",", HEAD, row))
    assert [p.must for p in problems] == [POINT, POINT]


def test_a_column_that_mixes_decimal_signs(hammers):
    rows = [changed(name=n, ram_mass=m) for n, m in (("A", "7,5"), ("B", "9"), ("C", "7.5"))]
    _, [problem], _ = hammers(write(";", HEAD, *rows))
    assert told(problem)[1:5] == (
        4,
        "`ram_mass` of C",
        "must write decimals as line 2 does: with a comma, or with a point",
        "7.5",
    )


def test_too_many_cells_between_semicolons(hammers):
    _, [problem], _ = hammers(write(";", HEAD, [*GOOD, "x"]))
    assert problem.do == "Leave out what is too much."


CUSHION = ["hammer_cushion", "hammer_cushion_thickness [mm]", "hammer_cushion_area [cm2]"]
THICK = "`hammer_cushion_thickness`"
SPRING = ["hammer_cushion_stiffness [MN/m]", "hammer_cushion_restitution"]


@pytest.mark.parametrize(
    ("cells", "place", "must", "found", "do"),
    [
        (
            ["nylom", "100", "900", "", ""],
            "`hammer_cushion` of A",
            "must be a name in the cushion catalogue",
            "nylom",
            "Did you mean `nylon`?",
        ),
        (
            ["oak", "100", "900", "", ""],
            "`hammer_cushion` of A",
            "must be a cushion whose `use` is hammer or both",
            "oak, whose use is pile",
            "",
        ),
        (
            ["nylon", "", "900", "", ""],
            "`hammer_cushion_thickness` of A",
            "must be given with `hammer_cushion`",
            "",
            "",
        ),
        (
            ["", "100", "900", "", ""],
            "`hammer_cushion` of A",
            "must be given with `hammer_cushion_thickness`",
            "",
            "",
        ),
        (
            ["nylon", "0", "900", "", ""],
            "`hammer_cushion_thickness` of A",
            "must be > 0",
            "0 mm",
            "",
        ),
        (["nylon", "x", "900", "", ""], "`hammer_cushion_thickness` of A", NUMBER, "x", ""),
        (
            ["nylon", "100", "900", "500", ""],
            "`hammer_cushion` of A",
            "must be given in one way: name, thickness and area, or stiffness and restitution",
            "`hammer_cushion` and `hammer_cushion_stiffness`",
            "",
        ),
        (
            ["", "", "", "500", ""],
            "`hammer_cushion_restitution` of A",
            "must be given with `hammer_cushion_stiffness`",
            "",
            "",
        ),
        (["", "", "", "500", "1.1"], "`hammer_cushion_restitution` of A", SHARE, "1.1", ""),
        (["", "", "", "500", "0"], "`hammer_cushion_restitution` of A", "must be > 0", "0", ""),
        (
            ["", "", "", "-500", "1"],
            "`hammer_cushion_stiffness` of A",
            "must be > 0",
            "-500 MN/m",
            "",
        ),
    ],
)
def test_a_bad_hammer_cushion(hammers, cells, place, must, found, do):
    _, [problem], _ = hammers(write(",", [*HEAD, *CUSHION, *SPRING], [*GOOD, *cells]))
    assert told(problem) == ("h.csv", 2, place, must, found, do)


def test_a_cushion_of_a_broken_row_is_not_told_again_by_every_hammer(hammers):
    broken = replaced(CUSHIONS, ("nylon,hammer,1300", "nylon,hammer,x"))
    _, [problem], _ = hammers(HAMMERS, broken)
    assert told(problem)[:3] == ("cushions.csv", 4, "`modulus` of nylon")


def test_a_cushion_catalogue_that_can_not_be_read_is_told_alone(hammers):
    _, [problem], _ = hammers(HAMMERS, "\n")
    assert (problem.file, problem.found) == ("cushions.csv", "an empty table")


@pytest.mark.parametrize(
    ("cells", "must", "found"),
    [
        (["yes", ""], "must be given for a hammer that rides on the pile", ""),
        (["yes", "8"], "must be >= `ram_mass`, which it contains", "8 t"),
        (["no", "0"], "must be > 0", "0 t"),
    ],
)
def test_a_hammer_that_rides_on_the_pile_needs_its_mass(hammers, cells, must, found):
    head = [*HEAD, "rides_on_pile", "hammer_mass [t]"]
    _, [problem], _ = hammers(write(",", head, [*GOOD, *cells]))
    assert told(problem)[:5] == ("h.csv", 2, "`hammer_mass` of A", must, found)


def test_yes_and_no(hammers):
    head = [*HEAD, "available"]
    rows = [[name, *GOOD[1:], said] for name, said in zip("ABCD", "yN1?", strict=True)]
    _, [problem], notices = hammers(write(",", head, *rows))
    assert told(problem)[1:5] == (5, "`available` of D", "must be yes or no", "?")
    assert not notices
    found, _, _ = hammers(write(",", head, *rows[:3]))
    assert [hammer.available for hammer in found] == [True, False, True]


def test_kinds_that_are_not_modelled_are_left_out_with_a_notice(hammers):
    rows = [[name, kind, *[""] * 5] for name, kind in (("D", "Diesel"), ("V", "vibratory"))]
    found, problems, notices = hammers(write(",", HEAD, *rows, GOOD))
    assert not problems
    assert [hammer.name for hammer in found] == ["A"]
    assert notices == [
        "h.csv, line 2: D left out; diesel hammers can't be computed yet",
        "h.csv, line 3: V left out; vibratory hammers can't be computed yet",
    ]


def test_a_catalogue_of_nothing_but_such_kinds_says_which_were_left_out_and_why(hammers):
    rows = [["D", "diesel", *[""] * 5], ["V", "vibratory", *[""] * 5]]
    found, [problem], _ = hammers(write(",", HEAD, *rows))
    assert not found
    assert problem.must == "must hold a hammer that can be used"
    assert problem.found == (
        "none: D (diesel hammers can't be computed yet); "
        "V (vibratory hammers can't be computed yet)"
    )


@pytest.mark.parametrize(
    ("cells", "place", "must", "found", "do"),
    [
        (["x", "pile", "-5", "0.5", ""], "`modulus` of x", "must be > 0", "-5 MPa", ""),
        (["x", "pile", "5e6", "1.5", ""], "`restitution` of x", SHARE, "1.5", ""),
        (["x", "pile", "300", "50", ""], "`restitution` of x", SHARE, "50", "Write 0.5."),
        (["x", "pile", "300", "0", ""], "`restitution` of x", SHARE, "0", ""),
        (["x", "pile", "300", "0.5", "0"], "`sheet` of x", "must be > 0", "0 mm", ""),
        (
            ["x", "plie", "300", "0.5", ""],
            "`use` of x",
            "must be one of: hammer, pile, both",
            "plie",
            "Did you mean `pile`?",
        ),
        (["x", "", "300", "0.5", ""], "`use` of x", "must not be empty", "", ""),
        (["OAK", "pile", "300", "0.5", ""], "`name`", "must be a name of its own", "OAK", ""),
    ],
)
def test_a_bad_cushion(cushions, cells, place, must, found, do):
    catalogue, [problem], _ = cushions(CUSHIONS + ",".join(cells) + "\n")
    assert told(problem)[:3] == ("c.csv", 5, place)
    assert problem.must.startswith(must)
    assert (problem.found, problem.do) == (found, do)
    assert len(catalogue.materials) == 3
    assert catalogue.is_broken(cells[0])


def test_a_torn_row_of_a_cushion_is_told_once_and_its_name_is_known(cushions):
    catalogue, [problem], _ = cushions(replaced(CUSHIONS, ("414", "4,14")))
    assert told(problem)[1:5] == (3, "oak", "must have the header's 5 cells", "6 cells")
    assert catalogue.is_broken("Oak")
    assert catalogue.find("oak") is None


def test_the_life_of_a_cushion_is_longer_than_it_is_new(cushions):
    text = "name,use,modulus [MPa],restitution,new_for,life\noak,pile,400,0.5,300,200\n"
    _, [problem], _ = cushions(text)
    assert told(problem)[2:5] == ("`life` of oak", "must be >= `new_for`", "200")


# --- what is noticed -----------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("name", "typed", "said"),
    [
        ("ram_mass", "900", "900 t, is unusual; mostly 50 kg to 300000 kg"),
        ("ram_mass", "0.04", "0.04 t, is unusual"),
        ("stroke_max", "60", "60 m, is unusual; mostly 0.1 m to 6 m"),
        ("efficiency", "0.055", "0.055, is unusual; mostly 0.2 to 1"),
        ("helmet_mass", "0.95", "0.95 kg, is unusual"),
    ],
)
def test_values_of_odd_magnitude_are_noticed(hammers, name, typed, said):
    [_], problems, [notice] = hammers(write(",", HEAD, changed(**{name: typed})))
    assert not problems
    assert notice.startswith(f"h.csv, line 2: `{name}` of A, {said}")
    assert notice.endswith("check number and unit")


@pytest.mark.parametrize(
    ("energy", "noticed"),
    [("10", True), ("18", False), ("88", False), ("114", False), ("120", True)],
)
def test_rated_energy_far_from_weight_times_stroke_is_noticed(hammers, energy, noticed):
    head = [*HEAD, "rated_energy [kJ]"]  # 9 t over 1 m: 88.3 kJ
    _, problems, notices = hammers(write(",", head, [*GOOD, energy]))
    assert not problems
    assert bool(notices) == noticed
    assert all("times ram weight times longest stroke" in notice for notice in notices)


def test_a_cushion_modulus_of_odd_magnitude_is_noticed(cushions):
    _, problems, [notice] = cushions(replaced(CUSHIONS, ("207", "0.207")))
    assert not problems
    assert notice.startswith("c.csv, line 2: `modulus` of plywood, 0.207 MPa, is unusual")


def test_the_catalogues_that_come_along_are_sound_and_usual():
    folder = Path(__file__).parents[2] / "catalogs_demo"
    findings = Findings()
    catalogue = read_cushions(folder / "cushions.csv", findings)
    for name, count in (("hammers.csv", 19), ("hammers_us.csv", 14)):
        assert len(read_hammers(folder / name, catalogue, findings)) == count
    assert not findings.problems
    assert not findings.notices


def test_problems_of_all_files_come_in_one_error(desk):
    with pytest.raises(InputError) as caught:
        desk.load(
            hammers=replaced(HAMMERS, ("0.85", "85")),
            cushions=replaced(CUSHIONS, ("207", "x")),
            job=replaced(JOB, ('"24 m"', '"24"')),
        )
    assert [p.file for p in caught.value.problems] == ["job.toml", "cushions.csv", "hammers.csv"]


# --- hammers that are set by energy --------------------------------------------------------------

BY_ENERGY = {
    "name": "name",
    "kind": "kind",
    "ram_mass": "ram_mass [t]",
    "efficiency": "efficiency",
    "rated_energy": "rated_energy [kJ]",
    "energy_min": "energy_min [kJ]",
    "energy_min_share": "energy_min_share",
    "energy_step": "energy_step [kJ]",
    "blow_rate_max": "blow_rate_max [1/min]",
    "blow_rate_full": "blow_rate_full [1/min]",
}
DOUBLE = {"name": "D", "kind": "Double Acting", "ram_mass": "2", "efficiency": "0.8"}
GRAVITY = 9.80665


def energy_rows(*rows: dict[str, str], **columns: str) -> bytes:
    head = BY_ENERGY | columns
    return write(",", list(head.values()), *([row.get(key, "") for key in head] for row in rows))


def test_an_energy_is_a_setting_with_an_equivalent_stroke(hammers):
    row = DOUBLE | {"rated_energy": "40", "energy_min": "10", "energy_step": "5"}
    [hammer], problems, _ = hammers(energy_rows(row))
    assert not problems
    assert (hammer.kind, hammer.set_by_energy) == ("double-acting", True)
    weight = 2000 * GRAVITY
    strokes = (hammer.stroke_min, hammer.stroke_max, hammer.stroke_step)
    assert strokes == pytest.approx((10e3 / weight, 40e3 / weight, 5e3 / weight), rel=1e-12)
    assert hammer.blow_energy(hammer.stroke_max) == pytest.approx(40e3, rel=1e-12)


def test_the_least_energy_may_be_a_share_and_is_the_rated_one_where_nothing_is_said(hammers):
    rows = [
        DOUBLE | {"rated_energy": "40", "energy_min_share": "0.25"},
        DOUBLE | {"name": "E", "rated_energy": "40"},
    ]
    found, problems, _ = hammers(energy_rows(*rows))
    assert not problems
    least = [hammer.blow_energy(hammer.stroke_min) for hammer in found]
    assert least == pytest.approx([10e3, 40e3], rel=1e-12)


def test_a_hydraulic_hammer_is_set_by_what_its_row_gives(hammers):
    columns = {"stroke_min": "stroke_min [m]", "stroke_max": "stroke_max [m]"}
    hydraulic = DOUBLE | {"kind": "hydraulic", "rated_energy": "40"}
    rows = [
        hydraulic | {"energy_min": "10"},
        hydraulic | {"name": "E", "stroke_min": "0.2", "stroke_max": "1.2"},
    ]
    found, problems, _ = hammers(energy_rows(*rows, **columns))
    assert not problems
    assert [hammer.set_by_energy for hammer in found] == [True, False]


@pytest.mark.parametrize(
    ("cells", "place", "must"),
    [
        ({"rated_energy": ""}, "`rated_energy", "must be given for a hammer that is set by its en"),
        ({"energy_min": "50"}, "`energy_min` of D", "must be above 0 and at most the rated energy"),
        ({"energy_min": "0"}, "`energy_min` of D", "must be above 0 and at most the rated energy"),
        ({"energy_min_share": "1.5"}, "`energy_min_share` of D", "must be above 0 and at most 1"),
        ({"energy_step": "-1"}, "`energy_step` of D", "must be > 0"),
        (
            {"energy_min": "10", "energy_min_share": "0.5"},
            "`energy_min` of D",
            "must be left out where `energy_min_share` is given",
        ),
        ({"blow_rate_full": "40"}, "`blow_rate_full` of D", "must be given together with `blow_r"),
        (
            {"blow_rate_full": "60", "blow_rate_max": "50"},
            "`blow_rate_full` of D",
            "must be at most `blow_rate_max`",
        ),
        ({"kind": "drop"}, "stroke_min", "must have a column `stroke_min`"),
    ],
)
def test_what_is_wrong_with_an_energy_is_told_once(hammers, cells, place, must):
    read, problems, _ = hammers(energy_rows(DOUBLE | {"rated_energy": "40"} | cells))
    assert not read
    assert problems[0].place.startswith(place)
    assert problems[0].must.startswith(must)
    assert len(problems) == (2 if "kind" in cells else 1)


def test_a_hammer_has_either_strokes_or_energies(hammers):
    columns = {"stroke_min": "stroke_min [m]", "stroke_max": "stroke_max [m]"}
    both = {"stroke_min": "0.2", "stroke_max": "1.2", "energy_min": "10"}
    rows = [
        DOUBLE | {"rated_energy": "40"} | both,
        DOUBLE | {"name": "H", "kind": "hydraulic", "rated_energy": "40"} | both,
    ]
    read, problems, _ = hammers(energy_rows(*rows, **columns))
    assert not read
    assert [(p.line, p.place) for p in problems] == [
        (2, "`stroke_min` of D"),
        (2, "`stroke_max` of D"),
        (3, "`energy_min` of H"),
    ]
