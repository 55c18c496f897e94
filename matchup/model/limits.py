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


def _aashto_steel(pile: Pile) -> Limit:
    return Limit(0.9 * pile.strength, "AASHTO LRFD 10.7.8: 0.9 fy")


def _aashto_compression(pile: Pile) -> Limit:
    return Limit(0.85 * pile.strength - pile.prestress, "AASHTO LRFD 10.7.8: 0.85 f'c - fpe")


def _aashto_tension(pile: Pile) -> Limit:
    allowance = TENSION_ALLOWANCE * math.sqrt(pile.strength / KSI) * KSI
    text = "AASHTO LRFD 10.7.8: 0.095 sqrt(f'c in ksi) + fpe"
    return Limit(allowance + pile.prestress, text)


def _aashto_corrosion(pile: Pile) -> Limit:
    return Limit(pile.prestress, "AASHTO LRFD 10.7.8, severe corrosion: fpe")


def _aashto_timber(pile: Pile) -> Limit:
    return Limit(1.15 * 2.6 * pile.strength, "AASHTO LRFD 10.7.8: 1.15 x 2.6 Fco")


def _en_concrete(pile: Pile) -> Limit:
    return Limit(0.8 * pile.strength - pile.prestress, "EN 12699: 0.8 fck - fpe")


def _en_concrete_monitored(pile: Pile) -> Limit:
    text = "EN 12699, monitored: 1.1 x 0.8 fck - fpe"
    return Limit(1.1 * 0.8 * pile.strength - pile.prestress, text)


def _en_steel(pile: Pile) -> Limit:
    return Limit(0.9 * pile.strength, "EN 12699: 0.9 fy")


def _en_steel_monitored(pile: Pile) -> Limit:
    return Limit(1.2 * 0.9 * pile.strength, "EN 12699, monitored: 1.2 x 0.9 fy")


_Side = Callable[[Pile], Limit]

RULES: dict[str, dict[str, tuple[_Side, _Side | None]]] = {
    "aashto": {
        "steel": (_aashto_steel, _aashto_steel),
        "concrete": (_aashto_compression, _aashto_tension),
        "timber": (_aashto_timber, _aashto_timber),
    },
    "aashto severe corrosion": {"concrete": (_aashto_compression, _aashto_corrosion)},
    "en 12699": {"steel": (_en_steel, _en_steel), "concrete": (_en_concrete, None)},
    "en 12699 monitored": {
        "steel": (_en_steel_monitored, _en_steel_monitored),
        "concrete": (_en_concrete_monitored, None),
    },
}
"""Named rules by material: compression and tension, None where the rule sets no limit. AASHTO as
printed in FHWA-NHI-16-009 Eqs. 8-17, 8-33, 8-62 and 8-63 (steel in tension: common practice);
EN 12699 as tabulated in Tomlinson and Woodward, *Pile Design and Construction Practice*, Table 2.4
(prestress taken off: from memory). All as quoted second-hand."""


SIDES = ("compression", "tension")


class GivenLimits(NamedTuple):
    """What a job says of its stress limits; a fraction or a stress overrides the rule's value.

    Parameters
    ----------
    rule : str or None
        A key of `RULES`.
    compression, tension : float or None
        Fractions of strength. [-]
    compression_stress, tension_stress : float or None
        Driving stresses. [Pa]
    """

    rule: str | None = None
    compression: float | None = None
    tension: float | None = None
    compression_stress: float | None = None
    tension_stress: float | None = None

    def side(self, side: str) -> tuple[float | None, float | None]:
        """Return fraction and stress of ``compression`` or ``tension``."""
        if side == "compression":
            return self.compression, self.compression_stress
        return self.tension, self.tension_stress

    def ruled(self, side: str, material: str) -> _Side | None:
        """Return what the rule says of a side; None where it says nothing."""
        sides = RULES.get(self.rule or "", {}).get(material, (None, None))
        return sides[0] if side == "compression" else sides[1]

    def check(self, material: str) -> None:
        """Hold the choice itself against a pile's material, without any figure of the pile.

        Raises
        ------
        ModelError
            Naming each side for which nothing, or more than one thing, is given.
        """
        rules = Rules("limits")
        if self.rule is not None:
            rules.one_of("rule", self.rule, tuple(RULES))
        known = RULES.get(self.rule or "", {})
        fits = not known or material in known
        must = f"must be a rule for piles of {material}; {self.rule} is for {' and '.join(known)}"
        rules.must(fits, "rule", must, self.rule)
        for side in SIDES:
            fraction, stress = self.side(side)
            rules.fraction(side, fraction)
            rules.positive(f"{side}_stress", stress, "stress")
            must = f"must be given once: `{side}` or `{side}_stress`"
            rules.must(fraction is None or stress is None, side, must, "both")
            unsaid = fraction is None and stress is None and not self.ruled(side, material)
            if unsaid and (self.rule is None or material in known):
                why = f"; {self.rule} sets no {side} limit for {material}" if self.rule else ""
                rules.must(False, side, f"must be given{why}", "", do=_how_to_give(side, not why))
        rules.close()


def _how_to_give(side: str, by_rule: bool) -> str:
    stress, fraction = ("28 MPa", "0.85") if side == "compression" else ("3 MPa", "0.03")
    return (
        f"{'Name a `rule`, or write' if by_rule else 'Write'} the driving stress, for example "
        f'`{side}_stress = "{stress}"`, or a fraction of the strength, for example '
        f"`{side} = {fraction}`."
    )


def stress_limits(
    pile: Pile,
    rule: str | None = None,
    compression: float | None = None,
    tension: float | None = None,
    compression_stress: float | None = None,
    tension_stress: float | None = None,
) -> StressLimits:
    """Return the limits of a pile from a named rule, fractions of strength or stresses.

    Parameters
    ----------
    pile : Pile
    rule, compression, tension, compression_stress, tension_stress
        See `GivenLimits`.

    Raises
    ------
    ModelError
        Naming the side for which nothing, or more than one thing, is given.
    """
    given = GivenLimits(rule, compression, tension, compression_stress, tension_stress)
    given.check(pile.material)
    squeeze, pull = _limit(pile, given, "compression"), _limit(pile, given, "tension")
    rules = Rules("limits")
    for side, limit in zip(SIDES, (squeeze, pull), strict=True):
        must = f"must leave a driving stress > 0 ({limit.text})"
        rules.must(limit.stress > 0, side, must, limit.stress, "stress")
    rules.close()
    return StressLimits(
        squeeze.stress, pull.stress, squeeze.text, pull.text, _warnings(pile, squeeze, pull)
    )


def _limit(pile: Pile, given: GivenLimits, side: str) -> Limit:
    fraction, stress = given.side(side)
    if stress is not None:
        return Limit(stress, "driving stress given in the job")
    if fraction is not None:
        sign, word = (-1, "less") if side == "compression" else (1, "plus")
        text = f"{fraction:g} of the strength"
        text += f" {word} effective prestress" if pile.prestress else ""
        return Limit(fraction * pile.strength + sign * pile.prestress, text)
    ruled = given.ruled(side, pile.material)
    assert ruled is not None
    return ruled(pile)


def _warnings(pile: Pile, compression: Limit, tension: Limit) -> tuple[str, ...]:
    warnings = []
    if pile.material == "concrete":
        allowance = _aashto_tension(pile)
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
