"""[ground] and [target]: what every key does, and how everything that is wrong is told."""

from __future__ import annotations

import math
from contextlib import suppress

import pytest

from matchup.errors import InputError
from matchup.model.hammer import STANDARD_GRAVITY
from matchup.units import FOOT
from tests.inputs.written import CONE, DRIVE, LAYERS, TABLE, line_in, replaced

TO_TABLE = (('layers = "layers.csv"', 'table = "table.csv"'), ('"api 2011"', '"table"'))
TO_CONE = (
    ('layers = "layers.csv"', 'cone_test = "cone.csv"\nwater = "1 m"'),
    ('"api 2011"', '"alm hamre 2001"'),
)
CASES = "{ low = 0.8, best = 1.0, high = 1.2 }"
OPEN_TUBE = (
    ('material = "concrete"\nshape = "square"\nwidth = "400 mm"', 'material = "steel"\n'
     'shape = "pipe"\ndiameter = "610 mm"\nwall = "14 mm"\ntoe = "open"'),
    ('prestress = "6 MPa"\n[pile_cushion]\nmaterials = ["plywood", "oak"]\n'
     "sheets = { from = 4, to = 18 }\n", ""),
    ('"50 MPa"', '"355 MPa"'),
)  # fmt: skip


def with_key(line: str) -> tuple[str, str]:
    """Add a line to [ground]."""
    return ("start =", f"{line}\nstart =")


def stage(job, name):
    return next(stage for stage in job.stages if stage.name == name)


# --- what the keys do ----------------------------------------------------------------------------


def test_stations_run_from_start_to_the_target_case_by_case(drives):
    job = drives.drive(("3 m", "3.4 m"))
    assert [course.case for course in job.courses] == ["low", "best", "high"]
    depths = [job.stages[place].penetration for place in job.courses[1].stages]
    assert depths == pytest.approx([*(3.4 + i for i in range(18)), 21.0])
    assert [stage.name for stage in job.stages[:2]] == ["3.4 m, low", "4.4 m, low"]


def test_the_target_needs_its_set_and_stations_the_refusal_set(drives):
    job = drives.drive()
    needed = [stage.set_needed for stage in job.stages if stage.case == "best"]
    assert needed == pytest.approx([0.25 / 248] * 18 + [4e-3])
    assert any("API RP 2A" in line for line in job.drive.basis)
    own = drives.drive(('set = "4 mm"', 'set = "60 blows/ft"\nrefusal = "2 mm"'))
    needed = [stage.set_needed for stage in own.stages if stage.case == "best"]
    assert needed == pytest.approx([2e-3] * 18 + [FOOT / 60])
    assert not any("API RP 2A" in line for line in own.drive.basis)


def test_factors_of_cases_are_on_shaft_and_toe(drives):
    job = drives.drive()
    best = stage(job, "12.0 m, best")
    for case, factor in (("low", 0.8), ("high", 1.2)):
        other = stage(job, f"12.0 m, {case}")
        assert other.shaft == pytest.approx(factor * best.shaft, rel=1e-12)
        assert other.toe == pytest.approx(factor * best.toe, rel=1e-12)


def test_required_cases_are_all_or_those_named(drives):
    assert all(course.required for course in drives.drive().courses)
    some = drives.drive(with_key('required = ["best", "high"]'))
    assert [course.required for course in some.courses] == [False, True, True]


def test_a_pause_adds_a_station_and_a_restart_with_more_shaft(drives):
    job = drives.drive(with_key('pauses = [{ penetration = "6.3 m", lasts = "24 h" }]'))
    before, after = stage(job, "6.3 m, best"), stage(job, "6.3 m, best, after 1 d")
    assert job.stages.index(after) == job.stages.index(before) + 1
    assert after.after_pause == 86400
    # Clay doubles (Rausche et al. 1996, in FHWA-NHI-16-009 Table 7-16, second-hand), linearly in
    # the logarithm of time from 1 h to 28 d: our choice.
    share = math.log10(24) / math.log10(28 * 24)
    assert after.shaft / before.shaft == pytest.approx(1 + share, rel=1e-9)
    assert after.toe == before.toe


