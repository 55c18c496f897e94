"""From the job file's keys to the stress limits of every part of the pile."""

from __future__ import annotations

from typing import NamedTuple

from matchup.errors import ModelError, did_you_mean
from matchup.inputs.build_pile import Given, given_follower, given_parts
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import JobKeys, LimitsKeys
from matchup.inputs.toml_lines import Path as KeyPath
from matchup.model.limits import RULES, GivenLimits, PartLimits, StressLimits, part_limits
from matchup.model.pile import Part, Pile


class _Said(NamedTuple):
    """Limits as the file gives them, and where."""

    keys: LimitsKeys | None
    path: KeyPath

    @property
    def given(self) -> GivenLimits | None:
        """Return them for the model; None for a follower without any."""
        return None if self.keys is None else GivenLimits(**self.keys.model_dump())


def build_limits(text: JobText, keys: JobKeys, pile: Pile | None) -> StressLimits | None:
    """Return the stress limits, or note what is wrong with them."""
    parts = given_parts(keys.pile)
    follower = given_follower(keys.pile)
    column = [follower, *parts] if follower else parts
    said = [_said(keys, given, given is follower) for given in column]
    distinct = {one.path: one for one in said}.values()
    known = [_is_known(text, *one) for one in distinct]
    if not all(known):
        return None
    if pile is None:
        _check_materials(text, column, said)
        return None
    made: list[PartLimits] = []
    for number, part in enumerate(pile.column):
        # A plugged length is a part of its own, with the limits of the part that it belongs to.
        one = said[min(number, len(said) - 1)]
        limits = _part_limits(text, part, one)
        if limits is not None:
            made.append(limits)
    for one in distinct:
        _note_overridden(text, one)
        own = [
            part
            for number, part in enumerate(pile.column)
            if said[min(number, len(said) - 1)].path == one.path
        ]
        _check_walls(text, one, own)
    return StressLimits(tuple(made)) if len(made) == len(pile.column) else None


def _said(keys: JobKeys, given: Given, is_follower: bool) -> _Said:
    """Return a part's own limits, or the job's; a follower has its own or none."""
    own = getattr(given.own, "limits", None)
    if own is not None or is_follower:
        return _Said(own, (*given.path, "limits"))
    return _Said(keys.limits, ("limits",))


def _part_limits(text: JobText, part: Part, one: _Said) -> PartLimits | None:
    try:
        return part_limits(part, one.given)
    except ModelError as error:
        text.wrong_model(error, one.path)
        return None


def _check_walls(text: JobText, one: _Said, parts: list[Part]) -> None:
    try:
        if one.given is not None:
            one.given.check_walls(parts)
    except ModelError as error:
        text.wrong_model(error, one.path)


def _check_materials(text: JobText, column: list[Given], said: list[_Said]) -> None:
    """Hold limits against materials alone, where something else of the pile is wrong."""
    for part, one in zip(column, said, strict=True):
        material, limits = part.keys.material, one.given
        if limits is None or material is None or text.is_unread(*part.at("material")):
            continue
        try:
            limits.check(material)
        except ModelError as error:
            text.wrong_model(error, one.path)


def _is_known(text: JobText, limits: LimitsKeys | None, path: KeyPath) -> bool:
    if text.is_unread(*path, "rule"):
        return False
    rule = None if limits is None else limits.rule
    if rule is None or rule in RULES:
        return True
    text.wrong((*path, "rule"), f"must be one of: {', '.join(RULES)}", did_you_mean(rule, RULES))
    return False


def _note_overridden(text: JobText, one: _Said) -> None:
    given = one.keys
    if given is None or given.rule is None:
        return
    compression = given.compression or given.compression_stress
    if compression and (given.tension or given.tension_stress):
        text.notice((*one.path, "rule"), "has no effect: both limits are given")
