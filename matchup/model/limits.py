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
    """One limit and where it comes from.

    Parameters
    ----------
    stress : float
        [Pa]
    text : str
        Rule, clause and formula, for the output.
    values : tuple of (symbol, stress)
        What stood in for the symbols of the formula. [Pa]
    """

    stress: float
    text: str
    values: tuple[tuple[str, float], ...] = ()


@dataclass(frozen=True, slots=True)
class StressLimits:
    """What the blow may do to the pile.

    Parameters
    ----------
    squeeze, pull : Limit
        Largest driving stresses in compression and in tension, both positive.
    warnings : tuple of str
        What the engineer should know about these limits.
    """

    squeeze: Limit
    pull: Limit
    warnings: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        rules = Rules("limits")
        rules.positive("compression", self.compression, "stress")
        rules.positive("tension", self.tension, "stress")
        rules.close()

    @property
    def compression(self) -> float:
        """Largest driving stress in compression [Pa]."""
        return self.squeeze.stress

    @property
    def tension(self) -> float:
        """Largest driving stress in tension, positive [Pa]."""
        return self.pull.stress


def _fy(pile: Pile) -> tuple[tuple[str, float], ...]:
    return (("fy", pile.strength),)


def _concrete(pile: Pile, strength: str) -> tuple[tuple[str, float], ...]:
    return ((strength, pile.strength), ("fpe", pile.prestress))


def _aashto_steel(pile: Pile) -> Limit:
    return Limit(0.9 * pile.strength, "AASHTO LRFD 10.7.8: 0.9 fy", _fy(pile))


def _aashto_compression(pile: Pile) -> Limit:
    stress = 0.85 * pile.strength - pile.prestress
    return Limit(stress, "AASHTO LRFD 10.7.8: 0.85 f'c - fpe", _concrete(pile, "f'c"))


def _aashto_tension(pile: Pile) -> Limit:
    allowance = TENSION_ALLOWANCE * math.sqrt(pile.strength / KSI) * KSI
    text = "AASHTO LRFD 10.7.8: 0.095 sqrt(f'c in ksi) + fpe"
    return Limit(allowance + pile.prestress, text, _concrete(pile, "f'c"))


def _aashto_corrosion(pile: Pile) -> Limit:
    text = "AASHTO LRFD 10.7.8, severe corrosion: fpe"
    return Limit(pile.prestress, text, (("fpe", pile.prestress),))


def _aashto_timber(pile: Pile) -> Limit:
    text = "AASHTO LRFD 10.7.8: 1.15 x 2.6 Fco"
    return Limit(1.15 * 2.6 * pile.strength, text, (("Fco", pile.strength),))


def _en_concrete(pile: Pile) -> Limit:
    stress = 0.8 * pile.strength - pile.prestress
    return Limit(stress, "EN 12699: 0.8 fck - fpe", _concrete(pile, "fck"))


def _en_concrete_monitored(pile: Pile) -> Limit:
    text = "EN 12699, monitored: 1.1 x 0.8 fck - fpe"
    return Limit(1.1 * 0.8 * pile.strength - pile.prestress, text, _concrete(pile, "fck"))


def _en_steel(pile: Pile) -> Limit:
    return Limit(0.9 * pile.strength, "EN 12699: 0.9 fy", _fy(pile))


def _en_steel_monitored(pile: Pile) -> Limit:
    text = "EN 12699, monitored: 1.2 x 0.9 fy"
    return Limit(1.2 * 0.9 * pile.strength, text, _fy(pile))


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