def test_the_law_of_set_up_may_be_moved(drives):
    pause = 'pauses = [{ penetration = "6 m", lasts = "24 h" }]'
    job = drives.drive(with_key(f'{pause}\nsetup_starts = "6 h"\nsetup_ends = "4 d"'))
    gain = stage(job, "6.0 m, best, after 1 d").shaft / stage(job, "6.0 m, best").shaft
    assert gain == pytest.approx(1 + math.log10(4) / math.log10(16), rel=1e-9)
    assert any("from 6 h to 4 d" in line for line in job.drive.basis)


def test_pauses_near_a_station_take_its_place(drives):
    job = drives.drive(with_key('pauses = [{ penetration = "6.004 m", lasts = "2 h" }]'))
    names = [stage.name for stage in job.stages if stage.case == "best"]
    assert names[2:6] == ["5.0 m, best", "6.004 m, best", "6.004 m, best, after 2 h", "7.0 m, best"]


def test_a_loosened_part_keeps_its_share_of_the_shaft_and_all_of_the_toe(drives):
    job = drives.drive()
    half = drives.drive(with_key('loosened = [{ to = "8 m", share = 0.5, how = "jetted" }]'))
    name = "8.0 m, best"
    assert stage(half, name).shaft == pytest.approx(0.5 * stage(job, name).shaft, rel=1e-6)
    assert stage(half, name).toe == stage(job, name).toe
    assert "jetted to 8 m: 0.5 of the shaft resistance left" in half.drive.basis


def test_a_table_of_resistance_is_taken_as_it_stands(drives):
    job = drives.drive(*TO_TABLE, (CASES, '["best"]'))
    assert stage(job, "12.0 m, best").shaft == pytest.approx(400e3)
    assert stage(job, "12.0 m, best").toe == pytest.approx(390e3)


def test_factors_may_stand_for_columns_that_a_table_lacks(drives):
    job = drives.drive(*TO_TABLE)
    assert stage(job, "12.0 m, high").shaft == pytest.approx(480e3)
    both = TABLE.replace("kind", "shaft_high [kN],toe_high [kN],kind")
    both = both.replace("50,driving", "50,0,70,driving").replace("900,", "900,1500,1200,")
    own = drives.drive(*TO_TABLE, table=both)
    assert stage(own, "12.0 m, high").shaft == pytest.approx(1.2 * 600e3)
    assert stage(own, "12.0 m, low").shaft == pytest.approx(0.8 * 400e3)


def test_water_and_unit_weight_of_a_cone_test_set_the_stress(drives):
    job = drives.drive(*TO_CONE, with_key('unit_weight = "20 kN/m3"'))
    deeper = drives.drive(*TO_CONE, with_key('unit_weight = "20 kN/m3"'), ('"1 m"', '"5 m"'))
    # Sand friction and toe follow cone resistance and, weakly, stress.
    low, high = stage(job, "12.0 m, best"), stage(deeper, "12.0 m, best")
    assert high.toe < low.toe  # toe: 0.15 qt (qt/p0')^0.2, Alm and Hamre 2001, second-hand
    water = 1000 * STANDARD_GRAVITY
    ratio = (12 * 20e3 - 7 * water) / (12 * 20e3 - 11 * water)
    assert low.toe / high.toe == pytest.approx(ratio**0.2, rel=1e-3)  # mean over 1.5 widths


def test_water_may_stand_above_ground(drives):
    offshore = drives.drive(layers=LAYERS.replace(",30,1\n", ",30,-4\n"))
    ashore = drives.drive(layers=LAYERS.replace(",30,1\n", ",30,0\n"))
    # Water above the ground loads it and presses in its pores alike.
    assert offshore.stages[5].shaft == pytest.approx(ashore.stages[5].shaft, rel=1e-9)
    drives.drive(*TO_CONE, ('water = "1 m"', 'water = "-12 m"'))


