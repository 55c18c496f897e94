"""The pile at rest on its soil springs before the blow."""

from __future__ import annotations

import numpy as np

from matchup.wave.laws import clipped, compiled
from matchup.wave.layout import Floats

MAX_PASSES = 60


@compiled
def rest(
    load: float,
    weight: Floats,
    stiffness: Floats,
    shaft_stiffness: Floats,
    shaft_strength: Floats,
    toe_stiffness: float,
    toe_strength: float,
) -> tuple[Floats, bool]:
    """Return the equilibrium of an elastic pile on elastic-plastic springs.

    Newton's method on the piecewise linear balance of every node, each pass one tridiagonal
    solution. Valid while the weight is below the resistance; otherwise there is no equilibrium
    and `settled` is False.

    Parameters
    ----------
    load : float
        Weight of helmet, and of a hammer frame that stands on it. [N]
    weight : (nodes,) float64 array
        Weight lumped at the nodes. [N]
    stiffness : (nodes - 1,) float64 array
        ``E A / length`` of each segment. [N/m]
    shaft_stiffness, shaft_strength : (nodes,) float64 array
        Shaft springs. [N/m], [N]
    toe_stiffness, toe_strength : float
        Toe spring, without tension. [N/m], [N]

    Returns
    -------
    settlement : (nodes,) float64 array
        Downward displacement from the unstressed soil. [m]
    settled : bool
    """
    nodes = weight.size
    last = nodes - 1
    settlement = np.zeros(nodes)
    diagonal = np.empty(nodes)
    unbalanced = np.empty(nodes)
    scale = load + weight.sum() + 1.0
    for _ in range(MAX_PASSES):
        worst = 0.0
        for i in range(nodes):
            at = settlement[i]
            force = shaft_stiffness[i] * at
            slope = shaft_stiffness[i] if abs(force) < shaft_strength[i] else 0.0
            out = weight[i] - clipped(force, -shaft_strength[i], shaft_strength[i])
            if i == 0:
                out += load
            if i == last:
                force = toe_stiffness * at
                slope += toe_stiffness if -1e-9 <= force < toe_strength else 0.0
                out -= clipped(force, 0.0, toe_strength)
            if i > 0:
                out += stiffness[i - 1] * (settlement[i - 1] - at)
                slope += stiffness[i - 1]
            if i < last:
                out += stiffness[i] * (settlement[i + 1] - at)
                slope += stiffness[i]
            diagonal[i] = slope
            unbalanced[i] = out
            worst = max(worst, abs(out))
        # Forces are differences of displacements times stiffness, so rounding sets a floor.
        rounding = 1e-14 * stiffness.max() * np.abs(settlement).max()
        if worst < 1e-10 * scale + rounding:
            return settlement, True
        # Thomas algorithm; the off-diagonals are minus the segment stiffnesses.
        for i in range(1, nodes):
            factor = stiffness[i - 1] / diagonal[i - 1]
            diagonal[i] -= factor * stiffness[i - 1]
            unbalanced[i] += factor * unbalanced[i - 1]
        if diagonal[last] <= 0.0:
            return settlement, False
        change = unbalanced[last] / diagonal[last]
        settlement[last] += change
        for i in range(last - 1, -1, -1):
            change = (unbalanced[i] + stiffness[i] * change) / diagonal[i]
            settlement[i] += change
    return settlement, False
