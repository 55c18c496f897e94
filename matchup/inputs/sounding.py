"""Cone penetration tests in any of the formats that they come in."""

from __future__ import annotations

import re
from pathlib import Path

from matchup.inputs.findings import Findings, shown_path
from matchup.inputs.readings import condensed
from matchup.inputs.sounding_ags import read_ags
from matchup.inputs.sounding_bro import read_bro
from matchup.inputs.sounding_csv import read_csv
from matchup.inputs.sounding_gef import read_gef
from matchup.inputs.table import decode, read_bytes
from matchup.model.sounding import Sounding

FORMATS = (
    (re.compile(r"\s*#\s*\w+\s*="), read_gef),
    (re.compile(r"\s*<"), read_bro),
    (re.compile(r'\s*"?GROUP"?\s*,'), read_ags),
)
"""How the text of each format begins, and its reader; all other text is a table."""
_AGS_3 = re.compile(r'\s*"\*\*')
_END_OF_FILE = b"\x1a"
"""With which some old programs end a text file."""


def is_sounding(path: Path) -> bool:
    """Return whether a file is in a format of cone tests other than a table."""
    findings = Findings()
    data = read_bytes(path, findings)
    text = None if data is None or data[:2] == b"PK" else decode(str(path), data, findings)
    return text is not None and any(begins.match(text) for begins, _ in FORMATS)


def read_sounding(path: Path, findings: Findings, location: str | None = None) -> Sounding | None:
    """Return the cone penetration test that a file holds; problems go to `findings`.

    AGS 4, GEF-CPT, BRO-XML, CSV and XLSX are told apart by what is in the file, whatever its
    name ends in.

    Parameters
    ----------
    path : Path
    findings : Findings
        Takes problems; modified in place. Problems that differ only in line and value are told
        once, with a count.
    location : str or None
        Which test to read, where a file holds several: its name in the file.
    """
    own = Findings()
    sounding = _read(path, own, location)
    findings.problems += condensed(own.problems)
    findings.notices += own.notices
    return None if own.problems else sounding


def _read(path: Path, findings: Findings, location: str | None) -> Sounding | None:
    file = shown_path(path)
    data = read_bytes(path, findings)
    if data is None:
        return None
    if data[:2] == b"PK":
        return read_csv(path, findings, location)
    text = decode(file, data.rstrip(_END_OF_FILE), findings)
    if text is None:
        return None
    if not text.strip():
        findings.add(file, None, "", "must hold a cone penetration test", "an empty file")
        return None
    if _AGS_3.match(text):
        do = "Have it exported as AGS 4."
        findings.add(file, 1, "", "must be AGS 4", "an earlier edition", do)
        return None
    for begins, reader in FORMATS:
        if begins.match(text):
            return reader(file, text, findings, location)
    return read_csv(path, findings, location)
