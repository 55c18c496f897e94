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
    Integers,
)
from matchup.wave.march import _step_head, _step_shaft, _step_toe
from matchup.wave.start import fill_lanes


@compiled
def record(bar: Bar, grounds: Grounds, blows: Blows, rows: Integers, forces: Floats) -> None:
    """March a group of blows for a given number of steps and keep the forces of the first.

    The steps are those of `matchup.wave.march.march`, which keeps extremes alone. At the end of a
    step each segment is filled by one wave running down and one running up, so the force in it is
    their sum, without interpolation.

    Parameters
    ----------
    bar : Bar
    grounds : Grounds
    blows : Blows
    rows : (LANES,) int64 array
        Rows of `blows`, all of one number of sub-steps; the first one is kept.
    forces : (steps, segments) float64 array
        Modified in place: force in the segments at the end of each step, compression positive. [N]
    """
    nodes = bar.weight.size
    state = np.empty(HEAD_BLOCK + nodes * BLOCK + TOE_BLOCK)
    fill_lanes(bar, grounds, blows, rows, state)
    substeps = blows.substeps[rows[0]]
    for step in range(1, forces.shape[0] + 1):
        _step_head(state, bar.step / substeps, substeps)
        _step_shaft(state, nodes)
        _step_toe(state, nodes, bar.step)
        for i in range(nodes - 1):
            here = HEAD_BLOCK + i * BLOCK
            forces[step - 1, i] = state[here + BLOCK + DOWN] + state[here + UP]
        # As the march does at its checks.
        if step % (nodes - 1) == 0:
            catch_rebound(state, 0)
