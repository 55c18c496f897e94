"""Random sound jobs with their catalogues, and what happens to files."""

from __future__ import annotations

import json
from dataclasses import dataclass

from hypothesis import strategies as st

from tests.inputs import echo

# --- sound files ---------------------------------------------------------------------------------

UNITS = {
    "length": ["m", "ft"],
    "size": ["mm", "in", "cm"],
    "set": ["mm", "in"],
    "area": ["cm2", "m2", "in2", "mm²"],
    "mass": ["kg", "t", "lb", "kN", "kip"],
    "force": ["kN", "MN", "kip", "lbf"],
    "stress": ["MPa", "ksi", "N/mm2", "psi"],
    "density": ["kg/m3", "lb/ft3"],
    "damping": ["s/m", "s/ft"],
}
DIMENSION = {"size": "length", "set": "length"}


@st.composite
def value(draw, quantity: str, low: float, high: float) -> str:
    """A text between two SI values, in any unit."""
    if quantity == "set" and draw(st.integers(0, 3)) == 0:
        return f"{draw(st.integers(20, 200))} {draw(st.sampled_from(['blows/ft', 'blows/25cm']))}"
    unit = draw(st.sampled_from(UNITS[quantity]))
    factor = echo.si(f"1 {unit}", DIMENSION.get(quantity, quantity))
    number = draw(st.floats(low, high)) / factor
    return f"{number:.{draw(st.integers(5, 17))}g} {unit}"


words = st.text(
    st.characters(codec="utf-8", exclude_categories=["C", "Z"], exclude_characters='"\\'),
    min_size=1,
    max_size=8,
)


def section(draw) -> dict[str, str]:
    shape = draw(st.sampled_from(["square", "round", "pipe", "h", "other"]))
    size = draw(value("size", 0.3, 0.6))
    keys = {
        "square": {"width": size},
        "round": {"diameter": size},
        "pipe": {
            "diameter": size,
            "wall": draw(value("size", 0.01, 0.03)),
            "toe": draw(st.sampled_from(["open", "closed"])),
        },
        "h": {"area": draw(value("area", 0.01, 0.03)), "depth": size, "width": size},
        "other": {
            "area": draw(value("area", 0.05, 0.2)),
            "perimeter": draw(value("size", 1.0, 2.0)),
            "toe_area": draw(value("area", 0.1, 0.3)),
        },
    }[shape]
    if shape == "h" and draw(st.booleans()):
        keys |= {"perimeter": draw(value("size", 1, 2)), "toe_area": draw(value("area", 0.1, 0.2))}
    return {"shape": shape, **keys}


STRENGTH = {"concrete": (45e6, 60e6), "steel": (300e6, 400e6), "timber": (8e6, 12e6)}


def pile(draw) -> dict[str, str]:
    material = draw(st.sampled_from(list(STRENGTH)))
    keys = {"material": material, **section(draw)}
    keys["length"] = draw(value("length", 25.0, 40.0))
    keys["strength"] = draw(value("stress", *STRENGTH[material]))
    if material == "concrete":
        if draw(st.booleans()):
            keys["strength_at_driving"] = draw(value("stress", 40e6, 45e6))
        if draw(st.booleans()):
            keys["prestress"] = draw(value("stress", 2e6, 8e6))
    if draw(st.booleans()):
        keys["modulus"] = draw(value("stress", 10e9, 40e9))
    if draw(st.booleans()):
        keys["density"] = draw(value("density", 800, 2500))
    if keys["shape"] == "round" and draw(st.booleans()):
        keys["toe_diameter"] = draw(value("size", 0.2, 0.29))
    if draw(st.booleans()):
        keys["rake"] = draw(st.sampled_from(["9.5 deg", "1:6", "1 : 4.5", "0.1 rad"]))
    if draw(st.booleans()):
        keys["shoe_mass"] = draw(value("mass", 20.0, 300.0))
    return keys | draw(st.sampled_from([alone, in_parts, plugged, followed]))(draw, keys)


def alone(draw, keys: dict[str, str]) -> dict[str, object]:
    return {}


def in_parts(draw, keys: dict[str, str]) -> dict[str, object]:
    del keys["length"]
    names = draw(st.lists(words, min_size=2, max_size=3, unique_by=str.casefold))
    own = {"modulus": draw(value("stress", 10e9, 40e9))} if draw(st.booleans()) else {}
    return {"parts": [{"name": n, "length": draw(value("length", 13, 20))} | own for n in names]}


