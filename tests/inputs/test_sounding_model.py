"""A sounding checks itself, and the example is the one that its generator writes."""

from __future__ import annotations

import re
from pathlib import Path

import numpy as np
import pytest

from matchup.errors import ModelError
from matchup.inputs.findings import Findings
from matchup.inputs.sounding import read_sounding
from matchup.model.sounding import Sounding
from tests.invented_ground import CONE_TEST, END, LAYERS, cone_test, layers

NAN = np.nan


def sounding(**changes) -> Sounding:
    given = {
        "name": "B7",
        "depth": np.array([1.0, 2.0, 3.0]),
        "tip": np.array([NAN, 1e6, 2e6]),
        "sleeve": np.array([NAN, 1e3, NAN]),
        "pore_pressure": np.array([-1e3, NAN, NAN]),
    }
    return Sounding(**(given | changes))


def test_a_sound_sounding_stands():
    assert sounding().area_ratio is None


@pytest.mark.parametrize(
    ("changes", "field"),
    [
        ({"name": " "}, "name"),
        ({"depth": np.array([1.0, 1.0, 2.0])}, "depth"),
        ({"depth": np.array([-1.0, 1.0, 2.0])}, "depth"),
        ({"depth": np.array([1.0, NAN, 2.0])}, "depth"),
        ({"depth": np.array([1.0])}, "depth"),
        ({"tip": np.array([1e6, 2e6])}, "tip"),
        ({"tip": np.full(3, NAN)}, "tip"),
        ({"tip": np.array([1e6, -1.0, 2e6])}, "tip"),
        ({"tip": np.array([1e6, np.inf, 2e6])}, "tip"),
        ({"sleeve": np.array([1e6, -1.0, 2e6])}, "sleeve"),
        ({"pore_pressure": np.array([1e6, np.inf, 2e6])}, "pore_pressure"),
        ({"area_ratio": 1.2}, "area_ratio"),
        ({"predrilled": -1.0}, "predrilled"),
        ({"water": NAN}, "water"),
    ],
)
def test_each_rule_is_told(changes, field):
    with pytest.raises(ModelError) as caught:
        sounding(**changes)
    assert field in {fault.field for fault in caught.value.faults}


def test_all_broken_rules_come_together():
    with pytest.raises(ModelError) as caught:
        sounding(name="", tip=np.full(3, NAN), area_ratio=0.0)
    assert [fault.field for fault in caught.value.faults][:2] == ["name", "area_ratio"]


def test_the_example_is_what_its_generator_writes():
    """To one in the last place printed: `exp` and `log` may round apart between machines."""
    written, made = (re.split(r"([;\n])", t) for t in (CONE_TEST.read_text("utf-8"), cone_test()))
    assert len(written) == len(made)
    for old, new in zip(written, made, strict=True):
        if re.fullmatch(r"-?\d+\.\d+", old):
            assert len(old) == len(new)
            assert abs(float(old) - float(new)) < 1.5 * 10.0 ** -len(old.split(".")[1])
        else:
            assert old == new
    assert LAYERS.read_text("utf-8") == layers()


def test_the_example_is_a_full_cone_test():
    findings = Findings()
    test = read_sounding(Path(CONE_TEST), findings)
    assert not findings.problems
    assert not findings.notices
    assert "invented" in CONE_TEST.read_text("utf-8")
    assert CONE_TEST.stat().st_size < 300_000
    assert len(test.depth) == 1401
    assert test.depth[-1] == pytest.approx(END, abs=0.02)
    assert np.isnan(test.sleeve[-1])
    assert not np.isnan(test.tip[-1])
    clay = (test.depth > 2) & (test.depth < 8)
    dense = (test.depth > 16) & (test.depth < 17.5)
    assert test.tip[clay].max() < 1e6
    assert test.tip[dense].min() > 15e6
