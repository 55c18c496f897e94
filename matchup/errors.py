"""What can go wrong, in the one form that people, scripts and tests see.

A `Problem` says where, what must hold, what was found and what to do. Input readers collect
every problem of a run before they raise; nothing below the command line prints or exits.
"""

from __future__ import annotations

import difflib
from collections.abc import Iterable, Sequence
from dataclasses import asdict, dataclass
from typing import NamedTuple


def did_you_mean(name: str, names: Iterable[str], cutoff: float = 0.6) -> str:
    """Return a hint at the closest of `names`, or nothing."""
    folded = {known.casefold(): known for known in names}
    close = difflib.get_close_matches(name.casefold(), folded, n=1, cutoff=cutoff)
    return f"Did you mean `{folded[close[0]]}`?" if close else ""


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing that is wrong with an input.

    Parameters
    ----------
    file : str or None
        The file, relative to the working directory where it lies inside; None for values
        given in Python or as options.
    line : int or None
        Line of the file, counted from 1 as editors do; None where a line makes no sense.
    place : str
        The key, column or option, for example ``pile.prestress`` or ``stroke_max``.
    must : str
        What must hold, with units.
    found : str
        What was found, as the user typed it; empty where nothing was there.
    do : str
        What to do about it; empty where `must` already says it.
    """

    file: str | None
    line: int | None
    place: str
    must: str
    found: str
    do: str = ""

    def __str__(self) -> str:
        where = [self.file] if self.file else []
        where += [f"line {self.line}"] if self.line else []
        where += [self.place] if self.place else []
        text = f"{', '.join(where)}: {self.must}"
        if self.found:
            text += f", but got {self.found}"
        text += "." if not text.endswith((".", "?")) else ""
        return f"{text} {self.do}".rstrip()

    def as_dict(self) -> dict[str, str | int | None]:
        """Return the problem as plain data for the JSON document."""
        return asdict(self)


class MatchupError(Exception):
    """Base of every error that a user can cause; its text is fit to be shown as it is."""


class InputError(MatchupError):
    """An input can't be used; carries all of its problems, in file order."""

    def __init__(self, problems: Sequence[Problem]):
        self.problems = tuple(problems)
        super().__init__("\n".join(str(problem) for problem in self.problems))


class AnalysisError(MatchupError):
    """A blow can't be computed or its result can't be trusted."""


class Element(str):
    """What is wrong about one element of a list, in words."""


class Fault(NamedTuple):
    """A rule that a model value breaks: no file, no text as typed; readers add those.

    `quantity` names the entry of the units table in which `value` is to be shown, or is
    empty where the value is dimensionless or no number. `value` is an empty text where there
    is none; `do` says what to do, where `must` does not already.
    """

    field: str
    must: str
    value: object
    quantity: str = ""
    do: str = ""


class ModelError(MatchupError):
    """A model object breaks its own rules; carries every broken rule."""

    def __init__(self, name: str, faults: Sequence[Fault]):
        self.name = name
        self.faults = tuple(faults)
        rules = "; ".join(
            f"{f.field} {f.must}" + (f", but got {f.value!r}" if f.value != "" else "")
            for f in self.faults
        )
        super().__init__(f"{name}: {rules}")
