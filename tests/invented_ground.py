"""The ground of the invented Hollowmere ferry landing: its cone test and its layers.

``python -m tests.invented_ground`` writes both to the example's folder. They are made up from a
short table of layers, with noise from a generator that gives the same numbers on every machine;
nothing in them was measured anywhere.
"""

from __future__ import annotations

import math
import random
from itertools import pairwise
from pathlib import Path
from typing import NamedTuple

FOLDER = Path(__file__).parents[1] / "examples" / "hollowmere_landing"
CONE_TEST = FOLDER / "cpt_b2.gef"
LAYERS = FOLDER / "layers_b2.csv"

STEP = 0.02
END = 28.0
WATER = 1.2
AREA_RATIO = 0.80
SLEEVE_BEHIND = 0.08
"""The sleeve measures this far above the tip, so the last readings have no friction. [m]"""
VOID = "-999999"


class Soil(NamedTuple):
    """What the invented layers are made of: how the cone feels them, and how they are described.

    Cone resistance in MPa at top and bottom, friction ratio, scatter of the logarithm of cone
    resistance, and u2 less the water pressure at rest, over the cone resistance away from borders.
    """

    bottom: float
    top_tip: float
    bottom_tip: float
    friction_ratio: float
    scatter: float
    excess: float
    row: str


GROUND = (
    Soil(1.0, 3.0, 2.0, 0.010, 0.20, 0.00, "sand,18,,,,,10,1"),
    Soil(9.0, 0.26, 0.60, 0.030, 0.05, 0.45, "clay,16,,14,34,1.2,,"),
    Soil(15.5, 5.5, 8.5, 0.007, 0.12, 0.00, "sand,19.5,medium dense,,,,,"),
    Soil(18.0, 19.0, 22.0, 0.008, 0.10, -0.002, "sand,20.5,dense,,,,,"),
    Soil(END, 10.0, 14.0, 0.008, 0.14, 0.00, "sand,20,medium dense,,,,,"),
)


class Reading(NamedTuple):
    """One row of the cone test: lengths in m, pressures in MPa, inclination in degrees."""

    length: float
    tip: float
    sleeve: float
    pore_pressure: float
    inclination: float
    depth: float


def readings() -> list[Reading]:
    """Return the invented cone test, one row each 20 mm of penetration."""
    noise = random.Random(20)
    count = round(END / STEP) + 1
    rough, friction_rough, depth = 0.0, 0.0, 0.0
    rows: list[Reading] = []
    for number in range(count):
        length = number * STEP
        rough = 0.9 * rough + math.sqrt(1 - 0.9**2) * _normal(noise)
        friction_rough = 0.95 * friction_rough + math.sqrt(1 - 0.95**2) * _normal(noise)
        inclination = 0.3 + 0.06 * length + 0.1 * math.sin(length)
        if number:
            depth += STEP * math.cos(math.radians(inclination))
        soil = _soil_at(depth)
        tip = math.exp(_smooth_log_tip(depth) + soil.scatter * rough)
        at_rest = 9.80665e-3 * max(depth - WATER, 0.0)
        rows.append(
            Reading(
                length,
                tip,
                tip * soil.friction_ratio * math.exp(0.1 * friction_rough),
                max(at_rest + soil.excess * _sharp_tip(depth), -0.05),
                inclination,
                depth,
            )
        )
    return rows


def _normal(noise: random.Random) -> float:
    """Return a nearly normal number; `random()` alone is promised to stay as it is."""
    return sum(noise.random() for _ in range(12)) - 6


def _soil_at(depth: float) -> Soil:
    return next((soil for soil in GROUND if depth <= soil.bottom), GROUND[-1])


def _smooth_log_tip(depth: float) -> float:
    """Return the logarithm of cone resistance without noise; the cone feels borders 0.3 m off."""
    around = [depth + offset * 0.05 for offset in range(-6, 7)]
    return sum(math.log(_sharp_tip(max(d, 0.0))) for d in around) / len(around)


def _sharp_tip(depth: float) -> float:
    soil = _soil_at(depth)
    top = ([0.0] + [layer.bottom for layer in GROUND])[GROUND.index(soil)]
    share = min((depth - top) / (soil.bottom - top), 1.0)
    return soil.top_tip + (soil.bottom_tip - soil.top_tip) * share


