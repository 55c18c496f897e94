"""What model objects say of themselves, as the readers rely on it.

Readers put a value that is not a number in place of one that they could not read. It must break
the rule on itself and no other, or users would be told of problems that they do not have.
"""

from __future__ import annotations

import math
from dataclasses import fields, replace

import pytest

from matchup.errors import Fault, InputError, ModelError, Problem, did_you_mean
from matchup.model.cushion import Cushion, CushionMaterial, CushionSpace, Spring
from matchup.model.hammer import Hammer
from matchup.model.job import Search
from matchup.model.pile import Fill, Part, Pile, Section
from matchup.model.stage import Stage

OAK = CushionMaterial(
    "oak", "pile", 4e8, 0.5, sheet=0.025, worn_modulus=7e8, worn_restitution=0.4, new_for=300.0,
    life=1500.0,
)  # fmt: skip
SOUND = [
    OAK,
    Spring(1e9, 0.8),
    Hammer(
        "Raven",
        "drop",
        9e3,
        0.2,
        1.0,
        0.55,
        stroke_step=0.1,
        blow_rate_max=0.3,
        lift_speed=0.5,
        rated_energy=88e3,
        helmet_mass=900.0,
        hammer_mass=12e3,
        rides_on_pile=True,
    ),
    Section.square(0.4),
    Part("concrete", Section.square(0.4), 24.0, 35e9, 2400.0, 50e6, 6e6, carried=100.0),
    Stage("x", 21.0, 1e6, 1e6, 4e-3, shaft_shape=((0.0, 0.0), (21.0, 1.0))),
    Fill(0.1, 35e9, 2400.0, 40e6),
    Pile.uniform("steel", Section.square(0.1), 24.0, 210e9, 7850.0, 355e6),
    Search(reserve=0.1),
]
CASES = [
    (item, field.name)
    for item in SOUND
    for field in fields(item)
    if isinstance(getattr(item, field.name), float)
]
KINDS = "drop, hydraulic, air, double-acting"
OTHER_NAMES = {"set_needed": "set"}


@pytest.mark.parametrize(
    ("item", "name"), CASES, ids=[f"{type(item).__name__}.{name}" for item, name in CASES]
)
@pytest.mark.parametrize("value", [math.nan, math.inf, -1.0])
def test_a_wrong_number_breaks_the_rule_on_itself(item, name, value):
    with pytest.raises(ModelError) as caught:
        replace(item, **{name: value})
    own = OTHER_NAMES.get(name, name)
    broken = {fault.field for fault in caught.value.faults}
    assert own in broken or (name, value) == ("stroke_min", math.inf)
    if math.isnan(value):
        assert broken == {own}
        assert len(caught.value.faults) == 1


def test_a_depth_or_share_that_is_no_number_breaks_at_most_the_shape():
    stage = SOUND[5]
    with pytest.raises(ModelError) as caught:
        replace(stage, shaft_shape=((0.0, math.nan), (21.0, 1.0)))
    assert [fault.field for fault in caught.value.faults] == ["shaft_shape"]
    with pytest.raises(ModelError) as caught:
        replace(stage, penetration=math.nan, shaft_shape=((0.0, 0.0), (math.nan, 1.0)))
    assert [fault.field for fault in caught.value.faults] == ["penetration"]


def test_faults_say_what_must_hold_and_what_to_do():
    with pytest.raises(ModelError) as caught:
        replace(SOUND[2], efficiency=55.0, kind="dropp")
    assert caught.value.faults == (
        Fault(
            "kind",
            f"must be one of: {KINDS}",
            "dropp",
            do="Did you mean `drop`?",
        ),
        Fault("efficiency", "must be above 0 and at most 1", 55.0, do="Write 0.55."),
    )
    assert str(caught.value) == (
        f"hammer 'Raven': kind must be one of: {KINDS}, but got 'dropp'; "
        "efficiency must be above 0 and at most 1, but got 55.0"
    )


def test_a_hammer_that_rides_on_the_pile_without_its_mass():
    with pytest.raises(ModelError) as caught:
        replace(SOUND[2], hammer_mass=None)
    assert str(caught.value).endswith(
        "hammer_mass must be given for a hammer that rides on the pile"
    )


def test_a_cushion_space_names_each_broken_rule():
    with pytest.raises(ModelError) as caught:
        CushionSpace((), (), (), 0.1, ("old",))
    assert [fault.field for fault in caught.value.faults] == ["materials", "sheets", "wear"]
    hard = replace(OAK, use="hammer", sheet=None)
    with pytest.raises(ModelError) as caught:
        CushionSpace((hard,), (1,), (0.1,), 0.1)
    assert [(fault.field, str(fault.value)) for fault in caught.value.faults] == [
        ("sheets", "[1]"),
        ("materials", "oak, whose use is hammer"),
    ]


def test_a_worn_cushion_without_worn_values_is_as_new_but_for_its_thickness():
    plain = CushionMaterial("x", "pile", 4e8, 0.5, worn_thickness=0.8)
    cushion = Cushion(plain, 0.1, 0.16)
    assert cushion.spring("worn").stiffness == pytest.approx(cushion.spring("new").stiffness / 0.8)


def test_problems_are_sentences_with_what_is_known():
    full = Problem("a.toml", 3, "pile.length", "must be > 0", '"0 m"', "Write more.")
    assert str(full) == 'a.toml, line 3, pile.length: must be > 0, but got "0 m". Write more.'
    assert str(Problem(None, None, "stroke", "must be given", "")) == "stroke: must be given."
    assert str(Problem("a.csv", None, "", "must be a file", "a folder")) == (
        "a.csv: must be a file, but got a folder."
    )
    assert list(full.as_dict()) == ["file", "line", "place", "must", "found", "do"]
    error = InputError([full, full])
    assert str(error).count("\n") == 1


def test_hints_name_the_nearest():
    assert did_you_mean("Plywod", ["oak", "plywood"]) == "Did you mean `plywood`?"
    assert did_you_mean("zzz", ["oak", "plywood"]) == ""
