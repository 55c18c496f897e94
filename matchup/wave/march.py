"""The time march of hammer blows on a pile, eight blows side by side.

The pile is cut into segments of equal travel time and the step is exactly that time, so a wave
moves on by one segment a step *unchanged*: no smearing, no spurious oscillation, at any segment
length. In each step the velocity ``v`` of a node is constant; it follows from the two arriving
waves and the soil force at the middle of the step, taken implicitly:

    (Z_above + Z_below) v = 2 (D - U) + W - R(v)

with ``D`` the arriving downward and ``U`` the arriving upward force wave, ``W`` the node's weight.
The energy that waves lose at a node is then exactly ``v (R - W) dt``. We chose this over lumped
masses with leapfrog because it reaches the same error with a fraction of the node-steps, and
because the reflections that make tension arrive with their shape and at their time.

At the head, ram, helmet and both cushions march in sub-steps (velocity Verlet; the pile head, which
has no mass, implicitly by the trapezoidal rule) while the wave from below stays constant. The
pile receives the mean force of the sub-steps, so that momentum is handed on exactly; the little
energy that averaging loses shows in the energy audit.

Loops over lanes are the innermost ones everywhere; what a lane computes never depends on the
others, so a blow gives the same answer alone and in a batch.
"""

from __future__ import annotations

import numpy as np

from matchup.wave.finish import check, energy_taken, write_result
from matchup.wave.laws import (
    clipped,
    compiled,
    cushion_force,
    cushion_on_bar,
    larger,
    shaft_velocity,
    smaller,
    toe_velocity,
)
from matchup.wave.layout import (
    BLOCK,
    DOWN,
    DRAG,
    ENDED,
    FORCE_1,
    FORCE_2,
    FORCE_NOW,
    HALF,
    HEAD_BLOCK,
    HEAD_V,
    HEAD_X,
    HELMET_KICK,
    HELMET_V,
    HELMET_WEIGHT,
    HELMET_X,
    IS_OVER,
    LANES,
    LARGEST_1,
    LARGEST_2,
    LEAST,
    LOADING_1,
    LOADING_2,
    MEAN,
    NEXT,
    PASSED,
    PASSED_MOST,
    PEAK,
    RAM_KICK,
    RAM_V,
    RAM_WEIGHT,
    RAM_X,
    SENT_UP,
    SMITH,
    SPRING,
    STRENGTH,
    STRETCH,
    SUBSTEPS,
    TOE_BLOCK,
    TOE_DRAG,
    TOE_HALF,
    TOE_MOST,
    TOE_SMITH,
    TOE_STRENGTH,
    TOE_V,
    TOE_VISCOUS,
    TOE_X,
    TOO_LONG,
    UNLOADING_1,
    UNLOADING_2,
    UP,
    VISCOUS,
    WORK,
    Bar,
    Blows,
    Floats,
    Grounds,
    Integers,
)
from matchup.wave.start import fill_lane


