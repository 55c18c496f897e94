"""Hold a job against its files, read a second time by other means.

Every key of a job file and every cell of a catalogue has a line here that says where its value must
be found in the model. Units are read by `pint`, tables by the plain CSV reader. A value that is
nowhere must be named in a notice.
"""

from __future__ import annotations

import csv
import io
import math
import re
import tomllib
import unicodedata
from collections.abc import Callable, Iterator
from itertools import pairwise
from typing import Any

from matchup.inputs.cushions import CushionCatalogue
from matchup.model.cushion import CushionMaterial
from matchup.model.hammer import Hammer
from matchup.model.job import Job
from matchup.model.stage import SHAFT_DAMPING, TOE_QUAKE_SHARE, Stage
from tests import pint_units

GRAVITY = 9.80665
_VALUE = re.compile(r"\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*(.*?)\s*", re.DOTALL)


def si(text: str, dimension: str) -> float:
    """A text with its unit in SI, by `pint`; a set may be a blow count."""
    plain = unicodedata.normalize("NFKC", text).replace("\u2212", "-").replace("^", "")
    number, unit = _VALUE.fullmatch(plain).groups()
    unit = re.sub(r"\s*/\s*", "/", " ".join(unit.replace("\u00b7", " ").split()))
    if unit.replace(" ", "").startswith("blow"):
        unit = re.sub("^blow/", "blows/", unit.replace(" ", ""))
        return pint_units.length_of_count(unit) / float(number)
    return float(number) * pint_units.factor(unit or "-", dimension)


def same(value: float | None, typed: float) -> bool:
    return value is not None and math.isclose(value, typed, rel_tol=1e-9, abs_tol=1e-300)


# --- the job file --------------------------------------------------------------------------------

Check = Callable[[Job, dict[str, Any], Any], bool]


def size(get: Callable[[Job], float], dimension: str) -> Check:
    return lambda job, table, typed: same(get(job), si(typed, dimension))


def width(job: Job, table: dict[str, Any], typed: str) -> bool:
    """The width of a square is its section's, that of an H is only held against its area."""
    return table["shape"] == "h" or same(job.pile.section.width, si(typed, "length"))


def wall(job: Job, table: dict[str, Any], typed: str) -> bool:
    t, d = si(typed, "length"), si(table["diameter"], "length")
    return same(job.pile.section.area, math.pi * (d - t) * t)


def strength(job: Job, table: dict[str, Any], typed: str) -> bool:
    if "strength_at_driving" in table:
        return any(f"in place of {typed}" in note for note in job.pile.notes)
    return same(job.pile.toe.strength, si(typed, "stress"))


def helmet(job: Job, table: dict[str, Any], typed: str) -> bool:
    given = any(same(hammer.helmet_mass, si(typed, "mass")) for hammer in job.hammers)
    return given or noticed(job, "helmet.mass")


def sheets(job: Job, table: dict[str, Any], typed: Any) -> bool:
    if isinstance(typed, dict):
        return job.cushions.sheets == tuple(range(typed["from"], typed["to"] + 1))
    return set(job.cushions.sheets) == ({typed} if isinstance(typed, int) else set(typed))


def in_range(made: list[float], typed: Any) -> bool:
    """Whether thicknesses are those of a text or of a range."""
    if isinstance(typed, str):
        return len(made) == 1 and same(made[0], si(typed, "length"))
    low, high = (si(typed[key], "length") for key in ("from", "to"))
    step = si(typed.get("step", "10 mm"), "length")
    steps = [b - a for a, b in pairwise(made[:-1])]
    return (
        same(made[0], low)
        and abs(made[-1] - high) < 1.1e-6
        and all(abs(found - step) < 1e-9 * high for found in steps)
    )


def names(materials: list[str], typed: list[str]) -> bool:
    plain = dict.fromkeys(name.strip().casefold() for name in typed)
    return [name.casefold() for name in materials] == list(plain)


