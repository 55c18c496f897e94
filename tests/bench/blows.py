"""How many blows a second, beside the same chain through a general-purpose ODE solver.

Run with ``python -m tests.bench.blows``. Reports figures; asserts nothing.
"""

from __future__ import annotations

import time

import numpy as np
from scipy.integrate import solve_ivp

from matchup.analysis.blow import Strikes, strike
from matchup.analysis.chain import build_chains, enough_segments
from matchup.model.cushion import Spring
from matchup.model.hammer import Hammer
from matchup.model.job import Analysis
from matchup.model.pile import Pile, Section
from matchup.model.stage import Stage

BLOWS = 4000
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
    stiffness = np.full(segments + 2, PILE.modulus * PILE.section.area / (PILE.length / segments))
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


def main() -> None:
    """Print the figures."""
    segments = enough_segments(PILE, cushioned=True)
    chains = build_chains(PILE, [STAGE], [HAMMER], Analysis(), segments)
    place = np.zeros(BLOWS, np.int64)
    strikes = Strikes(
        place,
        place,
        np.full(BLOWS, CUSHION.stiffness),
        np.full(BLOWS, CUSHION.restitution),
        np.linspace(0.2, 1.2, BLOWS),
    )
    rates = {}
    steps = 0.0
    for workers in (1, 2):
        strike(chains, strikes, workers=workers)
        started = time.perf_counter()
        struck = strike(chains, strikes, workers=workers)
        rates[workers] = BLOWS / (time.perf_counter() - started)
        steps = float(struck.raw[:, 1].mean())
    rate_of_change, start = lumped_rates(2 * int(PILE.length))
    started = time.perf_counter()
    solve_ivp(rate_of_change, (0.0, steps * chains.bar.step), start, rtol=1e-4)
    ode = time.perf_counter() - started
    per_node_step = 1e9 / rates[1] / steps / (segments + 1)
    print(f"{PILE.length:g} m concrete pile, {segments} segments, {steps:.0f} steps on average")
    print(f"one thread:  {rates[1]:9,.0f} blows/s, {per_node_step:.2f} ns per node and step")
    print(f"two threads: {rates[2]:9,.0f} blows/s")
    print(f"solve_ivp (RK45, rtol 1e-4, lumped masses at 0.5 m, no memory): {1e3 * ode:.0f} ms")
    print(f"ratio to solve_ivp on one thread: {ode * rates[1]:,.0f}")


if __name__ == "__main__":
    main()
