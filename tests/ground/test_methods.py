"""The registry: every method says what it is, what it lacks, and what would do instead."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from matchup.errors import ModelError
from matchup.ground.basis import Choices, Ground
from matchup.ground.cases import Case
from matchup.ground.methods import METHODS, method_named, usable
from matchup.ground.stages import resistance_stages
from matchup.model.ground import Layer, Profile, ResistanceColumn, ResistanceTable
from tests.grounds import (
    CLOSED,
    KPA,
    MPA,
    TUBE,
    clay,
    pile,
    sand,
    soft_over_dense,
    soft_over_dense_sounding,
    sounding,
    unit_of,
)

BEST = Case("best")
FULL = Layer(
    0, 30, "sand", 20e3, "medium dense", beta=0.4, toe_factor=50, unit_shaft=40e3, unit_toe=3e6
)
TABLE = ResistanceTable((0.0, 30.0), {"best": ResistanceColumn((0.0, 3e6), (0.0, 1e6))})
EVERYTHING = Ground(Profile((FULL,), 1.0), soft_over_dense_sounding(), TABLE)


def lacking(name: str, ground: Ground, section=CLOSED, **choices) -> dict[str, str]:
    with pytest.raises(ModelError) as caught:
        resistance_stages(
            pile(section),
            ground,
            name,
            [10.0],
            1e-3,
            choices=Choices(**choices) if choices else None,
        )
    return {fault.field: fault.must for fault in caught.value.faults}


def test_every_method_says_what_it_is():
    for name, method in METHODS.items():
        assert method.name == name
        assert all((method.source, method.needs, method.valid, method.pair_source))
        assert method.kind in ("static", "driving", "as stated", "as companion")
        assert (method.resistance is None) != (method.toe is None)


def test_every_method_works_where_everything_is_known():
    choices = Choices(companion="direct")
    assert usable(EVERYTHING, CLOSED, choices) == list(METHODS)


@pytest.mark.parametrize("name", METHODS)
def test_static_and_driving_are_told_apart_in_the_result(name):
    choices = Choices(companion="effective stress")
    unit = unit_of(name, EVERYTHING, CLOSED, [10.0], choices)
    expected = {"static": True, "driving": False, "as stated": False, "as companion": True}
    assert unit.static is expected[METHODS[name].kind]


@pytest.mark.parametrize("name", METHODS)
def test_the_source_is_printed_with_every_stage(name):
    choices = Choices(companion="direct")
    cases = resistance_stages(
        pile(CLOSED), EVERYTHING, name, [10.0], 1e-3, cases=[BEST], choices=choices
    )
    notes = cases[0].stage.notes
    assert notes[0] == f"resistance: {METHODS[name].source}"
    assert any(note.startswith("quakes and damping: ") for note in notes)


def test_an_unknown_method_gets_the_nearest_name():
    with pytest.raises(ModelError, match="did you mean 'api 2011'"):
        method_named("api 2010")


def test_what_is_missing_is_named_with_what_would_do():
    ground = Ground(Profile((sand(0, 12), clay(12, 30, 50 * KPA)), 1.0), soft_over_dense_sounding())
    found = lacking("stevens 1982", ground)
    assert found["layers.2.ocr"] == "must be given for Stevens et al. 1982 (clay, 12-30 m)"
    with pytest.raises(ModelError) as caught:
        unit_of("stevens 1982", ground, CLOSED, [10.0])
    would_do = "With what is there these would do: api 2011, alm hamre 2001."
    assert {fault.do for fault in caught.value.faults} == {would_do}


def test_a_sounding_alone_suffices_for_alm_and_hamre():
    ground = Ground(sounding=soft_over_dense_sounding())
    assert usable(ground, CLOSED, Choices()) == ["alm hamre 2001"]
    assert "profile" in lacking("api 2011", ground)


def test_a_sounding_is_asked_for():
    assert "sounding" in lacking("alm hamre 2001", Ground(soft_over_dense()))
    assert "sounding" in lacking("nen 9997 base", Ground(soft_over_dense()), companion="api 2011")


def test_the_api_table_has_no_loose_sand_and_says_so():
    found = lacking("api 2011", Ground(Profile((sand(0, 30, "loose"),), 1.0)))
    assert "no row for loose" in found["layers.1.density"]
    assert "sounding or beta" in found["layers.1.density"]


@pytest.mark.parametrize(
    ("layer", "field"),
    [
        (Layer(0, 30, "sand", 20e3), "density"),
        (Layer(0, 30, "clay", 17e3), "strength"),
        (Layer(0, 30, "silt", 18e3), "strength"),
        (Layer(0, 30, "gravel", 21e3, "dense"), "unit_shaft"),
        (Layer(0, 30, "rock", 23e3), "unit_shaft"),
    ],
)
def test_the_api_method_names_the_field_of_each_layer(layer, field):
    assert f"layers.1.{field}" in lacking("api 2011", Ground(Profile((layer,), 1.0)))


@pytest.mark.parametrize(
    ("layer", "field"),
    [
        (sand(0, 30, "dense"), "unit_shaft"),
        (Layer(0, 30, "sand", 20e3), "density"),
        (Layer(0, 30, "clay", 20e3), "strength"),
    ],
)
def test_stevens_is_limited_to_the_rows_at_hand(layer, field):
    assert f"layers.1.{field}" in lacking("stevens 1982", Ground(Profile((layer,), 1.0)))


def test_effective_stress_asks_for_its_factors_and_tells_their_range():
    found = lacking("effective stress", Ground(Profile((sand(0, 30),), 1.0)))
    assert "0.3-0.9" in found["layers.1.beta"]
    found = lacking("effective stress", Ground(Profile((sand(0, 30, beta=0.5),), 1.0)))
    assert "30-150" in found["layers.1.toe_factor"]


def test_a_factor_outside_its_range_is_noted():
    ground = Ground(Profile((sand(0, 30, beta=1.2, toe_factor=50),), 1.0))
    notes = unit_of("effective stress", ground, CLOSED, [10.0]).notes
    assert "beta 1.2 of sand, 0-30 m is outside published range for sand 0.3-0.9" in notes


def test_direct_values_are_asked_for_one_by_one():
    only_toe = Layer(0, 30, "rock", 23e3, unit_toe=5e6)
    assert "layers.1.unit_shaft" in lacking("direct", Ground(Profile((only_toe,), 1.0)))
    only_shaft = Layer(0, 30, "rock", 23e3, unit_shaft=5e3)
    assert "layers.1.unit_toe" in lacking("direct", Ground(Profile((only_shaft,), 1.0)))


@pytest.mark.parametrize("name", ["api 2011", "stevens 1982", "effective stress"])
def test_direct_values_of_a_layer_hold_in_every_layer_method_while_driving(name):
    marl = Layer(0, 30, "clay", 20e3, unit_shaft=50 * KPA, unit_toe=4 * MPA)
    ground = Ground(Profile((marl,), 1.0))
    for bound in ("low", "high"):
        case = replace(BEST, bound=bound, plug="plugged")
        got = resistance_stages(pile(TUBE), ground, name, [10.0], 1e-3, [case])[0].stage
        assert got.shaft == pytest.approx(50 * KPA * 10 * np.pi * 0.762)
        assert got.toe == pytest.approx(4 * MPA * np.pi * 0.762**2 / 4)


def test_clay_needs_sleeve_friction_where_layers_say_clay():
    depth = np.arange(0.0, 30.0, 0.1)
    void = sounding(depth, np.full(depth.shape, 5 * MPA), np.nan)
    found = lacking("alm hamre 2001", Ground(soft_over_dense(), void))
    assert "2.13 to 11.37 m" in found["sounding.sleeve"]
    in_sand = Ground(Profile((sand(0, 30),), 1.0), void)
    assert usable(in_sand, CLOSED, Choices()) == ["api 2011", "alm hamre 2001", "stevens 1982"]


def test_alm_and_hamre_has_no_rock():
    rock = Profile((sand(0, 20), Layer(20, 30, "rock", 23e3)), 1.0)
    found = lacking("alm hamre 2001", Ground(rock, soft_over_dense_sounding()))
    assert set(found) == {"layers.2.soil"}


def test_choices_and_ground_check_themselves():
    for make in (
        lambda: Choices(faces="inner"),
        lambda: Choices(interface_angle=29.0),
        lambda: Choices(inside=1.5),
        lambda: Ground(),
        lambda: Ground(table=TABLE, water=float("nan")),
        lambda: Ground(table=TABLE, unit_weight=-1.0),
    ):
        with pytest.raises(ModelError):
            make()
