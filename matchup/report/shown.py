"""Numbers as people see them in one system of units."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from matchup.model.cushion import Cushion
from matchup.model.hammer import Hammer
from matchup.report.table import Marked
from matchup.units import display_unit, parse_quantity, to_display

DIGITS = {
    ("stroke", "metric"): 2,
    ("stroke", "us"): 2,
    ("set", "metric"): 1,
    ("set", "us"): 3,
    ("energy", "metric"): 1,
    ("energy", "us"): 1,
    ("stress", "metric"): 1,
    ("stress", "us"): 2,
    ("length", "metric"): 1,
    ("length", "us"): 1,
    ("thickness", "metric"): 0,
    ("thickness", "us"): 2,
    ("force", "metric"): 0,
    ("force", "us"): 0,
    ("vibration", "metric"): 1,
    ("vibration", "us"): 2,
    ("rate", "metric"): 0,
    ("rate", "us"): 0,
    ("mass", "metric"): 0,
    ("mass", "us"): 0,
}
TOLD_IN = {
    "mm": "thickness",
    "cm2": "area",
    "GPa": "modulus",
    "kg/m3": "density",
    "s/m": "damping",
}
"""Units in which readers tell of values, and the quantity that each stands for."""
MOST_DIGITS = 3
"""Decimals more than usual, at most, to tell a value from its bound."""
COUNTED_LENGTH = {"metric": (0.25, "25cm", "25 cm"), "us": (0.3048, "ft", "ft")}


@dataclass(frozen=True, slots=True)
class Units:
    """Writes SI values in one display system, ``metric`` or ``us``."""

    system: str

    def unit(self, quantity: str) -> str:
        """Return the unit's symbol."""
        return display_unit(quantity, self.system)

    def digits(self, quantity: str) -> int:
        """Return the usual number of decimals."""
        return DIGITS[quantity, self.system]

    def value(self, si: float | None, quantity: str) -> float | None:
        """Return the number in the display unit; None where there is none."""
        if si is None or not math.isfinite(si):
            return None
        return to_display(si, quantity, self.system)

    def text(self, si: float, quantity: str) -> str:
        """Return number and unit."""
        value = to_display(si, quantity, self.system)
        return f"{value:.{self.digits(quantity)}f} {self.unit(quantity)}"

    def depth_digits(self, *depths: float) -> int:
        """Return the decimals in which depths [m] are told: more where the usual ones round."""
        usual = self.digits("length")
        shown = [to_display(depth, "length", self.system) for depth in depths]
        return usual + any(abs(depth - round(depth, usual)) > 0.01 for depth in shown)

    def depth(self, si: float) -> str:
        """Return a depth with its unit."""
        value = to_display(si, "length", self.system)
        return f"{value:.{self.depth_digits(si)}f} {self.unit('length')}"

    def rest(self, si: float) -> str:
        """Return a rest in hours, from three days on in days."""
        hours = si / 3600
        return f"{hours:.3g} h" if hours < 72 else f"{hours / 24:.3g} d"

    def setting(self, hammer: Hammer, stroke: float) -> str:
        """Return a hammer's setting: its stroke, or its energy with the equivalent stroke."""
        told = self.text(stroke, "stroke")
        if not hammer.set_by_energy:
            return told
        return f"{self.text(hammer.blow_energy(stroke), 'energy')} ({told})"

    def together(self, si: float, bound: float, quantity: str) -> tuple[str, str]:
        """Return a value and its bound with units, in as many decimals as tell them apart."""
        value, other = (to_display(v, quantity, self.system) for v in (si, bound))
        digits = self.digits(quantity)
        most = digits + (MOST_DIGITS if value != other else 0)
        while digits < most and f"{value:.{digits}f}" == f"{other:.{digits}f}":
            digits += 1
        unit = self.unit(quantity)
        return f"{value:.{digits}f} {unit}", f"{other:.{digits}f} {unit}"

    @property
    def speed_unit(self) -> str:
        """The unit of a penetration speed."""
        return "ft/min" if self.system == "us" else "m/min"

    @property
    def speed_key(self) -> str:
        """A column key with that unit."""
        return f"speed_{self.speed_unit.replace('/', '_per_')}"

    def speed(self, si: float | None) -> float | None:
        """Return a penetration speed in its unit."""
        return None if si is None else 60 * to_display(si, "velocity", self.system)

    def retold(self, text: str) -> str:
        """Return a reader's words with the values told in metric units shown in these units.

        What stands in brackets is a source, and stays as it is printed there.
        """
        if self.system == "metric":
            return text
        told, bracket, source = text.partition(" (")

        def shown(found: re.Match[str]) -> str:
            quantity = TOLD_IN[found[2]]
            value = self.value(parse_quantity(found[0], quantity), quantity) or 0.0
            return f"{float(f'{value:.3g}'):g} {self.unit(quantity)}"

        units = "|".join(TOLD_IN)
        return re.sub(rf"(\d+\.?\d*) ({units})\b", shown, told) + bracket + source

    def blow_count(self, set_: float) -> float | None:
        """Return blows per 25 cm or per foot; None where the pile does not move."""
        return COUNTED_LENGTH[self.system][0] / set_ if set_ > 0 else None

    @property
    def counted(self) -> str:
        """The length that blows are counted over, for people."""
        return COUNTED_LENGTH[self.system][2]

    def key(self, name: str, quantity: str) -> str:
        """Return a column key with its unit: ``set_mm``."""
        return f"{name}_{self.unit(quantity)}".replace("/", "_per_").replace("-", "_")

    def cushion_words(self, cushion: Cushion | None) -> str:
        """Return a cushion as part of a sentence."""
        if cushion is None:
            return "no pile cushion"
        if cushion.sheets:
            plural = "" if cushion.sheets == 1 else "s"
            return f"{cushion.sheets} sheet{plural} of {cushion.material.name}"
        return f"{self.text(cushion.thickness, 'thickness')} of {cushion.material.name}"

    def cushion(self, cushion: Cushion | None) -> str:
        """Return a cushion in a table."""
        if cushion is None:
            return "none"
        if cushion.sheets:
            return f"{cushion.sheets} {cushion.material.name}"
        return f"{self.text(cushion.thickness, 'thickness')} {cushion.material.name}"


def share_text(share: float) -> str:
    """Return a share of a limit as whole percent, with decimals where it is hardly above or below.

    Nobody shall read 100% of something that is exceeded, or that is not.
    """
    usual = f"{100 * share:.0f}%"
    if usual != "100%" or share == 1:
        return usual
    close = f"{100 * share:.1f}%"
    if close != "100.0%":
        return close
    return "just over 100%" if share > 1 else "just under 100%"


class OfLimit(Marked):
    """A percentage of a limit: people never see 100 of what is above or below it."""

    def shown(self, digits: int) -> str:
        """Return it with decimals, where none are wanted, only near the limit."""
        usual = f"{self:.{digits}f}"
        if float(usual) != 100:
            return usual
        told = share_text(self / 100).removesuffix("%")
        return told.replace("just over ", ">").replace("just under ", "<")


def percent(share: float | None) -> OfLimit | None:
    """Return a share of a limit as a percentage."""
    return None if share is None or not math.isfinite(share) else OfLimit(100 * share)