STOCKY_WALL = 60.0
"""D/t up to which the wall of a tube yields before it buckles; API RP 2A-WSD, from memory. [-]"""
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
    bending : float
        Share of every limit kept back for the bending of eccentric blows, which the stress
        wave of a straight bar does not show; in [0, 1). [-]
    wall_buckling : float or None
        Share of the stress at which a tube's wall buckles that compression may take; None does
        not look at it. [-]
    """

    rule: str | None = None
    compression: float | None = None
    tension: float | None = None
    compression_stress: float | None = None
    tension_stress: float | None = None
    bending: float = 0.0
    wall_buckling: float | None = None

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
        do = f"Write {self.bending / 100:g}." if 1 < self.bending < 100 else ""
        rules.must(0 <= self.bending < 1, "bending", "must be >= 0 and < 1", self.bending, do=do)
        rules.fraction("wall_buckling", self.wall_buckling)
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
    bending: float = 0.0,
    wall_buckling: float | None = None,
) -> StressLimits:
    """Return the limits of a pile from a named rule, fractions of strength or stresses.

    Parameters
    ----------
    pile : Pile
    rule, compression, tension, compression_stress, tension_stress, bending, wall_buckling
        See `GivenLimits`.

    Raises
    ------
    ModelError
        Naming the side for which nothing, or more than one thing, is given.
    """
    given = GivenLimits(
        rule, compression, tension, compression_stress, tension_stress, bending, wall_buckling
    )
    given.check(pile.material)
    squeeze, pull = _limit(pile, given, "compression"), _limit(pile, given, "tension")
    rules = Rules("limits")
    if wall_buckling is not None:
        must = "must be left out for a pile that is not a steel tube"
        is_tube = pile.material == "steel" and pile.section.wall is not None
        rules.must(is_tube, "wall_buckling", must, wall_buckling)
    if wall_buckling is not None and not rules.faults:
        squeeze = min(squeeze, wall_limit(pile, wall_buckling))
    for side, limit in zip(SIDES, (squeeze, pull), strict=True):
        must = f"must leave a driving stress > 0 ({limit.text})"
        rules.must(limit.stress > 0, side, must, limit.stress, "stress")
    rules.close()
    warnings = _warnings(pile, squeeze, pull)
    return StressLimits(_less_bending(squeeze, bending), _less_bending(pull, bending), warnings)


def wall_buckling_stress(pile: Pile) -> float:
    """Return the stress [Pa] at which the wall of a steel tube buckles under axial compression.

    Notes
    -----
    Yield up to D/t 60; beyond, ``fy (1.64 - 0.23 (D/t)**0.25)``, at most ``0.6 E t/D``, which is
    half of what a perfect thin cylinder bears.

    References
    ----------
    .. [1] API RP 2A-WSD 3.2.2b, from memory.
    """
    assert pile.section.wall is not None
    slenderness = pile.section.width / pile.section.wall
    elastic = 0.6 * pile.modulus / slenderness
    if slenderness <= STOCKY_WALL:
        return min(pile.strength, elastic)
    return float(min(pile.strength * (1.64 - 0.23 * slenderness**0.25), elastic))


def wall_limit(pile: Pile, share: float) -> Limit:
    """Return the limit that the wall of a steel tube sets to compression."""
    assert pile.section.wall is not None
    stress = wall_buckling_stress(pile)
    slenderness = pile.section.width / pile.section.wall
    text = (
        f"{share:g} of the stress at which the wall buckles, D/t {slenderness:.0f}; API RP 2A-WSD "
        "3.2.2b, from memory"
    )
    return Limit(share * stress, text, (("wall buckling", stress),))


def _less_bending(limit: Limit, share: float) -> Limit:
    if not share:
        return limit
    text = f"{limit.text}, less {100 * share:g}% for bending"
    return limit._replace(stress=(1 - share) * limit.stress, text=text)


def _limit(pile: Pile, given: GivenLimits, side: str) -> Limit:
    fraction, stress = given.side(side)
    if stress is not None:
        return Limit(stress, "driving stress given in the job")
    if fraction is not None:
        sign, word = (-1, "less") if side == "compression" else (1, "plus")
        text = f"{fraction:g} of the strength"
        values = [("strength", pile.strength)]
        if pile.prestress:
            text += f" {word} effective prestress"
            values.append(("prestress", pile.prestress))
        return Limit(fraction * pile.strength + sign * pile.prestress, text, tuple(values))
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
        warnings += _warnings_of_wall(pile, compression)
        for name, limit in (("compression", compression), ("tension", tension)):
            if limit.stress > pile.strength:
                warnings.append(f"the {name} limit is above the yield stress ({limit.text})")
    return tuple(warnings)


def _warnings_of_wall(pile: Pile, compression: Limit) -> list[str]:
    """Return that the wall of a thin tube may buckle before compression reaches its limit."""
    wall = pile.section.wall
    if wall is None or pile.section.width <= STOCKY_WALL * wall:
        return []
    if wall_buckling_stress(pile) >= compression.stress:
        return []
    limit = wall_limit(pile, 1.0)
    return [
        f"the wall buckles at {limit.stress / 1e6:.0f} MPa, below the compression limit ("
        f"{limit.text.partition(', ')[2]}); `wall_buckling` keeps below that"
    ]
