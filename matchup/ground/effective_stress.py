"""Effective stress: unit resistances as multiples of the effective vertical stress.

The factors are the layers' own. The published ranges are wide, so none is filled in; a factor
outside its range is noted.

References
----------
.. [1] B. H. Fellenius, in FHWA-NHI-16-009, "Design and Construction of Driven Pile Foundations,"
   vol. I, 2016, Table 7-9, as quoted second-hand.
"""

from __future__ import annotations

from matchup.errors import Fault
from matchup.ground.basis import Choices, Ground, Task, layers_lack
from matchup.ground.nodes import Faces, assembled, by_layer, layer_nodes
from matchup.ground.unit import Friction, UnitResistance
from matchup.model.ground import Layer, Profile
from matchup.model.pile import Section
from matchup.model.sounding import FloatArray

SOURCE = "effective stress, beta and Nt; ranges: Fellenius, FHWA-NHI-16-009 Table 7-9, second-hand"
BETA = {"clay": (0.15, 0.35), "silt": (0.25, 0.50), "sand": (0.30, 0.90), "gravel": (0.35, 0.80)}
"""Published range of unit shaft resistance over effective stress; as quoted second-hand. [-]"""
TOE_FACTOR = {
    "clay": (3.0, 30.0),
    "silt": (20.0, 40.0),
    "sand": (30.0, 150.0),
    "gravel": (60.0, 300.0),
}
"""Published range of unit toe resistance over effective stress; as quoted second-hand. [-]"""
ROW = {
    "clay": "clay",
    "silt": "silt",
    "sand-clay": "silt",
    "sand-silt": "silt",
    "fine sand": "sand",
    "sand": "sand",
    "gravel": "gravel",
}
"""Row of the ranges for each soil; that mixed soils go with silt is our choice."""


def unit(
    layer: Layer, effective: FloatArray, strength: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return ``beta p0'`` and ``Nt p0'``, (k,) each [Pa]."""
    assert layer.beta is not None
    assert layer.toe_factor is not None
    return layer.beta * effective, layer.toe_factor * effective


def _range(layer: Layer, ranges: dict[str, tuple[float, float]]) -> str:
    if layer.soil not in ROW:
        return f"no range is published for {layer.soil}"
    low, high = ranges[ROW[layer.soil]]
    return f"published range for {ROW[layer.soil]} {low:g}-{high:g}"


def _lack(layer: Layer) -> tuple[str, str] | None:
    for field, value, ranges in (
        ("beta", layer.beta, BETA),
        ("toe_factor", layer.toe_factor, TOE_FACTOR),
    ):
        if value is None:
            must = f"must be given for the effective stress method; {_range(layer, ranges)}"
            return field, must
    return None


def missing(ground: Ground, section: Section, choices: Choices) -> list[Fault]:
    """Return what the method lacks."""
    return layers_lack(ground, "the effective stress method", _lack)


def outside_range(profile: Profile) -> tuple[str, ...]:
    """Return a note for each factor outside its published range."""
    notes = []
    for layer in profile.layers:
        for name, value, ranges in (
            ("beta", layer.beta, BETA),
            ("toe factor", layer.toe_factor, TOE_FACTOR),
        ):
            if value is None or layer.soil not in ROW or layer.states_both:
                continue
            low, high = ranges[ROW[layer.soil]]
            if not low <= value <= high:
                notes.append(f"{name} {value:g} of {layer.text} is outside {_range(layer, ranges)}")
    return tuple(notes)


def resistance(task: Task) -> UnitResistance:
    """Return the resistance long after driving; friction inside a tube as outside."""
    profile = task.ground.profile
    assert profile is not None
    nodes = layer_nodes(profile)
    shaft, toe = by_layer(profile, nodes, unit, True)
    notes = outside_range(profile)
    return assembled(task, nodes, Friction.steady(shaft), toe, Faces(), True, None, notes)