def test_faces_inside_and_plug_of_an_open_tube(drives):
    tube = (*OPEN_TUBE, *TO_CONE)
    both = stage(drives.drive(*tube), "12.0 m, best")
    assert [mode.name for mode in both.modes] == ["coring", "plugged"]
    outer = stage(drives.drive(*tube, with_key('faces = "outer"')), "12.0 m, best")
    inner = (610 - 28) / 610
    # Sand: half on either face against all on the outer one.
    assert both.shaft / outer.shaft == pytest.approx(0.5 * (1 + inner), rel=1e-9)
    half = stage(drives.drive(*tube, with_key("inside = 0.5")), "12.0 m, best")
    assert half.shaft / both.shaft == pytest.approx((1 + 0.5 * inner) / (1 + inner), rel=1e-9)
    plugged = drives.drive(*tube, with_key('plug = { best = "plugged" }'))
    assert stage(plugged, "12.0 m, best").toe == pytest.approx(both.modes[1].toe, rel=1e-12)
    assert "coring or plugged: low the smaller, best plugged, high the larger" in (
        plugged.drive.basis
    )


def test_an_interface_angle_changes_friction_by_its_tangent(drives):
    usual = stage(drives.drive(*TO_CONE), "12.0 m, best")
    rough = stage(drives.drive(*TO_CONE, with_key('interface_angle = "33 deg"')), "12.0 m, best")
    ratio = math.tan(math.radians(33)) / math.tan(math.radians(29))
    assert rough.shaft / usual.shaft == pytest.approx(ratio, rel=1e-9)


def test_a_method_for_the_toe_alone_takes_its_shaft_from_another(drives):
    job = drives.drive(
        *TO_CONE, ('"alm hamre 2001"', '"nen 9997 base"\nshaft_method = "alm hamre 2001"')
    )
    plain = drives.drive(*TO_CONE)
    assert stage(job, "12.0 m, best").shaft == pytest.approx(stage(plain, "12.0 m, best").shaft)
    assert stage(job, "12.0 m, best").toe != stage(plain, "12.0 m, best").toe
    assert any(line.startswith("shaft: Alm and Hamre") for line in job.drive.basis)


def test_one_of_several_tests_in_a_file_is_chosen_by_its_name(drives):
    several = "location,depth [m],cone resistance [MPa],sleeve friction [MPa]\n" + "".join(
        f"{name},{0.1 * row:.1f},{tip},0.05\n"
        for name, tip in (("CPT-1", 5), ("CPT-2", 10))
        for row in range(1, 281)
    )
    soft, hard = (
        drives.drive(*TO_CONE, with_key(f'location = "CPT-{n}"'), cone=several) for n in (1, 2)
    )
    # 0.15 qt (qt/p0')^0.2, the unit weight from the test itself.
    assert 2 < stage(hard, "12.0 m, best").toe / stage(soft, "12.0 m, best").toe < 2**1.25
    assert hard.drive.basis[0] == "from: cone.csv (CPT-2)"
    problem = drives.one(*TO_CONE, cone=several)
    assert "CPT-1" in str(problem)
    assert "CPT-2" in str(problem)


@pytest.mark.parametrize(
    ("line", "capacity", "words"),
    [
        ("safety_factor = 2.0", 1800e3, '900 kN times the safety factor 2'),
        ("resistance_factor = 0.65", 900e3 / 0.65, "900 kN over the resistance factor 0.65"),
    ],
)  # fmt: skip
def test_the_capacity_to_be_proven_follows_from_load_and_factor(drives, line, capacity, words):
    job = drives.drive(('set = "4 mm"', f'set = "4 mm"\nload = "900 kN"\n{line}'))
    assert job.drive.capacity == pytest.approx(capacity)
    assert job.drive.capacity_text == words
    assert drives.drive().drive.capacity is None


def test_a_job_in_us_units_names_its_stations_in_feet(drives):
    job = drives.drive(
        ("[catalog]", 'display = "us"\n[catalog]'),
        ('"3 m"', '"10 ft"'),
        ('"1 m"', '"2.5 ft"'),
        ('"21 m"', '"65 ft"'),
        with_key('pauses = [{ penetration = "41.25 ft", lasts = "14 h" }]'),
    )
    names = [stage.name for stage in job.stages if stage.case == "low"]
    assert names[:2] == ["10.0 ft, low", "12.5 ft, low"]
    assert names[-1] == "65.0 ft, low"
    assert "41.25 ft, low, after 14 h" in names