def hammer_cushion_materials(job: Job, table: dict[str, Any], typed: list[str]) -> bool:
    found = dict.fromkeys(c.text.partition(" of ")[2] for c in job.hammer_cushions)
    return names(list(found), typed)


def hammer_cushion_thickness(job: Job, table: dict[str, Any], typed: Any) -> bool:
    texts = [c.text.partition(" of ") for c in job.hammer_cushions]
    made = [si(thick, "length") for thick, _, name in texts if name == texts[0][2]]
    if isinstance(typed, str):
        return abs(made[0] - si(typed, "length")) <= 1e-5 * made[0]  # the text has six digits
    low, high = (si(typed[key], "length") for key in ("from", "to"))
    return abs(made[0] - low) <= 1e-5 * low and abs(made[-1] - high) <= 1e-5 * high + 2e-6


def hammer_cushion_area(job: Job, table: dict[str, Any], typed: str) -> bool:
    # Stiffness times thickness over area is the modulus, which the catalogue has for some material.
    cushion = job.hammer_cushions[0]
    thickness = si(cushion.text.partition(" of ")[0], "length")
    return cushion.spring.stiffness * thickness / si(typed, "area") > 0


def rule(job: Job, table: dict[str, Any], typed: str) -> bool:
    published = {"aashto": "AASHTO", "en 12699": "EN 12699"}
    name = published["aashto" if typed.startswith("aashto") else "en 12699"]
    lowest = job.limits.parts[-1]
    texts = lowest.squeeze.text + lowest.pull.text
    detail = "monitored" not in typed or "monitored" in texts
    return (name in texts and detail) or noticed(job, "limits.rule")


def kept(table: dict[str, Any]) -> float:
    """What a share kept back for bending leaves of the limits."""
    return 1 - table.get("bending", 0.0)


def refusal(job: Job, table: dict[str, Any], typed: str) -> bool:
    asked = any(same(stage.set_needed, si(typed, "length")) for stage in job.stages)
    return asked or noticed(job, "target.refusal")


def noticed(job: Job, place: str) -> bool:
    return any(f"{place} has no effect" in notice for notice in job.notices)


def diameter(job: Job, table: dict[str, Any], typed: str) -> bool:
    """The diameter of a tapered section shows in the area of its head."""
    ends = job.pile.section.ends
    if ends is None:
        return same(job.pile.section.width, si(typed, "length"))
    return same(ends[0], math.pi * si(typed, "length") ** 2 / 4)


def fill(job: Job, table: dict[str, Any], typed: dict[str, str]) -> bool:
    made = job.pile.toe.fill
    dimensions = {"strength": "stress", "modulus": "stress", "density": "density"}
    return all(same(getattr(made, key), si(typed[key], dimensions[key])) for key in typed)


def parts(job: Job, table: dict[str, Any], typed: list[dict[str, Any]]) -> bool:
    """Every part has its name and length, and what else it says of its material."""
    made = {part.name: part for part in job.pile.parts}
    dimensions = {"length": "length", "prestress": "stress", "modulus": "stress"}
    return all(
        same(getattr(made[one["name"]], key), si(value, dimensions[key]))
        for one in typed
        for key, value in one.items()
        if key != "name"
    )


def follower(job: Job, table: dict[str, Any], typed: dict[str, Any]) -> bool:
    made = job.pile.follower
    return same(made.length, si(typed["length"], "length")) and made.material == typed["material"]


def plug(job: Job, table: dict[str, Any], typed: dict[str, str]) -> bool:
    made = job.pile.toe
    carried = si(typed["density"], "density") * made.section.core.area
    return same(made.length, si(typed["length"], "length")) and same(made.carried, carried)


def rake(job: Job, table: dict[str, Any], typed: str) -> bool:
    if ":" in typed:
        return same(math.tan(job.pile.rake), 1 / float(typed.partition(":")[2]))
    return same(job.pile.rake, si(typed, "angle"))


def section(name: str, dimension: str) -> Check:
    return size(lambda job: getattr(job.pile.section, name), dimension)


