"""Stresses of a blow against the limits of the part of the pile in which they occur.

Searches carry one stress for a whole pile and hold it against one limit. Where parts have limits
of their own, that stress is on the scale of the lowest part: the largest use of any part's limit
times the lowest part's limit. Where all parts have the same limits it is the stress itself.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from matchup.analysis.blow import Strikes, Struck, strike
from matchup.analysis.chain import Chains
from matchup.model.limits import StressLimits
from matchup.wave.layout import Floats


class Stressed(NamedTuple):
    """Largest stresses of blows, as columns of equal length.

    Parameters
    ----------
    compression, tension : (blows,) float64 array
        On the scale of the lowest part, both positive. [Pa]
    """

    compression: Floats
    tension: Floats


def stresses_at_nodes(chains: Chains, envelope: Floats) -> Floats:
    """Return largest compression and tension at the nodes, (..., nodes, 2), both positive [Pa].

    At a change of section the smaller area bears the larger stress.
    """
    upper, lower = chains.ends.T
    smaller = np.minimum(np.append(upper[:1], lower), np.append(upper, lower[-1:]))
    return np.asarray(_forces(envelope) / smaller[:, None])


def uses_of_segments(chains: Chains, limits: StressLimits, envelope: Floats) -> Floats:
    """Return the uses of the stress limits at both ends of every segment.

    Parameters
    ----------
    envelope : (..., nodes, 2) float64 array
        Largest and smallest force. [N]

    Returns
    -------
    (..., segments, 2, 2) float64 array
        At upper and lower end, in compression and in tension. [-]
    """
    stresses = np.array([(part.squeeze.stress, part.pull.stress) for part in limits.parts])
    bearable = chains.ends[:, :, None] * stresses[chains.part][:, None, :]
    forces = _forces(envelope)
    at_ends = np.stack((forces[..., :-1, :], forces[..., 1:, :]), axis=-2)
    return np.asarray(at_ends / bearable)


def uses_at_nodes(chains: Chains, limits: StressLimits, envelope: Floats) -> Floats:
    """Return the uses of the stress limits at the nodes, (nodes, 2), the larger of both sides."""
    ends = uses_of_segments(chains, limits, envelope)
    above = np.concatenate((ends[:1, 0], ends[:, 1]))
    below = np.concatenate((ends[:, 0], ends[-1:, 1]))
    return np.asarray(np.maximum(above, below))


def _forces(envelope: Floats) -> Floats:
    """Return the largest compressive and tensile forces, both positive."""
    return np.asarray(np.maximum(envelope * (1.0, -1.0), 0.0))


def strike_stressed(
    chains: Chains, strikes: Strikes, limits: StressLimits, workers: int | None = None
) -> tuple[Struck, Stressed]:
    """Compute a batch of blows and their stresses.

    The solver tells the largest stress of each blow, which is enough where all parts have the same
    limits and none tapers; else every blow's envelope is held against the limits of the parts.
    """
    if not limits.differ and not chains.tapers:
        struck = strike(chains, strikes, workers=workers)
        return struck, Stressed(struck.compression, struck.tension)
    struck = strike(chains, strikes, detail=True, workers=workers)
    uses = uses_of_segments(chains, limits, struck.envelope).max(axis=(1, 2))
    scale = np.array((limits.compression, limits.tension))
    return struck, Stressed(*(uses * scale).T)
