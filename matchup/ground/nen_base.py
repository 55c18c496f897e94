"""Base resistance of closed piles from a cone penetration test, by NEN 9997-1.

The method gives the toe alone; a companion gives the shaft.

The cone resistance is averaged over three stretches (4D/0.7D/8D rule; its lengths as quoted
second-hand, the order of the running minimum from memory):

* I: the mean from the toe down to a depth between 0.7 and 4 diameters below it;
* II: back up from there to the toe, the mean of the smallest value met so far;
* III: on from the toe up over 8 diameters, the mean of the smallest value met so far, that of II
  included. Nearer to the surface than that: over what there is.

The depth below the toe is the one that gives the least base resistance.

References
----------
.. [1] NEN 9997-1, "Geotechnical design of structures," clause on the maximum toe resistance;
   formula, factors and three worked values as quoted second-hand.
"""

from __future__ import annotations

import math

import numpy as np

from matchup.errors import Fault, ModelError
from matchup.ground.basis import Choices, Ground, Task
from matchup.ground.cone import readings, sounding_lacks
from matchup.ground.soil import Codes
from matchup.model.pile import Section
from matchup.model.sounding import FloatArray

SOURCE = "NEN 9997-1 base resistance from CPT, second-hand; averaging in part from memory"
PILE_FACTOR = 0.7
"""alpha_p of a driven closed pile; as quoted second-hand. [-]"""
LIMIT = 15e6
"""Largest unit base resistance; as quoted second-hand. [Pa]"""
LEAST_BELOW, MOST_BELOW, ABOVE = 0.7, 4.0, 8.0
"""Stretches over diameter; as quoted second-hand. [-]"""
SPACING = 0.01
"""The cone resistance is read off at about this distance. [m]"""


def base_resistance(first: FloatArray, second: FloatArray, third: FloatArray) -> FloatArray:
    """Return ``0.5 alpha_p beta s ((qcI + qcII)/2 + qcIII)`` with ``beta = s = 1``.

    Parameters
    ----------
    first, second, third : (n,) float64 array
        Mean cone resistances of the stretches. [Pa]

    Returns
    -------
    (n,) float64 array
        At most 15 MPa. [Pa]
    """
    return np.minimum(0.5 * PILE_FACTOR * (0.5 * (first + second) + third), LIMIT)


def equivalent_diameter(section: Section) -> float:
    """Return the diameter of the circle of the same toe area [m]."""
    return math.sqrt(4 * section.toe_area / math.pi)


def averages(
    depth: FloatArray, cone: FloatArray, tip: float, diameter: float
) -> tuple[float, float, float]:
    """Return the three mean cone resistances around one toe.

    Parameters
    ----------
    depth, cone : (n,) float64 array
        Readings without voids. [m], [Pa]
    tip : float
        Depth of the toe, at least four diameters above the last reading. [m]
    diameter : float
        [m]

    Returns
    -------
    first, second, third : float
        [Pa]
    """
    below = _stations(tip, tip + MOST_BELOW * diameter, diameter)
    above = _stations(max(tip - ABOVE * diameter, depth[0]), tip, diameter)
    under = np.interp(below, depth, cone)
    over = np.interp(above, depth, cone)
    count = under.size
    # Row j holds the way back up that starts at the j-th depth below the toe: its running
    # minimum from there, read upwards; outside the stretch there is nothing (infinite).
    reached = np.arange(count) <= np.arange(count)[:, None]
    stretch = np.where(reached, under, np.inf)
    back = np.minimum.accumulate(stretch[:, ::-1], axis=1)[:, ::-1]
    back_up = np.where(reached, back, 0.0)
    lengths = np.arange(count)
    one, two = _running_mean(under, lengths), _row_mean(back_up, lengths)
    lowest = np.minimum(np.minimum.accumulate(over[::-1]), back[:, :1])
    three = np.trapezoid(lowest, axis=1) / (over.size - 1) if over.size > 1 else lowest[:, 0]
    allowed = lengths >= math.ceil(LEAST_BELOW / MOST_BELOW * (count - 1) - 1e-9)
    total = np.where(allowed, 0.5 * (one + two) + three, np.inf)
    best = int(np.argmin(total))
    return float(one[best]), float(two[best]), float(three[best])


def _stations(top: float, end: float, diameter: float) -> FloatArray:
    spacing = max(SPACING, diameter / 50)
    return np.linspace(top, end, max(round((end - top) / spacing), 0) + 1)


def _running_mean(values: FloatArray, lengths: Codes) -> FloatArray:
    """Return means from the first value to each, by the trapezoidal rule."""
    sums = np.concatenate(([0.0], np.cumsum(0.5 * (values[1:] + values[:-1]))))
    return np.where(lengths > 0, sums / np.maximum(lengths, 1), values)


def _row_mean(rows: FloatArray, lengths: Codes) -> FloatArray:
    """Return the mean of row j from its first to its j-th value, by the trapezoidal rule."""
    last = rows[lengths, lengths]
    sums = rows.sum(axis=1) - 0.5 * (rows[:, 0] + last)
    return np.where(lengths > 0, sums / np.maximum(lengths, 1), rows[:, 0])


def missing(ground: Ground, section: Section, choices: Choices) -> list[Fault]:
    """Return what the method lacks."""
    faults = sounding_lacks(ground, "the NEN 9997-1 base resistance")
    if not section.displaces:
        must = "must be a closed or solid pile for the NEN 9997-1 base resistance"
        faults.append(Fault("section", must, section.text))
    return faults


def toe(task: Task) -> FloatArray:
    """Return unit toe resistance at each penetration, (m,) [Pa].

    Raises
    ------
    ModelError
        If a toe is less than four diameters above the last reading, or above the first.
    """
    assert task.ground.sounding is not None
    depth, cone = readings(task.ground.sounding)
    diameter = equivalent_diameter(task.section)
    last = depth[-1] - MOST_BELOW * diameter
    faults = [
        Fault(
            "penetration",
            f"must be from {depth[0]:g} to {last:.3g} m: the NEN 9997-1 base resistance looks at "
            f"4 diameters below the toe, and the sounding ends at {depth[-1]:g} m",
            float(tip),
            "length",
        )
        for tip in task.tips
        if not depth[0] <= tip <= last + 1e-9
    ]
    if faults:
        raise ModelError("sounding", faults)
    means = np.array([averages(depth, cone, float(tip), diameter) for tip in task.tips])
    return base_resistance(*means.reshape(-1, 3).T)
