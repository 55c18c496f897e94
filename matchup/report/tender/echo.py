"""Inputs as they were understood, as tables."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import NamedTuple

from matchup.model.cushion import CushionMaterial, CushionSpace
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.limits import Limit
from matchup.model.pile import Part
from matchup.model.stage import Stage
from matchup.report.options import measured
from matchup.report.shown import Units, percent
from matchup.report.table import Column, Field, Table, tabled

CONCRETE = "concrete"
STRENGTHS = {"concrete": "cylinder strength at driving", "steel": "yield stress"}


class _Line(NamedTuple):
    """One input: what it is, its value in a unit, and where it is from."""

    what: str
    value: float | str | None
    unit: str = ""
    remark: str = ""


def inputs_table(job: Job, units: Units) -> Table:
    """Return pile, limits and settings, value by value."""
    lines = [*_pile(job, units), *_limits(job, units), *_cushions(job, units), *_settings(job)]
    fields: list[Field[_Line]] = [
        (Column("input", "input"), lambda line: line.what),
        (Column("value", "value", wrap=60), lambda line: line.value),
        (Column("unit", "unit"), lambda line: line.unit),
        (Column("remark", "remark", wrap=60), lambda line: line.remark),
    ]
    return tabled([line for line in lines if line.value is not None], fields)


def _of(what: str, si: float | None, quantity: str, units: Units, remark: str = "") -> _Line:
    return _Line(what, units.value(si, quantity), units.unit(quantity), remark)


def _pile(job: Job, units: Units) -> list[_Line]:
    pile = job.pile
    several = len(pile.column) > 1
    lines = [line for part in pile.column for line in _part(part, units)]
    if several:
        lines += [
            _of("length", pile.length, "length", units, "of the pile, a follower left out"),
            _of("mass", pile.mass, "mass", units, "of all that the wave runs through"),
        ]
    shoe = pile.shoe_mass or None
    rake = math.degrees(pile.rake) or None
    return [
        *lines,
        _of("driving shoe", shoe, "mass", units),
        _Line("rake", rake, "deg", "from the vertical"),
    ]


def _part(part: Part, units: Units) -> list[_Line]:
    section, name = part.section, part.name
    strength = STRENGTHS.get(part.material, "strength along the grain")
    prestress = part.prestress if part.material == CONCRETE else None
    fill = part.fill
    return [
        _Line("pile", part.material, remark=name),
        _Line("section", section.text),
        _of("width", section.width, "size", units),
        _of("area", section.area, "area", units, "of the material"),
        _of("perimeter", section.perimeter, "size", units),
        _of("toe area", section.toe_area, "area", units),
        _of("length", part.length, "length", units, name),
        _of("mass", part.mass, "mass", units, name),
        _of("modulus", part.modulus, "modulus", units),
        _of("density", part.density, "density", units),
        _of(strength, part.strength, "stress", units),
        _of("effective prestress", prestress, "stress", units),
        _of("strength of the fill", fill.strength if fill else None, "stress", units),
        _of("modulus of the fill", fill.modulus if fill else None, "modulus", units),
        _of("wave speed", part.wave_speed, "velocity", units),
    ]


def _limits(job: Job, units: Units) -> list[_Line]:
    return [
        _of(f"{side} limit", limit.stress, "stress", units, _source(limit, part.part))
        for part in job.limits.parts
        for side, limit in (("compression", part.squeeze), ("tension", part.pull))
    ]


def _source(limit: Limit, part: str) -> str:
    return f"{part}: {limit.text}" if part else limit.text


def _cushions(job: Job, units: Units) -> list[_Line]:
    space = job.cushions
    if space is None:
        return [_Line("pile cushion", "none", remark="the helmet sits on the pile")]
    names = ", ".join(material.name for material in space.materials)
    lines = [_Line("pile cushions", names, remark=f"states: {', '.join(space.wears)}")]
    lines += _sizes(space, units)
    lines.append(_of("pile cushion area", space.area, "area", units))
    others = [units.retold(cushion.text) for cushion in job.hammer_cushions]
    return lines + ([_Line("hammer cushions", "; ".join(others))] if others else [])


def _sizes(space: CushionSpace, units: Units) -> list[_Line]:
    if space.sheets:
        return [
            _Line(
                "sheets",
                f"{space.sheets[0]} to {space.sheets[-1]}",
                "",
                f"{len(space.sheets)} of them",
            )
        ]
    least, most = (
        units.text(t, "thickness") for t in (space.thicknesses[0], space.thicknesses[-1])
    )
    return [_Line("thickness", f"{least} to {most}", "", f"{len(space.thicknesses)} of them")]


def _settings(job: Job) -> list[_Line]:
    return [
        _Line("objective", job.search.objective),
        _Line("reserve", percent(job.search.reserve), "%", "kept back from set and limits"),
        _Line("seed", str(job.search.seed)),
        _Line("damping", job.analysis.damping),
        _Line("gravity", "acts" if job.analysis.gravity else "left out"),
    ]


def stages_table(job: Job, units: Units) -> Table:
    """Return every stage as given or as it follows from the ground."""
    fields: list[Field[Stage]] = [(Column("stage", "stage", wrap=18), lambda s: s.name)]
    if job.drive is not None:
        fields.append((Column("case", "case", wrap=12), lambda s: s.case))
    fields += [
        measured("penetration", "penetration", "length", units, lambda s: s.penetration),
        measured("shaft", "shaft", "force", units, lambda s: s.shaft),
        measured("toe", "toe", "force", units, lambda s: s.toe),
        measured("set_needed", "needed\nset", "set", units, lambda s: s.set_needed),
        _plain("shaft_quake", "shaft\nquake", "set", 2, units, lambda s: s.shaft_quake),
        _plain("toe_quake", "toe\nquake", "set", 2, units, lambda s: s.toe_quake),
        _plain("shaft_damping", "shaft\ndamping", "damping", 3, units, lambda s: s.shaft_damping),
        _plain("toe_damping", "toe\ndamping", "damping", 3, units, lambda s: s.toe_damping),
    ]
    return tabled(job.stages, fields)


def _plain(
    key: str,
    header: str,
    quantity: str,
    digits: int,
    units: Units,
    of: Callable[[Stage], float],
) -> Field[Stage]:
    column = Column(units.key(key, quantity), f"{header}\n{units.unit(quantity)}", digits)
    return column, lambda stage: units.value(of(stage), quantity)


def hammers_table(job: Job, units: Units) -> Table:
    """Return the hammers as the catalogue gives them."""
    fields: list[Field[Hammer]] = [
        (Column("hammer", "hammer", wrap=14), lambda h: h.name),
        (Column("kind", "kind"), lambda h: h.kind),
        measured("ram_mass", "ram mass", "mass", units, lambda h: h.ram_mass),
        measured("stroke_min", "least\nstroke", "stroke", units, lambda h: h.stroke_min),
        measured("stroke_max", "largest\nstroke", "stroke", units, lambda h: h.stroke_max),
        (
            Column(units.key("stroke_step", "stroke"), f"step\n{units.unit('stroke')}", 2),
            lambda h: units.value(h.stroke_step, "stroke"),
        ),
        (Column("efficiency", "efficiency", 2), lambda h: h.efficiency),
        (
            Column("blows_per_minute", "most\nblows\n/min", 0),
            lambda h: None if h.blow_rate_max is None else 60 * h.blow_rate_max,
        ),
        (
            Column(units.key("helmet_mass", "mass"), f"helmet\n{units.unit('mass')}", 0),
            lambda h: units.value(h.helmet_mass, "mass"),
        ),
        (
            Column("hammer_cushion", "hammer cushion", wrap=24),
            lambda h: units.retold(h.cushion_text),
        ),
        (Column("source", "source", wrap=24), lambda h: h.source or None),
    ]
    return tabled(job.hammers, fields)


def cushions_table(job: Job, units: Units) -> Table | None:
    """Return the pile cushion materials; None where the job has none."""
    if job.cushions is None:
        return None
    stress = units.unit("modulus")
    fields: list[Field[CushionMaterial]] = [
        (Column("material", "pile cushion"), lambda m: m.name),
        (
            Column(units.key("modulus", "modulus"), f"modulus\nnew\n{stress}", 1),
            lambda m: units.value(m.modulus, "modulus"),
        ),
        (
            Column(units.key("worn_modulus", "modulus"), f"worn\n{stress}", 1),
            lambda m: units.value(m.worn_modulus, "modulus"),
        ),
        (Column("restitution", "restitution\nnew", 2), lambda m: m.restitution),
        (Column("worn_restitution", "worn", 2), lambda m: m.worn_restitution),
        (
            Column(units.key("sheet", "thickness"), f"sheet\n{units.unit('thickness')}", 2),
            lambda m: units.value(m.sheet, "thickness"),
        ),
        (Column("worn_thickness", "thickness\nworn/new", 2), lambda m: m.worn_thickness),
        (Column("source", "source", wrap=24), lambda m: m.source or None),
    ]
    return tabled(job.cushions.materials, fields)
