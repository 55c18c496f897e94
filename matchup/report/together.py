"""Several jobs as a page: the hammer that serves them all, and where the others fail."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial
from typing import Any

from matchup.report.bills import money
from matchup.report.document import SCHEMA_VERSION, number, ranking_document
from matchup.report.page import Block, Headline, Page, Prose
from matchup.report.sentences import CAUTION, on_stack, reason
from matchup.report.shown import Units, percent
from matchup.report.table import Column, Field, Table, tabled
from matchup.search.option import REDUCED, Option
from matchup.search.together import Served, Together

MISSING = "not in its catalogue"
FAILURES_TOLD = 8
"""Hammers whose failures are told; `rank` of one job tells them all."""


def together_page(found: Together, units: Units) -> Page:
    """Return the answer, the hammers by job, and where the best ones fail."""
    page: list[Block] = [
        Headline(_answer(found, units)),
        together_table(found, units),
        Prose(tuple(_jobs(found, units)), "The jobs:"),
    ]
    failing = [one for one in found.served if not one.serves_all]
    if failing:
        lines = tuple(_failure(one, found, units) for one in failing[:FAILURES_TOLD])
        page.append(Prose(lines, "Where hammers fail, nearest to serving all first:"))
    return [*page, Prose(tuple(_basis(found)))]


def _answer(found: Together, units: Units) -> str:
    count, jobs = len(found.served), len(found.rankings)
    serving = [one for one in found.served if one.serves_all]
    if found.best is None:
        text = f"none of {count} hammers serves all {jobs} jobs"
        if found.pair is None:
            return f"{jobs} jobs: {text}, and no two do."
        first, second = found.pair
        return f"{jobs} jobs: {text}; two do between them: {first.name} and {second.name}."
    return (
        f"{jobs} jobs: {len(serving)} of {count} hammers serve{'s' if len(serving) == 1 else ''} "
        f"them all; {_figure(found, units)}."
    )


def _figure(found: Together, units: Units) -> str:
    best = found.best
    assert best is not None
    if found.measure == "cost" and best.total is not None:
        days = "" if best.days is None else f" and {best.days:.1f} days"
        return f"least cost: {best.name}, {money(best.total)} {_currency(found)}{days} in all"
    if found.measure == "time" and best.days is not None:
        return f"least time: {best.name}, {best.days:.1f} days in all"
    assert best.blow_energy is not None
    energy = units.text(best.blow_energy / len(found.rankings), "energy")
    return f"least energy: {best.name}, {energy} a blow in the mean"


def _currency(found: Together) -> str:
    costs = [ranking.job.cost for ranking in found.rankings]
    return next(cost.currency for cost in costs if cost is not None)


def together_table(found: Together, units: Units) -> Table:
    """Return what every hammer does in every job, and what it takes in all."""
    fields: list[Field[Served]] = [(Column("hammer", "hammer", wrap=14), lambda one: one.name)]
    for place in range(len(found.rankings)):
        column = Column(
            f"job_{place + 1}",
            f"job {place + 1}",
            wrap=14,
            short={REDUCED: "drives*"},
            notes={REDUCED: "* at an earlier stage with less stroke than at the target"},
        )
        fields.append((column, partial(_verdict, place=place)))
    if any(one.total is not None for one in found.served):
        currency = _currency(found)
        fields.append((Column(f"total_{currency}", f"{currency}\nin all", 0), lambda o: o.total))
    if any(one.days is not None for one in found.served):
        fields.append((Column("days", "days", 1), lambda one: one.days))
    unit = units.unit("energy")
    fields += [
        (
            Column(units.key("mean_blow_energy", "energy"), f"{unit} a blow\nin the mean", 1),
            lambda one: _mean_energy(one, units),
        ),
        (
            Column("largest_stress_percent", "stress\n% limit", 0),
            lambda one: percent(one.stress_use),
        ),
    ]
    return tabled(found.served, fields)


def _mean_energy(one: Served, units: Units) -> float | None:
    return (
        None
        if one.blow_energy is None
        else units.value(one.blow_energy / len(one.options), "energy")
    )


def _verdict(one: Served, place: int) -> str:
    option = one.options[place]
    return MISSING if option is None else option.verdict


def _jobs(found: Together, units: Units) -> list[str]:
    """Return the jobs by number, each with how the best hammer drives it, or its own best one."""
    lines = []
    for place, ranking in enumerate(found.rankings):
        title = f"{place + 1}: {ranking.job.title}"
        option = found.best.options[place] if found.best else None
        if option is None:
            option = ranking.options[0] if ranking.options else None
        if option is None:
            lines.append(f"{title}; no hammer can.")
            continue
        stroke = units.text(option.target.stroke, "stroke")
        lines.append(f"{title}; {option.hammer.name} at {stroke}{on_stack(option.stack, units)}.")
    return lines


def _failure(one: Served, found: Together, units: Units) -> str:
    told = [
        f"job {place + 1}: {_why(one.options[place], found, place, units)}." for place in one.fails
    ]
    return f"{one.name}, {' And '.join(told)}"


def _why(option: Option | None, found: Together, place: int, units: Units) -> str:
    if option is None:
        return MISSING
    return f"{option.verdict}; {reason(option, found.rankings[place].job, units)}"


def _basis(found: Together) -> list[str]:
    lines = []
    if any(one.total is not None for one in found.served):
        lines.append(
            "In all: the contracts one after the other, rig and hammer brought once, at the "
            "mobilisation of the job in which it is the most."
        )
    lines += _differing(found)
    lines.append("`matchup rank` of one job tells its limits, defaults, notices and the rest.")
    return [*lines, CAUTION]


def _differing(found: Together) -> list[str]:
    """Return hammers of one name that are not the same in all catalogues."""
    differing = []
    for one in found.served:
        rows = {
            str(hammer)
            for ranking in found.rankings
            for hammer in ranking.job.hammers
            if hammer.name.casefold() == one.name.casefold()
        }
        if len(rows) > 1:
            differing.append(one.name)
    if not differing:
        return []
    return [f"Notice: not the same in every job's catalogue or helmet: {', '.join(differing)}."]


def together_document(found: Together, units: Units) -> dict[str, Any]:
    """Return the JSON document: the summary, and the document of every job."""
    return {
        "schema_version": SCHEMA_VERSION,
        "measure": found.measure,
        "best": found.best.name if found.best else None,
        "pair": [one.name for one in found.pair] if found.pair else None,
        "hammers": [_served_document(one, found.rankings, units) for one in found.served],
        "jobs": [ranking_document(ranking, units) for ranking in found.rankings],
    }


def _served_document(one: Served, rankings: Sequence[Any], units: Units) -> dict[str, Any]:
    return {
        "hammer": one.name,
        "serves_all": one.serves_all,
        "fails_in": [rankings[place].job.title for place in one.fails],
        "verdicts": [_verdict(one, place) for place in range(len(one.options))],
        "total": number(one.total),
        "days": number(one.days),
        "blow_energy_kJ": [
            None if o is None else number(o.target.blow_energy, 1e-3) for o in one.options
        ],
        "stress_use": number(one.stress_use),
    }
