"""How blows lie in memory: what goes into the march, its state, and what comes out.

The state of a group of blows is one flat array: the head's block, a block for each node from the
head to the toe, the toe's block. A block is a few rows of `LANES` numbers, one for each blow of
the group. With one array and constant offsets the compiler can prove that rows do not overlap,
and runs the loops over lanes in vector registers.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Flags = NDArray[np.bool_]

LANES = 8

# Rows of the head's block: state, then constants.
RAM_X, RAM_V, HELMET_X, HELMET_V, HEAD_X, HEAD_V = (LANES * row for row in range(6))
FORCE_1, FORCE_2, LARGEST_1, LARGEST_2, MEAN = (LANES * row for row in range(6, 11))
PASSED, PASSED_MOST, FORCE_MOST = (LANES * row for row in range(11, 14))
LOADING_1, UNLOADING_1, LOADING_2, UNLOADING_2 = (LANES * row for row in range(14, 18))
RAM_KICK, HELMET_KICK, RAM_WEIGHT, HELMET_WEIGHT = (LANES * row for row in range(18, 22))
HEAD_BLOCK = LANES * 22

# Rows of a node's block: arriving waves, the wave on its way from the node above, state, constants,
# force extremes since the last check and before it.
DOWN, UP, NEXT, SPRING, DRAG, PEAK, LEAST, WORK = (LANES * row for row in range(8))
ABOVE, BELOW, WEIGHT, HALF, STRENGTH, SMITH, VISCOUS = (LANES * row for row in range(8, 15))
PEAK_ALL, LEAST_ALL = (LANES * row for row in range(15, 17))
BLOCK = LANES * 17

# Rows of the toe's block: spring, state, constants, displacement extremes as above.
STRETCH, TOE_DRAG, TOE_X, TOE_V, TOE_MOST = (LANES * row for row in range(5))
TOE_HALF, TOE_STRENGTH, TOE_SMITH, TOE_VISCOUS = (LANES * row for row in range(5, 9))
TOE_MOST_ALL = LANES * 9
TOE_BLOCK = LANES * 10

ENDED, TOO_LONG, DIVERGED = 0, 1, 2
"""Status of a blow: the ending rule was met; the step limit came first; a number became infinite
or not a number."""

COLUMNS = (
    "status",
    "steps",
    "toe_most",  # largest toe displacement from the unstressed soil [m]
    "toe_last",  # toe displacement at the end [m]
    "peak_stress",  # largest compression [Pa]
    "peak_node",
    "tension_stress",  # largest tension, positive [Pa]
    "tension_node",
    "force_most",  # largest force on the pile head [N]
    "passed_most",  # largest work done on the pile head [J]
    "balance",  # energy unaccounted for over that put in by ram and gravity [-]
    "ram_velocity",  # at the end [m/s]
    "momentum",  # of ram, helmet and pile at the end [N s]
    "soil_work",  # done on the soil, less that of gravity on the pile [J]
)
"""Columns of the result, one row for each blow."""


class Bar(NamedTuple):
    """The pile, cut into segments of equal travel time.

    Parameters
    ----------
    step : float
        Time step: the travel time of every segment. [s]
    impedance, area : (segments,) float64 array
        [N s/m], [m2]
    weight : (segments + 1,) float64 array
        Weight lumped at the nodes; zero without gravity. [N]
    """

    step: float
    impedance: Floats
    area: Floats
    weight: Floats


class Grounds(NamedTuple):
    """Soil springs and the state at rest, for each combination of stage and static load.

    Parameters
    ----------
    stiffness, strength, damping : (grounds, nodes) float64 array
        Shaft springs: [N/m], [N], and damping factor [s/m].
    toe : (grounds, 3) float64 array
        Toe spring: stiffness [N/m], strength [N], damping factor [s/m].
    settlement : (grounds, nodes) float64 array
        Displacement at rest, from the unstressed soil. [m]
    smith : bool
        Damping on the static force of the moment (True) or on the strength (False).
    """

    stiffness: Floats
    strength: Floats
    damping: Floats
    toe: Floats
    settlement: Floats
    smith: bool


class Blows(NamedTuple):
    """What strikes the pile, a row for each blow.

    Parameters
    ----------
    ground : (blows,) int64 array
        Row of `Grounds`.
    substeps : (blows,) int64 array
        Sub-steps of the head in each step; equal within each group of `LANES` rows.
    head : (blows, 9) float64 array
        Ram mass [kg], impact velocity [m/s], hammer cushion's loading and unloading stiffness
        [N/m], helmet mass [kg], pile cushion's loading and unloading stiffness [N/m], weight of
        the ram, weight of helmet and of a hammer frame on it (both zero without gravity) [N].
    """

    ground: Integers
    substeps: Integers
    head: Floats