def test_what_the_resistances_rest_on_is_told_line_by_line(drives):
    basis = drives.drive().drive.basis
    lines = (
        "from: layers.csv",
        "method: api 2011 (API RP 2GEO",
        "kind: static",
        "holds for: clay; medium dense",
        "quakes and damping: ",
        "static method: shaft",
        "cases: low 0.8, best 1, high 1.2 times shaft and toe",
        "refusal set: ",
    )
    for begins in lines:
        assert sum(line.startswith(begins) for line in basis) == 1, begins


# --- keys without effect -------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("line", "why"),
    [
        ('faces = "outer"', "`alm hamre 2001`"),
        ('interface_angle = "20 deg"', "`alm hamre 2001`"),
        ("inside = 0.5", "not open"),
        ('plug = { low = "plugged" }', "not open"),
        ('shaft_method = "direct"', "gives the shaft too"),
        ('water = "1 m"', "the layers state it"),
        ('unit_weight = "18 kN/m3"', "the layers state it"),
        ('setup_ends = "14 d"', "no `pauses`"),
        ('setup_starts = "2 h"', "no `pauses`"),
        ('cone_test = "cone.csv"', "does not use it"),
        ('table = "table.csv"', "does not use it"),
    ],
)
def test_a_key_without_effect_is_noticed(drives, line, why):
    key = line.split(" ", 1)[0]
    (notice,) = [n for n in drives.drive(with_key(line)).notices if key in n]
    assert notice.startswith("job.toml, line ")
    assert "has no effect" in notice
    assert why in notice


def test_cases_that_are_all_the_same_are_noticed(drives):
    same = drives.drive((CASES, '["low", "best", "high"]'))
    assert any("are all the same here: give them factors" in notice for notice in same.notices)
    assert not any("all the same" in notice for notice in drives.drive().notices)


