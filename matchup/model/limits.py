"""Driving stress limits: named published rules, fractions of strength, or stresses.

A limit here is the stress that the blow itself may cause. Prestress is already in the pile:
it is taken off what concrete may still bear in compression and added to what it may bear in
tension.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import NamedTuple

from matchup.model.pile import POUND_PER_SQUARE_INCH, Pile
from matchup.model.rules import Rules

KSI = 1000 * POUND_PER_SQUARE_INCH
TENSION_ALLOWANCE = 0.095
"""Tension allowance of prestressed concrete over sqrt(f'c), both in ksi; AASHTO LRFD 10.7.8 as
printed in FHWA-NHI-16-009 Eq. 8-63, as quoted second-hand."""


class Limit(NamedTuple):
    """One limit and where it comes from."""

    stress: float
    text: str


@dataclass(frozen=True, slots=True)
class StressLimits:
    """What the blow may do to the pile.

    Parameters
    ----------
    compression, tension : float
        Largest driving stresses, both positive. [Pa]
    compression_text, tension_text : str
        Rule, clause and formula, for the output.
    warnings : tuple of str
        What the engineer should know about these limits.
    """

    compression: float
    tension: float
    compression_text: str
    tension_text: str
    warnings: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        rules = Rules("limits")
        rules.positive("compression", self.compression, "stress")
        rules.positive("tension", self.tension, "stress")
        rules.close()


def _aashto_steel(pile: Pile) -> tuple[Limit, Limit | None]:
    text = "AASHTO LRFD 10.7.8: 0.9 fy"
    return Limit(0.9 * pile.strength, text), Limit(0.9 * pile.strength, text)


def _aashto_compression(pile: Pile) -> Limit:
    return Limit(0.85 * pile.strength - pile.prestress, "AASHTO LRFD 10.7.8: 0.85 f'c - fpe")


def _aashto_concrete(pile: Pile) -> tuple[Limit, Limit | None]:
    allowance = TENSION_ALLOWANCE * math.sqrt(pile.strength / KSI) * KSI
    text = "AASHTO LRFD 10.7.8: 0.095 sqrt(f'c in ksi) + fpe"
    return _aashto_compression(pile), Limit(allowance + pile.prestress, text)


def _aashto_concrete_corrosion(pile: Pile) -> tuple[Limit, Limit | None]:
    text = "AASHTO LRFD 10.7.8, severe corrosion: fpe"
    return _aashto_compression(pile), Limit(pile.prestress, text)


def _aashto_timber(pile: Pile) -> tuple[Limit, Limit | None]:
    text = "AASHTO LRFD 10.7.8: 1.15 x 2.6 Fco"
    return Limit(1.15 * 2.6 * pile.strength, text), Limit(1.15 * 2.6 * pile.strength, text)


def _en_concrete(pile: Pile) -> tuple[Limit, Limit | None]:
    return Limit(0.8 * pile.strength - pile.prestress, "EN 12699: 0.8 fck - fpe"), None


def _en_concrete_monitored(pile: Pile) -> tuple[Limit, Limit | None]:
    text = "EN 12699, monitored: 1.1 x 0.8 fck - fpe"
    return Limit(1.1 * 0.8 * pile.strength - pile.prestress, text), None


def _en_steel(pile: Pile) -> tuple[Limit, Limit | None]:
    return Limit(0.9 * pile.strength, "EN 12699: 0.9 fy"), Limit(
        0.9 * pile.strength, "EN 12699: 0.9 fy"
    )


def _en_steel_monitored(pile: Pile) -> tuple[Limit, Limit | None]:
    text = "EN 12699, monitored: 1.2 x 0.9 fy"
    return Limit(1.2 * 0.9 * pile.strength, text), Limit(1.2 * 0.9 * pile.strength, text)


_Rule = Callable[[Pile], tuple[Limit, Limit | None]]

RULES: dict[str, dict[str, _Rule]] = {
    "aashto": {
        "steel": _aashto_steel,
        "concrete": _aashto_concrete,
        "timber": _aashto_timber,
    },
    "aashto severe corrosion": {"concrete": _aashto_concrete_corrosion},
    "en 12699": {"steel": _en_steel, "concrete": _en_concrete},
    "en 12699 monitored": {"steel": _en_steel_monitored, "concrete": _en_concrete_monitored},
}
"""Named rules by material. AASHTO as printed in FHWA-NHI-16-009 Eqs. 8-17, 8-33, 8-62 and 8-63
(steel in tension: common practice); EN 12699 as tabulated in Tomlinson and Woodward, *Pile
Design and Construction Practice*, Table 2.4 (prestress taken off: from memory). All as quoted
second-hand."""


def stress_limits(
    pile: Pile,
    rule: str | None = None,
    compression: float | None = None,
    tension: float | None = None,
    compression_stress: float | None = None,
    tension_stress: float | None = None,
) -> StressLimits:
    """Return the limits of a pile from a named rule, fractions of strength or stresses.

    A fraction or a stress overrides the rule's own value on its side.

    Parameters
    ----------
    pile : Pile
    rule : str or None
        A key of `RULES`.
    compression, tension : float or None
        Fractions of strength. [-]
    compression_stress, tension_stress : float or None
        Driving stresses. [Pa]

    Raises
    ------
    ModelError
        Naming the side for which nothing, or more than one thing, is given.
    """
    rules = Rules("limits")
    by_rule: tuple[Limit | None, Limit | None] = (None, None)
    if rule is not None:
        rules.one_of("rule", rule, tuple(RULES))
        materials = RULES.get(rule, {})
        rules.must(
            rule not in RULES or pile.material in materials,
            "rule",
            f"must know the pile's material; {rule} knows {' and '.join(materials)}",
            pile.material,
        )
        if pile.material in materials:
            by_rule = materials[pile.material](pile)
    made: dict[str, Limit] = {}
    sides = (
        ("compression", compression, compression_stress, by_rule[0], -pile.prestress, "less"),
        ("tension", tension, tension_stress, by_rule[1], pile.prestress, "plus"),
    )
    for side, fraction, stress, ruled, prestress, word in sides:
        rules.fraction(side, fraction)
        rules.positive(f"{side}_stress", stress, "stress")
        rules.must(
            fraction is None or stress is None,
            side,
            f"must be given once: `{side}` or `{side}_stress`",
            "both",
        )
        if stress is not None:
            made[side] = Limit(stress, "driving stress given in the job")
        elif fraction is not None:
            text = f"{fraction:g} of the strength" + (
                f" {word} effective prestress" if pile.prestress else ""
            )
            made[side] = Limit(fraction * pile.strength + prestress, text)
        elif ruled is not None:
            made[side] = ruled
        elif rule is None or pile.material in RULES.get(rule, {}):
            rules.must(
                False,
                side,
                f"must be given: a `rule` that sets it, a fraction `{side}` of the strength, "
                f"or a driving stress `{side}_stress`",
                f"none (rule {rule} sets no {side} limit)" if rule else "",
            )
    for side, limit in made.items():
        rules.must(
            limit.stress > 0,
            side,
            f"must leave a driving stress > 0 ({limit.text})",
            limit.stress,
            "stress",
        )
    rules.close()
    squeeze, pull = made["compression"], made["tension"]
    return StressLimits(
        squeeze.stress, pull.stress, squeeze.text, pull.text, _warnings(pile, squeeze, pull)
    )


def _warnings(pile: Pile, compression: Limit, tension: Limit) -> tuple[str, ...]:
    warnings = []
    if pile.material == "concrete":
        allowance = _aashto_concrete(pile)[1]
        assert allowance is not None
        if tension.stress > allowance.stress * (1 + 1e-9):
            warnings.append(
                f"the tension limit is {tension.stress / allowance.stress:.2f} times the published "
                f"allowance ({allowance.text})"
            )
    if pile.material == "steel":
        for name, limit in (("compression", compression), ("tension", tension)):
            if limit.stress > pile.strength:
                warnings.append(f"the {name} limit is above the yield stress ({limit.text})")
    return tuple(warnings)
