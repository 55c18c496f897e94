"""The files of a report."""

from __future__ import annotations

import json

from matchup.analysis.single import Blow
from matchup.report.bills import bills_table
from matchup.report.closing import ground
from matchup.report.document import blow_document, ranking_document
from matchup.report.driven import stations_table
from matchup.report.mapped import map_table
from matchup.report.options import options_table, schedule_table
from matchup.report.sentences import reason, rests_on, warned
from matchup.report.shown import Units
from matchup.report.table import Column, Table
from matchup.report.tender.dossier import Dossier
from matchup.report.tender.echo import (
    cushions_table,
    hammers_table,
    inputs_table,
    stages_table,
)
from matchup.report.tender.sections import METHOD, files_table, sections
from matchup.report.tender.workbook import Sheet, workbook

PAGE, PAPER, BOOK = "report.html", "report.pdf", "report.xlsx"
DATA = "ranking.json"
TABLES = ("options.csv", "drive.csv", "window.csv")
NAMES = (PAGE, PAPER, BOOK, *TABLES, DATA)
"""Every file that a report may have."""


def report_files(dossier: Dossier, units: Units) -> dict[str, bytes]:
    """Return the files of a report by name; the paper only where it can be typeset.

    The same dossier gives the same bytes: nothing tells of date or run time.
    """
    from matchup.report.tender.paper import can_be_typeset, paper
    from matchup.report.tender.webpage import webpage

    title = dossier.job.title
    parts = sections(dossier, units)
    made = {PAGE: webpage(title, parts)}
    if can_be_typeset():
        made[PAPER] = paper(title, parts, units)
    made[BOOK] = workbook(title, _sheets(dossier, units))
    everyone = (*dossier.ranking.options, *dossier.ranking.rejected)
    for name, table in zip(
        TABLES,
        (
            options_table(everyone, units, dossier.job.search.objective),
            _drive_table(dossier, units),
            map_table(dossier.map, units),
        ),
        strict=True,
    ):
        made[name] = table.to_csv().encode("utf-8", "backslashreplace")
    document = ranking_document(dossier.ranking, units) | {"runtime_s": None}
    made[DATA] = json.dumps(document, indent=1, allow_nan=False).encode()
    return made


def _drive_table(dossier: Dossier, units: Units) -> Table:
    """Return what the option in detail does at every stage, in all ground cases."""
    option = dossier.detail
    if option.cases:
        return stations_table(option.cases, units)
    return schedule_table((option,), units)


def _sheets(dossier: Dossier, units: Units) -> list[Sheet]:
    job, ranking = dossier.job, dossier.ranking
    sheets = [
        Sheet("Options", options_table(ranking.options, units, job.search.objective)),
        Sheet("Rejected", _rejected_table(dossier, units)),
        Sheet("Drive", _drive_table(dossier, units)),
        Sheet("Window", map_table(dossier.map, units)),
    ]
    priced = [option for option in ranking.options if option.bill is not None]
    if job.cost is not None and priced:
        sheets.append(Sheet("Cost", bills_table(priced, job.cost)))
    sheets += [
        Sheet(f"Blow {number}", _blow_table(blow)) for number, blow in enumerate(dossier.blows, 1)
    ]
    cushions = cushions_table(job, units)
    sheets += [
        Sheet("Inputs", inputs_table(job, units)),
        Sheet("Stages", stages_table(job, units)),
        Sheet("Hammers", hammers_table(job, units)),
        *([Sheet("Cushions", cushions)] if cushions else []),
        Sheet("Limits and sources", _sources_table(dossier, units)),
        Sheet("Files", files_table(dossier)),
    ]
    return sheets


def _blow_table(blow: Blow) -> Table:
    """Return the figures of a blow as numbers, units in their names as in the JSON document."""
    document = blow_document(blow)
    rows = tuple((k, v) for k, v in document.items() if isinstance(v, (int, float, str)))
    return Table((Column("figure", "figure"), Column("value", "value")), rows)


def _rejected_table(dossier: Dossier, units: Units) -> Table:
    """Return the hammers that can't with their reasons, and the figures beside them."""
    rejected = dossier.ranking.rejected
    figures = options_table(rejected, units, dossier.job.search.objective)
    columns = (*figures.columns, Column("reason", "reason"))
    rows = tuple(
        (*row, reason(option, dossier.job, units))
        for row, option in zip(figures.rows, rejected, strict=True)
    )
    return Table(columns, rows)


def _sources_table(dossier: Dossier, units: Units) -> Table:
    job = dossier.job
    soil = [line for prose in ground(job, units) for line in prose.lines]
    lines = (*soil, *rests_on(job, units), *METHOD, *warned(job))
    return Table(
        (Column("text", "limits, sources, defaults and method"),), tuple((x,) for x in lines)
    )
