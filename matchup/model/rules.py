"""The few rules that model values obey, each said once.

Every model class lists its rules in `__post_init__` through a `Rules` collector, so that all
broken rules of an object are reported together.

A value that is not a number breaks the rule on itself and no other: rules between values are
written so that they hold for it. Readers put it in place of what they could not read, and so
learn what else is wrong.
"""

from __future__ import annotations

import math

from matchup.errors import Fault, ModelError, did_you_mean


class Rules:
    """Collect broken rules of one object and raise them together.

    Parameters
    ----------
    name : str
        What the object is called in the message, for example ``hammer 'Sandpiper'``.
    """

    def __init__(self, name: str):
        self.name = name
        self.faults: list[Fault] = []

    def must(
        self,
        holds: bool,
        field: str,
        rule: str,
        value: object,
        quantity: str = "",
        do: str = "",
    ) -> None:
        """Note a fault on `field` unless `holds`."""
        if not holds:
            self.faults.append(Fault(field, rule, value, quantity, do))

    def positive(self, field: str, value: float | None, quantity: str = "") -> None:
        """`value` must be finite and above zero; None (not given) passes."""
        if value is not None:
            self.must(math.isfinite(value) and value > 0, field, "must be > 0", value, quantity)

    def not_negative(self, field: str, value: float | None, quantity: str = "") -> None:
        """`value` must be finite and at least zero; None (not given) passes."""
        if value is not None:
            self.must(math.isfinite(value) and value >= 0, field, "must be >= 0", value, quantity)

    def fraction(self, field: str, value: float | None) -> None:
        """`value` must lie in (0, 1]; None (not given) passes."""
        if value is not None:
            do = f"Write {value / 100:g}." if 2 <= value <= 100 else ""
            self.must(0 < value <= 1, field, "must be above 0 and at most 1", value, do=do)

    def one_of(self, field: str, value: str, choices: tuple[str, ...]) -> None:
        """`value` must be one of `choices`."""
        do = did_you_mean(value, choices)
        self.must(value in choices, field, f"must be one of: {', '.join(choices)}", value, do=do)

    def close(self) -> None:
        """Raise `ModelError` if any rule was broken."""
        if self.faults:
            raise ModelError(self.name, self.faults)
