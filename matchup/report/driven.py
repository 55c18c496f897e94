"""The whole drive of one hammer, case by case and station by station."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial
from typing import Any

from matchup.model.job import Job
from matchup.report.bills import bill_document, bills_blocks
from matchup.report.document import (
    SCHEMA_VERSION,
    blows_per_25cm,
    check_document,
    number,
)
from matchup.report.options import blow_count, measured, stress_shares
from matchup.report.page import Block, Headline, Page, Prose
from matchup.report.ranked import foot
from matchup.report.sentences import on_stack, reason
from matchup.report.shown import Units, percent
from matchup.report.table import Column, Field, Table, tabled
from matchup.search.criterion import Criterion
from matchup.search.option import GOES_DOWN, CaseDrive, Option, Ranking, StagePlan

GOING_DOWN = "goes down"


def drive_page(ranking: Ranking, units: Units, case: str | None = None) -> Page:
    """Return the drive: the answer, the cases, the stations of one of them.

    Parameters
    ----------
    case : str or None
        Whose stations are told; None takes the required one with the most blows, or that fails.
    """
    job = ranking.job
    option = (*ranking.options, *ranking.rejected)[0]
    page: list[Block] = [Headline(answer(option, job, units))]
    if option.misfits:
        return [*page, foot(ranking, units)]
    chosen = chosen_case(option, case)
    page += [
        cases_table(option, units),
        Headline(f"Case {chosen.case}, station by station:"),
        stations_table((chosen,), units),
    ]
    others = [drive.case for drive in option.cases if drive is not chosen]
    if others and case is None:
        page.append(Prose((f"Other cases: {', '.join(others)}.",)))
    page += bills_blocks((option,), job, units)
    return [*page, foot(ranking, units)]


def answer(option: Option, job: Job, units: Units) -> str:
    """Return whether the hammer reaches the target, and at what cost, or what stops it."""
    name, on = option.hammer.name, on_stack(option.stack, units)
    slowest = option.slowest
    if not option.drives or slowest is None:
        return f"No: {name} {option.verdict}; {reason(option, job, units)}."
    taken = slowest.taken
    time = "" if taken.seconds is None else f" and {taken.seconds / 60:.0f} min of driving"
    depth = units.text(option.target.stage.penetration, "length")
    cushions = f"; {taken.cushions} pile cushions" if taken.cushions > 1 else ""
    return (
        f"Yes: {name}{on} reaches {depth} in every required case; at most {taken.blows:.0f} blows"
        f"{time} (case {slowest.case}){cushions}."
    )


def chosen_case(option: Option, case: str | None) -> CaseDrive:
    """Return the case called so, else the one that fails or takes the most blows."""
    for drive in option.cases:
        if drive.case == case:
            return drive
    failing = [drive for drive in option.cases if drive.required and drive.failing]
    if failing:
        return failing[0]
    return option.slowest or option.cases[0]


def cases_table(option: Option, units: Units) -> Table:
    """Return what the drive comes to in every ground case."""
    length = units.unit("length")
    fields: list[Field[CaseDrive]] = [
        (Column("case", "case", wrap=12), lambda c: c.case),
        (Column("answer", "answer", wrap=20), _case_answer),
        (
            Column(units.key("settled", "length"), f"goes down\nto {length}", 1),
            lambda c: units.value(c.settled, "length"),
        ),
        (Column("blows", "blows", 0), lambda c: c.taken.blows),
        (Column("minutes", "min", 0), lambda c: minutes(c.taken.seconds)),
        (Column("cushions", "cush-\nions", 0, keep=2), lambda c: c.taken.cushions),
        (
            Column(f"hardest_{blow_count(units).key}", f"most blows\n/{units.counted}", 0),
            lambda c: None if c.hardest is None else units.blow_count(c.hardest.set),
        ),
        (
            Column(units.key("hardest_at", "length"), f"at\n{length}", 1),
            lambda c: _depth(c.hardest, units),
        ),
        (
            Column("largest_stress_percent", "stress\n% limit", 0),
            lambda c: None if c.tightest is None else percent(c.tightest.stress_use),
        ),
        (Column("stress", "in", keep=3), lambda c: _which(c.tightest)),
        (
            Column(units.key("stress_at", "length"), f"at\n{length}", 1, keep=3),
            lambda c: _depth(c.tightest, units),
        ),
    ]
    return tabled(option.cases, fields)


def _case_answer(drive: CaseDrive) -> str:
    told = "reaches the target" if drive.failing is None else drive.failing.verdict
    return told if drive.required else f"{told} (not required)"


def _depth(plan: StagePlan | None, units: Units) -> float | None:
    return None if plan is None else units.value(plan.stage.penetration, "length")


def _which(plan: StagePlan | None) -> str | None:
    if plan is None:
        return None
    return "compression" if plan.compression_use >= plan.tension_use else "tension"


def minutes(seconds: float | None) -> float | None:
    """Return seconds as minutes; None where they are not known."""
    return None if seconds is None else seconds / 60


def stations_table(cases: tuple[CaseDrive, ...], units: Units) -> Table:
    """Return every station of cases: resistance, stroke, what it does, what it took so far."""
    rows = [(drive, plan) for drive in cases for plan in drive.plans]
    fields: list[Field[tuple[CaseDrive, StagePlan]]] = []
    if len(cases) > 1:
        fields.append((Column("case", "case", once=True), lambda row: row[0].case))
    fields += [
        measured("penetration", "depth", "length", units, lambda row: row[1].stage.penetration),
        (Column("rest_h", "rest\nh", 0, keep=2), lambda row: _rest(row[1])),
        measured("shaft", "shaft", "force", units, lambda row: row[1].stage.shaft),
        measured("toe", "toe", "force", units, lambda row: row[1].stage.toe),
        *_modes(rows, units),
        measured("stroke", "stroke", "stroke", units, lambda row: row[1].stroke),
        measured("set", "set", "set", units, lambda row: row[1].set),
        (blow_count(units), lambda row: _count(row[1], units)),
        *stress_shares(_plan_of),
        measured("transferred", "to pile", "energy", units, _passed, keep=3),
        (Column("blows_per_minute", "blows\n/min", 0, keep=4), lambda row: _rate(row[1])),
        (Column("wear", "cushion", keep=1), lambda row: _cushion(row[1])),
        (Column("blows", "blows\nso far", 0), lambda row: _blows_taken(row[1])),
        (Column("minutes", "min", 0), lambda row: _minutes_taken(row[1])),
    ]
    if not any(plan.stage.after_pause for _, plan in rows):
        fields = [field for field in fields if field[0].key != "rest_h"]
    return tabled(rows, fields)


def _modes(
    rows: Sequence[tuple[CaseDrive, StagePlan]], units: Units
) -> list[Field[tuple[CaseDrive, StagePlan]]]:
    """Return the whole resistance of every mode of an open section."""
    first = rows[0][1].stage.modes if rows else ()
    return [
        measured(
            f"all_{mode.name.replace(' ', '_')}",
            mode.name.replace(" ", "\n"),
            "force",
            units,
            partial(_whole_resistance, number=number),
            keep=5,
        )
        for number, mode in enumerate(first)
    ]


def _whole_resistance(row: tuple[CaseDrive, StagePlan], number: int) -> float:
    return row[1].stage.modes[number].resistance


def _plan_of(row: tuple[CaseDrive, StagePlan]) -> StagePlan:
    return row[1]


def _rest(plan: StagePlan) -> float | None:
    return plan.stage.after_pause / 3600 if plan.stage.after_pause else None


def _count(plan: StagePlan, units: Units) -> float | None:
    return None if plan.verdict == GOES_DOWN else units.blow_count(plan.set)


def _passed(row: tuple[CaseDrive, StagePlan]) -> float | None:
    return None if row[1].verdict == GOES_DOWN else row[1].transferred


def _rate(plan: StagePlan) -> float | None:
    return None if plan.blow_rate is None else 60 * plan.blow_rate


def _cushion(plan: StagePlan) -> str | None:
    if plan.verdict == GOES_DOWN:
        return GOING_DOWN
    return plan.wear or None


def _blows_taken(plan: StagePlan) -> float | None:
    """Return the blows so far; None at a station that was looked at and not driven to."""
    return None if plan.taken is None else plan.taken.blows


def _minutes_taken(plan: StagePlan) -> float | None:
    return None if plan.taken is None else minutes(plan.taken.seconds)


def criterion_page(found: Criterion, job: Job, units: Units) -> Page:
    """Return what sets mean at the target, and which one proves the resistance asked for."""
    strokes = [units.text(float(stroke), "stroke") for stroke in found.strokes]
    force, length = units.unit("force"), units.unit("set")
    columns = [
        Column(units.key("driving", "force"), f"while\ndriving\n{force}", 0),
        Column(units.key("later", "force"), f"long\nafter\n{force}", 0),
        *(
            Column(
                f"set_{length}_at_{stroke.replace(' ', '_')}",
                f"set, {length}\nat {stroke}",
                units.digits("set"),
            )
            for stroke in strokes
        ),
    ]
    rows = [
        (
            units.value(float(found.driving[i]), "force"),
            units.value(float(found.later[i]), "force"),
            *(units.value(float(value), "set") for value in found.sets[i]),
        )
        for i in range(found.driving.size)
    ]
    head = (
        f"What a set means at {units.text(found.stage.penetration, 'length')}, resistance "
        f"distributed as in case {found.stage.case}; a smaller set proves more:"
    )
    lines = [_proof(found, job, units)] if found.needed is not None else []
    lines.append(
        f"Long after driving: shaft times {found.stage.setup:.2f} for set-up, toe unchanged. Of "
        "the wear states the one with the smaller set counts. To be confirmed by dynamic testing."
    )
    return [Headline(head), Table(tuple(columns), tuple(rows)), Prose(tuple(lines))]


def _proof(found: Criterion, job: Job, units: Units) -> str:
    """Return which sets prove the resistance asked for."""
    assert found.needed is not None
    assert found.proving is not None
    drive = job.drive
    why = "" if drive is None else f" ({drive.capacity_text})"
    needed = f"To prove {units.text(found.needed, 'force')} long after driving{why}"
    proving = [
        f"{units.text(float(set_), 'set')} ({units.blow_count(float(set_)):.0f} blows/"
        f"{units.counted}) at {units.text(float(stroke), 'stroke')}"
        for stroke, set_ in zip(found.strokes, found.proving, strict=True)
        if set_ == set_
    ]
    if not proving:
        return f"{needed}, the pile would have to be driven harder than these strokes can."
    return f"{needed}, drive until the set is at most {', or '.join(proving)}."


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


def drive_document(ranking: Ranking, units: Units) -> dict[str, Any]:
    """Return the whole drive as the JSON document."""
    option = (*ranking.options, *ranking.rejected)[0]
    checked = check_document(ranking, units)
    checked.pop("schedule")
    return {
        "schema_version": SCHEMA_VERSION,
        **checked,
        "cases": [_case_document(drive, ranking.job) for drive in option.cases],
        "stations": [_station_document(plan) for drive in option.cases for plan in drive.plans],
    }


def _case_document(drive: CaseDrive, job: Job) -> dict[str, Any]:
    taken = drive.taken
    return {
        "case": drive.case,
        "required": drive.required,
        "reaches": drive.failing is None,
        "stopped_by": None if drive.failing is None else drive.failing.verdict,
        "stopped_at_m": None if drive.failing is None else drive.failing.stage.penetration,
        "goes_down_to_m": number(drive.settled),
        "blows": number(taken.blows),
        "minutes": number(taken.seconds, 1 / 60),
        "blow_energy_MJ": number(taken.energy, 1e-6),
        "pile_cushions": taken.cushions,
        "cost": bill_document(drive.bill, job.cost),
    }


def _station_document(plan: StagePlan) -> dict[str, Any]:
    stage = plan.stage
    moves = plan.verdict == GOES_DOWN
    taken = plan.taken
    return {
        "case": stage.case,
        "penetration_m": stage.penetration,
        "rest_h": stage.after_pause / 3600,
        "verdict": plan.verdict,
        "shaft_kN": stage.shaft / 1e3,
        "toe_kN": stage.toe / 1e3,
        "modes": [
            {"mode": m.name, "shaft_kN": m.shaft / 1e3, "toe_kN": m.toe / 1e3} for m in stage.modes
        ],
        "stroke_m": number(plan.stroke),
        "set_needed_mm": 1e3 * stage.set_needed,
        "set_mm": number(plan.set, 1e3),
        "blows_per_25cm": None if moves else blows_per_25cm(plan.set),
        "compression_MPa": number(plan.compression, 1e-6),
        "tension_MPa": number(plan.tension, 1e-6),
        "compression_use": number(plan.compression_use),
        "tension_use": number(plan.tension_use),
        "transferred_energy_kJ": number(plan.transferred, 1e-3),
        "blow_rate_per_min": number(plan.blow_rate, 60),
        "cushion_wear": plan.wear or None,
        "blows": None if taken is None else number(taken.blows),
        "minutes": None if taken is None else number(taken.seconds, 1 / 60),
    }
