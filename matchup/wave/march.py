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

from matchup.wave.finish import catch_rebound, energy_taken, judge, write_result
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
    ABOVE,
    BELOW,
    BLOCK,
    DOWN,
    DRAG,
    ENDED,
    FORCE_1,
    FORCE_2,
    FORCE_MOST,
    HALF,
    HEAD_BLOCK,
    HEAD_V,
    HEAD_X,
    HELMET_KICK,
    HELMET_V,
    HELMET_WEIGHT,
    HELMET_X,
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
    SMITH,
    SPRING,
    STRENGTH,
    STRETCH,
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
    WEIGHT,
    WORK,
    Bar,
    Blows,
    Floats,
    Grounds,
    Integers,
)
from matchup.wave.start import fill_lanes


@compiled
def march(
    bar: Bar,
    grounds: Grounds,
    blows: Blows,
    order: Integers,
    span: tuple[int, int],
    steps: tuple[int, int],
    out: Floats,
    envelope: Floats,
    trace: Floats,
) -> None:
    """March the blows ``order[span[0]:span[1]]`` and write their results.

    Parameters
    ----------
    bar : Bar
    grounds : Grounds
    blows : Blows
    order : (padded,) int64 array
        Rows of `blows` in groups of `LANES`; a short group repeats one of its rows.
    span : (first, last)
        Range of `order`, both multiples of `LANES`.
    steps : (least, most)
        A blow marches on at least for the first number of steps even if the ending rule is met
        (0 in normal use; larger to test that rule), and is `TOO_LONG` after the second.
    out : (blows, len(COLUMNS)) float64 array
        Modified in place.
    envelope : (blows or 0, nodes, 2) float64 array
        Modified in place: largest and smallest force at the nodes [N]; empty to leave out.
    trace : (steps[1] or 0, 4) float64 array
        Modified in place with the first lane: mean head force [N], head velocity [m/s], toe
        displacement [m] and velocity [m/s] in each step; empty to leave out.
    """
    nodes = bar.weight.size
    state = np.empty(HEAD_BLOCK + nodes * BLOCK + TOE_BLOCK)
    for first in range(span[0], span[1], LANES):
        rows = order[first : first + LANES]
        fill_lanes(bar, grounds, blows, rows, state)
        _march_group(bar, blows, rows, steps, state, out, envelope, trace)


@compiled
def _march_group(
    bar: Bar,
    blows: Blows,
    rows: Integers,
    steps: tuple[int, int],
    state: Floats,
    out: Floats,
    envelope: Floats,
    trace: Floats,
) -> None:
    nodes = bar.weight.size
    substeps = blows.substeps[rows[0]]
    at_impact = np.zeros(LANES)
    for lane in range(LANES):
        at_impact[lane] = energy_taken(bar, blows.head[rows[lane]], state, lane)[0]
    calm = np.zeros((LANES, 2), np.int64)
    is_open = np.ones(LANES, np.bool_)
    for step in range(1, steps[1] + 1):
        _step_head(state, bar.step / substeps, substeps)
        _step_shaft(state, nodes)
        _step_toe(state, nodes, bar.step)
        if trace.shape[0] > 0:
            trace[step - 1, 0] = state[MEAN]
            trace[step - 1, 1] = state[HEAD_V]
            trace[step - 1, 2] = state[HEAD_BLOCK + nodes * BLOCK + TOE_X]
            trace[step - 1, 3] = state[HEAD_BLOCK + nodes * BLOCK + TOE_V]
        if step % (nodes - 1) != 0 and step != steps[1]:
            continue
        for lane in range(LANES):
            if not is_open[lane]:
                continue
            at_impact[lane] += catch_rebound(state, lane)
            ends = judge(bar, blows.head[rows[lane]], state, lane, calm[lane]) and step >= steps[0]
            if ends or step == steps[1]:
                status = ENDED if ends else TOO_LONG
                write_result(
                    bar,
                    blows,
                    rows[lane],
                    state,
                    lane,
                    step,
                    status,
                    at_impact[lane],
                    out,
                    envelope,
                )
                is_open[lane] = False
        if not is_open.any():
            return


