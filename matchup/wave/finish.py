"""When a blow is over, and what it amounted to."""

from __future__ import annotations

import math

from matchup.wave.laws import compiled
from matchup.wave.layout import (
    BLOCK,
    DIVERGED,
    DOWN,
    FORCE_1,
    FORCE_2,
    FORCE_MOST,
    HEAD_BLOCK,
    HEAD_V,
    HEAD_X,
    HELMET_V,
    HELMET_WEIGHT,
    HELMET_X,
    LARGEST_1,
    LARGEST_2,
    LEAST,
    LEAST_ALL,
    LOADING_1,
    LOADING_2,
    PASSED_MOST,
    PEAK,
    PEAK_ALL,
    RAM_V,
    RAM_WEIGHT,
    RAM_X,
    TOE_MOST,
    TOE_MOST_ALL,
    TOE_X,
    UNLOADING_1,
    UNLOADING_2,
    UP,
    WORK,
    Bar,
    Blows,
    Floats,
    Integers,
)

QUIET_ENERGY = 0.01
"""A blow may end when the kinetic energy left is below this share of the ram's at impact and no
extreme has grown since the last check, at `SETTLED_CHECKS` checks in a row."""
SETTLED_CHECKS = 2
RINGING_CHECKS = 6
"""It may also end when ram and helmet have come to rest or left, and no extreme has grown at so
many checks in a row: waves run up and down a pile in weak soil for long without reaching their
extremes again."""
SLIGHT_TENSION = 0.02
"""Tension below this share of the largest compression is too slight to keep a blow going."""


@compiled
def catch_rebound(state: Floats, lane: int) -> float:
    """Take the weight off a ram, and then a helmet, that has bounced off upwards.

    Their second, weaker impact is not part of the blow: hammers catch the ram and hold the
    helmet, and where they do not, leaving the second impact out errs on the side of a smaller set.

    Returns
    -------
    float
        What the weights would have brought in the audit. [J]
    """
    left_out = 0.0
    ram_v = state[RAM_V + lane]
    helmet_v = state[HELMET_V + lane]
    if state[FORCE_1 + lane] > 0.0 or ram_v > 0.0:
        return left_out
    if ram_v <= helmet_v:
        left_out += state[RAM_WEIGHT + lane] * state[RAM_X + lane]
        state[RAM_WEIGHT + lane] = 0.0
    is_free = state[FORCE_2 + lane] == 0.0 and helmet_v < min(0.0, state[HEAD_V + lane])
    if is_free and state[RAM_WEIGHT + lane] == 0.0:
        left_out += state[HELMET_WEIGHT + lane] * state[HELMET_X + lane]
        state[HELMET_WEIGHT + lane] = 0.0
    return left_out


@compiled
def judge(bar: Bar, head: Floats, state: Floats, lane: int, calm: Integers) -> bool:
    """Return whether the blow in `lane` is over, and start the interval to the next check.

    Checks lie one pile length of wave travel apart.

    Parameters
    ----------
    calm : (2,) int64 array
        Checks in a row, so far, at which the blow was settled, and at which it only rang on;
        modified in place.
    """
    nodes = bar.weight.size
    peak = least = peak_all = least_all = 0.0
    for i in range(nodes):
        at = HEAD_BLOCK + i * BLOCK + lane
        peak = max(peak, state[at + PEAK])
        least = min(least, state[at + LEAST])
        peak_all = max(peak_all, state[at + PEAK_ALL])
        least_all = min(least_all, state[at + LEAST_ALL])
        state[at + PEAK_ALL] = max(state[at + PEAK], state[at + PEAK_ALL])
        state[at + LEAST_ALL] = min(state[at + LEAST], state[at + LEAST_ALL])
        state[at + PEAK] = -math.inf
        state[at + LEAST] = math.inf
    tip = HEAD_BLOCK + nodes * BLOCK + lane
    toe, toe_all = state[tip + TOE_MOST], state[tip + TOE_MOST_ALL]
    state[tip + TOE_MOST_ALL] = max(toe, toe_all)
    state[tip + TOE_MOST] = -math.inf

    least_counted = min(least_all, -SLIGHT_TENSION * peak_all)
    grown = peak > peak_all or toe > toe_all or least < least_counted
    little = QUIET_ENERGY * 0.5 * head[0] * head[1] ** 2
    hammer, pile = _energy_left(bar, head, state, lane)
    calm[0] = calm[0] + 1 if hammer + pile < little and not grown else 0
    calm[1] = calm[1] + 1 if hammer < little and not grown else 0
    return bool(calm[0] >= SETTLED_CHECKS or calm[1] >= RINGING_CHECKS)


@compiled
def _energy_left(bar: Bar, head: Floats, state: Floats, lane: int) -> tuple[float, float]:
    """Return the kinetic energy [J] left in ram and helmet, rebound left out, and in the pile."""
    hammer = 0.0
    pile = 0.0
    if state[FORCE_2 + lane] > 0.0 or state[HELMET_V + lane] > 0.0:
        hammer += 0.5 * head[4] * state[HELMET_V + lane] ** 2
    if state[FORCE_1 + lane] > 0.0 or state[RAM_V + lane] > 0.0:
        hammer += 0.5 * head[0] * state[RAM_V + lane] ** 2
    for i in range(bar.weight.size - 1):
        at = HEAD_BLOCK + i * BLOCK + lane
        net = state[at + BLOCK + DOWN] - state[at + UP]
        pile += 0.5 * bar.step * net * net / bar.impedance[i]
    return hammer, pile


