"""The cushion catalogue."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from matchup.errors import ModelError
from matchup.inputs.columns import Record, Spec, check_names, read_records
from matchup.inputs.findings import Findings
from matchup.inputs.table import read_table
from matchup.inputs.usual import note_unusual_row
from matchup.model.cushion import CushionMaterial

COLUMNS = (
    Spec("name", "name", required=True),
    Spec("use", "text", required=True),
    Spec("modulus", "modulus", required=True),
    Spec("restitution", "number", required=True),
    Spec("sheet", "thickness"),
    Spec("worn_modulus", "modulus"),
    Spec("worn_thickness", "number"),
    Spec("worn_restitution", "number"),
    Spec("new_for", "number"),
    Spec("life", "number"),
    Spec("price", "amount", example="EUR"),
    Spec("source", "text"),
)


@dataclass(frozen=True, slots=True)
class CushionCatalogue:
    """Materials by name, and what could not be read.

    Parameters
    ----------
    materials : tuple of CushionMaterial
    broken : tuple of str
        Names of rows that are told to be wrong.
    complete : bool
        Whether every name of the catalogue is known.
    """

    materials: tuple[CushionMaterial, ...] = ()
    broken: tuple[str, ...] = ()
    complete: bool = True

    @property
    def names(self) -> list[str]:
        """Every name in the catalogue."""
        return [*(material.name for material in self.materials), *self.broken]

    def find(self, name: str) -> CushionMaterial | None:
        """Return the material of a name."""
        plain = name.strip().casefold()
        return next((m for m in self.materials if m.name.casefold() == plain), None)

    def is_broken(self, name: str) -> bool:
        """Return whether a name can't be found because the catalogue is wrong, as is told."""
        plain = name.strip().casefold()
        return not self.complete or any(plain == known.casefold() for known in self.broken)


def read_cushions(path: Path, findings: Findings) -> CushionCatalogue:
    """Return a cushion catalogue; problems go to `findings`."""
    table = read_table(path, findings)
    if table is None:
        return CushionCatalogue(complete=False)
    records = read_records(table, COLUMNS, findings)
    check_names(records)
    made = [_material(record) for record in records]
    for record, material in zip(records, made, strict=True):
        findings.problems += record.problems
        for text in note_unusual_row(record, "cushion") if material else []:
            findings.notice(record.file, record.line, text)
    return CushionCatalogue(
        materials=tuple(material for material in made if material is not None),
        broken=tuple(r.label for r, m in zip(records, made, strict=True) if not m and r.label),
        complete=all(record.label for record in records),
    )


def _material(record: Record) -> CushionMaterial | None:
    if record.torn:
        return None
    number = record.number
    worn_thickness = number("worn_thickness")
    try:
        made = CushionMaterial(
            name=record.text("name"),
            use=record.text("use").casefold(),
            modulus=record.needed("modulus"),
            restitution=record.needed("restitution"),
            sheet=number("sheet"),
            worn_modulus=number("worn_modulus"),
            worn_thickness=1.0 if worn_thickness is None else worn_thickness,
            worn_restitution=number("worn_restitution"),
            new_for=number("new_for"),
            life=number("life"),
            price=record.amount("price"),
            source=record.text("source"),
            extra=record.extra,
        )
    except ModelError as error:
        record.wrong_model(error)
        return None
    return None if record.problems or record.unread else made
