"""Maps over every stage: a cell is open where a scan of every stage finds it works at all."""

from __future__ import annotations

from dataclasses import replace
from functools import cache

import numpy as np
import pytest

from matchup.analysis.rig import Rig
from matchup.model.job import Job
from matchup.model.limits import stress_limits
from matchup.search.stroke_map import OPEN_CELL, RUNNING, SHORT, StrokeMap, map_strokes
from tests import drives, jobs

JOBS = {
    "by hand": jobs.job(
        stages=(jobs.SOFT, jobs.MIDDLE, jobs.FINAL), cushions=jobs.space(sheets=(4, 8, 14))
    ),
    "drive": drives.job(),
    "drive within wide limits": drives.job(
        limits=stress_limits(jobs.concrete(), compression_stress=40e6, tension_stress=20e6)
    ),
    "drive with a case not required": drives.job(
        drives.stations(cases={"best": 1.0, "high": 1.6}), required=("best",)
    ),
    "steel drive": drives.job(
        drives.stations(((3.0, 160.0, 90.0), (8.0, 320.0, 260.0), (12.0, 600.0, 700.0))),
        pile=jobs.tube(),
        cushions=None,
    ),
}


@cache
def mapped(name: str) -> StrokeMap:
    return map_strokes(JOBS[name], JOBS[name].hammers[1], None, 1)


def looked(job: Job) -> list[int]:
    """Stages of required cases that blows are struck at; a drive's pile may run on the way."""
    rig = Rig(job, 1)
    places = [place for course in job.courses if course.required for place in course.stages]
    return [place for place in places if not rig.runs(place, 1)]


@pytest.mark.parametrize("name", JOBS)
def test_a_cell_is_open_where_it_works_at_every_stage_of_every_required_case(name):
    job, found = JOBS[name], mapped(name)
    rig = Rig(job, 1)
    limits = (job.limits.compression, job.limits.tension)
    assert found.everywhere
    for row, _ in enumerate(found.stacks):
        cells = {place: jobs.scan(rig, place, 1, row) for place in looked(job)}
        for column, stroke in enumerate(found.strokes):
            closing = set()
            for place, cell in cells.items():
                at = int(np.argmin(np.abs(np.array(cell.strokes) - stroke)))
                needed = job.stages[place].set_needed
                if cell.sets[at] < needed or not cell.holds(at, *limits):
                    closing.add(job.stages[place].name)
            state, closed_at = found.states[row][column], found.closed_at[row][column]
            assert (state == OPEN_CELL) == (not closing)
            assert (closed_at in closing) if closing else closed_at == ""


@pytest.mark.parametrize("name", JOBS)
def test_an_open_cell_tells_the_worst_stresses_of_all_stages_and_the_targets_set(name):
    job, found = JOBS[name], mapped(name)
    rig = Rig(job, 1)
    for row, states in enumerate(found.states):
        for column, state in enumerate(states):
            if state != OPEN_CELL:
                continue
            stroke = found.strokes[column]
            cells = [jobs.scan(rig, place, 1, row) for place in looked(job)]
            at = int(np.argmin(np.abs(np.array(cells[0].strokes) - stroke)))
            worst = max(cell.compression[at] for cell in cells) / job.limits.compression
            assert found.compression_uses[row, column] == pytest.approx(worst, rel=1e-9)
            target = jobs.scan(rig, job.stages.index(found.stage), 1, row)
            assert found.sets[row, column] == pytest.approx(target.sets[at], rel=1e-9)


def test_open_and_closed_cells_both_occur_and_some_close_on_the_way():
    states = {name: {s for row in mapped(name).states for s in row} for name in JOBS}
    assert sum(OPEN_CELL in seen for seen in states.values()) >= 2
    assert all(len(seen) > 1 for seen in states.values())
    targets = {job.stages[course.target].name for job in JOBS.values() for course in job.courses}
    closed = {c for name in JOBS for row in mapped(name).closed_at for c in row if c}
    assert closed - targets
    assert closed & targets


def test_the_target_of_every_required_case_is_looked_at_first():
    found = mapped("drive")
    short = {
        found.closed_at[row][column]
        for row, states in enumerate(found.states)
        for column, state in enumerate(states)
        if state == SHORT
    }
    assert "12.5 m, low" in short or "12.5 m, high" in short
    assert mapped("drive with a case not required").stage.name == "12.5 m, best"


def test_what_a_closed_cell_has_cost_is_not_spent_again_at_the_next_stage():
    everything = mapped("drive").analyses
    job = JOBS["drive"]
    alone = sum(map_strokes(job, job.hammers[1], stage, 1).analyses for stage in job.stages)
    assert everything < 0.8 * alone


def test_a_station_that_the_pile_goes_down_through_closes_nothing_unless_it_is_asked_for():
    job = JOBS["drive"]
    hammer = job.hammers[1]
    soft = job.stages[0]
    alone = map_strokes(job, hammer, soft, 1)
    assert {state for row in alone.states for state in row} == {RUNNING}
    assert not alone.is_open
    assert soft.name not in {name for row in mapped("drive").closed_at for name in row}
    by_hand = replace(job, drive=None)
    everywhere = map_strokes(by_hand, hammer, None, 1)
    assert soft.name in {name for row in everywhere.closed_at for name in row}
