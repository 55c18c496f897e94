"""Golden: what the example jobs gave when they were last looked at. Our own past answers, no check.

A change here is not wrong in itself: look at it, and store it with ``pytest --update-golden``.
"""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from tests import examples

pytestmark = pytest.mark.golden
STORED = Path(__file__).with_name("examples.json")
EXACT = ("hammer", "verdict", "governs", "cushion")
FIGURES = (
    "stroke_m",
    "set_mm",
    "blow_energy_kJ",
    "transferred_energy_kJ",
    "peak_compression_MPa",
    "peak_tension_MPa",
    "reach_ratio",
    "blows_total",
    "drive_minutes",
)
TOLERANCE = 1e-6
"""Room for the order of operations of other processors and compilers, relative. [-]"""
CANCELLED = 1e-5
"""The set is a difference of displacements of some 10 mm, good to a millionth of them. [mm]"""


def figures(name: str) -> list[dict[str, object]]:
    document = examples.ranking(name).to_dict()
    entries = [*document["options"], *document["rejected"]]  # type: ignore[misc]
    return [{key: entry[key] for key in (*EXACT, *FIGURES)} for entry in entries]


@pytest.mark.parametrize("name", [*examples.NAMES, *examples.DRIVES])
def test_an_example_gives_what_it_gave(name, update_golden):
    today = figures(name)
    stored = json.loads(STORED.read_text(encoding="utf-8")) if STORED.exists() else {}
    if update_golden:
        text = json.dumps(stored | {name: today}, indent=1, sort_keys=True)
        STORED.write_text(text + "\n", encoding="utf-8")
        pytest.skip("stored")
    then = stored[name]
    assert [entry["hammer"] for entry in today] == [entry["hammer"] for entry in then]
    for entry, before in zip(today, then, strict=True):
        assert {k: entry[k] for k in EXACT} == {k: before[k] for k in EXACT}
        # Absent figures are absent in both: approx knows no None.
        there = [key for key in FIGURES if entry[key] is not None]
        assert there == [key for key in FIGURES if before[key] is not None]
        assert {key: entry[key] for key in there} == pytest.approx(
            {key: before[key] for key in there}, rel=TOLERANCE, abs=CANCELLED
        )
