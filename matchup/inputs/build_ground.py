"""From the job file's ``[ground]`` to the stages of a whole drive."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from functools import partial
from pathlib import Path
from typing import Any, TypeVar

import numpy as np

from matchup.errors import Fault, ModelError, did_you_mean
from matchup.ground.basis import Choices, Ground
from matchup.ground.cases import Case, Loosened, Pause
from matchup.ground.methods import METHODS
from matchup.ground.soil import SetupLaw
from matchup.ground.stages import resistance_stages
from matchup.inputs.build_pile import length_of, length_typed
from matchup.inputs.findings import Findings
from matchup.inputs.job_text import JobText, named_file
from matchup.inputs.layers import read_layers, read_resistance_table
from matchup.inputs.schema import GroundKeys, JobKeys
from matchup.inputs.sounding import read_sounding
from matchup.model.ground import ResistanceTable
from matchup.model.job import Drive
from matchup.model.pile import Pile
from matchup.model.stage import REFUSAL_SET, Stage

Made = TypeVar("Made")

PLACES = {
    "profile": "layers",
    "sounding": "cone_test",
    "companion": "shaft_method",
    "cases": "cases",
    "start": "setup_starts",
    "end": "setup_ends",
    "penetration": "start",
}
"""Keys that the model's fields stand for, where they differ."""
MOST_STATIONS = 1000
REFUSAL_NOTE = "refusal set 1.0 mm (248 blows per 250 mm, API RP 2A, second-hand)"


def build_drive(
    text: JobText, keys: JobKeys, pile: Pile | None, findings: Findings
) -> tuple[tuple[Stage, ...] | None, Drive | None]:
    """Return the stations of a drive in every ground case, or note what is wrong with them."""
    given = keys.ground
    assert given is not None
    before = len(findings.problems)
    _check_pile(text, keys, pile)
    ground = _ground(text, given, findings)
    cases = _cases(text, given, ground.table if ground else None)
    stations = _stations(text, keys, given)
    choices = _made(text, partial(_choices, given))
    law = _made(text, partial(_law, given))
    capacity, words = _capacity(text, keys)
    loosened = [
        _made(text, partial(Loosened, part.to, part.share, part.how), ("loosened", i))
        for i, part in enumerate(given.loosened)
    ]
    pauses = [Pause(pause.penetration, pause.lasts) for pause in given.pauses]
    _check_names(text, given, cases)
    if len(findings.problems) > before or pile is None or ground is None or stations is None:
        return None, None
    assert choices is not None
    assert law is not None
    sets = _sets(keys, stations)
    try:
        made = resistance_stages(
            pile,
            ground,
            given.method,
            stations.tolist(),
            sets,
            cases,
            choices,
            [part for part in loosened if part],
            pauses,
            law,
        )
    except ModelError as error:
        _tell(text, error)
        return None, None
    refusal = () if keys.target and keys.target.refusal else (REFUSAL_NOTE,)
    stages = _by_case([one.stage for one in made], refusal)
    return stages, Drive(tuple(given.required or ()), capacity, words)


def _by_case(stages: list[Stage], notes: tuple[str, ...]) -> tuple[Stage, ...]:
    """Return stages in driving order within each case, case by case."""
    cases = dict.fromkeys(stage.case for stage in stages)
    return tuple(
        replace(stage, notes=(*stage.notes, *notes))
        for case in cases
        for stage in stages
        if stage.case == case
    )


def _ground(text: JobText, given: GroundKeys, findings: Findings) -> Ground | None:
    """Return what the named files hold; None where one of them can't be read."""
    read: dict[str, Any] = {}
    readers: dict[str, Callable[[Path], Any]] = {
        "layers": lambda path: read_layers(path, findings),
        "cone_test": lambda path: read_sounding(path, findings, given.location),
        "table": lambda path: read_resistance_table(path, findings),
    }
    named = {key: getattr(given, key) for key in readers if getattr(given, key) is not None}
    if not named:
        do = "`layers` or `cone_test` or `table` name a file."
        text.wrong(("ground", "layers"), "must be given, or `cone_test` or `table`", do)
        return None
    if given.location is not None and given.cone_test is None:
        text.wrong(("ground", "location"), "must be left out: there is no `cone_test`")
    for key, name in named.items():
        path = named_file(text, ("ground", key), name)
        read[key] = readers[key](path) if path else None
    if any(value is None for value in read.values()):
        return None
    return _made(
        text,
        lambda: Ground(
            read.get("layers"),
            read.get("cone_test"),
            read.get("table"),
            given.water,
            given.unit_weight,
        ),
    )


def _check_pile(text: JobText, keys: JobKeys, pile: Pile | None) -> None:
    """Note piles that resistance methods do not know: raked ones, and those of several outlines."""
    if keys.pile.rake:
        must = "must be left out with a [ground], which goes by depth"
        text.wrong(("pile", "rake"), must, "Give [[stages]] along the raked pile.")
    if pile is not None and len({part.section.perimeter for part in pile.parts}) > 1:
        must = "must have one outline with a [ground]"
        text.wrong(("pile", "parts"), must, "Give [[stages]].", "parts of different perimeter")


