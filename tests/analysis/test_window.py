"""Windows against a plain scan of every setting, blow by blow."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from matchup.analysis import cells as window
from matchup.analysis.cells import Cells, job_demands, settings
from matchup.analysis.rig import Rig
from matchup.analysis.window import WindowFinder
from matchup.model.job import Job
from matchup.model.limits import stress_limits
from tests import jobs

STATES = {
    window.NO_SET: "no set",
    window.COMPRESSION: "compression",
    window.TENSION: "tension",
    window.OPEN: "open",
}
TIGHT = stress_limits(jobs.concrete(), compression_stress=19e6, tension_stress=3.2e6)
CASES = {
    "concrete, one stage": jobs.job(
        cushions=jobs.space(sheets=(2, 8, 20)), hammers=(jobs.hydraulic(3.0), jobs.drop(5.0))
    ),
    "concrete, tight limits": jobs.job(
        stages=(jobs.SOFT, jobs.MIDDLE, jobs.FINAL),
        cushions=jobs.space(sheets=(2, 6, 12, 20)),
        hammers=(jobs.hydraulic(2.0), jobs.hydraulic(6.0), jobs.drop(6.0, 0.8)),
        limits=TIGHT,
    ),
    "steel without a cushion": jobs.steel_job(),
    "timber, new cushion only, reserve": jobs.timber_job(
        cushions=jobs.space((jobs.SOFTWOOD,), (1, 4), area=0.08, wears=("new",)), reserve=0.1
    ),
}


def all_cells(rig: Rig) -> Cells:
    shape = (len(rig.job.stages), len(rig.job.hammers), len(rig.stacks))
    return Cells(*(column.ravel() for column in np.indices(shape)))


def find(job: Job, workers: int | None = 1) -> tuple[WindowFinder, window.Found]:
    rig = Rig(job, workers)
    finder = WindowFinder(rig, job_demands(rig))
    return finder, finder.find(all_cells(rig))


@pytest.mark.parametrize("name", CASES)
def test_the_window_found_is_the_one_of_a_scan_over_every_setting(name: str) -> None:
    job = CASES[name]
    finder, windows = find(job)
    plain = Rig(job, 1)
    keep = 1 - job.search.reserve
    compression, tension = keep * job.limits.compression, keep * job.limits.tension
    opened = np.flatnonzero(windows.state == window.OPEN)
    tops = np.full(windows.stroke.size, np.nan)
    some = windows.cells.take(opened)
    tops[opened] = finder.stroke(some.hammer, finder.tops(some, windows.at[opened]))
    for row, place in enumerate(zip(*windows.cells[:3], strict=True)):
        stage, hammer, stack = map(int, place)
        cell = jobs.scan(plain, stage, hammer, stack)
        needed = (1 + job.search.reserve) * job.stages[stage].set_needed
        expected = jobs.plain_window(cell, needed, compression, tension)
        where = f"{job.stages[stage].name}, {job.hammers[hammer].name}, stack {stack}"
        assert STATES[int(windows.state[row])] == expected.state, where
        assert windows.stroke[row] == pytest.approx(cell.strokes[expected.at], rel=1e-12), where
        assert bool(windows.lifted[row]) == expected.lifted, where
        assert windows.set[row] == pytest.approx(cell.sets[expected.at], rel=1e-9), where
        assert windows.compression[row] == pytest.approx(cell.compression[expected.at], rel=1e-9)
        assert windows.tension[row] == pytest.approx(cell.tension[expected.at], rel=1e-9)
        if expected.state == "open":
            top = jobs.plain_top(cell, expected.at, compression, tension)
            assert tops[row] == pytest.approx(cell.strokes[top], rel=1e-12), where


@pytest.mark.parametrize("name", CASES)
def test_the_stroke_nearest_to_a_wanted_one_works_and_none_scanned_between_does(name: str) -> None:
    job = CASES[name]
    rig = Rig(job, 1)
    finder = WindowFinder(rig, job_demands(rig))
    keep = 1 - job.search.reserve
    limits = keep * job.limits.compression, keep * job.limits.tension
    cells = all_cells(rig)
    for share in (0.0, 0.4, 1.0):
        wanted = np.floor(share * finder.last_settings(cells.hammer)).astype(np.int64)
        found = finder.nearest(cells, wanted)
        for row, place in enumerate(zip(*cells[:3], strict=True)):
            stage, hammer, stack = map(int, place)
            cell = jobs.scan(rig, stage, hammer, stack)
            needed = (1 + job.search.reserve) * job.stages[stage].set_needed

            def works(i: int, cell: jobs.Scan = cell, needed: float = needed) -> bool:
                return cell.sets[i] >= needed and cell.holds(i, *limits)

            at = int(found.at[row])
            if found.state[row] != window.OPEN:
                expected = jobs.plain_window(cell, needed, *limits)
                assert expected.state == STATES[int(found.state[row])]
                assert not works(int(wanted[row]))
                continue
            assert works(at)
            assert found.set[row] == pytest.approx(cell.sets[at], rel=1e-9)
            if at < wanted[row]:
                above = [i for i in finder.rungs(hammer, int(wanted[row]), up=False) if i > at]
                assert not any(works(int(i)) for i in (*above, wanted[row]))


def test_the_ends_of_a_window_are_those_of_a_walk_over_every_setting() -> None:
    job = CASES["concrete, tight limits"]
    finder, windows = find(job)
    opened = np.flatnonzero(windows.state == window.OPEN)
    some = windows.cells.take(opened)
    tops = finder.tops(some, windows.at[opened])
    middle = (windows.at[opened] + tops) // 2
    lows, highs = finder.ends(some, middle)
    rig = Rig(job, 1)
    limits = job.limits.compression, job.limits.tension
    for row, place in enumerate(zip(*some[:3], strict=True)):
        stage, hammer, stack = map(int, place)
        cell = jobs.scan(rig, stage, hammer, stack)
        at = int(middle[row])
        assert highs[row] == jobs.plain_top(cell, at, *limits)
        low = at
        needed = job.stages[stage].set_needed
        while low and cell.sets[low - 1] >= needed and cell.holds(low - 1, *limits):
            low -= 1
        assert lows[row] == low


def test_one_wear_state_that_counts_is_the_only_one_struck() -> None:
    job = CASES["concrete, one stage"]
    rig = Rig(job, 1)
    finder = WindowFinder(rig, job_demands(rig))
    every = all_cells(rig)
    at = finder.last_settings(every.hammer)
    both = finder.strike(every, at)
    alone = [finder.strike(every._replace(wear=np.full(at.size, wear)), at) for wear in (0, 1)]
    assert np.array_equal(both.set, np.minimum(alone[0].set, alone[1].set))
    assert np.array_equal(both.tension, np.maximum(alone[0].tension, alone[1].tension))
    assert not np.array_equal(alone[0].set, alone[1].set)


def test_the_cases_hold_every_state_and_a_window_that_opens_above_a_closed_stroke() -> None:
    found = [find(job)[1] for job in CASES.values()]
    assert {STATES[int(s)] for windows in found for s in windows.state} == set(STATES.values())
    assert any(windows.lifted.any() for windows in found)


def test_where_stresses_hold_only_without_the_stroke_tolerance_the_window_is_closed() -> None:
    """A limit set between the stresses at 1.00 and at 1.02 times the stroke closes the stroke."""
    job = jobs.job(
        cushions=jobs.space((jobs.PLYWOOD,), (6,), wears=("new",)), hammers=(jobs.hydraulic(3.0),)
    )
    _, windows = find(job)
    stroke = windows.stroke[0]
    zero = np.zeros(3, np.int64)
    answers = Rig(job, 1).answer(zero, zero, zero, zero, stroke * np.array([0.98, 1.0, 1.02]))
    less, planned, more = answers.compression
    assert less < planned < more
    for limit, state in ((0.5 * (planned + more), window.COMPRESSION), (1.001 * more, window.OPEN)):
        limits = stress_limits(job.pile, compression_stress=limit, tension_stress=50e6)
        _, tried = find(replace(job, limits=limits))
        assert tried.stroke[0] == stroke
        assert tried.state[0] == state


@pytest.mark.parametrize("step", [0.25, 0.3, None])
def test_settings_start_at_the_least_stroke_and_always_hold_the_largest(step: float | None) -> None:
    hammer = jobs.hydraulic(3.0, 1.15, stroke_step=step)
    found = settings(hammer).tolist()
    assert found == pytest.approx(jobs.all_settings(hammer), rel=1e-12)
    assert found[0] == 0.1
    assert found[-1] == 1.15
    gaps = np.diff(found)
    assert gaps[:-1] == pytest.approx(step or 0.01)
    assert 0 < gaps[-1] <= (step or 0.01) * (1 + 1e-9)


def test_a_hammer_with_one_stroke_has_one_setting() -> None:
    assert settings(jobs.hydraulic(3.0, 0.9, stroke_min=0.9, stroke_step=None)).tolist() == [0.9]


def test_a_set_reached_only_at_the_largest_stroke_between_two_steps_is_found() -> None:
    base = jobs.job(cushions=jobs.space(sheets=(6,)), hammers=(jobs.hydraulic(3.0),))
    odd = jobs.hydraulic(3.0, 1.17, stroke_step=0.5)
    rig = Rig(replace(base, hammers=(odd,)), 1)
    cell = jobs.scan(rig, 0, 0, 0)
    assert cell.strokes == pytest.approx([0.1, 0.6, 1.1, 1.17])
    stage = replace(base.stages[0], set_needed=0.5 * (cell.sets[2] + cell.sets[3]))
    _, windows = find(replace(base, hammers=(odd,), stages=(stage,)))
    assert windows.stroke[0] == 1.17


def test_no_blow_is_computed_twice(monkeypatch: pytest.MonkeyPatch) -> None:
    from matchup.analysis import rig as rig_module

    struck: list[tuple[float, ...]] = []
    strike = rig_module.strike_stressed

    def counted(chains, strikes, *more):  # type: ignore[no-untyped-def]
        struck.extend(zip(*(np.asarray(column).tolist() for column in strikes), strict=True))
        return strike(chains, strikes, *more)

    monkeypatch.setattr(rig_module, "strike_stressed", counted)
    finder, windows = find(CASES["concrete, tight limits"])
    opened = np.flatnonzero(windows.state == window.OPEN)
    finder.tops(windows.cells.take(opened), windows.at[opened])
    finder.find(all_cells(finder.rig))
    # Told apart as the solver tells them apart: NaN stands for the hammer's own cushion.
    distinct = {tuple(-1.0 if x != x else x for x in blow) for blow in struck}
    assert finder.rig.spent == len(struck) == len(distinct)
    assert len(struck) > 500


def test_windows_do_not_depend_on_the_number_of_workers() -> None:
    job = CASES["concrete, tight limits"]
    (one, alone), (two, both) = find(job, 1), find(job, 3)
    assert one.rig.spent == two.rig.spent
    for column, same in zip(_columns(alone), _columns(both), strict=True):
        assert np.array_equal(column, same, equal_nan=True)


def _columns(windows: window.Found) -> list[np.ndarray]:
    names = ("state", "stroke", "set", "compression", "tension", "lifted")
    return [getattr(windows, name) for name in names]
