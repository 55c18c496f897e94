"""Nodes down the ground, and the way from unit resistances at nodes to a `UnitResistance`."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import NamedTuple

import numpy as np

from matchup.ground.basis import Task
from matchup.ground.soil import (
    HARD_CLAY,
    Codes,
    Flags,
    Own,
    Pair,
    pair_note,
    setup_factors,
    shaft_dampings,
    shaft_quakes,
    toe_dampings,
    toe_quakes,
)
from matchup.ground.unit import Friction, Mode, UnitResistance, mean_around
from matchup.model.ground import SOILS, Layer, Profile, within
from matchup.model.pile import Section
from matchup.model.sounding import FloatArray

STEP = 0.05
"""Between nodes. Formulas are evaluated at nodes and straight in between. [m]"""
SURFACE = np.geomspace(1e-3, STEP, 12)[:-1]
"""More nodes near the surface, where clay friction rises with the fourth root of stress. [m]"""
TOE_REACH = 1.5
"""Unit toe resistance is the mean over so many widths of what bears, above and below the toe;
our choice, so that thin layers count by the part of the window that they fill. [-]"""


TOE_NOTE = "unit toe resistance: mean over 1.5 widths above and below the toe (our choice)"


@dataclass(frozen=True, slots=True, eq=False)
class Nodes:
    """The ground at nodes, whatever it is known from.

    Parameters
    ----------
    depth : (n,) float64 array
        Never decreasing; a layer border has two nodes. [m]
    soil : (n,) int64 array
        Place in `matchup.model.ground.SOILS`.
    hard : (n,) bool array
        Whether dense or hard, which decides the toe quake of a displacing pile.
    effective : (n,) float64 array
        Effective vertical stress. [Pa]
    own : Own
        What layers state themselves.
    layer : (n,) int64 array
        Row of the layer; zeros without layers.
    """

    depth: FloatArray
    soil: Codes
    hard: Flags
    effective: FloatArray
    own: Own
    layer: Codes

    def between(self, top: float, end: float) -> Nodes:
        """Return the nodes from one depth to another."""
        here = (self.depth >= top) & (self.depth <= end)
        return Nodes(
            self.depth[here],
            self.soil[here],
            self.hard[here],
            self.effective[here],
            self.own.at(here),
            self.layer[here],
        )

    def with_least_stress(self, least: float) -> Nodes:
        """Return the same with an effective stress of at least so much [Pa]."""
        return replace(self, effective=np.maximum(self.effective, least))

    def under(self, tips: FloatArray) -> Codes:
        """Return the nodes of the ground that toes stand on, (m,); the lower at a border."""
        rows = np.searchsorted(self.depth, tips, side="right") - 1
        return np.asarray(np.clip(rows, 0, self.depth.size - 1), np.int64)


def is_hard(layer: Layer) -> bool:
    """Return whether a layer counts as dense or hard: our reading of the published words."""
    if layer.soil == "rock" or layer.density in ("dense", "very dense"):
        return True
    strengths = [s for s in (layer.strength, layer.strength_bottom) if s is not None]
    return bool(strengths) and sum(strengths) / len(strengths) >= HARD_CLAY


def layer_nodes(profile: Profile, extra: FloatArray | None = None) -> Nodes:
    """Return nodes down a profile, two at every border.

    Parameters
    ----------
    extra : (k,) float64 array or None
        More depths to have nodes at; those outside the profile are left out. [m]
    """
    steps = np.round(STEP * np.arange(1, int(profile.end / STEP) + 1), 9)
    parts = [SURFACE, steps, np.array([profile.water]), profile.borders]
    depths = np.unique(np.concatenate(parts if extra is None else [*parts, extra]))
    pieces = [
        np.concatenate(([top], depths[(depths > top + 1e-6) & (depths < bottom - 1e-6)], [bottom]))
        for top, bottom in zip(profile.borders[:-1], profile.borders[1:], strict=True)
    ]
    depth = np.concatenate(pieces)
    layer = np.repeat(np.arange(len(pieces)), [piece.size for piece in pieces])
    return nodes_in(profile, depth, layer)


def nodes_in(profile: Profile, depth: FloatArray, layer: Codes) -> Nodes:
    """Return nodes at depths, each in the layer of a row: (n,) each."""
    soil = np.array([SOILS.index(each.soil) for each in profile.layers])
    hard = np.array([is_hard(each) for each in profile.layers])
    own = Own(*(_stated(profile, field)[layer] for field in Own._fields))
    effective = profile.effective_stress(depth)
    return Nodes(depth, soil[layer], hard[layer], effective, own, layer)


def _stated(profile: Profile, field: str) -> FloatArray:
    return np.array([getattr(layer, field) for layer in profile.layers], dtype=float)


def nothing_stated(size: int) -> Own:
    """Return what no layer states."""
    void = np.full(size, np.nan)
    return Own(void, void, void, void, void)


class Faces(NamedTuple):
    """Shares of the unit resistances that act, numbers or (n,) arrays [-].

    `outer` and `inner` are those of a coring tube's faces; `plugged` and `plugged_toe` those of a
    plugged tube. Closed piles have 1 throughout, and so have the steel section and box of an H.
    """

    outer: FloatArray | float = 1.0
    inner: FloatArray | float = 1.0
    plugged: FloatArray | float = 1.0
    plugged_toe: FloatArray | float = 1.0


def by_layer(
    profile: Profile,
    nodes: Nodes,
    unit: Callable[[Layer, FloatArray, FloatArray], tuple[FloatArray, FloatArray]],
    static: bool,
) -> tuple[FloatArray, FloatArray]:
    """Return unit shaft and toe resistance at nodes.

    A layer that states both directly has those, and has them while driving: in a static method
    they are raised by the setup factor that driving takes off again.

    Parameters
    ----------
    unit : callable
        From layer, effective stress and undrained strength, (k,) [Pa], to shaft and toe, (k,).

    Returns
    -------
    shaft, toe : (n,) float64 array
        [Pa]
    """
    shaft, toe = np.empty(nodes.depth.size), np.empty(nodes.depth.size)
    for row, layer in enumerate(profile.layers):
        here = nodes.layer == row
        raised = setup_factors(nodes.soil[here], nodes.own.at(here)) if static else 1.0
        if layer.unit_shaft is not None and layer.unit_toe is not None:
            shaft[here], toe[here] = layer.unit_shaft * raised, layer.unit_toe
        else:
            strength = layer.strength_at(nodes.depth[here])
            shaft[here], toe[here] = unit(layer, nodes.effective[here], strength)
    return shaft, toe


def assembled(
    task: Task,
    nodes: Nodes,
    friction: Friction,
    toe: FloatArray,
    faces: Faces,
    static: bool,
    pair: Pair | None,
    notes: tuple[str, ...],
) -> UnitResistance:
    """Return the resistance of a pile from unit resistances at nodes.

    Parameters
    ----------
    friction : Friction
    toe : (n,) float64 array
        Unit toe resistance at nodes. [Pa]
    faces : Faces
    static : bool
        Whether the shaft resistance is the one long after driving.
    pair : Pair or None
        Quakes and damping that go with the method; None for the tables by soil.

    Raises
    ------
    ModelError
        If a penetration lies where there are no nodes.
    """
    within(task.tips, nodes.depth[0], nodes.depth[-1], "ground")
    under = nodes.under(task.tips)
    own = nodes.own.at(under)
    soil, hard = nodes.soil[under], nodes.hard[under]

    def mode(
        name: str, outer: FloatArray | float, inner: FloatArray | float, area: float, wide: bool
    ) -> Mode:
        bearing = task.section.width if wide else task.section.area / task.section.perimeter
        stress = toe * faces.plugged_toe if name == "plugged" else toe
        return Mode(
            name,
            np.broadcast_to(outer, nodes.depth.shape) * task.section.perimeter,
            np.broadcast_to(inner, nodes.depth.shape) * _inner_length(task.section),
            area,
            mean_around(nodes.depth, stress, task.tips, TOE_REACH * bearing),
            toe_quakes(soil, hard, own, pair, task.section.width if wide else None),
        )

    return UnitResistance(
        nodes.depth,
        *friction,
        setup_factors(nodes.soil, nodes.own),
        shaft_quakes(nodes.own, pair),
        shaft_dampings(nodes.soil, nodes.own, pair),
        task.tips,
        _modes(task, faces, mode),
        toe_dampings(soil, own, pair),
        static,
        np.ones(task.tips.size),
        (*notes, *_inside_note(task, faces), TOE_NOTE, pair_note(pair)),
    )


def _inner_length(section: Section) -> float:
    return section.core.perimeter if section.core else 0.0


def _inside_note(task: Task, faces: Faces) -> tuple[str, ...]:
    core = task.section.core
    inside = faces.inner if task.choices.inside is None else task.choices.inside
    if core is None or core.shape != "tube" or isinstance(inside, np.ndarray):
        return ()
    return (f"unit friction inside the coring tube: {inside:g} of that outside",)


def _modes(task: Task, faces: Faces, mode: Callable[..., Mode]) -> tuple[Mode, ...]:
    section = task.section
    if section.core is None:
        return (mode("closed", 1.0, 0.0, section.toe_area, section.displaces),)
    gross = section.area + section.core.area
    if section.core.shape == "H":
        return (
            mode("steel section", 1.0, 1.0, section.area, False),
            mode("box", 1.0, 0.0, gross, True),
        )
    inside = task.choices.inside
    inner = faces.inner if inside is None else inside * np.asarray(faces.outer)
    return (
        mode("coring", faces.outer, inner, section.area, False),
        mode("plugged", faces.plugged, 0.0, gross, True),
    )
