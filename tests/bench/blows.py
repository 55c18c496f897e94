"""How many blows a second, beside the same chain through a general-purpose ODE solver.

Run with ``python -m tests.bench.blows``. Reports figures; asserts nothing. Every figure is the best
of many short runs. On one thread processor time counts, so that other work on the machine costs
only what it takes from caches and clock; on two threads the clock on the wall.
"""

from __future__ import annotations

import os
import time
from collections.abc import Callable
from dataclasses import replace

import numpy as np
from scipy.integrate import solve_ivp

from matchup.analysis.blow import Strikes, strike
from matchup.analysis.chain import Chains, build_chains, enough_segments
from matchup.model.cushion import Spring
from matchup.model.hammer import Hammer
from matchup.model.job import Analysis
from matchup.model.pile import Pile, Section
from matchup.model.stage import Stage

BATCHES = (1, 8, 64, 1000)
SECONDS = 0.8
"""Spent on each figure."""
PILE = Pile.uniform("concrete", Section.square(0.35), 20.0, 35e9, 2450.0, 50e6, 6e6)
HAMMER = Hammer(
    "ram 5 t", "hydraulic", 5000.0, 0.1, 1.5, 0.85, helmet_mass=800.0, cushion=Spring(2.5e9, 0.8)
)
STAGE = Stage("final set", 18.0, 900e3, 800e3, 4e-3, toe_quake=3e-3)
CUSHION = Spring(250e6, 0.5)


def lumped_rates(segments: int):
    """Return the rates of change of the same chain as lumped masses, for `solve_ivp`.

    Elastic cushions and elastic soil keep the right-hand side free of memory, which only flatters
    the ODE solver.
    """
    mass = np.full(segments + 3, PILE.mass / segments)
    mass[2] = mass[-1] = 0.5 * mass[2]
    mass[0], mass[1] = HAMMER.ram_mass, HAMMER.helmet_mass
    axial = PILE.toe.modulus * PILE.toe.section.area
    stiffness = np.full(segments + 2, axial / (PILE.length / segments))
    stiffness[0], stiffness[1] = HAMMER.cushion.stiffness, CUSHION.stiffness
    soil = np.zeros(segments + 3)
    soil[3:] = STAGE.shaft / segments
    limit = soil / STAGE.shaft_quake

    def rates(_: float, state: np.ndarray) -> np.ndarray:
        x, v = np.split(state, 2)
        force = stiffness * (x[:-1] - x[1:])
        force[:2] = np.maximum(force[:2], 0.0)
        out = -np.clip(limit * x, -soil, soil) * (1 + STAGE.shaft_damping * v)
        out[-1] -= np.clip(STAGE.toe / STAGE.toe_quake * x[-1], 0, STAGE.toe)
        out[:-1] -= force
        out[1:] += force
        return np.concatenate((v, out / mass))

    start = np.zeros(2 * (segments + 3))
    start[segments + 3] = HAMMER.impact_velocity(0.6)
    return rates, start


def fastest(run: Callable[[], object], clock: Callable[[], float]) -> float:
    """Return the least time of `run`, repeated for some time. [s]"""
    run()
    best, until = np.inf, time.perf_counter() + SECONDS
    while time.perf_counter() < until:
        started = clock()
        run()
        best = min(best, clock() - started)
    return best


def strokes(count: int) -> Strikes:
    """Return blows of the final stage with strokes from 0.2 to 1.2 m."""
    place = np.zeros(count, np.int64)
    stiffness, restitution = np.full((2, count), [[CUSHION.stiffness], [CUSHION.restitution]])
    return Strikes(place, place, stiffness, restitution, np.linspace(0.2, 1.2, count))


def drive() -> tuple[Chains, Strikes]:
    """Return blows in twelve stages, from ground that hardly carries the pile to the final set."""
    shares = np.linspace(0.25, 1.0, 12)
    stages = [
        replace(
            STAGE,
            name=f"{share:.2f}",
            penetration=STAGE.penetration * share,
            shaft=STAGE.shaft * share**2,
            toe=STAGE.toe * share**3,
        )
        for share in shares
    ]
    chains = build_chains(PILE, stages, [HAMMER], Analysis(), enough_segments(PILE, True))
    strikes = strokes(960)
    return chains, strikes._replace(stage=np.arange(strikes.stroke.size) % shares.size)


def line(what: str, chains: Chains, strikes: Strikes, workers: int, ode: float) -> None:
    """Print one line of the table."""
    clock = time.thread_time if workers == 1 else time.perf_counter
    spent = fastest(lambda: strike(chains, strikes, workers=workers), clock)
    rate = strikes.stroke.size / spent
    steps = float(strike(chains, strikes, workers=1).raw[:, 1].mean())
    segments = chains.depth.size - 1
    each = 1e9 / rate / steps / (segments + 1)
    print(f"{what:36}{segments:9}{steps:7.0f}{each:11.2f}{rate:11,.0f}{rate * ode:10,.0f}")


def main() -> None:
    """Print the figures."""
    segments = enough_segments(PILE, cushioned=True)
    chains = build_chains(PILE, [STAGE], [HAMMER], Analysis(), segments)
    steps = float(strike(chains, strokes(1000)).raw[:, 1].mean())
    rate_of_change, start = lumped_rates(2 * int(PILE.length))
    span = (0.0, steps * chains.bar.step)
    ode = fastest(lambda: solve_ivp(rate_of_change, span, start, rtol=1e-4), time.thread_time)
    print(f"{PILE.length:g} m concrete pile; {os.cpu_count()} processors")
    print(f"solve_ivp (RK45, rtol 1e-4, lumped masses at 0.5 m, no memory): {1e3 * ode:.0f} ms\n")
    print(f"{'':36} segments  steps    ns/node    blows/s  ratio to")
    print(f"{'':36}                 and step            solve_ivp")
    for count in BATCHES:
        line(f"batch of {count}, one thread", chains, strokes(count), 1, ode)
    line(f"batch of {BATCHES[-1]}, two threads", chains, strokes(BATCHES[-1]), 2, ode)
    for factor in (2, 4):
        finer = build_chains(PILE, [STAGE], [HAMMER], Analysis(), factor * segments)
        line("batch of 64, one thread", finer, strokes(64), 1, ode)
    line("soft ground to final set, 960 blows", *drive(), 1, ode)


if __name__ == "__main__":
    main()
