"""One blow in full."""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from matchup.analysis.blow import Strikes, record_forces, strike
from matchup.analysis.chain import Chains, build_chains, enough_segments, pile_contact, set_quake
from matchup.analysis.stress import stresses_at_nodes, uses_at_nodes, uses_of_segments
from matchup.errors import AnalysisError
from matchup.model.cushion import Cushion, Stack
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.limits import StressLimits
from matchup.model.stage import Stage
from matchup.wave.layout import COLUMNS, Floats


@dataclass(frozen=True, slots=True)
class Envelope:
    """Largest stresses along the pile.

    Parameters
    ----------
    distance : (nodes,) float64 array
        From the head. [m]
    compression, tension : (nodes,) float64 array
        Both positive. [Pa]
    compression_use, tension_use : (nodes,) float64 array
        As fractions of the limits there. [-]
    """

    distance: Floats
    compression: Floats
    tension: Floats
    compression_use: Floats
    tension_use: Floats


@dataclass(frozen=True, slots=True)
class Trace:
    """Head and toe against time, each value the mean over one time step.

    Parameters
    ----------
    time : (steps,) float64 array
        Middle of the step, from impact. [s]
    head_force, head_velocity : (steps,) float64 array
        [N], [m/s]
    toe_displacement : (steps,) float64 array
        At the end of the step, from the unstressed soil. [m]
    """

    time: Floats
    head_force: Floats
    head_velocity: Floats
    toe_displacement: Floats


@dataclass(frozen=True, slots=True)
class Waves:
    """Force all along the pile against time.

    Parameters
    ----------
    time : (steps,) float64 array
        From impact. [s]
    distance : (segments + 1,) float64 array
        Ends of the segments, from the head. [m]
    force : (steps, segments) float64 array
        In each segment, compression positive. [N]
    """

    time: Floats
    distance: Floats
    force: Floats


@dataclass(frozen=True, slots=True)
class Blow:
    """One blow and all that is needed to judge it.

    Parameters
    ----------
    hammer : Hammer
    stage : Stage
    cushion : Cushion or None
    wear : str
    stroke, impact_velocity : float
        [m], [m/s]
    blow_energy, transferred : float
        Ram weight times stroke, and the largest work done on the pile head. [J]
    set, toe_most : float
        Set, and the toe's largest displacement from the unstressed soil. [m]
    set_rule : str
        Which quake was taken off.
    compression, tension : float
        Largest stresses, both positive; where the pile's parts have limits of their own, those with
        the largest uses of a limit. [Pa]
    compression_at, tension_at : float
        Where they occur, from the head. [m]
    compression_in, tension_in : str
        In which part; empty where the pile has one.
    compression_use, tension_use : float
        As fractions of the limits. [-]
    head_force : float
        Largest. [N]
    ram_velocity : float
        Of the ram at the end, negative upwards. [m/s]
    balance : float
        Energy unaccounted for over that put in by ram and gravity. [-]
    segments : int
    time_step, duration : float
        [s]
    envelope : Envelope
    trace : Trace
    waves : Waves
    """

    hammer: Hammer
    stage: Stage
    stack: Stack
    wear: str
    stroke: float
    impact_velocity: float
    blow_energy: float
    transferred: float
    set: float
    toe_most: float
    set_rule: str
    compression: float
    tension: float
    compression_at: float
    tension_at: float
    compression_in: str
    tension_in: str
    compression_use: float
    tension_use: float
    head_force: float
    ram_velocity: float
    balance: float
    segments: int
    time_step: float
    duration: float
    envelope: Envelope
    trace: Trace
    waves: Waves

    @property
    def left_at_impact(self) -> float:
        """Share of the blow energy left at impact [-]."""
        return 0.5 * self.hammer.ram_mass * self.impact_velocity**2 / self.blow_energy

    @property
    def cushion(self) -> Cushion | None:
        """Pile cushion."""
        return self.stack.pile

    @property
    def stress_use(self) -> float:
        """The larger use of a stress limit [-]."""
        return max(self.compression_use, self.tension_use)

    @property
    def hammer_cushion(self) -> str:
        """Hammer cushion in words."""
        return self.stack.hammer.text if self.stack.hammer else self.hammer.cushion_text


