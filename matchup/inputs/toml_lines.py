"""Where the keys of a TOML document stand; the standard reader does not say."""

from __future__ import annotations

import re

Path = tuple[str | int, ...]

_TABLE = re.compile(r"\s*(\[\[|\[)\s*(.+?)\s*(\]\]|\])\s*(#.*)?$")
_KEY = re.compile(
    r"""\s*((?:[A-Za-z0-9_-]+|"[^"]*"|'[^']*')(?:\s*\.\s*(?:[A-Za-z0-9_-]+|"[^"]*"|'[^']*'))*)\s*="""
)
_PART = re.compile(r"""[A-Za-z0-9_-]+|"[^"]*"|'[^']*'""")
_QUOTED = re.compile(r'"(?:\\.|[^"\\])*"|\'[^\']*\'')


def key_lines(text: str) -> dict[Path, int]:
    """Return the line of every table and key, counted from 1.

    Keys within inline tables and arrays have no line of their own; `line_of` falls back to the key
    that holds them.

    Parameters
    ----------
    text : str
        A document that the standard reader accepts.
    """
    lines: dict[Path, int] = {}
    counts: dict[Path, int] = {}
    table: Path = ()
    depth = 0
    fence = ""
    for number, line in enumerate(text.splitlines(), 1):
        if fence:
            if fence in line:
                fence = ""
            continue
        if depth == 0:
            if match := _TABLE.match(line):
                table = tuple(_parts(match.group(2)))
                if match.group(1) == "[[":
                    counts[table] = counts.get(table, -1) + 1
                table = _with_counts(table, counts)
                lines.setdefault(table, number)
                continue
            if match := _KEY.match(line):
                lines.setdefault((*table, *_parts(match.group(1))), number)
                line = line[match.end() :]
        bare = _QUOTED.sub("", line)
        for mark in ('"""', "'''"):
            if line.count(mark) % 2:
                fence = mark
        bare = bare.split("#")[0]
        depth = max(0, depth + sum(bare.count(c) for c in "[{") - sum(bare.count(c) for c in "]}"))
    return lines


def _parts(dotted: str) -> list[str]:
    return [part.strip("\"'") for part in _PART.findall(dotted)]


def _with_counts(table: Path, counts: dict[Path, int]) -> Path:
    """Return the path with the number of the current element behind each array of tables."""
    full: list[str | int] = []
    for end, part in enumerate(table, 1):
        full.append(part)
        if table[:end] in counts:
            full.append(counts[table[:end]])
    return tuple(full)


def line_of(lines: dict[Path, int], path: Path) -> int | None:
    """Return the line of a key, or of the nearest table or key that holds it."""
    for end in range(len(path), 0, -1):
        if path[:end] in lines:
            return lines[path[:end]]
    return None
