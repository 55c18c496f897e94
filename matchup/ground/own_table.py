"""The designer's own table of resistance by depth.

The whole shaft and toe resistances are read off the table. Where along the shaft it acts follows
from how it grows: what a step of penetration adds acts along that step, and where the table
shrinks, nothing is added and all above shrinks alike. With layers, set-up and damping come from
these; without, the soil counts as dense sand, and set-up is known only if the table states it.
"""

from __future__ import annotations

import numpy as np

from matchup.errors import Fault, ModelError
from matchup.ground.basis import Choices, Ground, Task
from matchup.ground.nodes import Nodes, nodes_in, nothing_stated
from matchup.ground.soil import (
    pair_note,
    setup_factors,
    shaft_dampings,
    shaft_quakes,
    toe_dampings,
    toe_quakes,
)
from matchup.ground.unit import Mode, UnitResistance, integral
from matchup.model.ground import SOILS, ResistanceColumn, ResistanceTable
from matchup.model.pile import Section
from matchup.model.sounding import FloatArray

SOURCE = "the designer's own resistance by depth"


def missing(ground: Ground, section: Section, choices: Choices) -> list[Fault]:
    """Return what the method lacks."""
    if ground.table is None:
        return [Fault("table", "must be given as resistance by depth", "nothing")]
    if ground.table.kind == "static" and ground.table.setup is None and ground.profile is None:
        must = "must be given, or layers: static resistance is reduced while driving"
        return [Fault("table.setup", must, "nothing")]
    return []


def steps(table: ResistanceTable, column: ResistanceColumn) -> tuple[FloatArray, FloatArray]:
    """Return what each step of penetration adds to the shaft resistance.

    What the first row holds acts evenly above it.

    Returns
    -------
    edges : (n,) float64 array
        From the surface to the last row. [m]
    grown : (n - 1,) float64 array
        Per length of each step; nothing where the shaft resistance shrinks. [N/m]
    """
    edges, shaft = np.array(table.depth), np.array(column.shaft)
    if edges[0] > 0:
        edges, shaft = np.append(0.0, edges), np.append(0.0, shaft)
    return edges, np.maximum(np.diff(shaft), 0.0) / np.diff(edges)


def resistance(task: Task) -> UnitResistance:
    """Return the table's resistance for the case asked for.

    Raises
    ------
    ModelError
        If the table has no such case, or does not reach a penetration.
    """
    table = task.ground.table
    assert table is not None
    table.must_reach(task.tips)
    if task.bound not in table.columns:
        must = f"must be one that the table has a column for: {', '.join(table.columns)}"
        raise ModelError(table.name, [Fault("cases", must, task.bound)])
    column = table.columns[task.bound]
    nodes, intensity = _cells(task, *steps(table, column))
    whole = integral(nodes.depth, intensity, task.tips)
    total = np.interp(task.tips, table.depth, column.shaft)
    scale = np.divide(total, whole, out=np.zeros(total.shape), where=whole > 0)
    under = nodes.under(task.tips)
    soil, own = nodes.soil[under], nodes.own.at(under)
    wide = task.section.width if task.section.displaces else None
    quake = toe_quakes(soil, nodes.hard[under], own, None, wide)
    toe = np.interp(task.tips, table.depth, column.toe)
    one, none = np.ones(nodes.depth.size), np.zeros(nodes.depth.size)
    notes = [pair_note(None)]
    if task.ground.profile is None:
        notes.append("damping and toe quake as in dense sand: assumed")
    return UnitResistance(
        nodes.depth,
        intensity,
        intensity,
        none,
        _setup(task, nodes),
        shaft_quakes(nodes.own, None),
        shaft_dampings(nodes.soil, nodes.own, None),
        task.tips,
        (Mode("as given", one, none, 1.0, toe, quake),),
        toe_dampings(soil, own, None),
        table.kind == "static",
        scale,
        tuple(notes),
    )


def _setup(task: Task, nodes: Nodes) -> FloatArray:
    """Return setup factors of the table, else of the layers, else NaN, (n,) [-]."""
    assert task.ground.table is not None
    stated = task.ground.table.setup
    if stated is None and task.ground.profile is not None:
        return setup_factors(nodes.soil, nodes.own)
    return np.full(nodes.depth.size, np.nan if stated is None else stated)


def _cells(task: Task, edges: FloatArray, grown: FloatArray) -> tuple[Nodes, FloatArray]:
    """Return nodes, two for every stretch without edge or layer border, and their intensity."""
    profile = task.ground.profile
    if profile is not None:
        borders = profile.borders
        edges_and_borders = np.unique(np.concatenate((edges, borders[borders < edges[-1]])))
    else:
        edges_and_borders = edges
    middle = 0.5 * (edges_and_borders[1:] + edges_and_borders[:-1])
    depth = np.repeat(edges_and_borders, 2)[1:-1]
    intensity = np.repeat(grown[np.searchsorted(edges, middle) - 1], 2)
    if profile is not None:
        return nodes_in(profile, depth, np.repeat(profile.place(middle), 2)), intensity
    size = depth.size
    sand = np.full(size, SOILS.index("sand"), np.int64)
    none = np.zeros(size)
    zeros = np.zeros(size, np.int64)
    return Nodes(depth, sand, np.ones(size, bool), none, nothing_stated(size), zeros), intensity
