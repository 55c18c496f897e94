"""Values that are possible and odd: told as notices, since most are slips of unit or magnitude."""

from __future__ import annotations

from typing import NamedTuple

from matchup.inputs.columns import Record
from matchup.inputs.job_text import JobText
from matchup.inputs.toml_lines import Path as KeyPath
from matchup.units import GRAVITY, format_quantity


class Usual(NamedTuple):
    """The range that nearly all values lie in, in SI, and the quantity that it is shown in."""

    low: float
    high: float
    quantity: str


USUAL = {
    "hammer ram_mass": Usual(50.0, 300e3, "mass"),
    "hammer stroke_min": Usual(0.02, 5.0, "stroke"),
    "hammer stroke_max": Usual(0.1, 6.0, "stroke"),
    "hammer efficiency": Usual(0.2, 1.0, "number"),
    "hammer blow_rate_max": Usual(2 / 60, 250 / 60, "rate"),
    "hammer lift_speed": Usual(0.05, 10.0, "velocity"),
    "hammer helmet_mass": Usual(10.0, 150e3, "mass"),
    "hammer hammer_mass": Usual(100.0, 1000e3, "mass"),
    "hammer hammer_cushion_thickness": Usual(0.005, 1.0, "thickness"),
    "hammer hammer_cushion_area": Usual(0.005, 10.0, "area"),
    "hammer hammer_cushion_stiffness": Usual(10e6, 200e9, "stiffness"),
    "cushion modulus": Usual(5e6, 50e9, "modulus"),
    "cushion worn_modulus": Usual(5e6, 50e9, "modulus"),
    "cushion sheet": Usual(0.003, 0.3, "thickness"),
    "cushion worn_thickness": Usual(0.3, 1.0, "number"),
    "cushion life": Usual(50.0, 1e6, "number"),
    "concrete strength": Usual(15e6, 150e6, "stress"),
    "concrete modulus": Usual(10e9, 60e9, "modulus"),
    "concrete density": Usual(1500.0, 3000.0, "density"),
    "steel strength": Usual(180e6, 1100e6, "stress"),
    "steel modulus": Usual(180e9, 230e9, "modulus"),
    "steel density": Usual(7500.0, 8200.0, "density"),
    "timber strength": Usual(2e6, 80e6, "stress"),
    "timber modulus": Usual(3e9, 30e9, "modulus"),
    "timber density": Usual(300.0, 1300.0, "density"),
    "pile length": Usual(2.0, 200.0, "length"),
    "pile prestress": Usual(0.0, 20e6, "stress"),
    "pile width": Usual(0.08, 5.0, "length"),
    "pile depth": Usual(0.08, 1.5, "length"),
    "pile diameter": Usual(0.08, 12.0, "length"),
    "pile toe_diameter": Usual(0.08, 1.0, "length"),
    "pile shoe_mass": Usual(1.0, 5000.0, "mass"),
    "pile wall": Usual(0.003, 0.3, "thickness"),
    "helmet mass": Usual(10.0, 150e3, "mass"),
    "stack thickness": Usual(0.005, 1.0, "thickness"),
    "stack area": Usual(0.005, 10.0, "area"),
    "stage shaft": Usual(0.0, 500e6, "force"),
    "stage toe": Usual(0.0, 500e6, "force"),
    "stage set": Usual(0.0001, 0.5, "set"),
    "stage shaft_quake": Usual(0.0005, 0.02, "set"),
    "stage toe_quake": Usual(0.0005, 0.1, "set"),
    "stage shaft_damping": Usual(0.0, 2.0, "damping"),
    "stage toe_damping": Usual(0.0, 2.0, "damping"),
}
"""Ranges on the wide side; common practice, no published source."""
RATED = Usual(0.2, 1.3, "number")
"""Energy of the data sheet over ram weight times longest stroke; above 1 where the ram is pushed
down as well. Common practice, no published source."""
REMEDY = "check number and unit"


def unusual(what: str, value: float | None) -> str:
    """Return in words that a value is unusual; nothing for one that is not, or is not given."""
    if value is None:
        return ""
    low, high, quantity = USUAL[what]
    if not value < low and not value > high:
        return ""
    least, most = (format_quantity(limit, quantity, "metric", 6) for limit in (low, high))
    return f"is unusual; mostly {least} to {most}: {REMEDY}"


def note_unusual(text: JobText, path: KeyPath, value: float | None, what: str) -> None:
    """Note that a key of the job has an unusual value, if it has."""
    if words := unusual(what, value):
        text.notice(path, f"{text.typed(path)} {words}")


def note_unusual_row(record: Record, what: str) -> list[str]:
    """Return notices of a catalogue row's unusual values; `what` is ``hammer`` or ``cushion``."""
    notices = []
    for name in record.values:
        if f"{what} {name}" in USUAL and (words := unusual(f"{what} {name}", record.number(name))):
            notices.append(f"{record.places[name]}, {record.typed[name]}, {words}")
    energy, mass, stroke = map(record.number, ("rated_energy", "ram_mass", "stroke_max"))
    if energy and mass and stroke:
        ratio = energy / (mass * GRAVITY * stroke)
        if not RATED.low <= ratio <= RATED.high:
            notices.append(
                f"{record.places['rated_energy']}, {record.typed['rated_energy']}, is {ratio:.2g} "
                f"times ram weight times longest stroke; mostly {RATED.low} to {RATED.high}: "
                f"{REMEDY}"
            )
    return notices
