"""From the job file's ``[ground]`` to the stages of a whole drive."""

from __future__ import annotations

import math
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
from matchup.ground.soil import SetupLaw, time_text
from matchup.ground.stages import resistance_stages
from matchup.inputs.build_pile import length_of, length_typed
from matchup.inputs.findings import Findings, shown_fault, shown_path
from matchup.inputs.ground_told import ground_basis, known_depths, note_without_effect
from matchup.inputs.job_text import JobText, named_file
from matchup.inputs.layers import read_layers, read_resistance_table
from matchup.inputs.schema import GroundKeys, JobKeys
from matchup.inputs.sounding import read_sounding
from matchup.inputs.table import read_table
from matchup.model.ground import ResistanceTable
from matchup.model.job import Drive
from matchup.model.pile import Pile
from matchup.model.stage import REFUSAL_SET, Stage
from matchup.units import FOOT

Made = TypeVar("Made")

PLACES = {
    "profile": "layers",
    "sounding": "cone_test",
    "table": "table",
    "companion": "shaft_method",
}
"""Keys that the model's fields stand for, where they differ."""
COLUMNS = {"tip": "cone resistance", "sleeve": "sleeve friction"}
"""What a cone test's fields are called for people."""
MOST_STATIONS = 1000
LEAST_APART = 0.01
"""A station that would lie nearer to a pause or the target than this is left out. [m]"""


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
    law = _law(text, given)
    capacity, words = _capacity(text, keys)
    loosened = [
        _made(text, partial(Loosened, part.to, part.share, part.how), ("loosened", i))
        for i, part in enumerate(given.loosened)
    ]
    pauses = [Pause(pause.penetration, pause.lasts) for pause in given.pauses]
    _check_names(text, given, cases)
    # What could not be read is told already, and gives nothing to go on with.
    if len(findings.problems) > before or pile is None or ground is None or stations is None:
        return None, None
    if choices is None or law is None:
        return None, None
    try:
        made = resistance_stages(
            pile,
            ground,
            given.method,
            stations.tolist(),
            _sets(keys, stations),
            cases,
            choices,
            [part for part in loosened if part],
            pauses,
            law,
        )
    except ModelError as error:
        _tell_resistance(text, keys, ground, error)
        return None, None
    note_without_effect(text, given, pile, made)
    own_refusal = keys.target is not None and keys.target.refusal is not None
    basis = ground_basis(given, cases, made, law, ground.table, own_refusal)
    drive = Drive(tuple(given.required or ()), capacity, words, basis)
    return _by_case([one.stage for one in made], keys.display), drive


def _by_case(stages: list[Stage], display: str) -> tuple[Stage, ...]:
    """Return stages in driving order within each case, case by case, named in the job's units."""
    cases = dict.fromkeys(stage.case for stage in stages)
    return tuple(
        replace(stage, name=_name(stage)) if display == "us" else stage
        for case in cases
        for stage in stages
        if stage.case == case
    )


def _name(stage: Stage) -> str:
    """Return the name of a station with its depth in feet."""
    _, _, rest = stage.name.partition(" m,")
    feet = f"{stage.penetration / FOOT:.3f}".rstrip("0")
    return f"{feet}{'0' if feet.endswith('.') else ''} ft,{rest}"


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
    path = ("ground", "cases")
    listed = isinstance(given.cases, list)
    factors = given.cases if isinstance(given.cases, dict) else dict.fromkeys(given.cases, 1.0)
    if len(factors) < len(given.cases):
        text.wrong(path, "must name each case once")
    if not factors:
        text.wrong(path, "must hold at least one case")
    cases = []
    # Factors may stand for columns that a table does not have: then they are on its best one.
    own = table.columns if table is not None and given.method == "table" else None
    for name, factor in factors.items():
        bound = "" if listed or own is None or name in own else "best"
        try:
            cases.append(Case(name, factor, given.plug.get(name, ""), bound))
        except ModelError as error:
            for fault in error.faults:
                at = path if listed else (*path, name)
                text.wrong(at, fault.must, fault.do, found=f'"{name}"' if listed else None)
    for case in cases if own is not None else ():
        if case.bound_asked not in own:  # type: ignore[operator]
            must = f"must be cases that the table has columns for: {', '.join(own)}"  # type: ignore[arg-type]
            do = "Or give factors on its best case: { low = 0.8, best = 1.0 }." if listed else ""
            text.wrong(path, must, do, found=f'"{case.name}"')
    return cases


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
                must, do = f"must be cases: {', '.join(known)}", did_you_mean(name, known)
                text.wrong(("ground", key), must, do, found=f'"{name}"')
    if given.required == []:
        text.wrong(("ground", "required"), "must name at least one case, or be left out for all")


