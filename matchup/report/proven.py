"""The termination criterion as page and document."""

from __future__ import annotations

from typing import Any

import numpy as np

from matchup.model.job import Job
from matchup.report.document import number
from matchup.report.page import Headline, Page, Prose
from matchup.report.shown import Units
from matchup.report.table import Column, Starred, Table
from matchup.search.criterion import Criterion


def criterion_page(found: Criterion, job: Job, units: Units) -> Page:
    """Return what sets mean at the target, and which one proves the resistance asked for."""
    strokes = [units.setting(job.hammers[0], float(stroke)) for stroke in found.strokes]
    force, length = units.unit("force"), units.unit("set")
    columns = [
        Column(units.key("driving", "force"), f"while\ndriving\n{force}", 0),
        Column(units.key("later", "force"), f"long\nafter\n{force}", 0),
        *(
            Column(
                f"set_{length}_at_{stroke.replace(' ', '_')}",
                f"set, {length}\nat {stroke}",
                units.digits("set"),
                keep=_keep(found, place),
            )
            for place, stroke in enumerate(strokes)
        ),
    ]
    rows = [
        (
            units.value(float(found.driving[i]), "force"),
            units.value(float(found.later[i]), "force"),
            *(_meaning(found, i, column, units) for column in range(found.strokes.size)),
        )
        for i in range(found.driving.size)
    ]
    head = (
        f"What a set means at {units.depth(found.stage.penetration)}, planned stroke "
        f"{units.text(found.planned, 'stroke')}, resistance "
        f"distributed as in case {found.stage.case}; a smaller set proves more:"
    )
    lines = ["* breaks a stress limit."] if np.any(found.stress_uses > 1) else []
    if found.needed is not None:
        lines.append(_proof(found, job, units))
    setup = found.stage.setup
    lines.append(
        f"Long after driving: shaft times {setup:.2f} for set-up, toe unchanged."
        if setup > 1
        else "Long after driving: no set-up is known or counted on."
    )
    if job.cushions is not None and len(job.cushions.wears) > 1:
        lines[-1] += " Of the wear states the one with the smaller set counts."
    lines[-1] += " To be confirmed by dynamic testing."
    return [Headline(head), Table(tuple(columns), tuple(rows)), Prose(tuple(lines))]


def _keep(found: Criterion, place: int) -> int:
    """Return how dear a stroke's column is: the nearer to the planned one, the dearer."""
    planned = int(np.argmin(np.abs(found.strokes - found.planned)))
    return max(1, 8 - abs(place - planned))


def _meaning(found: Criterion, row: int, column: int, units: Units) -> float | None:
    """Return a set of the table, starred where its stroke breaks a stress limit."""
    value = units.value(float(found.sets[row, column]), "set")
    broken = found.stress_uses[row, column] > 1
    return Starred(value) if value is not None and broken else value


def _proof(found: Criterion, job: Job, units: Units) -> str:
    """Return which sets prove the resistance asked for."""
    assert found.needed is not None
    assert found.proving is not None
    drive = job.drive
    why = "" if drive is None else f" ({drive.capacity_text})"
    needed = f"To prove {units.text(found.needed, 'force')} long after driving{why}"
    proving = [
        f"{units.text(float(set_), 'set')} ({units.blow_count(float(set_)):.0f} blows/"
        f"{units.counted}) at {units.setting(job.hammers[0], float(stroke))}"
        for stroke, set_ in zip(found.strokes, found.proving, strict=True)
        if set_ == set_
    ]
    if not proving:
        return f"{needed}, none of these strokes serves: {_unfit(found, units)}."
    some = len(proving) < found.strokes.size
    others = f" Of the other strokes {_unfit(found, units)}." if some else ""
    return f"{needed}, drive until the set is at most {', or '.join(proving)}.{others}"


def _unfit(found: Criterion, units: Units) -> str:
    """Return why strokes prove nothing."""
    least = units.text(found.least, "set")
    return f"each breaks a stress limit at that resistance or gives less than {least} a blow"


def criterion_document(found: Criterion) -> dict[str, Any]:
    """Return the termination criterion for the JSON document."""
    return {
        "penetration_m": found.stage.penetration,
        "case": found.stage.case or None,
        "setup_factor": found.stage.setup,
        "planned_stroke_m": found.planned,
        "strokes_m": found.strokes.tolist(),
        "resistance_driving_kN": (found.driving / 1e3).tolist(),
        "resistance_later_kN": (found.later / 1e3).tolist(),
        "sets_mm": [[number(float(s), 1e3) for s in row] for row in found.sets],
        "needed_later_kN": number(found.needed, 1e-3),
        "proving_sets_mm": (
            None if found.proving is None else [number(float(s), 1e3) for s in found.proving]
        ),
    }