# --- what is wrong -------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("pair", "place", "must", "found", "do"),
    [
        (('"3 m"', '"22 m"'), "ground.start", "at most the target's \"21 m\"", '"22 m"', ""),
        (('"21 m"', '"24.5 m"'), "target.penetration", 'pile\'s length, "24 m"', '"24.5 m"', ""),
        (('"1 m"', '"1 mm"'), "ground.every", "at most 1000 stations", '"1 mm"', ""),
        (('"1 m"', '"0 m"'), "ground.every", "must be > 0", '"0 m"', ""),
        (('"1 m"', "1"), "ground.every", "text with its unit", "1", 'example "1 m"'),
        (('"3 m"', '"3 kN"'), "ground.start", "must be a length", '"3 kN"', "m or ft"),
        (('"api 2011"', '"api 2010"'), "ground.method", "must be one of: api 2011, alm",
         '"api 2010"', "Did you mean `api 2011`?"),
        (with_key('required = ["hihg"]'), "ground.required", "must be cases: low, best, high",
         '"hihg"', "Did you mean `high`?"),
        (with_key("required = []"), "ground.required", "at least one case", "[]", ""),
        (with_key('plug = { lo = "plugged" }'), "ground.plug", "must be cases", '"lo"',
         "Did you mean `low`?"),
        (with_key('plug = { low = "small" }'), "ground.plug.low", "one of: smaller, larger",
         '"small"', "Did you mean `smaller`?"),
        (("0.8", "-0.8"), "ground.cases.low", "must be > 0", "-0.8", ""),
        (("0.8", "0"), "ground.cases.low", "must be > 0", "0", ""),
        (("0.8", '"0.8"'), "ground.cases.low", "must be a number", '"0.8"', ""),
        ((CASES, "[]"), "ground.cases", "at least one case", "[]", ""),
        ((CASES, '["best", "best"]'), "ground.cases", "each case once", '["best", "best"]', ""),
        ((CASES, '["best", ""]'), "ground.cases", "must not be empty", '""', ""),
        ((CASES, "0.8"), "ground.cases", "a list like", "0.8", ""),
        (with_key('pauses = [{ penetration = "22 m", lasts = "1 h" }]'),
         "ground.pauses 1.penetration", "between `start` and the target", '"22 m"', ""),
        (with_key('pauses = [{ penetration = "2 m", lasts = "1 h" }]'),
         "ground.pauses 1.penetration", "between `start` and the target", '"2 m"', ""),
        (with_key('pauses = [{ penetration = "9 m", lasts = "0 h" }]'),
         "ground.pauses 1.lasts", "must be > 0", '"0 h"', ""),
        (with_key('pauses = [{ penetration = "9 m" }]'),
         "ground.pauses 1.lasts", "must be given", "", "lasts ="),
        (with_key('loosened = [{ to = "3 m", share = 1.5 }]'),
         "ground.loosened 1.share", "between 0 and 1", "1.5", ""),
        (with_key('loosened = [{ to = "3 m", share = -0.1 }]'),
         "ground.loosened 1.share", "between 0 and 1", "-0.1", ""),
        (with_key('loosened = [{ to = "-3 m", share = 0.5 }]'),
         "ground.loosened 1.to", "must be > 0", '"-3 m"', ""),
        (with_key('loosened = [{ to = "3 m", share = 0.5, how = "drilled" }]'),
         "ground.loosened 1.how", "pre-drilled, jetted", '"drilled"', "Did you mean `pre-drilled`"),
        (with_key('setup_ends = "30 min"'), "ground.setup_ends", "after `setup_starts`",
         '"30 min"', ""),
        (with_key('setup_starts = "40 d"'), "ground.setup_starts", "after `setup_starts`",
         '"40 d"', ""),
        (with_key('interface_angle = "70 deg"'), "ground.interface_angle", "below 60 degrees",
         '"70 deg"', ""),
        (with_key("inside = 2.0"), "ground.inside", "between 0 and 1", "2.0", ""),
        (with_key('faces = "in"'), "ground.faces", "must be one of: both, outer", '"in"', ""),
        (with_key('location = "CPT-1"'), "ground.location", "there is no `cone_test`",
         '"CPT-1"', ""),
        (("every", "evry"), "ground.evry", "must be a known key", "`evry`", "mean `every`?"),
        (('layers = "layers.csv"\n', ""), "ground.layers", "`cone_test` or `table`", "", ""),
        (('set = "4 mm"', 'set = "4 mm"\nload = "9 kN"'), "target.load", "together with one factor",
         '"9 kN"', "safety_factor = 2.0"),
        (('set = "4 mm"', 'set = "4 mm"\nload = "9 kN"\nsafety_factor = 2\nresistance_factor = 1'),
         "target.load", "together with one factor", '"9 kN"', ""),
        (('set = "4 mm"', 'set = "4 mm"\nsafety_factor = 2.0'), "target.safety_factor",
         "together with a `load`", "2.0", ""),
        (('set = "4 mm"', 'set = "4 mm"\nload = "9 kN"\nsafety_factor = 0.5'),
         "target.safety_factor", "must be >= 1", "0.5", ""),
        (('set = "4 mm"', 'set = "4 mm"\nload = "9 kN"\nresistance_factor = 1.5'),
         "target.resistance_factor", "above 0 and at most 1", "1.5", ""),
        (('set = "4 mm"', 'set = "0 mm"'), "target.set", "must be > 0", '"0 mm"', ""),
        (("[ground]", '[[stages]]\nname = "x"\npenetration = "2 m"\nshaft = "1 kN"\n'
          'toe = "2 kN"\n[ground]'), "stages", "must be left out", "[[stages]]", "Keep either"),
    ],
)  # fmt: skip
def test_one_thing_wrong_is_told_once_with_place_and_remedy(drives, pair, place, must, found, do):
    problem = drives.one(pair)
    assert problem.file == "job.toml"
    assert problem.place == place
    assert must in problem.must
    assert problem.found == found
    assert do in problem.do
    if found and "known key" not in must and "plug = { lo =" not in pair[1]:
        assert problem.line is not None
        assert found in replaced(DRIVE, pair).splitlines()[problem.line - 1]


def test_a_missing_target_is_told_with_what_to_write(drives):
    whole = drives.one(('[target]\npenetration = "21 m"\nset = "4 mm"\n', ""))
    assert (whole.place, whole.must) == ("target", "must be given with a [ground]")
    parts = drives.told(('penetration = "21 m"\nset = "4 mm"\n', ""))
    assert [problem.place for problem in parts] == ["target.penetration", "target.set"]
    assert [problem.do.count('"') for problem in parts] == [2, 2]


