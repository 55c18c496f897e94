"""The ranking: every hammer of a job, best first."""

from __future__ import annotations

import time
from collections.abc import Collection
from dataclasses import replace

from matchup.analysis.rig import Rig, Tell
from matchup.model.job import Job
from matchup.search.cure import find_cures
from matchup.search.doubt import find_odds
from matchup.search.option import NOT_ANALYSED, PILE_RUNS, Option, Ranking
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
    """
    started = time.perf_counter()
    planner = Planner(Rig(job, workers, tell))
    options = planner.options()
    options, blows_for_reach = find_reach(job, options, workers, tell)
    options, blows_for_cures = find_cures(planner, options)
    driving = [option for option in options if option.drives]
    failing = [option for option in options if not option.drives]
    return Ranking(
        job=job,
        options=tuple(sorted(driving, key=lambda option: option.cost)),
        rejected=tuple(sorted(failing, key=_distance)),
        analyses=planner.rig.spent + blows_for_reach + blows_for_cures,
        runtime=time.perf_counter() - started,
    )


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
        if option.verdict not in (PILE_RUNS, NOT_ANALYSED)
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
