"""One blow marched again to keep the force all along the pile, for pictures of its waves."""

from __future__ import annotations

import numpy as np

from matchup.wave.finish import catch_rebound
from matchup.wave.laws import compiled
from matchup.wave.layout import (
    BLOCK,
    DOWN,
    HEAD_BLOCK,
    TOE_BLOCK,
    UP,
    Bar,
    Blows,
    Floats,
    Grounds,
)
from matchup.wave.march import advance, head_rounds
from matchup.wave.start import fill_lane


@compiled
def record(bar: Bar, grounds: Grounds, blows: Blows, row: int, forces: Floats) -> None:
    """March a blow for a given number of steps and keep the forces.

    The steps are those of `matchup.wave.march.march`, which keeps extremes alone. At the end of a
    step each segment is filled by one wave running down and one running up, so the force in it is
    their sum, without interpolation.

    Parameters
    ----------
    row : int
        Of `blows`.
    forces : (steps, segments) float64 array
        Modified in place: force in the segments at the end of each step, compression positive. [N]
    """
    nodes = bar.weight.size
    state = np.zeros(HEAD_BLOCK + nodes * BLOCK + TOE_BLOCK)
    rounds, substep = head_rounds(bar, blows.substeps[row])
    fill_lane(bar, grounds, blows, row, substep, state, 0)
    for step in range(1, forces.shape[0] + 1):
        advance(bar, state, rounds, substep)
        for i in range(nodes - 1):
            here = HEAD_BLOCK + i * BLOCK
            forces[step - 1, i] = state[here + BLOCK + DOWN] + state[here + UP]
        # As the march does at its checks.
        if step % (nodes - 1) == 0:
            catch_rebound(state)