def plugged(draw, keys: dict[str, str]) -> dict[str, object]:
    if (keys["shape"] != "h" and keys.get("toe") != "open") or "perimeter" in keys:
        return {}
    length, density = draw(value("length", 2, 20)), draw(value("density", 1e3, 2e3))
    return {"plug": {"length": length, "density": density}}


def followed(draw, keys: dict[str, str]) -> dict[str, object]:
    length = draw(value("length", 1, 5))
    section = {"material": "steel", "shape": "pipe", "diameter": "0.4 m", "wall": "2 cm"}
    return {"follower": {**section, "strength": "355 MPa", "length": length}}


def thickness(draw) -> object:
    low = draw(value("size", 0.05, 0.1))
    if draw(st.booleans()):
        return low
    keys = {"from": low, "to": draw(value("size", 0.2, 0.3))}
    return keys | ({"step": draw(value("size", 0.01, 0.05))} if draw(st.booleans()) else {})


def pile_cushion(draw, shape: str) -> dict[str, object]:
    chosen = st.lists(st.sampled_from(["plywood", "oak", "Softwood"]), min_size=1, unique=True)
    keys: dict[str, object] = {"materials": draw(chosen)}
    if draw(st.booleans()):
        count = st.integers(1, 30)
        either = st.one_of(count, st.lists(count, min_size=1), st.just({"from": 3, "to": 9}))
        keys["sheets"] = draw(either)
    else:
        keys["thickness"] = thickness(draw)
    if draw(st.booleans()):
        wears = st.lists(st.sampled_from(["new", "worn"]), min_size=1, unique=True)
        keys["wear"] = draw(wears)
    if shape not in ("square", "round") or draw(st.booleans()):
        keys["area"] = draw(value("area", 0.05, 0.3))
    return keys


def stage(draw, name: str) -> dict[str, object]:
    keys: dict[str, object] = {
        "name": name,
        "penetration": draw(value("length", 5.0, 24.0)),
        "shaft": draw(value("force", 1.0, 3e6)),
        "toe": draw(value("force", 1e3, 3e6)),
    }
    rows = st.just([["0 m", 0.2], ["3.5 ft", 1], ["4 m", 0.0]])
    maybe = {
        "set": value("set", 1e-3, 20e-3),
        "shaft_shape": st.one_of(st.sampled_from(["uniform", "triangular"]), rows),
        "soil": st.sampled_from(["sand", "silty sand", "silt", "clay"]),
        "toe_soil": st.sampled_from(["dense", "loose"]),
        "shaft_quake": value("set", 1e-3, 5e-3),
        "toe_quake": value("set", 1e-3, 9e-3),
        "shaft_damping": value("damping", 0.01, 0.9),
        "toe_damping": value("damping", 0.01, 0.9),
    }
    return keys | {key: draw(one) for key, one in maybe.items() if draw(st.booleans())}


def limits(draw, material: str) -> dict[str, object]:
    sides: dict[str, object] = {}
    for side in ("compression", "tension"):
        form = draw(st.sampled_from(["", side, f"{side}_stress"]))
        if form:
            share = st.floats(0.5, 0.9) if side == "compression" else st.floats(0.01, 0.2)
            sides[form] = draw(value("stress", 1e6, 20e6) if "stress" in form else share)
    if len(sides) < 2 or draw(st.booleans()):
        known = ["aashto"] if material == "timber" else ["aashto", "en 12699 monitored"]
        has_tension = any(key.startswith("tension") for key in sides)
        if material == "concrete" and not has_tension:
            known = ["aashto"]
        sides["rule"] = draw(st.sampled_from(known))
    if draw(st.booleans()):
        sides["bending"] = draw(st.floats(0, 0.3))
    return sides


@st.composite
def jobs(draw) -> dict[str, object]:
    """A sound job as a document."""
    keys = pile(draw)
    job: dict[str, object] = {"title": draw(words)}
    if draw(st.booleans()):
        job["display"] = draw(st.sampled_from(["metric", "us"]))
    names = draw(st.lists(words, min_size=1, max_size=3, unique_by=str.casefold))
    job |= {
        "catalog": {"hammers": "hammers.csv", "cushions": "cushions.csv"},
        "pile": keys,
        "limits": limits(draw, keys["material"]),
        "helmet": {"mass": draw(value("mass", 300.0, 2000.0))},
        "stages": [stage(draw, name) for name in names],
    }
    maybe = {
        "pile_cushion": lambda: pile_cushion(draw, "pipe" if "follower" in keys else keys["shape"]),
        "hammer_cushion": lambda: {
            "materials": ["nylon"],
            "thickness": thickness(draw),
            "area": draw(value("area", 0.05, 0.2)),
        },
        "target": lambda: {"refusal": draw(value("set", 5e-4, 2e-3))},
        "search": lambda: {
            # "time" needs a blow rate in the catalogue, which is drawn apart from the job.
            "objective": "energy",
            "reserve": draw(st.floats(0, 0.5)),
            "seed": draw(st.integers(0, 2**31)),
        },
        "analysis": lambda: {
            "gravity": draw(st.booleans()),
            "damping": draw(st.sampled_from(["smith", "viscous"])),
        },
    }
    return job | {key: make() for key, make in maybe.items() if draw(st.booleans())}


