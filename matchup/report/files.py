"""Files are written whole or not at all."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from contextlib import suppress
from pathlib import Path

from matchup.errors import InputError, Problem

FIGURES = ("svg", "png", "pdf")
"""Kinds of files that a figure can be written as."""
PART = ".part"
"""Ending of a file that is being written."""


def figure_kind(path: Path, place: str = "plot") -> str:
    """Return which kind of figure file a name asks for, by its ending.

    Raises
    ------
    InputError
        If it is none that can be drawn.
    """
    kind = path.suffix.lower().removeprefix(".")
    if kind in FIGURES:
        return kind
    found = f"the ending {path.suffix!r}" if path.suffix else "no ending"
    must = f"must end in {', '.join(f'.{name}' for name in FIGURES[:-1])} or .{FIGURES[-1]}"
    raise InputError([Problem(str(path), None, place, must, found)])


def write_file(path: Path, content: str | bytes, place: str) -> None:
    """Write a file whole or not at all; a device or a pipe gets it as it comes.

    Parameters
    ----------
    content : str or bytes
        A text is written as UTF-8, its line ends as they are.
    place : str
        The option that named the file, for the message.

    Raises
    ------
    InputError
        If it can't be written.
    """
    data = content.encode("utf-8", "backslashreplace") if isinstance(content, str) else content
    try:
        if path.exists() and not path.is_file():
            path.write_bytes(data)
        else:
            _write_all({path: data})
    except OSError as error:
        why = f"the answer: {error.strerror or error}"
        problem = Problem(str(path), None, place, "must be a file that can be written", why)
        raise InputError([problem]) from None


def write_folder(folder: Path, files: Mapping[str, bytes], place: str) -> None:
    """Write files to a folder, which is made if need be: all of them or none.

    Raises
    ------
    InputError
        If they can't be written.
    """
    is_new = not folder.exists()
    try:
        folder.mkdir(parents=True, exist_ok=True)
        try:
            _write_all({folder / name: data for name, data in files.items()})
        except BaseException:
            if is_new:
                with suppress(OSError):
                    folder.rmdir()
            raise
    except OSError as error:
        why = f"the answer: {error.strerror or error}"
        must = "must be a folder that can be written to"
        raise InputError([Problem(str(folder), None, place, must, why)]) from None


def refuse_taken(folder: Path, names: Iterable[str], place: str) -> None:
    """Refuse a folder that holds some of the files already, or that is none.

    Raises
    ------
    InputError
    """
    if folder.exists() and not folder.is_dir():
        must = "must be a folder, or not exist yet"
        raise InputError([Problem(str(folder), None, place, must, "a file")])
    taken = sorted(name for name in names if (folder / name).exists())
    if taken:
        must = "must not hold a report yet"
        do = "Name another folder, or --force to replace these files."
        raise InputError([Problem(str(folder), None, place, must, ", ".join(taken), do)])


def _write_all(files: Mapping[Path, bytes]) -> None:
    """Write every file beside its place first, and put them there when all are whole."""
    parts = {path: path.with_name(path.name + PART) for path in files}
    try:
        for path, data in files.items():
            parts[path].write_bytes(data)
        for path, part in parts.items():
            part.replace(path)
    except BaseException:
        for part in parts.values():
            with suppress(OSError):
                part.unlink(missing_ok=True)
        raise
