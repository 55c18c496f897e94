"""When a blow is over, and what it amounted to."""

from __future__ import annotations

import math

from matchup.wave.laws import compiled, larger, law, smaller
from matchup.wave.layout import (
    BLOCK,
    DIVERGED,
    DOWN,
    FORCE_1,
    FORCE_2,
    FORCE_NOW,
    HEAD_BLOCK,
    HEAD_V,
    HEAD_X,
    HELMET_MASS,
    HELMET_V,
    HELMET_WEIGHT,
    HELMET_X,
    IS_OVER,
    LANES,
    LARGEST_1,
    LARGEST_2,
    LEAST,
    LEAST_NOW,
    LEAST_SEEN,
    LEFT_OUT,
    LITTLE,
    LOADING_1,
    LOADING_2,
    PASSED_MOST,
    PEAK,
    PEAK_NOW,
    PEAK_SEEN,
    PILE_ENERGY,
    RAM_MASS,
    RAM_V,
    RAM_WEIGHT,
    RAM_X,
    RINGING,
    SETTLED,
    TOE_MOST,
    TOE_SEEN,
    TOE_X,
    UNLOADING_1,
    UNLOADING_2,
    UP,
    WORK,
    Bar,
    Blows,
    Floats,
)

QUIET_ENERGY = 0.01
"""A blow may end when the kinetic energy left is below this share of the ram's at impact and no
extreme has grown since the last check, at `SETTLED_CHECKS` checks in a row."""
SETTLED_CHECKS = 3
RINGING_CHECKS = 6
"""It may also end when ram and helmet have come to rest or left, the pile head has been left alone
and no extreme has grown at so many checks in a row: waves run up and down a pile in weak soil for
long without reaching their extremes again, unless the helmet gives them new ones."""
SLIGHT_FORCE = 0.1
"""A force on the head below this share of the largest leaves it alone."""
SLIGHT_TENSION = 0.02
"""Tension below this share of the largest compression is too slight to keep a blow going."""


@compiled
def check(bar: Bar, state: Floats) -> None:
    """Find which blows are over, and start the interval to the next check.

    Checks lie one pile length of wave travel apart. Modifies `state` in place.
    """
    catch_rebound(state)
    _survey(bar, state)
    _judge(bar, state)


@compiled
def catch_rebound(state: Floats) -> None:
    """Take the weight off a ram, and then a helmet, that has bounced off upwards.

    Their second, weaker impact is not part of the blow: hammers catch the ram and hold the
    helmet, and where they do not, leaving the second impact out errs on the side of a smaller set.
    `LEFT_OUT` takes what the weights would have brought in the audit.
    """
    h = state[:HEAD_BLOCK]
    for lane in range(LANES):
        ram_v, helmet_v = h[RAM_V + lane], h[HELMET_V + lane]
        ram_weight, helmet_weight = h[RAM_WEIGHT + lane], h[HELMET_WEIGHT + lane]
        bounced = (h[FORCE_1 + lane] == 0.0) & (ram_v <= 0.0)
        ram_left = 0.0 if bounced & (ram_v <= helmet_v) else ram_weight
        free = (h[FORCE_2 + lane] == 0.0) & (helmet_v < smaller(0.0, h[HEAD_V + lane]))
        helmet_left = 0.0 if bounced & free & (ram_left == 0.0) else helmet_weight
        h[LEFT_OUT + lane] = (
            h[LEFT_OUT + lane]
            + (ram_weight - ram_left) * h[RAM_X + lane]
            + (helmet_weight - helmet_left) * h[HELMET_X + lane]
        )
        h[RAM_WEIGHT + lane] = ram_left
        h[HELMET_WEIGHT + lane] = helmet_left


@compiled
def _survey(bar: Bar, state: Floats) -> None:
    """Leave the extremes along the pile and its kinetic energy in the head's block."""
    last = bar.weight.size - 1
    h = state[:HEAD_BLOCK]
    q = state[HEAD_BLOCK + last * BLOCK :]
    for lane in range(LANES):
        h[PEAK_NOW + lane] = q[PEAK + lane]
        h[LEAST_NOW + lane] = q[LEAST + lane]
        h[PILE_ENERGY + lane] = 0.0
    for i in range(last):
        q = state[HEAD_BLOCK + i * BLOCK :]
        share = 0.5 * bar.step / bar.impedance[i]
        for lane in range(LANES):
            net = q[BLOCK + DOWN + lane] - q[UP + lane]
            h[PILE_ENERGY + lane] = h[PILE_ENERGY + lane] + share * net * net
            h[PEAK_NOW + lane] = larger(h[PEAK_NOW + lane], q[PEAK + lane])
            h[LEAST_NOW + lane] = smaller(h[LEAST_NOW + lane], q[LEAST + lane])