def toml(item: object) -> str:
    """A value on one line of TOML."""
    if isinstance(item, dict):
        return "{ " + ", ".join(f"{key} = {toml(one)}" for key, one in item.items()) + " }"
    if isinstance(item, list):
        return "[" + ", ".join(map(toml, item)) + "]"
    if isinstance(item, str):
        return json.dumps(item, ensure_ascii=False)
    return str(item).lower() if isinstance(item, bool) else repr(item)


def written(draw, job: dict[str, object]) -> str:
    """A document as people write it: tables, dotted keys, tables on a line, comments."""
    top, below = [], []
    for key, item in job.items():
        style = draw(st.integers(0, 5)) if isinstance(item, dict) else 0
        if isinstance(item, list):
            for one in item:
                below += [f"[[{key}]]  # one", *(f"{k} = {toml(v)}" for k, v in one.items()), ""]
        elif not isinstance(item, dict):
            top.append(f"{key} = {toml(item)} # [x]")
        elif style == 4:
            top += [f'{key}."{k}" = {toml(v)}' for k, v in item.items()]
        elif style == 5:
            top.append(f"{key} = {toml(item)}")
        else:
            below += [f"  [{key}]", *(f"  {k}={toml(v)}" for k, v in item.items())]
    return "\n".join([*top, *below, ""])


HAMMER_CELLS = {
    "ram_mass": ("mass", 1e3, 2e4),
    "stroke_min": ("length", 0.1, 0.3),
    "stroke_max": ("length", 0.5, 2.0),
    "stroke_step": ("length", 0.01, 0.2),
    "helmet_mass": ("mass", 200.0, 2e3),
}


def column(draw, name: str, quantity: str, low: float, high: float, rows: int) -> list[str]:
    """A header with any unit, and numbers between two SI values."""
    unit = draw(st.sampled_from(UNITS[quantity]))
    factor = echo.si(f"1 {unit}", DIMENSION.get(quantity, quantity))
    numbers = [draw(st.floats(low, high)) / factor for _ in range(rows)]
    return [f"{name} [{unit}]", *(f"{number:.6g}" for number in numbers)]


def as_table(draw, columns: list[list[str]]) -> tuple[str, str]:
    """Columns in any order, as CSV with any separator; and the separator."""
    separator = draw(st.sampled_from([",", ";", "\t"]))
    comma = separator != "," and draw(st.booleans())
    lines = []
    for row in zip(*draw(st.permutations(columns)), strict=True):
        cells = []
        for cell in row:
            plain = cell.replace(".", ",") if comma and cell.replace(".", "").isdigit() else cell
            quoted = '"' + plain.replace('"', '""') + '"'
            cells.append(quoted if set('",;\t') & set(plain) else plain)
        lines.append(separator.join(cells))
    return "\n".join(lines) + "\n", separator


@st.composite
def hammer_tables(draw) -> tuple[str, str]:
    """A sound hammer catalogue and its separator."""
    names = draw(st.lists(words, min_size=1, max_size=4, unique_by=str.casefold))
    names = [f"h{name}" for name in names]
    rows = len(names)
    columns = [["name", *names]]
    columns.append(["kind", *(draw(st.sampled_from(["drop", "hydraulic", "air"])) for _ in names)])
    columns.append(["efficiency", *(f"{draw(st.floats(0.3, 1.0)):.4g}" for _ in names)])
    for name, (quantity, low, high) in HAMMER_CELLS.items():
        if name not in ("stroke_step", "helmet_mass") or draw(st.booleans()):
            columns.append(column(draw, name, quantity, low, high, rows))
    if draw(st.booleans()):
        columns.append(["hammer_cushion", *["nylon"] * rows])
        columns.append(column(draw, "hammer_cushion_thickness", "size", 0.05, 0.2, rows))
        columns.append(column(draw, "hammer_cushion_area", "area", 0.05, 0.2, rows))
    if draw(st.booleans()):
        columns.append(["plant no.", *(draw(words) for _ in names)])
    if draw(st.booleans()):
        columns.append(["available", "yes", *["no"] * (rows - 1)])
    return as_table(draw, columns)


