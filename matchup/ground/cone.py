"""What a sounding says of the ground: corrected cone resistance, stresses, soil classes.

Constants marked *from memory* were not read in their source; a result that rests on one carries
a remark.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from matchup.errors import Fault, ModelError
from matchup.ground.basis import Ground
from matchup.ground.nodes import STEP, Nodes, layer_nodes, nothing_stated
from matchup.ground.soil import Codes, Flags
from matchup.model.ground import SOILS, WATER_UNIT_WEIGHT
from matchup.model.sounding import FloatArray, Sounding

ATMOSPHERE = 100e3
"""Reference pressure. [Pa]"""
BRIDGED = 1.0
"""Voids up to this long are bridged by a straight line; a longer one is an error. [m]"""
LEAST_STRESS = 1e3
"""Effective stress is taken as at least this, the stress some 0.1 m down; formulas with the ratio
of cone resistance to stress have no limit at the surface. [Pa]"""
CLASSES = ("gravel", "sand", "sand-silt", "silt", "clay")
CLASS_BORDERS = (1.31, 2.05, 2.60, 2.95)
"""Soil behaviour type index between `CLASSES`: P. K. Robertson 1990 and 2009; from memory. [-]"""
CLAY_INDEX = 2.60
"""Index above which a reading counts as clay where there is nothing between sand and clay; the
same chart; from memory. [-]"""
SANDY = ("sand-silt", "fine sand", "sand", "gravel")
"""Soils that count as sand where there is nothing between sand and clay; our choice."""
INDEX_NOTE = "soil classes by the soil behaviour type index (Robertson 1990, 2009; from memory)"
WEIGHT_NOTE = "unit weight estimated from the sounding (Robertson and Cabal 2010; from memory)"

_SANDY = np.array([soil in SANDY for soil in SOILS])
_CLASS = np.array([SOILS.index(name) for name in CLASSES])


@dataclass(frozen=True, slots=True, eq=False)
class Cone:
    """A sounding at nodes.

    Parameters
    ----------
    nodes : Nodes
        From the first to the last reading; effective stress at least `LEAST_STRESS`.
    tip : (n,) float64 array
        Cone resistance, corrected for pore pressure where that can be done (qt). [Pa]
    sleeve : (n,) float64 array
        Sleeve friction; NaN where not known. [Pa]
    sandy : (n,) bool array
        Whether the ground counts as sand; otherwise it counts as clay.
    notes : tuple of str
    """

    nodes: Nodes
    tip: FloatArray
    sleeve: FloatArray
    sandy: Flags
    notes: tuple[str, ...]


def corrected_tip(sounding: Sounding) -> tuple[FloatArray, str]:
    """Return ``qt = qc + (1 - a) u2`` where the sounding allows it, and what was done.

    Returns
    -------
    tip : (n,) float64 array
        NaN where void. [Pa]
    note : str
    """
    if sounding.corrected:
        return sounding.tip, "cone resistance as corrected in the file"
    if sounding.area_ratio is None or np.isnan(sounding.pore_pressure).all():
        return (
            sounding.tip,
            "cone resistance not corrected for pore pressure: u2 or area ratio void",
        )
    excess = np.where(np.isnan(sounding.pore_pressure), 0.0, sounding.pore_pressure)
    tip = sounding.tip + (1 - sounding.area_ratio) * excess
    return np.maximum(tip, 0.0), "cone resistance corrected with u2"


def behaviour_index(
    tip: FloatArray, sleeve: FloatArray, total: FloatArray, effective: FloatArray
) -> FloatArray:
    """Return the soil behaviour type index from normalised resistance and friction ratio.

    ``Ic = sqrt((3.47 - log10 Qt)^2 + (1.22 + log10 Fr)^2)`` with ``Qt = (qt - p0) / p0'`` and
    ``Fr = 100 fs / (qt - p0)``; constants from memory.

    Parameters
    ----------
    tip, sleeve, total, effective : (n,) float64 array
        Cone resistance qt, sleeve friction, total and effective vertical stress. [Pa]

    Returns
    -------
    (n,) float64 array
        [-]

    References
    ----------
    .. [1] P. K. Robertson, "Soil classification using the cone penetration test," Can. Geotech.
       J. 27(1), 1990, and "Interpretation of cone penetration tests: a unified approach,"
       46(11), 2009; from memory.
    """
    net = np.maximum(tip - total, 1e3)
    resistance = np.log10(net / effective)
    ratio = np.log10(np.maximum(100 * sleeve / net, 1e-2))
    return np.asarray(np.sqrt((3.47 - resistance) ** 2 + (1.22 + ratio) ** 2))


def estimated_unit_weight(tip: FloatArray, sleeve: FloatArray) -> FloatArray:
    """Return the total unit weight from tip and sleeve, kept between 11 and 23 kN/m3.

    ``0.27 log10(Rf) + 0.36 log10(qt / pa) + 1.236`` times the unit weight of water, ``Rf`` the
    sleeve friction over the cone resistance in percent; constants from memory.

    References
    ----------
    .. [1] P. K. Robertson and K. L. Cabal, "Estimating soil unit weight from CPT," CPT'10, 2010;
       from memory.
    """
    tip = np.maximum(tip, 1e3)
    ratio = np.maximum(100 * sleeve / tip, 1e-2)
    relative = 0.27 * np.log10(ratio) + 0.36 * np.log10(tip / ATMOSPHERE) + 1.236
    return np.clip(relative * WATER_UNIT_WEIGHT, 11e3, 23e3)


def known(depth: FloatArray, values: FloatArray, at: FloatArray) -> FloatArray:
    """Return values at depths by straight lines over short voids, NaN in long ones.

    Parameters
    ----------
    depth, values : (n,) float64 array
        Readings, NaN where void.
    at : (k,) float64 array
        [m]
    """
    good = ~np.isnan(values)
    if not good.any():
        return np.full(at.shape, np.nan)
    depth, values = depth[good], values[good]
    row = np.searchsorted(depth, at, side="right")
    above, below = depth[np.maximum(row - 1, 0)], depth[np.minimum(row, depth.size - 1)]
    nearest = np.minimum(np.abs(at - above), np.abs(at - below))
    inside = (row > 0) & (row < depth.size)
    bridged = np.where(inside, below - above <= BRIDGED, nearest <= BRIDGED)
    close = bridged | (nearest == 0)
    return np.where(close, np.interp(at, depth, values), np.nan)


def readings(sounding: Sounding) -> tuple[FloatArray, FloatArray]:
    """Return depths and cone resistances that are not void and not pre-drilled, (k,) each."""
    good = ~np.isnan(sounding.tip) & (sounding.depth >= sounding.predrilled)
    return sounding.depth[good], sounding.tip[good]


def sounding_lacks(ground: Ground, method: str) -> list[Fault]:
    """Return what a method from cone resistance lacks, soil classes aside."""
    if ground.sounding is None:
        return [
            Fault("sounding", f"must be given as a cone penetration test for {method}", "nothing")
        ]
    depth, _ = readings(ground.sounding)
    if depth.size < 2:
        return [Fault("sounding.tip", "must have two readings or more", depth.size)]
    gaps = np.diff(depth)
    if gaps.max() > BRIDGED:
        row = int(np.argmax(gaps))
        must = f"must have no void longer than {BRIDGED:g} m; below {depth[row]:g} m one is longer"
        return [Fault("sounding.tip", must, float(gaps[row]), "length")]
    return []


def classes_lack(ground: Ground, method: str) -> list[Fault]:
    """Return what is lacking to know stress and soil at every reading."""
    sounding = ground.sounding
    if sounding is None or ground.profile is not None:
        return []
    faults = []
    if ground.water_level is None:
        must = f"must be given for {method}: the sounding does not state it"
        faults.append(Fault("water", must, "nothing"))
    depth, _ = readings(sounding)
    sleeve = known(sounding.depth, sounding.sleeve, depth)
    if np.isnan(sleeve).any():
        where = depth[np.isnan(sleeve)]
        must = (
            f"must be measured, or layers be given, to tell sand from clay for {method}; "
            f"it is void from {where[0]:g} to {where[-1]:g} m"
        )
        faults.append(Fault("sounding.sleeve", must, "nothing"))
    return faults


def read_cone(ground: Ground) -> Cone:
    """Return a sounding at nodes, with stresses and soil classes.

    With layers, these give the soil and the stress, and nodes end where layers or readings end.
    Without, the soil is classed reading by reading, and the pore water is at rest.

    Raises
    ------
    ModelError
        If something is lacking.
    """
    faults = sounding_lacks(ground, "a sounding") + classes_lack(ground, "a sounding")
    if faults or ground.sounding is None:
        raise ModelError("sounding", faults)
    sounding = ground.sounding
    tip, tip_note = corrected_tip(sounding)
    depth, _ = readings(sounding)
    if ground.profile is not None:
        return _with_layers(ground, sounding, depth, tip, tip_note)
    steps = STEP * np.arange(1, int(depth[-1] / STEP) + 1)
    depth = np.unique(np.concatenate((depth, steps[(steps > depth[0]) & (steps < depth[-1])])))
    tip = np.interp(depth, *_without_void(sounding.depth, tip))
    sleeve = known(sounding.depth, sounding.sleeve, depth)
    return _classed(ground, depth, tip, sleeve, tip_note)


def _without_void(depth: FloatArray, values: FloatArray) -> tuple[FloatArray, FloatArray]:
    good = ~np.isnan(values)
    return depth[good], values[good]


def _with_layers(
    ground: Ground, sounding: Sounding, readings_at: FloatArray, tip: FloatArray, note: str
) -> Cone:
    assert ground.profile is not None
    nodes = layer_nodes(ground.profile, readings_at)
    nodes = nodes.between(readings_at[0], readings_at[-1])
    tip = np.interp(nodes.depth, *_without_void(sounding.depth, tip))
    sleeve = known(sounding.depth, sounding.sleeve, nodes.depth)
    sandy = _SANDY[nodes.soil]
    return Cone(nodes.with_least_stress(LEAST_STRESS), tip, sleeve, sandy, (note,))


def _classed(
    ground: Ground, depth: FloatArray, tip: FloatArray, sleeve: FloatArray, note: str
) -> Cone:
    water = ground.water_level
    assert water is not None
    notes = [note, INDEX_NOTE]
    if ground.unit_weight is None:
        weight = estimated_unit_weight(tip, sleeve)
        notes.append(WEIGHT_NOTE)
    else:
        weight = np.full(depth.size, ground.unit_weight)
    soil_weight = np.concatenate(
        ([0.0], np.cumsum(0.5 * np.diff(depth) * (weight[1:] + weight[:-1])))
    )
    total = weight[0] * depth[0] + soil_weight + WATER_UNIT_WEIGHT * max(-water, 0.0)
    pressure = WATER_UNIT_WEIGHT * np.maximum(depth - water, 0.0)
    effective = np.maximum(total - pressure, LEAST_STRESS)
    index = behaviour_index(tip, sleeve, total, effective)
    soil: Codes = _CLASS[np.searchsorted(CLASS_BORDERS, index)]
    sandy = index <= CLAY_INDEX
    # Hardness decides toe quakes by table; the methods that start here bring their own.
    hard = np.zeros(depth.size, bool)
    own = nothing_stated(depth.size)
    nodes = Nodes(depth, soil, hard, effective, own, np.zeros(depth.size, np.int64))
    return Cone(nodes, tip, sleeve, sandy, tuple(notes))
