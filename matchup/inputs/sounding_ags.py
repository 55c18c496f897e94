"""Cone penetration tests in AGS 4.

A file is a list of groups, each with a HEADING, a UNIT, a TYPE and DATA rows of quoted cells.
Readings stand in the group SCPT, one row a depth, for any number of locations (LOCA_ID) and
pushes (SCPG_TESN); the group SCPG holds what is common to a push.
"""

from __future__ import annotations

import csv
import re
from collections.abc import Sequence
from dataclasses import dataclass, field

from matchup.inputs.findings import Findings, did_you_mean
from matchup.inputs.readings import Column, Readings, add_column, add_value
from matchup.inputs.sounding_rules import sounding_of
from matchup.model.sounding import Sounding

HEADINGS = {
    "depth": "SCPT_DPTH",
    "tip": "SCPT_RES",
    "corrected_tip": "SCPT_QT",
    "sleeve": "SCPT_FRES",
    "pore_pressure": "SCPT_PWP2",
}
USED = ("LOCA", "SCPG", "SCPT")
"""Groups that are read; faults in others don't matter here."""

_Push = tuple[str, str]
"""LOCA_ID and SCPG_TESN."""


@dataclass(slots=True)
class _Group:
    """A group of the file; rows have as many cells as the heading."""

    line: int
    heading: list[str] = field(default_factory=list)
    units: list[str] = field(default_factory=list)
    unit_line: int | None = None
    rows: list[tuple[int, list[str]]] = field(default_factory=list)

    def cell(self, row: Sequence[str], heading: str) -> str:
        """Return a row's cell, empty where the group has no such heading."""
        return row[self.heading.index(heading)] if heading in self.heading else ""

    def unit(self, heading: str) -> str:
        """Return a heading's unit, empty where none is stated."""
        place = self.heading.index(heading)
        return self.units[place] if place < len(self.units) else ""

    def push(self, row: Sequence[str]) -> _Push:
        """Return the push that a row is of."""
        return self.cell(row, "LOCA_ID"), self.cell(row, "SCPG_TESN")


def read_ags(
    file: str, text: str, findings: Findings, location: str | None = None
) -> Sounding | None:
    """Return the sounding of an AGS 4 file, or note every problem.

    Parameters
    ----------
    file : str
        As the user named it.
    text : str
        What it holds.
    findings : Findings
        Of this file alone; takes problems, modified in place.
    location : str or None
        LOCA_ID, or LOCA_ID/SCPG_TESN for one push of several; needed where the file has more
        than one.
    """
    groups = _groups(file, text, findings)
    readings_group = groups.get("SCPT")
    if readings_group is None:
        must = "must have the group SCPT, the readings of cone penetration tests"
        found = f"the groups {', '.join(groups)}" if groups else "no group"
        findings.add(file, None, "SCPT", must, found)
        return None
    if not _has_headings(file, readings_group, findings):
        return None
    pushes = _pushes(readings_group)
    chosen = _chosen(file, list(pushes), location, findings)
    if not chosen:
        return None
    rows = [row for push in chosen for row in pushes[push]]
    readings = Readings(file, chosen[0][0], [line for line, _ in rows], HEADINGS)
    if len(chosen) > 1:
        names = ", ".join("/".join(push) for push in chosen)
        readings.notes.append(f"Pushes joined: {names}.")
        readings.which = f"Name one push: {names}."
    for key, heading in HEADINGS.items():
        if heading in readings_group.heading:
            cells = [readings_group.cell(row, heading) for _, row in rows]
            unit, line = readings_group.unit(heading), readings_group.unit_line
            add_column(readings, key, Column(heading, unit, line, cells), findings)
    _read_general(readings, groups, chosen, findings)
    return sounding_of(readings, findings)


def _groups(file: str, text: str, findings: Findings) -> dict[str, _Group]:
    """Return the groups by name; only those that are used hold rows."""
    groups: dict[str, _Group] = {}
    current: _Group | None = None
    for line, record in enumerate(re.split(r"\r\n|\r|\n", text), 1):
        start = re.match(r'\s*"?GROUP"?\s*,\s*"?(\w+)', record)
        if start:
            name = start.group(1).upper()
            if name in groups and name in USED:
                must = f"must be there once; it began in line {groups[name].line}"
                findings.add(file, line, name, must, "another")
            group = groups.setdefault(name, _Group(line))
            current = group if name in USED else None
        elif current is not None and record.strip():
            _add_record(file, line, record, current, findings)
    return groups


