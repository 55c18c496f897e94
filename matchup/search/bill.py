"""The bill: days, money, fuel and carbon dioxide of a whole contract with one option."""

from __future__ import annotations

from dataclasses import dataclass

from matchup.model.cost import Cost
from matchup.model.cushion import Stack
from matchup.model.hammer import Hammer

RIG, CREW, HAMMER = "rig", "crew", "hammer"
MOBILISATION, CUSHIONS, SPLICES, FUEL = "mobilisation", "pile cushions", "splices", "fuel"


@dataclass(frozen=True, slots=True)
class Bill:
    """What a contract takes when every pile goes down as in one ground case.

    Days are averages and not rounded up: a pile that a shift ends in is gone on with in the next.

    Parameters
    ----------
    pile_time : float or None
        Working time on a pile with the move to it; None where a blow rate is not known. [s]
    days : float or None
        Until the rig with the most piles is done. [-]
    rig_days : float or None
        Of all rigs together. [-]
    energy : float
        Of all blows, ram weight times stroke. [J]
    fuel : float or None
        Units of fuel in all; None where no use is given. [-]
    co2 : float or None
        In all. [kg]
    parts : tuple of (name, float or None)
        What is paid for, in all; None where it is not known. [currency]
    piles : int
    """

    pile_time: float | None
    days: float | None
    rig_days: float | None
    energy: float
    fuel: float | None
    co2: float | None
    parts: tuple[tuple[str, float | None], ...]
    piles: int

    @property
    def total(self) -> float | None:
        """Cost of the contract; None where a part of it is not known [currency]."""
        known = [amount for _, amount in self.parts if amount is not None]
        return sum(known) if len(known) == len(self.parts) else None

    @property
    def per_pile(self) -> float | None:
        """Cost of one pile, its share of the mobilisation included [currency]."""
        return None if self.total is None else self.total / self.piles

    @property
    def unknown(self) -> tuple[str, ...]:
        """Names of the parts that are not known."""
        return tuple(name for name, amount in self.parts if amount is None)


def make_bill(
    cost: Cost, hammer: Hammer, stack: Stack, seconds: float | None, energy: float, cushions: int
) -> Bill:
    """Return the bill of a contract.

    Parameters
    ----------
    cost : Cost
    hammer : Hammer
    stack : Stack
    seconds : float or None
        Of driving a pile, pauses left out. [s]
    energy : float
        Of the blows on it. [J]
    cushions : int
        Pile cushions used up on it.

    Notes
    -----
    Set-up rests of a drive are no working time: the rig drives other piles meanwhile.
    """
    pile_time = None
    if seconds is not None:
        changes = cost.cushion_time * (cushions - 1) if stack.pile else 0.0
        pile_time = cost.move + seconds + cost.splices * cost.splice_time + changes
    shifts = None if pile_time is None else pile_time / cost.shift
    rig_days = _times(shifts, cost.piles)
    fuel = _fuel(cost, hammer, seconds, energy)
    return Bill(
        pile_time=pile_time,
        days=_times(shifts, cost.piles_of_busiest),
        rig_days=rig_days,
        energy=energy * cost.piles,
        fuel=fuel,
        co2=_times(fuel, cost.fuel.co2 if cost.fuel else None),
        parts=_parts(cost, hammer, stack, cushions, rig_days, fuel),
        piles=cost.piles,
    )


def _parts(
    cost: Cost,
    hammer: Hammer,
    stack: Stack,
    cushions: int,
    rig_days: float | None,
    fuel: float | None,
) -> tuple[tuple[str, float | None], ...]:
    """Return what is paid for; what the job gives no price of is no part."""
    hired = hammer.day_rate.value if hammer.day_rate else None
    brought = hammer.mobilisation.value if hammer.mobilisation else None
    parts: dict[str, float | None] = {}
    for name, day in ((RIG, cost.rig_day), (CREW, cost.crew_day)):
        if day is not None:
            parts[name] = _times(rig_days, day)
    parts[HAMMER] = _times(rig_days, hired)
    parts[MOBILISATION] = (
        None if brought is None else cost.rigs * (brought + (cost.mobilisation or 0.0))
    )
    if stack.pile is not None:
        price = stack.pile.material.price
        sheets = stack.pile.sheets or 1
        parts[CUSHIONS] = None if price is None else cost.piles * cushions * sheets * price.value
    if cost.splices and cost.splice_price is not None:
        parts[SPLICES] = cost.piles * cost.splices * cost.splice_price
    if cost.fuel is not None and cost.fuel.price is not None:
        parts[FUEL] = _times(fuel, cost.fuel.price)
    return tuple(parts.items())


def _fuel(cost: Cost, hammer: Hammer, seconds: float | None, energy: float) -> float | None:
    """Return the units of fuel of all piles."""
    if cost.fuel is None or seconds is None:
        return None
    use = hammer.fuel_use or cost.fuel.use
    return None if use is None else cost.piles * cost.fuel.used(use, seconds, energy)


def _times(value: float | None, factor: float | None) -> float | None:
    return None if value is None or factor is None else value * factor
