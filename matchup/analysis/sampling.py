"""Samples of what is in doubt: points of scrambled Sobol sequences, and stages made of them.

A Sobol sequence fills the unit cube evenly. Scrambled at random it gives unbiased means, and
several independent scramblings tell by how much these scatter: their standard error.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import NamedTuple

import numpy as np

from matchup.model.doubt import Doubt
from matchup.model.stage import Stage
from matchup.wave.layout import Floats, Integers

SCRAMBLINGS = 8
"""Independent scramblings of the sequence. The standard error that follows from their scatter is
itself known to one part in ``sqrt(2 * 7)``, about a quarter."""
FINEST = 2.0**-31
"""Half of the spacing of the sequence's numbers: keeps them off zero."""
EDGE = 1e-6
"""Thickness of the jump of shaft resistance at the end of a range of depth. [m]"""


class Sampler:
    """Draws points of the unit cube, more on request, the same for the same seed.

    Parameters
    ----------
    dimensions, seed : int
    scramblings : int
    """

    def __init__(self, dimensions: int, seed: int, scramblings: int = SCRAMBLINGS):
        from scipy.stats import qmc

        self._engines = [
            qmc.Sobol(dimensions, scramble=True, rng=np.random.default_rng((seed, number)))
            for number in range(scramblings)
        ]

    def draw(self, each: int) -> Floats:
        """Return the next points of every scrambling, (scramblings, each, dimensions) in (0, 1).

        Balanced where all points drawn so far are a power of two.
        """
        return np.array([engine.random(each) for engine in self._engines]) + FINEST


def factors(doubt: Doubt, points: Floats, correlated: bool = True) -> Floats:
    """Return factors on the inputs in doubt at points of the unit cube.

    Parameters
    ----------
    doubt : Doubt
    points : (samples, inputs) float64 array
        In (0, 1).
    correlated : bool
        Whether the correlations count; without, the inputs are independent.

    Returns
    -------
    (samples, inputs) float64 array
        [-]
    """
    shares = points
    if correlated and doubt.correlations:
        from scipy.special import ndtr, ndtri

        root = np.linalg.cholesky(doubt.correlation_matrix())
        shares = np.clip(ndtr(ndtri(points) @ root.T), 1e-15, 1 - 1e-15)
    columns = [one.factor.quantile(shares[:, i]) for i, one in enumerate(doubt.inputs)]
    return np.column_stack(columns)


class Scales(NamedTuple):
    """Factors on what is not of the ground, by stage: (stages,) float64 arrays.

    Parameters
    ----------
    efficiency : (stages,) float64 array
        On the hammer's efficiency, which stays at most 1. [-]
    cushion : (stages,) float64 array
        On the pile cushion's stiffness. [-]
    """

    efficiency: Floats
    cushion: Floats


@dataclass(frozen=True)
class Sampled:
    """Stages of samples, sample by sample, each sample a ground case of its own.

    Parameters
    ----------
    stages : tuple of Stage
    scales : Scales
    """

    stages: tuple[Stage, ...]
    scales: Scales


def sampled_stages(doubt: Doubt, stages: Sequence[Stage], drawn: Floats) -> Sampled:
    """Return the stages of every sample.

    Parameters
    ----------
    doubt : Doubt
    stages : sequence of Stage
        Of one ground case.
    drawn : (samples, inputs) float64 array
        Factors. [-]
    """
    prepared = [_DoubtfulStage(doubt, stage) for stage in stages]
    made = [
        one.sample(row, str(number))
        for number, row in enumerate(drawn.tolist())
        for one in prepared
    ]
    of = [one.of for one in doubt.inputs]
    scales = [
        np.repeat(drawn[:, of.index(key)] if key in of else np.ones(len(drawn)), len(stages))
        for key in ("efficiency", "cushion_stiffness")
    ]
    return Sampled(tuple(made), Scales(*scales))


