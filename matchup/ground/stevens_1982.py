"""Resistance to driving of Stevens, Wiltsie and Turton, for layers of clay and medium dense sand.

Limited to what is at hand: of the sand table, only the row for medium dense sand. Its low case
is the published lower bound (friction inside a coring tube half of that outside), its high case
the upper bound (inside as outside; plugged: more sand friction and more toe resistance), and its
best case the mean of both, which is our choice.

References
----------
.. [1] R. S. Stevens, E. A. Wiltsie and T. H. Turton, "Evaluating pile drivability for hard clay,
   very dense sand and rock," OTC 4205, 1982; sand as quoted second-hand, bounds from memory.
.. [2] R. M. Semple and J. P. Gemeinhardt, "Stress history approach to analysis of soil resistance
   to pile driving," OTC 3969, 1981; from memory.
"""

from __future__ import annotations

import math

import numpy as np

from matchup.errors import Fault
from matchup.ground.api_2011 import clay_shaft, clay_toe
from matchup.ground.basis import Choices, Ground, Task, layers_lack
from matchup.ground.nodes import Faces, Nodes, assembled, by_layer, layer_nodes
from matchup.ground.unit import Friction, UnitResistance
from matchup.model.ground import Layer, Profile
from matchup.model.pile import Section
from matchup.model.sounding import FloatArray

SOURCE = "Stevens, Wiltsie and Turton 1982 (OTC 4205)"
SAND_NOTE = "Stevens et al. 1982: sand second-hand (medium dense only); clay and bounds from memory"
PRESSURE_RATIO = 0.7
"""Horizontal over vertical effective stress in sand; as quoted second-hand. [-]"""
INTERFACE_ANGLE = math.radians(25)
"""Medium dense sand on steel; as quoted second-hand. [rad]"""
SHAFT_LIMIT, TOE_FACTOR, TOE_LIMIT = 81.3e3, 20.0, 5e6
"""Medium dense sand; as quoted second-hand. [Pa], [-], [Pa]"""
INSIDE = {"low": 0.5, "best": 0.75, "high": 1.0}
"""Friction inside a coring tube over that outside; bounds from memory, best their mean. [-]"""
PLUGGED_SAND_SHAFT, PLUGGED_SAND_TOE, PLUGGED_CLAY_TOE = 1.3, 1.5, 1.67
"""Upper bound over lower bound of a plugged tube; from memory. [-]"""
RISE = {"low": 0.0, "best": 0.5, "high": 1.0}
"""How much of the way from lower to upper bound; the middle is our choice. [-]"""


def sand_shaft(effective: FloatArray) -> FloatArray:
    """Return ``K p0' tan(delta)`` up to the limit, (n,) [Pa]."""
    return np.minimum(PRESSURE_RATIO * effective * math.tan(INTERFACE_ANGLE), SHAFT_LIMIT)


def sand_toe(effective: FloatArray) -> FloatArray:
    """Return ``Nq p0'`` up to the limit, (n,) [Pa]."""
    return np.minimum(TOE_FACTOR * effective, TOE_LIMIT)


def clay_share(ocr: float) -> float:
    """Return ``0.5 OCR^0.3``: clay friction while driving over that of the API method [-]."""
    return float(0.5 * ocr**0.3)


def unit(
    layer: Layer, effective: FloatArray, strength: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return unit shaft and toe resistance in one layer, (k,) each [Pa]."""
    if layer.strength is None:
        return sand_shaft(effective), sand_toe(effective)
    assert layer.ocr is not None
    return clay_share(layer.ocr) * clay_shaft(strength, effective), clay_toe(strength)


def _lack(layer: Layer) -> tuple[str, str] | None:
    if layer.strength is not None:
        return None if layer.ocr is not None else ("ocr", "must be given for Stevens et al. 1982")
    if layer.soil in ("clay", "silt", "sand-clay"):
        return "strength", "must be given for Stevens et al. 1982"
    if layer.soil in ("sand", "fine sand") and layer.density == "medium dense":
        return None
    if layer.soil in ("sand", "fine sand") and layer.density is None:
        return "density", "must be given for Stevens et al. 1982"
    return (
        "unit_shaft",
        "must be given with unit_toe: of Stevens et al. 1982 only medium dense sand and clay are "
        "at hand",
    )


def missing(ground: Ground, section: Section, choices: Choices) -> list[Fault]:
    """Return what the method lacks."""
    return layers_lack(ground, "Stevens et al. 1982", _lack)


def faces(profile: Profile, nodes: Nodes, bound: str) -> Faces:
    """Return the shares of a tube's faces for one bound."""
    clay = np.array([layer.strength is not None for layer in profile.layers])[nodes.layer]
    direct = np.array([layer.states_both for layer in profile.layers])[nodes.layer]
    rise = np.where(direct, 0.0, RISE[bound])
    return Faces(
        outer=1.0,
        inner=INSIDE[bound],
        plugged=1 + rise * np.where(clay, 0.0, PLUGGED_SAND_SHAFT - 1),
        plugged_toe=1 + rise * (np.where(clay, PLUGGED_CLAY_TOE, PLUGGED_SAND_TOE) - 1),
    )


def resistance(task: Task) -> UnitResistance:
    """Return the resistance while driving, for the bound asked for."""
    profile = task.ground.profile
    assert profile is not None
    nodes = layer_nodes(profile)
    shaft, toe = by_layer(profile, nodes, unit, False)
    shares = faces(profile, nodes, task.bound)
    return assembled(task, nodes, Friction.steady(shaft), toe, shares, False, None, (SAND_NOTE,))
