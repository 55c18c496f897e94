"""Driving stress limits: named published rules, fractions of strength, or stresses.

A limit here is the stress that the blow itself may cause. Prestress is already in the pile:
it is taken off what concrete may still bear in compression and added to what it may bear in
tension.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from typing import NamedTuple

from matchup.model.pile import POUND_PER_SQUARE_INCH, Part, Pile
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


class PartLimits(NamedTuple):
    """What the blow may do to one part of the pile.

    Parameters
    ----------
    part : str
        Its name; empty for the only one.
    squeeze, pull : Limit
        Largest driving stresses in compression and in tension, both positive; infinite where a
        follower's are not limited.
    warnings : tuple of str
        What the engineer should know about these limits.
    """

    part: str
    squeeze: Limit
    pull: Limit
    warnings: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class StressLimits:
    """What the blow may do to the pile.

    Parameters
    ----------
    parts : tuple of PartLimits
        From the helmet to the toe, one for each part of the pile's column.
    """

    parts: tuple[PartLimits, ...]

    @property
    def compression(self) -> float:
        """Largest driving stress of the lowest part in compression [Pa]."""
        return self.parts[-1].squeeze.stress

    @property
    def tension(self) -> float:
        """Largest driving stress of the lowest part in tension, positive [Pa]."""
        return self.parts[-1].pull.stress

    @property
    def differ(self) -> bool:
        """Whether some parts may bear other stresses than others."""
        return len({(part.squeeze.stress, part.pull.stress) for part in self.parts}) > 1

    @property
    def warnings(self) -> tuple[str, ...]:
        """What the engineer should know about these limits."""
        return tuple(
            f"{part.part}: {text}" if part.part else text
            for part in self.parts
            for text in part.warnings
        )


def _fy(part: Part) -> tuple[tuple[str, float], ...]:
    return (("fy", part.strength),)


def _concrete(part: Part, strength: str) -> tuple[tuple[str, float], ...]:
    return ((strength, part.strength), ("fpe", part.prestress))


def _aashto_steel(part: Part) -> Limit:
    return Limit(0.9 * part.strength, "AASHTO LRFD 10.7.8: 0.9 fy", _fy(part))


def _aashto_compression(part: Part) -> Limit:
    stress = 0.85 * part.strength - part.prestress
    return Limit(stress, "AASHTO LRFD 10.7.8: 0.85 f'c - fpe", _concrete(part, "f'c"))


def _aashto_tension(part: Part) -> Limit:
    allowance = TENSION_ALLOWANCE * math.sqrt(part.strength / KSI) * KSI
    text = "AASHTO LRFD 10.7.8: 0.095 sqrt(f'c in ksi) + fpe"
    return Limit(allowance + part.prestress, text, _concrete(part, "f'c"))


def _aashto_corrosion(part: Part) -> Limit:
    text = "AASHTO LRFD 10.7.8, severe corrosion: fpe"
    return Limit(part.prestress, text, (("fpe", part.prestress),))


def _aashto_timber(part: Part) -> Limit:
    text = "AASHTO LRFD 10.7.8: 1.15 x 2.6 Fco"
    return Limit(1.15 * 2.6 * part.strength, text, (("Fco", part.strength),))


def _en_concrete(part: Part) -> Limit:
    stress = 0.8 * part.strength - part.prestress
    return Limit(stress, "EN 12699: 0.8 fck - fpe", _concrete(part, "fck"))


def _en_concrete_monitored(part: Part) -> Limit:
    text = "EN 12699, monitored: 1.1 x 0.8 fck - fpe"
    return Limit(1.1 * 0.8 * part.strength - part.prestress, text, _concrete(part, "fck"))


def _en_steel(part: Part) -> Limit:
    return Limit(0.9 * part.strength, "EN 12699: 0.9 fy", _fy(part))


def _en_steel_monitored(part: Part) -> Limit:
    text = "EN 12699, monitored: 1.2 x 0.9 fy"
    return Limit(1.2 * 0.9 * part.strength, text, _fy(part))


_Side = Callable[[Part], Limit]

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
        """Hold the choice itself against a part's material, without any figure of it.

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

    def check_walls(self, parts: Sequence[Part]) -> None:
        """Hold a share of wall buckling against the parts that it is meant for.

        Raises
        ------
        ModelError
            If none of them is a tube whose wall may buckle.
        """
        rules = Rules("limits")
        must = "must be left out where no part is an empty steel tube"
        tubes = self.wall_buckling is None or any(map(is_empty_tube, parts))
        rules.must(tubes, "wall_buckling", must, self.wall_buckling)
        rules.close()


def _how_to_give(side: str, by_rule: bool) -> str:
    stress, fraction = ("28 MPa", "0.85") if side == "compression" else ("3 MPa", "0.03")
    return (
        f"{'Name a `rule`, or write' if by_rule else 'Write'} the driving stress, for example "
        f'`{side}_stress = "{stress}"`, or a fraction of the strength, for example '
        f"`{side} = {fraction}`."
    )


NOT_LIMITED = Limit(math.inf, "not limited")


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

    They are the same for all parts; those of a follower are not limited.

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
    given.check_walls(pile.parts)
    parts = tuple(part_limits(part, given) for part in pile.parts)
    if pile.follower is not None:
        parts = (part_limits(pile.follower, None), *parts)
    return StressLimits(parts)


