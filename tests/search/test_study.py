"""The optimiser's answers against exact root-finding on every cushion, on twelve varied jobs."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from matchup.analysis.rig import Rig
from matchup.model.job import Job
from matchup.search import plan
from matchup.search.option import Option
from matchup.search.plan import Planner
from matchup.search.study import Study, Told, run_studies
from tests import jobs

JOBS = jobs.large_jobs()
MOST_EXCESS = 0.005
"""The answer may cost so much more than the exact one. [-]"""


def searched(job: Job, workers: int = 2) -> tuple[list[Option], int]:
    planner = Planner(Rig(job, workers))
    return planner.options(), planner.rig.spent


@pytest.mark.parametrize("name", JOBS)
def test_the_search_costs_hardly_more_than_the_best_of_all_cushions(
    name: str, monkeypatch: pytest.MonkeyPatch, record_property: pytest.RecordProperty
) -> None:
    job = JOBS[name]
    monkeypatch.setattr(plan, "LARGEST_WHOLE_SPACE", 0)
    found, spent = searched(job)
    monkeypatch.setattr(plan, "LARGEST_WHOLE_SPACE", 10**6)
    exact, spent_on_all = searched(job)
    record_property("blows of the search and of all cushions", (spent, spent_on_all))
    assert any(option.drives for option in exact)
    for one, best in zip(found, exact, strict=True):
        assert one.certificate.startswith("search: ")
        assert best.certificate.startswith("exact: ")
        assert one.drives == best.drives, one.hammer.name
        if best.drives:
            assert one.cost <= (1 + MOST_EXCESS) * best.cost, one.hammer.name


@pytest.mark.parametrize("name", JOBS)
def test_no_answer_of_the_search_breaks_a_limit_when_its_blows_are_computed_anew(
    name: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    job = JOBS[name]
    monkeypatch.setattr(plan, "LARGEST_WHOLE_SPACE", 0)
    keep = job.search.reserve
    limits = ((1 - keep) * job.limits.compression, (1 - keep) * job.limits.tension)
    rig = Rig(job, 2)
    for hammer, option in enumerate(searched(job)[0]):
        if not option.drives:
            continue
        stack = rig.stacks.index(option.stack)
        for stage, planned in enumerate(option.plans):
            for wear in range(len(rig.wears)):
                strokes = planned.stroke * np.array([1.0, 0.98, 1.02])
                places = [np.full(3, place) for place in (stage, hammer, stack, wear)]
                answers = rig.answer(*places, strokes)
                assert answers.sound.all()
                assert answers.set[0] >= (1 + keep) * planned.stage.set_needed
                assert answers.compression.max() <= limits[0]
                assert answers.tension.max() <= limits[1]


def test_the_search_spends_less_than_half_of_what_all_cushions_take(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    """On 802 cushions; what it saves grows with the space."""
    job = JOBS["two stages"]
    thicknesses = tuple(np.round(np.arange(0.04, 0.4401, 0.001), 4))
    job = replace(job, cushions=jobs.space((jobs.PLYWOOD, jobs.OAK), thicknesses=thicknesses))
    _, spent = searched(job)
    monkeypatch.setattr(plan, "LARGEST_WHOLE_SPACE", 10**6)
    _, spent_on_all = searched(job)
    assert spent < 0.5 * spent_on_all


@pytest.mark.parametrize("name", ["three stages", "fastest"])
def test_the_answer_depends_on_the_seed_alone(name: str) -> None:
    job = JOBS[name]
    assert searched(job, 1) == searched(job, 2)


def test_a_study_looks_at_the_ends_and_the_middle_of_every_material_first() -> None:
    study = Study(kinds=2, sizes=31, seed=1)
    assert study.ask()[:6] == [0, 15, 30, 31, 46, 61]


def test_a_study_ends_where_no_neighbour_is_better() -> None:
    """On a cost with one valley, and cushions below a size that do not work."""

    def told(place: int) -> Told:
        kind, size = divmod(place, 200)
        return Told(abs(size - 77) + 10.0 * kind, max(0.0, 0.01 * (60 - size)))

    study = Study(kinds=3, sizes=200, seed=3)
    run_studies({0: study}, lambda asked: {0: {place: told(place) for place in asked[0]}})
    assert study.best == 77
    assert study.neighbours() == []
    assert list(study.told)[study.best_after - 1] == study.best
    assert len(study.told) < 150


def test_where_nothing_works_the_nearest_miss_is_found() -> None:
    def told(place: int) -> Told:
        return Told(5.0, 1.0 + abs(place - 41))

    study = Study(kinds=1, sizes=120, seed=5)
    run_studies({0: study}, lambda asked: {0: {place: told(place) for place in asked[0]}})
    assert study.best == 41