class _DoubtfulStage:
    """One stage, ready to be made with many factors.

    Along the shaft the inputs in doubt cut the penetration into ranges of depth; each has its
    share of the shaft's resistance, and a factor.
    """

    def __init__(self, doubt: Doubt, stage: Stage):
        self.stage = stage
        self.of = [one.of for one in doubt.inputs]
        ends = {end for one in doubt.inputs for end in (one.top, one.bottom)}
        inner = sorted(end for end in ends if 0 < end < stage.penetration)
        borders = np.array([0.0, *inner, stage.penetration])
        self.depth, self.intensity, self.range = _cut_shape(stage, borders)
        self.shares = _range_shares(self.depth, self.intensity, self.range, borders.size - 1)
        middles = 0.5 * (borders[1:] + borders[:-1])
        self.shaft = [
            [i for i, o in enumerate(doubt.inputs) if _acts(o.of, "shaft") and o.top < z < o.bottom]
            for z in middles.tolist()
        ]
        # A toe on a border stands on the ground below it.
        self.toe = [
            i
            for i, o in enumerate(doubt.inputs)
            if _acts(o.of, "toe") and o.top <= stage.penetration < o.bottom
        ]

    def sample(self, drawn: Sequence[float], name: str) -> Stage:
        """Return the stage with factors on it."""
        stage = self.stage
        along = [math.prod(drawn[i] for i in inputs) for inputs in self.shaft]
        shaft = stage.shaft * math.fsum(f * s for f, s in zip(along, self.shares, strict=True))
        shaft, setup = with_setup(stage, shaft, self._factor(drawn, "setup"))
        return replace(
            stage,
            name=f"{stage.name}, sample {name}",
            case=name,
            shaft=shaft,
            toe=stage.toe * math.prod(drawn[i] for i in self.toe),
            shaft_quake=stage.shaft_quake * self._factor(drawn, "shaft_quake"),
            toe_quake=stage.toe_quake * self._factor(drawn, "toe_quake"),
            shaft_damping=stage.shaft_damping * self._factor(drawn, "shaft_damping"),
            toe_damping=stage.toe_damping * self._factor(drawn, "toe_damping"),
            shaft_shape=self._shape(along),
            setup=setup,
            modes=(),
            notes=(),
        )

    def _factor(self, drawn: Sequence[float], key: str) -> float:
        return drawn[self.of.index(key)] if key in self.of else 1.0

    def _shape(self, along: Sequence[float]) -> tuple[tuple[float, float], ...]:
        if len(along) == 1:
            return self.stage.shaft_shape
        intensity = self.intensity * np.array(along)[self.range]
        return tuple(zip(self.depth.tolist(), intensity.tolist(), strict=True))


def _acts(of: str, part: str) -> bool:
    return of in ("resistance", part)


def _cut_shape(stage: Stage, borders: Floats) -> tuple[Floats, Floats, Integers]:
    """Return depths and intensities of the shaft's shape with rows at all borders, and ranges.

    An inner border has two rows, just above and just below it, so that the intensity may jump.
    """
    shape = stage.shaft_shape or ((0.0, 1.0), (stage.penetration, 1.0))
    at, intensity = np.array(shape).T
    inner = borders[1:-1]
    low, high = max(at[0], 0.0), min(at[-1], stage.penetration)
    rows = np.concatenate((at, [low, high], inner - EDGE, inner + EDGE))
    depth = np.unique(rows[(rows >= low) & (rows <= high) & ~np.isin(rows, inner)])
    value = np.interp(depth, at, intensity)
    return depth, value, np.searchsorted(inner, depth)


def _range_shares(depth: Floats, value: Floats, ranges: Integers, count: int) -> list[float]:
    """Return the share of the shaft's resistance in each range of depth."""
    whole = np.trapezoid(value, depth)
    if count == 1 or not whole > 0:
        return [1.0] + [0.0] * (count - 1)
    parts = [np.trapezoid(value[ranges == i], depth[ranges == i]) for i in range(count)]
    return [float(part) / float(sum(parts)) for part in parts]


def with_setup(stage: Stage, shaft: float, factor: float) -> tuple[float, float]:
    """Return shaft resistance and set-up of a stage with a factor on its set-up factor.

    Long after driving the shaft has `setup` times what it has at the stage. What it had without
    the pause before it follows from the share of the set-up that it has regained since. Where the
    resistance is reckoned for long after driving, more set-up means less while driving; where it
    is reckoned while driving, more set-up means more after a pause.

    Parameters
    ----------
    stage : Stage
    shaft : float
        In place of the stage's. [N]
    factor : float
        Never lowers the set-up factor below 1. [-]
    """
    if factor == 1 or shaft == 0:
        return shaft, stage.setup
    later, regained = shaft * stage.setup, stage.regained
    fresh = (shaft - regained * later) / (1 - regained) if regained < 1 else 0.0
    if stage.static:
        fresh = min(fresh / factor, later)
    else:
        later = max(factor * later, fresh)
    now = (1 - regained) * fresh + regained * later
    return now, later / now
