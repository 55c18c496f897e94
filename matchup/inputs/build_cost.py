"""From the job file's keys to what the contract pays for, held against the catalogues' prices."""

from __future__ import annotations

from collections.abc import Sequence

from matchup.errors import ModelError
from matchup.inputs.findings import some
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import CostKeys, JobKeys
from matchup.model.cost import Amount, Cost, Fuel
from matchup.model.cushion import CushionSpace
from matchup.model.hammer import Hammer

MONEY = ("rig_day", "crew_day", "mobilisation", "splice_price")
PRICED_TOGETHER = {"splice_time": "splices", "splice_price": "splices"}
SUPERFLUOUS = "has no effect: "


def build_cost(
    text: JobText, keys: JobKeys, hammers: Sequence[Hammer], cushions: CushionSpace | None
) -> Cost | None:
    """Return what the contract pays for; None without a ``[cost]`` table, or where it is wrong.

    What hand-given stages can't tell, and hammers whose cost is not known, go to the notices.
    """
    given = keys.cost
    if given is None:
        _check_objective(text, keys)
        return None
    _check_catalogues(text, given, hammers, cushions)
    money = {name: _money(text, given, name) for name in MONEY}
    _note_without_effect(text, keys, given)
    try:
        cost = Cost(
            currency=given.currency,
            piles=given.rigs if text.is_unread("cost", "piles") else given.piles,
            shift=given.shift,
            move=given.move,
            rigs=given.rigs,
            splices=given.splices,
            splice_time=given.splice_time or 0.0,
            cushion_time=given.cushion_time or 0.0,
            fuel=_fuel(text, given, hammers),
            **money,
        )
    except ModelError as error:
        text.wrong_model(error, ("cost",))
        return None
    _check_objective(text, keys)
    if keys.ground is not None:
        _note_unknown(text, keys, hammers, cushions)
    return cost


def _money(text: JobText, given: CostKeys, name: str) -> float | None:
    amount: Amount | None = getattr(given, name)
    if amount is None:
        return None
    if amount.unit != given.currency:
        do = f'Write for example "{amount.value:g} {given.currency}".'
        text.wrong(("cost", name), f"must be in the job's currency, {given.currency}", do)
    return amount.value


def _fuel(text: JobText, given: CostKeys, hammers: Sequence[Hammer]) -> Fuel | None:
    """Return the fuel; its unit is that of its price, or of its carbon dioxide, or of its use."""
    units = {
        "fuel_price": _bought(text, given, "fuel_price", given.currency),
        "fuel_co2": _bought(text, given, "fuel_co2", "kg"),
        "fuel_use": given.fuel_use.unit.rpartition("/")[0] if given.fuel_use else "",
    }
    known = {name: unit for name, unit in units.items() if unit}
    if not known:
        return None
    first, unit = next(iter(known.items()))
    for name, other in known.items():
        if other != unit and name != "fuel_use":
            text.wrong(("cost", name), f"must be for the unit of `{first}`, {unit}")
    try:
        fuel = Fuel(unit, given.fuel_use, *_values(given.fuel_price, given.fuel_co2))
    except ModelError as error:
        text.wrong_model(error, ("cost",))
        return None
    wrong = [h.name for h in hammers if h.fuel_use and h.fuel_use.unit not in fuel.units_of_use]
    if wrong:
        must = f"must be for the unit that the catalogue's `fuel_use` of {some(wrong)} is in"
        text.wrong(("cost", first), must)
    return fuel


def _values(*amounts: Amount | None) -> tuple[float | None, ...]:
    return tuple(None if amount is None else amount.value for amount in amounts)


def _bought(text: JobText, given: CostKeys, name: str, of: str) -> str:
    """Return the unit of fuel in a key like ``"1.6 EUR/l"``."""
    amount: Amount | None = getattr(given, name)
    if amount is None:
        return ""
    what, _, unit = amount.unit.partition("/")
    if what != of or not unit:
        must = f"must be in {of} for a unit of fuel"
        text.wrong(("cost", name), must, f'Write for example "{amount.value:g} {of}/l".')
        return ""
    return unit


def _check_catalogues(
    text: JobText, given: CostKeys, hammers: Sequence[Hammer], cushions: CushionSpace | None
) -> None:
    """Note columns of the catalogues in another currency: nothing is converted."""
    found = {
        "day_rate": [h.day_rate for h in hammers],
        "mobilisation": [h.mobilisation for h in hammers],
        "price": [material.price for material in cushions.materials] if cushions else [],
    }
    for column, amounts in found.items():
        others = {amount.unit for amount in amounts if amount} - {given.currency}
        if others:
            must = f"must be the currency of the catalogue's `{column}`, {', '.join(others)}"
            text.wrong(("cost", "currency"), must, "Nothing is converted.")


def _check_objective(text: JobText, keys: JobKeys) -> None:
    """Note that cost is asked for where it can't be known."""
    if keys.search.objective != "cost":
        return
    path = ("search", "objective")
    if keys.cost is None:
        text.wrong(path, "must be energy or time in a job without [cost]")
    if keys.ground is None:
        must = "must be energy or time where stages are given by hand"
        do = "Blows and minutes of a whole drive follow from a [ground]."
        text.wrong(path, must, do)


def _note_without_effect(text: JobText, keys: JobKeys, given: CostKeys) -> None:
    if keys.ground is None:
        why = "stages given by hand tell neither blows nor minutes; a [ground] does"
        text.notice(("cost",), SUPERFLUOUS + why)
    for name, count in PRICED_TOGETHER.items():
        if getattr(given, name) is not None and not getattr(given, count):
            text.notice(("cost", name), f"{SUPERFLUOUS}`{count}` is 0")
    if given.cushion_time and keys.pile_cushion is None:
        text.notice(("cost", "cushion_time"), f"{SUPERFLUOUS}there is no [pile_cushion]")


def _note_unknown(
    text: JobText, keys: JobKeys, hammers: Sequence[Hammer], cushions: CushionSpace | None
) -> None:
    """Note whose cost can't be known for want of a catalogue value."""
    without: dict[str, list[str]] = {}
    for hammer in hammers:
        rate = hammer.blow_rate(hammer.stroke_max)
        lacking = {
            "day_rate": hammer.day_rate,
            "mobilisation": hammer.mobilisation,
            "blow_rate_max": rate,
        }
        names = [f"`{name}`" for name, value in lacking.items() if value is None]
        if names:
            without.setdefault(" and ".join(names), []).append(hammer.name)
    for columns, named in without.items():
        text.notice(("cost",), f"can't be told of {some(named)}: no {columns}")
    for material in cushions.materials if cushions else ():
        if material.price is None:
            text.notice(("cost",), f"can't be told on {material.name}: no `price`")
