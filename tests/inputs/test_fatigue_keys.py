"""The keys of ``[fatigue]``: categories over their factor, joints of parts by themselves."""

from __future__ import annotations

import pytest

from tests.inputs.test_cost_keys import DRIVE, LAYERS
from tests.inputs.written import line_in, replaced

TUBE = """\
title = "Hollowmere landing, invented"
[catalog]
hammers = "hammers.csv"
[pile]
material = "steel"
strength = "355 MPa"
shape = "pipe"
diameter = "610 mm"
wall = "14 mm"
toe = "closed"
length = "24 m"
"""
PARTS = """\
title = "Hollowmere landing, invented"
[catalog]
hammers = "hammers.csv"
[pile]
material = "steel"
strength = "355 MPa"
[[pile.parts]]
name = "upper"
shape = "pipe"
diameter = "610 mm"
wall = "14 mm"
toe = "closed"
length = "10 m"
[[pile.parts]]
name = "lower"
shape = "pipe"
diameter = "610 mm"
wall = "12 mm"
toe = "closed"
length = "14 m"
"""
LIMITS = '[limits]\nrule = "en 12699"\n'
FATIGUE = """\
[fatigue]
category = "80 MPa"
partial_factor = 1.25
allowed = 0.4
details = [
    { name = "lug", at = "2 m", concentration = 1.5, category = "50 MPa" },
    { name = "weld", at = "7 m" },
]
"""
HAMMERS = "name,kind,ram_mass [t],stroke_min [m],stroke_max [m],efficiency,helmet_mass [kg]\n" + (
    "Curlew,hydraulic,5,0.1,1.5,0.85,700\n"
)


@pytest.fixture
def ground(desk):
    desk.put("layers.csv", LAYERS)
    return desk


def test_every_key_is_read(ground):
    job = ground.load(TUBE + DRIVE + LIMITS + FATIGUE, HAMMERS)
    assert job.notices == ()
    lug, weld = job.fatigue.details
    assert (lug.name, lug.at, lug.concentration) == ("lug", 2.0, 1.5)
    assert lug.curve.category == pytest.approx(40e6)
    assert (weld.concentration, weld.curve.slope) == (1.0, None)
    assert weld.curve.category == pytest.approx(64e6)
    assert job.fatigue.allowed == 0.4
    assert job.fatigue.text.endswith("from memory; partial factor 1.25")


def test_joints_of_steel_parts_are_details_of_their_own(ground):
    job = ground.load(PARTS + DRIVE + LIMITS + FATIGUE, HAMMERS)
    joint = job.fatigue.details[-1]
    assert (joint.name, joint.at) == ("joint of upper and lower", 10.0)
    given = replaced(FATIGUE, ('"7 m"', '"10 m"'))
    job = ground.load(PARTS + DRIVE + LIMITS + given, HAMMERS)
    assert [detail.name for detail in job.fatigue.details] == ["lug", "weld"]


WELD = 'fatigue.details 2 ("weld").'


@pytest.mark.parametrize(
    ("old", "new", "place", "must"),
    [
        ('"7 m"', '"24.5 m"', WELD + "at", "must be at most the length of the pile"),
        (
            "concentration = 1.5",
            "concentration = 0.5",
            'fatigue.details 1 ("lug").concentration',
            "must be >= 1",
        ),
        ("partial_factor = 1.25", "partial_factor = 0.9", "fatigue.partial_factor", "must be >= 1"),
        ("allowed = 0.4", "allowed = 1.4", "fatigue.allowed", "must be above 0 and at most 1"),
        ("allowed = 0.4", "slope = 0.5", "fatigue.slope", "must be >= 1"),
        ('"weld"', '"lug"', "fatigue.details", "must have different names"),
        ('category = "80 MPa"\n', "", "fatigue.category", "must be given"),
    ],
)
def test_a_wrong_key_is_told_where_it_stands(ground, old, new, place, must):
    text = TUBE + DRIVE + LIMITS + replaced(FATIGUE, (old, new))
    problem = ground.problems(text, HAMMERS)[0]
    assert (problem.place, problem.must) == (place, must)
    if new and old != '"weld"':
        assert problem.line == line_in(text, new)


def test_details_are_of_steel(ground):
    text = replaced(
        TUBE,
        ('material = "steel"', 'material = "concrete"'),
        ("wall", "# wall"),
        ("toe =", "# toe ="),
        ('"pipe"', '"round"'),
        ("355", "45"),
    )
    limits = '[limits]\nrule = "aashto"\n'
    problems = ground.problems(text + DRIVE + limits + FATIGUE, HAMMERS)
    assert {p.must for p in problems} == {"must be in a part of steel"}


def test_without_a_detail_or_a_joint_there_is_nothing_to_ask(ground):
    text = FATIGUE[: FATIGUE.index("details")]
    problem = ground.problem(TUBE + DRIVE + LIMITS + text, HAMMERS)
    assert problem.must == "must hold at least one detail"
