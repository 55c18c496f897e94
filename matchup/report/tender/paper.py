"""The report as PDF, typeset by typst."""

from __future__ import annotations

import json
from collections.abc import Sequence
from importlib.resources import files
from importlib.util import find_spec
from pathlib import Path
from tempfile import TemporaryDirectory

from matchup.report.page import Block, Headline, Prose
from matchup.report.picture import Picture
from matchup.report.shown import Units
from matchup.report.table import Table
from matchup.report.tender.sections import Section

SHEETS = {"metric": "a4", "us": "us-letter"}
PLAIN_WIDTH = 90


def can_be_typeset() -> bool:
    """Return whether the package that makes PDF files is installed."""
    return find_spec("typst") is not None


def paper(title: str, sections: Sequence[Section], units: Units) -> bytes:
    """Return the report as PDF.

    Texts reach the typesetter as data and are never read as its markup.
    """
    import matplotlib
    import typst

    document = {
        "title": title,
        "sheet": SHEETS[units.system],
        "sections": [
            {"heading": s.heading, "blocks": [_block(block) for block in s.blocks]}
            for s in sections
        ],
    }
    pictures = [b for s in sections for b in s.blocks if isinstance(b, Picture)]
    template = files("matchup.report.tender").joinpath("paper.typ").read_bytes()
    # The figures' own font, so that the paper looks the same on every machine.
    fonts = Path(matplotlib.get_data_path()) / "fonts" / "ttf"
    with TemporaryDirectory() as name:
        folder = Path(name)
        (folder / "main.typ").write_bytes(template)
        (folder / "report.json").write_text(json.dumps(document), encoding="utf-8")
        for picture in pictures:
            (folder / f"{picture.name}.svg").write_bytes(picture.svg)
        return typst.compile(
            folder / "main.typ",
            root=folder,
            font_paths=[fonts],
            ignore_system_fonts=True,
            format="pdf",
            timestamp=0,
        )


def _block(block: Block) -> dict[str, object]:
    """Return a block as data; what has no form of its own is set as on a terminal."""
    if isinstance(block, Headline):
        return {"kind": "headline", "text": block.text}
    if isinstance(block, Prose):
        return {"kind": "prose", "heading": block.heading, "lines": block.lines}
    if isinstance(block, Picture):
        return {"kind": "picture", "file": f"{block.name}.svg", "words": block.words}
    if isinstance(block, Table):
        headings, rows, align, notes = block.shown()
        return {
            "kind": "table",
            "headings": headings,
            "rows": rows,
            "align": align,
            "notes": notes,
        }
    return {"kind": "plain", "text": block.to_text(PLAIN_WIDTH)}
