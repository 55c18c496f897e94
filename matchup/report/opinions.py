"""The second opinion of dynamic formulas as a table; it decides nothing."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial

from matchup.analysis.formulas import FORMULAS
from matchup.report.options import blow_count, measured
from matchup.report.page import Headline, Page, Prose
from matchup.report.shown import Units
from matchup.report.table import Column, Field, tabled
from matchup.search.opinion import Opinion

DECIDES_NOTHING = (
    "Dynamic formulas see energy and set alone; they scatter widely, decide nothing here, and are "
    "to be read beside the resistance that was put in."
)


def opinions_page(opinions: Sequence[Opinion], units: Units) -> Page:
    """Return the table of formulas, with their sources and the warning."""
    fields: list[Field[Opinion]] = [
        (Column("hammer", "hammer", wrap=14), lambda o: o.hammer),
        measured("set", "set", "set", units, lambda o: o.set),
        (blow_count(units), lambda o: units.blow_count(o.set)),
        measured("blow_energy", "energy", "energy", units, lambda o: o.energy),
        measured("resistance", "put in", "force", units, lambda o: o.stage.resistance),
        *formula_fields(units),
    ]
    sources: dict[str, list[str]] = {}
    for formula in FORMULAS:
        sources.setdefault(formula.source, []).append(f"{formula.name} {formula.text}")
    told = "; ".join(f"{', '.join(texts)} ({source})" for source, texts in sources.items())
    return [
        Headline("Second opinion, dynamic formulas: resistance at the target from energy and set"),
        tabled(opinions, fields),
        Prose((DECIDES_NOTHING, f"Formulas: {told}.")),
    ]


def formula_fields(units: Units) -> list[Field[Opinion]]:
    """Return a column of resistances for each formula."""
    return [
        measured(
            formula.name.replace(" ", "_"),
            formula.name.replace(" ", "\n"),
            "force",
            units,
            partial(_resistance, name=formula.name),
        )
        for formula in FORMULAS
    ]


def _resistance(opinion: Opinion, name: str) -> float | None:
    return opinion.resistances[name]


def opinion_document(opinion: Opinion) -> dict[str, float | None]:
    """Return the resistances by formula for the JSON document."""
    return {
        f"{name.replace(' ', '_')}_kN": None if value is None else value / 1e3
        for name, value in opinion.resistances.items()
    }
