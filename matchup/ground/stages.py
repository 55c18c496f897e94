"""From the ground, by a method, to the stages of a drive.

ground, method, pile, penetrations, cases -> UnitResistance -> Stage, one for each of them
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field
from itertools import groupby
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from matchup.errors import Fault, ModelError
from matchup.ground.basis import Choices, Ground, Task
from matchup.ground.cases import DEFAULT_CASES, Case, Loosened, Pause
from matchup.ground.methods import Method, method_named, unit_resistance
from matchup.ground.soil import SetupLaw, time_text
from matchup.ground.thin import kept_nodes, strictly_deeper, with_longest
from matchup.ground.unit import Mode, UnitResistance
from matchup.model.pile import Pile
from matchup.model.rules import Rules
from matchup.model.sounding import FloatArray
from matchup.model.stage import Stage, StageMode

SHAPE_TIPS = 4
"""The shaft's shape keeps the nodes that it needs at about so many penetrations."""


class ModeResistance(NamedTuple):
    """What one mode of going down meets.

    Shaft resistance at the outer faces and at those on the soil core, and toe resistance, all
    with the factor of the case. [N]
    """

    mode: str
    outer: float
    inner: float
    toe: float

    @property
    def total(self) -> float:
        """Shaft and toe together [N]."""
        return self.outer + self.inner + self.toe


class GroundStage(NamedTuple):
    """A stage, and what it was chosen from.

    Parameters
    ----------
    stage : Stage
    case : Case
    pause : float
        Time without blows before it, zero in continuous driving. [s]
    mode : str
        The mode that the stage has the resistance of.
    modes : tuple of ModeResistance
        Every mode: two for an open section, otherwise one.
    told : tuple of str
        Those of the stage's notes that are about the method, and not about this moment or case.
    """

    stage: Stage
    case: Case
    pause: float
    mode: str
    modes: tuple[ModeResistance, ...]
    told: tuple[str, ...]


def resistance_stages(
    pile: Pile,
    ground: Ground,
    method: str,
    penetrations: Sequence[float],
    set_needed: float | Sequence[float],
    cases: Sequence[Case] = DEFAULT_CASES,
    choices: Choices | None = None,
    loosened: Sequence[Loosened] = (),
    pauses: Sequence[Pause] = (),
    law: SetupLaw | None = None,
) -> tuple[GroundStage, ...]:
    """Return the stages of a drive: by penetration, then by case; a restart after its station.

    Parameters
    ----------
    pile : Pile
    ground : Ground
    method : str
        A key of `matchup.ground.methods.METHODS`.
    penetrations : sequence of float
        Stations, increasing. [m]
    set_needed : float or sequence of float
        Least set per blow, of all stations or of each. [m]
    cases : sequence of Case
    choices : Choices or None
        What the method leaves open; None for the defaults.
    loosened : sequence of Loosened
        Shares of overlapping parts multiply.
    pauses : sequence of Pause
    law : SetupLaw or None
        None for the default.

    Returns
    -------
    tuple of GroundStage

    Raises
    ------
    ModelError
        If the method lacks something, or a station lies outside pile or known ground.
    """
    tips = np.asarray(penetrations, float)
    sets = np.broadcast_to(np.asarray(set_needed, float), tips.shape)
    _check(pile, tips, cases, pauses)
    chosen = method_named(method)
    drives = {}
    for bound in dict.fromkeys(case.bound_asked for case in cases):
        task = Task(ground, pile.section, tips, choices or Choices(), bound)
        unit = unit_resistance(chosen, task)
        if pauses and np.isnan(unit.setup).any():
            must = "must be given in the table, or layers: in a pause the shaft gains by it"
            raise ModelError("pause", [Fault("table.setup", must, "nothing")])
        for part in loosened:
            unit = unit.loosened(part.to, part.share)
        drives[bound] = _Drive(unit, law or SetupLaw(), _notes(unit, chosen, loosened))
    return tuple(
        drives[case.bound_asked].stage(row, case, elapsed, float(sets[row]))
        for row, elapsed in _moments(tips, pauses)
        for case in cases
    )


