"""Which options of a ranking no other one beats in everything."""

from __future__ import annotations

import math
from collections.abc import Sequence

from matchup.search.option import Option


def costs(option: Option) -> tuple[float, float, float, float]:
    """Return what one wants little of: blow energy [J], highest stress use [-], time and money.

    Time is that of the whole drive [s], or for stages given by hand what a length of penetration
    takes at the target [s/m]; infinite where the blow rate is not known. Money is the cost of the
    contract, infinite where it is not known.
    """
    use = max(option.compression_use, option.tension_use)
    total = None if option.bill is None else option.bill.total
    return option.target.blow_energy, use, _time(option), math.inf if total is None else total


def _time(option: Option) -> float:
    if option.slowest is not None:
        seconds = option.slowest.taken.seconds
        return math.inf if seconds is None else seconds
    speed = option.target.speed
    return 1 / speed if speed else math.inf


def is_beaten(option: Option, others: Sequence[Option]) -> bool:
    """Return whether another is no worse in energy, stress, time and money, and better in one."""
    mine = costs(option)
    return any(
        all(theirs <= own for theirs, own in zip(costs(other), mine, strict=True))
        and costs(other) != mine
        for other in others
    )
