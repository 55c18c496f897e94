"""Fewer nodes for the same curve."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from matchup.model.sounding import FloatArray

TOLERANCE = 0.005
"""Largest error of a thinned curve over its largest value. [-]"""
LONGEST = 0.5
"""Kept nodes are at most about so far apart, for what is curved between them. [m]"""
NUDGE = 1e-6
"""Two nodes of a jump are told apart by so much. [m]"""


def kept_nodes(depth: FloatArray, curves: FloatArray) -> NDArray[np.int64]:
    """Return the nodes that several curves need at once.

    The node furthest from the straight line between two kept ones is kept in turn, until none is
    further than `TOLERANCE` (Ramer 1972; Douglas and Peucker 1973).

    Parameters
    ----------
    depth : (n,) float64 array
        Never decreasing. [m]
    curves : (k, n) float64 array
        Any units.

    Returns
    -------
    (kept,) int64 array
        Rows, first and last included.
    """
    scale = np.abs(curves).max(axis=1, keepdims=True)
    curves = np.divide(curves, scale, out=np.zeros_like(curves), where=scale > 0)
    kept = {0, depth.size - 1}
    open_ = [(0, depth.size - 1)]
    while open_:
        first, last = open_.pop()
        if last - first < 2:
            continue
        length = depth[last] - depth[first]
        share = (depth[first : last + 1] - depth[first]) / length if length > 0 else 0.0
        ends = curves[:, first, None], curves[:, last, None]
        off = np.abs(curves[:, first : last + 1] - ends[0] - (ends[1] - ends[0]) * share)
        worst = off.max(axis=0)
        middle = first + int(worst.argmax())
        if worst.max() > TOLERANCE and first < middle < last:
            kept.add(middle)
            open_ += [(first, middle), (middle, last)]
    return np.array(sorted(kept), np.int64)


def with_longest(depth: FloatArray, kept: NDArray[np.int64]) -> NDArray[np.int64]:
    """Return kept nodes and more, so that none are further apart than needs be."""
    number = np.ceil(np.diff(depth[kept]) / LONGEST).astype(int)
    more = [
        np.linspace(depth[a], depth[b], n + 1)[1:-1]
        for a, b, n in zip(kept[:-1], kept[1:], number, strict=True)
        if n > 1
    ]
    rows = np.searchsorted(depth, np.concatenate(more)) if more else kept
    return np.unique(np.concatenate((kept, np.minimum(rows, depth.size - 1))))


def strictly_deeper(depth: FloatArray) -> FloatArray:
    """Return depths that increase by `NUDGE` at least: the second node of a jump moves down."""
    shift = NUDGE * np.arange(depth.size)
    return np.asarray(np.maximum.accumulate(depth - shift) + shift)