def compute_blow(
    job: Job, stage: Stage, hammer: Hammer, stack: Stack, wear: str, stroke: float
) -> Blow:
    """Compute one blow.

    Raises
    ------
    AnalysisError
        If the pile runs under its weight, or the blow did not end, diverged or failed its energy
        audit.
    """
    segments = enough_segments(job.pile, job.cushions is not None, job.stages)
    chains = build_chains(job.pile, [stage], [hammer], job.analysis, segments)
    what = f"{hammer.name} at stage {stage.name!r}, stroke {stroke:.3g} m"
    if chains.ground_of[0, 0] < 0:
        raise AnalysisError(
            f"{what}: the pile runs; pile, helmet, ram and what stands on it weigh more than the "
            f"resistance of {stage.resistance / 1e3:.0f} kN, so there is no blow to compute"
        )
    spring = stack.pile.spring(wear) if stack.pile else pile_contact(job.pile)
    other = stack.hammer.spring if stack.hammer else None
    first = np.zeros(1, np.int64)
    strikes = Strikes(
        first,
        first,
        np.array([spring.stiffness]),
        np.array([spring.restitution]),
        np.array([stroke]),
        None if other is None else np.array([other.stiffness]),
        None if other is None else np.array([other.restitution]),
    )
    struck = strike(chains, strikes, detail=True, workers=1)
    if not struck.sound[0]:
        raise AnalysisError(f"{what}: {struck.why_unsound(0)}")
    raw = dict(zip(COLUMNS, struck.raw[0], strict=True))
    envelope = struck.envelope[0]
    compression, tension = (_worst(chains, job.limits, envelope, side) for side in range(2))
    step = chains.bar.step
    steps = np.arange(struck.trace.shape[0], dtype=np.float64)
    return Blow(
        hammer=hammer,
        stage=stage,
        stack=stack,
        wear=wear,
        stroke=stroke,
        impact_velocity=hammer.impact_velocity(stroke, job.pile.rake),
        blow_energy=hammer.blow_energy(stroke),
        transferred=float(raw["passed_most"]),
        set=float(struck.set[0]),
        toe_most=float(raw["toe_most"]),
        set_rule=set_quake(stage)[1],
        compression=compression.stress,
        tension=tension.stress,
        compression_at=compression.at,
        tension_at=tension.at,
        compression_in=compression.part,
        tension_in=tension.part,
        compression_use=compression.use,
        tension_use=tension.use,
        head_force=float(raw["force_most"]),
        ram_velocity=float(raw["ram_velocity"]),
        balance=float(raw["balance"]),
        segments=segments,
        time_step=step,
        duration=float(raw["steps"]) * step,
        envelope=Envelope(
            chains.depth,
            *stresses_at_nodes(chains, envelope).T,
            *uses_at_nodes(chains, job.limits, envelope).T,
        ),
        trace=Trace(
            (steps + 0.5) * step, struck.trace[:, 0], struck.trace[:, 1], struck.trace[:, 2]
        ),
        waves=Waves((steps + 1) * step, chains.depth, record_forces(chains, strikes, steps.size)),
    )


class _Worst(NamedTuple):
    """The stress with the largest use of a limit, and where it occurs."""

    stress: float
    use: float
    at: float
    part: str


def _worst(chains: Chains, limits: StressLimits, envelope: Floats, side: int) -> _Worst:
    """Return the worst stress in compression, side 0, or in tension, side 1."""
    uses = uses_of_segments(chains, limits, envelope)[..., side]
    segment, end = (int(at) for at in np.unravel_index(np.argmax(uses), uses.shape))
    node = segment + end
    force = abs(float(envelope[node, side])) if uses[segment, end] > 0 else 0.0
    return _Worst(
        stress=force / float(chains.ends[segment, end]),
        use=float(uses[segment, end]),
        at=float(chains.depth[node]),
        part=limits.parts[int(chains.part[segment])].part,
    )
