"""Fatigue from driving as a table, with what it rests on."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from matchup.model.fatigue import Fatigue
from matchup.report.options import measured
from matchup.report.page import Block, Headline, Prose
from matchup.report.shown import Units
from matchup.report.table import Column, Field, Table, tabled
from matchup.search.fatigue import Damage


def damage_blocks(found: Sequence[Damage], fatigue: Fatigue | None, units: Units) -> list[Block]:
    """Return the damage of driving at every detail; nothing where it was not asked for."""
    if fatigue is None or not found:
        return []
    worst = max(found, key=lambda one: one.damage)
    compared = "within" if worst.damage <= fatigue.allowed else "more than"
    headline = (
        f"Fatigue from driving: at most {worst.damage:.2g} of the damage at which a detail fails, "
        f"{compared} the {fatigue.allowed:g} allowed ({worst.detail.name}, case {worst.case})."
    )
    lines = (
        f"Strength: {fatigue.text}. Ranges counted by rainflow (ASTM E1049) in every blow of the "
        "drive, summed after Palmgren and Miner; axial stress times the concentration given, no "
        "bending of eccentric blows.",
    )
    return [Headline(headline), damage_table(found, units), Prose(lines)]


def damage_table(found: Sequence[Damage], units: Units) -> Table:
    """Return ranges, cycles and damage by detail and case."""
    fields: list[Field[Damage]] = [
        (Column("detail", "detail", wrap=24, once=True), lambda one: one.detail.name),
        measured("at", "from\nhead", "length", units, lambda one: one.detail.at),
        measured(
            "category", "at 2e6\ncycles", "stress", units, lambda one: one.detail.curve.category
        ),
        (Column("concentration", "concen-\ntration", 2), lambda one: one.detail.concentration),
        (Column("case", "case"), lambda one: one.case),
        measured("largest_range", "largest\nrange", "stress", units, lambda one: one.largest),
        measured("largest_at", "at a depth\nof", "length", units, lambda one: one.largest_at),
        (Column("cycles", "cycles", 0), lambda one: one.cycles),
        (Column("damage", "damage", 4), lambda one: one.damage),
    ]
    return tabled(found, fields)


def damage_document(found: Sequence[Damage], fatigue: Fatigue | None) -> dict[str, Any] | None:
    """Return the damage for the JSON document."""
    if fatigue is None or not found:
        return None
    return {
        "allowed": fatigue.allowed,
        "strength": fatigue.text,
        "details": [
            {
                "detail": one.detail.name,
                "at_m": one.detail.at,
                "category_MPa": one.detail.curve.category / 1e6,
                "concentration": one.detail.concentration,
                "case": one.case,
                "largest_range_MPa": one.largest / 1e6,
                "largest_at_m": one.largest_at,
                "cycles": one.cycles,
                "damage": one.damage,
            }
            for one in found
        ],
    }
