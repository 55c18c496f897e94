"""From the job file's ``[doubt]`` to distributions of factors on what the job says."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from typing import TypeVar

from matchup.errors import ModelError
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import FACTOR_EXAMPLE, DoubtKeys, FactorKeys, JobKeys
from matchup.inputs.toml_lines import Path as KeyPath
from matchup.model.doubt import (
    FACTORS,
    Correlation,
    Distribution,
    Doubt,
    Doubtful,
    Lognormal,
    Percentiles,
    Triangular,
    Uniform,
)
from matchup.model.stage import Stage

Made = TypeVar("Made")
JUDGED = ("low", "best", "high")


def build_doubt(text: JobText, keys: JobKeys, stages: Sequence[Stage] | None) -> Doubt | None:
    """Return what is in doubt, or note what is wrong with it."""
    given = keys.doubt
    if given is None:
        return None
    before = len(text.findings.problems)
    inputs = [
        _doubtful(text, (*path, *place), of, one)
        for of in FACTORS
        for path, place, one in _tables(given, of)
    ]
    _note_without_effect(text, keys, given, stages)
    told = len(text.findings.problems) > before or any(p[:1] == ("doubt",) for p in text.unread)
    if not inputs and not told:
        do = f"For example resistance = {FACTOR_EXAMPLE}."
        text.wrong(("doubt",), f"must name one input or more: {', '.join(FACTORS)}", do)
    known = [one for one in inputs if one is not None]
    if told or len(known) < len(inputs) or not known:
        return None
    correlations = [
        Correlation(_named(known, first), _named(known, second), value)
        for first, second, value in given.correlations
    ]
    return _made(
        text,
        lambda: Doubt(
            tuple(known), tuple(correlations), given.samples, given.standard_error, given.strokes
        ),
        ("doubt",),
    )


def _tables(given: DoubtKeys, of: str) -> list[tuple[KeyPath, KeyPath, FactorKeys]]:
    """Return the tables of an input, with key and place in a list."""
    value = getattr(given, of)
    if value is None:
        return []
    if isinstance(value, list):
        return [(("doubt", of), (place,), one) for place, one in enumerate(value)]
    return [(("doubt", of), (), value)]


def _doubtful(text: JobText, path: KeyPath, of: str, given: FactorKeys) -> Doubtful | None:
    factor = _distribution(text, path, given)
    top, bottom = given.from_ or 0.0, math.inf if given.to is None else given.to
    name = given.name if given.name is not None else f"{FACTORS[of]}{_range(text, path, given)}"
    if factor is None:
        return None
    return _made(text, lambda: Doubtful(of, factor, name, top, bottom), path)


def _range(text: JobText, path: KeyPath, given: FactorKeys) -> str:
    """Return the range of depth in words, as typed."""
    start, end = (text.typed((*path, key)).strip("\"'") for key in ("from", "to"))
    if given.from_ is not None and given.to is not None:
        return f" from {start} to {end}"
    return f" below {start}" if given.from_ is not None else f" to {end}" if end else ""


def _distribution(text: JobText, path: KeyPath, given: FactorKeys) -> Distribution | None:
    """Return the one distribution that a table names, or note that it is not one."""
    forms: dict[str, Callable[[], Distribution]] = {}
    if one := given.lognormal:
        forms["lognormal"] = lambda: Lognormal(one.mean, one.cov)
    if three := given.triangular:
        forms["triangular"] = lambda: Triangular(three.low, three.mode, three.high)
    if two := given.uniform:
        forms["uniform"] = lambda: Uniform(two.low, two.high)
    judged = [getattr(given, key) for key in JUDGED]
    if any(value is not None for value in judged):
        low, best, high = judged
        forms[""] = lambda: Percentiles(low, best, high, given.shape or "lognormal")
    if len(forms) != 1:
        must = "must name one distribution: lognormal, triangular, uniform, or low, best and high"
        text.wrong(path, must, f"For example {FACTOR_EXAMPLE}.")
        return None
    ((name, make),) = forms.items()
    if name:
        if given.shape is not None:
            text.wrong((*path, "shape"), "must be left out: it goes with `low`, `best` and `high`")
        return _made(text, make, (*path, name))
    for key, value in zip(JUDGED, judged, strict=True):
        if value is None:
            text.wrong((*path, key), "must be given: P10, P50 and P90 go together")
    return None if None in judged else _made(text, make, path)


def _named(inputs: Sequence[Doubtful], name: str) -> str:
    """Return the name of the one input that is called so, or that a key stands for."""
    of = [one.name for one in inputs if one.of == name]
    return of[0] if len(of) == 1 and name not in [one.name for one in inputs] else name


def _note_without_effect(
    text: JobText, keys: JobKeys, given: DoubtKeys, stages: Sequence[Stage] | None
) -> None:
    """Note doubt about what the job does not have, or what changes nothing."""
    if given.cushion_stiffness is not None and keys.pile_cushion is None:
        must = "must be left out: there is no [pile_cushion]"
        text.wrong(("doubt", "cushion_stiffness"), must)
    if given.setup is not None and keys.ground is None:
        must = "must be left out with [[stages]]: they state no set-up"
        text.wrong(("doubt", "setup"), must)
    elif given.setup is not None and stages and not any(s.static or s.regained for s in stages):
        why = "has no effect: the method gives resistance while driving, and there is no pause"
        text.notice(("doubt", "setup"), why)
    deepest = max((stage.penetration for stage in stages or ()), default=math.inf)
    for of in FACTORS:
        for path, place, one in _tables(given, of):
            if (one.from_ or 0.0) > deepest:
                text.notice((*path, *place), "has no effect: the pile does not get there")


def _made(text: JobText, make: Callable[[], Made], path: KeyPath) -> Made | None:
    """Return what is made, or note what it says of itself."""
    try:
        return make()
    except ModelError as error:
        text.wrong_model(error, path)
        return None