def _stations(text: JobText, keys: JobKeys, given: GroundKeys) -> Any:
    """Return the penetrations of the stations, pauses among them, down to the target's."""
    target = _target(text, keys)
    if target is None:
        return None
    if given.start > target:
        must = f"must be at most the target's {text.typed(('target', 'penetration'))}"
        text.wrong(("ground", "start"), must)
        return None
    if math.isnan(target + given.start + given.every):
        return None  # told already
    if (target - given.start) / given.every >= MOST_STATIONS:
        text.wrong(("ground", "every"), f"must make at most {MOST_STATIONS} stations")
        return None
    for i, pause in enumerate(given.pauses):
        if not given.start <= pause.penetration <= target:
            must = "must lie between `start` and the target's penetration"
            text.wrong(("ground", "pauses", i, "penetration"), must)
    regular = np.arange(given.start, target, given.every)
    marked = np.unique([*(pause.penetration for pause in given.pauses), target])
    apart = np.abs(regular[:, None] - marked).min(axis=1) > LEAST_APART
    return np.sort(np.concatenate((regular[apart], marked)))


def _target(text: JobText, keys: JobKeys) -> float | None:
    """Return the target's penetration, or note what is missing."""
    target = keys.target
    if target is None:
        do = 'Write [target] with penetration = "21 m" and set = "4 mm".'
        text.wrong(("target",), "must be given with a [ground]", do)
        return None
    examples = {"penetration": '"21 m"', "set": '"4 mm"'}
    for key, example in examples.items():
        if getattr(target, key) is None:
            do = f"For example `{key} = {example}`."
            text.wrong(("target", key), "must be given with a [ground]", do)
    longest = length_of(keys.pile) * (1 + 1e-9)
    if target.penetration is not None and target.penetration > longest:
        must = f"must be at most the pile's length, {length_typed(text, keys.pile)}"
        text.wrong(("target", "penetration"), must)
    return target.penetration


def _sets(keys: JobKeys, stations: Any) -> list[float]:
    """Return the needed set of every station: the refusal set, and the target's at the target."""
    assert keys.target is not None
    # A set that could not be read is told already, and must not be told again as a station's.
    sets = (keys.target.refusal, keys.target.set)
    refusal, last = (REFUSAL_SET if not set_ or math.isnan(set_) else set_ for set_ in sets)
    return [refusal] * (len(stations) - 1) + [last]


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


def _law(text: JobText, given: GroundKeys) -> SetupLaw | None:
    usual = SetupLaw()
    try:
        return SetupLaw(given.setup_starts or usual.start, given.setup_ends or usual.end)
    except ModelError:
        key = "setup_ends" if given.setup_ends else "setup_starts"
        usually = f"{time_text(usual.start)} and {time_text(usual.end)} unless given"
        text.wrong(("ground", key), f"must put `setup_ends` after `setup_starts` ({usually})")
        return None


def _made(text: JobText, make: Callable[[], Made], path: tuple[str | int, ...] = ()) -> Made | None:
    """Return what is made, or note what it says of itself."""
    try:
        return make()
    except ModelError as error:
        _tell(text, error, path)
        return None


def _tell(text: JobText, error: ModelError, path: tuple[str | int, ...] = ()) -> None:
    """Note what a model of the ground says of itself, in the words of the job file."""
    text.wrong_model(error, ("ground", *path), PLACES)


def _tell_resistance(text: JobText, keys: JobKeys, ground: Ground, error: ModelError) -> None:
    """Note what a method lacks: of a layer, in the file of the layers; depths in one problem."""
    given = keys.ground
    assert given is not None
    outside = [fault for fault in error.faults if fault.field == "penetration"]
    if outside:
        _tell_outside(text, keys, ground, outside)
    for fault in error.faults:
        place, _, field = fault.field.rpartition(".")
        if place in PLACES or place.startswith("layers."):
            _tell_in_file(text, given, place, field, fault)
        elif fault.field == "section":
            text.wrong(("pile", "toe" if keys.pile.toe else "shape"), fault.must, fault.do)
        elif fault.field != "penetration":
            path = ("ground", PLACES.get(fault.field, fault.field))
            text.wrong(path, fault.must, fault.do, text.typed(path) or shown_fault(fault))


def _tell_in_file(text: JobText, given: GroundKeys, place: str, field: str, fault: Fault) -> None:
    """Note what a method lacks in one of the ground's files; of a layer, on its line."""
    kind, _, number = place.partition(".")
    path = text.folder / getattr(given, PLACES.get(kind, kind))
    line = None
    if number:
        table = read_table(path, Findings())
        assert table is not None, "it has been read before"
        line = table.rows[int(number) - 1].line
    column = f"`{COLUMNS.get(field, field)}`"
    found = shown_fault(fault)
    text.findings.add(shown_path(path), line, column, fault.must, found, fault.do)


def _tell_outside(text: JobText, keys: JobKeys, ground: Ground, faults: list[Fault]) -> None:
    """Note stations at which the ground is not known, in one problem."""
    given = keys.ground
    assert given is not None
    deepest = max(float(str(fault.value)) for fault in faults)
    assert keys.target is not None
    at_end = deepest == keys.target.penetration
    path = ("target", "penetration") if at_end else ("ground", "start")
    must = f"must lie where the ground is known: {known_depths(given, ground, keys.display)}"
    if "diameters below" in faults[0].must:
        must += "; `nen 9997 base` looks at 4 diameters below the toe"
    do = "Nothing is extrapolated: end the drive there, or add what is known below."
    text.wrong(path, must, do if at_end else "Start deeper.")
