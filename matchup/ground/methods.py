"""The registry of resistance methods, and the one way to ask one of them.

To add a method: a file of its own with `missing` and `resistance` (or `toe`), and a row here.
"""

from __future__ import annotations

import difflib
from collections.abc import Callable
from dataclasses import dataclass, replace

from matchup.errors import Fault, ModelError
from matchup.ground import (
    alm_hamre_2001,
    api_2011,
    direct,
    effective_stress,
    nen_base,
    own_table,
    stevens_1982,
)
from matchup.ground.basis import Choices, Ground, Missing, Task
from matchup.ground.nodes import TOE_NOTE
from matchup.ground.soil import Pair, pair_source
from matchup.ground.unit import UnitResistance
from matchup.model.pile import Section
from matchup.model.sounding import FloatArray


@dataclass(frozen=True, slots=True)
class Method:
    """A published way from ground to resistance.

    Parameters
    ----------
    name : str
        As it is chosen by.
    source : str
        Publication, and how its numbers were obtained.
    kind : str
        ``static`` (long after driving), ``driving``, or ``as stated`` in the designer's table.
    needs : str
        In words.
    valid : str
        Where it holds, in words.
    missing : callable
        What it lacks.
    resistance : callable or None
        Shaft and toe; None for a method that gives the toe alone.
    toe : callable or None
        Unit toe resistance, (m,) [Pa], of a method that gives the toe alone.
    pair : Pair or None
        Quakes and damping fitted with the method; None for the tables by soil.
    bounds : bool
        Whether it has low and high cases of its own.
    """

    name: str
    source: str
    kind: str
    needs: str
    valid: str
    missing: Missing
    resistance: Callable[[Task], UnitResistance] | None = None
    toe: Callable[[Task], FloatArray] | None = None
    pair: Pair | None = None
    bounds: bool = False

    @property
    def pair_source(self) -> str:
        """Where its quakes and damping come from."""
        return "as companion" if self.toe else pair_source(self.pair)


_ALL = (
    Method(
        name="api 2011",
        source=api_2011.SOURCE,
        kind="static",
        needs="layers: density of sand and sand-silt, strength of clay and silt",
        valid="clay; medium dense to very dense sand and sand-silt",
        missing=api_2011.missing,
        resistance=api_2011.resistance,
    ),
    Method(
        name="alm hamre 2001",
        source=alm_hamre_2001.SOURCE,
        kind="driving",
        needs="sounding: tip, sleeve in clay; water level or layers",
        valid="sand and clay, fitted to large open tubes driven offshore",
        missing=alm_hamre_2001.missing,
        resistance=alm_hamre_2001.resistance,
        pair=alm_hamre_2001.PAIR,
    ),
    Method(
        name="stevens 1982",
        source=stevens_1982.SAND_NOTE,
        kind="driving",
        needs="layers: density of sand, strength and ocr of clay",
        valid="clay; of sand only medium dense is at hand; friction in clay exceeds the static one "
        "above an overconsolidation ratio of about 10",
        missing=stevens_1982.missing,
        resistance=stevens_1982.resistance,
        bounds=True,
    ),
    Method(
        name="effective stress",
        source=effective_stress.SOURCE,
        kind="static",
        needs="layers: beta and toe_factor",
        valid="any soil whose factors are known; a factor outside its published range is noted",
        missing=effective_stress.missing,
        resistance=effective_stress.resistance,
    ),
    Method(
        name="nen 9997 base",
        source=nen_base.SOURCE,
        kind="as companion",
        needs="sounding: tip, to 4 diameters below the toe; a companion for the shaft",
        valid="closed and solid driven piles in sand and gravel",
        missing=nen_base.missing,
        toe=nen_base.toe,
    ),
    Method(
        name="direct",
        source=direct.SOURCE,
        kind="driving",
        needs="layers: unit_shaft and unit_toe",
        valid="as far as the stated values are",
        missing=direct.missing,
        resistance=direct.resistance,
    ),
    Method(
        name="table",
        source=own_table.SOURCE,
        kind="as stated",
        needs="table of resistance by depth; setup or layers where it is static",
        valid="the pile that the table was made for",
        missing=own_table.missing,
        resistance=own_table.resistance,
        bounds=True,
    ),
)
METHODS = {method.name: method for method in _ALL}
"""Every method by name."""


def method_named(name: str) -> Method:
    """Return a method.

    Raises
    ------
    ModelError
        With the nearest known name.
    """
    if name in METHODS:
        return METHODS[name]
    near = difflib.get_close_matches(name, METHODS, n=1)
    hint = f" (did you mean {near[0]!r}?)" if near else ""
    must = f"must be one of: {', '.join(METHODS)}{hint}"
    raise ModelError("resistance method", [Fault("method", must, name)])


def _lacks(method: Method, ground: Ground, section: Section, choices: Choices) -> list[Fault]:
    faults = list(method.missing(ground, section, choices))
    if method.toe is None:
        return faults
    shafts = [name for name, other in METHODS.items() if other.resistance and name != "table"]
    if choices.companion not in shafts:
        must = f"must name the method for the shaft: {', '.join(shafts)}"
        return [*faults, Fault("companion", must, choices.companion or "nothing")]
    return faults + METHODS[choices.companion].missing(ground, section, choices)


def usable(ground: Ground, section: Section, choices: Choices) -> list[str]:
    """Return the names of the methods for which the ground suffices."""
    return [name for name, m in METHODS.items() if not _lacks(m, ground, section, choices)]


def must_suffice(method: Method, ground: Ground, section: Section, choices: Choices) -> None:
    """Make sure that a method has what it needs.

    Raises
    ------
    ModelError
        With every field that is missing, and what to do: which methods would do without.
    """
    faults = _lacks(method, ground, section, choices)
    if faults:
        others = ", ".join(usable(ground, section, choices))
        do = "No method can do with what is there."
        if others:
            do = f"With what is there these would do: {others}."
        raise ModelError(method.name, [fault._replace(do=fault.do or do) for fault in faults])


def unit_resistance(method: Method, task: Task) -> UnitResistance:
    """Return what a method makes of the ground.

    Raises
    ------
    ModelError
        If it lacks something, or a penetration lies where the ground is not known.
    """
    must_suffice(method, task.ground, task.section, task.choices)
    if method.resistance is not None:
        return method.resistance(task)
    assert method.toe is not None
    assert task.choices.companion is not None
    companion = METHODS[task.choices.companion]
    assert companion.resistance is not None
    shaft = companion.resistance(task)
    modes = tuple(replace(mode, toe=method.toe(task)) for mode in shaft.modes)
    kept = [note for note in shaft.notes if note != TOE_NOTE]
    return replace(shaft, modes=modes, notes=(f"shaft: {companion.source}", *kept))
