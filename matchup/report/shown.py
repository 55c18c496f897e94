"""Numbers as people see them in one system of units."""

from __future__ import annotations

import math
from dataclasses import dataclass

from matchup.model.cushion import Cushion
from matchup.units import display_unit, to_display

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
    ("mass", "metric"): 0,
    ("mass", "us"): 0,
}
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


def percent(share: float | None) -> float | None:
    """Return a share as a percentage."""
    return None if share is None or not math.isfinite(share) else 100 * share
