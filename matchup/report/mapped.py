"""A stroke map as page, table and document."""

from __future__ import annotations

import html
from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from matchup.model.cushion import Stack
from matchup.report.closing import closing
from matchup.report.document import (
    SCHEMA_VERSION,
    blows_per_25cm,
    cushion_document,
    energy_set,
    limits_document,
    number,
)
from matchup.report.page import Headline, Page, Prose
from matchup.report.sentences import where
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
WIDEST_STEP = 3
"""Characters from one stroke to the next, where there is room."""
LABEL_WIDTH = 6
CLOSING_STAGES = 4
"""Of more stages that close cells, those that close the fewest are not told."""
WIDTH_IN_NOTEBOOK = 100


def map_page(found: StrokeMap, units: Units) -> Page:
    """Return the map: the answer, the grid, what it rests on."""
    head = f"{map_place(found, units)}: {map_answer(found, units)}."
    closed = [Prose(_closing_stages(found, units))] if found.everywhere else []
    return [Headline(head), _Grid(found, units), *closed, *closing(found.job, units)]


def _closing_stages(found: StrokeMap, units: Units) -> tuple[str, ...]:
    """Return which stages close how many cells, the most first, and what a map can't tell."""
    job = found.job
    stages = {stage.name: stage for stage in job.stages}
    counts = Counter(
        (name, state)
        for names, states in zip(found.closed_at, found.states, strict=True)
        for name, state in zip(names, states, strict=True)
        if name
    )
    told = [
        f"{count} {where(stages[name], job, units)} ({state})"
        for (name, state), count in counts.most_common(CLOSING_STAGES)
    ]
    if not told:
        return ()
    cells = found.strokes.size * len(found.stacks)
    lines = [
        f"Closed, of {cells} cells, each told once and the targets first: {', '.join(told)}"
        + (" and others" if len(counts) > CLOSING_STAGES else "")
        + "."
    ]
    targets = {job.stages[course.target].name for course in job.courses}
    if job.drive is not None and not found.is_open and any(n not in targets for n, _ in counts):
        lines.append("With a stroke of its own for every station it may work: see `matchup drive`.")
    return tuple(lines)


def map_place(found: StrokeMap, units: Units) -> str:
    """Return which hammer the map is of, and where."""
    at = where(found.stage, found.job, units)
    if found.everywhere:
        at = "at every stage" if found.job.drive is None else "with one stroke for all stations"
    return f"{found.hammer.name} {at}"


def map_answer(found: StrokeMap, units: Units) -> str:
    """Return on how many cushions it works, and between which strokes."""
    if not found.is_open:
        word = "setting" if found.hammer.set_by_energy else "stroke"
        return f"no {word} works" + (" on any cushion" if len(found.stacks) > 1 else "")
    working = [row for row in found.states if OPEN_CELL in row]
    strokes = [
        float(found.strokes[i]) for row in working for i, s in enumerate(row) if s == OPEN_CELL
    ]
    low, high = (units.setting(found.hammer, s) for s in (min(strokes), max(strokes)))
    word = "settings" if found.hammer.set_by_energy else "strokes"
    between = f"at {low}" if low == high else f"at {word} of {low} to {high}"
    if len(found.stacks) == 1:
        return f"it works {between}"
    return f"it works on {len(working)} of {len(found.stacks)} cushions, {between}"


