"""A pile that stands free with a hammer on it: Euler's column with its own weight."""

from __future__ import annotations

import math

HEAVY_COLUMN = 7.8373
"""Critical own weight of a column fixed below and free above, times L**2 over EI: 9/4 of the square
of the first zero of the Bessel function of order -1/3 (Greenhill 1881); exact to these digits."""


def buckling_use(bending: float, length: float, load: float, weight: float) -> float:
    """Return how far a free-standing pile is towards buckling; at 1 it buckles at most.

    Parameters
    ----------
    bending : float
        Bending stiffness EI. [N m2]
    length : float
        From where it is taken to be fixed to its free head. [m]
    load : float
        On its head. [N]
    weight : float
        Of this length. [N]

    Notes
    -----
    ``P / (pi^2 EI / 4 L^2) + W / (7.837 EI / L^2)``. Each term is exact alone; their sum is an
    upper bound of the truth (Dunkerley), so it is on the safe side. The load stands straight on a
    straight vertical pile: what is out of plumb is left to the safety that is asked for.
    """
    euler = math.pi**2 * bending / (4 * length**2)
    return load / euler + weight * length**2 / (HEAVY_COLUMN * bending)
