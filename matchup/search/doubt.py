"""Doubt: what becomes of a planned option when the inputs are not what the job says."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from matchup.analysis.rig import Tell
from matchup.analysis.sampling import SCRAMBLINGS, Sampler, factors
from matchup.model.job import Job
from matchup.search.influence import find_influences
from matchup.search.odds import Odds, probability, spread
from matchup.search.option import DRIVES, NOT_REACHED, REFUSES, VERDICTS, Option
from matchup.search.player import BROKEN, Outcomes, Player, by_column
from matchup.wave.layout import Floats

MOST_SAMPLES = 2**16
"""More are not drawn, whatever standard error is asked for."""


def find_odds(
    job: Job,
    option: Option,
    samples: int,
    workers: int | None = None,
    tell: Tell | None = None,
    *,
    influences: bool = False,
) -> Odds:
    """Return what becomes of an option under the job's doubt.

    Parameters
    ----------
    job : Job
        With a `doubt`.
    option : Option
    samples : int
        At least; what is drawn is a power of two of each scrambling. Doubled until the job's
        standard error is kept.
    influences : bool
        Find out as well what matters, with about as many samples again.
    """
    assert job.doubt is not None
    player = Player(job, option, workers, tell)
    sampler = Sampler(len(job.doubt.inputs), job.search.seed)
    each = 2 ** math.ceil(math.log2(max(1, samples / SCRAMBLINGS)))
    parts: list[Outcomes] = []
    while True:
        points = sampler.draw(each)
        rows = factors(job.doubt, points.reshape(-1, points.shape[-1]))
        shape = (SCRAMBLINGS, each)
        parts.append(by_column(lambda c, to=shape: c[0].reshape(to), player.play(rows)))
        odds = _odds(by_column(np.hstack, *parts), player)
        enough = job.doubt.standard_error is None or odds.worst_error <= job.doubt.standard_error
        if enough or 2 * odds.samples > MOST_SAMPLES:
            break
        each = odds.samples // SCRAMBLINGS
    if influences:
        odds = replace(odds, influences=find_influences(player, samples))
    return replace(odds, analyses=player.spent)


def _odds(found: Outcomes, player: Player) -> Odds:
    """Return the figures of outcomes whose columns are (scramblings, samples each)."""
    reaches = found.reaches
    refused = found.stopped_by(REFUSES, NOT_REACHED)
    others = [VERDICTS[place] for place in np.unique(found.verdict)]
    told = (DRIVES, REFUSES, NOT_REACHED, *BROKEN)
    return Odds(
        samples=reaches.size,
        scramblings=len(reaches),
        strokes=player.doubt.strokes,
        case=player.case,
        works=probability(found.works),
        reaches=probability(reaches),
        refuses=probability(found.stopped_by(REFUSES)),
        short=probability(found.stopped_by(NOT_REACHED)),
        breaks=probability(found.compression | found.tension),
        compression=probability(found.compression),
        tension=probability(found.tension),
        others=tuple((v, probability(found.stopped_by(v))) for v in others if v not in told),
        refusal_depth=spread(np.where(refused, found.depth, np.nan)),
        refusals=_by_depth(found.depth[refused], reaches.size),
        blows=spread(np.where(reaches, found.blows, np.nan)),
        seconds=spread(np.where(reaches, found.seconds, np.nan)),
        stress_use=spread(found.stress_use),
        influences=None,
        analyses=player.spent,
    )


def _by_depth(depths: Floats, samples: int) -> tuple[tuple[float, float], ...]:
    """Return the probability of being stopped at each penetration."""
    at, counts = np.unique(depths, return_counts=True)
    return tuple(zip(at.tolist(), (counts / samples).tolist(), strict=True))