@compiled
def _cushion_energy(largest: float, force: float, loading: float, unloading: float) -> float:
    """Return the work [J] that a cushion has taken in, stored and lost."""
    most = loading * largest
    return 0.5 * loading * largest**2 - 0.5 * (most * most - force * force) / unloading


@compiled
def _bar_energy_momentum(bar: Bar, state: Floats, lane: int) -> tuple[float, float]:
    """Return strain and kinetic energy of the pile [J], and its momentum [N s]."""
    energy = 0.0
    momentum = 0.0
    for i in range(bar.weight.size - 1):
        down = state[HEAD_BLOCK + (i + 1) * BLOCK + DOWN + lane]
        up = state[HEAD_BLOCK + i * BLOCK + UP + lane]
        energy += bar.step * (down * down + up * up) / bar.impedance[i]
        momentum += bar.step * (down - up)
    return energy, momentum


@compiled
def energy_taken(bar: Bar, head: Floats, state: Floats, lane: int) -> tuple[float, float, float]:
    """Return the energy [J] in the system, with all that it has lost or taken in as work.

    Kinetic energy of ram and helmet, strain and kinetic energy of the pile, cushion energy stored
    and lost, less the work of gravity, and the work done on soil springs and dampers. It stays
    what it was at impact; its drift is the error of the audit. The cushion part comes from the
    law's end state, the pile part from the waves: neither from the forces as they were marched.

    Returns
    -------
    energy : float
        [J]
    soil_work : float
        Work on the soil, less that of gravity on the pile. [J]
    momentum : float
        [N s]
    """
    energy, momentum = _bar_energy_momentum(bar, state, lane)
    ram_v = state[RAM_V + lane]
    helmet_v = state[HELMET_V + lane]
    momentum += head[0] * ram_v + head[4] * helmet_v
    energy += 0.5 * head[0] * ram_v**2 + 0.5 * head[4] * helmet_v**2
    energy += _cushion_energy(
        state[LARGEST_1 + lane],
        state[FORCE_1 + lane],
        state[LOADING_1 + lane],
        state[UNLOADING_1 + lane],
    )
    energy += _cushion_energy(
        state[LARGEST_2 + lane],
        state[FORCE_2 + lane],
        state[LOADING_2 + lane],
        state[UNLOADING_2 + lane],
    )
    energy -= state[RAM_WEIGHT + lane] * state[RAM_X + lane]
    energy -= state[HELMET_WEIGHT + lane] * state[HELMET_X + lane]
    soil_work = 0.0
    for i in range(bar.weight.size):
        soil_work += bar.step * state[HEAD_BLOCK + i * BLOCK + WORK + lane]
    return energy + soil_work, soil_work, momentum


@compiled
def write_result(
    bar: Bar,
    blows: Blows,
    row: int,
    state: Floats,
    lane: int,
    step: int,
    status: int,
    energy_at_impact: float,
    out: Floats,
    envelope: Floats,
) -> None:
    """Write the result of the blow in `lane` to row `row` of `out` and `envelope`, in place."""
    nodes = bar.weight.size
    head = blows.head[row]
    peak = 0.0
    tension = 0.0
    peak_node = 0
    tension_node = 0
    for i in range(nodes):
        at = HEAD_BLOCK + i * BLOCK + lane
        # At a change of section the smaller area bears the larger stress.
        area = bar.area[min(i, nodes - 2)]
        if i > 0:
            area = min(area, bar.area[i - 1])
        if state[at + PEAK_ALL] / area > peak:
            peak = state[at + PEAK_ALL] / area
            peak_node = i
        if -state[at + LEAST_ALL] / area > tension:
            tension = -state[at + LEAST_ALL] / area
            tension_node = i
        if envelope.shape[0] > 0:
            envelope[row, i, 0] = state[at + PEAK_ALL]
            envelope[row, i, 1] = state[at + LEAST_ALL]
    tip = HEAD_BLOCK + nodes * BLOCK + lane
    energy, soil_work, momentum = energy_taken(bar, head, state, lane)
    # In soft ground the pile goes so far that gravity puts in more than the ram does.
    weight = state[RAM_WEIGHT + lane] + state[HELMET_WEIGHT + lane] + bar.weight.sum()
    put_in = 0.5 * head[0] * head[1] ** 2 + weight * max(state[HEAD_X + lane], 0.0)
    error = (energy - energy_at_impact) / put_in
    finite = math.isfinite(error) and math.isfinite(peak) and math.isfinite(state[tip + TOE_X])
    out[row, 0] = status if finite else DIVERGED
    out[row, 1] = step
    out[row, 2] = state[tip + TOE_MOST_ALL]
    out[row, 3] = state[tip + TOE_X]
    out[row, 4] = peak
    out[row, 5] = peak_node
    out[row, 6] = tension
    out[row, 7] = tension_node
    out[row, 8] = state[FORCE_MOST + lane]
    out[row, 9] = state[PASSED_MOST + lane]
    out[row, 10] = error
    out[row, 11] = state[RAM_V + lane]
    out[row, 12] = momentum
    out[row, 13] = soil_work
