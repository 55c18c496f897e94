"""The command `matchup`: names the commands and turns what happened into an exit status."""

from __future__ import annotations

import io
import os
import sys
from collections.abc import Sequence

from cyclopts import App, CycloptsError

from matchup import __version__
from matchup.cli.show import show_problems
from matchup.errors import InputError, MatchupError, Problem

FAULT = 1
WRONG_USAGE = 2
INTERRUPTED = 130

app = App(
    name="matchup",
    help=(
        "Match hammer, cushion and pile: find for every hammer of your catalogue the stroke and "
        "pile cushion that reach the target set at least energy within stress limits.\n\n"
        "Exit status: 0 yes, 1 an input or an analysis is at fault, 2 wrong usage, 3 the answer "
        "is no."
    ),
    version=f"matchup {__version__}",
    help_format="plaintext",
    suppress_keyboard_interrupt=False,
)
# Named as text, so that solver and readers load only when their command runs.
app.command("matchup.cli.rank:rank", help="Rank every hammer of the job's catalogue.")
app.command("matchup.cli.check:check", help="Can this hammer drive this pile, and if not, why?")
app.command("matchup.cli.window:window", help="Stroke against cushion: where it works.")
app.command("matchup.cli.drive:drive", help="The whole drive by depth, in every ground case.")
app.command("matchup.cli.blow:blow", help="Compute one blow in detail.")
app.command("matchup.cli.report:report", help="Write the report for a tender.")
app.command("matchup.cli.new:new", help="Write a starter job with catalogues.")
app.command("matchup.cli.lint:lint", help="Check job files and catalogues.")
app.command("matchup.cli.schema:schema", help="JSON Schema of the job file, for editors.")
app.command("matchup.cli.completion:completion", help="Completion script for a shell.")


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command line and return its exit status.

    Parameters
    ----------
    arguments : sequence of str or None
        Without the program's name; None takes them from the system.
    """
    words = list(sys.argv[1:] if arguments is None else arguments)
    as_json = "--json" in words
    for stream in (sys.stdout, sys.stderr):
        # A name that the console can't write must not end the run.
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")
    try:
        status = _run(words, as_json)
        sys.stdout.flush()
        return status
    except KeyboardInterrupt:
        print("stopped", file=sys.stderr)
        return INTERRUPTED
    except BrokenPipeError:
        _drop_output()
        return 0
    except OSError as error:
        _drop_output()
        print(f"the output can't be written: {error.strerror or error}.", file=sys.stderr)
        return FAULT


def _run(words: Sequence[str], as_json: bool) -> int:
    """Run a command; show what a user can have caused, and return the exit status."""
    try:
        status = app(
            words, exit_on_error=False, print_error=not as_json, result_action="return_value"
        )
    except CycloptsError as error:
        if as_json:
            show_problems([Problem(None, None, "", str(error).strip(), "")], as_json)
        return WRONG_USAGE
    except InputError as error:
        show_problems(error.problems, as_json)
        return FAULT
    except MatchupError as error:
        show_problems([Problem(None, None, "", str(error), "")], as_json)
        return FAULT
    return status if isinstance(status, int) else 0


def _drop_output() -> None:
    """Keep the interpreter from complaining, while it shuts down, that nobody takes its output."""
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def run() -> None:
    """Run as a program."""
    sys.exit(main())
