"""Problems and notices, gathered while files are read."""

from __future__ import annotations

import difflib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

from matchup.errors import InputError, ModelError, Problem
from matchup.units import format_quantity


def did_you_mean(name: str, names: Iterable[str]) -> str:
    """Return a hint at the closest of `names`, or nothing."""
    folded = {known.casefold(): known for known in names}
    close = difflib.get_close_matches(name.casefold(), folded, n=1, cutoff=0.6)
    return f"Did you mean `{folded[close[0]]}`?" if close else ""


@dataclass
class Findings:
    """What readers found: problems of all files, in the order of reading, and notices."""

    problems: list[Problem] = field(default_factory=list)
    notices: list[str] = field(default_factory=list)

    def add(
        self, file: str, line: int | None, place: str, must: str, found: str = "", do: str = ""
    ) -> None:
        """Note a problem."""
        self.problems.append(Problem(file, line, place, must, found, do))

    def add_model_error(
        self,
        error: ModelError,
        file: str,
        lines: Mapping[str, int | None],
        typed: Mapping[str, str],
        places: Mapping[str, str],
        line: int | None = None,
    ) -> None:
        """Note what a model object says of itself, with file, line and the text as typed.

        Parameters
        ----------
        lines, typed, places : mapping
            By the model's field: its line, its text as typed, and what the file calls it.
        line : int or None
            For fields that stand nowhere in the file.
        """
        for fault in error.faults:
            found = typed.get(fault.field)
            if found is None:
                number = isinstance(fault.value, (int, float))
                found = (
                    format_quantity(float(fault.value), fault.quantity, "metric")  # type: ignore[arg-type]
                    if fault.quantity and number
                    else f"{fault.value}"
                )
            place = places.get(fault.field, fault.field)
            self.add(file, lines.get(fault.field, line), place, fault.must, found)

    def close(self) -> None:
        """Raise `InputError` with all problems, each file's in the order of its lines."""
        if not self.problems:
            return
        files = list(dict.fromkeys(problem.file for problem in self.problems))
        ordered = sorted(
            dict.fromkeys(self.problems), key=lambda p: (files.index(p.file), p.line or 0)
        )
        raise InputError(ordered)
