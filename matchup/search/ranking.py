"""The ranking: every hammer of a job, best first."""

from __future__ import annotations

import time
from collections.abc import Collection
from dataclasses import replace

from matchup.analysis.rig import Rig, Tell
from matchup.errors import InputError, Problem
from matchup.model.job import Job
from matchup.search.cure import find_cures
from matchup.search.doubt import find_odds
from matchup.search.fit import sort_hammers
from matchup.search.option import DOES_NOT_FIT, NOT_ANALYSED, PILE_RUNS, Option, Ranking
from matchup.search.plan import Planner
from matchup.search.reach import find_reach

LOOKED_AT = 5
"""Options of a ranking whose odds under doubt are looked at."""


def rank_hammers(job: Job, workers: int | None = None, tell: Tell | None = None) -> Ranking:
    """Return the ranking of a job's hammers.

    Parameters
    ----------
    job : Job
    workers : int or None
        Threads; None takes as many as there are processors. The answer does not depend on it.
    tell : callable or None
        Called with the number of blows of every batch.

    Raises
    ------
    InputError
        If cost is asked for where it can't be known.
    """
    _check_objective(job)
    started = time.perf_counter()
    fitting = sort_hammers(job)
    options: list[Option] = []
    spent = 0
    if fitting.hammers:
        options, spent = _plan(replace(job, hammers=fitting.hammers), workers, tell)
    driving = [option for option in options if option.drives]
    failing = [option for option in options if not option.drives]
    return Ranking(
        job=replace(job, notices=(*job.notices, *fitting.notes)),
        options=tuple(sorted(driving, key=lambda option: option.cost)),
        rejected=(*sorted(failing, key=_distance), *fitting.unfit),
        analyses=spent,
        runtime=time.perf_counter() - started,
    )


def _plan(job: Job, workers: int | None, tell: Tell | None) -> tuple[list[Option], int]:
    """Return the option of every hammer, and the blows that were computed for them."""
    planner = Planner(Rig(job, workers, tell))
    options = planner.options()
    options, blows_for_reach = find_reach(job, options, workers, tell)
    options, blows_for_cures = find_cures(planner, options)
    return options, planner.rig.spent + blows_for_reach + blows_for_cures


def _check_objective(job: Job) -> None:
    if job.search.objective == "cost" and job.drive is None:
        must = "must be energy or time where stages are given by hand"
        do = "Blows and minutes of a whole drive follow from a [ground]."
        raise InputError([Problem(job.file, None, "search.objective", must, "cost", do)])


def with_odds(
    ranking: Ranking,
    samples: int,
    workers: int | None = None,
    tell: Tell | None = None,
    *,
    influences: Collection[str] = (),
) -> Ranking:
    """Return a ranking whose best options have their odds under the job's doubt.

    Parameters
    ----------
    ranking : Ranking
    samples : int
        Of each option, at least.
    workers, tell
        As for `rank_hammers`.
    influences : collection of str
        Names of hammers that are looked at in any case, and of which it is found out what matters.
    """
    started = time.perf_counter()
    options, rejected = ranking.options, ranking.rejected
    found = {
        option.hammer.name: find_odds(
            ranking.job,
            option,
            samples,
            workers,
            tell,
            influences=option.hammer.name in influences,
        )
        for place, option in enumerate((*options, *rejected))
        if place < min(LOOKED_AT, len(options)) or option.hammer.name in influences
        if option.verdict not in (PILE_RUNS, NOT_ANALYSED, DOES_NOT_FIT)
    }
    return replace(
        ranking,
        options=tuple(replace(o, odds=found.get(o.hammer.name)) for o in options),
        rejected=tuple(replace(o, odds=found.get(o.hammer.name)) for o in rejected),
        analyses=ranking.analyses + sum(odds.analyses for odds in found.values()),
        runtime=ranking.runtime + time.perf_counter() - started,
    )


def _distance(option: Option) -> tuple[float, float]:
    """Return how far an option is from working; the hopeless are told apart by their reach."""
    assert option.failing is not None
    return option.failing.distance, -(option.reach or 0.0)