@st.composite
def cushion_tables(draw) -> tuple[str, str]:
    """A sound cushion catalogue with the materials that jobs name, and its separator."""
    names = ["plywood", "oak", "softwood", "nylon"]
    columns = [
        ["name", *names],
        ["use", "pile", "both", "PILE", "hammer"],
        column(draw, "modulus", "stress", 1e8, 1e9, 4),
        ["restitution", *(f"{draw(st.floats(0.3, 1.0)):.4g}" for _ in names)],
        column(draw, "sheet", "size", 0.01, 0.05, 4),
    ]
    if draw(st.booleans()):
        columns.append(column(draw, "worn_modulus", "stress", 1e8, 1e9, 4))
    if draw(st.booleans()):
        columns.append(["source", *(draw(words) for _ in names)])
    return as_table(draw, columns)


@dataclass
class Files:
    """The three files of a job, with the separators of its tables."""

    job: bytes
    hammers: bytes
    cushions: bytes
    separators: tuple[str, str]


@st.composite
def sound(draw) -> Files:
    hammers, first = draw(hammer_tables())
    cushions, second = draw(cushion_tables())
    job = written(draw, draw(jobs()))
    return Files(job.encode(), hammers.encode(), cushions.encode(), (first, second))


# --- damage --------------------------------------------------------------------------------------

OTHER_VALUES = (
    '"24"', "24", "nan", "-inf", "true", "[]", "{}", '"x"', '""', '"0 m"', '"-1 m"', "1e400",
    '"1e400 kN"', '"1e-300 MPa"', "1979-05-27", "07:32:00", '[["0 m", 1.0]]', '"5 ton"',
    '"\\u0000"', "99999999999999999999", "{ from = 1, to = 2 }", '"1,5 m"', "'60 blows/ft'",
    "0.5", '"85 %"',
    "[1, 2, 2]", '{ from = "1 m", to = "2 m", step = "1 mm" }', "[[]]", '"400 mm"', '"20 MPa"',
    '["oak", "oak"]', '"aashto severe corrosion"', '"en 12699"', "-1", '"sand"', '"new"', '["new"]',
)  # fmt: skip
OTHER_CELLS = (
    "", "x", "0", "-1", "nan", "1e999", "7,5", '"7,5"', "1.234,5", "12-Mar", "2025-03-12", '"',
    "yes", "no", "diesel", "drop", "nylon", "oak", "plywood", "=1+1", "#DIV/0!", "0.5", "55",
    "\u0663", " ",
)  # fmt: skip


def damaged(draw, data: bytes, separator: str) -> bytes:
    """A file after one of the things that happen to files."""
    lines = data.split(b"\n")
    some_line, other = (st.integers(0, len(lines) - 1) for _ in range(2))
    at = draw(st.integers(0, max(0, len(data) - 1)))
    how = draw(st.integers(0, 8))
    if how == 0:
        del lines[draw(some_line)]
    elif how == 1:
        a, b = draw(some_line), draw(other)
        lines[a], lines[b] = lines[b], lines[a]
    elif how == 2:
        lines.insert(draw(other), lines[draw(some_line)])
    elif how == 3:
        return data[:at]
    elif how == 4:
        return data[:at] + draw(st.binary(min_size=1, max_size=4)) + data[at:]
    elif how == 5:
        return data[:at] + data[at + draw(st.integers(1, 5)) :]
    else:
        place = draw(some_line)
        lines[place] = retyped(draw, lines[place], separator)
    return b"\n".join(lines)


def retyped(draw, line: bytes, separator: str) -> bytes:
    """A line with one value replaced by one of another type, size or dimension."""
    if separator:
        cells = line.split(separator.encode())
        cells[draw(st.integers(0, len(cells) - 1))] = draw(st.sampled_from(OTHER_CELLS)).encode()
        return separator.encode().join(cells)
    key, equals, _ = line.partition(b"=")
    new = draw(st.sampled_from(OTHER_VALUES)).encode()
    return key + equals + b" " + new if equals else line


@st.composite
def broken(draw) -> Files:
    files = draw(sound())
    for _ in range(draw(st.integers(1, 3))):
        which = draw(st.sampled_from(["job", "job", "hammers", "cushions"]))
        separator = {"job": "", "hammers": files.separators[0], "cushions": files.separators[1]}
        setattr(files, which, damaged(draw, getattr(files, which), separator[which]))
    return files
