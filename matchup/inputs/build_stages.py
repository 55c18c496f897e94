"""From the job file's keys to stages, and to how blows are computed and options chosen."""

from __future__ import annotations

from matchup.errors import ModelError
from matchup.inputs.build_pile import length_of, length_typed
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import JobKeys, StageKeys
from matchup.inputs.usual import note_unusual
from matchup.model.job import Analysis, Search
from matchup.model.pile import Pile
from matchup.model.stage import (
    CORING_TOE_QUAKE,
    REFUSAL_SET,
    SHAFT_DAMPING,
    SHAFT_QUAKE,
    TOE_DAMPING,
    TOE_QUAKE_SHARE,
    Stage,
)


def build_stages(text: JobText, keys: JobKeys, pile: Pile | None) -> tuple[Stage, ...] | None:
    """Return the stages, or note what is wrong with them."""
    if keys.stages is None:
        do = "Write [[stages]], and its keys below, or a [ground] that they follow from."
        text.wrong(("stages",), "must be given", do)
        return None
    if not keys.stages:
        text.wrong(("stages",), "must hold at least one stage")
        return None
    if keys.target:
        for key in ("penetration", "set", "load", "safety_factor", "resistance_factor"):
            if getattr(keys.target, key) is not None:
                must = "must be left out with [[stages]]: the last of them is the target"
                text.wrong(("target", key), must)
    _check_names(text, keys)
    made = []
    for place, stage in enumerate(keys.stages):
        if stage.penetration > length_of(keys.pile) * (1 + 1e-9):
            path = ("stages", place, "penetration")
            text.wrong(path, f"must be at most the pile's length, {length_typed(text, keys.pile)}")
        built = _stage(text, keys, place, stage, pile)
        if built is not None:
            made.append(built)
    if keys.target and keys.target.refusal and all(stage.set is not None for stage in keys.stages):
        text.notice(("target", "refusal"), "has no effect: every stage has a `set`")
    return tuple(made) if len(made) == len(keys.stages) else None


def _check_names(text: JobText, keys: JobKeys) -> None:
    names: dict[str, int] = {}
    for place, stage in enumerate(keys.stages or ()):
        path = ("stages", place, "name")
        if not stage.name.strip():
            text.wrong(path, "must not be empty")
        elif names.setdefault(stage.name.casefold(), place) != place:
            first = names[stage.name.casefold()]
            text.wrong(path, f"must differ from the name of stage {first + 1}")


def _stage(
    text: JobText, keys: JobKeys, place: int, given: StageKeys, pile: Pile | None
) -> Stage | None:
    notes: list[str] = []
    try:
        stage = Stage(
            name=given.name,
            penetration=given.penetration,
            shaft=given.shaft,
            toe=given.toe,
            set_needed=_set_needed(keys, given, notes),
            shaft_quake=_shaft_quake(given, notes),
            toe_quake=_toe_quake(given, pile, notes),
            shaft_damping=_shaft_damping(given, notes),
            toe_damping=_toe_damping(given, notes),
            shaft_shape=_shaft_shape(given),
            notes=tuple(notes),
        )
    except ModelError as error:
        text.wrong_model(error, ("stages", place))
        return None
    _note_without_effect(text, place, given, pile)
    for key in ("shaft", "toe", "set", "shaft_quake", "toe_quake", "shaft_damping", "toe_damping"):
        note_unusual(text, ("stages", place, key), getattr(given, key), f"stage {key}")
    return stage


def _note_without_effect(text: JobText, place: int, given: StageKeys, pile: Pile | None) -> None:
    if given.soil and given.shaft_damping is not None:
        text.notice(("stages", place, "soil"), "has no effect: `shaft_damping` is given")
    if given.toe_soil and given.toe_quake is not None:
        text.notice(("stages", place, "toe_soil"), "has no effect: `toe_quake` is given")
    elif given.toe_soil and pile is not None and not pile.section.displaces:
        why = "has no effect: the toe quake of coring piles does not depend on it"
        text.notice(("stages", place, "toe_soil"), why)


def _set_needed(keys: JobKeys, given: StageKeys, notes: list[str]) -> float:
    if given.set is not None:
        return given.set
    if keys.target and keys.target.refusal:
        return keys.target.refusal
    notes.append("refusal set 1.0 mm (248 blows per 250 mm, API RP 2A, second-hand)")
    return REFUSAL_SET


def _shaft_quake(given: StageKeys, notes: list[str]) -> float:
    if given.shaft_quake is not None:
        return given.shaft_quake
    notes.append("shaft quake 2.5 mm (Smith 1960; FHWA-NHI-16-010 12.6, second-hand)")
    return SHAFT_QUAKE


def _toe_quake(given: StageKeys, pile: Pile | None, notes: list[str]) -> float:
    if given.toe_quake is not None:
        return given.toe_quake
    if pile is None or not pile.section.displaces:
        notes.append("toe quake 2.5 mm (coring tubes and H sections; from memory)")
        return CORING_TOE_QUAKE
    soil = given.toe_soil or "dense"
    quake = TOE_QUAKE_SHARE[soil] * pile.section.width
    assumed = "" if given.toe_soil else "assumed "
    notes.append(
        f"toe quake {1e3 * quake:.1f} mm ({assumed}{soil} ground under the toe; "
        "FHWA-NHI-16-010 12.6, second-hand)"
    )
    return quake


def _shaft_damping(given: StageKeys, notes: list[str]) -> float:
    if given.shaft_damping is not None:
        return given.shaft_damping
    soil = given.soil or "sand"
    assumed = "" if given.soil else "assumed "
    notes.append(
        f"shaft damping {SHAFT_DAMPING[soil]:g} s/m ({assumed}{soil}; "
        "FHWA-NHI-16-010 12.6, second-hand)"
    )
    return SHAFT_DAMPING[soil]


def _toe_damping(given: StageKeys, notes: list[str]) -> float:
    if given.toe_damping is not None:
        return given.toe_damping
    notes.append("toe damping 0.5 s/m (FHWA-NHI-16-010 12.6, second-hand)")
    return TOE_DAMPING


def _shaft_shape(given: StageKeys) -> tuple[tuple[float, float], ...]:
    if given.shaft_shape == "uniform":
        return ()
    if given.shaft_shape == "triangular":
        return ((0.0, 0.0), (given.penetration, 1.0))
    return tuple(given.shaft_shape)


def build_settings(text: JobText, keys: JobKeys) -> tuple[Analysis, Search | None]:
    """Return how blows are computed and options chosen."""
    analysis = Analysis(keys.analysis.gravity, keys.analysis.damping)
    try:
        return analysis, Search(keys.search.objective, keys.search.reserve, keys.search.seed)
    except ModelError as error:
        text.wrong_model(error, ("search",))
        return analysis, None
