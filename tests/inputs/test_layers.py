"""Tables of layers and of resistance by depth."""

from __future__ import annotations

import pytest

from matchup.inputs.findings import Findings
from matchup.inputs.layers import read_layers, read_resistance_table
from tests.inputs.ground_files import changed
from tests.invented_ground import LAYERS

LAYER_TABLE = """\
top [m],bottom [m],soil,unit_weight [kN/m3],density,strength [kPa],setup,water [m],remark
0,4,clay,16,,20,1.9,-2,invented
4,9.5,sand,19.5,dense,,,,
9.5,12,Clay,18,,80,,,
"""
NUMBER = "must be a number with a decimal point and no thousands separator"
RESISTANCE_TABLE = """\
depth [m],shaft_low [kN],toe_low [kN],shaft_best [kN],toe_best [MN],kind,setup
8,100,200,150,0.3,static,1.5
12,200,200,260,0.3,,
20,500,700,600,0.9,,
"""


def read(reader, folder, text):
    path = folder / "table.csv"
    path.write_text(text)
    findings = Findings()
    value = reader(path, findings)
    assert (value is None) == bool(findings.problems)
    return value, findings


def told(reader, folder, text):
    """Return line, place, rule and found of each problem."""
    _, findings = read(reader, folder, text)
    return [(p.line, p.place, p.must, p.found) for p in findings.problems]


# --- layers -------------------------------------------------------------------------------------


def test_layers_by_hand(tmp_path):
    profile, findings = read(read_layers, tmp_path, LAYER_TABLE)
    assert not findings.notices
    assert profile.water == -2.0
    assert profile.end == 12.0
    clay, sand, stiff = profile.layers
    assert (clay.top, clay.bottom, clay.soil, clay.unit_weight) == (0, 4, "clay", 16e3)
    assert (clay.strength, clay.setup, clay.density) == (20e3, 1.9, None)
    assert (sand.density, sand.strength, sand.unit_weight) == ("dense", None, 19.5e3)
    assert stiff.soil == "clay"


def test_layers_in_other_units(tmp_path):
    text = changed(
        LAYER_TABLE,
        ("unit_weight [kN/m3]", "unit_weight [pcf]"),
        (",16,", ",100,"),
        (",19.5,", ",125,"),
    )
    text = changed(text, (",18,", ",115,"))
    profile, _ = read(read_layers, tmp_path, text)
    pound_force_per_cubic_foot = (
        157.08746384624  # NIST SP 811: 4.4482216152605 N / 0.028316846592 m3
    )
    assert profile.layers[0].unit_weight == pytest.approx(
        100 * pound_force_per_cubic_foot, rel=1e-12
    )


def test_layers_with_everything_wrong_at_once(tmp_path):
    text = changed(
        LAYER_TABLE,
        ("0,4,clay,16,,20,1.9,-2,", "0,4,mud,16,,20,0.9,-2,"),
        ("19.5,dense,,,,", "8,dense,,,-1,"),
        ("9.5,12,", "9.5,9,"),
    )
    problems = told(read_layers, tmp_path, text)
    assert [(line, place) for line, place, _, _ in problems] == [
        (2, "`soil`"),
        (2, "`setup`"),
        (3, "`unit_weight`"),
        (4, "`bottom`"),
        (3, "`water`"),
    ]
    assert problems[2][3] == "8 kN/m3"
    assert problems[4][2:] == ("must be the same in every row; line 2 has -2 m", "-1 m")


def test_layers_with_a_gap(tmp_path):
    problems = told(read_layers, tmp_path, changed(LAYER_TABLE, ("\n9.5,12", "\n10,12")))
    assert problems == [(4, "`top`", "must be the bottom of the layer above, 9.5 m", "10 m")]
    problems = told(read_layers, tmp_path, changed(LAYER_TABLE, ("\n0,4", "\n1,4")))
    assert problems == [(2, "`top`", "must be 0: layers start at the ground surface", "1 m")]


def test_layers_without_water(tmp_path):
    text = changed(LAYER_TABLE, ("water [m]", "level [m]"))
    must = "must have the depth of the water level in one row"
    assert told(read_layers, tmp_path, text) == [(1, "`water`", must, "none")]
    problems = told(read_layers, tmp_path, changed(LAYER_TABLE, ("water [m]", "water")))
    assert problems == [(1, "water", "must have its unit in brackets", "")]


def test_layers_of_the_example():
    findings = Findings()
    profile = read_layers(LAYERS, findings)
    assert not findings.problems
    assert not findings.notices
    assert profile.end == 30.0
    assert [layer.density for layer in profile.layers].count("dense") == 1


# --- resistance by depth ------------------------------------------------------------------------


def test_resistance_by_hand(tmp_path):
    table, findings = read(read_resistance_table, tmp_path, RESISTANCE_TABLE)
    assert not findings.notices
    assert table.depth == (8.0, 12.0, 20.0)
    assert list(table.columns) == ["low", "best"]
    assert table.columns["low"].shaft == (100e3, 200e3, 500e3)
    assert table.columns["best"].toe == pytest.approx((300e3, 300e3, 900e3), rel=1e-12)
    assert (table.kind, table.setup) == ("static", 1.5)


def test_resistance_of_unstated_kind_is_said_to_be_taken_as_driving(tmp_path):
    text = changed(RESISTANCE_TABLE, ("kind", "note"), ("static", ""))
    table, findings = read(read_resistance_table, tmp_path, text)
    assert table.kind == "driving"
    assert any("taken as those while driving" in notice for notice in findings.notices)


def test_resistance_with_everything_wrong_at_once(tmp_path):
    text = changed(
        RESISTANCE_TABLE,
        ("toe_low [kN]", "toe_high [kN]"),
        ("12,200,200,260", "8,-200,200,"),
        ("20,500,700,600", "20,many,700,600"),
    )
    assert told(read_resistance_table, tmp_path, text) == [
        (4, "`shaft_low`", NUMBER, "many"),
        (3, "`depth`", "must be deeper than line 2, 8 m", "8 m"),
        (3, "`shaft_low`", "must be >= 0", "-200 kN"),
        (1, "`toe_low`", "must be given: shaft and toe come together", "no such column"),
        (3, "`shaft_best`", "must have a value in every row", "none"),
        (1, "`shaft_high`", "must be given: shaft and toe come together", "no such column"),
    ]


def test_resistance_low_above_best(tmp_path):
    ((line, place, must, _),) = told(
        read_resistance_table, tmp_path, changed(RESISTANCE_TABLE, ("8,100,200", "8,900,200"))
    )
    assert (line, place) == (None, "`shaft_best`, `toe_best`")
    assert must == "must have a total of at least that of `low` in every row"


def test_resistance_of_unknown_kind_or_setup(tmp_path):
    text = changed(RESISTANCE_TABLE, ("static,1.5", "statical,0.5"))
    assert told(read_resistance_table, tmp_path, text) == [
        (2, "`kind`", "must be one of: static, driving", "statical"),
        (2, "`setup`", "must be >= 1", "0.5"),
    ]


def test_resistance_without_any_case(tmp_path):
    problems = told(read_resistance_table, tmp_path, "depth [m],comment\n1,2\n")
    assert [must for _, _, must, _ in problems] == [
        "must have columns `shaft_best` and `toe_best`, or those of low or high"
    ]


def test_a_table_that_can_not_be_read(tmp_path):
    for reader in (read_layers, read_resistance_table):
        findings = Findings()
        assert reader(tmp_path / "none.csv", findings) is None
        assert findings.problems[0].must == "must be a file that exists"
