"""What is told of a job's ground: what the resistances rest on, and keys that have no effect."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from matchup.ground.basis import Ground
from matchup.ground.cases import Case
from matchup.ground.cone import readings
from matchup.ground.methods import METHODS, Method
from matchup.ground.soil import SetupLaw
from matchup.ground.stages import GroundStage
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import GroundKeys
from matchup.model.ground import ResistanceTable
from matchup.model.pile import Pile
from matchup.units import format_quantity

SOURCES = ("layers", "cone_test", "table")
"""Keys that name a file."""
KINDS = {
    "static": "static, the resistance long after driving",
    "driving": "driving, the resistance while driving",
}
REFUSAL = "refusal set: 1.0 mm (248 blows per 250 mm, API RP 2A, second-hand)"


def ground_basis(
    given: GroundKeys,
    cases: Sequence[Case],
    made: Sequence[GroundStage],
    law: SetupLaw,
    table: ResistanceTable | None,
    own_refusal: bool,
) -> tuple[str, ...]:
    """Return line by line what the resistances of a drive rest on."""
    method = METHODS[given.method]
    lines = [
        f"from: {', '.join(_files(given))}",
        f"method: {given.method} ({method.source})",
        f"kind: {_kind(method, given, table)}",
        f"holds for: {method.valid}",
    ]
    noted = dict.fromkeys(note for one in made for note in one.told)
    lines += [note for note in noted if not note.startswith("resistance: ")]
    lines.append(f"cases: {_factors(cases, method)}")
    if len(made[0].modes) > 1:
        rules = ", ".join(f"{case.name} {_rule(case, made)}" for case in cases)
        lines.append(f"{' or '.join(mode.mode for mode in made[0].modes)}: {rules}")
    if given.pauses:
        lines.append(f"pauses: {law.text}")
    return tuple(lines if own_refusal else [*lines, REFUSAL])


def _kind(method: Method, given: GroundKeys, table: ResistanceTable | None) -> str:
    """Return whether the resistance is that while driving; a toe's companion tells it."""
    shaft = METHODS.get(given.shaft_method or "", method) if method.toe else method
    stated = f"{KINDS[table.kind]}, as the table states" if table else ""
    return KINDS.get(shaft.kind, stated)


def _factors(cases: Sequence[Case], method: Method) -> str:
    """Return the factors of the cases, or that the method itself tells them apart."""
    names = ", ".join(case.name for case in cases)
    if method.bounds and all(case.factor == 1 for case in cases):
        return f"{names}, as the {'table' if method.name == 'table' else 'method'} has them"
    factors = ", ".join(f"{case.name} {case.factor:g}" for case in cases)
    return f"{factors} times shaft and toe" + (" of its own case" if method.bounds else "")


def _files(given: GroundKeys) -> list[str]:
    files = [name for name in (getattr(given, key) for key in SOURCES) if name is not None]
    return [f"{name} ({given.location})" if given.location else name for name in files]


def _rule(case: Case, made: Sequence[GroundStage]) -> str:
    """Return which mode a case takes; of an H its modes have names of their own."""
    names = {"coring": made[0].modes[0].mode, "plugged": made[0].modes[1].mode}
    return names.get(case.plug_rule, f"the {case.plug_rule}")


def known_depths(given: GroundKeys, ground: Ground, display: str) -> str:
    """Return from where to where each file knows the ground, in words."""
    spans: list[tuple[str | None, float, float]] = []
    if ground.profile is not None:
        spans.append((given.layers, 0.0, ground.profile.end))
    if ground.sounding is not None:
        depth, _ = readings(ground.sounding)
        spans.append((given.cone_test, float(depth[0]), float(depth[-1])))
    if ground.table is not None:
        spans.append((given.table, ground.table.depth[0], ground.table.depth[-1]))
    return ", ".join(
        f"{file} from {format_quantity(top, 'length', display)} to "
        f"{format_quantity(end, 'length', display)}"
        for file, top, end in spans
    )


def note_without_effect(
    text: JobText, given: GroundKeys, pile: Pile, made: Sequence[GroundStage]
) -> None:
    """Note keys of the ground that change nothing."""
    method = METHODS[given.method]
    for key, why in _without_effect(given, method, pile).items():
        if getattr(given, key) not in (None, {}):
            text.notice(("ground", key), f"has no effect: {why}")
    if given.faces != "both" and not _used(given, "alm hamre 2001"):
        text.notice(("ground", "faces"), "has no effect: it belongs to `alm hamre 2001`")
    _note_equal_cases(text, made)


def _without_effect(given: GroundKeys, method: Method, pile: Pile) -> dict[str, str]:
    """Return the keys that change nothing if given, and why."""
    why = {}
    if not method.toe:
        why["shaft_method"] = f"`{given.method}` gives the shaft too"
    if not _used(given, "alm hamre 2001"):
        why["interface_angle"] = "it belongs to `alm hamre 2001`"
    if given.layers is not None or given.cone_test is None:
        told = "the layers state it" if given.layers is not None else "it belongs to a `cone_test`"
        why |= dict.fromkeys(("water", "unit_weight"), told)
    if pile.section.core is None:
        why |= dict.fromkeys(("plug", "inside"), "the pile is not open")
    if not given.pauses:
        why |= dict.fromkeys(("setup_starts", "setup_ends"), "there are no `pauses`")
    if given.method != "table":
        why["table"] = f"`{given.method}` does not use it"
    if not method.needs.startswith("sounding"):
        why["cone_test"] = f"`{given.method}` does not use it"
    return why


def _used(given: GroundKeys, method: str) -> bool:
    return method in (given.method, given.shaft_method)


def _note_equal_cases(text: JobText, made: Sequence[GroundStage]) -> None:
    """Note cases that differ in name alone."""
    by_case: dict[str, list[float]] = {}
    for one in made:
        by_case.setdefault(one.case.name, []).append(one.stage.resistance)
    some = list(by_case.values())
    if len(some) > 1 and all(np.allclose(some[0], other, rtol=1e-12) for other in some):
        text.notice(
            ("ground", "cases"),
            f"{', '.join(by_case)} are all the same here: give them factors, for example "
            "{ low = 0.8, best = 1.0, high = 1.2 }",
        )
