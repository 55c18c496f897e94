"""Unit resistance: the one form that every method brings the ground into.

Unit shaft resistance may fall off as the toe moves on (friction fatigue): at the depth `z`, with
the toe at `tip`, it is ``residual + (initial - residual) exp(-decay (tip - z))``. Where there is
no fatigue, `initial` and `residual` are the same.

All node values are straight between nodes. Two nodes at one depth are a jump.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import NamedTuple

import numpy as np

from matchup.model.sounding import FloatArray


@dataclass(frozen=True, slots=True, eq=False)
class Mode:
    """One way in which the pile may go down.

    Parameters
    ----------
    name : str
        ``coring`` or ``plugged`` for an open tube, ``steel section`` or ``box`` for an H,
        ``closed`` for a pile without choice.
    outer, inner : (n,) float64 array
        Length around the pile on which the unit shaft resistance acts, at its outer faces and
        at those on the soil core. [m]
    toe_area : float
        [m2]
    toe : (m,) float64 array
        Unit toe resistance at each penetration. [Pa]
    toe_quake : (m,) float64 array
        [m]
    """

    name: str
    outer: FloatArray
    inner: FloatArray
    toe_area: float
    toe: FloatArray
    toe_quake: FloatArray


@dataclass(frozen=True, slots=True, eq=False)
class UnitResistance:
    """Unit resistance along a pile and at its toe.

    Parameters
    ----------
    depth : (n,) float64 array
        Nodes below ground surface, never decreasing. [m]
    initial, residual : (n,) float64 array
        Unit shaft resistance where the toe is, and far above it. [Pa]
    decay : (n,) float64 array
        Rate at which the one becomes the other. [1/m]
    setup : (n,) float64 array
        Shaft resistance long after driving over the one while driving. [-]
    shaft_quake, shaft_damping : (n,) float64 array
        [m], [s/m]
    tips : (m,) float64 array
        Penetrations asked for. [m]
    modes : tuple of Mode
    toe_damping : (m,) float64 array
        [s/m]
    static : bool
        Whether the shaft resistance is the one long after driving.
    scale : (m,) float64 array
        Factor on the whole shaft at each penetration. [-]
    notes : tuple of str
        Source and assumptions.
    """

    depth: FloatArray
    initial: FloatArray
    residual: FloatArray
    decay: FloatArray
    setup: FloatArray
    shaft_quake: FloatArray
    shaft_damping: FloatArray
    tips: FloatArray
    modes: tuple[Mode, ...]
    toe_damping: FloatArray
    static: bool
    scale: FloatArray
    notes: tuple[str, ...] = ()

    def shaft_at(self, tip: float) -> FloatArray:
        """Return unit shaft resistance at the nodes with the toe at `tip`, (n,) [Pa].

        Nodes below the toe have the one that they would have at the toe.
        """
        above = np.maximum(tip - self.depth, 0.0)
        return self.residual + (self.initial - self.residual) * np.exp(-self.decay * above)

    def with_nodes(self, change: Callable[[FloatArray], FloatArray]) -> UnitResistance:
        """Return the same with every node array put through `change`."""
        modes = tuple(
            replace(mode, outer=change(mode.outer), inner=change(mode.inner)) for mode in self.modes
        )
        return replace(
            self,
            depth=change(self.depth),
            initial=change(self.initial),
            residual=change(self.residual),
            decay=change(self.decay),
            setup=change(self.setup),
            shaft_quake=change(self.shaft_quake),
            shaft_damping=change(self.shaft_damping),
            modes=modes,
        )

    def down_to(self, tip: float) -> UnitResistance:
        """Return the same with its last node at `tip`, as it is just above."""
        last = int(np.searchsorted(self.depth, tip, side="left"))
        if last == self.depth.size:
            return self
        if self.depth[last] == tip:
            return self.with_nodes(lambda values: values[: last + 1])
        low, high = self.depth[max(last - 1, 0)], self.depth[last]
        share = (tip - low) / (high - low) if high > low else 0.0

        def cut(values: FloatArray) -> FloatArray:
            end = values[max(last - 1, 0)] * (1 - share) + values[last] * share
            return np.append(values[:last], end)

        # Rounding must not move the toe.
        return replace(self.with_nodes(cut), depth=np.append(self.depth[:last], tip))

    def loosened(self, to: float, share: float) -> UnitResistance:
        """Return the same with only a share of the shaft resistance left down to a depth."""
        if to <= self.depth[0]:
            return self
        row = int(np.searchsorted(self.depth, to, side="left"))
        there = int(np.searchsorted(self.depth, to, side="right")) - row
        depth = self.depth

        def split(values: FloatArray) -> FloatArray:
            value = values[row] if there else np.interp(to, depth, values)
            return np.insert(values, row, [value] * (2 - there))

        unit = self if row == depth.size or there > 1 else self.with_nodes(split)
        left = np.where(np.arange(unit.depth.size) <= row, share, 1.0)
        return replace(unit, initial=left * unit.initial, residual=left * unit.residual)


class Friction(NamedTuple):
    """Unit shaft resistance at nodes: (n,) arrays [Pa], [Pa], [1/m]."""

    initial: FloatArray
    residual: FloatArray
    decay: FloatArray

    @classmethod
    def steady(cls, values: FloatArray) -> Friction:
        """Return one without fatigue."""
        return cls(values, values, np.zeros_like(values))


def integral(depth: FloatArray, values: FloatArray, at: FloatArray) -> FloatArray:
    """Return the exact integral of a piecewise linear function from its first node.

    Parameters
    ----------
    depth : (n,) float64 array
        Never decreasing. [m]
    values : (n,) float64 array
    at : (k,) float64 array
        Upper ends, within the nodes. [m]

    Returns
    -------
    (k,) float64 array
    """
    sums = np.concatenate(([0.0], np.cumsum(0.5 * np.diff(depth) * (values[1:] + values[:-1]))))
    row = np.clip(np.searchsorted(depth, at, side="right") - 1, 0, depth.size - 2)
    length = depth[row + 1] - depth[row]
    into = at - depth[row]
    slope = np.divide(
        values[row + 1] - values[row], length, out=np.zeros(row.shape), where=length > 0
    )
    return np.asarray(sums[row] + into * (values[row] + 0.5 * slope * into))


def mean_around(depth: FloatArray, values: FloatArray, at: FloatArray, reach: float) -> FloatArray:
    """Return means over windows around depths.

    The window reaches equally far up and down. Where the first or last node is nearer than
    `reach` it shrinks to that, so that nothing is extrapolated and a linear function keeps its
    value; on the last node it is the value there.

    Parameters
    ----------
    depth, values : (n,) float64 array
        Nodes. [m]
    at : (k,) float64 array
        Centres, within the nodes. [m]
    reach : float
        Half of the window. [m]

    Returns
    -------
    (k,) float64 array
    """
    half = np.minimum(reach, np.minimum(at - depth[0], depth[-1] - at))
    open_ = half > 1e-9
    half = np.where(open_, half, 1.0)
    upper = np.clip(at - half, depth[0], depth[-1])
    lower = np.clip(at + half, depth[0], depth[-1])
    whole = integral(depth, values, lower) - integral(depth, values, upper)
    return np.where(open_, whole / (2 * half), np.interp(at, depth, values))
