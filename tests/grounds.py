"""Piles, layers and soundings for tests of the ground; all invented."""

from __future__ import annotations

import numpy as np

from matchup.ground.basis import Choices, Ground, Task
from matchup.ground.methods import method_named, unit_resistance
from matchup.ground.unit import UnitResistance
from matchup.model.ground import Layer, Profile
from matchup.model.pile import Pile, Section
from matchup.model.sounding import FloatArray, Sounding

KPA, MPA = 1e3, 1e6
WATER = 9806.65

TUBE = Section.pipe(0.762, 0.019, "open")
CLOSED = Section.pipe(0.508, 0.0127, "closed")
SQUARE = Section.square(0.4)
H = Section.h(0.0168, 0.346, 0.373)


def pile(section: Section, length: float = 45.0) -> Pile:
    return Pile.uniform("steel", section, length, 210e9, 7850.0, 355 * MPA)


def sand(top: float, bottom: float, density: str = "medium dense", **given) -> Layer:
    return Layer(top, bottom, "sand", 20e3, density=density, **given)


def clay(top: float, bottom: float, strength: float, end: float | None = None, **given) -> Layer:
    return Layer(top, bottom, "clay", 17e3, strength=strength, strength_bottom=end, **given)


def soft_over_dense() -> Profile:
    return Profile(
        (
            sand(0.0, 2.13),
            clay(2.13, 11.37, 15 * KPA, 35 * KPA, ocr=1.3),
            sand(11.37, 30.0, "dense"),
        ),
        water=1.0,
    )


def sounding(depth: FloatArray, tip: FloatArray, sleeve: FloatArray | float, **given) -> Sounding:
    sleeve = np.broadcast_to(np.asarray(sleeve, float), depth.shape).copy()
    void = np.full(depth.shape, np.nan)
    return Sounding("test", depth, tip, sleeve, given.pop("pore_pressure", void), **given)


def soft_over_dense_sounding(step: float = 0.02, noise: float = 0.1) -> Sounding:
    depth = step * np.arange(1, round(30 / step) + 1)
    soft = (depth > 2.13) & (depth < 11.37)
    tip = np.where(depth < 2.13, 8 * MPA, np.where(soft, 0.4 * MPA + 30e3 * depth, 18 * MPA))
    tip = tip * np.exp(np.random.default_rng(3).normal(0, noise, depth.size))
    return sounding(depth, tip, tip * np.where(soft, 0.045, 0.008), water=1.0)


def unit_of(
    name: str,
    ground: Ground,
    section: Section,
    tips: list[float],
    choices: Choices | None = None,
    bound: str = "best",
) -> UnitResistance:
    task = Task(ground, section, np.array(tips), choices or Choices(), bound)
    return unit_resistance(method_named(name), task)
