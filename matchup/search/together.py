"""Several jobs, one hammer on site: which one serves them all, and where the others fail."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import combinations

from matchup.search.bill import MOBILISATION
from matchup.search.option import Option, Ranking


@dataclass(frozen=True, slots=True)
class Served:
    """What one hammer does in every job.

    Parameters
    ----------
    name : str
    options : tuple of Option or None
        By job; None where a job's catalogue has no such hammer.
    """

    name: str
    options: tuple[Option | None, ...]

    @property
    def fails(self) -> tuple[int, ...]:
        """Places of the jobs that it can't drive."""
        return tuple(i for i, o in enumerate(self.options) if o is None or not o.drives)

    @property
    def serves_all(self) -> bool:
        """Whether it drives in every job."""
        return not self.fails

    @property
    def total(self) -> float | None:
        """Cost of all contracts, the hammer brought once; None where it is not known. [currency].

        Mobilisation is that of the job in which it is the most.
        """
        bills = [option.bill for option in self.options if option is not None]
        if not self.serves_all or any(bill is None or bill.total is None for bill in bills):
            return None
        parts = [dict(bill.parts) for bill in bills if bill is not None]
        brought = max(part.pop(MOBILISATION) or 0.0 for part in parts)
        return brought + sum(amount or 0.0 for part in parts for amount in part.values())

    @property
    def days(self) -> float | None:
        """Of all contracts, one after the other; None where they are not known."""
        bills = [option.bill for option in self.options if option is not None]
        days = [None if bill is None else bill.days for bill in bills]
        if not self.serves_all or any(one is None for one in days):
            return None
        return sum(one for one in days if one is not None)

    @property
    def blow_energy(self) -> float | None:
        """Of one blow at the target of each job, together [J]."""
        if not self.serves_all:
            return None
        return sum(option.target.blow_energy for option in self.options if option is not None)

    @property
    def stress_use(self) -> float | None:
        """Highest use of a stress limit in any job [-]."""
        uses = [max(o.compression_use, o.tension_use) for o in self.options if o is not None]
        return max(uses) if self.serves_all else None


@dataclass(frozen=True, slots=True)
class Together:
    """Several jobs and the hammers that they have.

    Parameters
    ----------
    rankings : tuple of Ranking
        By job.
    measure : str
        What the hammers are ranked by: ``cost``, ``time`` (days) or ``energy`` (of a blow at each
        target, together).
    served : tuple of Served
        Those that serve all jobs first, best first; then by the number of jobs that they fail in.
    pair : tuple of Served or None
        Where none serves them all, the two that do between them at least measure of each job.
    """

    rankings: tuple[Ranking, ...]
    measure: str
    served: tuple[Served, ...]
    pair: tuple[Served, Served] | None = None

    @property
    def best(self) -> Served | None:
        """The best hammer that serves all jobs."""
        return self.served[0] if self.served and self.served[0].serves_all else None


def put_together(rankings: Sequence[Ranking]) -> Together:
    """Return which hammer serves all jobs best; hammers of one name are one hammer."""
    found = []
    for name in _names(rankings):
        by_job = tuple(_option(ranking, name) for ranking in rankings)
        found.append(Served(name, by_job))
    measure = _measure(rankings, found)
    served = sorted(found, key=lambda one: (len(one.fails), _worth(one, measure)))
    pair = None
    if served and not served[0].serves_all:
        pair = _pair(served, len(rankings))
    return Together(tuple(rankings), measure, tuple(served), pair)


def _names(rankings: Sequence[Ranking]) -> list[str]:
    names: dict[str, str] = {}
    for ranking in rankings:
        for option in (*ranking.options, *ranking.rejected):
            names.setdefault(option.hammer.name.casefold(), option.hammer.name)
    return list(names.values())


def _option(ranking: Ranking, name: str) -> Option | None:
    everyone = (*ranking.options, *ranking.rejected)
    plain = name.casefold()
    return next((o for o in everyone if o.hammer.name.casefold() == plain), None)


def _measure(rankings: Sequence[Ranking], served: Sequence[Served]) -> str:
    """Return what to rank by: the jobs' own objective where they agree and it can be told."""
    objectives = {ranking.job.search.objective for ranking in rankings}
    asked = objectives.pop() if len(objectives) == 1 else "energy"
    told = {
        "cost": any(one.total is not None for one in served),
        "time": any(one.days is not None for one in served),
        "energy": True,
    }
    return asked if told[asked] else "energy"


def _worth(one: Served, measure: str) -> float:
    value = {"cost": one.total, "time": one.days, "energy": one.blow_energy}[measure]
    return math.inf if value is None else value


def _pair(served: Sequence[Served], jobs: int) -> tuple[Served, Served] | None:
    """Return the two hammers that drive in every job between them, at least in all.

    What a job takes is what its own objective makes of it, over the least that any hammer takes
    there: so that jobs of different size count alike.
    """
    least = [min(_job_worth(one, job) for one in served) for job in range(jobs)]
    if any(math.isinf(worth) or worth <= 0 for worth in least):
        return None

    def taken(pair: tuple[Served, ...]) -> float:
        return sum(min(_job_worth(o, job) for o in pair) / least[job] for job in range(jobs))

    best = min(combinations(served, 2), key=taken, default=None)
    return None if best is None or math.isinf(taken(best)) else (best[0], best[1])


def _job_worth(one: Served, job: int) -> float:
    option = one.options[job]
    return math.inf if option is None or not option.drives else option.cost
