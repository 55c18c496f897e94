"""The report as one web page that needs nothing else."""

from __future__ import annotations

from collections.abc import Sequence
from importlib.resources import files

from jinja2 import Environment, StrictUndefined

from matchup.report.tender.sections import Section


def webpage(title: str, sections: Sequence[Section]) -> bytes:
    """Return the report as HTML.

    Blocks escape their own texts; everything else goes through the template's escaping. The page's
    own policy forbids scripts and any request.
    """
    environment = Environment(autoescape=True, undefined=StrictUndefined, trim_blocks=True)
    folder = files("matchup.report.tender")
    template = environment.from_string(folder.joinpath("page.html").read_text("utf-8"))
    style = folder.joinpath("page.css").read_text("utf-8")
    page = template.render(title=title, sections=sections, style=style)
    return page.encode("utf-8", "backslashreplace")
