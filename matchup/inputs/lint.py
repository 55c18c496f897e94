"""Check job files and catalogues, several at once."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from matchup.errors import InputError, Problem
from matchup.inputs.cushions import read_cushions
from matchup.inputs.findings import Findings
from matchup.inputs.hammers import read_hammers
from matchup.inputs.job_file import load_job
from matchup.inputs.table import read_table
from matchup.model.cushion import CushionMaterial

JOB = "job"
HAMMERS = "hammer catalogue"
CUSHIONS = "cushion catalogue"


def check_files(paths: Sequence[Path]) -> tuple[list[str], list[str]]:
    """Check files and return what each is, and notices.

    A job is checked with its catalogues. Hammer cushions given by name are held against the
    cushion catalogues among the files; without one they stay unchecked, with a notice.

    Parameters
    ----------
    paths : sequence of Path
        Jobs end in ``.toml``; every other file is a catalogue, known by its columns.

    Returns
    -------
    sound : list of str
        One line for each file.
    notices : list of str

    Raises
    ------
    InputError
        With every problem of every file.
    """
    problems: list[Problem] = []
    notices: list[str] = []
    kinds = {path: JOB if path.suffix.casefold() == ".toml" else "" for path in paths}
    for path in paths:
        if not kinds[path]:
            kinds[path] = _kind(path, problems)
    materials: list[CushionMaterial] = []
    for path in _of_kind(kinds, CUSHIONS):
        findings = Findings()
        materials += read_cushions(path, findings)
        problems += findings.problems
        notices += findings.notices
    known = materials if _of_kind(kinds, CUSHIONS) else None
    for path in _of_kind(kinds, HAMMERS):
        findings = Findings()
        read_hammers(path, known, findings)
        problems += findings.problems
        notices += findings.notices
        if known is None:
            notices.append(f"{path}: names of hammer cushions not checked; give the catalogue too")
    for path in _of_kind(kinds, JOB):
        try:
            notices += load_job(path).notices
        except InputError as error:
            problems += error.problems
    if problems:
        raise InputError(list(dict.fromkeys(problems)))
    return [f"{path}: sound {kind}" for path, kind in kinds.items()], list(dict.fromkeys(notices))


def _of_kind(kinds: dict[Path, str], kind: str) -> list[Path]:
    return [path for path, known in kinds.items() if known == kind]


def _kind(path: Path, problems: list[Problem]) -> str:
    """Return what a catalogue holds, by its columns; note why where that can't be told."""
    findings = Findings()
    table = read_table(path, findings)
    if table is None:
        problems += findings.problems
        return ""
    names = " ".join(table.header.cells)
    if "ram" in names.casefold() or "stroke" in names.casefold():
        return HAMMERS
    if "modulus" in names.casefold() or "restitution" in names.casefold():
        return CUSHIONS
    must = "must have the columns of a hammer or a cushion catalogue"
    do = "Job files end in .toml."
    problems.append(Problem(str(path), table.header.line, "", must, names[:60], do))
    return ""
