"""``matchup new``."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

from cyclopts import Parameter

from matchup.errors import InputError, Problem
from matchup.report.files import write_file


def new(folder: Annotated[Path, Parameter(help="New or empty folder.")]) -> int:
    """Write a commented starter job with catalogues, and say the next command."""
    from matchup.inputs.starter import starter_files

    texts = starter_files()
    try:
        there = sorted(name for name in texts if (folder / name).exists())
        if there:
            must = "must not hold the starter job's files yet; nothing is overwritten"
            raise InputError([Problem(str(folder), None, "", must, ", ".join(there))])
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        must = "must be a folder that can be made"
        why = error.strerror or str(error)
        raise InputError([Problem(str(folder), None, "", must, why)]) from None
    for name, text in texts.items():
        write_file(folder / name, text, "")
    print(f"wrote {', '.join(texts)} to {folder}")
    print(f"next: matchup rank {folder / 'job.toml'}")
    return 0