JOB_KEYS: dict[str, Check] = {
    "title": lambda job, table, typed: job.title == typed,
    "display": lambda job, table, typed: job.display == typed,
    "catalog.hammers": lambda job, table, typed: True,  # its rows are held against the model below
    "catalog.cushions": lambda job, table, typed: True,
    "pile.material": lambda job, table, typed: job.pile.toe.material == typed,
    "pile.shape": lambda job, table, typed: job.pile.section.text.lower().startswith(typed),
    "pile.length": size(lambda job: job.pile.length, "length"),
    "pile.strength": strength,
    "pile.strength_at_driving": size(lambda job: job.pile.toe.strength, "stress"),
    "pile.prestress": size(lambda job: job.pile.toe.prestress, "stress"),
    "pile.modulus": size(lambda job: job.pile.toe.modulus, "stress"),
    "pile.density": size(lambda job: job.pile.toe.density, "density"),
    "pile.width": width,
    "pile.diameter": diameter,
    "pile.toe_diameter": section("width", "length"),
    "pile.fill": fill,
    "pile.parts": parts,
    "pile.follower": follower,
    "pile.plug": plug,
    "pile.shoe_mass": size(lambda job: job.pile.shoe_mass, "mass"),
    "pile.rake": rake,
    "pile.wall": wall,
    "pile.toe": lambda job, table, typed: job.pile.section.text.endswith(typed),
    "pile.depth": section("width", "length"),
    "pile.area": section("area", "area"),
    "pile.perimeter": section("perimeter", "length"),
    "pile.toe_area": section("toe_area", "area"),
    "helmet.mass": helmet,
    "pile_cushion.materials": lambda job, table, typed: names(
        [m.name for m in job.cushions.materials], typed
    ),
    "pile_cushion.sheets": sheets,
    "pile_cushion.thickness": lambda job, table, typed: in_range(
        list(job.cushions.thicknesses), typed
    ),
    "pile_cushion.wear": lambda job, table, typed: set(job.cushions.wears) == set(typed),
    "pile_cushion.area": size(lambda job: job.cushions.area, "area"),
    "hammer_cushion.materials": hammer_cushion_materials,
    "hammer_cushion.thickness": hammer_cushion_thickness,
    "hammer_cushion.area": hammer_cushion_area,
    "target.refusal": refusal,
    "limits.rule": rule,
    "limits.bending": lambda job, table, typed: all(
        f"less {100 * typed:g}% for bending" in limit.text or not typed
        for part in job.limits.parts
        for limit in (part.squeeze, part.pull)
        if math.isfinite(limit.stress)
    ),
    "limits.compression": lambda job, table, typed: same(
        job.limits.compression,
        kept(table) * (typed * job.pile.toe.strength - job.pile.toe.prestress),
    ),
    "limits.tension": lambda job, table, typed: same(
        job.limits.tension, kept(table) * (typed * job.pile.toe.strength + job.pile.toe.prestress)
    ),
    "limits.compression_stress": lambda job, table, typed: same(
        job.limits.compression, kept(table) * si(typed, "stress")
    ),
    "limits.tension_stress": lambda job, table, typed: same(
        job.limits.tension, kept(table) * si(typed, "stress")
    ),
    "limits.wall_buckling": lambda job, table, typed: any(
        f"{typed:g} of the stress at which the wall buckles" in part.squeeze.text
        for part in job.limits.parts
    ),
    "search.objective": lambda job, table, typed: job.search.objective == typed,
    "search.reserve": lambda job, table, typed: job.search.reserve == typed,
    "search.seed": lambda job, table, typed: job.search.seed == typed,
    "analysis.gravity": lambda job, table, typed: job.analysis.gravity == typed,
    "analysis.damping": lambda job, table, typed: job.analysis.damping == typed,
}
"""Where the value of every key outside the stages must be found."""

StageCheck = Callable[[Job, int, Any], bool]


def of_stage(name: str, dimension: str) -> StageCheck:
    return lambda job, place, typed: same(getattr(job.stages[place], name), si(typed, dimension))


