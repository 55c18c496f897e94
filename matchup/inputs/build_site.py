"""From the job file's keys to what rig and surroundings allow."""

from __future__ import annotations

from collections.abc import Sequence

from matchup.errors import ModelError, did_you_mean
from matchup.inputs.findings import some
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import JobKeys, SiteKeys, VibrationKeys
from matchup.model.hammer import Hammer
from matchup.model.site import Site, Standing
from matchup.model.vibration import RELATIONS, Vibration

NEEDED_COLUMNS = {
    "capacity": "hammer_mass",
    "capacity_with_pile": "hammer_mass",
    "headroom": "hammer_length",
}
"""What the catalogue must tell of a hammer that is held against a key."""


def build_site(text: JobText, keys: JobKeys, hammers: Sequence[Hammer]) -> Site | None:
    """Return what the site allows; None without a ``[site]`` table, or where it is wrong.

    Hammers that a limit can't be held against, for want of a catalogue value, go to the notices.
    """
    given = keys.site
    if given is None:
        return None
    vibration = _vibration(text, given.vibration)
    standing = _standing(text, given)
    _note_unchecked(text, given, hammers)
    try:
        return Site(
            given.capacity,
            given.capacity_with_pile,
            given.headroom,
            given.above_ground,
            given.blow_rate_max,
            vibration,
            standing,
        )
    except ModelError as error:
        text.wrong_model(error, ("site",))
        return None


def _vibration(text: JobText, given: VibrationKeys | None) -> Vibration | None:
    path = ("site", "vibration")
    if given is None or text.is_unread(*path):
        return None
    if given.relation not in RELATIONS:
        must = f"must be one of: {', '.join(RELATIONS)}"
        text.wrong((*path, "relation"), must, did_you_mean(given.relation, RELATIONS))
        return None
    try:
        return Vibration(**given.model_dump())
    except ModelError as error:
        text.wrong_model(error, path)
        return None


def _standing(text: JobText, given: SiteKeys) -> Standing | None:
    """Return what a free-standing pile must stand; asked for by its safety."""
    if given.buckling_safety is None:
        for key in ("fixity", "inertia"):
            if getattr(given, key) is not None:
                text.notice(("site", key), "has no effect without `buckling_safety`")
        return None
    if given.fixity is None:
        must = "must be given with `buckling_safety`: the depth at which the pile is fixed"
        text.wrong(("site", "fixity"), must, 'For example `fixity = "2 m"`.', found="")
        return None
    try:
        return Standing(given.buckling_safety, given.fixity, given.inertia)
    except ModelError as error:
        text.wrong_model(error, ("site",), {"safety": "buckling_safety"})
        return None


def _note_unchecked(text: JobText, given: SiteKeys, hammers: Sequence[Hammer]) -> None:
    for key, column in NEEDED_COLUMNS.items():
        without = [hammer.name for hammer in hammers if getattr(hammer, column) is None]
        if getattr(given, key) is not None and without:
            what = f"is not held against {some(without)}: no `{column}` in the catalogue"
            text.notice(("site", key), what)
    rates = [h.name for h in hammers if h.blow_rate(h.stroke_max) is None]
    if given.blow_rate_max is not None and rates:
        text.notice(("site", "blow_rate_max"), f"is not held against {some(rates)}: no blow rate")
