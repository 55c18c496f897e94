"""The small laws that the march is made of, each a jitted scalar function.

All are free of branches that depend on data, so that the compiler can run eight blows side by
side in vector registers; `larger` and `smaller` exist because the built-in `max` and `min` do
not compile to single vector instructions.

Forces are compressive positive and displacements positive downwards.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, TypeVar, cast

from numba import njit

OPTIONS: dict[str, Any] = {
    "fastmath": {"contract", "nsz", "arcp"},
    "error_model": "numpy",
    "cache": True,
    "nogil": True,
}
Function = TypeVar("Function", bound=Callable[..., object])


def compiled(function: Function) -> Function:
    """Compile a function of the solver; its type for readers and checkers stays what it is.

    Of the fast floating-point rules only those that leave infinities and NaN alone are taken:
    with `nnan` the compiler may delete the very checks that catch a diverging blow.
    """
    return cast(Function, njit(**OPTIONS)(function))


def law(function: Function) -> Function:
    """Compile a law into whatever calls it: a call left over would keep lanes apart."""
    return cast(Function, njit(**OPTIONS, forceinline=True)(function))


@law
def larger(a: float, b: float) -> float:
    """Return the larger of two floats."""
    return a if a > b else b


@law
def smaller(a: float, b: float) -> float:
    """Return the smaller of two floats."""
    return a if a < b else b


@law
def clipped(a: float, low: float, high: float) -> float:
    """Return `a` kept between `low` and `high`."""
    return smaller(larger(a, low), high)


@law
def cushion_force(compression: float, largest: float, loading: float, unloading: float) -> float:
    """Return the force of a cushion without tension.

    Loading runs along the stiffness `loading`; below the largest past compression the force
    runs along `unloading`, which is ``loading / e**2`` for a coefficient of restitution ``e``, so
    that a full cycle gives back the fraction ``e**2`` of the energy put in.

    Parameters
    ----------
    compression : float
        Now. [m]
    largest : float
        Largest compression so far, with or without this one. [m]
    loading, unloading : float
        Stiffnesses. [N/m]

    Returns
    -------
    float
        [N]

    References
    ----------
    .. [1] E. A. L. Smith, "Pile-Driving Analysis by the Wave Equation," J. Soil Mech. Found. Div.
       ASCE, vol. 86, SM4, 1960.
    """
    on_unloading = unloading * (compression - _lasting(largest, loading, unloading))
    # The steeper line lies below the other up to the largest compression, and above it beyond.
    return larger(smaller(loading * compression, on_unloading), 0.0)


@law
def _lasting(largest: float, loading: float, unloading: float) -> float:
    """Return the compression at which an unloading cushion gets free."""
    return largest * (1.0 - loading / unloading)


@law
def cushion_on_bar(
    approach: float, largest: float, loading: float, unloading: float, give: float
) -> float:
    """Return the force of a cushion whose lower face gives way in proportion to that force.

    Solves ``F = cushion_force(approach - give F)``: the head of an elastic bar has no mass, so
    within a time step it gives way by `give` for each newton. Each branch is linear.

    Parameters
    ----------
    approach : float
        Compression that there would be if the bar's head took no force. [m]
    largest : float
        Largest compression before this moment. [m]
    loading, unloading : float
        Stiffnesses. [N/m]
    give : float
        [m/N]

    Returns
    -------
    float
        [N]
    """
    # Stiffness with the bar in series first: it is the same in every sub-step.
    on_loading = loading / (1.0 + loading * give) * approach
    on_unloading = unloading / (1.0 + unloading * give)
    on_unloading *= approach - _lasting(largest, loading, unloading)
    return larger(smaller(on_loading, on_unloading), 0.0)


@law
def shaft_velocity(
    push: float,
    spring: float,
    drag: float,
    impedance: float,
    half_stiffness: float,
    strength: float,
) -> float:
    """Return the velocity of a node for one step, its soil force taken implicitly.

    The node has no mass: ``impedance v = push - spring(v) - drag v``, where the spring force is
    the one at the middle of the step, ``spring + half_stiffness v`` while elastic and
    ``+-strength`` while it yields. The spring force being the elastic one clipped, the root is the
    elastic root clipped to those of yielding: the larger of two rising functions has the smaller
    of their roots, and the smaller the larger.

    Parameters
    ----------
    push : float
        Twice the difference of the arriving waves, plus the node's weight. [N]
    spring : float
        Spring force at the start of the step. [N]
    drag : float
        Damping force per velocity. [N s/m]
    impedance : float
        Sum of the impedances above and below. [N s/m]
    half_stiffness : float
        Spring stiffness times half the time step. [N s/m]
    strength : float
        Force at which the spring yields, both ways. [N]

    Returns
    -------
    float
        [m/s]
    """
    yielding = impedance + drag
    elastic = (push - spring) / (yielding + half_stiffness)
    return clipped(elastic, (push - strength) / yielding, (push + strength) / yielding)


@law
def toe_velocity(
    push: float,
    spring: float,
    drag: float,
    strength: float,
    half_stiffness: float,
    toe: tuple[float, float, float, float],
    impedance: float,
) -> float:
    """Return the velocity of the toe node for one step.

    The toe node carries the shaft resistance of the last half segment and the toe. The root for
    each state of the shaft spring is that of `_on_toe`; they combine as in `shaft_velocity`.

    Parameters
    ----------
    push : float
        Twice the arriving wave, plus the node's weight. [N]
    spring, drag, strength, half_stiffness : float
        Of the shaft, as in `shaft_velocity`.
    toe : tuple of (stretch, drag, strength, half_stiffness)
        Toe spring force continued below zero while a gap is open [N], damping force per velocity
        [N s/m], strength [N], and stiffness times half the time step [N s/m].
    impedance : float
        Of the last segment. [N s/m]

    Returns
    -------
    float
        [m/s]
    """
    yielding = impedance + drag
    elastic = _on_toe(push - spring, yielding + half_stiffness, toe)
    low, high = _on_toe(push - strength, yielding, toe), _on_toe(push + strength, yielding, toe)
    return clipped(elastic, low, high)


@law
def _on_toe(push: float, slope: float, toe: tuple[float, float, float, float]) -> float:
    """Return the root of ``slope v + reaction(v) = push``.

    The toe spring is elastic up to its strength, then yields; it takes no tension, and under a
    toe that has risen a gap stays open until the toe comes back to where it left. Its damping
    acts along with it, and the two together do not pull either.
    """
    stretch, drag, strength, half_stiffness = toe
    without_toe = push / slope
    elastic = (push - stretch) / (slope + drag + half_stiffness)
    gap = push / (slope + drag)
    yielding = (push - strength) / (slope + drag)
    return smaller(clipped(elastic, yielding, gap), without_toe)