def shaft_shape(job: Job, place: int, typed: Any) -> bool:
    stage: Stage = job.stages[place]
    if typed == "uniform":
        return stage.shaft_shape == ()
    if typed == "triangular":
        return stage.shaft_shape == ((0.0, 0.0), (stage.penetration, 1.0))
    rows = [(si(depth, "length"), float(share)) for depth, share in typed]
    pairs = zip(stage.shaft_shape, rows, strict=True)
    return all(same(a[0], b[0]) and a[1] == b[1] for a, b in pairs)


def place_noticed(job: Job, place: int, key: str) -> bool:
    return any(
        f"stages {place + 1} " in notice and f".{key} has no effect" in notice
        for notice in job.notices
    )


def soil(job: Job, place: int, typed: str) -> bool:
    found = job.stages[place].shaft_damping == SHAFT_DAMPING[typed]
    return found or place_noticed(job, place, "soil")


def toe_soil(job: Job, place: int, typed: str) -> bool:
    quake = TOE_QUAKE_SHARE[typed] * job.pile.section.width
    return same(job.stages[place].toe_quake, quake) or place_noticed(job, place, "toe_soil")


STAGE_KEYS: dict[str, StageCheck] = {
    "name": lambda job, place, typed: job.stages[place].name == typed,
    "penetration": of_stage("penetration", "length"),
    "shaft": of_stage("shaft", "force"),
    "toe": of_stage("toe", "force"),
    "set": of_stage("set_needed", "length"),
    "shaft_shape": shaft_shape,
    "soil": soil,
    "toe_soil": toe_soil,
    "shaft_quake": of_stage("shaft_quake", "length"),
    "toe_quake": of_stage("toe_quake", "length"),
    "shaft_damping": of_stage("shaft_damping", "damping"),
    "toe_damping": of_stage("toe_damping", "damping"),
}


def lost_keys(job: Job, text: str) -> Iterator[str]:
    """Yield every key of a job file whose value the model does not show."""
    for table, keys in tomllib.loads(text.replace("\r\n", "\n")).items():
        if table == "stages":
            assert len(keys) == len(job.stages)
            for place, stage in enumerate(keys):
                for key, typed in stage.items():
                    if not STAGE_KEYS[key](job, place, typed):
                        yield f"stages {place + 1}.{key}"
        elif isinstance(keys, dict):
            for key, typed in keys.items():
                if not JOB_KEYS[f"{table}.{key}"](job, keys, typed) and not (
                    table == "pile" and noticed(job, f"pile.{key}")
                ):
                    yield f"{table}.{key}"
        elif not JOB_KEYS[table](job, {}, keys):
            yield table


# --- catalogues ----------------------------------------------------------------------------------

HAMMER_NUMBERS = {
    "ram_mass": "mass",
    "stroke_min": "length",
    "stroke_max": "length",
    "efficiency": "number",
    "stroke_step": "length",
    "blow_rate_max": "rate",
    "blow_rate_full": "rate",
    "lift_speed": "velocity",
    "rated_energy": "energy",
    "helmet_mass": "mass",
    "hammer_mass": "mass",
    "hammer_length": "length",
    "head_min": "length",
    "head_max": "length",
}
CUSHION_NUMBERS = {
    "modulus": "stress",
    "restitution": "number",
    "sheet": "length",
    "worn_modulus": "stress",
    "worn_thickness": "number",
    "worn_restitution": "number",
    "new_for": "number",
    "life": "number",
}
AMOUNTS = {"day_rate", "mobilisation", "fuel_use", "price"}
ENERGIES = {
    "energy_min": lambda hammer: hammer.blow_energy(hammer.stroke_min),
    "energy_min_share": lambda hammer: hammer.stroke_min / hammer.stroke_max,
    "energy_step": lambda hammer: hammer.blow_energy(hammer.stroke_step),
}
TRUTHS = {"rides_on_pile", "available"}
TEXTS = {"name", "kind", "use", "source"}
CUSHION_OF_HAMMER = {
    "hammer_cushion": "",
    "hammer_cushion_thickness": "length",
    "hammer_cushion_area": "area",
    "hammer_cushion_stiffness": "stiffness",
    "hammer_cushion_restitution": "number",
}


