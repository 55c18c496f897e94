"""Everything that the commands print, and the files that they write."""

from __future__ import annotations

import json
import os
import shutil
import sys
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Literal, Protocol

from cyclopts import Parameter
from cyclopts.validators import Number

from matchup.errors import InputError, Problem
from matchup.report.files import figure_kind, write_file

if TYPE_CHECKING:
    from rich.status import Status

WIDEST = 100
QUIET_SECONDS = 1.0
THE_ANSWER_IS_NO = 3
"""Exit status of a command that ran, and whose answer is no."""


def _can_be_written(_: object, path: Path | None) -> None:
    """Refuse a file that can't be written before anything is computed for it."""
    if path is None:
        return
    if not path.name or path.is_dir():
        raise ValueError("Must be a file, not a folder.")
    if not path.parent.is_dir():
        raise ValueError(f"Must be in a folder that exists; {path.parent} does not.")
    if not os.access(path if path.exists() else path.parent, os.W_OK):
        raise ValueError("Must be a file that can be written; permission denied.")


def _can_be_drawn(_: object, path: Path | None) -> None:
    """Refuse a file whose ending names no kind of figure, or that can't be written."""
    _can_be_written(_, path)
    if path is not None:
        try:
            figure_kind(path)
        except InputError as error:
            problem = error.problems[0]
            raise ValueError(f"{problem.must.capitalize()}, but got {problem.found}.") from None


Plot = Annotated[
    Path | None,
    Parameter(help="Draw to this file: .svg, .png or .pdf.", validator=_can_be_drawn),
]
"""An option of the commands whose answer can be drawn."""

Samples = Annotated[
    int | None,
    Parameter(
        help="Play so many samples of the job's [doubt]; 0 for none.", validator=Number(gte=0)
    ),
]
"""An option of the commands whose plans can be played under doubt."""


@Parameter(name="*")
@dataclass(frozen=True)
class Common:
    """Options that all commands share."""

    json: Annotated[bool, Parameter(negative="", help="One JSON document on stdout.")] = False
    csv: Annotated[
        Path | None, Parameter(help="Write the table to this file.", validator=_can_be_written)
    ] = None
    display: Annotated[
        Literal["metric", "us"] | None, Parameter(help="Units of the output; default: the job's.")
    ] = None
    workers: Annotated[
        int | None, Parameter(help="Threads; default: all processors.", validator=Number(gte=1))
    ] = None
    quiet: Annotated[bool, Parameter(negative="", help="No messages on stderr.")] = False


def screen_width() -> int:
    """Return the width for tables: the terminal's, at most `WIDEST`; a file gets the widest."""
    if not sys.stdout.isatty():
        return WIDEST
    return max(40, min(WIDEST, shutil.get_terminal_size((WIDEST, 24)).columns))


def show_document(document: object) -> None:
    """Print one JSON document, in plain ASCII so that no console's encoding matters."""
    print(json.dumps(document, indent=1, allow_nan=False))


def show_problems(problems: Sequence[Problem], as_json: bool) -> None:
    """Print problems: on stderr for people, as the document on stdout for scripts."""
    if as_json:
        show_document({"problems": [problem.as_dict() for problem in problems]})
        return
    for problem in problems:
        # A problem of no place at all is its sentence alone.
        print(str(problem).removeprefix(": "), file=sys.stderr)
    if len(problems) > 1:
        print(f"{len(problems)} problems found.", file=sys.stderr)


class Showable(Protocol):
    """A result that knows how to show itself."""

    def to_text(self, display: str | None, width: int) -> str:
        """Return what is printed."""

    def to_csv(self, display: str | None) -> str:
        """Return the table for a file."""

    def to_dict(self) -> dict[str, object]:
        """Return the JSON document."""

    def plot(self, path: Path, display: str | None) -> None:
        """Draw the answer to a file."""


def show_result(
    result: Showable,
    common: Common,
    document: Callable[[], dict[str, object]] | None = None,
    plot: Path | None = None,
) -> None:
    """Write and print a result as the user asked for it.

    Parameters
    ----------
    result : Showable
    common : Common
    document : callable or None
        Makes the JSON document; None takes the result's own.
    plot : path or None
        File for a figure.
    """
    if plot:
        result.plot(plot, common.display)
        tell(common, f"wrote {plot}")
    if common.csv:
        write_file(common.csv, result.to_csv(common.display), "--csv")
        tell(common, f"wrote {common.csv}")
    if common.json:
        show_document((document or result.to_dict)())
    else:
        print(result.to_text(common.display, screen_width()))


def tell(common: Common, text: str) -> None:
    """Print a message on stderr unless the user wants none."""
    if not common.quiet:
        print(text, file=sys.stderr)


class Progress:
    """Says on stderr what a long run is at; silent in a file, with ``--quiet``, and for a second.

    The first run on a machine compiles the solver, which takes some seconds before the first blow.
    """

    def __init__(self, common: Common):
        self._shows = sys.stderr.isatty() and not common.quiet
        self._started = time.monotonic()
        self._blows = 0
        self._status: Status | None = None

    def __enter__(self) -> Progress:
        return self

    def __call__(self, blows: int) -> None:
        """Count a batch of blows."""
        self._blows += blows
        if not self._shows or time.monotonic() - self._started < QUIET_SECONDS:
            return
        if self._status is None:
            from rich.console import Console

            self._status = Console(stderr=True).status("")
            self._status.start()
        seconds = time.monotonic() - self._started
        self._status.update(f"{self._blows:,} blows in {seconds:.0f} s")

    def __exit__(self, *_: object) -> None:
        if self._status is not None:
            self._status.stop()