def _add_record(file: str, line: int, record: str, group: _Group, findings: Findings) -> None:
    try:
        kind, *cells = (cell.strip() for cell in next(csv.reader([record], strict=True)))
    except csv.Error:
        must = "must be cells in quotes with commas in between"
        findings.add(file, line, "", must, record[:40], "Check the quotes; is the file cut off?")
        return
    kind = kind.upper()
    if kind == "HEADING":
        group.heading = [cell.upper() for cell in cells]
    elif kind == "UNIT":
        group.units, group.unit_line = cells, line
    elif kind == "DATA" and len(cells) != len(group.heading):
        must = f"must have {len(group.heading)} cells, one for each heading"
        findings.add(file, line, "", must, f"{len(cells)}", "Is the file cut off?")
    elif kind == "DATA":
        group.rows.append((line, cells))
    elif kind != "TYPE":
        must = "must begin with GROUP, HEADING, UNIT, TYPE or DATA"
        findings.add(file, line, "", must, kind[:40])


def _has_headings(file: str, group: _Group, findings: Findings) -> bool:
    before = len(findings.problems)
    if not group.heading:
        findings.add(file, group.line, "SCPT", "must have a HEADING row", "none")
    elif "LOCA_ID" not in group.heading:
        findings.add(file, group.line, "SCPT", "must have the heading LOCA_ID", "none")
    if group.heading and group.unit_line is None:
        findings.add(file, group.line, "SCPT", "must have a UNIT row", "none")
    if group.heading and not group.rows:
        findings.add(file, group.line, "SCPT", "must have DATA rows", "none")
    return len(findings.problems) == before


def _pushes(group: _Group) -> dict[_Push, list[tuple[int, list[str]]]]:
    """Return the rows of each push, in the order of the file."""
    pushes: dict[_Push, list[tuple[int, list[str]]]] = {}
    for line, row in group.rows:
        pushes.setdefault(group.push(row), []).append((line, row))
    return pushes


def _chosen(
    file: str, pushes: Sequence[_Push], location: str | None, findings: Findings
) -> list[_Push]:
    """Return the pushes that make the sounding; none, with a problem, where that is in doubt."""
    locations = list(dict.fromkeys(push[0] for push in pushes))
    named = [push for push in pushes if location in (None, push[0], "/".join(push))]
    if not named:
        must = f"must hold the location {location}"
        hint = did_you_mean(f"{location}", locations)
        findings.add(file, None, "LOCA_ID", must, ", ".join(locations), hint)
        return []
    if len({push[0] for push in named}) > 1:
        must = "must hold one location, or the one to read must be named"
        findings.add(file, None, "LOCA_ID", must, ", ".join(locations), "Name one of them.")
        return []
    return named


def _read_general(
    readings: Readings, groups: dict[str, _Group], chosen: Sequence[_Push], findings: Findings
) -> None:
    """Read area ratio and final depth, which stand in other groups than the readings."""
    if "SCPG" not in groups:
        readings.notes.append("The group SCPG is missing, so the cone's area ratio is not known.")
    general = groups.get("SCPG", _Group(0))
    ratios: dict[str, int] = {}
    for line, row in general.rows:
        if general.push(row) not in chosen:
            continue
        ratio, water = general.cell(row, "SCPG_CAR"), general.cell(row, "SCPG_WAT")
        if ratio:
            ratios.setdefault(ratio, line)
        if water:
            readings.notes.append(
                f"A groundwater level of {water} {general.unit('SCPG_WAT')} is stated without "
                "its datum and is not used."
            )
    if len(ratios) > 1:
        listed = ", ".join(ratios)
        readings.notes.append(f"Area ratios differ between pushes ({listed}); none is used.")
    elif ratios:
        ((ratio, line),) = ratios.items()
        column = Column("SCPG_CAR", general.unit("SCPG_CAR"), line, [ratio])
        add_value(readings, "area_ratio", column, findings)
    locations = groups.get("LOCA", _Group(0))
    for line, row in locations.rows:
        depth = locations.cell(row, "LOCA_FDEP")
        if locations.cell(row, "LOCA_ID") == readings.name and depth:
            column = Column("LOCA_FDEP", locations.unit("LOCA_FDEP"), line, [depth])
            add_value(readings, "final_depth", column, findings)