def test_a_profile_shorter_than_the_target_is_named_and_not_extrapolated(drives):
    problem = drives.one(layers=LAYERS.replace("25", "18.4"))
    assert problem.place == "target.penetration"
    assert problem.line == line_in(DRIVE, 'penetration = "21 m"')
    assert "layers.csv from 0 m to 18.4 m" in problem.must
    assert problem.found == '"21 m"'
    assert "extrapolated" in problem.do
    us = drives.one(("[catalog]", 'display = "us"\n[catalog]'), layers=LAYERS.replace("25", "18.4"))
    assert "layers.csv from 0 ft to 60.37 ft" in us.must


def test_a_table_or_cone_test_that_ends_or_begins_too_soon_is_named(drives):
    short = drives.one(*TO_TABLE, table=TABLE.replace("30,1000", "20,1000"))
    assert "table.csv from 0 m to 20 m" in short.must
    late = drives.one(*TO_TABLE, table=TABLE.replace("0,0,50", "5,80,50", 1))
    assert late.place == "ground.start"
    assert "table.csv from 5 m to 30 m" in late.must
    cone = drives.one(*TO_CONE, cone="".join(CONE.splitlines(keepends=True)[:180]))
    assert "cone.csv from 0.1 m to 17.9 m" in cone.must


def test_the_toe_method_that_looks_below_the_toe_says_so(drives):
    problem = drives.one(
        *TO_CONE,
        ('"alm hamre 2001"', '"nen 9997 base"\nshaft_method = "alm hamre 2001"'),
        ('length = "24 m"', 'length = "28 m"'),
        ('"21 m"', '"27 m"'),
    )
    assert problem.place == "target.penetration"
    assert "4 diameters below the toe" in problem.must


@pytest.mark.parametrize(
    ("pairs", "file", "line", "place", "do"),
    [
        ([('"api 2011"', '"alm hamre 2001"')], "job.toml", None, "ground.cone_test", "api 2011"),
        ([('"api 2011"', '"table"')], "job.toml", None, "ground.table", "api 2011"),
        ([TO_CONE[0]], "job.toml", None, "ground.layers", "alm hamre 2001"),
        ([TO_CONE[0], TO_CONE[1], ('water = "1 m"\n', "")], "job.toml", None, "ground.water",
         "No method"),
        ([TO_TABLE[0]], "job.toml", None, "ground.layers", "table"),
    ],
)  # fmt: skip
def test_a_method_that_lacks_a_file_names_those_that_would_do(drives, pairs, file, line, place, do):
    problem = drives.one(*pairs)
    assert (problem.file, problem.place) == (file, place)
    assert "must be given" in problem.must
    assert do in problem.do


@pytest.mark.parametrize(
    ("method", "columns"),
    [
        ("stevens 1982", ["`ocr`", "`unit_shaft`"]),
        ("effective stress", ["`beta`", "`beta`"]),
        ("direct", ["`unit_shaft`", "`unit_shaft`"]),
    ],
)
def test_a_method_that_lacks_a_column_names_it_on_every_layers_line(drives, method, columns):
    problems = drives.told(('"api 2011"', f'"{method}"'))
    assert [(p.file, p.line, p.place) for p in problems] == [
        ("layers.csv", line, column) for line, column in zip((2, 3), columns, strict=True)
    ]
    assert all("these would do: api 2011" in problem.do for problem in problems)


def test_layers_of_another_soil_name_the_method_and_the_layer(drives):
    problem = drives.one(layers=LAYERS.replace("dense", "loose"))
    assert (problem.file, problem.line) == ("layers.csv", 3)
    assert "sand, 8.2-25 m" in problem.must


def test_a_static_table_or_a_pause_needs_set_up(drives):
    static = drives.one(*TO_TABLE, table=TABLE.replace("driving", "static"))
    assert (static.file, static.place) == ("table.csv", "`setup`")
    pause = with_key('pauses = [{ penetration = "9 m", lasts = "1 h" }]')
    paused = drives.one(*TO_TABLE, pause)
    assert (paused.file, paused.place) == ("table.csv", "`setup`")
    assert "in a pause the shaft gains" in paused.must


