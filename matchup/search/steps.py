"""Step by step, many rows at once, until something holds."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from matchup.wave.layout import Flags, Integers


def first_step(
    holds: Callable[[Integers, Integers], Flags], count: int, last: int, stride: int
) -> Integers:
    """Return the least step at which something holds, as far as strides tell.

    Strides are taken upwards from step 0, which is not asked about, to the first at which it
    holds; within that last stride the step is found by bisection.

    Parameters
    ----------
    holds : callable
        Takes rows and, for each, a step from 1 to `last`; returns whether it holds.
    count : int
        Number of rows.
    last, stride : int

    Returns
    -------
    (count,) int64 array
        ``last + 1`` where it holds at no stride.
    """
    low = np.zeros(count, np.int64)
    high = np.full(count, last + 1)
    while (rows := np.flatnonzero((high > last) & (low < last))).size:
        ahead = np.minimum(low[rows] + stride, last)
        held = holds(rows, ahead)
        high[rows[held]] = ahead[held]
        low[rows[~held]] = ahead[~held]
    while (rows := np.flatnonzero((high <= last) & (high - low > 1))).size:
        middle = (low[rows] + high[rows]) // 2
        held = holds(rows, middle)
        high[rows[held]] = middle[held]
        low[rows[~held]] = middle[~held]
    return high
