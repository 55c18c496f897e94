"""Amounts of what no table of units knows: money of a currency, fuel. Units stay as typed."""

from __future__ import annotations

import re

from matchup.model.cost import Amount
from matchup.units import UnitError, parse_number

_AMOUNT = re.compile(r"\s*([+-]?[\d.,]+(?:[eE][+-]?\d+)?)\s*(\S(?:.*\S)?)?\s*", re.DOTALL)


def tidy_unit(unit: str) -> str:
    """Return a unit with single spaces, and none around a slash."""
    return re.sub(r"\s*/\s*", "/", " ".join(unit.split()))


def read_amount(value: object, example: str) -> Amount:
    """Return a text like ``"2400 EUR"`` as an amount that is not negative.

    Parameters
    ----------
    value : object
        As the job file has it.
    example : str
        For the hint.

    Raises
    ------
    UnitError
    """
    do = f'Write for example "{example}".'
    match = _AMOUNT.fullmatch(value) if isinstance(value, str) else None
    if match is None or not match[2]:
        raise UnitError("must be a text of a number and its unit", do)
    amount = Amount(parse_number(match[1]), tidy_unit(match[2]))
    if amount.value < 0:
        raise UnitError("must be >= 0")
    return amount
