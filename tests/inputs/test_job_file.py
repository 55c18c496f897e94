"""Job files: every problem is told with line, place, what was typed and what to do; all at once."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

from matchup.errors import InputError
from matchup.inputs import load_job
from matchup.model.stage import SHAFT_DAMPING, TOE_QUAKE_SHARE
from tests.inputs.job_faults import FAULTS, IN_CATALOGUE, LAST, RULE, SHEETS, WHERE
from tests.inputs.written import CUSHIONS, HAMMERS, JOB, line_in, replaced


def told(problem) -> tuple[object, ...]:
    return problem.file, problem.line, problem.place, problem.must, problem.found, problem.do


def test_a_sound_job(desk):
    job = desk.load()
    assert job.file == "job.toml"
    assert job.notices == ()
    assert [hammer.name for hammer in job.hammers] == ["Curlew", "Raven"]
    assert job.pile.section.width == 0.4
    assert job.cushions.sheets == tuple(range(4, 19))
    assert [stage.name for stage in job.stages] == ["soft clay", "final set"]


@pytest.mark.parametrize(("old", "new", "place", "must", "found", "do"), FAULTS)
def test_one_thing_wrong_is_one_problem(desk, old, new, place, must, found, do):
    problem = desk.problem(replaced(JOB, (old, new)))
    assert told(problem)[0] == "job.toml"
    assert told(problem)[2:] == (place, must, found, do)
    if found and found != "none" and "whose use" not in found:
        line = replaced(JOB, (old, new)).splitlines()[problem.line - 1]
        assert found.strip("`") in line


STAGES = JOB[JOB.index("[[stages]]") : JOB.index("[limits]")]


@pytest.mark.parametrize(
    ("stages", "line", "must", "found", "do"),
    [
        (
            '[stages]\nname = "x"\n',
            15,
            "must be a list",
            "[stages]",
            "Write [[stages]] with double brackets, once for each stage.",
        ),
        (
            "",
            None,
            "must be given",
            "",
            "Write [[stages]], and its keys below, or a [ground] that they follow from.",
        ),
    ],
)
def test_stages_that_are_no_list(desk, stages, line, must, found, do):
    problem = desk.problem(replaced(JOB, (STAGES, stages)))
    assert told(problem)[1:] == (line, "stages", must, found, do)


def test_no_stage_at_all(desk):
    problem = desk.problem("stages = []\n" + replaced(JOB, (STAGES, "")))
    assert told(problem)[1:5] == (1, "stages", "must hold at least one stage", "[]")
    problem = desk.problem("stages = [3]\n" + replaced(JOB, (STAGES, "")))
    assert told(problem)[1:5] == (1, "stages 1", "must be a table of keys", "3")


def test_every_missing_table_is_told(desk):
    problems = desk.problems("")
    assert [p.must for p in problems] == ["must hold a job"]
    assert "matchup new" in problems[0].do
    problems = desk.problems("display = 'us'")
    assert [p.place for p in problems] == ["title", "catalog", "pile", "limits", "stages"]
    assert {p.must for p in problems} == {"must be given"}


def test_missing_keys_say_how_they_are_written(desk):
    problems = desk.problems(replaced(JOB, ('material = "concrete"\n', ""), ('"24 m"', "3")))
    assert [(p.line, p.place) for p in problems] == [(5, "pile.material"), (8, "pile.length")]
    assert problems[0].do == "One of: concrete, steel, timber."


@pytest.mark.parametrize("shape", ["pipe", "h", "other", "round"])
def test_the_keys_of_a_shape(desk, shape):
    needed = {
        "pipe": ["diameter", "wall", "toe"],
        "h": ["area", "depth"],
        "other": ["area", "perimeter", "toe_area"],
        "round": ["diameter"],
    }[shape]
    problems = desk.problems(replaced(JOB, ('"square"', f'"{shape}"')))
    missing = [p.place.split(".")[1] for p in problems if p.must.startswith("must be given for")]
    head = ["area"] if shape != "round" else []  # of the pile cushion
    assert sorted(missing) == sorted(needed + head)
    assert all(p.do for p in problems if "given" in p.must)


def test_a_wall_thicker_than_the_tube(desk):
    pipe = 'diameter = "400 mm"\nwall = "300 mm"\ntoe = "open"'
    text = replaced(
        JOB,
        ('"square"', '"pipe"'),
        ('width = "400 mm"', pipe),
        (SHEETS, SHEETS + '\narea = "900 cm2"'),
    )
    problem = desk.problem(text)
    assert told(problem)[1:5] == (
        line_in(text, "wall"),
        "pile.wall",
        "must be at most half the diameter",
        '"300 mm"',
    )


@pytest.mark.parametrize(
    ("text", "line", "place", "found", "do"),
    [
        ("width = 400 mm", 8, "column 13", "width = 400 mm", "A value with its unit is a text"),
        ("width = 0,4", 8, "column 10", "width = 0,4", "Write a decimal point"),
        ("width = big", 8, "column 9", "width = big", "A text needs quotes"),
        ("width = \u201c400 mm\u201d", 8, "column 9", "width = \u201c400 mm\u201d", "straight"),
        ('width = "400 mm', 8, "column 16", 'width = "400 mm', "A quote is missing."),
        ("width =", 8, "column 8", "width =", "A value is missing behind the equals sign."),
        ("width: 4", 8, "column 6", "width: 4", "Write an equals sign between key and value."),
        ("width = True", 8, "column 9", "width = True", "Write true or false."),
        ('shape = "pipe"', 8, "column 15", 'shape = "pipe"', "may be there once"),
        ("[pile]", 8, "column 6", "[pile]", "several stages are [[stages]] each"),
        (r'file = "a\b\hammers.csv"', 8, "column 14", r'file = "a\b\hammers.csv"', 'Write "/"'),
    ],
)
def test_syntax_errors_name_line_and_column_and_what_helps(desk, text, line, place, found, do):
    problem = desk.problem(replaced(JOB, ('width = "400 mm"', text)))
    assert told(problem)[:3] == ("job.toml", line, place)
    assert problem.must.startswith("must be valid TOML (")
    assert problem.found == found
    assert do in problem.do


def test_a_syntax_error_at_the_end(desk):
    problem = desk.problem(JOB + "x = [1,\n")
    assert (problem.line, problem.place) == (30, "the end")


@pytest.mark.parametrize(
    "text", ["x = 2025-13-45T99:99:99", "x = " + "[" * 3000 + "]" * 3000, "x = " + "9" * 5000]
)
def test_values_that_there_are_none_of(desk, text):
    problem = desk.problem(text + "\n" + JOB)
    assert problem.must.startswith(("must be valid TOML", "must be a known key"))


@pytest.mark.parametrize(
    ("data", "must", "found"),
    [
        (bytes(range(256)), "must be a text file", "binary data"),
        (b"%PDF-1.4\n", "must be a text file", "a PDF file"),
        (b" \n\t\n", "must hold a job", "an empty file"),
    ],
)
def test_files_that_are_no_job(desk, data, must, found):
    problem = desk.problem(data)
    assert told(problem)[:5] == ("job.toml", None, "", must, found)


def test_files_that_can_not_be_had(desk):
    for path, must, found in (
        ("jbo.toml", "must be a file that exists", ""),
        (".", "must be a file", "a folder"),
    ):
        desk.put("job.toml", JOB)
        with pytest.raises(InputError) as caught:
            load_job(path)
        [problem] = caught.value.problems
        assert told(problem)[:5] == (path, None, "", must, found)
    assert "but got no" not in str(problem)


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "cp1252"])
@pytest.mark.parametrize("end", ["\n", "\r\n"])
def test_encodings_and_line_ends(desk, encoding, end):
    text = replaced(JOB, ("Hollowmere landing", "Hollowmere länding"), (WHERE, '"24"'))
    problem = desk.problem(text.replace("\n", end).encode(encoding))
    assert told(problem)[1:3] == (line_in(text, '"24"'), "pile.length")


def test_separators_of_lines_that_are_none_to_toml_keep_the_line_numbers(desk):
    text = replaced(JOB, ("[pile]", "# a\u2028b\x85d\n[pile]"), (WHERE, '"24"'))
    assert desk.problem(text).line == text[: text.index('"24"')].count("\n") + 1


# --- all at once ---------------------------------------------------------------------------------


def test_every_problem_of_every_file_comes_at_once_and_in_file_order(desk):
    text = replaced(
        JOB,
        ("[pile]", "[pile]\ncolour = 'red'"),
        ('"400 mm"', "400"),
        ('"6 MPa"', '"60 MPa"'),
        ('"oak"', '"aok"'),
        ("from = 4, to = 18", "from = 18, to = 4"),
        ('"500 kN"', '"-500 kN"'),
        ('"21 m"', '"25 m"'),
        ('"triangular"', '"trianguler"'),
        (RULE, 'rule = "ashto"\n[search]\nreserve = 2'),
    )
    problems = desk.problems(
        text,
        replaced(HAMMERS, ("0.85", "85"), ("drop", "dropp")),
        replaced(CUSHIONS, ("414", "-414")),
    )
    assert [(p.file, p.line, p.place) for p in problems] == [
        ("job.toml", 6, "pile.colour"),
        ("job.toml", 9, "pile.width"),
        ("job.toml", 12, "pile.prestress"),
        ("job.toml", 14, "pile_cushion.materials 2"),
        ("job.toml", 15, "pile_cushion.sheets"),
        ("job.toml", 19, 'stages 1 ("soft clay").shaft'),
        ("job.toml", 23, f"{LAST}.penetration"),
        ("job.toml", 26, f"{LAST}.shaft_shape"),
        ("job.toml", 30, "limits.rule"),
        ("job.toml", 32, "search.reserve"),
        ("cushions.csv", 3, "`modulus` of oak"),
        ("hammers.csv", 2, "`efficiency` of Curlew"),
        ("hammers.csv", 3, "`kind` of Raven"),
    ]


def test_an_unreadable_value_hides_nothing_that_others_say_together(desk):
    text = replaced(JOB, (WHERE, '"24 kg"'), ('"square"', '"sqare"'), ('"6 MPa"', '"60 MPa"'))
    assert [p.place for p in desk.problems(text)] == [
        "pile.shape",
        "pile.length",
        "pile.prestress",
    ]
    text = replaced(
        JOB,
        ('"concrete"', '"stone"'),
        (RULE, 'compression = 0.5\ncompression_stress = "3 MPa"'),
    )
    assert [p.place for p in desk.problems(text)] == ["pile.material"]
    text = replaced(
        JOB, ('"400 mm"', '"0 mm"'), (RULE, RULE + '\ntension = 0.5\ntension_stress = "3 MPa"')
    )
    assert [p.place for p in desk.problems(text)] == ["pile.width", "limits.tension"]


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ('"21 m"', '"-21 m"'),
        ('"50 MPa"', '"50"'),
        ('"400 mm"', '"0 mm"'),
        (WHERE, "24"),
        ('"concrete"', '"stone"'),
        ('"square"', '"star"'),
        (RULE, "rule = true"),
        (SHEETS, "sheets = 4.5"),
        ('hammers = "hammers.csv"', "hammers = 4"),
        ('cushions = "cushions.csv"', "cushions = 4"),
        ('"plywood", "oak"', "3"),
    ],
)
def test_what_follows_from_an_unreadable_value_is_not_told(desk, old, new):
    desk.problem(replaced(JOB, (old, new)))


def test_the_cushion_catalogue_is_asked_for_once_with_all_other_problems(desk):
    without = ('cushions = "cushions.csv"\n', "")
    hammer_cushion = '[hammer_cushion]\nmaterials = ["nylon"]\nthickness = "9 cm"\narea = "9 kg"\n'
    problems = desk.problems(replaced(JOB, without, ("[limits]", hammer_cushion + "[limits]")))
    assert [(p.line, p.place) for p in problems] == [
        (2, "catalog.cushions"),
        (
            line_in(replaced(JOB, without, ("[limits]", hammer_cushion)), "9 kg"),
            "hammer_cushion.area",
        ),
    ]
    assert problems[0].must == (
        "must be given for [pile_cushion] and [hammer_cushion] and the hammer cushions of "
        "Curlew, Raven"
    )
    assert problems[0].do == 'For example `cushions = "cushions.csv"`.'


def test_hammers_without_a_helmet_are_named(desk):
    problem = desk.problem(hammers=replaced(HAMMERS, (",700,", ",,"), (",950,", ",,")))
    assert told(problem)[2:] == (
        "helmet.mass",
        "must be given: the catalogue has no helmet for Curlew, Raven",
        "",
        'Write [helmet] and below it, for example, `mass = "900 kg"`.',
    )


def test_catalogues_that_can_not_be_had(desk):
    problems = desk.problems(
        replaced(JOB, ('"hammers.csv"', '"x/../hamers.csv"'), ('"cushions.csv"', '""'))
    )
    assert [told(p) for p in problems] == [
        (
            "job.toml",
            3,
            "catalog.hammers",
            "must be a file that exists",
            '"x/../hamers.csv"',
            "Its folder does not exist either.",
        ),
        ("job.toml", 4, "catalog.cushions", "must be a file", '"", a folder', ""),
    ]
    problem = desk.problem(replaced(JOB, ('"hammers.csv"', '"hamers.csv"')))
    assert problem.do == "Did you mean `hammers.csv`?"
    problem = desk.problem(replaced(JOB, ('"hammers.csv"', r'"a\u0000b"')))
    assert (problem.place, problem.found) == ("catalog.hammers", r'"a\u0000b"')


def test_the_same_problems_as_json(desk):
    text = replaced(JOB, (WHERE, '"24"'), ('"6 MPa"', '"60 MPa"'))
    problems = desk.problems(text)
    run = subprocess.run(
        [sys.executable, "-m", "matchup", "rank", "job.toml", "--json"],
        capture_output=True,
        text=True,
        env={"PYTHONPATH": str(Path(__file__).parents[2]), "PATH": "/usr/bin:/bin"},
    )
    assert run.returncode == 1
    assert json.loads(run.stdout) == {"problems": [problem.as_dict() for problem in problems]}


def test_problems_read_as_sentences(desk):
    problems = desk.problems(
        replaced(
            JOB,
            ("length", "lenght"),
            ('["plywood", "oak"]', '["plywood", 3]'),
            ('"triangular"', '[["0 m", 1.0], ["0 m", 2]]'),
        )
    )
    assert list(map(str, problems)) == [
        "job.toml, line 9, pile.lenght: must be a known key, but got `lenght`. "
        "Did you mean `length`?",
        "job.toml, line 13, pile_cushion.materials 2: must be a text, but got 3.",
        f"job.toml, line 25, {LAST}.shaft_shape: must have depths that increase, "
        'but got [["0 m", 1.0], ["0 m", 2]].',
    ]


# --- notices and defaults ------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("old", "new", "line", "notice"),
    [
        (
            'soil = "silty sand"',
            'soil = "clay"\nshaft_damping = "0.2 s/m"',
            26,
            f"{LAST}.soil has no effect: `shaft_damping` is given",
        ),
        (
            'soil = "silty sand"',
            'toe_soil = "loose"\ntoe_quake = "3 mm"',
            26,
            f"{LAST}.toe_soil has no effect: `toe_quake` is given",
        ),
        (
            "[limits]",
            '[helmet]\nmass = "900 kg"\n[limits]',
            29,
            "helmet.mass has no effect: every hammer's row names its helmet",
        ),
        (
            'toe = "300 kN"',
            'toe = "300 kN"\nset = "3 mm"\n[target]\nrefusal = "1 mm"',
            22,
            "target.refusal has no effect: every stage has a `set`",
        ),
        (
            RULE,
            RULE + "\ncompression = 0.8\ntension = 0.03",
            29,
            "limits.rule has no effect: both limits are given",
        ),
        (
            'strength = "50 MPa"',
            'strength = "50 MPa"\nstrength_at_driving = "55 MPa"',
            11,
            'pile.strength_at_driving "55 MPa" is above the strength, "50 MPa"',
        ),
        (
            '"50 MPa"',
            '"50 GPa"',
            10,
            'pile.strength "50 GPa" is unusual; mostly 15 MPa to 150 MPa: check number and unit',
        ),
        (
            '"400 mm"',
            '"40 mm"',
            8,
            'pile.width "40 mm" is unusual; mostly 0.08 m to 5 m: check number and unit',
        ),
        (
            SHEETS,
            'thickness = "3 m"',
            14,
            'pile_cushion.thickness "3 m" is unusual; mostly 5 mm to 1000 mm: '
            "check number and unit",
        ),
        (
            SHEETS,
            'thickness = { from = "2 mm", to = "9 cm" }',
            14,
            'pile_cushion.thickness.from "2 mm" is unusual; mostly 5 mm to 1000 mm: '
            "check number and unit",
        ),
    ],
)
def test_what_has_no_effect_or_is_odd_is_noticed(desk, old, new, line, notice):
    job = desk.load(replaced(JOB, (old, new)))
    assert job.notices == (f"job.toml, line {line}: {notice}",)


@pytest.mark.parametrize(
    ("material", "strength", "odd"),
    [
        ("concrete", "50 kPa", True),
        ("concrete", "7 ksi", False),
        ("steel", "355 kPa", True),
        ("steel", "355 MPa", False),
        ("timber", "8.6 GPa", True),
        ("timber", "1.2 ksi", False),
    ],
)
def test_strengths_of_odd_magnitude_are_noticed(desk, material, strength, odd):
    text = replaced(
        JOB,
        ('"concrete"', f'"{material}"'),
        ('"50 MPa"', f'"{strength}"'),
        ('prestress = "6 MPa"\n', ""),
    )
    assert any("pile.strength" in notice for notice in desk.load(text).notices) == odd


def test_the_toe_soil_of_a_coring_pile_has_no_effect(desk):
    text = replaced(
        JOB,
        ('"concrete"', '"steel"'),
        ('"square"', '"pipe"'),
        ('width = "400 mm"', 'diameter = "400 mm"\nwall = "12 mm"\ntoe = "open"'),
        ('prestress = "6 MPa"\n', ""),
        ('"50 MPa"', '"355 MPa"'),
        (SHEETS, SHEETS + '\narea = "900 cm2"'),
        ('soil = "silty sand"', 'toe_soil = "loose"'),
    )
    [notice] = desk.load(text).notices
    assert "toe_soil has no effect: the toe quake of coring piles" in notice


def test_defaults_by_soil_are_the_published_ones(desk):
    # FHWA-NHI-16-010 section 12.6, as quoted second-hand: shaft damping by soil, toe quake D/60.
    for soil, damping in (("sand", 0.16), ("silty sand", 0.33), ("silt", 0.49), ("clay", 0.65)):
        text = replaced(JOB, ('"silty sand"', f'"{soil}"\ntoe_soil = "loose"'))
        stage = desk.load(text).stages[-1]
        assert stage.shaft_damping == SHAFT_DAMPING[soil] == damping
        assert stage.toe_quake == pytest.approx(0.4 / 60)
    assert set(TOE_QUAKE_SHARE) == {"dense", "loose"}


def test_a_strength_at_driving_takes_the_place_of_the_strength(desk):
    young = 'strength = "50 MPa"\nstrength_at_driving = "40 MPa"'
    job = desk.load(replaced(JOB, ('strength = "50 MPa"', young)))
    assert job.pile.toe.strength == 40e6
    assert "strength at driving 40 MPa in place of 50 MPa" in job.pile.notes
    problem = desk.problem(replaced(JOB, ('strength = "50 MPa"', young), ('"6 MPa"', '"45 MPa"')))
    assert (problem.place, problem.found) == ("pile.prestress", '"45 MPa"')
    steel = replaced(
        JOB,
        ('strength = "50 MPa"', young),
        ('"concrete"', '"steel"'),
        ('prestress = "6 MPa"\n', ""),
    )
    problem = desk.problem(steel)
    assert problem.place == "pile.strength_at_driving"
    assert problem.must == "must be left out for a pile that is not of concrete"


def test_prestress_and_rules_belong_to_materials(desk):
    problems = desk.problems(replaced(JOB, ('"concrete"', '"timber"'), (RULE, 'rule = "en 12699"')))
    assert [told(p)[2:5] for p in problems] == [
        (
            "pile.prestress",
            "must be left out for a pile that is not of concrete",
            '"6 MPa"',
        ),
        (
            "limits.rule",
            "must be a rule for piles of timber; en 12699 is for steel and concrete",
            '"en 12699"',
        ),
    ]
    problems = desk.problems(replaced(JOB, (RULE, "")))
    assert [p.place for p in problems] == ["limits.compression", "limits.tension"]
    assert all(p.do.startswith("Name a `rule`, or write the driving stress") for p in problems)


def test_hammer_cushions_to_try(desk):
    table = (
        '[hammer_cushion]\nmaterials = ["nylon"]\n'
        'thickness = { from = "100 mm", to = "205 mm", step = "50 mm" }\narea = "0.15 m2"\n[limits]'
    )
    job = desk.load(replaced(JOB, ("[limits]", table)))
    assert [c.text for c in job.hammer_cushions] == [
        "100 mm of nylon",
        "150 mm of nylon",
        "200 mm of nylon",
        "205 mm of nylon",
    ]
    assert job.hammer_cushions[0].spring.stiffness == pytest.approx(1300e6 * 0.15 / 0.1)
    problems = desk.problems(
        replaced(JOB, ("[limits]", table.replace('"nylon"', '"oak", "nylom"')))
    )
    assert [told(p)[2:] for p in problems] == [
        (
            "hammer_cushion.materials 1",
            "must be a cushion whose `use` is hammer or both",
            "oak, whose use is pile",
            "",
        ),
        ("hammer_cushion.materials 2", IN_CATALOGUE, '"nylom"', "Did you mean `nylon`?"),
    ]


def test_a_material_without_sheets_can_not_be_counted_in_sheets(desk):
    problem = desk.problem(cushions=replaced(CUSHIONS, ("0.5,25", "0.5,")))
    assert problem.must == "must be cushions with a `sheet` thickness where `sheets` are counted"
    assert problem.found == "oak, which has none"
    assert problem.do == "Give `thickness` in place of `sheets`, or the sheet in the catalogue."
