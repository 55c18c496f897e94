"""What a contract pays for: rigs and their days, moves, splices, cushions, fuel."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import NamedTuple

from matchup.model.rules import Rules

FUEL_BASES = ("h", "MJ")
"""Fuel is used by the hour of driving, or by the energy of the blows, ram weight times stroke."""
SECONDS_OF_HOUR = 3600.0
JOULES_OF_MEGAJOULE = 1e6


class Amount(NamedTuple):
    """So much of what no table of units knows: money of a currency, fuel by the hour.

    Parameters
    ----------
    value : float
    unit : str
        Plain text, never converted: ``EUR``, ``l/h``.
    """

    value: float
    unit: str


@dataclass(frozen=True, slots=True)
class Fuel:
    """Fuel or electric power of the hammers.

    Parameters
    ----------
    unit : str
        In which it is bought, as plain text: ``l``, ``kWh``.
    use : Amount or None
        For hammers whose catalogue row names none: so many units by ``h`` of driving or by ``MJ``
        of blow energy.
    price : float or None
        Of one unit; None leaves fuel out of the cost. [currency]
    co2 : float or None
        Carbon dioxide of one unit. [kg]
    """

    unit: str
    use: Amount | None = None
    price: float | None = None
    co2: float | None = None

    def __post_init__(self) -> None:
        rules = Rules("fuel")
        rules.not_negative("fuel_price", self.price)
        rules.not_negative("fuel_co2", self.co2, "mass")
        if self.use is not None:
            rules.not_negative("fuel_use", self.use.value)
            must = f"must be in {' or '.join(self.units_of_use)}"
            rules.must(self.use.unit in self.units_of_use, "fuel_use", must, self.use.unit)
        rules.close()

    @property
    def units_of_use(self) -> tuple[str, ...]:
        """The units in which a use may be given."""
        return tuple(f"{self.unit}/{basis}" for basis in FUEL_BASES)

    def used(self, use: Amount, seconds: float, energy: float) -> float:
        """Return the units of fuel that some driving takes.

        Parameters
        ----------
        use : Amount
        seconds : float
            Of driving. [s]
        energy : float
            Of its blows. [J]
        """
        by_hour = use.unit == self.units_of_use[0]
        return use.value * (seconds / SECONDS_OF_HOUR if by_hour else energy / JOULES_OF_MEGAJOULE)


@dataclass(frozen=True, slots=True)
class Cost:
    """Prices and times of a contract; money is in one currency throughout.

    Parameters
    ----------
    currency : str
        Plain text.
    piles : int
        Of the kind that the job describes.
    shift : float
        Working time of a day, breaks and standstill taken off. [s]
    move : float
        From the last blow on one pile to the first on the next. [s]
    rigs : int
        At work side by side, each with its hammer.
    rig_day, crew_day : float or None
        Of one rig a day; None where it is paid for elsewhere. [currency]
    mobilisation : float or None
        Of one rig, to the site and back. [currency]
    splices : int
        Of a pile.
    splice_time : float
        Working time that one takes. [s]
    splice_price : float or None
        Material of one. [currency]
    cushion_time : float
        Working time that the change of a pile cushion takes. [s]
    fuel : Fuel or None
        None leaves fuel out.
    """

    currency: str
    piles: int
    shift: float
    move: float
    rigs: int = 1
    rig_day: float | None = None
    crew_day: float | None = None
    mobilisation: float | None = None
    splices: int = 0
    splice_time: float = 0.0
    splice_price: float | None = None
    cushion_time: float = 0.0
    fuel: Fuel | None = None

    def __post_init__(self) -> None:
        rules = Rules("cost")
        rules.must(bool(self.currency.strip()), "currency", "must not be empty", self.currency)
        rules.must(self.piles >= 1, "piles", "must be >= 1", self.piles)
        rules.must(
            self.rigs >= 1 and not 1 <= self.piles < self.rigs,
            "rigs",
            "must be >= 1, and no more than `piles`",
            self.rigs,
        )
        rules.must(self.splices >= 0, "splices", "must be >= 0", self.splices)
        rules.positive("shift", self.shift, "time")
        rules.must(not self.shift > 86400, "shift", "must be at most a day", self.shift, "time")
        for name in ("move", "splice_time", "cushion_time"):
            rules.not_negative(name, getattr(self, name), "time")
        for name in ("rig_day", "crew_day", "mobilisation", "splice_price"):
            rules.not_negative(name, getattr(self, name))
        rules.close()

    @property
    def piles_of_busiest(self) -> int:
        """Piles of the rig that drives the most."""
        return math.ceil(self.piles / self.rigs)
