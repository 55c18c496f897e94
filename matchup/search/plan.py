"""Choose the best plan of every hammer.

For every hammer, cushion and stage the window of strokes is found exactly. The target stage comes
first, since it asks for the larger set; a cushion that fails a stage is dropped. Small cushion
spaces are looked at whole; in large ones the optimiser proposes which cushions to look at.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import replace
from typing import Any

import numpy as np

from matchup.analysis.rig import Rig
from matchup.analysis.window import (
    COMPRESSION,
    NO_SET,
    OPEN,
    RUNS,
    TENSION,
    UNSOUND,
    Cells,
    WindowFinder,
    Windows,
    job_demands,
)
from matchup.search.option import (
    DRIVES,
    NOT_ANALYSED,
    NOT_REACHED,
    OVER_COMPRESSION,
    OVER_TENSION,
    PILE_RUNS,
    REDUCED,
    REFUSES,
    VERDICTS,
    Option,
    StagePlan,
)

VERDICT_OF = {
    RUNS: PILE_RUNS,
    UNSOUND: NOT_ANALYSED,
    NO_SET: NOT_REACHED,
    COMPRESSION: OVER_COMPRESSION,
    TENSION: OVER_TENSION,
    OPEN: DRIVES,
}
GOVERNS = {
    PILE_RUNS: "weight",
    NOT_ANALYSED: "analysis",
    NOT_REACHED: "set",
    REFUSES: "refusal",
    OVER_COMPRESSION: "compression",
    OVER_TENSION: "tension",
}
RUNNER_UP_COST = 1.05
"""A runner-up costs at most so many times what the best plan does. [-]"""
RUNNER_UP_GAIN = 0.05
"""It raises the use of no stress limit, and lowers that of one by at least so much. [-]"""
LARGEST_WHOLE_SPACE = 60
"""Cushion spaces of up to so many members are looked at whole."""

Pair = tuple[int, int]
"""Hammer and stack."""
Key = tuple[int, ...]
"""Stage, hammer and stack."""


class Planner:
    """Plans for all hammers of one rig.

    Parameters
    ----------
    rig : Rig
    """

    def __init__(self, rig: Rig):
        self.rig = rig
        self.finder = WindowFinder(rig, job_demands(rig))
        self.last = len(rig.job.stages) - 1
        self._plans: dict[Key, StagePlan] = {}
        self._looked: dict[int, list[int]] = {h: [] for h in range(len(rig.job.hammers))}

    def options(self) -> list[Option]:
        """Return the best option, or the nearest miss, of every hammer in catalogue order."""
        hammers = range(len(self.rig.job.hammers))
        stacks = range(len(self.rig.stacks))
        certificates: dict[int, str] = {}
        if len(stacks) <= LARGEST_WHOLE_SPACE:
            self.look([(h, c) for h in hammers for c in stacks])
            certificates = dict.fromkeys(hammers, self._whole())
        else:
            certificates = self._study()
        chosen = {h: self._choose(h) for h in hammers}
        self._find_tops([(h, c) for h, best in chosen.items() for c in best])
        return [
            replace(
                self._option(h, best) if best else self._miss(h),
                certificate=certificates[h],
                analyses=int(self.rig.spent_on[h]),
            )
            for h, best in chosen.items()
        ]

    def _whole(self) -> str:
        if self.rig.job.cushions is None and len(self.rig.stacks) == 1:
            return "exact: no pile cushion to choose"
        return f"exact: all {len(self.rig.stacks)} cushions"

    def _study(self) -> dict[int, str]:
        """Let the optimiser propose cushions; return what certifies each hammer's answer."""
        from matchup.search.study import Study, Told, run_studies

        seed = self.rig.job.search.seed
        hammers = range(len(self.rig.job.hammers))
        running = [h for h in hammers if any(self.rig.runs(s, h) for s in range(self.last + 1))]
        self.look([(h, 0) for h in running])
        studies = {
            h: Study(self.rig.kinds, self.rig.sizes, seed + h) for h in hammers if h not in running
        }

        def answer(asked: dict[int, list[int]]) -> dict[int, dict[int, Told]]:
            self.look([(h, c) for h, places in asked.items() for c in places])
            return {
                h: {c: Told(self.cost(h, c), self._excess(h, c)) for c in places}
                for h, places in asked.items()
            }

        run_studies(studies, answer)
        return dict.fromkeys(running, "exact: no cushion changes the weight") | {
            h: f"search: {len(study.told)} of {len(self.rig.stacks)} cushions, "
            f"best found after {study.best_after}"
            for h, study in studies.items()
        }

    def look(self, pairs: Iterable[Pair]) -> None:
        """Find the windows of pairs not yet looked at, stage by stage, dropping those that fail."""
        fresh = [(h, c) for h, c in dict.fromkeys(pairs) if c not in self._looked[h]]
        for h, c in fresh:
            self._looked[h].append(c)
        # Weight against resistance takes no blow, and rules a hammer out on any cushion.
        for stage in range(self.last + 1):
            self._look_at_stage(stage, [pair for pair in fresh if self.rig.runs(stage, pair[0])])
            fresh = [pair for pair in fresh if not self.rig.runs(stage, pair[0])]
        for stage in (self.last, *range(self.last)):
            self._look_at_stage(stage, fresh)
            fresh = [(h, c) for h, c in fresh if self._plans[stage, h, c].verdict == DRIVES]
        if self.rig.job.search.objective == "time":
            self._hasten(fresh)

    def _look_at_stage(self, stage: int, pairs: list[Pair]) -> None:
        if not pairs:
            return
        hammer, stack = np.array(pairs).T
        windows = self.finder.find(Cells(np.full(hammer.size, stage), hammer, stack))
        for row, (h, c) in enumerate(pairs):
            self._plans[stage, h, c] = self._stage_plan(windows, row)

    def _stage_plan(self, windows: Windows, row: int) -> StagePlan:
        stage, hammer, stack = key = tuple(int(column[row]) for column in windows.cells)
        stroke = float(windows.low[row])
        state = int(windows.state[row])
        verdict = VERDICT_OF[state]
        if verdict == NOT_REACHED and stage != self.last:
            verdict = REFUSES
        does = self._does(
            key, stroke, windows.set[row], windows.compression[row], windows.tension[row]
        )
        untold = state in (RUNS, UNSOUND)
        return StagePlan(
            stage=self.rig.job.stages[stage],
            low=stroke,
            top=None,
            verdict=verdict,
            shortfall=math.inf if untold else self._shortfall(stage, does),
            lifted=bool(windows.lifted[row]),
            why=self.rig.why_unsound(stage, hammer, stack) if state == UNSOUND else "",
            **does,
        )

    def _does(
        self, key: Key, stroke: float, set_: float, compression: float, tension: float
    ) -> dict[str, Any]:
        """Return what a stroke does, as the fields of a `StagePlan`."""
        stage, hammer, stack = key
        job = self.rig.job
        runs = self.rig.runs(stage, hammer)
        return {
            "stroke": stroke,
            "set": float(set_),
            "compression": float(compression),
            "tension": float(tension),
            "compression_use": float(compression) / job.limits.compression,
            "tension_use": float(tension) / job.limits.tension,
            "blow_energy": job.hammers[hammer].blow_energy(stroke),
            "blow_rate": job.hammers[hammer].blow_rate(stroke),
            "transferred": math.nan if runs else self._transferred(stage, hammer, stack, stroke),
        }

    def _shortfall(self, stage: int, does: dict[str, Any]) -> float:
        """Return the largest excess over what is demanded, the reserve kept back [-]."""
        demands = self.finder.demands
        needed, reached = float(demands.set_needed[stage]), does["set"]
        short = needed / reached if reached > 0 else 1e9
        squeezed = does["compression"] / demands.compression
        return float(max(short, squeezed, does["tension"] / demands.tension)) - 1

    def _transferred(self, stage: int, hammer: int, stack: int, stroke: float) -> float:
        wears = len(self.rig.wears)
        same = (np.full(wears, stage), np.full(wears, hammer), np.full(wears, stack))
        answers = self.rig.answer(*same, np.arange(wears), np.full(wears, stroke))
        return float(answers.transferred.min())

    def _hasten(self, pairs: list[Pair]) -> None:
        """Move each plan to the highest stroke of its window, where the pile goes in fastest.

        The set grows at least in proportion to the stroke, and the blow rate falls at most in
        inverse proportion to it, so their product is largest at the top.
        """
        if not pairs:
            return
        self._find_tops(pairs)
        keys = [(s, h, c) for s in range(self.last + 1) for h, c in pairs]
        cells = Cells(*np.array(keys).T)
        tops = np.array([self._plans[key].top for key in keys], float)
        at = self.finder.setting_numbers(cells.hammer, tops)
        sets, _ = self.finder.sets(cells, at)
        compression, tension, _ = self.finder.stresses(cells, at)
        for row, key in enumerate(keys):
            does = self._does(key, float(tops[row]), sets[row], compression[row], tension[row])
            self._plans[key] = replace(
                self._plans[key], shortfall=self._shortfall(key[0], does), **does
            )

    def cost(self, hammer: int, stack: int) -> float:
        """Return what the objective makes of a pair at the target stage; the least is the best."""
        return plan_cost(self._plans[self.last, hammer, stack], self.rig.job.search.objective)

    def _excess(self, hammer: int, stack: int) -> float:
        """Return how far a pair is from working; feasible at <= 0."""
        failing = self._failing(hammer, stack)
        if failing is None:
            return 0.0
        return min(max(failing.shortfall, 1e-6), 1e9)

    def _failing(self, hammer: int, stack: int) -> StagePlan | None:
        """Return the failing stage with the worst news, or None where all stages work."""
        failing = [p for p in self.stage_plans(hammer, stack) if p.verdict != DRIVES]
        return min(failing, key=lambda p: VERDICTS.index(p.verdict), default=None)

    def _choose(self, hammer: int) -> list[int]:
        """Return the best of the working stacks, and the softer runner-up if there is one."""
        working = [c for c in self._looked[hammer] if self._failing(hammer, c) is None]
        if not working:
            return []
        best = min(working, key=lambda c: self._merit(hammer, c))
        hard = self._uses(hammer, best)
        softer = []
        for c in working:
            uses = self._uses(hammer, c)
            gains = [before - after for before, after in zip(hard, uses, strict=True)]
            affordable = self.cost(hammer, c) <= RUNNER_UP_COST * self.cost(hammer, best)
            if affordable and min(gains) >= 0 and max(gains) >= RUNNER_UP_GAIN:
                softer.append(c)
        return [best, *sorted(softer, key=lambda c: (max(self._uses(hammer, c)), c))[:1]]

    def _merit(self, hammer: int, stack: int) -> tuple[float, ...]:
        """Ties of cost go to the thinner cushion, then lower compression, then catalogue order.

        Thinner is fewer sheets where sheets are counted.
        """
        pile = self.rig.stacks[stack].pile
        thickness = (pile.sheets or pile.thickness) if pile else 0
        target = self._plans[self.last, hammer, stack]
        return (self.cost(hammer, stack), thickness, target.compression, stack)

    def _uses(self, hammer: int, stack: int) -> tuple[float, float]:
        """Return the worst uses of both stress limits over the stages."""
        plans = self.stage_plans(hammer, stack)
        return max(p.compression_use for p in plans), max(p.tension_use for p in plans)

    def stage_plans(self, hammer: int, stack: int) -> tuple[StagePlan, ...]:
        """Return the plans of the stages looked at, in driving order."""
        looked = (self._plans.get((s, hammer, stack)) for s in range(self.last + 1))
        return tuple(plan for plan in looked if plan is not None)

    def _find_tops(self, pairs: list[Pair]) -> None:
        """Scan windows upwards for their ends."""
        stages = range(self.last + 1)
        keys = [(s, h, c) for s in stages for h, c in pairs if self._plans[s, h, c].top is None]
        if not keys:
            return
        lows = np.array([self._plans[key].low for key in keys])
        tops = self.finder.tops(Cells(*np.array(keys).T), lows)
        for key, top in zip(keys, tops, strict=True):
            self._plans[key] = replace(self._plans[key], top=float(top))

    def _option(self, hammer: int, chosen: list[int]) -> Option:
        job = self.rig.job
        plans = self.stage_plans(hammer, chosen[0])
        target = plans[-1]
        reduced = any(plan.top is not None and plan.top < target.stroke for plan in plans)
        governs = "set"
        if target.stroke > target.low:
            governs = (
                "stroke range" if target.stroke >= job.hammers[hammer].stroke_max else "stress"
            )
        elif target.lifted:
            governs = "tension"
        elif target.stroke <= job.hammers[hammer].stroke_min:
            governs = "stroke range"
        if governs == "stress":
            larger = target.compression_use > target.tension_use
            governs = "compression" if larger else "tension"
        return Option(
            hammer=job.hammers[hammer],
            verdict=REDUCED if reduced else DRIVES,
            governs=governs,
            stack=self.rig.stacks[chosen[0]],
            plans=plans,
            runner_up=self._option(hammer, chosen[1:]) if chosen[1:] else None,
        )

    def _miss(self, hammer: int) -> Option:
        """Return the nearest miss: the stack whose failing stage falls short by the least."""
        nearest = min(self._looked[hammer], key=lambda c: (self._excess(hammer, c), c))
        failing = self._failing(hammer, nearest)
        assert failing is not None
        return Option(
            hammer=self.rig.job.hammers[hammer],
            verdict=failing.verdict,
            governs=GOVERNS[failing.verdict],
            stack=self.rig.stacks[nearest],
            plans=self.stage_plans(hammer, nearest),
            failing=failing,
        )


def plan_cost(plan: StagePlan, objective: str) -> float:
    """Return what an objective makes of the target's plan; the least is the best.

    ``energy``: blow energy [J]; ``time``: time to drive a metre, infinite where the blow rate is
    not known [s/m].
    """
    if objective == "time":
        return 1 / plan.speed if plan.speed else math.inf
    return plan.blow_energy
