"""Which stage, hammer and cushion a user means, by name."""

from __future__ import annotations

import difflib
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TypeVar

from matchup.errors import InputError, Problem
from matchup.model.cushion import WEAR_STATES, Cushion, HammerCushion, Stack
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.stage import Stage

Named = TypeVar("Named", Hammer, Stage)


@dataclass(frozen=True, slots=True)
class Selection:
    """What a user named; None where nothing was.

    Parameters
    ----------
    hammer, stage, material, wear, hammer_cushion : str or None
        Names; `material` is that of the pile cushion.
    sheets : int or None
    thickness : float or None
        [m]
    """

    hammer: str | None = None
    stage: str | None = None
    material: str | None = None
    sheets: int | None = None
    thickness: float | None = None
    wear: str | None = None
    hammer_cushion: str | None = None


@dataclass(frozen=True, slots=True)
class Selected:
    """What was meant."""

    hammer: Hammer
    stage: Stage
    stack: Stack
    wear: str


def nearest(name: str, names: Sequence[str]) -> str:
    """Return a sentence that names the closest of `names`, and all of them where they are few."""
    close = difflib.get_close_matches(name, names, n=1, cutoff=0.6)
    hint = f"Did you mean {close[0]!r}? " if close else ""
    shown = ", ".join(names[:12]) + (f" and {len(names) - 12} more" if len(names) > 12 else "")
    return f"{hint}There are: {shown}."


def select(job: Job, selection: Selection) -> Selected:
    """Return what `selection` means in `job`.

    Where there is only one choice it is taken; where there are several and none is named, the
    error lists them. A stage that is not named is the last one, the target.

    Raises
    ------
    InputError
        With every problem of the selection.
    """
    problems: list[Problem] = []
    hammer = _pick("hammer", selection.hammer, job.hammers, problems)
    stage = _pick_stage(job, selection.stage, problems)
    cushion = _pick_cushion(job, selection, problems)
    hammer_cushion = _pick_hammer_cushion(job, selection.hammer_cushion, problems)
    wear = pick_wear(job, selection.wear, problems)
    if problems:
        raise InputError(problems)
    assert hammer is not None
    assert stage is not None
    return Selected(hammer, stage, Stack(cushion, hammer_cushion), wear)


def select_hammer(job: Job, name: str | None) -> Hammer:
    """Return the hammer called `name`.

    Raises
    ------
    InputError
        If there is none, or several and none is named.
    """
    problems: list[Problem] = []
    hammer = _pick("hammer", name, job.hammers, problems)
    if hammer is None:
        raise InputError(problems)
    return hammer


def select_cell(job: Job, hammer: str | None, stage: str | None) -> tuple[Hammer, Stage]:
    """Return the hammer and the stage called so.

    Raises
    ------
    InputError
        With every problem of the names.
    """
    problems: list[Problem] = []
    found = _pick("hammer", hammer, job.hammers, problems), _pick_stage(job, stage, problems)
    if found[0] is None or found[1] is None:
        raise InputError(problems)
    return found[0], found[1]


def _pick_stage(job: Job, name: str | None, problems: list[Problem]) -> Stage | None:
    return _pick("stage", name or job.stages[-1].name, job.stages, problems)


def _pick(
    kind: str, name: str | None, items: Sequence[Named], problems: list[Problem]
) -> Named | None:
    names = [item.name for item in items]
    if name is None:
        if len(items) == 1:
            return items[0]
        problems.append(_missing(kind, names))
        return None
    for item in items:
        if item.name.casefold() == name.strip().casefold():
            return item
    problems.append(
        Problem(None, None, kind, f"must name a {kind} of the job", name, nearest(name, names))
    )
    return None


def _missing(kind: str, names: Sequence[str]) -> Problem:
    must = f"must be named, since there are {len(names)}"
    return Problem(None, None, kind, must, "nothing", nearest("", names))


def _pick_cushion(job: Job, selection: Selection, problems: list[Problem]) -> Cushion | None:
    space = job.cushions
    if space is None:
        for place, value in (
            ("cushion", selection.material),
            ("sheets", selection.sheets),
            ("thickness", selection.thickness),
        ):
            if value is not None:
                must = "must be left out: the job has no [pile_cushion]"
                problems.append(Problem(None, None, place, must, str(value)))
        return None
    names = [material.name for material in space.materials]
    matches = [
        m
        for m in space.materials
        if selection.material is None or m.name.casefold() == selection.material.strip().casefold()
    ]
    if len(matches) != 1:
        if selection.material is None:
            problems.append(_missing("cushion", names))
        else:
            must = "must name a pile cushion of the job"
            do = nearest(selection.material, names)
            problems.append(Problem(None, None, "cushion", must, selection.material, do))
        return None
    material = matches[0]
    if selection.sheets is not None and selection.thickness is not None:
        must = "must not be given together with thickness"
        problems.append(Problem(None, None, "sheets", must, str(selection.sheets)))
        return None
    if selection.thickness is not None:
        return Cushion(material, selection.thickness, space.area)
    if selection.sheets is not None:
        if material.sheet is None or selection.sheets < 1:
            must = f"must be >= 1, of a material in sheets ({material.name})"
            problems.append(Problem(None, None, "sheets", must, str(selection.sheets)))
            return None
        return Cushion(material, selection.sheets * material.sheet, space.area, selection.sheets)
    same = [cushion for cushion in space.cushions() if cushion.material is material]
    if len(same) == 1:
        return same[0]
    what = "sheets" if space.sheets else "thickness"
    known = [str(c.sheets) if c.sheets else f"{1e3 * c.thickness:g} mm" for c in same]
    problems.append(_missing(what, known))
    return None


def _pick_hammer_cushion(
    job: Job, name: str | None, problems: list[Problem]
) -> HammerCushion | None:
    names = [cushion.text for cushion in job.hammer_cushions]
    if not names:
        if name is not None:
            must = "must be left out: the job has no [hammer_cushion] to choose from"
            problems.append(Problem(None, None, "hammer_cushion", must, name))
        return None
    if name is None and len(names) == 1:
        return job.hammer_cushions[0]
    for cushion in job.hammer_cushions:
        if name is not None and cushion.text.casefold() == name.strip().casefold():
            return cushion
    if name is None:
        problems.append(_missing("hammer_cushion", names))
    else:
        must = "must be a hammer cushion of the job"
        problems.append(Problem(None, None, "hammer_cushion", must, name, nearest(name, names)))
    return None


def pick_wear(job: Job, wear: str | None, problems: list[Problem]) -> str:
    """Return a wear state: the one named, else the job's first; note a wrong name."""
    if wear is not None and wear not in WEAR_STATES:
        must = f"must be one of: {', '.join(WEAR_STATES)}"
        problems.append(Problem(None, None, "wear", must, wear))
    if wear is not None and job.cushions is None:
        must = "must be left out: the job has no [pile_cushion]"
        problems.append(Problem(None, None, "wear", must, wear))
    return wear or (job.cushions.wears[0] if job.cushions else WEAR_STATES[0])
