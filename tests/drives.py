"""Builders of small whole drives, and a plain planner that looks at every setting of every station.

Hammers, cushions and sites are invented.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from matchup.analysis.rig import Rig
from matchup.model.job import Course, Drive, Job
from matchup.model.stage import Stage
from tests import jobs

AGEING_OAK = replace(jobs.OAK, new_for=60.0, life=250.0)
AGEING_PLYWOOD = replace(jobs.PLYWOOD, new_for=90.0, life=400.0)
GROUND = ((2.0, 40.0, 30.0), (4.0, 90.0, 60.0), (6.0, 170.0, 110.0), (8.0, 300.0, 420.0),
          (9.5, 420.0, 520.0), (11.0, 560.0, 480.0), (12.5, 650.0, 550.0))  # fmt: skip
"""Penetration [m], shaft and toe [kN] of the best case."""
CASES = {"low": 0.8, "high": 1.2}


def stations(
    rows: Sequence[tuple[float, float, float]] = GROUND,
    cases: Mapping[str, float] = CASES,
    set_mm: float = 4.0,
    pauses: Mapping[float, float] = {},
    gain: float = 1.4,
) -> tuple[Stage, ...]:
    """Stations case by case; after a pause [s] the shaft is `gain` times that before."""
    made = []
    for case, factor in cases.items():
        for depth, shaft, toe in rows:
            least = set_mm if depth == rows[-1][0] else 1.0
            name = f"{depth:g} m, {case}"
            one = jobs.stage(name, depth, factor * shaft, factor * toe, least, case=case)
            made.append(one)
            if depth in pauses:
                made.append(
                    replace(
                        one,
                        name=f"{name}, again",
                        shaft=gain * one.shaft,
                        after_pause=pauses[depth],
                    )
                )
    return tuple(made)


def job(stages: Sequence[Stage] | None = None, required: Sequence[str] = (), **more: object) -> Job:
    """A concrete pile driven through `GROUND`."""
    given: dict[str, object] = {
        "cushions": jobs.space((AGEING_PLYWOOD, AGEING_OAK), sheets=(4, 7, 10)),
        "hammers": (jobs.hydraulic(3.0), jobs.hydraulic(5.0), jobs.drop(5.0, 0.9)),
    }
    made = jobs.job(stages=stations() if stages is None else stages, **given | more)  # type: ignore[arg-type]
    return replace(made, drive=Drive(tuple(required)))


# --- the plain planner ---------------------------------------------------------------------------


@dataclass
class Step:
    """What is planned at one station."""

    stage: Stage
    verdict: str
    at: int = -1
    stroke: float = float("nan")
    set: float = float("inf")
    compression: float = 0.0
    tension: float = 0.0
    wear: int | None = None


@dataclass
class PlainDrive:
    """One hammer and stack in one case."""

    steps: list[Step] = field(default_factory=list)
    blows: float = 0.0
    seconds: float = 0.0
    on_cushion: float = 0.0
    cushions: int = 1

    @property
    def reaches(self) -> bool:
        return self.steps[-1].verdict in ("drives", "goes down")


def scan(rig: Rig, stage: int, hammer: int, stack: int, wear: int | None) -> jobs.Scan:
    """Every setting, in one wear state or the worst of all."""
    strokes = jobs.all_settings(rig.job.hammers[hammer])
    wears = range(len(rig.wears)) if wear is None else (wear,)
    kinds = [(w, factor) for w in wears for factor in (0.98, 1.0, 1.02)]
    columns = np.array([(w, factor * s) for s in strokes for w, factor in kinds])
    same = [np.full(len(columns), place) for place in (stage, hammer, stack)]
    answers = rig.answer(*same, columns[:, 0].astype(np.int64), columns[:, 1].copy())
    assert answers.sound.all()
    shape = (len(strokes), len(wears), 3)
    return jobs.Scan(
        strokes,
        answers.set.reshape(shape)[:, :, 1].min(axis=1).tolist(),
        answers.compression.reshape(shape).max(axis=(1, 2)).tolist(),
        answers.tension.reshape(shape).max(axis=(1, 2)).tolist(),
    )


def nearest(cell: jobs.Scan, wanted: int, needed: float, limits: tuple[float, float]) -> jobs.Found:
    """The documented choice: the wanted setting, else the next lower one that works, else the
    window's lowest."""

    def works(at: int) -> bool:
        return cell.sets[at] >= needed and cell.holds(at, *limits)

    if works(wanted):
        return jobs.Found("open", wanted)
    at = wanted
    while at > 0 and not cell.holds(wanted, *limits):
        low = at - 1
        while low > 0 and cell.strokes[low - 1] >= cell.strokes[at] / 1.04 - 1e-12:
            low -= 1
        at = low
        if works(at):
            return jobs.Found("open", at)
        if cell.sets[at] < needed:
            break
    return jobs.plain_window(cell, needed, *limits)


