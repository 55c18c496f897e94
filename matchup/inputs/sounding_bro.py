"""Cone penetration tests in the XML of the Dutch subsurface registry (BRO).

Elements are matched on their local names, whatever namespaces and versions the file uses.
Readings stand in one element as records of 25 values in an order and in units that the standard
fixes; -999999 is a void.
"""

from __future__ import annotations

from typing import NamedTuple
from xml.etree import ElementTree
from xml.etree.ElementTree import Element

from matchup.inputs.findings import Findings, did_you_mean
from matchup.inputs.readings import Column, Readings, add_column, add_value
from matchup.inputs.sounding_rules import sounding_of
from matchup.model.sounding import Sounding


class _Field(NamedTuple):
    place: int
    name: str
    unit: str


FIELDS = {
    "length": _Field(0, "penetrationLength", "m"),
    "depth": _Field(1, "depth", "m"),
    "tip": _Field(3, "coneResistance", "MPa"),
    "corrected_tip": _Field(4, "correctedConeResistance", "MPa"),
    "sleeve": _Field(18, "localFriction", "MPa"),
    "pore_pressure": _Field(22, "porePressureU2", "MPa"),
}
"""Where each channel stands in a record, and its unit."""
STATED = {
    "area_ratio": ("coneSurfaceQuotient", "1"),
    "predrilled": ("predrilledDepth", "m"),
    "final_depth": ("finalDepth", "m"),
}
"""Elements of single values, and the unit that the standard fixes."""
RECORD = 25
"""Values in a record."""
VOID = -999999.0
SURFACES = ("maaiveld", "waterbodem")
"""Reference points that are the ground surface or the bed of open water."""


def read_bro(
    file: str, text: str, findings: Findings, location: str | None = None
) -> Sounding | None:
    """Return the sounding of a BRO-XML file, or note every problem.

    Parameters
    ----------
    file : str
        As the user named it.
    text : str
        What it holds.
    findings : Findings
        Of this file alone; takes problems, modified in place.
    location : str or None
        The registry's number of the test; needed where the file has more than one.
    """
    try:
        root = ElementTree.fromstring(text)
    except (ElementTree.ParseError, ValueError, LookupError) as error:
        line = error.position[0] if isinstance(error, ElementTree.ParseError) else None
        do = "The file seems cut off or damaged: fetch it again."
        findings.add(file, line, "", "must be complete, well-formed XML", f"{error}", do)
        return None
    test = _chosen(file, root, location, findings)
    if test is None:
        return None
    records = _records(file, test, findings)
    if not records:
        return None
    wanted = {key: f"{channel.name} in the records" for key, channel in FIELDS.items()}
    readings = Readings(file, _name(test), [None] * len(records), wanted, one_test=True)
    for key, channel in FIELDS.items():
        cells = [record[channel.place] for record in records]
        add_column(readings, key, Column(channel.name, channel.unit, None, cells, VOID), findings)
    _read_header(readings, test, findings)
    return sounding_of(readings, findings)


def _local(element: Element) -> str:
    """Return an element's name without its namespace."""
    return str(element.tag).rpartition("}")[2]


def _find(element: Element | None, *names: str) -> Element | None:
    """Return the first element below that has the first name, then below it, and so on."""
    for name in names:
        if element is not None:
            below = (e for e in element.iter() if e is not element and _local(e) == name)
            element = next(below, None)
    return element


def _text(element: Element | None, *names: str) -> str:
    found = _find(element, *names)
    return (found.text or "").strip() if found is not None else ""


def _name(test: Element) -> str:
    return _text(test, "broId") or _text(test, "localId") or test.attrib.get("id", "")


def _chosen(file: str, root: Element, location: str | None, findings: Findings) -> Element | None:
    """Return the element of the cone penetration test to read, or note why there is none."""
    tests = [e for e in root.iter() if any(_local(c) == "conePenetrometerSurvey" for c in e)]
    if not tests:
        names = [_local(element) for element in root.iter()]
        borehole = next((name for name in names if name.startswith("BHR")), None)
        found = f"a borehole description ({borehole})" if borehole else f"<{names[0]}>"
        findings.add(file, None, "", "must be a cone penetration test", found)
        return None
    there = [_name(test) for test in tests]
    named = [test for test in tests if location in (None, _name(test))]
    if len(named) == 1:
        return named[0]
    if named:
        must = "must hold one test, or the one to read must be named"
        findings.add(file, None, "broId", must, ", ".join(there), "Name one of them.")
    else:
        must = f"must hold the test {location}"
        hint = did_you_mean(f"{location}", there)
        findings.add(file, None, "broId", must, ", ".join(there), hint)
    return None


def _records(file: str, test: Element, findings: Findings) -> list[list[str]]:
    """Return the records of readings as cells; cut short ones go to `findings`."""
    result = _find(test, "conePenetrationTest", "cptResult")
    values = _text(result, "values")
    if not values:
        must = "must have the records of a cone penetration test (cptResult/values)"
        findings.add(file, None, "values", must, "none")
        return []
    encoding = _find(result, "TextEncoding")
    marks = encoding.attrib if encoding is not None else {}
    block, token = marks.get("blockSeparator") or ";", marks.get("tokenSeparator") or ","
    point = marks.get("decimalSeparator") or "."
    records = []
    for number, record in enumerate(values.split(block), 1):
        cells = [cell.strip().replace(point, ".") for cell in record.split(token)]
        if len(cells) == RECORD:
            records.append(cells)
        elif record.strip():
            must = f"must have {RECORD} values"
            findings.add(file, None, "values", must, f"{len(cells)} in record {number}")
    return records


def _read_header(readings: Readings, test: Element, findings: Findings) -> None:
    """Read area ratio, pre-drilled and final depth; note what else bears on depths."""
    for key, (name, standard) in STATED.items():
        element = _find(test, name)
        if element is not None:
            unit = element.attrib.get("uom", standard)
            column = Column(name, "-" if unit == "1" else unit, None, [_text(element)])
            add_value(readings, key, column, findings)
    position = _find(test, "deliveredVerticalPosition")
    reference = _text(position, "localVerticalReferencePoint")
    if reference and reference not in SURFACES:
        readings.notes.append(f"Depths are from: {reference}.")
    if offset := _text(position, "offset"):
        datum = _text(position, "verticalDatum")
        readings.notes.append(f"Depth zero lies at {offset} m {datum}.".replace(" .", "."))
    if water := _text(test, "groundwaterLevel"):
        readings.notes.append(
            f"A groundwater level of {water} m is stated without its datum and is not used."
        )
    if _text(test, "deregistered") == "ja":
        readings.notes.append("The registry has withdrawn this test.")
