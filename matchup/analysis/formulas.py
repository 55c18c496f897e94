"""Dynamic formulas: resistance from the energy and the set of a blow alone.

They know nothing of cushions, helmet, waves and damping, and most were fitted to load tests of
one region. Here they are a second opinion beside an answer, and decide nothing.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import NamedTuple

from matchup.model.pile import POUND_PER_SQUARE_INCH

INCH = 0.0254
POUND_FORCE = POUND_PER_SQUARE_INCH * INCH**2
FOOT_POUND = POUND_FORCE * 12 * INCH
KIP = 1000 * POUND_FORCE
SHORT_TON_FORCE = 2000 * POUND_FORCE
WSDOT_SHARE = {"drop": 0.28, "air": 0.55, "hydraulic": 0.58, "double-acting": 0.55}
"""Share of the developed energy that the WSDOT formula counts, by kind of hammer; from memory."""


class LastBlow(NamedTuple):
    """What the formulas ask of a blow.

    Parameters
    ----------
    kind : str
        Of the hammer.
    energy : float
        Developed energy: ram weight times stroke. [J]
    efficiency : float
        Share of it left at impact. [-]
    set : float
        [m]
    length : float
        Of the pile. [m]
    stiffness : float
        ``E A`` of the pile. [N]
    """

    kind: str
    energy: float
    efficiency: float
    set: float
    length: float
    stiffness: float

    @property
    def foot_pounds(self) -> float:
        """The developed energy [ft lbf]."""
        return self.energy / FOOT_POUND

    @property
    def inches(self) -> float:
        """The set [in]."""
        return self.set / INCH


class Formula(NamedTuple):
    """A dynamic formula.

    Parameters
    ----------
    name : str
    text : str
        As it is printed, in its own units.
    source : str
        And how it was obtained.
    resistance : callable
        From the last blow to the ultimate resistance. [N]
    """

    name: str
    text: str
    source: str
    resistance: Callable[[LastBlow], float]


def modified_en(blow: LastBlow) -> float:
    """Return ``12 Ed / (s + 0.1)`` kips, with Ed in ft kip and s in inches, in [N]."""
    return 12 * blow.foot_pounds / 1000 / (blow.inches + 0.1) * KIP


def modified_gates(blow: LastBlow) -> float:
    """Return ``1.75 sqrt(Ed) log10(10 N) - 100`` kips, Ed in ft lbf, N blows an inch, in [N]."""
    return (1.75 * math.sqrt(blow.foot_pounds) * math.log10(10 / blow.inches) - 100) * KIP


def wsdot(blow: LastBlow) -> float:
    """Return ``6.6 F Ed ln(10 N)`` kips, with Ed in ft kip and N in blows an inch, in [N]."""
    share = WSDOT_SHARE[blow.kind]
    return 6.6 * share * blow.foot_pounds / 1000 * math.log(10 / blow.inches) * KIP


def mndot(blow: LastBlow) -> float:
    """Return ``20 sqrt(W H / 1000) log10(10 / s)`` short tons, in [N]."""
    tons = 20 * math.sqrt(blow.foot_pounds / 1000) * math.log10(10 / blow.inches)
    return tons * SHORT_TON_FORCE


def danish(blow: LastBlow) -> float:
    """Return ``a E0 / (s + Se / 2)`` with ``Se = sqrt(2 a E0 L / (A E))``, in [N]."""
    energy = blow.efficiency * blow.energy
    return energy / (blow.set + 0.5 * elastic_set(blow))


def elastic_set(blow: LastBlow) -> float:
    """Return the Danish formula's elastic compression ``sqrt(2 a E0 L / (A E))`` [m]."""
    return math.sqrt(2 * blow.efficiency * blow.energy * blow.length / blow.stiffness)


_TABLE = "FHWA-NHI-16-010 Table 13-4, second-hand"
FORMULAS = (
    Formula("modified EN", "12 Ed / (s + 0.1)", _TABLE, modified_en),
    Formula("modified Gates", "1.75 sqrt(Ed) log10(10 N) - 100", _TABLE, modified_gates),
    Formula("WSDOT", "6.6 F Ed ln(10 N)", f"{_TABLE}; F by hammer from memory", wsdot),
    Formula("MnDOT", "20 sqrt(W H / 1000) log10(10 / s)", _TABLE, mndot),
    Formula("Danish", "a E0 / (s + Se / 2)", "common practice, source not at hand", danish),
)