def _cases(text: JobText, given: GroundKeys, table: ResistanceTable | None) -> list[Case]:
    """Return the cases; of a table of resistance each must have its columns."""
    factors = given.cases if isinstance(given.cases, dict) else dict.fromkeys(given.cases, 1.0)
    cases = [
        _made(text, partial(Case, name, factor, given.plug.get(name, "")), ("cases", name))
        for name, factor in factors.items()
    ]
    if not factors:
        text.wrong(("ground", "cases"), "must hold at least one case")
    if table is not None and given.method == "table" and isinstance(given.cases, list):
        for name in factors:
            if name not in table.columns:
                must = f"must be cases with columns in the table: {', '.join(table.columns)}"
                text.wrong(("ground", "cases"), must, found=f'"{name}"')
    return [case for case in cases if case is not None]


def _check_names(text: JobText, given: GroundKeys, cases: list[Case]) -> None:
    """Note names of methods and cases that there are none of."""
    for key, name in (("method", given.method), ("shaft_method", given.shaft_method)):
        if name is not None and name not in METHODS:
            must = f"must be one of: {', '.join(METHODS)}"
            text.wrong(("ground", key), must, did_you_mean(name, list(METHODS)))
    known = [case.name for case in cases]
    for key, names in (("required", given.required or []), ("plug", list(given.plug))):
        for name in names:
            if known and name not in known:
                text.wrong(("ground", key), f"must be cases: {', '.join(known)}", found=f'"{name}"')
    if given.required == []:
        text.wrong(("ground", "required"), "must name at least one case, or be left out for all")


def _stations(text: JobText, keys: JobKeys, given: GroundKeys) -> Any:
    """Return the penetrations of the stations, pauses among them, down to the target's."""
    target = keys.target.penetration if keys.target else None
    if target is None:
        do = 'Write [target] with penetration = "21 m".'
        text.wrong(("target", "penetration"), "must be given with a [ground]", do)
        return None
    if keys.target and keys.target.set is None:
        do = 'Write for example set = "4 mm", or the refusal set itself.'
        text.wrong(("target", "set"), "must be given with a [ground]", do)
    if target > length_of(keys.pile) * (1 + 1e-9):
        must = f"must be at most the pile's length, {length_typed(text, keys.pile)}"
        text.wrong(("target", "penetration"), must)
    if given.start > target:
        must = f"must be at most the target's {text.typed(('target', 'penetration'))}"
        text.wrong(("ground", "start"), must)
        return None
    if (target - given.start) / given.every > MOST_STATIONS:
        text.wrong(("ground", "every"), f"must make at most {MOST_STATIONS} stations")
        return None
    for i, pause in enumerate(given.pauses):
        if not given.start <= pause.penetration <= target:
            must = "must lie between `start` and the target's penetration"
            text.wrong(("ground", "pauses", i, "penetration"), must)
    regular = np.arange(given.start, target - 1e-6, given.every)
    paused = [pause.penetration for pause in given.pauses]
    every = np.unique(np.round(np.concatenate((regular, paused, [target])), 6))
    return every[np.concatenate(([True], np.diff(every) > 1e-4))]


def _sets(keys: JobKeys, stations: Any) -> list[float]:
    """Return the needed set of every station: the refusal set, and the target's at the target."""
    assert keys.target is not None
    assert keys.target.set is not None
    refusal = keys.target.refusal or REFUSAL_SET
    return [refusal] * (len(stations) - 1) + [keys.target.set]


def _capacity(text: JobText, keys: JobKeys) -> tuple[float | None, str]:
    """Return the resistance to be proven, and how it follows from load and factor."""
    target = keys.target
    if target is None:
        return None, ""
    factors = {
        key: getattr(target, key)
        for key in ("safety_factor", "resistance_factor")
        if getattr(target, key) is not None
    }
    if target.load is None:
        for key in factors:
            text.wrong(("target", key), "must be given together with a `load`")
        return None, ""
    if len(factors) != 1:
        do = "For example safety_factor = 2.0 or resistance_factor = 0.65."
        text.wrong(("target", "load"), "must be given together with one factor", do)
        return None, ""
    ((key, factor),) = factors.items()
    shown = text.typed(("target", "load")).strip("\"'")
    if key == "safety_factor":
        if not factor >= 1:
            text.wrong(("target", key), "must be >= 1")
        return target.load * factor, f"{shown} times the safety factor {factor:g}"
    if not 0 < factor <= 1:
        text.wrong(("target", key), "must be above 0 and at most 1")
        return None, ""
    return target.load / factor, f"{shown} over the resistance factor {factor:g}"


def _choices(given: GroundKeys) -> Choices:
    angle = {} if given.interface_angle is None else {"interface_angle": given.interface_angle}
    return Choices(faces=given.faces, inside=given.inside, companion=given.shaft_method, **angle)


def _law(given: GroundKeys) -> SetupLaw:
    usual = SetupLaw()
    return SetupLaw(given.setup_starts or usual.start, given.setup_ends or usual.end)


def _made(text: JobText, make: Callable[[], Made], path: tuple[str | int, ...] = ()) -> Made | None:
    """Return what is made, or note what it says of itself."""
    try:
        return make()
    except ModelError as error:
        _tell(text, error, path)
        return None


def _tell(text: JobText, error: ModelError, path: tuple[str | int, ...] = ()) -> None:
    """Note what a model of the ground says of itself; of a layer, in the file of the layers."""
    faults = []
    for fault in error.faults:
        if fault.field.startswith("layers."):
            _, number, field = fault.field.split(".")
            must = f"layer {number}: `{field}` {fault.must}"
            faults.append(Fault("layers", must, fault.value, fault.quantity, fault.do))
        else:
            faults.append(fault)
    text.wrong_model(ModelError(error.name, faults), ("ground", *path), PLACES)
