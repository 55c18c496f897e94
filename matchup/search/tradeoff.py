"""Which options of a ranking no other one beats in everything."""

from __future__ import annotations

import math
from collections.abc import Sequence

from matchup.search.option import Option


def costs(option: Option) -> tuple[float, float, float]:
    """Return what one wants little of: blow energy [J], highest stress use [-], and time.

    Time is that of the whole drive [s], or for stages given by hand what a length of penetration
    takes at the target [s/m]; infinite where the blow rate is not known.
    """
    use = max(option.compression_use, option.tension_use)
    return option.target.blow_energy, use, _time(option)


def _time(option: Option) -> float:
    if option.slowest is not None:
        seconds = option.slowest.taken.seconds
        return math.inf if seconds is None else seconds
    speed = option.target.speed
    return 1 / speed if speed else math.inf


def is_beaten(option: Option, others: Sequence[Option]) -> bool:
    """Return whether another option is no worse in energy, stress and time, and better in one."""
    mine = costs(option)
    return any(
        all(theirs <= own for theirs, own in zip(costs(other), mine, strict=True))
        and costs(other) != mine
        for other in others
    )
