"""A result as a page: blocks of prose and tables, which become text or HTML."""

from __future__ import annotations

import html
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Protocol

from matchup.report.table import wrapped


class Block(Protocol):
    """A part of a page: a `Table`, a `Prose`, or anything else that shows itself in both ways."""

    def to_text(self, width: int) -> str:
        """Return the block in lines of at most `width`."""

    def to_html(self) -> str:
        """Return the block for a notebook, with every text escaped."""


Page = Sequence[Block]


@dataclass(frozen=True, slots=True)
class Prose:
    """Lines of prose, each as long as it needs to be.

    Parameters
    ----------
    lines : tuple of str
    heading : str
        Over a list of lines; empty for plain paragraphs.
    """

    lines: tuple[str, ...]
    heading: str = ""

    def to_text(self, width: int) -> str:
        """Return the lines wrapped, continued lines indented."""
        indent = "  " if self.heading else ""
        lines = [wrapped(indent + line, width, indent + "  ") for line in self.lines]
        return "\n".join([self.heading, *lines] if self.heading else lines)

    def to_html(self) -> str:
        """Return a list, or paragraphs."""
        lines = [html.escape(line) for line in self.lines]
        if not self.heading:
            return f"<p>{'<br>'.join(lines)}</p>"
        items = "".join(f"<li>{line}</li>" for line in lines)
        return f"<p>{html.escape(self.heading)}</p><ul>{items}</ul>"


@dataclass(frozen=True, slots=True)
class Headline:
    """The answer, in one paragraph."""

    text: str

    def to_text(self, width: int) -> str:
        """Return the paragraph wrapped."""
        return wrapped(self.text, width)

    def to_html(self) -> str:
        """Return the paragraph in bold."""
        return f"<p><b>{html.escape(self.text)}</b></p>"


def page_text(page: Page, width: int) -> str:
    """Return a page for a terminal."""
    return "\n\n".join(block.to_text(width) for block in page)


def page_html(page: Page) -> str:
    """Return a page for a notebook."""
    return f"<div>{''.join(block.to_html() for block in page)}</div>"
