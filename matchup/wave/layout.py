"""How blows lie in memory: what goes into the march, its state, and what comes out.

The state of the blows under way is one flat array: the head's block, a block for each node from the
head to the toe, the toe's block. A block is a few rows of `LANES` numbers, one for each blow. With
one array and constant offsets the compiler can prove that rows do not overlap, and runs the loops
over lanes in vector registers. What is the same for all blows on a pile stays in `Bar`: the fewer
rows, the longer a pile fits into the fastest memory.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]
Flags = NDArray[np.bool_]

LANES = 8
SUBSTEPS = 4
"""Sub-steps of the head that are marched in registers; every step has a whole multiple."""

# Rows of the head's block: state, then constants, then what the checks find and remember.
RAM_X, RAM_V, HELMET_X, HELMET_V, HEAD_X, HEAD_V = (LANES * row for row in range(6))
FORCE_1, FORCE_2, LARGEST_1, LARGEST_2, MEAN = (LANES * row for row in range(6, 11))
PASSED, PASSED_MOST, FORCE_NOW = (LANES * row for row in range(11, 14))
LOADING_1, UNLOADING_1, LOADING_2, UNLOADING_2 = (LANES * row for row in range(14, 18))
RAM_KICK, HELMET_KICK, RAM_WEIGHT, HELMET_WEIGHT = (LANES * row for row in range(18, 22))
RAM_MASS, HELMET_MASS, LITTLE = (LANES * row for row in range(22, 25))
PEAK_NOW, LEAST_NOW, PILE_ENERGY, LEFT_OUT = (LANES * row for row in range(25, 29))
PEAK_SEEN, LEAST_SEEN, TOE_SEEN = (LANES * row for row in range(29, 32))
SETTLED, RINGING, IS_OVER = (LANES * row for row in range(32, 35))
HEAD_BLOCK = LANES * 35

# Rows of a node's block: arriving waves, the wave on its way from the node above, state, constants.
DOWN, UP, NEXT, SPRING, DRAG, PEAK, LEAST, WORK = (LANES * row for row in range(8))
HALF, STRENGTH, SMITH, VISCOUS = (LANES * row for row in range(8, 12))
BLOCK = LANES * 12

# Rows of the toe's block: spring, wave on its way up, state, constants.
STRETCH, TOE_DRAG, SENT_UP, TOE_X, TOE_V, TOE_MOST = (LANES * row for row in range(6))
TOE_HALF, TOE_STRENGTH, TOE_SMITH, TOE_VISCOUS = (LANES * row for row in range(6, 10))
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
        Sub-steps of the head in each step, rounded up to whole multiples of `SUBSTEPS`.
    head : (blows, 9) float64 array
        Ram mass [kg], impact velocity [m/s], hammer cushion's loading and unloading stiffness
        [N/m], helmet mass [kg], pile cushion's loading and unloading stiffness [N/m], weight of
        the ram, weight of helmet and of a hammer frame on it (both zero without gravity) [N].
    """

    ground: Integers
    substeps: Integers
    head: Floats
