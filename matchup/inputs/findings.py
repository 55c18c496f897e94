"""Problems and notices, gathered while files are read."""

from __future__ import annotations

import os
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path

from matchup.errors import Fault, InputError, ModelError, Problem, did_you_mean
from matchup.units import format_quantity

__all__ = ["Findings", "did_you_mean", "shown_fault", "shown_path", "some"]

MOST_NAMED = 8


@dataclass
class Findings:
    """What readers found: problems of all files, in the order of reading, notices, and digests.

    Parameters
    ----------
    digests : dict
        SHA-256 of the files that were read, by the name under which they are shown.
    """

    problems: list[Problem] = field(default_factory=list)
    notices: list[str] = field(default_factory=list)
    files: list[str] = field(default_factory=list)
    digests: dict[str, str] = field(default_factory=dict)

    def begin(self, file: str) -> None:
        """Give a file its turn among the problems, whichever of them is found first."""
        if file not in self.files:
            self.files.append(file)

    def add(
        self, file: str, line: int | None, place: str, must: str, found: str = "", do: str = ""
    ) -> None:
        """Note a problem."""
        self.begin(file)
        self.problems.append(Problem(file, line, place, must, found, do))

    def add_model_error(
        self,
        error: ModelError,
        file: str,
        lines: Mapping[str, int | None],
        typed: Mapping[str, str],
        places: Mapping[str, str],
    ) -> None:
        """Note what a model object of a whole file says of itself.

        Parameters
        ----------
        lines, typed, places : mapping
            By the model's field: its line, its text as typed, and what the file calls it.
        """
        for fault in error.faults:
            name = fault.field
            found = typed.get(name) or shown_fault(fault)
            self.add(
                file, lines.get(name), places.get(name, f"`{name}`"), fault.must, found, fault.do
            )

    def notice(self, file: str, line: int | None, text: str) -> None:
        """Note something that is no problem."""
        self.notices.append(f"{file}, line {line}: {text}" if line else f"{file}: {text}")

    def ordered(self) -> list[Problem]:
        """Return every problem once, file by file, each file's in the order of its lines."""
        files = [*self.files, *(p.file for p in self.problems)]
        return sorted(
            dict.fromkeys(self.problems), key=lambda p: (files.index(p.file), p.line or 0)
        )

    def close(self) -> None:
        """Raise `InputError` if there is any problem."""
        if self.problems:
            raise InputError(self.ordered())


def shown_path(path: Path) -> str:
    """Return a path as it is shown: without detours, from the working directory if inside it."""
    typed = str(path)
    if not typed.isprintable():
        return typed.encode("unicode_escape").decode("ascii")
    try:
        plain = os.path.relpath(typed) if _lies_inside(typed) else os.path.normpath(typed)
        # With a linked folder on the way, `..` may lead elsewhere than the letters say.
        return plain if os.path.realpath(plain) == os.path.realpath(typed) else typed
    except (OSError, ValueError):
        return typed


def _lies_inside(path: str) -> bool:
    here = os.getcwd()
    return os.path.commonpath([here, os.path.abspath(path)]) == here


def shown_fault(fault: Fault) -> str:
    """Return the value that breaks a model's rule in words, with its unit."""
    if isinstance(fault.value, float):
        return format_quantity(fault.value, fault.quantity or "number", "metric")
    return str(fault.value)


def some(names: Sequence[str]) -> str:
    """Return the first of many names, and how many more there are."""
    more = f" and {len(names) - MOST_NAMED} more" if len(names) > MOST_NAMED else ""
    return ", ".join(names[:MOST_NAMED]) + more
