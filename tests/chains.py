"""Builders for tests of the wave solver: bars and heads by hand, and random realistic jobs.

Closed forms know no units, so `Head` and `hit` take any consistent set: many tests march with
ram mass, impedance and impact velocity all one.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from matchup.analysis.blow import Strikes, Struck, strike
from matchup.analysis.chain import Chains, build_chains, enough_segments, pile_contact
from matchup.model.cushion import Cushion, CushionMaterial, Spring
from matchup.model.hammer import STANDARD_GRAVITY, Hammer
from matchup.model.job import Analysis
from matchup.model.pile import Pile, Section, concrete_modulus
from matchup.model.stage import SHAFT_DAMPING, Stage
from matchup.wave.layout import COLUMNS, Bar, Blows, Grounds
from matchup.wave.march import march

STIFF = 1e4
"""Contact stiffness over ``Z**2 / M`` that stands for a ram directly on the rod: `bare_head`."""
GLUED = 1e6
"""Stiffness over ``Z**2 / M`` of a spring that holds a helmet on the rod."""


# --- chains by hand -----------------------------------------------------------------------------


@dataclass(frozen=True)
class Head:
    """Ram, hammer cushion, helmet and pile cushion; `e` are coefficients of restitution."""

    ram: float
    velocity: float
    k1: float
    helmet: float
    k2: float
    e1: float = 1.0
    e2: float = 1.0
    gravity: float = 0.0

    def row(self) -> tuple[float, ...]:
        return (
            self.ram,
            self.velocity,
            self.k1,
            self.k1 / self.e1**2,
            self.helmet,
            self.k2,
            self.k2 / self.e2**2,
            self.gravity * self.ram,
            self.gravity * self.helmet,
        )

    def substeps(self, step: float, accuracy: float = 0.1) -> int:
        """Return how many sub-steps keep sub-step times largest frequency at `accuracy`."""
        k1, k2 = self.k1 / self.e1**2, self.k2 / self.e2**2
        frequency = math.sqrt((k1 + k2) / self.helmet + k1 / self.ram)
        return max(1, math.ceil(step * frequency / accuracy))


def bare_head(ram: float, velocity: float, impedance: float, stiff: float = STIFF) -> Head:
    """Return a head that comes close to a ram directly on the rod.

    The solver always has two springs and a helmet between ram and pile. Here the first spring has
    the stiffness ``kappa Z**2/M`` with ``kappa = stiff``; a helmet of ``0.1 / kappa`` of the ram's
    mass is held on the rod by a spring a hundred times as stiff, so that it neither oscillates nor
    bounces between ram and rod. By the formula of a ram with one linear spring the largest force is
    then short of ``Z v0`` by the share ``ln(kappa) / kappa``, 9e-4 for 1e4, less a tenth for the
    helmet, and fronts are smeared over the time ``ln(kappa) / kappa`` times ``M/Z``.
    """
    unit = impedance**2 / ram
    return Head(ram, velocity, stiff * unit, 0.1 / stiff * ram, 100 * stiff * unit)


def cushioned_head(ram: float, velocity: float, stiffness: float, impedance: float) -> Head:
    """Return a head with one working cushion of `stiffness` between ram and pile.

    The working cushion is the hammer cushion; the helmet of 1e-5 of the ram's mass is held on the
    rod by a second spring, which in series softens the cushion by the share ``k M / Z**2 / 1e6``.
    """
    return Head(ram, velocity, stiffness, 1e-5 * ram, GLUED * impedance**2 / ram)


def uniform_bar(
    segments: int, travel: float = 1.0, impedance: float = 1.0, area: float = 1.0
) -> Bar:
    """Return a weightless uniform bar that a wave crosses in the time `travel`."""
    return stepped_bar([(segments, impedance)], travel / segments, area)


def stepped_bar(parts: Sequence[tuple[int, float]], step: float, area: float = 1.0) -> Bar:
    """Return a weightless bar of parts (segments, impedance), head first."""
    impedance = np.concatenate([np.full(count, value) for count, value in parts])
    return Bar(step, impedance, np.full(impedance.size, area), np.zeros(impedance.size + 1))


def soil(
    nodes: int,
    shaft: dict[int, float] | None = None,
    quake: float = 1.0,
    damping: float = 0.0,
    toe: tuple[float, float, float] = (0.0, 0.0, 0.0),
    smith: bool = True,
) -> Grounds:
    """Return unstressed soil.

    Parameters
    ----------
    shaft : dict of node to strength
        Strength of the shaft spring at the nodes that have one.
    quake, damping : float
        Of the shaft.
    toe : (stiffness, strength, damping)
    """
    strength = np.zeros((1, nodes))
    for node, value in (shaft or {}).items():
        strength[0, node] = value
    return Grounds(
        strength / quake,
        strength,
        np.full((1, nodes), damping),
        np.array([toe], dtype=float),
        np.zeros((1, nodes)),
        smith,
    )


@dataclass(frozen=True)
class Outcome:
    """What a hand-made chain did; `row` by `COLUMNS` name, `envelope` largest and least force."""

    row: dict[str, float]
    envelope: np.ndarray
    force: np.ndarray
    velocity: np.ndarray
    toe: np.ndarray
    toe_velocity: np.ndarray
    step: float


def hit(
    bar: Bar,
    head: Head,
    grounds: Grounds | None = None,
    steps: int | tuple[int, int] = 1000,
    substeps: int | None = None,
) -> Outcome:
    """March one hand-made blow; an integer `steps` marches exactly so many."""
    nodes = bar.weight.size
    least, most = (steps, steps) if isinstance(steps, int) else steps
    blows = Blows(
        np.zeros(1, np.int64),
        np.array([substeps or head.substeps(bar.step)], np.int64),
        np.array([head.row()]),
    )
    out = np.zeros((1, len(COLUMNS)))
    envelope = np.zeros((1, nodes, 2))
    trace = np.zeros((most, 4))
    march(
        bar,
        soil(nodes) if grounds is None else grounds,
        blows,
        np.zeros(1, np.int64),
        (least, most),
        out,
        envelope,
        trace,
    )
    row = dict(zip(COLUMNS, out[0].tolist(), strict=True))
    trace = trace[: int(row["steps"])]
    return Outcome(row, envelope[0], *trace.T.copy(), bar.step)


# --- random realistic jobs ----------------------------------------------------------------------

# Moduli and restitutions: US practice, from memory; they only make the random jobs realistic.
PLYWOOD = CushionMaterial("plywood", "pile", 207e6, 0.5, 0.019, 517e6, 0.75)
OAK = CushionMaterial("oak", "pile", 414e6, 0.5, 0.025, 700e6, 0.8)
KINDS = ("concrete", "steel", "timber")


class Chain(NamedTuple):
    """One random job with its stroke; `is_cushioned` says whether there is a pile cushion."""

    pile: Pile
    stage: Stage
    hammer: Hammer
    cushion: Spring
    is_cushioned: bool
    stroke: float


def random_chain(rng: np.random.Generator, kind: str | None = None) -> Chain:
    """Return a random realistic job, from easy to hard driving.

    The resistance is what about half of the energy at impact can move by a set drawn between
    0.5 and 30 mm on top of 4 mm of elastic movement, at most 60 % of the pile's strength, and at
    least three times the weight of pile, helmet and ram: below that the ram rides the pile down
    in many small impacts, and nobody asks for the set of a blow.
    """
    kind = kind or str(rng.choice(KINDS))
    pile = {"concrete": _concrete, "steel": _steel, "timber": _timber}[kind](rng)
    ram = pile.mass * 10 ** rng.uniform(math.log10(0.35), math.log10(2.5))
    ram = max(ram, 400.0)  # nobody drives bearing piles with less
    helmet = max(100.0, ram * rng.uniform(0.08, 0.25))
    area = rng.uniform(0.08, 0.2) if ram < 3000 else rng.uniform(0.15, 0.4)
    hammer_cushion = Spring(2.4e9 * area / rng.uniform(0.1, 0.25), 0.8)
    is_drop = kind == "timber"
    has_cushion = rng.random() < (0.5 if is_drop else 0.85)
    stroke = rng.uniform(0.3, 1.3)
    hammer = Hammer(
        "random",
        "drop" if is_drop else "hydraulic",
        ram,
        0.1,
        2.0,
        rng.uniform(0.4, 0.6) if is_drop else rng.uniform(0.65, 0.95),
        helmet_mass=helmet,
        cushion=hammer_cushion if has_cushion else None,
    )
    cushion, is_cushioned = _pile_cushion(rng, pile)
    stage = _stage(rng, pile, hammer, stroke)
    return Chain(pile, stage, hammer, cushion, is_cushioned, stroke)


def _concrete(rng: np.random.Generator) -> Pile:
    strength = rng.uniform(40e6, 60e6)
    width = rng.uniform(0.25, 0.5)
    length = rng.uniform(12.0, min(35.0, 80 * width))
    modulus = concrete_modulus(strength)
    return Pile.uniform("concrete", Section.square(width), length, modulus, 2400.0, strength, 5e6)


def _steel(rng: np.random.Generator) -> Pile:
    diameter = rng.uniform(0.27, 0.76)
    toe = str(rng.choice(("open", "closed")))
    section = Section.pipe(diameter, rng.uniform(8e-3, 16e-3), toe)
    return Pile.uniform("steel", section, rng.uniform(15.0, 45.0), 210e9, 7850.0, 355e6)


def _timber(rng: np.random.Generator) -> Pile:
    section = Section.round(rng.uniform(0.25, 0.35))
    return Pile.uniform(
        "timber", section, rng.uniform(8.0, 16.0), rng.uniform(8.6e9, 10.3e9), 800.0, 25e6
    )


def _pile_cushion(rng: np.random.Generator, pile: Pile) -> tuple[Spring, bool]:
    if pile.toe.material == "steel" or (pile.toe.material == "timber" and rng.random() < 0.5):
        return pile_contact(pile), False
    material = PLYWOOD if rng.random() < 0.6 else OAK
    thickest = 0.35 if pile.toe.material == "concrete" else 0.12
    thickness = rng.uniform(0.08, thickest)
    cushion = Cushion(material, thickness, pile.section.area)
    return cushion.spring("new" if rng.random() < 0.5 else "worn"), True


def _stage(rng: np.random.Generator, pile: Pile, hammer: Hammer, stroke: float) -> Stage:
    section = pile.section
    penetration = pile.length * rng.uniform(0.35, 0.98)
    set_wished = 10 ** rng.uniform(math.log10(0.5e-3), math.log10(30e-3))
    energy = hammer.blow_energy(stroke) * hammer.efficiency
    resistance = min(0.5 * energy / (set_wished + 4e-3), 0.6 * pile.toe.strength * section.area)
    weight = STANDARD_GRAVITY * (pile.mass + (hammer.helmet_mass or 0.0) + hammer.ram_mass)
    resistance = max(resistance, 3 * weight)
    toe_share = rng.uniform(0.05, 0.95)
    quake = section.width * rng.choice((1 / 120, 1 / 60)) if section.displaces else 2.5e-3
    return Stage(
        "random",
        penetration,
        resistance * (1 - toe_share),
        resistance * toe_share,
        1e-3,
        toe_quake=quake,
        shaft_damping=float(rng.choice(list(SHAFT_DAMPING.values()))),
        toe_damping=float(rng.choice((0.16, 0.5))),
        shaft_shape=() if rng.random() < 0.5 else ((0.0, 0.0), (penetration, 1.0)),
    )


def random_chains(seed: int, count: int) -> list[Chain]:
    """Return `count` random jobs, the kinds in turn."""
    rng = np.random.default_rng(seed)
    return [random_chain(rng, KINDS[i % len(KINDS)]) for i in range(count)]


def default_segments(chain: Chain) -> int:
    """Return the number of segments that the program would take."""
    return enough_segments(chain.pile, chain.is_cushioned)


def build(chain: Chain, refinement: float = 1.0, analysis: Analysis | None = None) -> Chains:
    """Return the solver's arrays for `chain`, its segments `refinement` times as many as usual."""
    segments = round(refinement * default_segments(chain))
    return build_chains(chain.pile, [chain.stage], [chain.hammer], analysis or Analysis(), segments)


def strikes(chain: Chain, strokes: Sequence[float] | None = None) -> Strikes:
    """Return blows of `chain` at each of `strokes`, its own if not given."""
    stroke = np.array([chain.stroke] if strokes is None else strokes, dtype=float)
    first = np.zeros(stroke.size, np.int64)
    cushion = chain.cushion
    return Strikes(
        first,
        first,
        np.full(stroke.size, cushion.stiffness),
        np.full(stroke.size, cushion.restitution),
        stroke,
    )


def blow(
    chain: Chain,
    refinement: float = 1.0,
    least_steps: int = 0,
    detail: bool = False,
    analysis: Analysis | None = None,
) -> Struck:
    """Compute the blow of `chain`."""
    chains = build(chain, refinement, analysis)
    return strike(chains, strikes(chain), detail, least_steps, workers=1)
