"""Parts, follower, shoe, rake, fill and plug of the pile: what is read, and what is told."""

from __future__ import annotations

import math

import pytest

from matchup.inputs.starter import starter_files
from tests.inputs.written import JOB, replaced

LENGTH = 'length = "24 m"\n'
WIDTH = 'shape = "square"\nwidth = "400 mm"\n'
TUBE = 'shape = "pipe"\ndiameter = "500 mm"\nwall = "12 mm"\ntoe = "open"\n'
STEEL = (
    ('material = "concrete"', 'material = "steel"'),
    (WIDTH, TUBE),
    ("50 MPa", "355 MPa"),
    ('prestress = "6 MPa"\n', ""),
    ("sheets = { from = 4, to = 18 }", 'sheets = { from = 4, to = 18 }\narea = "1600 cm2"'),
)
FOLLOWER = """\
[pile.follower]
material = "steel"
shape = "pipe"
diameter = "400 mm"
wall = "25 mm"
length = "3 m"
strength = "355 MPa"
"""


def in_parts(*parts: str, common: str = "") -> str:
    tables = "".join(f"[[pile.parts]]\n{part}\n" for part in parts)
    return replaced(JOB, (LENGTH, common), ("[pile_cushion]", f"{tables}[pile_cushion]"))


UPPER = 'name = "upper"\nlength = "10 m"'
LOWER = 'name = "lower"\nlength = "14 m"'


def test_a_part_takes_what_it_leaves_out_from_the_pile(desk):
    own = f'{LOWER}\nshape = "square"\nwidth = "350 mm"\nprestress = "8 MPa"'
    pile = desk.load(in_parts(UPPER, own)).pile
    assert [part.name for part in pile.parts] == ["upper", "lower"]
    assert pile.length == pytest.approx(24.0)
    assert [part.section.width for part in pile.parts] == pytest.approx([0.4, 0.35])
    assert [part.prestress for part in pile.parts] == [6e6, 8e6]
    assert {part.strength for part in pile.parts} == {50e6}


def test_a_part_of_another_material_takes_nothing_of_the_piles(desk):
    tip = 'name = "tip"\nlength = "4 m"\nmaterial = "steel"\nstrength = "355 MPa"\n' + (
        'shape = "h"\narea = "150 cm2"\ndepth = "300 mm"\nwidth = "300 mm"'
    )
    job = desk.load(in_parts('name = "body"\nlength = "20 m"', tip))
    body, steel = job.pile.parts
    assert (steel.material, steel.prestress, steel.modulus) == ("steel", 0.0, 210e9)
    assert (body.prestress, body.section.text) == (6e6, "square")
    assert [part.part for part in job.limits.parts] == ["body", "tip"]
    assert job.limits.parts[1].squeeze.stress == pytest.approx(0.9 * 355e6)
    assert job.limits.parts[0].squeeze.stress == pytest.approx((0.85 * 50 - 6) * 1e6)
    # Modulus and density are told of each.
    assert any(note.startswith("tip: modulus 210 GPa") for note in job.pile.notes)


def test_parts_may_have_limits_of_their_own(desk):
    own = f'{LOWER}\n[pile.parts.limits]\ncompression_stress = "20 MPa"\ntension = 0.02'
    limits = desk.load(in_parts(UPPER, own)).limits
    assert limits.differ
    assert limits.parts[0].squeeze.stress == pytest.approx(36.5e6)
    assert limits.parts[1].squeeze.stress == 20e6
    assert limits.parts[1].pull.stress == pytest.approx(0.02 * 50e6 + 6e6)


def test_a_follower_stands_on_the_pile_and_has_its_own_limits_or_none(desk):
    text = replaced(
        JOB,
        ("[pile_cushion]", f"{FOLLOWER}[pile_cushion]"),
        ("to = 18 }", 'to = 18 }\narea = "1600 cm2"'),
    )
    job = desk.load(text)
    assert job.pile.length == 24.0
    assert [part.name for part in job.pile.column] == ["follower", "pile"]
    assert job.limits.parts[0].squeeze.stress == math.inf
    limits = 'strength = "355 MPa"\n[pile.follower.limits]\nrule = "en 12699"\n'
    limited = desk.load(replaced(text, ('strength = "355 MPa"\n', limits)))
    assert limited.limits.parts[0].squeeze.stress == pytest.approx(319.5e6)


def test_shoe_rake_and_taper_are_read(desk):
    more = f'{LENGTH}rake = "1:6"\nshoe_mass = "60 kg"\n'
    pile = desk.load(replaced(JOB, (LENGTH, more))).pile
    assert math.tan(pile.rake) == pytest.approx(1 / 6)
    assert pile.shoe_mass == 60.0
    angle = desk.load(replaced(JOB, (LENGTH, f'{LENGTH}rake = "12 deg"\n'))).pile
    assert angle.rake == pytest.approx(math.radians(12))
    tapered = 'shape = "round"\ndiameter = "400 mm"\ntoe_diameter = "250 mm"\n'
    section = desk.load(replaced(JOB, (WIDTH, tapered))).pile.section
    assert section.width == 0.25
    assert section.area_at(0.0) == pytest.approx(math.pi * 0.04)


def test_a_fill_and_a_plug_are_read(desk):
    filled = replaced(
        JOB, *STEEL, ('toe = "open"', 'toe = "closed"\nfill = { strength = "35 MPa" }')
    )
    part = desk.load(filled).pile.toe
    assert part.fill.area == pytest.approx(math.pi / 4 * 0.476**2)
    assert part.fill.density == 2400.0
    plug = f'{LENGTH}plug = {{ length = "6 m", density = "1900 kg/m3" }}\n'
    pile = desk.load(replaced(JOB, *STEEL, (LENGTH, plug))).pile
    assert [part.length for part in pile.parts] == [18.0, 6.0]
    assert pile.toe.carried == pytest.approx(1900 * math.pi / 4 * 0.476**2)
    assert any("at all stages" in note for note in pile.notes)


