"""The keys of ``[site]``: read in SI, held against pile and catalogue, told where they stand."""

from __future__ import annotations

import pytest

from matchup.model.site import Standing
from matchup.model.vibration import Vibration
from tests.inputs.written import HAMMERS, JOB, line_in, replaced

SITE = """\
[site]
capacity = "20 t"
capacity_with_pile = "32 t"
headroom = "110 ft"
above_ground = "20 m"
blow_rate_max = "45 1/min"
buckling_safety = 2.5
fixity = "2 m"
inertia = "213000 cm4"
[site.vibration]
relation = "bs 5228-2"
soil = "dense"
distance = "25 m"
limit = "8 mm/s"
"""
WHOLE = "".join(
    f"{line},{more}\n"
    for line, more in zip(
        HAMMERS.splitlines(),
        (
            "blow_rate_max [1/min],hammer_mass [t],hammer_length [m],head_min [mm],head_max [in]",
            "60,9.9,4.6,250,24",
            "14,12.5,3,,",
        ),
        strict=True,
    )
)


def test_every_key_is_read(desk):
    job = desk.load(JOB + SITE, WHOLE)
    assert job.notices == ()
    site = job.site
    assert (site.capacity, site.capacity_with_pile) == (20e3, 32e3)
    assert site.headroom == pytest.approx(33.528)
    assert (site.above_ground, site.blow_rate_max) == (20.0, 0.75)
    assert site.standing == Standing(2.5, 2.0, site.standing.inertia)
    assert site.standing.inertia == pytest.approx(2.13e-3)
    assert site.vibration == Vibration("bs 5228-2", 25.0, 0.008, "dense")
    curlew, raven = job.hammers
    assert (curlew.hammer_length, curlew.head_min) == (4.6, 0.25)
    assert curlew.head_max == pytest.approx(0.6096)
    assert (raven.head_min, raven.head_max) == (None, None)


RANGE = "must be 1 to 111 m, the range of bs 5228-2"


@pytest.mark.parametrize(
    ("old", "new", "place", "must"),
    [
        ('"20 t"', '"21 m"', "site.capacity", "must be a mass, and 'm' is not a unit of mass"),
        ('"20 t"', '"0 t"', "site.capacity", "must be > 0"),
        ("headroom", "head_room", "site.head_room", "must be a known key"),
        ('"20 m"', '"26 m"', "site.above_ground", "must be at most the pile's length"),
        ("2.5", "0.5", "site.buckling_safety", "must be >= 1"),
        (
            'fixity = "2 m"\n',
            "",
            "site.fixity",
            "must be given with `buckling_safety`: the depth at which the pile is fixed",
        ),
        (
            '"bs 5228-2"',
            '"bs 5228"',
            "site.vibration.relation",
            "must be one of: env 1993-5, bs 5228-2",
        ),
        (
            '"dense"',
            '"peat"',
            "site.vibration.soil",
            "must be one of: dense, medium, loose, refusal",
        ),
        ('"25 m"', '"150 m"', "site.vibration.distance", RANGE),
        ('limit = "8 mm/s"\n', "", "site.vibration.limit", "must be given"),
        (
            'soil = "dense"\n',
            "",
            "site.vibration.soil",
            "must be given, or `factor` in its place, and not both",
        ),
    ],
)
def test_a_wrong_key_is_told_where_it_stands(desk, old, new, place, must):
    site = replaced(SITE, (old, new))
    problem = desk.problem(JOB + site, WHOLE)
    assert (problem.place, problem.must) == (place, must)
    if new:
        head = JOB.count("\n")
        assert problem.line == head + line_in(site, new)


def test_a_relation_must_reach_as_deep_as_the_stages(desk):
    job = replaced(JOB, ('"24 m"', '"34 m"'), ('"21 m"', '"31 m"')) + replaced(
        SITE, ("above_ground", "# above_ground")
    )
    problem = desk.problem(job, WHOLE)
    assert problem.place == "site.vibration.relation"
    assert "bs 5228-2 is for 1 to 27 m" in problem.must


def test_hammers_that_can_not_be_held_against_a_key_are_named(desk):
    notices = desk.load(JOB + SITE, HAMMERS).notices
    assert [n.partition(": site.")[2] for n in notices] == [
        "capacity is not held against Curlew, Raven: no `hammer_mass` in the catalogue",
        "capacity_with_pile is not held against Curlew, Raven: no `hammer_mass` in the catalogue",
        "headroom is not held against Curlew, Raven: no `hammer_length` in the catalogue",
        "blow_rate_max is not held against Curlew, Raven: no blow rate",
    ]


def test_keys_without_effect_are_named(desk):
    notices = desk.load(JOB + replaced(SITE, ("buckling_safety = 2.5\n", "")), WHOLE).notices
    assert [n.partition(": ")[2] for n in notices] == [
        "site.fixity has no effect without `buckling_safety`",
        "site.inertia has no effect without `buckling_safety`",
    ]
