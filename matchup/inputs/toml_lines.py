"""Where the keys of a TOML document stand and what was typed; the standard reader does not say."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator
from typing import NamedTuple

Path = tuple[str | int, ...]

_TOKEN = re.compile(
    r'''"""(?:\\.|[^\\])*?"{3,5}|\'\'\'.*?\'{3,5}'''  # texts over several lines
    r"""|"(?:\\.|[^"\\\n])*"|'[^'\n]*'"""  # texts
    r"""|\#[^\n]*|\n|[ \t\r]+|[\[\]{}=,]|[^\s\[\]{}=,"'\#]+""",
    re.DOTALL,
)
LONGEST_SHOWN = 60


class Spot(NamedTuple):
    """The line of a key, counted from 1, and its value as typed."""

    line: int
    typed: str


class _Token(NamedTuple):
    text: str
    line: int
    start: int
    end: int


def key_spots(text: str) -> dict[Path, Spot]:
    """Return the spot of every table, key and element.

    A table has its header as typed. Elements of arrays and keys of inline tables have spots of
    their own.

    Parameters
    ----------
    text : str
        A document that the standard reader accepts.
    """
    return _Scan(text).spots


def spot_of(spots: dict[Path, Spot], path: Path) -> Spot | None:
    """Return the spot of a key, or of the nearest table or key that holds it."""
    for end in range(len(path), 0, -1):
        if path[:end] in spots:
            return spots[path[:end]]
    return None


class _Scan:
    """One walk over the tokens of a sound document; knows nothing of types."""

    def __init__(self, text: str):
        self.text = text
        self.spots: dict[Path, Spot] = {}
        self._counts: dict[Path, int] = {}
        self._tokens = list(_tokens(text))
        self._at = 0
        table: Path = ()
        while self._at < len(self._tokens):
            if self._sign() == "\n":
                self._at += 1
            elif self._sign() == "[":
                table = self._header()
            else:
                self._pair(table)

    def _sign(self) -> str:
        return self._tokens[self._at].text if self._at < len(self._tokens) else ""

    def _next(self) -> _Token:
        token = self._tokens[self._at]
        self._at += 1
        return token

    def _skip_lines(self) -> None:
        while self._sign() == "\n":
            self._at += 1

    def _header(self) -> Path:
        first = self._next()
        many = self._sign() == "["
        self._at += many
        name = self._key()
        last = self._next()
        if many:
            last = self._next()
            self._counts[name] = self._counts.get(name, -1) + 1
        path = self._counted(name)
        typed = self.text[first.start : last.end]
        if many:
            self.spots.setdefault(path[:-1], Spot(first.line, typed))
        self.spots.setdefault(path, Spot(first.line, typed))
        return path

    def _counted(self, name: Path) -> Path:
        """Return the path with the number of the current element behind each array of tables."""
        full: list[str | int] = []
        for end, part in enumerate(name, 1):
            full.append(part)
            if name[:end] in self._counts:
                full.append(self._counts[name[:end]])
        return tuple(full)

    def _key(self) -> Path:
        """Read a key, whose parts may be dotted and quoted."""
        words = []
        while self._sign() not in ("=", "]"):
            words.append(self._next().text)
        parts: list[str] = []
        for word in words:
            quoted = word[0] in "\"'"
            parts += [tomllib.loads(f"x={word}")["x"]] if quoted else filter(None, word.split("."))
        return tuple(parts)

    def _pair(self, table: Path) -> None:
        line = self._tokens[self._at].line
        path = (*table, *self._key())
        self._next()
        self._value(path, line)

    def _value(self, path: Path, line: int) -> None:
        start = self._at
        first = self._next()
        if first.text == "[":
            self._elements(path)
        elif first.text == "{":
            self._inline(path)
        else:
            # A date and a time with a blank between them are two tokens.
            while self._sign() not in ("\n", ",", "]", "}", ""):
                self._at += 1
        self.spots.setdefault(path, Spot(line, self._typed(start)))

    def _typed(self, start: int) -> str:
        """Return the text from a token up to here, on one line and without comments."""
        words = ""
        end = self._tokens[start].start
        for token in self._tokens[start : self._at]:
            words += (" " if token.start > end else "") + token.text
            end = token.end
        typed = " ".join(words.split())
        return typed if len(typed) <= LONGEST_SHOWN else typed[: LONGEST_SHOWN - 3] + "..."

    def _elements(self, path: Path) -> None:
        place = 0
        self._skip_lines()
        while self._sign() != "]":
            self._value((*path, place), self._tokens[self._at].line)
            place += 1
            self._skip_lines()
            if self._sign() == ",":
                self._at += 1
            self._skip_lines()
        self._at += 1

    def _inline(self, path: Path) -> None:
        self._skip_lines()
        while self._sign() != "}":
            self._pair(path)
            self._skip_lines()
            if self._sign() == ",":
                self._at += 1
            self._skip_lines()
        self._at += 1


def _tokens(text: str) -> Iterator[_Token]:
    """Yield all but blanks and comments."""
    line = 1
    for match in _TOKEN.finditer(text):
        token = match.group()
        if token == "\n" or not (token.isspace() or token.startswith("#")):
            yield _Token(token, line, match.start(), match.end())
        line += token.count("\n")