def told(desk, text: str) -> list[tuple[str, str]]:
    return [(p.place, p.must) for p in desk.problems(text)]


@pytest.mark.parametrize(
    ("text", "place", "must"),
    [
        (
            in_parts(UPPER, LOWER, common='length = "25 m"\n'),
            "pile.length",
            "must be the sum of the lengths of its parts, 24 m, or be left out",
        ),
        (
            in_parts(UPPER, 'name = "Upper"\nlength = "14 m"'),
            'pile.parts 2 ("Upper").name',
            "must differ from the names of the other parts",
        ),
        (
            in_parts(UPPER, 'name = "lower"'),
            'pile.parts 2 ("lower").length',
            "must be given",
        ),
        (
            in_parts(UPPER, f'{LOWER}\nshape = "round"'),
            'pile.parts 2 ("lower").diameter',
            "must be given for the shape round",
        ),
        (
            in_parts(UPPER, f'{LOWER}\nprestress = "60 MPa"'),
            'pile.parts 2 ("lower").prestress',
            "must be below the strength",
        ),
        (
            in_parts(UPPER, f'{LOWER}\nwidht = "300 mm"'),
            'pile.parts 2 ("lower").widht',
            "must be a known key",
        ),
        (
            in_parts(UPPER, f"{LOWER}\nwidth = 300"),
            'pile.parts 2 ("lower").width',
            "must be a text with its unit (mm or in)",
        ),
        (
            in_parts(UPPER, f'{LOWER}\n[pile.parts.limits]\nrule = "astho"'),
            'pile.parts 2 ("lower").limits.rule',
            "must be one of: aashto, aashto severe corrosion, en 12699, en 12699 monitored",
        ),
        (
            in_parts(UPPER, 'name = "lower"\nlength = "2 m"'),
            'stages 2 ("final set").penetration',
            "must be at most the pile's length, 12 m",
        ),
        (
            replaced(JOB, (LENGTH, f'{LENGTH}rake = "50 deg"\n')),
            "pile.rake",
            "must be 0 to 45 deg from the vertical",
        ),
        (
            replaced(JOB, (LENGTH, f'{LENGTH}rake = "steep"\n')),
            "pile.rake",
            "must be one number with a unit",
        ),
        (
            replaced(JOB, (LENGTH, f"{LENGTH}parts = []\n")),
            "pile.parts",
            "must hold at least one part, or be left out",
        ),
        (
            replaced(JOB, (LENGTH, f'{LENGTH}fill = {{ strength = "35 MPa" }}\n')),
            "pile.fill",
            "must be left out for a pile that is not a tube, at the toe a closed one",
        ),
        (
            replaced(JOB, (LENGTH, f'{LENGTH}plug = {{ length = "6 m", density = "2 t/m3" }}\n')),
            "pile.plug",
            "must be left out for a section that takes in no soil, or whose core is not known",
        ),
        (
            replaced(
                JOB, *STEEL, (LENGTH, f'{LENGTH}plug = {{ length = "30 m", density = "2 t/m3" }}\n')
            ),
            "pile.plug.length",
            "must be at most 24 m, the part's",
        ),
        (
            replaced(
                JOB,
                (WIDTH, 'shape = "round"\ndiameter = "300 mm"\ntoe_diameter = "400 mm"\n'),
            ),
            "pile.toe_diameter",
            "must be at most the diameter, which is that of the head",
        ),
        (
            replaced(JOB, ("[pile_cushion]", f"{FOLLOWER}[pile_cushion]")),
            "pile_cushion.area",
            "must be given for a pile of the shape pipe",
        ),
    ],
)
def test_one_thing_wrong_is_told_once(desk, text, place, must):
    assert told(desk, text) == [(place, must)]


def test_a_follower_without_section_says_all_that_it_needs(desk):
    text = replaced(JOB, ("[pile_cushion]", '[pile.follower]\nmaterial = "steel"\n[pile_cushion]'))
    assert told(desk, text) == [
        (f"pile.follower.{key}", "must be given") for key in ("shape", "length", "strength")
    ]


def test_what_is_wrong_with_the_pile_is_told_once_for_all_parts(desk):
    text = replaced(in_parts(UPPER, LOWER), ('prestress = "6 MPa"', 'prestress = "60 MPa"'))
    assert told(desk, text) == [("pile.prestress", "must be below the strength")]


def test_a_key_that_no_part_takes_is_noticed(desk):
    own = 'prestress = "7 MPa"'
    job = desk.load(in_parts(f"{UPPER}\n{own}", f"{LOWER}\n{own}"))
    assert any("pile.prestress has no effect" in notice for notice in job.notices)


GROUND = """\
[ground]
layers = "layers.csv"
method = "api 2011"
start = "4 m"
every = "4 m"
[target]
penetration = "16 m"
set = "4 mm"
"""


def test_a_ground_wants_an_upright_pile_of_one_outline(desk):
    head, _, rest = in_parts(UPPER, f'{LOWER}\nshape = "square"\nwidth = "350 mm"').partition(
        "[[stages]]"
    )
    text = replaced(head, (WIDTH, f'{WIDTH}rake = "1:5"\n')) + GROUND + '[limits]\nrule = "aashto"'
    assert rest
    desk.put("layers.csv", starter_files()["layers.csv"])
    assert told(desk, text) == [
        ("pile.rake", "must be left out with a [ground], which goes by depth"),
        ("pile.parts", "must have one outline with a [ground]"),
    ]