def _check(pile: Pile, tips: FloatArray, cases: Sequence[Case], pauses: Sequence[Pause]) -> None:
    rules = Rules("ground")
    rules.must(
        tips.size > 0 and bool(np.all(np.isfinite(tips)) and np.all(np.diff(tips) > 0)),
        "penetration",
        "must be one station or more, each deeper than the one before",
        tips.tolist(),
    )
    for tip in tips.tolist():
        must = f"must be above 0 and at most the pile's length {pile.length:g} m"
        rules.must(0 < tip <= pile.length * (1 + 1e-9), "penetration", must, tip, "length")
    names = [case.name for case in cases]
    rules.must(bool(names), "cases", "must hold at least one case", "none")
    rules.must(len(set(names)) == len(names), "cases", "must have different names", names)
    for pause in pauses:
        rules.must(
            bool(np.isclose(tips, pause.penetration, rtol=0, atol=1e-6).any()),
            "pause",
            "must be at one of the stations",
            pause.penetration,
            "length",
        )
    rules.close()


def _moments(tips: FloatArray, pauses: Sequence[Pause]) -> list[tuple[int, float]]:
    """Return row of the station and time without blows, in order of driving."""
    moments = [(row, 0.0) for row in range(tips.size)]
    for pause in pauses:
        moments.append((int(np.abs(tips - pause.penetration).argmin()), pause.duration))
    return [moment for moment, _ in groupby(sorted(moments))]


class _Shaft(NamedTuple):
    """The shaft of one mode at one moment, before the factor of a case."""

    outer: float
    inner: float
    quake: float
    damping: float
    setup: float
    depth: FloatArray
    intensity: FloatArray