@compiled
def _step_head(state: Floats, substep: float, substeps: int) -> None:
    """March ram, helmet, cushions and pile head through one step; leave the mean head force."""
    half = 0.5 * substep
    share = 0.5 / substeps
    node = HEAD_BLOCK
    q = state[: HEAD_BLOCK + 2 * BLOCK]
    for lane in range(LANES):
        q[MEAN + lane] = 0.0
        q[HEAD_V + lane] = (
            q[FORCE_2 + lane] + q[node + WEIGHT + lane] - 2.0 * q[node + UP + lane]
        ) / q[node + BELOW + lane]
    for _ in range(substeps):
        for lane in range(LANES):
            before_1 = q[FORCE_1 + lane]
            before_2 = q[FORCE_2 + lane]
            ram_v = q[RAM_V + lane] + q[RAM_KICK + lane] * (q[RAM_WEIGHT + lane] - before_1)
            helmet_v = q[HELMET_V + lane] + q[HELMET_KICK + lane] * (
                q[HELMET_WEIGHT + lane] + before_1 - before_2
            )
            ram_x = q[RAM_X + lane] + substep * ram_v
            helmet_x = q[HELMET_X + lane] + substep * helmet_v

            largest_1 = larger(q[LARGEST_1 + lane], ram_x - helmet_x)
            force_1 = cushion_force(
                ram_x - helmet_x, largest_1, q[LOADING_1 + lane], q[UNLOADING_1 + lane]
            )
            per_impedance = 1.0 / q[node + BELOW + lane]
            free_v = (q[node + WEIGHT + lane] - 2.0 * q[node + UP + lane]) * per_impedance
            head_x = q[HEAD_X + lane]
            free_x = head_x + half * (q[HEAD_V + lane] + free_v)
            force_2 = cushion_on_bar(
                helmet_x - free_x,
                q[LARGEST_2 + lane],
                q[LOADING_2 + lane],
                q[UNLOADING_2 + lane],
                half * per_impedance,
            )
            moved = half * (q[HEAD_V + lane] + free_v + force_2 * per_impedance)
            passed = q[PASSED + lane] + 0.5 * (before_2 + force_2) * moved

            q[RAM_X + lane] = ram_x
            q[HELMET_X + lane] = helmet_x
            q[HEAD_X + lane] = head_x + moved
            q[HEAD_V + lane] = free_v + force_2 * per_impedance
            q[RAM_V + lane] = ram_v + q[RAM_KICK + lane] * (q[RAM_WEIGHT + lane] - force_1)
            q[HELMET_V + lane] = helmet_v + q[HELMET_KICK + lane] * (
                q[HELMET_WEIGHT + lane] + force_1 - force_2
            )
            q[LARGEST_1 + lane] = largest_1
            q[LARGEST_2 + lane] = larger(q[LARGEST_2 + lane], helmet_x - head_x - moved)
            q[FORCE_1 + lane] = force_1
            q[FORCE_2 + lane] = force_2
            q[FORCE_MOST + lane] = larger(q[FORCE_MOST + lane], force_2)
            q[PASSED + lane] = passed
            q[PASSED_MOST + lane] = larger(q[PASSED_MOST + lane], passed)
            q[MEAN + lane] = q[MEAN + lane] + share * (before_2 + force_2)
    for lane in range(LANES):
        force = q[MEAN + lane] + q[node + WEIGHT + lane]
        up = q[node + UP + lane]
        velocity = (force - 2.0 * up) / q[node + BELOW + lane]
        q[node + BLOCK + NEXT + lane] = force - up
        q[node + PEAK + lane] = larger(q[node + PEAK + lane], q[FORCE_MOST + lane])
        q[node + LEAST + lane] = smaller(q[node + LEAST + lane], force)
        q[node + WORK + lane] = q[node + WORK + lane] - velocity * q[node + WEIGHT + lane]


@compiled
def _step_shaft(state: Floats, nodes: int) -> None:
    """March the nodes between head and toe through one step, from the top down."""
    for i in range(1, nodes - 1):
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
            weight = q[here + WEIGHT]
            velocity = shaft_velocity(
                2.0 * (down - up) + weight,
                spring,
                drag,
                q[here + ABOVE] + q[here + BELOW],
                half,
                strength,
            )
            middle = clipped(spring + half * velocity, -strength, strength)
            end = clipped(spring + 2.0 * half * velocity, -strength, strength)
            # The damping of the next step goes by the spring force expected in its middle.
            expected = clipped(end + half * velocity, -strength, strength)
            sent_up = down - q[here + ABOVE] * velocity
            sent_down = up + q[here + BELOW] * velocity
            above = down + sent_up
            below = up + sent_down
            q[here + SPRING] = end
            q[here + DRAG] = q[here + SMITH] * larger(expected, -expected) + q[here + VISCOUS]
            q[here + WORK] = q[here + WORK] + velocity * (middle + drag * velocity - weight)
            q[here + PEAK] = larger(q[here + PEAK], larger(above, below))
            q[here + LEAST] = smaller(q[here + LEAST], smaller(above, below))
            q[here + DOWN] = q[here + NEXT]
            q[lane + UP] = sent_up
            q[here + BLOCK + NEXT] = sent_down


@compiled
def _step_toe(state: Floats, nodes: int, step: float) -> None:
    """March the toe node through one step."""
    q = state[HEAD_BLOCK + (nodes - 2) * BLOCK :]
    for lane in range(LANES):
        here = BLOCK + lane
        tip = 2 * BLOCK + lane
        down = q[here + DOWN]
        spring = q[here + SPRING]
        drag = q[here + DRAG]
        half = q[here + HALF]
        strength = q[here + STRENGTH]
        weight = q[here + WEIGHT]
        impedance = q[here + ABOVE]
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
        q[here + DOWN] = q[here + NEXT]
        q[lane + UP] = sent_up