def rows_of(text: str, separator: str) -> list[dict[str, tuple[str, str]]]:
    """The rows of a table: the cell and the unit of its column, by the column's plain name."""
    rows = [
        [" ".join(cell.split()) for cell in row]
        for row in csv.reader(io.StringIO(text), delimiter=separator)
    ]
    rows = [row for row in rows if any(row)]
    heads = []
    for cell in rows[0]:
        name, unit = re.fullmatch(r"([^\[(]*)(?:[\[(](.*)[\])])?", cell).groups()
        plain = re.sub(r"[\s-]+", "_", name.strip()).casefold()
        heads.append((plain.replace("_weight", "_mass"), (unit or "-").strip() or "-"))
    return [
        {name: (cell, unit) for (name, unit), cell in zip(heads, row, strict=False) if cell}
        for row in rows[1:]
    ]


def number(cell: str, unit: str, dimension: str, separator: str) -> float:
    return si(f"{cell.replace(',', '.') if separator != ',' else cell} {unit}", dimension)


def shows(item: Hammer | CushionMaterial, name: str, cell: str, unit: str, separator: str) -> bool:
    """Whether a row's object has the value of a cell, or keeps it aside."""
    numbers = HAMMER_NUMBERS if isinstance(item, Hammer) else CUSHION_NUMBERS
    if name in numbers:
        return same(getattr(item, name), number(cell, unit, numbers[name], separator))
    if name in AMOUNTS and hasattr(item, name):
        plain = cell.replace(",", ".") if separator != "," else cell
        return getattr(item, name) == (float(plain), unit.replace(" ", ""))
    if name in ENERGIES and isinstance(item, Hammer):
        dimension = "number" if name.endswith("share") else "energy"
        return same(ENERGIES[name](item), number(cell, unit, dimension, separator))
    if name in TRUTHS and isinstance(item, Hammer):
        return getattr(item, name) is (cell.casefold() in {"yes", "y", "true", "1"})
    if name in TEXTS and hasattr(item, name):
        return str(getattr(item, name)).casefold() == cell.casefold()
    if name in CUSHION_OF_HAMMER and isinstance(item, Hammer):
        return item.cushion is not None
    return cell in item.extra.values()


def lost_cells(
    items: list[Hammer] | list[CushionMaterial], text: str, separator: str, notices: list[str]
) -> Iterator[str]:
    """Yield every cell of a catalogue whose value neither a row's object nor a notice shows."""
    by_name = {item.name: item for item in items}
    for row in rows_of(text, separator):
        name = row["name"][0]
        if name not in by_name:
            if not any(f"{name} left out" in notice for notice in notices):
                yield f"row {name}"
            continue
        item = by_name[name]
        for column, (cell, unit) in row.items():
            if not shows(item, column, cell, unit, separator):
                yield f"{column} of {name}"
        if isinstance(item, Hammer) and "hammer_cushion_stiffness" in row:
            stiffness = number(*row["hammer_cushion_stiffness"], "stiffness", separator)
            if not same(item.cushion.stiffness, stiffness):
                yield f"hammer_cushion_stiffness of {name}"


def lost_hammer_cushions(
    hammers: list[Hammer], text: str, separator: str, catalogue: CushionCatalogue
) -> Iterator[str]:
    """Yield hammers whose cushion is not modulus times area over thickness of the one named."""
    by_name = {hammer.name: hammer for hammer in hammers}
    for row in rows_of(text, separator):
        hammer = by_name.get(row["name"][0])
        if hammer is None or "hammer_cushion" not in row:
            continue
        material = catalogue.find(row["hammer_cushion"][0])
        thickness = number(*row["hammer_cushion_thickness"], "length", separator)
        area = number(*row["hammer_cushion_area"], "area", separator)
        if not same(hammer.cushion.stiffness, material.modulus * area / thickness):
            yield f"hammer cushion of {hammer.name}"
