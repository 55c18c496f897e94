"""What a drive is asked about: ground cases, prepared ground and pauses."""

from __future__ import annotations

from dataclasses import dataclass

from matchup.model.ground import CASES
from matchup.model.rules import Rules

PLUGS = ("smaller", "larger", "coring", "plugged")
PLUG_OF_CASE = {"low": "smaller", "best": "coring", "high": "larger"}
"""Which mode of an open section counts in a case. The best case cores: under a blow the inertia
of the soil core holds it back (common practice, no published source), so that its total lies
between the other two before factors."""
PREPARATIONS = ("pre-drilled", "jetted", "vibrated")


@dataclass(frozen=True, slots=True)
class Case:
    """A ground case.

    Parameters
    ----------
    name : str
    factor : float
        On shaft and toe resistance. [-]
    plug : str
        Open tubes and H sections: ``smaller`` or ``larger`` total, ``coring`` (of an H: the steel
        section) or ``plugged`` (of an H: the box); empty for the rule of `PLUG_OF_CASE`, and
        ``coring`` for other names.
    bound : str
        Which bound of a method that has its own: ``low``, ``best`` or ``high``; empty for the
        one of the same name, and ``best`` for other names.
    """

    name: str
    factor: float = 1.0
    plug: str = ""
    bound: str = ""

    def __post_init__(self) -> None:
        rules = Rules(f"case {self.name!r}")
        rules.must(bool(self.name.strip()), "name", "must not be empty", self.name)
        rules.positive("factor", self.factor)
        if self.plug:
            rules.one_of("plug", self.plug, PLUGS)
        if self.bound:
            rules.one_of("bound", self.bound, CASES)
        rules.close()

    @property
    def plug_rule(self) -> str:
        """The rule that holds for the soil core."""
        return self.plug or PLUG_OF_CASE.get(self.name, "coring")

    @property
    def bound_asked(self) -> str:
        """The bound that a method with bounds is asked for."""
        return self.bound or (self.name if self.name in CASES else "best")


@dataclass(frozen=True, slots=True)
class Loosened:
    """An upper part of the way that was made easy before driving.

    The share stays for good; the toe is not reduced.

    Parameters
    ----------
    to : float
        Depth. [m]
    share : float
        Of the shaft resistance that is left, in [0, 1]. [-]
    how : str
        ``pre-drilled``, ``jetted`` or ``vibrated``.
    """

    to: float
    share: float
    how: str = "pre-drilled"

    def __post_init__(self) -> None:
        rules = Rules("loosened ground")
        rules.positive("to", self.to, "length")
        rules.must(0 <= self.share <= 1, "share", "must lie between 0 and 1", self.share)
        rules.one_of("how", self.how, PREPARATIONS)
        rules.close()


@dataclass(frozen=True, slots=True)
class Pause:
    """A stop of the drive, after which set-up has raised the shaft resistance.

    Parameters
    ----------
    penetration : float
        One of the stations. [m]
    duration : float
        [s]
    """

    penetration: float
    duration: float

    def __post_init__(self) -> None:
        rules = Rules("pause")
        rules.positive("penetration", self.penetration, "length")
        rules.positive("duration", self.duration)
        rules.close()


DEFAULT_CASES = tuple(Case(name) for name in CASES)
