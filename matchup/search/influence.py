"""What matters: how much of an outcome's variance each input in doubt accounts for, and its swing.

Saltelli's design: two independent samples of all inputs, and for each input the first sample with
that input's column from the second.
"""

from __future__ import annotations

import math

import numpy as np

from matchup.analysis.sampling import SCRAMBLINGS, Sampler, factors
from matchup.search.odds import PERCENTILES, Estimate, Indices, Influence, Influences, Swing
from matchup.search.option import OVER_COMPRESSION, OVER_TENSION, VERDICTS
from matchup.search.player import Outcomes, Player
from matchup.wave.layout import Floats

FEWEST = 16
"""Points of each scrambling, at least."""


def find_influences(player: Player, samples: int) -> Influences:
    """Return what matters to an option, the inputs taken as independent.

    Parameters
    ----------
    player : Player
    samples : int
        About so many drives are played for the variances.
    """
    inputs = player.doubt.inputs
    design = saltelli_design(len(inputs), samples, player.job.search.seed)
    middle = np.full((1 + 2 * len(inputs), len(inputs)), PERCENTILES[1])
    for place in range(len(inputs)):
        middle[1 + 2 * place, place] = PERCENTILES[0]
        middle[2 + 2 * place, place] = PERCENTILES[2]
    flat = design.reshape(-1, len(inputs))
    drawn = factors(player.doubt, np.concatenate((middle, flat)), correlated=False)
    found = player.play(drawn)
    shape = design.shape[:-1]
    works = found.works[len(middle) :].astype(np.float64).reshape(shape)
    known = not np.isnan(found.seconds).any()
    time = (found.seconds if known else found.blows)[len(middle) :].reshape(shape)
    of_works, of_time = sobol_indices(works), sobol_indices(time)
    return Influences(
        samples=len(flat),
        inputs=tuple(
            Influence(
                one.name,
                None if of_works is None else of_works[place],
                None if of_time is None else of_time[place],
                *(
                    _swing(found, row, float(drawn[row, place]))
                    for row in (1 + 2 * place, 2 + 2 * place)
                ),
            )
            for place, one in enumerate(inputs)
        ),
        middle=_swing(found, 0, 1.0),
    )


def saltelli_design(inputs: int, samples: int, seed: int) -> Floats:
    """Return the points at which the indices are estimated.

    Parameters
    ----------
    inputs, samples, seed : int
        The number of points is at most about `samples`, and fits the sequence.

    Returns
    -------
    (inputs + 2, scramblings, each, inputs) float64 array
        The first sample, the second, and the first with each input from the second.
    """
    wanted = samples / (inputs + 2) / SCRAMBLINGS
    each = max(FEWEST, 2 ** math.floor(math.log2(max(wanted, 1))))
    both = Sampler(2 * inputs, seed).draw(each)
    first, second = both[..., :inputs], both[..., inputs:]
    mixed = np.repeat(first[None], inputs, axis=0)
    for place in range(inputs):
        mixed[place, ..., place] = second[..., place]
    return np.concatenate((first[None], second[None], mixed))


def sobol_indices(values: Floats) -> list[Indices] | None:
    """Return first- and total-order indices of every input; None where nothing varies.

    Saltelli et al. 2010 for the first order, Jansen 1999 for the total one, as in
    `scipy.stats.sobol_indices`. Standard errors by the jackknife over the scramblings.

    Parameters
    ----------
    values : (inputs + 2, scramblings, each) float64 array
        At the points of `saltelli_design`.
    """
    if np.isnan(values).any() or np.ptp(values[:2]) == 0:
        return None
    whole = _estimates(values)
    count = values.shape[1]
    without = np.array([_estimates(np.delete(values, i, axis=1)) for i in range(count)])
    spread = without - without.mean(axis=0)
    errors = np.sqrt((count - 1) / count * (spread**2).sum(axis=0))
    return [
        Indices(*(Estimate(float(whole[k, i]), float(errors[k, i])) for k in range(2)))
        for i in range(whole.shape[1])
    ]


def _estimates(values: Floats) -> Floats:
    """Return first- and total-order indices, (2, inputs) [-]."""
    values = values - values[:2].mean()
    first, second, mixed = values[0], values[1], values[2:]
    variance = values[:2].var()
    if variance == 0:
        return np.full((2, len(mixed)), np.nan)
    alone = (second * (mixed - first)).mean(axis=(1, 2)) / variance
    with_all = 0.5 * ((first - mixed) ** 2).mean(axis=(1, 2)) / variance
    return np.array([alone, with_all])


def _swing(found: Outcomes, row: int, factor: float) -> Swing:
    verdict = VERDICTS[int(found.verdict[row])]
    if found.reaches[row] and not found.works[row]:
        verdict = OVER_COMPRESSION if found.compression[row] else OVER_TENSION
    depth, blows, seconds = (
        None if np.isnan(column[row]) else float(column[row])
        for column in (found.depth, found.blows, found.seconds)
    )
    return Swing(factor, verdict, depth, blows, seconds)
