"""A figure as a block of a page."""

from __future__ import annotations

import base64
import html
from dataclasses import dataclass

from matchup.report.table import wrapped


@dataclass(frozen=True, slots=True)
class Picture:
    """A figure with what it shows in words.

    Parameters
    ----------
    name : str
        Of its file, without ending.
    svg : bytes
    words : str
        What it shows, for those who can't see it and as its caption.
    """

    name: str
    svg: bytes
    words: str

    def to_text(self, width: int) -> str:
        """Return what it shows, in words."""
        return wrapped(f"(Figure: {self.words})", width)

    def to_html(self) -> str:
        """Return the figure within the page itself."""
        words = html.escape(self.words)
        return (
            f"<figure>{picture_html(self.svg, self.words)}<figcaption>{words}</figcaption></figure>"
        )


def picture_html(svg: bytes, words: str) -> str:
    """Return a picture that needs no file of its own.

    As data of an image its inner names can't meet those of another, and nothing in it can act.
    """
    data = base64.b64encode(svg).decode("ascii")
    return f'<img alt="{html.escape(words)}" src="data:image/svg+xml;base64,{data}" />'