def test_listed_cases_need_columns_in_a_table(drives):
    problems = drives.told(*TO_TABLE, (CASES, '["low", "best", "high"]'))
    assert [problem.found for problem in problems] == ['"low"', '"high"']
    assert all("has columns for: best" in problem.must for problem in problems)
    assert all("factors" in problem.do for problem in problems)


def test_an_open_tube_has_no_nen_base(drives):
    problem = drives.one(
        *OPEN_TUBE,
        *TO_CONE,
        ('"alm hamre 2001"', '"nen 9997 base"\nshaft_method = "alm hamre 2001"'),
    )
    assert problem.place == "pile.toe"
    assert "closed or solid" in problem.must
    assert "alm hamre 2001" in problem.do


def test_a_missing_file_is_told_on_its_key_with_the_nearest_name(drives):
    problem = drives.one(("layers.csv", "layer.csv"))
    assert (problem.file, problem.place) == ("job.toml", "ground.layers")
    assert "`layers.csv`" in problem.do


def test_target_keys_of_a_drive_are_refused_beside_stages_by_hand(desk):
    from tests.inputs.written import JOB

    problems = desk.problems(JOB + '[target]\npenetration = "21 m"\nload = "3 kN"\n')
    assert [problem.place for problem in problems] == ["target.penetration", "target.load"]
    assert all("[[stages]]" in problem.must for problem in problems)


def test_everything_wrong_in_job_and_files_is_told_at_once(drives):
    problems = drives.told(
        ('"3 m"', '"3"'),
        ('"21 m"', '"29 m"'),
        ('"api 2011"', '"api 211"'),
        ("0.8", "-1"),
        ('width = "400 mm"', "width = 400"),
        layers=LAYERS.replace("dense", "denze"),
    )
    assert [problem.place for problem in problems] == [
        "pile.width",
        "ground.method",
        "ground.start",
        "ground.cases.low",
        "target.penetration",
        "`density`",
    ]
    assert [problem.file for problem in problems] == ["job.toml"] * 5 + ["layers.csv"]


KEYS = (
    "layers", "cone_test", "location", "table", "water", "unit_weight", "method", "shaft_method",
    "faces", "interface_angle", "inside", "start", "every", "cases", "required", "plug", "loosened",
    "pauses", "setup_starts", "setup_ends",
)  # fmt: skip
ODD = ("1", "-1.5", "nan", "inf", "true", '""', '"x"', '"0 m"', '"-1 m"', '"1e9 m"', '"1 d"', "[]",
       "{}", "[1]", '["low"]', "[[]]", "[{}]", "{ low = 1 }", '{ low = "x" }', "{ low = {} }",
       '[{ to = 1, share = "x" }]', "2024-01-01", '"layers.csv"', '"."', '"cone.csv"',
       '"table.csv"', '"job.toml"')  # fmt: skip


@pytest.mark.parametrize("key", KEYS)
def test_no_odd_value_of_a_key_ends_in_anything_but_a_job_or_problems(drives, key):
    for value in ODD:
        text = "\n".join(
            line for line in DRIVE.splitlines() if not line.startswith(f"{key} = ")
        ).replace("[ground]", f"[ground]\n{key} = {value}")
        for pairs in ((), TO_CONE, TO_TABLE):
            kept = [pair for pair in pairs if pair[0] in text]
            drives.put("layers.csv", LAYERS)
            drives.put("table.csv", TABLE)
            drives.put("cone.csv", CONE)
            with suppress(InputError):
                drives.load(replaced(text, *kept))


@pytest.mark.parametrize(
    "key", ["penetration", "set", "refusal", "load", "safety_factor", "resistance_factor"]
)
def test_no_odd_value_of_the_target_ends_in_anything_but_a_job_or_problems(drives, key):
    for value in ODD:
        text = "\n".join(line for line in DRIVE.splitlines() if not line.startswith(f"{key} = "))
        drives.put("layers.csv", LAYERS)
        with suppress(InputError):
            drives.load(text.replace("[target]", f"[target]\n{key} = {value}"))
