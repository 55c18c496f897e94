"""From the job file's keys to the details of a steel pile that fatigue is asked of."""

from __future__ import annotations

from itertools import pairwise

from matchup.errors import ModelError
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import DetailKeys, FatigueKeys, JobKeys
from matchup.model.fatigue import CURVE_TEXT, Curve, Detail, Fatigue
from matchup.model.pile import Pile

SAME_PLACE = 1e-3
"""A detail nearer than this to where parts meet stands for their joint. [m]"""


def build_fatigue(text: JobText, keys: JobKeys, pile: Pile | None) -> Fatigue | None:
    """Return what is asked of fatigue; None without a ``[fatigue]`` table, or where it is wrong."""
    given = keys.fatigue
    if given is None:
        return None
    if keys.ground is None:
        why = "has no effect: stages given by hand tell no number of blows; a [ground] does"
        text.notice(("fatigue",), why)
    if not given.partial_factor >= 1:
        text.wrong(("fatigue", "partial_factor"), "must be >= 1")
        return None
    made = [_detail(text, given, place, one) for place, one in enumerate(given.details)]
    details = [detail for detail in made if detail is not None]
    if len(details) < len(made) or pile is None:
        return None
    for place, detail in enumerate(details):
        _check_place(text, pile, detail, ("fatigue", "details", place, "at"))
    try:
        details += _joints(pile, details, _curve(given, given.category))
        return Fatigue(tuple(details), given.allowed, _curve_text(given))
    except ModelError as error:
        text.wrong_model(error, ("fatigue",))
        return None


def _curve(given: FatigueKeys, category: float) -> Curve:
    return Curve(category / given.partial_factor, given.slope)


def _curve_text(given: FatigueKeys) -> str:
    curve = CURVE_TEXT if given.slope is None else f"slope {given.slope:g}, given in the job"
    return f"{curve}; partial factor {given.partial_factor:g}"


def _detail(text: JobText, given: FatigueKeys, place: int, one: DetailKeys) -> Detail | None:
    category = given.category if one.category is None else one.category
    try:
        return Detail(one.name, one.at, _curve(given, category), one.concentration)
    except ModelError as error:
        at = ("fatigue",) if error.name == "curve" else ("fatigue", "details", place)
        text.wrong_model(error, at)
        return None


def _check_place(text: JobText, pile: Pile, detail: Detail, path: tuple[str | int, ...]) -> None:
    if detail.at > pile.length * (1 + 1e-9):
        text.wrong(path, "must be at most the length of the pile")
        return
    top = 0.0
    for part in pile.parts:
        inside = top - SAME_PLACE <= detail.at <= top + part.length + SAME_PLACE
        if inside and part.material != "steel":
            text.wrong(path, "must be in a part of steel")
            return
        top += part.length


def _joints(pile: Pile, details: list[Detail], curve: Curve) -> list[Detail]:
    """Return where steel parts meet, unless a detail is given there."""
    found = []
    at = 0.0
    for upper, lower in pairwise(pile.parts):
        at += upper.length
        is_steel = upper.material == lower.material == "steel"
        if is_steel and all(abs(detail.at - at) > SAME_PLACE for detail in details):
            found.append(Detail(f"joint of {upper.name} and {lower.name}", at, curve))
    return found