def plain_drive(
    rig: Rig, course: Course, hammer: int, stack: int, fastest: bool = False
) -> PlainDrive:
    """Plan a case station by station from all settings, by the rules as they are documented."""
    job = rig.job
    limits = (job.limits.compression, job.limits.tension)
    material = rig.stacks[stack].pile.material if rig.stacks[stack].pile else None
    target = scan(rig, course.target, hammer, stack, None)
    found = jobs.plain_window(target, job.stages[course.target].set_needed, *limits)
    at = found.at
    if fastest and found.state == "open":
        at = jobs.plain_top(target, at, *limits)
    wanted = len(target.strokes) - 1 if fastest else at
    drive = PlainDrive()
    for place in course.stages:
        stage = job.stages[place]
        worn_out = material and material.life and drive.on_cushion >= material.life
        if stage.after_pause and worn_out:
            drive.on_cushion, drive.cushions = 0.0, drive.cushions + 1
        last = drive.steps[-1] if drive.steps else None
        if place == course.target:
            step = _step(stage, target, jobs.Found(found.state, at, found.lifted), limits)
        elif rig.runs(place, hammer):
            step = Step(stage, "goes down")
        else:
            wear = None
            if material and material.new_for:
                ahead = drive.on_cushion
                if last and last.verdict == "drives":
                    ahead += (stage.penetration - last.stage.penetration) / last.set
                wear = 0 if ahead < material.new_for else 1
            cell = scan(rig, place, hammer, stack, wear)
            step = _step(stage, cell, nearest(cell, wanted, stage.set_needed, limits), limits)
            step.wear = wear
        drive.steps.append(step)
        if step.verdict == "fails":
            break
        _take(drive, last, step, job.hammers[hammer], float(rig.chains.weights[hammer]))
    return drive


def _step(stage: Stage, cell: jobs.Scan, found: jobs.Found, limits: tuple[float, float]) -> Step:
    at = found.at
    verdict = "drives" if found.state == "open" else "fails"
    return Step(
        stage, verdict, at, cell.strokes[at], cell.sets[at], cell.compression[at], cell.tension[at]
    )


def _take(drive: PlainDrive, last: Step | None, step: Step, hammer: object, weight: float) -> None:
    """Add blows and time: blows per length vary in a straight line between stations."""
    if last is None or step.verdict == "goes down":
        return
    top, end = last.stage.penetration, step.stage.penetration
    if last.verdict == "goes down":
        span = step.stage.resistance - last.stage.resistance
        top += (end - top) * min(max((weight - last.stage.resistance) / span, 0.0), 1.0)
        blows = [(end - top) / step.set]
        rates = [hammer.blow_rate(step.stroke)]  # type: ignore[attr-defined]
    else:
        blows = [0.5 * (end - top) / one.set for one in (last, step)]
        rates = [hammer.blow_rate(one.stroke) for one in (last, step)]  # type: ignore[attr-defined]
    drive.blows += sum(blows)
    drive.on_cushion += sum(blows)
    drive.seconds += sum(count / rate for count, rate in zip(blows, rates, strict=True))
