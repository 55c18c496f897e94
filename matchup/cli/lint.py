"""``matchup lint``."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Annotated

from cyclopts import Parameter

from matchup.cli.show import show_document


def lint(
    files: Annotated[list[Path], Parameter(help="Jobs, catalogues, ground files.", negative="")],
    /,
    *,
    json: Annotated[bool, Parameter(negative="", help="One JSON document on stdout.")] = False,
) -> int:
    """Check jobs, catalogues and files of the ground, several at once."""
    from matchup.inputs.lint import check_files

    sound, notices = check_files(files)
    if json:
        show_document({"problems": [], "sound": sound, "notices": notices})
        return 0
    for notice in notices:
        print(f"notice: {notice}", file=sys.stderr)
    print("\n".join(sound))
    return 0
