"""The job file: TOML to a checked job, with every problem of every file told at once."""

from __future__ import annotations

import os
import tomllib
from pathlib import Path
from typing import TYPE_CHECKING, Any

from matchup.errors import ModelError, Problem
from matchup.inputs.cushions import read_cushions
from matchup.inputs.findings import Findings, did_you_mean
from matchup.inputs.hammers import read_hammers
from matchup.inputs.table import decode, read_bytes
from matchup.inputs.toml_lines import Path as KeyPath
from matchup.inputs.toml_lines import key_lines, line_of
from matchup.model.job import Job

if TYPE_CHECKING:
    from pydantic_core import ErrorDetails

    from matchup.inputs.schema import JobKeys

LATER = {
    "ground": "Ground profiles can't be read yet; give the resistances as [[stages]].",
    "repeat_blows": "Repeated blows can't be computed yet; leave the key out.",
}
"""Keys of jobs that this version can't do, with what to do instead."""


class JobText:
    """A job file as text: finds lines and what was typed, and notes problems.

    Parameters
    ----------
    file : str
        As the user named it.
    text : str
    data : dict
        The document.
    findings : Findings
    """

    def __init__(self, file: str, text: str, data: dict[str, Any], findings: Findings):
        self.file = file
        self.data = data
        self.findings = findings
        self._lines = key_lines(text)

    def line(self, path: KeyPath) -> int | None:
        """Return the line of a key."""
        return line_of(self._lines, path)

    def typed(self, path: KeyPath) -> str:
        """Return a value as typed, or nothing where there is none."""
        value: Any = self.data
        for part in path:
            try:
                value = value[part]
            except (KeyError, IndexError, TypeError):
                return ""
        return f'"{value}"' if isinstance(value, str) else _plain(value)

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

    def wrong(self, path: KeyPath, must: str, do: str = "", found: str | None = None) -> None:
        """Note a problem of a key."""
        shown = self.typed(path) if found is None else found
        self.findings.add(self.file, self.line(path), self.place(path), must, shown, do)

    def wrong_model(self, error: ModelError, path: KeyPath, keys: dict[str, str]) -> None:
        """Note what a model object says of itself; `keys` are its fields' names in the file."""
        for fault in error.faults:
            key = keys.get(fault.field, fault.field)
            full = (*path, key) if key else path
            typed = self.typed(full) if key else ""
            self.wrong(full, fault.must, found=typed or f"{fault.value}")


def load_job(path: str | os.PathLike[str]) -> Job:
    """Read a job file and its catalogues.

    Parameters
    ----------
    path : path
        Of the job file; the paths in it are relative to it.

    Raises
    ------
    InputError
        With every problem of the job file and of its catalogues, in file order.
    """
    findings = Findings()
    text = _read(Path(path), findings)
    keys = None if text is None else _check_keys(text)
    if text is None or keys is None:
        findings.close()
        raise AssertionError("a file without keys has problems")
    return _job(text, keys, findings)


def _read(path: Path, findings: Findings) -> JobText | None:
    data = read_bytes(path, findings)
    text = None if data is None else decode(str(path), data, findings)
    if text is None:
        return None
    if not text.strip():
        findings.add(str(path), None, "", "must hold a job", "an empty file")
        return None
    text = text.replace("\r\n", "\n")
    try:
        return JobText(str(path), text, tomllib.loads(text), findings)
    except tomllib.TOMLDecodeError as error:
        line, message = _where(error, text)
        findings.add(str(path), line, "", f"must be valid TOML: {message}")
    except (RecursionError, ValueError) as error:
        findings.add(str(path), None, "", "must be valid TOML", str(error))
    return None


def _where(error: tomllib.TOMLDecodeError, text: str) -> tuple[int | None, str]:
    """Return line and message of a syntax error."""
    message = str(error)
    if "(at line " in message:
        what, _, where = message.partition(" (at line ")
        line, _, column = where.rstrip(")").partition(", column ")
        return int(line), f"{what[:1].lower()}{what[1:]}, column {column}"
    return len(text.splitlines()), message.replace("(at end of document)", "at the end of the file")


def _check_keys(text: JobText) -> JobKeys | None:
    from pydantic import ValidationError

    from matchup.inputs.schema import JobKeys

    try:
        return JobKeys.model_validate(text.data)
    except ValidationError as error:
        told: set[KeyPath] = set()
        for detail in error.errors(include_url=False):
            _note(text, detail, told)
        return None


