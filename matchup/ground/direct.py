"""Unit resistances that the layers state directly.

They are taken as resistance while driving: nothing is known of where they come from, and to
reduce a value that is already reduced would be the unsafe error.
"""

from __future__ import annotations

from matchup.errors import Fault
from matchup.ground.basis import Choices, Ground, Task, layers_lack
from matchup.ground.nodes import Faces, assembled, by_layer, layer_nodes
from matchup.ground.unit import Friction, UnitResistance
from matchup.model.ground import Layer
from matchup.model.pile import Section
from matchup.model.sounding import FloatArray

SOURCE = "unit resistances stated for each layer"


def _lack(layer: Layer) -> tuple[str, str] | None:
    field = "unit_shaft" if layer.unit_shaft is None else "unit_toe"
    return field, "must be given for direct unit resistances"


def missing(ground: Ground, section: Section, choices: Choices) -> list[Fault]:
    """Return what the method lacks."""
    return layers_lack(ground, "direct unit resistances", _lack)


def _nothing_else(
    layer: Layer, effective: FloatArray, strength: FloatArray
) -> tuple[FloatArray, FloatArray]:
    raise AssertionError(f"{layer.text} states no unit resistances")


def resistance(task: Task) -> UnitResistance:
    """Return the resistance while driving; friction inside a tube as outside."""
    assert task.ground.profile is not None
    nodes = layer_nodes(task.ground.profile)
    shaft, toe = by_layer(task.ground.profile, nodes, _nothing_else, False)
    return assembled(task, nodes, Friction.steady(shaft), toe, Faces(), False, None, ())
