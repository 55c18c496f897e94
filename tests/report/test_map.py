"""The stroke map: its answer counts what it shows."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from matchup.model.cushion import Stack
from matchup.report.mapped import map_page
from matchup.report.page import page_text
from matchup.report.shown import Units
from matchup.search.stroke_map import OPEN_CELL, SHORT, SQUEEZED, StrokeMap
from tests import examples, jobs
from tests.report.plans import sheets

METRIC = Units("metric")


def drawn(states: list[list[str]], step: float = 0.1) -> StrokeMap:
    """A map with the states given and no figures."""
    shape = (len(states), len(states[0]))
    blank = np.full(shape, np.nan)
    return StrokeMap(
        job=jobs.small_job(),
        hammer=jobs.hydraulic(5.0, name="Curlew"),
        stage=jobs.FINAL,
        stacks=tuple(sheets(count) for count in range(4, 4 + shape[0])),
        strokes=step * np.arange(1, shape[1] + 1),
        states=tuple(tuple(row) for row in states),
        closed_at=tuple(("",) * len(row) for row in states),
        sets=blank,
        compression_uses=blank,
        tension_uses=blank,
        analyses=0,
    )


def text(found: StrokeMap, width: int = 100) -> str:
    return page_text(map_page(found, METRIC), width)


def rows(shown: str) -> list[str]:
    return [line for line in shown.splitlines() if " oak " in line or line.endswith(" oak")]


def test_the_answer_names_cushions_and_strokes():
    found = drawn([[SHORT, SHORT, SHORT], [SHORT, OPEN_CELL, SQUEEZED], [SHORT, SHORT, OPEN_CELL]])
    assert text(found).splitlines()[0] == (
        "Curlew at stage 'final set': it works on 2 of 3 cushions, at strokes of 0.20 m to 0.30 m."
    )
    assert "# open, . set not reached, c compression." in text(found)


def test_one_cushion_or_none_is_not_counted():
    assert "it works at 0.20 m." in text(drawn([[SHORT, OPEN_CELL]]))
    assert "no stroke works." in text(drawn([[SHORT, SHORT]]))
    assert "no stroke works on any cushion." in text(drawn([[SHORT], [SHORT]]))
    bare = replace(drawn([[SHORT, OPEN_CELL]]), stacks=(Stack(None, None),))
    assert "none  .  #" in text(bare)


@pytest.mark.parametrize("width", [100, 80, 40])
@pytest.mark.parametrize("count", [1, 24, 60, 150])
def test_every_cushion_that_works_shows_where(width, count):
    states = [[SHORT] * count for _ in range(6)]
    for row, column in enumerate(np.linspace(0, count - 1, 5).astype(int)):
        states[row][column] = OPEN_CELL
    shown = text(drawn(states, 0.01), width)
    assert max(map(len, shown.splitlines())) <= width
    assert "it works on 5 of 6 cushions" in shown.replace("\n", " ") or count == 1
    assert ["#" in line for line in rows(shown)] == [True] * 5 + [False]


def test_strokes_left_out_are_counted():
    found = drawn([[SHORT] * 150], 0.01)
    assert "for want of width" in text(found, 80)
    assert "for want of width" not in text(drawn([[SHORT] * 60], 0.01), 80)


def test_ruler_labels_stand_over_their_columns():
    for width in (100, 60, 40):
        shown = text(drawn([[SHORT] * 20 + [OPEN_CELL]]), width)
        ruler, row = (line for line in shown.splitlines() if "0.10" in line or " oak " in line)
        assert ruler.index("0.10") == row.index(".")
        # The last stroke of 2.10 m is open: no label may stand to the right of it.
        assert ruler.rindex(ruler.split()[-1]) <= row.index("#")


@pytest.mark.parametrize("width", [100, 80])
def test_an_example_fits(width):
    shown = examples.window("final_set", "Avocet").to_text(width=width)
    assert max(map(len, shown.splitlines())) <= width