def _note(text: JobText, detail: ErrorDetails, told: set[KeyPath]) -> None:
    """Turn one of pydantic's errors into a problem; a choice of types gives one, not several."""
    path = _real_path(text, detail["loc"])
    if path in told:
        return
    told.add(path)
    kind = detail["type"]
    context = detail.get("ctx", {})
    if kind == "extra_forbidden":
        key = str(path[-1])
        known = _known_keys(path[:-1])
        must = "must be a known key"
        do = LATER.get(key) or did_you_mean(key, known) or f"Known: {', '.join(known)}."
        text.wrong(path, must, do, found=f"`{key}`")
    elif kind == "missing":
        text.findings.add(text.file, text.line(path), text.place(path), "must be given")
    elif kind == "value_error":
        cause = context.get("error")
        must, do = getattr(cause, "must", str(cause)), getattr(cause, "do", "")
        text.wrong(path, must, do)
    elif kind in ("literal_error", "enum"):
        options = str(context.get("expected", "")).replace("'", "").replace(" or ", ", ")
        typed = text.typed(path).strip('"')
        text.wrong(path, f"must be one of: {options}", did_you_mean(typed, options.split(", ")))
    else:
        message = detail["msg"]
        text.wrong(path, _must(kind, message))


def _must(kind: str, message: str) -> str:
    words = {
        "string_type": "must be a text",
        "int_type": "must be a whole number",
        "int_from_float": "must be a whole number",
        "float_type": "must be a number",
        "bool_type": "must be true or false",
        "list_type": "must be a list",
        "dict_type": "must be a table of keys",
        "model_type": "must be a table of keys",
    }
    return words.get(kind, f"must be as expected ({message.lower()})")


def _real_path(text: JobText, where: tuple[int | str, ...]) -> KeyPath:
    """Return the path in the file: pydantic adds the names of types that it tried."""
    path: list[str | int] = []
    value: Any = text.data
    for depth, part in enumerate(where):
        last = depth == len(where) - 1
        if isinstance(value, dict) and (part in value or (last and not _is_type(part))):
            path.append(part)
            value = value.get(part)
        elif isinstance(value, list) and isinstance(part, int):
            path.append(part)
            value = value[part] if part < len(value) else None
        elif value is text.data and depth == 0:
            path.append(part)
            value = None
    return tuple(path)


def _is_type(part: int | str) -> bool:
    """Return whether a part of pydantic's path names a type and no key."""
    return (
        isinstance(part, int)
        or part in ("int", "float", "str")
        or "[" in part
        or part[:1].isupper()
    )


def _known_keys(path: KeyPath) -> list[str]:
    """Return the keys that a table of the job file may have."""
    from matchup.inputs import schema

    tables: dict[str, type[schema.Keys]] = {
        "catalog": schema.CatalogKeys,
        "pile": schema.PileKeys,
        "helmet": schema.HelmetKeys,
        "pile_cushion": schema.PileCushionKeys,
        "hammer_cushion": schema.HammerCushionKeys,
        "stages": schema.StageKeys,
        "target": schema.TargetKeys,
        "limits": schema.LimitsKeys,
        "search": schema.SearchKeys,
        "analysis": schema.AnalysisKeys,
    }
    if not path:
        model: type[schema.Keys] = schema.JobKeys
    elif path[-1] == "sheets":
        model = schema.SheetRange
    elif path[-1] == "thickness":
        model = schema.ThicknessRange
    else:
        model = tables.get(str(path[0]), schema.JobKeys)
    return [field.alias or name for name, field in model.model_fields.items()]


def _plain(value: Any) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, (dict, list)):
        shown = str(value)
        return shown if len(shown) <= 60 else shown[:57] + "..."
    return str(value)


def _job(text: JobText, keys: JobKeys, findings: Findings) -> Job:
    """Build the job from keys that are sound one by one."""
    from matchup.inputs import build

    folder = Path(text.file).parent
    pile = build.build_pile(text, keys.pile)
    limits = build.build_limits(text, keys, pile)
    stages = build.build_stages(text, keys, pile)
    analysis, search = build.build_settings(text, keys)

    cushions_path = keys.catalog.cushions
    materials = read_cushions(folder / cushions_path, findings) if cushions_path else ()
    space = build.build_cushion_space(text, keys, pile, materials)
    others = build.build_hammer_cushions(text, keys, materials)
    hammers = read_hammers(folder / keys.catalog.hammers, materials, findings)
    hammers = build.with_helmets(text, keys, hammers)
    findings.close()
    assert pile is not None
    assert limits is not None
    assert stages is not None
    assert analysis is not None
    assert search is not None
    try:
        return Job(
            title=keys.title,
            hammers=hammers,
            pile=pile,
            cushions=space,
            stages=stages,
            limits=limits,
            hammer_cushions=others,
            search=search,
            analysis=analysis,
            display=keys.display,
            file=text.file,
            notices=tuple(findings.notices),
        )
    except ModelError as error:
        for fault in error.faults:
            findings.problems.append(
                Problem(text.file, None, fault.field, fault.must, str(fault.value))
            )
        findings.close()
        raise
