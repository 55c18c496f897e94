"""A job file as text: where its keys stand, what was typed, and what is wrong with it."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from matchup.errors import Element, ModelError
from matchup.inputs.findings import Findings, shown_fault, shown_path
from matchup.inputs.table import decode, file_fault, read_bytes
from matchup.inputs.toml_lines import Path as KeyPath
from matchup.inputs.toml_lines import Spot, key_spots, spot_of

_NOWHERE = Spot(0, "")
NOT_RENAMED: Mapping[str, str] = {}


class JobText:
    """A job file as text: finds lines and what was typed, and notes problems.

    Parameters
    ----------
    file : str
        As it is shown.
    folder : Path
        That the paths in the file are relative to.
    text : str
    data : dict
        The document.
    findings : Findings

    Attributes
    ----------
    unread : set of path
        Keys whose values are told to be wrong already; builders get stand-ins for them, and
        nothing that follows from a stand-in is told.
    """

    def __init__(
        self, file: str, folder: Path, text: str, data: dict[str, Any], findings: Findings
    ):
        self.file = file
        self.folder = folder
        self.data = data
        self.findings = findings
        self.unread: set[KeyPath] = set()
        self._spots = key_spots(text)

    def line(self, path: KeyPath) -> int | None:
        """Return the line of a key, or of what holds it."""
        spot = spot_of(self._spots, path)
        return spot.line if spot else None

    def typed(self, path: KeyPath) -> str:
        """Return a value as typed, or nothing where there is none."""
        return self._spots.get(path, _NOWHERE).typed

    def place(self, path: KeyPath) -> str:
        """Return a key in words: ``stages 2 ("mid depth").toe``."""
        words = ""
        for depth, part in enumerate(path):
            if isinstance(part, int):
                words += f" {part + 1}"
                name = self.typed((*path[: depth + 1], "name"))
                words += f" ({name})" if name else ""
            else:
                words += f".{part}" if words else part
        return words

    def is_unread(self, *path: str | int) -> bool:
        """Return whether a key, or a table that holds it, is told to be wrong already."""
        return any(path[:end] in self.unread for end in range(1, len(path) + 1))

    def wrong(self, path: KeyPath, must: str, do: str = "", found: str | None = None) -> None:
        """Note a problem of a key, unless its value could not be read in the first place."""
        if not self.is_unread(*path):
            self.tell(path, must, do, found)

    def tell(self, path: KeyPath, must: str, do: str = "", found: str | None = None) -> None:
        """Note a problem of a key."""
        shown = self.typed(path) if found is None else found
        self.findings.add(self.file, self.line(path), self.place(path), must, shown, do)

    def wrong_model(
        self, error: ModelError, path: KeyPath, keys: Mapping[str, str] = NOT_RENAMED
    ) -> None:
        """Note what a model object says of itself; `keys` are its fields' names in the file."""
        for fault in error.faults:
            full = (*path, *keys.get(fault.field, fault.field).split("."))
            # Of a list, the model names the element that is wrong.
            typed = self.typed(full) if not isinstance(fault.value, Element) else ""
            self.wrong(full, fault.must, fault.do, found=typed or shown_fault(fault))

    def notice(self, path: KeyPath, what: str) -> None:
        """Note something about a key that is no problem."""
        self.findings.notice(self.file, self.line(path), f"{self.place(path)} {what}")


def named_file(text: JobText, key: KeyPath, named: str | None) -> Path | None:
    """Return the path of a file that a key names, or note on the key why there is none to read."""
    if named is None or text.is_unread(*key):
        return None
    path = text.folder / named
    fault = file_fault(path)
    if fault is None:
        return path
    typed = text.typed(key)
    found = f"{typed}, {fault.found}" if fault.found else typed
    text.wrong(key, fault.must, fault.do, found)
    return None


def read_job_text(path: Path, findings: Findings) -> JobText | None:
    """Read a job file, or note why that can't be done."""
    data = read_bytes(path, findings)
    file = shown_path(path)
    text = None if data is None else decode(file, data, findings)
    if text is None:
        return None
    if not text.strip():
        do = "`matchup new DIR` writes a job to start from."
        findings.add(file, None, "", "must hold a job", "an empty file", do)
        return None
    text = text.replace("\r\n", "\n")
    try:
        return JobText(file, path.parent, text, tomllib.loads(text), findings)
    except tomllib.TOMLDecodeError as error:
        _note_syntax(file, text, str(error), findings)
    except (RecursionError, ValueError) as error:
        # Tables nested without end, and dates or numbers that there are none of.
        why = "nested too deeply" if isinstance(error, RecursionError) else str(error)
        findings.add(file, None, "", f"must be valid TOML; this is not: {why}")
    return None


_REMEDIES = (
    (r"=\s*[+-]?[\d.]+[ \t]*[A-Za-z%]", 'A value with its unit is a text: write "400 mm".'),
    (r"=\s*[+-]?\d+,\d", 'Write a decimal point, and a value with its unit as a text: "7.5 m".'),
    (r"=\s*(True|TRUE|False|FALSE|yes|no)\b", "Write true or false."),
    (r'=\s*"[^"]*\\', 'Write "/" in paths, or put a text with backslashes in single quotes.'),
    (r"=\s*[A-Za-z]", 'A text needs quotes: "like this".'),
    (r"=\s*(#.*)?$", "A value is missing behind the equals sign."),
    (r"[\u2018\u2019\u201c\u201d\u201e]", 'Write straight quotes: "like this".'),
    (r"^\s*[\w.-]+\s*:", "Write an equals sign between key and value."),
    (r"""^[^"']*["'][^"']*$""", "A quote is missing."),
)
"""What lines that are no TOML look like, and what helps."""


def _note_syntax(file: str, text: str, message: str, findings: Findings) -> None:
    lines = text.rstrip().split("\n")
    match = re.fullmatch(r"(.*) \(at line (\d+), column (\d+)\)", message, re.DOTALL)
    if match:
        what, line, place = match.group(1), int(match.group(2)), f"column {match.group(3)}"
    else:
        what, line, place = message.replace(" (at end of document)", ""), len(lines), "the end"
    typed = lines[line - 1].strip() if line <= len(lines) else ""
    do = next((do for pattern, do in _REMEDIES if re.search(pattern, typed)), "")
    if "overwrite" in what or "twice" in what or "declare" in what:
        do = "A key or table may be there once; several stages are [[stages]] each."
    what = f"{what[:1].lower()}{what[1:]}".replace(r"'\n'", "line end")
    what = re.sub(r"\((?:'[^']*',? ?)+\)", lambda m: ".".join(re.findall("'([^']*)'", m[0])), what)
    findings.add(file, line, place, f"must be valid TOML ({what})", typed[:60], do)
