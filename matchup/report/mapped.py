"""A stroke map as text, table and document."""

from __future__ import annotations

import numpy as np

from matchup.report.document import (
    SCHEMA_VERSION,
    blows_per_25cm,
    cushion_document,
    limits_document,
    number,
)
from matchup.report.sentences import CAUTION, basis
from matchup.report.shown import Units, percent
from matchup.report.table import Column, Table, wrapped
from matchup.search.stroke_map import (
    OPEN_CELL,
    PULLED,
    RUNNING,
    SHORT,
    SQUEEZED,
    UNTRUSTED,
    StrokeMap,
)

SIGNS = {OPEN_CELL: "#", SHORT: ".", SQUEEZED: "c", PULLED: "t", RUNNING: "r", UNTRUSTED: "?"}


def map_text(found: StrokeMap, units: Units, width: int = 100) -> str:
    """Return the map for a terminal: a line for each cushion, thin to thick, strokes across."""
    open_cells = sum(state == OPEN_CELL for row in found.states for state in row)
    cells = sum(len(row) for row in found.states)
    answer = "no window is open" if not open_cells else f"{open_cells} of {cells} cells are open"
    head = f"{found.hammer.name} at stage {found.stage.name!r}: {answer}."
    labels = [_label(found, row, units) for row in range(len(found.stacks))]
    margin = max(len(label) for label in labels) + 2
    step = 3
    fitting = max(1, (width - margin) // step)
    shown = np.unique(
        np.rint(np.linspace(0, found.strokes.size - 1, min(fitting, found.strokes.size))).astype(
            int
        )
    )
    lines = [
        " " * margin + _ruler([units.value(float(found.strokes[i]), "stroke") or 0 for i in shown]),
    ]
    lines += [
        f"{label:<{margin}}" + "".join(f"{SIGNS[found.states[row][i]]:<{step}}" for i in shown)
        for row, label in enumerate(labels)
    ]
    legend = ", ".join(f"{sign} {state}" for state, sign in SIGNS.items() if _occurs(found, state))
    note = f"Across: stroke in {units.unit('stroke')}. {legend}."
    feet = [wrapped(line, width, "  ") for line in (note, *basis(found.job, units), CAUTION)]
    text = "\n".join(line.rstrip() for line in lines)
    return f"{wrapped(head, width)}\n\n{text}\n\n" + "\n".join(feet)


def _occurs(found: StrokeMap, state: str) -> bool:
    return any(state in row for row in found.states)


def _ruler(strokes: list[float]) -> str:
    """Return stroke labels over every second column, which are three characters wide."""
    return "".join(f"{stroke:<6.2f}" for stroke in strokes[::2])


def _label(found: StrokeMap, row: int, units: Units) -> str:
    stack = found.stacks[row]
    label = units.cushion(stack.pile)
    return f"{label}, {stack.hammer.text}" if stack.hammer else label


def map_table(found: StrokeMap, units: Units) -> Table:
    """Return every cell of the map as a row."""
    columns = (
        Column("cushion", "cushion"),
        Column(units.key("stroke", "stroke"), "stroke", 3),
        Column("state", "state"),
        Column(units.key("set", "set"), "set", 3),
        Column("compression_percent", "compression", 1),
        Column("tension_percent", "tension", 1),
    )
    rows = tuple(
        (
            _label(found, row, units),
            units.value(float(stroke), "stroke"),
            found.states[row][column],
            units.value(float(found.sets[row, column]), "set"),
            percent(float(found.compression_uses[row, column])),
            percent(float(found.tension_uses[row, column])),
        )
        for row in range(len(found.stacks))
        for column, stroke in enumerate(found.strokes)
    )
    return Table(columns, rows)


def map_document(found: StrokeMap) -> dict[str, object]:
    """Return the map as the JSON document."""
    cells = [
        {
            "cushion": cushion_document(stack.pile),
            "hammer_cushion": stack.hammer.text if stack.hammer else found.hammer.cushion_text,
            "stroke_m": float(stroke),
            "state": found.states[row][column],
            "set_mm": number(float(found.sets[row, column]), 1e3),
            "blows_per_25cm": _count(float(found.sets[row, column])),
            "compression_use": number(float(found.compression_uses[row, column])),
            "tension_use": number(float(found.tension_uses[row, column])),
        }
        for row, stack in enumerate(found.stacks)
        for column, stroke in enumerate(found.strokes)
    ]
    return {
        "schema_version": SCHEMA_VERSION,
        "title": found.job.title,
        "hammer": found.hammer.name,
        "stage": found.stage.name,
        "case": found.stage.case or None,
        "set_needed_mm": 1e3 * found.stage.set_needed,
        "limits": limits_document(found.job),
        "open": found.is_open,
        "cells": cells,
        "analyses": found.analyses,
    }


def _count(set_: float) -> float | None:
    return blows_per_25cm(set_) if set_ == set_ else None