@dataclass
class _Drive:
    """One unit resistance, asked for moment after moment of the drive."""

    unit: UnitResistance
    law: SetupLaw
    notes: tuple[str, ...]
    shafts: dict[tuple[int, float], list[_Shaft]] = field(default_factory=dict)
    kept: dict[str, NDArray[np.int64]] = field(default_factory=dict)

    def stage(self, row: int, case: Case, elapsed: float, set_needed: float) -> GroundStage:
        """Return the stage of a station, with all that it was chosen from."""
        unit = self.unit
        key = (row, elapsed)
        if key not in self.shafts:
            self.shafts[key] = self._shafts(row, elapsed)
        shafts = self.shafts[key]
        toes = [mode.toe_area * mode.toe[row] for mode in unit.modes]
        modes = tuple(
            ModeResistance(
                mode.name, case.factor * shaft.outer, case.factor * shaft.inner, case.factor * toe
            )
            for mode, shaft, toe in zip(unit.modes, shafts, map(float, toes), strict=True)
        )
        chosen = _chosen(modes, case.plug_rule)
        shaft, mode, made = shafts[chosen], unit.modes[chosen], modes[chosen]
        tip = float(unit.tips[row])
        stage = Stage(
            name=_name(tip, case, elapsed),
            penetration=tip,
            shaft=made.outer + made.inner,
            toe=made.toe,
            set_needed=set_needed,
            shaft_quake=shaft.quake,
            toe_quake=float(mode.toe_quake[row]),
            shaft_damping=shaft.damping,
            toe_damping=float(unit.toe_damping[row]),
            shaft_shape=self._shape(mode, shaft),
            case=case.name,
            after_pause=elapsed,
            setup=shaft.setup,
            static=unit.static,
            regained=self.law.share(elapsed),
            modes=_told(modes),
            notes=(*self.notes, *self._moment_notes(case, elapsed, modes, chosen)),
        )
        return GroundStage(stage, case, elapsed, mode.name, modes, self.notes)

    def _shafts(self, row: int, elapsed: float) -> list[_Shaft]:
        tip = float(self.unit.tips[row])
        cut = self.unit.down_to(tip)
        stress = cut.shaft_at(tip) * self._raised(cut, elapsed) * cut.scale[row]
        made = []
        for mode in cut.modes:
            outer = float(np.trapezoid(stress * mode.outer, cut.depth))
            inner = float(np.trapezoid(stress * mode.inner, cut.depth))
            intensity = stress * (mode.outer + mode.inner)
            quake = _mean(cut.shaft_quake, intensity, cut.depth)
            damping = _mean(cut.shaft_damping, intensity, cut.depth)
            gain = self._raised(cut, math.inf) / self._raised(cut, elapsed)
            setup = max(1.0, _mean(gain, intensity, cut.depth))
            made.append(_Shaft(outer, inner, quake, damping, setup, cut.depth, intensity))
        return made

    def _raised(self, unit: UnitResistance, elapsed: float) -> FloatArray:
        """Return the factor on the method's unit shaft resistance at a moment, (n,) [-]."""
        factor = self.law.factor(unit.setup, elapsed)
        return factor / unit.setup if unit.static else factor

    def _shape(self, mode: Mode, shaft: _Shaft) -> tuple[tuple[float, float], ...]:
        if shaft.outer + shaft.inner == 0:
            return ()
        if mode.name not in self.kept:
            self.kept[mode.name] = self._kept(mode)
        last = shaft.depth.size - 1
        kept = self.kept[mode.name]
        rows = np.append(kept[kept < last], last)
        if not shaft.intensity[rows].any():  # what little there is was thinned away
            rows = np.arange(last + 1)
        depth = strictly_deeper(shaft.depth[rows])
        return tuple(zip(depth.tolist(), shaft.intensity[rows].tolist(), strict=True))

    def _kept(self, mode: Mode) -> NDArray[np.int64]:
        """Return the nodes that tell the shape of the shaft at every station and moment."""
        unit = self.unit
        length = (mode.outer + mode.inner) * self._raised(unit, 0.0)
        some = unit.tips[:: max(unit.tips.size // SHAPE_TIPS, 1)]
        curves = [unit.shaft_at(float(tip)) * length for tip in some]
        rows = kept_nodes(
            unit.depth, np.array([*curves, unit.initial * length, np.nan_to_num(unit.setup)])
        )
        return with_longest(unit.depth, rows)

    def _moment_notes(
        self, case: Case, elapsed: float, modes: tuple[ModeResistance, ...], chosen: int
    ) -> list[str]:
        notes = []
        if case.factor != 1:
            notes.append(f"case {case.name}: shaft and toe resistance times {case.factor:g}")
        if len(modes) > 1:
            notes.append(f"{modes[chosen].mode}: the rule of case {case.name} is {case.plug_rule}")
        if elapsed > 0:
            notes.append(f"after {time_text(elapsed)} without blows: {self.law.text}")
        return notes


def _mean(values: FloatArray, weight: FloatArray, depth: FloatArray) -> float:
    """Return the mean along the shaft; where there is no resistance, the plain one."""
    whole = np.trapezoid(weight, depth)
    if not whole > 0:
        return float(values.mean())
    return float(np.trapezoid(weight * values, depth) / whole)


def _told(modes: tuple[ModeResistance, ...]) -> tuple[StageMode, ...]:
    """Return the modes of a section that has more than one."""
    told = tuple(StageMode(mode.mode, mode.outer + mode.inner, mode.toe) for mode in modes)
    return told if len(told) > 1 else ()


def _chosen(modes: tuple[ModeResistance, ...], rule: str) -> int:
    """Return the row of the mode that a rule takes; an open section's coring one comes first."""
    if len(modes) == 1:
        return 0
    if rule in ("coring", "plugged"):
        return 0 if rule == "coring" else 1
    totals = [mode.total for mode in modes]
    return totals.index(min(totals) if rule == "smaller" else max(totals))


def _name(tip: float, case: Case, elapsed: float) -> str:
    text = f"{tip:.1f}" if abs(tip - round(tip, 1)) < 1e-6 else f"{tip:.3f}".rstrip("0")
    after = f", after {time_text(elapsed)}" if elapsed > 0 else ""
    return f"{text} m, {case.name}{after}"


def _notes(unit: UnitResistance, method: Method, loosened: Sequence[Loosened]) -> tuple[str, ...]:
    """Return what holds for every stage."""
    notes = [f"resistance: {method.source}", *unit.notes]
    if unit.static:
        low, high = unit.setup.min(), unit.setup.max()
        span = f"{low:g}" if low == high else f"{low:g} to {high:g} by soil"
        notes.append(f"static method: shaft while driving divided by a setup factor of {span}")
    notes.append(
        f"quakes and damping: {method.pair_source}; along the shaft the mean by resistance"
    )
    for part in loosened:
        notes.append(f"{part.how} to {part.to:g} m: {part.share:g} of the shaft resistance left")
    return tuple(notes)