@dataclass(frozen=True, slots=True)
class _Grid:
    """The map itself: a line for each cushion, thin to thick, strokes across."""

    found: StrokeMap
    units: Units

    def to_text(self, width: int) -> str:
        """Return the grid, its columns as wide as fits, and what the signs mean."""
        found = self.found
        labels = [_label(stack, self.units) for stack in found.stacks]
        margin = max(map(len, labels)) + 2
        room = max(1, width - margin)
        step = max(1, min(WIDEST_STEP, room // found.strokes.size))
        shown = _columns(found, room // step)
        lines = [" " * margin + self._ruler(shown, step, room)]
        lines += [
            f"{label:<{margin}}" + "".join(f"{SIGNS[row[i]]:<{step}}" for i in shown)
            for label, row in zip(labels, found.states, strict=True)
        ]
        text = "\n".join(line.rstrip() for line in lines)
        return f"{text}\n\n{wrapped(self._legend(len(shown)), width, '  ')}"

    def to_html(self) -> str:
        """Return the grid as it stands on a terminal."""
        return f"<pre>{html.escape(self.to_text(WIDTH_IN_NOTEBOOK))}</pre>"

    def _ruler(self, shown: Sequence[int], step: int, room: int) -> str:
        """Return stroke labels over every so many columns that they stand apart."""
        every = -(-LABEL_WIDTH // step)
        labels = [self._at(float(self.found.strokes[i])) for i in shown[::every]]
        ruler = "".join(f"{label:<{every * step}}" for label in labels).rstrip()
        return ruler if len(ruler) <= room else ruler[: -len(labels[-1])]

    def _at(self, stroke: float) -> str:
        """Return a stroke as a label, or the energy that is set for it."""
        hammer = self.found.hammer
        if hammer.set_by_energy:
            return f"{self.units.value(hammer.blow_energy(stroke), 'energy'):.0f}"
        return f"{self.units.value(stroke, 'stroke'):.2f}"

    def _legend(self, shown: int) -> str:
        seen = {state for row in self.found.states for state in row}
        signs = ", ".join(f"{sign} {state}" for state, sign in SIGNS.items() if state in seen)
        strokes = self.found.strokes.size
        some = "" if shown == strokes else f", {shown} of {strokes} for want of width"
        across = f"stroke in {self.units.unit('stroke')}"
        if self.found.hammer.set_by_energy:
            across = f"energy set in {self.units.unit('energy')}"
        return f"Across: {across}{some}. {signs}."


def _columns(found: StrokeMap, room: int) -> list[int]:
    """Return the columns to show: all, or those where windows open and others evenly between."""
    count = found.strokes.size
    if count <= room:
        return list(range(count))
    opening = sorted({row.index(OPEN_CELL) for row in found.states if OPEN_CELL in row})[:room]
    others = [i for i in range(count) if i not in opening]
    spread = np.linspace(0, len(others) - 1, room - len(opening)).round().astype(int)
    return sorted({*opening, *(others[int(i)] for i in spread)})


def _label(stack: Stack, units: Units) -> str:
    label = units.cushion(stack.pile)
    return f"{label}, {units.retold(stack.hammer.text)}" if stack.hammer else label


def map_table(found: StrokeMap, units: Units) -> Table:
    """Return every cell of the map as a row."""
    columns = (
        Column("cushion", "cushion"),
        Column(units.key("stroke", "stroke"), f"stroke\n{units.unit('stroke')}", 3),
        Column("state", "state"),
        Column("closed_at", "closed at"),
        Column(units.key("set", "set"), f"set\n{units.unit('set')}", 3),
        Column("compression_percent", "compression\n% limit", 1),
        Column("tension_percent", "tension\n% limit", 1),
    )
    rows = tuple(
        (
            _label(stack, units),
            units.value(float(stroke), "stroke"),
            found.states[row][column],
            found.closed_at[row][column] or None,
            units.value(float(found.sets[row, column]), "set"),
            percent(float(found.compression_uses[row, column])),
            percent(float(found.tension_uses[row, column])),
        )
        for row, stack in enumerate(found.stacks)
        for column, stroke in enumerate(found.strokes)
    )
    return Table(columns, rows)


def map_document(found: StrokeMap) -> dict[str, Any]:
    """Return the map as the JSON document."""
    cells = [
        {
            "cushion": cushion_document(stack.pile),
            "hammer_cushion": stack.hammer.text if stack.hammer else found.hammer.cushion_text,
            "stroke_m": float(stroke),
            "energy_set_kJ": energy_set(found.hammer, float(stroke)),
            "state": found.states[row][column],
            "closed_at": found.closed_at[row][column] or None,
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
        "every_stage": found.everywhere,
        "set_needed_mm": 1e3 * found.stage.set_needed,
        "limits": limits_document(found.job),
        "open": found.is_open,
        "cells": cells,
        "analyses": found.analyses,
    }


def _count(set_: float) -> float | None:
    return blows_per_25cm(set_) if set_ == set_ else None
