"""What a contract comes to, as tables and sentences."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from matchup.model.cost import Cost
from matchup.model.job import Job
from matchup.report.page import Block, Headline, Prose
from matchup.report.table import Column, Field, Table, tabled
from matchup.search.bill import Bill
from matchup.search.option import Option
from matchup.search.tradeoff import is_beaten

UNBEATEN = "yes"


def money(amount: float) -> str:
    """Return money in whole units, thousands apart."""
    return f"{amount:,.0f}".replace(",", " ")


def per_pile_text(bill: Bill, cost: Cost) -> str:
    """Return what a pile costs, in words."""
    if bill.per_pile is None:
        return f"its cost not known ({', '.join(bill.unknown)})"
    return f"{money(bill.per_pile)} {cost.currency} a pile"


def bills_blocks(options: Sequence[Option], job: Job) -> list[Block]:
    """Return what the contract comes to with every option; nothing where that can't be told."""
    cost = job.cost
    priced = [option for option in options if option.bill is not None]
    if cost is None or not priced:
        return []
    rigs = f" with {cost.rigs} rigs" if cost.rigs > 1 else ""
    return [
        Headline(f"The contract of {cost.piles} piles{rigs}:"),
        bills_table(priced, cost),
        Prose(tuple(basis_lines(priced, cost))),
    ]


def bills_table(options: Sequence[Option], cost: Cost) -> Table:
    """Return days, money, energy, fuel and carbon dioxide by option."""
    money_of = cost.currency
    fields: list[Field[Option]] = [
        (Column("hammer", "hammer", wrap=14), lambda o: o.hammer.name),
        (Column("pile_hours", "hours\na pile", 2), lambda o: _over(_bill(o).pile_time, 3600)),
        (Column("days", "days", 1), lambda o: _bill(o).days),
        (
            Column(f"per_pile_{money_of}", f"{money_of}\na pile", 0),
            lambda o: _bill(o).per_pile,
        ),
        (Column(f"total_{money_of}", f"{money_of}\nin all", 0), lambda o: _bill(o).total),
        (
            Column("energy_MJ", "MJ of blows\na pile", 1),
            lambda o: _over(_bill(o).energy, 1e6 * cost.piles),
        ),
    ]
    if cost.fuel is not None:
        unit = cost.fuel.unit
        fields.append((Column(f"fuel_{unit}", f"fuel\n{unit}", 0), lambda o: _bill(o).fuel))
        if cost.fuel.co2 is not None:
            carbon = Column("co2_t", "CO2\nt", 1)
            fields.append((carbon, lambda o: _over(_bill(o).co2, 1e3)))
    if len(options) > 1:
        fields.append((Column("unbeaten", "unbeaten"), lambda o: _unbeaten(o, options)))
    return tabled(options, fields)


def _bill(option: Option) -> Bill:
    assert option.bill is not None
    return option.bill


def _over(value: float | None, scale: float) -> float | None:
    return None if value is None else value / scale


def _unbeaten(option: Option, options: Sequence[Option]) -> str | None:
    return None if is_beaten(option, options) else UNBEATEN


def basis_lines(options: Sequence[Option], cost: Cost) -> list[str]:
    """Return what the figures count, and what they leave out."""
    best = _bill(options[0])
    lines = []
    if best.total:
        shares = [
            f"{name} {money(amount)}"
            for name, amount in best.parts
            if amount is not None and amount
        ]
        lines.append(
            f"Of {money(best.total)} {cost.currency} for {options[0].hammer.name}: "
            f"{', '.join(shares)}."
        )
    splices = f", {cost.splices} splices of {_minutes(cost.splice_time)}" if cost.splices else ""
    cushions = f", {_minutes(cost.cushion_time)} for a change of cushion"
    lines.append(
        f"Counted: {_minutes(cost.move)} from pile to pile{splices}"
        f"{cushions if cost.cushion_time else ''}; shifts of {cost.shift / 3600:.3g} h; days not "
        "rounded up; set-up rests are no working time. Of the required ground cases the one that "
        "costs the most."
    )
    if len(options) > 1:
        lines.append(
            "Unbeaten: no other hammer is as good in blow energy, highest stress, driving time and "
            "cost at once."
        )
    left_out = [
        word for word, value in (("rig", cost.rig_day), ("crew", cost.crew_day)) if value is None
    ]
    if cost.mobilisation is None:
        left_out.append("mobilisation of the rig")
    if cost.splices and cost.splice_price is None:
        left_out.append("splices")
    if cost.fuel is None or cost.fuel.price is None:
        left_out.append("fuel")
    if left_out:
        lines.append(f"Not counted, since the job gives no price: {', '.join(left_out)}.")
    lines.append("Hammer cushions, the piles themselves and delays are not counted.")
    return lines


def _minutes(seconds: float) -> str:
    return f"{seconds / 60:.3g} min"


def bill_document(bill: Bill | None, cost: Cost | None) -> dict[str, Any] | None:
    """Return a bill for the JSON document."""
    if bill is None or cost is None:
        return None
    return {
        "currency": cost.currency,
        "piles": bill.piles,
        "hours_per_pile": _over(bill.pile_time, 3600),
        "days": bill.days,
        "rig_days": bill.rig_days,
        "total": bill.total,
        "per_pile": bill.per_pile,
        "parts": dict(bill.parts),
        "blow_energy_MJ": bill.energy / 1e6,
        "fuel": bill.fuel,
        "fuel_unit": cost.fuel.unit if cost.fuel else None,
        "co2_t": _over(bill.co2, 1e3),
    }
