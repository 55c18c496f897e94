"""Unit resistances of the API's main text, for layers of clay, sand and sand-silt.

The method gives resistance long after driving. It has no row for loose sand or for gravel.

References
----------
.. [1] API RP 2GEO, "Geotechnical and Foundation Design Considerations," 1st ed., 2011, main text;
   all numbers as quoted second-hand.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from matchup.errors import Fault
from matchup.ground.basis import Choices, Ground, Task, layers_lack
from matchup.ground.nodes import Faces, assembled, by_layer, layer_nodes
from matchup.ground.unit import Friction, UnitResistance
from matchup.model.ground import Layer
from matchup.model.pile import Section
from matchup.model.sounding import FloatArray

SOURCE = "API RP 2GEO (2011) main text, second-hand"
CLAY_TOE_FACTOR = 9.0
"""Unit toe resistance over undrained strength. [-]"""


class SandRow(NamedTuple):
    """A row of the table: beta [-], limit of shaft [Pa], Nq [-], limit of toe [Pa]."""

    beta: float
    shaft_limit: float
    toe_factor: float
    toe_limit: float


SAND = {
    ("sand", "medium dense"): SandRow(0.37, 81e3, 20, 5e6),
    ("sand", "dense"): SandRow(0.46, 96e3, 40, 10e6),
    ("sand", "very dense"): SandRow(0.56, 115e3, 50, 12e6),
    ("sand-silt", "medium dense"): SandRow(0.29, 67e3, 12, 3e6),
    ("sand-silt", "dense"): SandRow(0.37, 81e3, 20, 5e6),
    ("sand-silt", "very dense"): SandRow(0.46, 96e3, 40, 10e6),
}
"""By soil and density class; as quoted second-hand."""


def sand_row(layer: Layer) -> SandRow | None:
    """Return the row of a layer; fine sand has that of sand."""
    soil = "sand" if layer.soil == "fine sand" else layer.soil
    return SAND.get((soil, layer.density or ""))


def sand_shaft(effective: FloatArray, row: SandRow) -> FloatArray:
    """Return ``min(beta p0', f_lim)`` from effective stress, (n,) [Pa]."""
    return np.minimum(row.beta * effective, row.shaft_limit)


def sand_toe(effective: FloatArray, row: SandRow) -> FloatArray:
    """Return ``min(Nq p0', q_lim)`` from effective stress, (n,) [Pa]."""
    return np.minimum(row.toe_factor * effective, row.toe_limit)


def clay_alpha(psi: FloatArray) -> FloatArray:
    """Return ``0.5 psi^-0.5`` to `psi` 1, ``0.5 psi^-0.25`` above, at most 1.

    Parameters
    ----------
    psi : (n,) float64 array
        Undrained strength over effective stress, > 0. [-]
    """
    return np.minimum(0.5 * psi ** np.where(psi > 1, -0.25, -0.5), 1.0)


def clay_shaft(strength: FloatArray, effective: FloatArray) -> FloatArray:
    """Return ``alpha su``, (n,) [Pa]; nothing where there is no effective stress."""
    psi = strength / np.maximum(effective, 1e-6)
    return np.where(effective > 0, clay_alpha(psi) * strength, 0.0)


def clay_toe(strength: FloatArray) -> FloatArray:
    """Return ``9 su``, (n,) [Pa]."""
    return CLAY_TOE_FACTOR * strength


def unit(
    layer: Layer, effective: FloatArray, strength: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return unit shaft and toe resistance in one layer, (k,) each [Pa].

    A layer with an undrained strength is taken as clay, any other by its row.
    """
    if layer.strength is not None:
        return clay_shaft(strength, effective), clay_toe(strength)
    row = sand_row(layer)
    assert row is not None
    return sand_shaft(effective, row), sand_toe(effective, row)


def _lack(layer: Layer) -> tuple[str, str] | None:
    if layer.strength is not None or sand_row(layer) is not None:
        return None
    if layer.soil == "clay" or (layer.soil in ("silt", "sand-clay") and layer.density is None):
        return "strength", "must be given for the API method"
    if layer.soil in ("sand", "fine sand", "sand-silt"):
        if layer.density is None:
            return "density", "must be given for the API method"
        return (
            "density",
            f"must be medium dense or denser: the API table has no row for {layer.density} "
            "ground; use a method from a sounding or beta, or state unit_shaft and unit_toe",
        )
    return (
        "unit_shaft",
        f"must be given with unit_toe: the API table has no row for {layer.soil}",
    )


def missing(ground: Ground, section: Section, choices: Choices) -> list[Fault]:
    """Return what the method lacks."""
    return layers_lack(ground, "the API method", _lack)


def resistance(task: Task) -> UnitResistance:
    """Return the resistance long after driving; friction inside a tube as outside."""
    assert task.ground.profile is not None
    nodes = layer_nodes(task.ground.profile)
    shaft, toe = by_layer(task.ground.profile, nodes, unit, True)
    return assembled(task, nodes, Friction.steady(shaft), toe, Faces(), True, None, ())
