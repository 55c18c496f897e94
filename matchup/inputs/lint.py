"""Check job files, catalogues and files of the ground, several at once."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from matchup.errors import InputError
from matchup.inputs.cushions import CushionCatalogue, read_cushions
from matchup.inputs.findings import Findings, shown_path
from matchup.inputs.hammers import read_hammers
from matchup.inputs.job_file import load_job
from matchup.inputs.layers import read_layers, read_resistance_table
from matchup.inputs.sounding import is_sounding, read_sounding
from matchup.inputs.table import read_table
from matchup.model.hammer import NO_CUSHION

JOB = "job"
HAMMERS = "hammer catalogue"
CUSHIONS = "cushion catalogue"
LAYERS = "table of layers"
RESISTANCE = "table of resistance"
CONE = "cone test"


def check_files(paths: Sequence[Path]) -> tuple[list[str], list[str]]:
    """Check files and return what each is, and notices.

    A job is checked with its catalogues. Hammer cushions given by name are held against the
    cushion catalogues among the files; without one they stay unchecked, with a notice.

    Parameters
    ----------
    paths : sequence of Path
        Jobs end in ``.toml``; every other file is known by its columns, or by how it begins.

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
    findings = Findings()
    kinds: dict[Path, str] = {}
    for path in paths:
        findings.begin(shown_path(path))
        kinds[path] = JOB if path.suffix.casefold() == ".toml" else _kind(path, findings)
    catalogue = _cushions(_of_kind(kinds, CUSHIONS), findings)
    for path in _of_kind(kinds, HAMMERS):
        hammers = read_hammers(path, catalogue, findings)
        if any(h.cushion is None and h.cushion_text != NO_CUSHION for h in hammers):
            what = "names of hammer cushions not checked; give the cushion catalogue too"
            findings.notice(shown_path(path), None, what)
    for path in _of_kind(kinds, LAYERS):
        read_layers(path, findings)
    for path in _of_kind(kinds, RESISTANCE):
        read_resistance_table(path, findings)
    for path in _of_kind(kinds, CONE):
        read_sounding(path, findings)
    for path in _of_kind(kinds, JOB):
        try:
            findings.notices += load_job(path).notices
        except InputError as error:
            findings.problems += error.problems
    findings.close()
    sound = [f"{shown_path(path)}: sound {kind}" for path, kind in kinds.items()]
    return sound, list(dict.fromkeys(findings.notices))


def _of_kind(kinds: dict[Path, str], kind: str) -> list[Path]:
    return [path for path, known in kinds.items() if known == kind]


def _cushions(paths: Sequence[Path], findings: Findings) -> CushionCatalogue | None:
    """Return the cushions of all catalogues together; None without any catalogue."""
    read = [read_cushions(path, findings) for path in paths]
    if not read:
        return None
    return CushionCatalogue(
        materials=tuple(material for one in read for material in one.materials),
        broken=tuple(name for one in read for name in one.broken),
        complete=all(one.complete for one in read),
    )


def _kind(path: Path, findings: Findings) -> str:
    """Return what a file holds, by its columns; note why where that can't be told."""
    if is_sounding(path):
        return CONE
    table = read_table(path, findings)
    if table is None:
        return ""
    names = " ".join(table.header.cells).casefold()
    if "ram" in names or "stroke" in names:
        return HAMMERS
    if "modulus" in names or "restitution" in names:
        return CUSHIONS
    if "bottom" in names and "soil" in names:
        return LAYERS
    if "shaft_" in names or "toe_" in names:
        return RESISTANCE
    if "cone" in names or "qc" in names:
        return CONE
    must = "must have the columns of a catalogue or of a file of the ground"
    do = "Job files end in .toml."
    findings.add(table.file, table.header.line, "", must, names[:60], do)
    return ""
