"""The whole drive of one hammer, case by case and station by station."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial
from itertools import pairwise
from math import inf
from typing import Any

from matchup.model.job import Job
from matchup.report.bills import bill_document, bills_blocks
from matchup.report.damaged import damage_blocks
from matchup.report.document import (
    SCHEMA_VERSION,
    blows_per_25cm,
    check_document,
    number,
    peak,
)
from matchup.report.doubted import doubt_blocks, minutes
from matchup.report.options import blow_count, measured, setting_columns, stress_shares
from matchup.report.page import Block, Headline, Page, Prose
from matchup.report.proven import criterion_page
from matchup.report.ranked import foot
from matchup.report.sentences import on_stack, reason
from matchup.report.shown import Units, percent
from matchup.report.table import Column, Field, Table, tabled
from matchup.search.criterion import Criterion
from matchup.search.fatigue import Damage
from matchup.search.option import (
    DRIVES,
    GOES_DOWN,
    CaseDrive,
    Option,
    Ranking,
    StagePlan,
    Taken,
)

VERDICTS_SHORT = {DRIVES: "", GOES_DOWN: "down"}
"""For people a station that is driven needs no word."""


def drive_page(
    ranking: Ranking,
    units: Units,
    case: str | None = None,
    criterion: Criterion | None = None,
    damage: Sequence[Damage] = (),
) -> Page:
    """Return the drive: the answer, the cases, the stations of one of them.

    Parameters
    ----------
    case : str or None
        Whose stations are told; None takes the required one with the most blows, or that fails.
    criterion : Criterion or None
        Told below, where there is one.
    damage : sequence of Damage
        By fatigue, told below.
    """
    job = ranking.job
    option = (*ranking.options, *ranking.rejected)[0]
    page: list[Block] = [Headline(answer(option, job, units))]
    if option.misfits:
        return [*page, *foot(ranking, units)]
    chosen = chosen_case(option, case)
    page.append(cases_table(option, units))
    if chosen.plans:
        page += [
            Headline(f"Case {chosen.case}, station by station:"),
            stations_table((chosen,), units),
        ]
    if lines := _remarks(chosen, option, units, case is None):
        page.append(Prose(tuple(lines)))
    if criterion is not None:
        page += criterion_page(criterion, job, units)
    page += damage_blocks(damage, job.fatigue, units)
    page += bills_blocks((option,), job)
    page += doubt_blocks(ranking, units)
    return [*page, *foot(ranking, units)]


def _remarks(chosen: CaseDrive, option: Option, units: Units, tell_others: bool) -> list[str]:
    """Return what the stations of a case do not tell by themselves."""
    lines = []
    if chosen.settled is not None:
        lines.append(
            f"Down to {units.text(chosen.settled, 'length')} pile and hammer go down under their "
            "weight."
        )
    lines += [
        _restart(before, plan, units)
        for before, plan in pairwise(chosen.plans)
        if plan.stage.after_pause
    ]
    lines += _cushion_life(option)
    others = [drive.case for drive in option.cases if drive is not chosen and drive.plans]
    if others and tell_others:
        lines.append(f"Other cases, shown by --case: {', '.join(others)}.")
    return lines


def _restart(before: StagePlan, plan: StagePlan, units: Units) -> str:
    """Return what a pause does to the shaft, and what the first blows after it do."""
    stage = plan.stage
    rest = units.rest(stage.after_pause)
    head = f"Restart at {units.depth(stage.penetration)} after {rest}: "
    if before.stage.shaft > 0:
        head += f"shaft resistance {stage.shaft / before.stage.shaft:.2f} times that before; "
    count = _count(plan, units)
    if count is None:
        return f"{head}it {plan.verdict}."
    stroke = units.text(plan.stroke, "stroke")
    return f"{head}it {plan.verdict}, {count:.0f} blows/{units.counted} at {stroke}."


def _cushion_life(option: Option) -> list[str]:
    """Return a warning where a pile cushion takes more blows than its life."""
    life = option.stack.pile.material.life if option.stack.pile else None
    cases = [
        case for case in option.cases if case.required and case.most_on_cushion > (life or inf)
    ]
    if not cases:
        return []
    worst = max(cases, key=lambda case: case.most_on_cushion)
    return [
        f"Warning: in case {worst.case} one pile cushion takes {worst.most_on_cushion:.0f} blows, "
        f"more than its life of {life:.0f}; it is replaced at pauses only, so plan one earlier."
    ]


def answer(option: Option, job: Job, units: Units) -> str:
    """Return whether the hammer reaches the target, and at what cost, or what stops it."""
    name, on = option.hammer.name, on_stack(option.stack, units)
    slowest = option.slowest
    if not option.drives or slowest is None:
        return f"No: {name} {option.verdict}; {reason(option, job, units)}."
    taken = slowest.taken
    time = "" if taken.seconds is None else f" and {taken.seconds / 60:.0f} min of driving"
    depth = units.depth(option.target.stage.penetration)
    required = [case.case for case in option.cases if case.required]
    which = (
        f"in every required case ({', '.join(required)})"
        if len(required) > 1
        else (f"in case {required[0]}")
    )
    most = f"at most {taken.blows:.0f}" if len(required) > 1 else f"{taken.blows:.0f}"
    case = f" (case {slowest.case})" if len(required) > 1 else ""
    used = max(case.taken.cushions for case in option.cases if case.required)
    cushions = f"; {used} pile cushions" if used > 1 else ""
    return f"Yes: {name}{on} reaches {depth} {which}; {most} blows{time}{case}{cushions}."


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
    digits = _digits(option.cases, units)
    fields: list[Field[CaseDrive]] = [
        (Column("case", "case", wrap=12), lambda c: c.case),
        (Column("answer", "answer", wrap=20), _case_answer),
        (
            Column(units.key("settled", "length"), f"by its\nweight\nto {length}", 1),
            lambda c: units.value(c.settled, "length"),
        ),
        (
            Column(units.key("got_to", "length"), f"as far\nas {length}", digits),
            lambda c: _depth(c.plans[-1] if c.plans else None, units),
        ),
        (Column("blows", "blows", 0), lambda c: c.taken.blows if c.plans else None),
        (Column("minutes", "min", 0), lambda c: minutes(c.taken.seconds) if c.plans else None),
        (Column("cushions", "cush-\nions", 0, keep=4), lambda c: c.taken.cushions),
        (
            Column(f"hardest_{blow_count(units).key}", f"most blows\n/{units.counted}", 0),
            lambda c: None if c.hardest is None else units.blow_count(c.hardest.set),
        ),
        (
            Column(units.key("hardest_at", "length"), f"at\n{length}", digits),
            lambda c: _depth(c.hardest, units),
        ),
        (
            Column("largest_stress_percent", "stress\n% limit", 0),
            lambda c: None if c.tightest is None else percent(c.tightest.stress_use),
        ),
        (Column("stress", "in", keep=3), lambda c: _which(c.tightest)),
        (
            Column(units.key("stress_at", "length"), f"at\n{length}", digits, keep=3),
            lambda c: _depth(c.tightest, units),
        ),
    ]
    if option.stack.pile is None:
        fields = [field for field in fields if field[0].key != "cushions"]
    return tabled(option.cases, fields)


def _digits(cases: Sequence[CaseDrive], units: Units) -> int:
    """Return the decimals that the depths of all stations need."""
    depths = [plan.stage.penetration for drive in cases for plan in drive.plans]
    return units.depth_digits(*depths)


def _case_answer(drive: CaseDrive) -> str:
    told = "reaches the target"
    if not drive.plans:
        told = "not looked at"
    elif drive.failing is not None:
        told = drive.failing.verdict
    return told if drive.required else f"{told} (not required)"


def _depth(plan: StagePlan | None, units: Units) -> float | None:
    return None if plan is None else units.value(plan.stage.penetration, "length")


def _which(plan: StagePlan | None) -> str | None:
    if plan is None:
        return None
    return "compression" if plan.compression_use >= plan.tension_use else "tension"


def stations_table(cases: tuple[CaseDrive, ...], units: Units) -> Table:
    """Return every station of cases: resistance, stroke, what it does, what it took so far."""
    rows = [(drive, plan) for drive in cases for plan in drive.plans]
    fields: list[Field[tuple[CaseDrive, StagePlan]]] = []
    if len(cases) > 1:
        fields.append((Column("case", "case", once=True), lambda row: row[0].case))
    fields += [
        (
            Column(
                units.key("penetration", "length"),
                f"depth\n{units.unit('length')}",
                _digits(cases, units),
            ),
            lambda row: _depth(row[1], units),
        ),
        (Column("rest_h", "rest\nh", 0, keep=6), lambda row: _rest(row[1])),
        measured("shaft", "shaft", "force", units, lambda row: row[1].stage.shaft),
        measured("toe", "toe", "force", units, lambda row: row[1].stage.toe),
        *_modes(rows, units),
        *setting_columns(_plan_of, [plan for _, plan in rows], units),
        measured("set", "set", "set", units, lambda row: row[1].set),
        (blow_count(units), lambda row: _count(row[1], units)),
        *stress_shares(_plan_of),
        measured("transferred", "to pile", "energy", units, _passed, keep=3),
        (Column("blows_per_minute", "blows\n/min", 0, keep=4), lambda row: _rate(row[1])),
        (Column("wear", "cush-\nion", keep=5), lambda row: _cushion(row[1])),
        (Column("blows", "blows\nso far", 0), lambda row: _taken(row[1]).blows),
        (Column("minutes", "min", 0, keep=7), lambda row: minutes(_taken(row[1]).seconds)),
        (Column("verdict", "", short=VERDICTS_SHORT), lambda row: row[1].verdict),
    ]
    idle = {
        "rest_h": not any(plan.stage.after_pause for _, plan in rows),
        "wear": not any(plan.wear for _, plan in rows),
        "verdict": all(plan.verdict == DRIVES for _, plan in rows),
    }
    return tabled(rows, [field for field in fields if not idle.get(field[0].key)])


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
            keep=8,
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
    return None if plan.verdict == GOES_DOWN else plan.wear or "either"


def _taken(plan: StagePlan) -> Taken:
    """Return what was taken; nothing for a target that was looked at by itself."""
    return plan.taken or Taken(seconds=None)


def drive_document(ranking: Ranking, units: Units) -> dict[str, Any]:
    """Return the whole drive as the JSON document."""
    option = (*ranking.options, *ranking.rejected)[0]
    checked = check_document(ranking, units)
    checked.pop("schedule")
    return {
        "schema_version": SCHEMA_VERSION,
        **checked,
        "ground": list(ranking.job.drive.basis) if ranking.job.drive else [],
        "cases": [_case_document(drive, ranking.job) for drive in option.cases],
        "stations": [
            _station_document(plan, ranking.job) for drive in option.cases for plan in drive.plans
        ],
    }


def _case_document(drive: CaseDrive, job: Job) -> dict[str, Any]:
    taken = drive.taken
    return {
        "case": drive.case,
        "required": drive.required,
        "reaches": drive.reaches,
        "stopped_by": None if drive.failing is None else drive.failing.verdict,
        "stopped_at_m": None if drive.failing is None else drive.failing.stage.penetration,
        "goes_down_to_m": number(drive.settled),
        "blows": number(taken.blows),
        "minutes": number(taken.seconds, 1 / 60),
        "blow_energy_MJ": number(taken.energy, 1e-6),
        "pile_cushions": taken.cushions,
        "cost": bill_document(drive.bill, job.cost),
    }


def _station_document(plan: StagePlan, job: Job) -> dict[str, Any]:
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
        "energy_set_kJ": number(plan.energy_set, 1e-3),
        "set_needed_mm": 1e3 * stage.set_needed,
        "set_mm": number(plan.set, 1e3),
        "blows_per_25cm": None if moves else blows_per_25cm(plan.set),
        "compression_MPa": None if moves else peak((plan.compression,), job),
        "tension_MPa": None if moves else peak((plan.tension,), job),
        "compression_use": None if moves else number(plan.compression_use),
        "tension_use": None if moves else number(plan.tension_use),
        "transferred_energy_kJ": None if moves else number(plan.transferred, 1e-3),
        "blow_rate_per_min": number(plan.blow_rate, 60),
        "cushion_wear": plan.wear or None,
        "blows": None if taken is None else number(taken.blows),
        "minutes": None if taken is None else number(taken.seconds, 1 / 60),
    }
