"""Fill a lane with the state at the moment of impact."""

from __future__ import annotations

import math

from matchup.wave.finish import QUIET_ENERGY
from matchup.wave.laws import clipped, compiled, larger
from matchup.wave.layout import (
    BLOCK,
    DOWN,
    DRAG,
    FORCE_2,
    HALF,
    HEAD_BLOCK,
    HELMET_KICK,
    HELMET_MASS,
    HELMET_WEIGHT,
    HELMET_X,
    LANES,
    LARGEST_2,
    LEAST,
    LEAST_SEEN,
    LITTLE,
    LOADING_1,
    LOADING_2,
    PEAK,
    PEAK_SEEN,
    RAM_KICK,
    RAM_MASS,
    RAM_V,
    RAM_WEIGHT,
    RAM_X,
    SMITH,
    SPRING,
    STRENGTH,
    STRETCH,
    TOE_DRAG,
    TOE_HALF,
    TOE_MOST,
    TOE_SEEN,
    TOE_SMITH,
    TOE_STRENGTH,
    TOE_VISCOUS,
    TOE_X,
    UNLOADING_1,
    UNLOADING_2,
    UP,
    VISCOUS,
    Bar,
    Blows,
    Floats,
    Grounds,
)


@compiled
def fill_lane(
    bar: Bar, grounds: Grounds, blows: Blows, row: int, substep: float, state: Floats, lane: int
) -> None:
    """Write soil and hammer of the blow `row` into `lane` of `state`, modified in place.

    At rest each segment carries a constant force, held by two equal waves; shaft and toe springs
    carry what the displacement at rest asks of them; the pile cushion carries the helmet.

    Parameters
    ----------
    substep : float
        Of the head. [s]
    """
    for at in range(lane, state.size, LANES):
        state[at] = 0.0
    _fill_head(blows.head[row], 0.5 * substep, state, lane)
    _fill_nodes(bar, grounds, blows.ground[row], state, lane)
    _fill_toe(bar, grounds, blows.ground[row], state, lane)


@compiled
def _fill_head(head: Floats, half_step: float, state: Floats, lane: int) -> None:
    ram, velocity, loading_1, unloading_1, helmet, loading_2, unloading_2 = head[:7]
    state[RAM_V + lane] = velocity
    state[RAM_MASS + lane] = ram
    state[HELMET_MASS + lane] = helmet
    state[LITTLE + lane] = QUIET_ENERGY * 0.5 * ram * velocity**2
    state[RAM_KICK + lane] = half_step / ram
    state[HELMET_KICK + lane] = half_step / helmet
    state[RAM_WEIGHT + lane] = head[7]
    state[HELMET_WEIGHT + lane] = head[8]
    state[LOADING_1 + lane] = loading_1
    state[UNLOADING_1 + lane] = unloading_1
    state[LOADING_2 + lane] = loading_2
    state[UNLOADING_2 + lane] = unloading_2
    state[FORCE_2 + lane] = head[8]
    state[LARGEST_2 + lane] = head[8] / loading_2
    state[HELMET_X + lane] = head[8] / loading_2
    state[RAM_X + lane] = head[8] / loading_2
    state[PEAK_SEEN + lane] = -math.inf
    state[LEAST_SEEN + lane] = math.inf
    state[TOE_SEEN + lane] = -math.inf


@compiled
def _fill_nodes(bar: Bar, grounds: Grounds, ground: int, state: Floats, lane: int) -> None:
    nodes = bar.weight.size
    settlement = grounds.settlement[ground]
    for i in range(nodes):
        at = HEAD_BLOCK + i * BLOCK + lane
        strength = grounds.strength[ground, i]
        damping = grounds.damping[ground, i]
        spring = clipped(grounds.stiffness[ground, i] * settlement[i], -strength, strength)
        state[at + HALF] = 0.5 * bar.step * grounds.stiffness[ground, i]
        state[at + STRENGTH] = strength
        state[at + SPRING] = spring
        state[at + SMITH] = damping if grounds.smith else 0.0
        state[at + VISCOUS] = 0.0 if grounds.smith else damping * strength
        state[at + DRAG] = damping * (spring if grounds.smith else strength)
        if i > 0:
            force = bar.impedance[i - 1] / bar.step * (settlement[i - 1] - settlement[i])
            state[at + DOWN] = 0.5 * force
            state[at + PEAK] = force
            state[at + LEAST] = force
        if i < nodes - 1:
            force = bar.impedance[i] / bar.step * (settlement[i] - settlement[i + 1])
            state[at + UP] = 0.5 * force
            state[at + PEAK] = larger(force, state[at + PEAK])
            state[at + LEAST] = force if i == 0 else min(force, state[at + LEAST])


@compiled
def _fill_toe(bar: Bar, grounds: Grounds, ground: int, state: Floats, lane: int) -> None:
    nodes = bar.weight.size
    at = HEAD_BLOCK + nodes * BLOCK + lane
    stiffness, strength, damping = grounds.toe[ground]
    settlement = grounds.settlement[ground, nodes - 1]
    stretch = min(stiffness * settlement, strength)
    touches = stretch > 0.0
    state[at + STRETCH] = stretch
    state[at + TOE_X] = settlement
    state[at + TOE_MOST] = settlement
    state[at + TOE_HALF] = 0.5 * bar.step * stiffness
    state[at + TOE_STRENGTH] = strength
    state[at + TOE_SMITH] = damping if grounds.smith else 0.0
    state[at + TOE_VISCOUS] = 0.0 if grounds.smith else damping * strength
    if touches:
        state[at + TOE_DRAG] = damping * (stretch if grounds.smith else strength)