def cone_test() -> str:
    """Return the cone test as the text of a GEF-CPT file."""
    rows = readings()
    voids = "".join(f"#COLUMNVOID= {column}, {VOID}\n" for column in range(2, 7))
    header = f"""\
#GEFID= 1, 1, 0
#FILEOWNER= invented
#FILEDATE= 2024, 5, 14
#PROJECTID= CPT, HOLLOWMERE
#PROJECTNAME= Hollowmere ferry landing (invented)
#COMPANYID= invented, -, -
#COMMENT= Invented from end to end: no such site, and nothing here was measured.
#TESTID= Hollowmere B2
#STARTDATE= 2024, 5, 13
#STARTTIME= 9, 30, 0
#COLUMN= 6
#COLUMNINFO= 1, m, penetration length, 1
#COLUMNINFO= 2, MPa, cone resistance qc, 2
#COLUMNINFO= 3, MPa, sleeve friction fs, 3
#COLUMNINFO= 4, MPa, pore pressure u2, 6
#COLUMNINFO= 5, degrees, inclination, 8
#COLUMNINFO= 6, m, corrected depth, 11
{voids}#COLUMNSEPARATOR= ;
#RECORDSEPARATOR= !
#LASTSCAN= {len(rows)}
#XYID= 00000, 0.00, 0.00
#ZID= 00000, 3.40
#MEASUREMENTTEXT= 4, invented, cone type
#MEASUREMENTTEXT= 6, NEN-EN-ISO 22476-1 class 2 TE2, standard and class
#MEASUREMENTTEXT= 9, ground surface, fixed horizontal level
#MEASUREMENTVAR= 1, 1000, mm2, nominal area of the cone
#MEASUREMENTVAR= 2, 15000, mm2, area of the friction sleeve
#MEASUREMENTVAR= 3, {AREA_RATIO:.2f}, -, net area ratio of the cone
#MEASUREMENTVAR= 5, {1e3 * SLEEVE_BEHIND:.0f}, mm, distance from cone to middle of sleeve
#MEASUREMENTVAR= 12, 4, -, electrical cone, continuous
#MEASUREMENTVAR= 13, 0.00, m, pre-excavated depth
#MEASUREMENTVAR= 16, {rows[-1].length:.2f}, m, final length
#MEASUREMENTVAR= 17, 0, -, stopped at final depth
#REPORTCODE= GEF-CPT-Report, 1, 1, 2, -
#DATAFORMAT= ASCII
#EOH=
"""
    return header + "".join(f"{_gef_row(row, rows[-1].length)}\n" for row in rows)


def _gef_row(row: Reading, end: float) -> str:
    lost = row.length < SLEEVE_BEHIND or row.length > end - SLEEVE_BEHIND
    sleeve = VOID if lost else f"{row.sleeve:.4f}"
    pore_pressure = VOID if row.length == 0 else f"{row.pore_pressure:.4f}"
    cells = (f"{row.length:.2f}", f"{row.tip:.3f}", sleeve, pore_pressure)
    return ";".join((*cells, f"{row.inclination:.2f}", f"{row.depth:.3f}", "!"))


def layers() -> str:
    """Return the layers as the text of a CSV file; the last is a little deeper than the test."""
    lines = [
        "top [m],bottom [m],soil,unit_weight [kN/m3],density,strength [kPa],"
        "strength_bottom [kPa],ocr [-],unit_shaft [kPa],unit_toe [MPa],water [m],remark"
    ]
    borders = [0.0, *(soil.bottom for soil in GROUND[:-1]), END + 2]
    for number, ((top, bottom), soil) in enumerate(zip(pairwise(borders), GROUND, strict=True)):
        water = f"{WATER:g}" if number == 0 else ""
        lines.append(f"{top:g},{bottom:g},{soil.row},{water},invented")
    return "\n".join(lines) + "\n"


if __name__ == "__main__":
    CONE_TEST.write_text(cone_test(), encoding="utf-8")
    LAYERS.write_text(layers(), encoding="utf-8")