@compiled
def march(
    bar: Bar,
    grounds: Grounds,
    blows: Blows,
    queue: Integers,
    steps: tuple[int, int],
    out: Floats,
    envelope: Floats,
    trace: Floats,
) -> None:
    """March the blows in `queue` and write their results.

    A lane whose blow is over takes the next one from the queue.

    Parameters
    ----------
    bar : Bar
    grounds : Grounds
    blows : Blows
    queue : (queued,) int64 array
        Rows of `blows`, all with the same number of sub-steps.
    steps : (least, most)
        A blow marches on at least for the first number of steps even if the ending rule is met
        (0 in normal use; larger to test that rule), and is `TOO_LONG` after the second.
    out : (blows, len(COLUMNS)) float64 array
        Modified in place.
    envelope : (blows or 0, nodes, 2) float64 array
        Modified in place: largest and smallest force at the nodes [N]; empty to leave out.
    trace : (steps[1] or 0, 4) float64 array
        Modified in place with the first blow of the queue: mean head force [N], head velocity
        [m/s], toe displacement [m] and velocity [m/s] in each step; empty to leave out.
    """
    if queue.size == 0:
        return
    nodes = bar.weight.size
    rounds, substep = head_rounds(bar, blows.substeps[queue[0]])
    state = np.zeros(HEAD_BLOCK + nodes * BLOCK + TOE_BLOCK)
    rows = np.full(LANES, -1)
    began = np.zeros(LANES, np.int64)
    at_impact = np.zeros(LANES)
    interval = nodes - 1
    step = taken = ended = 0
    while True:
        for lane in range(LANES):
            # Lanes are filled at checks only, so that each check suits all of them.
            if rows[lane] < 0 and taken < queue.size and step % interval == 0:
                row = rows[lane] = queue[taken]
                fill_lane(bar, grounds, blows, row, substep, state, lane)
                at_impact[lane] = energy_taken(bar, blows.head[row], state, lane)[0]
                began[lane] = step
                taken += 1
        until = (step // interval + 1) * interval
        for lane in range(LANES):
            if rows[lane] >= 0:
                until = min(until, began[lane] + steps[1])
        while step < until:
            advance(bar, state, rounds, substep)
            if step < trace.shape[0]:
                _write_trace(state, nodes, trace[step])
            step += 1
        is_check = step % interval == 0
        if is_check:
            check(bar, state)
        for lane in range(LANES):
            marched = step - began[lane]
            is_over = is_check and state[IS_OVER + lane] > 0.0 and marched >= steps[0]
            if rows[lane] >= 0 and (is_over or marched == steps[1]):
                result = (rows[lane], marched, ENDED if is_over else TOO_LONG)
                write_result(bar, blows, result, state, lane, at_impact[lane], out, envelope)
                rows[lane] = -1
                ended += 1
        if ended == queue.size:
            return


@compiled
def head_rounds(bar: Bar, substeps: int) -> tuple[int, float]:
    """Return the rounds of `SUBSTEPS` in which the head marches a step, and its sub-step [s]."""
    rounds = (substeps + SUBSTEPS - 1) // SUBSTEPS
    return rounds, bar.step / (rounds * SUBSTEPS)


@compiled
def advance(bar: Bar, state: Floats, rounds: int, substep: float) -> None:
    """March all lanes through one step, modifying `state` in place."""
    _step_toe(bar, state)
    _step_head(bar, state, rounds, substep)
    _step_shaft(bar, state)


@compiled
def _write_trace(state: Floats, nodes: int, trace: Floats) -> None:
    tip = HEAD_BLOCK + nodes * BLOCK
    trace[0] = state[MEAN]
    trace[1] = state[HEAD_V]
    trace[2] = state[tip + TOE_X]
    trace[3] = state[tip + TOE_V]


@compiled
def _step_head(bar: Bar, state: Floats, rounds: int, substep: float) -> None:
    """March ram, helmet, cushions and pile head through one step; leave the mean head force."""
    weight = bar.weight[0]
    per_impedance = 1.0 / bar.impedance[0]
    half = 0.5 * substep
    give = half * per_impedance
    share = 0.5 / (rounds * SUBSTEPS)
    q = state[: HEAD_BLOCK + 2 * BLOCK]
    for lane in range(LANES):
        free_v = (weight - 2.0 * q[HEAD_BLOCK + UP + lane]) * per_impedance
        q[MEAN + lane] = 0.0
        q[HEAD_V + lane] = free_v + q[FORCE_2 + lane] * per_impedance
    for _ in range(rounds):
        for lane in range(LANES):
            ram_x, ram_v = q[RAM_X + lane], q[RAM_V + lane]
            helmet_x, helmet_v = q[HELMET_X + lane], q[HELMET_V + lane]
            head_x, head_v = q[HEAD_X + lane], q[HEAD_V + lane]
            force_1, force_2 = q[FORCE_1 + lane], q[FORCE_2 + lane]
            largest_1, largest_2 = q[LARGEST_1 + lane], q[LARGEST_2 + lane]
            loading_1, unloading_1 = q[LOADING_1 + lane], q[UNLOADING_1 + lane]
            loading_2, unloading_2 = q[LOADING_2 + lane], q[UNLOADING_2 + lane]
            ram_kick, helmet_kick = q[RAM_KICK + lane], q[HELMET_KICK + lane]
            ram_weight, helmet_weight = q[RAM_WEIGHT + lane], q[HELMET_WEIGHT + lane]
            force_now, mean = q[FORCE_NOW + lane], q[MEAN + lane]
            passed, passed_most = q[PASSED + lane], q[PASSED_MOST + lane]
            # What the head does in a sub-step without force on it.
            free_v = (weight - 2.0 * q[HEAD_BLOCK + UP + lane]) * per_impedance
            ram_v = ram_v + ram_kick * (ram_weight - force_1)
            helmet_v = helmet_v + helmet_kick * (helmet_weight + force_1 - force_2)
            for _ in range(SUBSTEPS):
                ram_x = ram_x + substep * ram_v
                helmet_x = helmet_x + substep * helmet_v
                force_1 = cushion_force(ram_x - helmet_x, largest_1, loading_1, unloading_1)
                largest_1 = larger(largest_1, ram_x - helmet_x)
                before = force_2
                free_move = half * (head_v + free_v)
                force_2 = cushion_on_bar(
                    helmet_x - (head_x + free_move), largest_2, loading_2, unloading_2, give
                )
                move = free_move + give * force_2
                head_x = head_x + move
                head_v = free_v + per_impedance * force_2
                largest_2 = larger(largest_2, helmet_x - head_x)
                ram_v = ram_v + 2.0 * ram_kick * (ram_weight - force_1)
                helmet_v = helmet_v + 2.0 * helmet_kick * (helmet_weight + force_1 - force_2)
                force_now = larger(force_now, force_2)
                passed = passed + 0.5 * (before + force_2) * move
                passed_most = larger(passed_most, passed)
                mean = mean + share * (before + force_2)
            # Velocities ran half a sub-step ahead.
            ram_v = ram_v - ram_kick * (ram_weight - force_1)
            helmet_v = helmet_v - helmet_kick * (helmet_weight + force_1 - force_2)
            q[RAM_X + lane], q[RAM_V + lane] = ram_x, ram_v
            q[HELMET_X + lane], q[HELMET_V + lane] = helmet_x, helmet_v
            q[HEAD_X + lane], q[HEAD_V + lane] = head_x, head_v
            q[FORCE_1 + lane], q[FORCE_2 + lane] = force_1, force_2
            q[LARGEST_1 + lane], q[LARGEST_2 + lane] = largest_1, largest_2
            q[FORCE_NOW + lane], q[MEAN + lane] = force_now, mean
            q[PASSED + lane], q[PASSED_MOST + lane] = passed, passed_most
    for lane in range(LANES):
        force = q[MEAN + lane] + weight
        up = q[HEAD_BLOCK + UP + lane]
        velocity = (force - 2.0 * up) * per_impedance
        q[HEAD_BLOCK + BLOCK + NEXT + lane] = force - up
        peak = larger(q[HEAD_BLOCK + PEAK + lane], q[FORCE_NOW + lane])
        q[HEAD_BLOCK + PEAK + lane] = peak
        q[HEAD_BLOCK + LEAST + lane] = smaller(q[HEAD_BLOCK + LEAST + lane], force)
        q[HEAD_BLOCK + WORK + lane] = q[HEAD_BLOCK + WORK + lane] - velocity * weight


@compiled
def _step_toe(bar: Bar, state: Floats) -> None:
    """March the toe node through one step; the wave it sends up waits in the toe's block."""
    nodes = bar.weight.size
    step = bar.step
    weight = bar.weight[nodes - 1]
    impedance = bar.impedance[nodes - 2]
    q = state[HEAD_BLOCK + (nodes - 2) * BLOCK :]
    for lane in range(LANES):
        here = BLOCK + lane
        tip = 2 * BLOCK + lane
        down = q[here + DOWN]
        spring = q[here + SPRING]
        drag = q[here + DRAG]
        half = q[here + HALF]
        strength = q[here + STRENGTH]
        stretch = q[tip + STRETCH]
        toe_drag = q[tip + TOE_DRAG]
        toe_half = q[tip + TOE_HALF]
        toe_strength = q[tip + TOE_STRENGTH]
        viscous = q[tip + TOE_VISCOUS]
        velocity = toe_velocity(
            2.0 * down + weight,
            spring,
            drag,
            strength,
            half,
            (stretch, toe_drag, toe_strength, toe_half),
            impedance,
        )
        side = clipped(spring + half * velocity, -strength, strength) + drag * velocity
        end = clipped(spring + 2.0 * half * velocity, -strength, strength)
        expected = clipped(end + half * velocity, -strength, strength)
        static = clipped(stretch + toe_half * velocity, 0.0, toe_strength)
        reaction = larger(static + toe_drag * velocity, 0.0)
        toe_end = smaller(stretch + 2.0 * toe_half * velocity, toe_strength)
        toe_expected = clipped(toe_end + toe_half * velocity, 0.0, toe_strength)
        toe_x = q[tip + TOE_X] + step * velocity
        sent_up = down - impedance * velocity
        force = down + sent_up
        q[here + SPRING] = end
        q[here + DRAG] = q[here + SMITH] * larger(expected, -expected) + q[here + VISCOUS]
        q[tip + STRETCH] = toe_end
        q[tip + TOE_DRAG] = q[tip + TOE_SMITH] * toe_expected + (
            viscous if toe_expected > 0.0 else 0.0
        )
        q[tip + TOE_V] = velocity
        q[tip + TOE_X] = toe_x
        q[tip + TOE_MOST] = larger(q[tip + TOE_MOST], toe_x)
        q[here + WORK] = q[here + WORK] + velocity * (side + reaction - weight)
        q[here + PEAK] = larger(q[here + PEAK], force)
        q[here + LEAST] = smaller(q[here + LEAST], force)
        q[tip + SENT_UP] = sent_up


@compiled
def _step_shaft(bar: Bar, state: Floats) -> None:
    """March the nodes between head and toe through one step, from the top down."""
    nodes = bar.weight.size
    for i in range(1, nodes - 1):
        impedance_above = bar.impedance[i - 1]
        impedance_below = bar.impedance[i]
        weight = bar.weight[i]
        # A window on the nodes above, here and below.
        q = state[HEAD_BLOCK + (i - 1) * BLOCK : HEAD_BLOCK + (i + 2) * BLOCK]
        for lane in range(LANES):
            here = BLOCK + lane
            down = q[here + DOWN]
            up = q[here + UP]
            spring = q[here + SPRING]
            drag = q[here + DRAG]
            half = q[here + HALF]
            strength = q[here + STRENGTH]
            velocity = shaft_velocity(
                2.0 * (down - up) + weight,
                spring,
                drag,
                impedance_above + impedance_below,
                half,
                strength,
            )
            middle = spring + half * velocity
            end = clipped(middle + half * velocity, -strength, strength)
            middle = clipped(middle, -strength, strength)
            # The damping of the next step goes by the spring force expected in its middle.
            expected = smaller(abs(end + half * velocity), strength)
            sent_up = down - impedance_above * velocity
            sent_down = up + impedance_below * velocity
            above = down + sent_up
            below = up + sent_down
            q[here + SPRING] = end
            q[here + DRAG] = q[here + SMITH] * expected + q[here + VISCOUS]
            q[here + WORK] = q[here + WORK] + velocity * (middle + drag * velocity - weight)
            # In this order plain stores; the other way round masked ones, which are slower.
            q[here + PEAK] = larger(larger(q[here + PEAK], above), below)
            q[here + LEAST] = smaller(smaller(q[here + LEAST], above), below)
            q[here + DOWN] = q[here + NEXT]
            q[lane + UP] = sent_up
            q[here + BLOCK + NEXT] = sent_down
    q = state[HEAD_BLOCK + (nodes - 2) * BLOCK :]
    for lane in range(LANES):
        q[BLOCK + DOWN + lane] = q[BLOCK + NEXT + lane]
        q[UP + lane] = q[2 * BLOCK + SENT_UP + lane]
