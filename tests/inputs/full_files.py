"""A job with every key there is, and each of its values replaced by each of other kinds."""

from __future__ import annotations

from collections.abc import Iterator

from tests.inputs.random_files import OTHER_CELLS, OTHER_VALUES, Files

FULL_JOB = """\
title = "x"
display = "us"
[catalog]
hammers = "hammers.csv"
cushions = "cushions.csv"
[pile]
material = "concrete"
shape = "square"
width = "400 mm"
length = "24 m"
strength = "50 MPa"
strength_at_driving = "45 MPa"
prestress = "6 MPa"
modulus = "35 GPa"
density = "2400 kg/m3"
[helmet]
mass = "900 kg"
[pile_cushion]
materials = ["oak"]
sheets = { from = 4, to = 9 }
wear = ["new", "worn"]
area = "1600 cm2"
[hammer_cushion]
materials = ["nylon"]
thickness = { from = "100 mm", to = "200 mm", step = "50 mm" }
area = "1500 cm2"
[[stages]]
name = "first"
penetration = "7 m"
shaft = "180 kN"
toe = "90 kN"
soil = "clay"
toe_soil = "loose"
[[stages]]
name = "last"
penetration = "21 m"
shaft = "1100 kN"
toe = "750 kN"
set = "4 mm"
shaft_shape = [["0 m", 0.2], ["21 m", 1.0]]
shaft_quake = "2.5 mm"
toe_quake = "3 mm"
shaft_damping = "0.16 s/m"
toe_damping = "0.5 s/m"
[target]
refusal = "1 mm"
[limits]
rule = "aashto"
compression = 0.8
tension_stress = "7 MPa"
[search]
objective = "energy"
reserve = 0.1
seed = 7
[analysis]
gravity = true
damping = "smith"
"""
FULL_HAMMERS = """\
name;kind;ram_mass [t];stroke_min [m];stroke_max [m];stroke_step [m];efficiency;\
blow_rate_max [1/min];lift_speed [m/s];rated_energy [kJ];helmet_mass [kg];hammer_cushion;\
hammer_cushion_thickness [mm];hammer_cushion_area [cm2];hammer_mass [t];rides_on_pile;available
A;drop;9;0.2;1.0;0.1;0.55;14;0.6;88;;nylon;200;2000;12;yes;yes
B;air;9;0.2;1.0;0.1;0.55;14;0.6;88;700;nylon;200;2000;12;no;yes
"""
FULL_CUSHIONS = """\
name;use;modulus [MPa];restitution;sheet [mm];worn_modulus [MPa];worn_thickness;\
worn_restitution;new_for;life;source
oak;pile;414;0.5;25;760;0.8;0.4;300;1500;x
nylon;hammer;1300;0.92;10;1300;1;0.9;300;1500;x
"""
SEPARATORS = {"job": "", "hammers": ";", "cushions": ";"}


def each_value_replaced() -> Iterator[Files]:
    """The full files with every value, one at a time, replaced by each of the others."""
    whole = {"job": FULL_JOB, "hammers": FULL_HAMMERS, "cushions": FULL_CUSHIONS}
    for which, text in whole.items():
        lines = text.splitlines()
        for place, line in enumerate(lines):
            for new in replacements(line, SEPARATORS[which]):
                changed = "\n".join([*lines[:place], new, *lines[place + 1 :], ""])
                parts = {name: other.encode() for name, other in whole.items()}
                yield Files(**(parts | {which: changed.encode()}), separators=(";", ";"))


def replacements(line: str, separator: str) -> Iterator[str]:
    if not separator:
        key, equals, value = line.partition(" = ")
        yield ""
        yield f"{line[:2]}{line[3:]}"
        for other in OTHER_VALUES if equals else ():
            yield f"{key} = {other}"
        if "{" in value:
            yield from (line.replace(one, f"{one}x", 1) for one in ("from", "to", "step"))
            yield from (line.replace(f"{one} = ", f"{one} = 1.5 #") for one in ("from", "to"))
        return
    cells = line.split(separator)
    for at in range(len(cells)):
        for other in OTHER_CELLS:
            yield separator.join([*cells[:at], other, *cells[at + 1 :]])