def part_limits(part: Part, given: GivenLimits | None) -> PartLimits:
    """Return the limits of one part; None gives it none.

    Raises
    ------
    ModelError
        Naming the side for which nothing, or more than one thing, is given.
    """
    if given is None:
        return PartLimits(part.name, NOT_LIMITED, NOT_LIMITED)
    given.check(part.material)
    squeeze, pull = _filled(part, given, *(_limit(part, given, side) for side in SIDES))
    rules = Rules("limits")
    if given.wall_buckling is not None and is_empty_tube(part):
        squeeze = min(squeeze, wall_limit(part, given.wall_buckling))
    for side, limit in zip(SIDES, (squeeze, pull), strict=True):
        must = f"must leave a driving stress > 0 ({limit.text})"
        positive = math.isfinite(limit.stress) and limit.stress > 0
        rules.must(positive, side, must, limit.stress, "stress")
    rules.close()
    return PartLimits(
        part.name,
        _less_bending(squeeze, given.bending),
        _less_bending(pull, given.bending),
        _warnings(part, squeeze, pull),
    )


def _filled(part: Part, given: GivenLimits, squeeze: Limit, pull: Limit) -> tuple[Limit, Limit]:
    """Return the limits of a tube, lowered for what its fill can bear.

    The fill strains with the tube, so its stress is that of the tube by the ratio of the moduli.
    In tension it cracks, and the tube bears all alone.
    """
    fill = part.fill
    if fill is None:
        return squeeze, pull
    concrete = replace(part, material="concrete", strength=fill.strength, fill=None)
    if given.compression_stress is None:
        own = _limit(concrete, given, "compression")
        ratio = part.modulus / fill.modulus
        if own.stress * ratio < squeeze.stress:
            text = f"stress of the tube at which the fill reaches its limit, {own.text}"
            squeeze = Limit(own.stress * ratio, text, own.values)
    share = part.section.area / part.bearing_area
    text = f"{pull.text}, the tube bearing alone"
    return squeeze, Limit(share * pull.stress, text, pull.values)


def is_empty_tube(part: Part) -> bool:
    """Return whether a part is a steel tube whose wall nothing holds from within."""
    return part.material == "steel" and part.section.wall is not None and part.fill is None


def wall_buckling_stress(part: Part) -> float:
    """Return the stress [Pa] at which the wall of a steel tube buckles under axial compression.

    Notes
    -----
    Yield up to D/t 60; beyond, ``fy (1.64 - 0.23 (D/t)**0.25)``, at most ``0.6 E t/D``, which is
    half of what a perfect thin cylinder bears.

    References
    ----------
    .. [1] API RP 2A-WSD 3.2.2b, from memory.
    """
    assert part.section.wall is not None
    slenderness = part.section.width / part.section.wall
    elastic = 0.6 * part.modulus / slenderness
    if slenderness <= STOCKY_WALL:
        return min(part.strength, elastic)
    return float(min(part.strength * (1.64 - 0.23 * slenderness**0.25), elastic))


def wall_limit(part: Part, share: float) -> Limit:
    """Return the limit that the wall of a steel tube sets to compression."""
    assert part.section.wall is not None
    stress = wall_buckling_stress(part)
    slenderness = part.section.width / part.section.wall
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


def _limit(part: Part, given: GivenLimits, side: str) -> Limit:
    fraction, stress = given.side(side)
    if stress is not None:
        return Limit(stress, "driving stress given in the job")
    if fraction is not None:
        sign, word = (-1, "less") if side == "compression" else (1, "plus")
        text = f"{fraction:g} of the strength"
        values = [("strength", part.strength)]
        if part.prestress:
            text += f" {word} effective prestress"
            values.append(("prestress", part.prestress))
        return Limit(fraction * part.strength + sign * part.prestress, text, tuple(values))
    ruled = given.ruled(side, part.material)
    assert ruled is not None
    return ruled(part)


def _warnings(part: Part, compression: Limit, tension: Limit) -> tuple[str, ...]:
    warnings = []
    if part.material == "concrete":
        allowance = _aashto_tension(part)
        if tension.stress > allowance.stress * (1 + 1e-9):
            warnings.append(
                f"the tension limit is {tension.stress / allowance.stress:.2f} times the published "
                f"allowance ({allowance.text})"
            )
    if part.material == "steel":
        warnings += _warnings_of_wall(part, compression)
        for name, limit in (("compression", compression), ("tension", tension)):
            if limit.stress > part.strength:
                warnings.append(f"the {name} limit is above the yield stress ({limit.text})")
    return tuple(warnings)


def _warnings_of_wall(part: Part, compression: Limit) -> list[str]:
    """Return that the wall of a thin tube may buckle before compression reaches its limit."""
    wall = part.section.wall
    if not is_empty_tube(part) or wall is None or part.section.width <= STOCKY_WALL * wall:
        return []
    if wall_buckling_stress(part) >= compression.stress:
        return []
    limit = wall_limit(part, 1.0)
    return [
        f"the wall buckles at {limit.stress / 1e6:.0f} MPa, below the compression limit ("
        f"{limit.text.partition(', ')[2]}); `wall_buckling` keeps below that"
    ]
