"""Resistance to driving of Alm and Hamre, from a cone penetration test.

Unit friction falls off with the length of pile driven past (friction fatigue). The two readings
of which faces of an open tube it acts on differ by a factor of up to two; `faces` chooses.

References
----------
.. [1] T. Alm and L. Hamre, "Soil model for pile driveability predictions based on CPT
   interpretations," Proc. 15th ICSMGE, Istanbul, 2001; sand as quoted second-hand by two
   sources, clay by one.
"""

from __future__ import annotations

import math

import numpy as np

from matchup.errors import Fault
from matchup.ground.basis import Choices, Ground, Task
from matchup.ground.cone import ATMOSPHERE, Cone, classes_lack, read_cone, sounding_lacks
from matchup.ground.nodes import Faces, assembled
from matchup.ground.soil import Pair
from matchup.ground.unit import Friction, UnitResistance
from matchup.model.ground import Profile
from matchup.model.pile import Section
from matchup.model.sounding import FloatArray

SOURCE = "Alm and Hamre 2001 (ICSMGE), second-hand"
PAIR = Pair(2.5e-3, 0.25, 2.5e-3, 0.5, "the pair fitted with Alm and Hamre 2001; from memory")
DECAY_LENGTH = 80.0
"""`k` is the root of cone resistance over stress, by this length. [m]"""
SAND_RESIDUAL = 0.2
"""Sand friction far above the toe over that at the toe. [-]"""
CLAY_TOE = 0.6
"""Unit toe resistance in clay over cone resistance, on the annulus. [-]"""


def decay(tip: FloatArray, effective: FloatArray) -> FloatArray:
    """Return ``k = sqrt(qt/p0') / 80`` from cone resistance and stress, (n,) [1/m]."""
    return np.sqrt(tip / effective) / DECAY_LENGTH


def sand_initial(tip: FloatArray, effective: FloatArray, interface_angle: float) -> FloatArray:
    """Return ``0.0132 qt (p0'/pa)^0.13 tan(delta)``, (n,) [Pa]."""
    ratio = effective / ATMOSPHERE
    return np.asarray(0.0132 * tip * ratio**0.13 * math.tan(interface_angle))


def sand_residual(initial: FloatArray) -> FloatArray:
    """Return ``0.2 fi``, (n,) [Pa]."""
    return SAND_RESIDUAL * initial


def sand_toe(tip: FloatArray, effective: FloatArray) -> FloatArray:
    """Return ``0.15 qt (qt/p0')^0.2``, (n,) [Pa]."""
    return np.asarray(0.15 * tip * (tip / effective) ** 0.2)


def clay_residual(tip: FloatArray, effective: FloatArray, initial: FloatArray) -> FloatArray:
    """Return ``0.004 qt (1 - 0.0025 qt/p0')`` kept between 0 and the initial one, (n,) [Pa]."""
    return np.clip(0.004 * tip * (1 - 0.0025 * tip / effective), 0.0, initial)


def clay_toe(tip: FloatArray) -> FloatArray:
    """Return ``0.6 qt``, (n,) [Pa]."""
    return CLAY_TOE * tip


def friction(cone: Cone, interface_angle: float) -> Friction:
    """Return unit friction at the nodes of a sounding."""
    effective = cone.nodes.effective
    in_sand = sand_initial(cone.tip, effective, interface_angle)
    initial = np.where(cone.sandy, in_sand, np.nan_to_num(cone.sleeve))
    in_clay = clay_residual(cone.tip, effective, initial)
    residual = np.where(cone.sandy, sand_residual(in_sand), in_clay)
    return Friction(initial, residual, decay(cone.tip, effective))


def faces(cone: Cone, which: str) -> Faces:
    """Return the shares of friction on the faces of a coring tube.

    ``both``: half of the sand friction on either face, the clay friction in full on both.
    ``outer``: all of it on the outer face. Plugged, the outer face has the full friction.
    """
    if which == "outer":
        return Faces(outer=1.0, inner=0.0)
    share = np.where(cone.sandy, 0.5, 1.0)
    return Faces(outer=share, inner=share)


def missing(ground: Ground, section: Section, choices: Choices) -> list[Fault]:
    """Return what the method lacks."""
    name = "Alm and Hamre 2001"
    faults = sounding_lacks(ground, name) or classes_lack(ground, name)
    if ground.profile is not None:
        faults += _layers_lack(ground.profile)
    if not faults:
        faults += _clay_lacks_sleeve(ground)
    return faults


def _layers_lack(profile: Profile) -> list[Fault]:
    must = "must be sand or clay for Alm and Hamre 2001, which has no rock"
    return [
        Fault(f"layers.{number}.soil", must, layer.text)
        for number, layer in enumerate(profile.layers, 1)
        if layer.soil == "rock"
    ]


def _clay_lacks_sleeve(ground: Ground) -> list[Fault]:
    """Return a fault where layers say clay and the sleeve friction is void."""
    if ground.profile is None or ground.sounding is None:
        return []
    cone = read_cone(ground)
    void = ~cone.sandy & np.isnan(cone.sleeve)
    if not void.any():
        return []
    where = cone.nodes.depth[void]
    must = (
        "must be measured in clay for Alm and Hamre 2001; "
        f"it is void from {where[0]:g} to {where[-1]:g} m"
    )
    return [Fault("sounding.sleeve", must, "nothing")]


def notes(task: Task, cone: Cone) -> tuple[str, ...]:
    """Return what the result rests on."""
    made = list(cone.notes)
    degrees = math.degrees(task.choices.interface_angle)
    made.append(f"friction angle of sand on steel {degrees:.3g} degrees")
    if task.section.core is not None and task.section.core.shape == "tube":
        text = {
            "both": "half of the sand friction on either face, clay friction in full on both",
            "outer": "all friction on the outer face",
        }
        made.append(f"faces: {task.choices.faces} ({text[task.choices.faces]})")
    if not cone.sandy.all():
        made.append(
            "0.6 qt in clay is published for the annulus; used for a full toe too: our choice"
        )
    if cone.nodes.depth[0] > 0:
        made.append(f"no shaft resistance above the first reading at {cone.nodes.depth[0]:g} m")
    return tuple(made)


def resistance(task: Task) -> UnitResistance:
    """Return the resistance while driving; nothing above the first reading."""
    cone = read_cone(task.ground)
    effective = cone.nodes.effective
    toe = np.where(cone.sandy, sand_toe(cone.tip, effective), clay_toe(cone.tip))
    return assembled(
        task,
        cone.nodes,
        friction(cone, task.choices.interface_angle),
        toe,
        faces(cone, task.choices.faces),
        False,
        PAIR,
        notes(task, cone),
    )