@compiled
def _judge(bar: Bar, state: Floats) -> None:
    """Say in the head's block which blows are over, and remember what this check saw."""
    h = state[: HEAD_BLOCK + BLOCK]
    tip = state[HEAD_BLOCK + bar.weight.size * BLOCK :]
    for lane in range(LANES):
        peak, least, toe = h[PEAK_NOW + lane], h[LEAST_NOW + lane], tip[TOE_MOST + lane]
        least_counted = smaller(h[LEAST_SEEN + lane], -SLIGHT_TENSION * h[PEAK_SEEN + lane])
        grown = (peak > h[PEAK_SEEN + lane]) | (toe > h[TOE_SEEN + lane]) | (least < least_counted)
        hammer = _energy_left(h[RAM_MASS + lane], h[RAM_V + lane], h[FORCE_1 + lane])
        hammer += _energy_left(h[HELMET_MASS + lane], h[HELMET_V + lane], h[FORCE_2 + lane])
        little = h[LITTLE + lane]
        left_alone = h[FORCE_NOW + lane] < SLIGHT_FORCE * h[HEAD_BLOCK + PEAK + lane]
        settles = (hammer + h[PILE_ENERGY + lane] < little) & ~grown
        rings = (hammer < little) & left_alone & ~grown
        settled = h[SETTLED + lane] + 1.0 if settles else 0.0
        ringing = h[RINGING + lane] + 1.0 if rings else 0.0
        speeds = h[RAM_V + lane] * h[RAM_V + lane] + h[HELMET_V + lane] * h[HELMET_V + lane]
        diverged = ~(speeds + h[PILE_ENERGY + lane] < math.inf)
        over = (settled >= SETTLED_CHECKS) | (ringing >= RINGING_CHECKS) | diverged
        h[IS_OVER + lane] = 1.0 if over else 0.0
        h[SETTLED + lane], h[RINGING + lane] = settled, ringing
        h[PEAK_SEEN + lane], h[LEAST_SEEN + lane], h[TOE_SEEN + lane] = peak, least, toe
        h[FORCE_NOW + lane] = 0.0


@law
def _energy_left(mass: float, velocity: float, force: float) -> float:
    """Return the kinetic energy [J] of a ram or helmet, unless it has bounced off."""
    return 0.5 * mass * velocity * velocity if (force > 0.0) | (velocity > 0.0) else 0.0


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
    result: tuple[int, int, int],
    state: Floats,
    lane: int,
    energy_at_impact: float,
    out: Floats,
    envelope: Floats,
) -> None:
    """Write the result of the blow in `lane` to its row of `out` and `envelope`, in place.

    Parameters
    ----------
    result : (row, steps, status)
    """
    row, steps, status = result
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
        if state[at + PEAK] / area > peak:
            peak = state[at + PEAK] / area
            peak_node = i
        if -state[at + LEAST] / area > tension:
            tension = -state[at + LEAST] / area
            tension_node = i
        if envelope.shape[0] > 0:
            envelope[row, i, 0] = state[at + PEAK]
            envelope[row, i, 1] = state[at + LEAST]
    tip = HEAD_BLOCK + nodes * BLOCK + lane
    energy, soil_work, momentum = energy_taken(bar, head, state, lane)
    # In soft ground the pile goes so far that gravity puts in more than the ram does.
    weight = state[RAM_WEIGHT + lane] + state[HELMET_WEIGHT + lane] + bar.weight.sum()
    put_in = 0.5 * head[0] * head[1] ** 2 + weight * max(state[HEAD_X + lane], 0.0)
    energy_at_impact += state[LEFT_OUT + lane]
    error = (energy - energy_at_impact) / put_in
    finite = math.isfinite(error) and math.isfinite(peak) and math.isfinite(state[tip + TOE_X])
    out[row, 0] = status if finite else DIVERGED
    out[row, 1] = steps
    out[row, 2] = state[tip + TOE_MOST]
    out[row, 3] = state[tip + TOE_X]
    out[row, 4] = peak
    out[row, 5] = peak_node
    out[row, 6] = tension
    out[row, 7] = tension_node
    out[row, 8] = state[HEAD_BLOCK + PEAK + lane]
    out[row, 9] = state[PASSED_MOST + lane]
    out[row, 10] = error
    out[row, 11] = state[RAM_V + lane]
    out[row, 12] = momentum
    out[row, 13] = soil_work
