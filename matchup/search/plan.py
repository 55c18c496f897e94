"""Choose the best plan of every hammer.

For every hammer and stack of cushions the windows at the target are found exactly. They tell what
the stack costs, so the stages on the way are planned for the cheapest stack first, and for the
next only where one fails. Small cushion spaces are looked at whole; in large ones the optimiser
proposes which cushions to look at.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import replace

import numpy as np

from matchup.analysis.cells import OPEN, Cells, job_demands
from matchup.analysis.rig import Rig
from matchup.analysis.window import WindowFinder
from matchup.search.bill import Bill, make_bill
from matchup.search.option import (
    DRIVES,
    FINE,
    GOES_DOWN,
    NOT_ANALYSED,
    NOT_REACHED,
    OVER_COMPRESSION,
    OVER_TENSION,
    PILE_RUNS,
    REDUCED,
    REFUSES,
    VERDICTS,
    CaseDrive,
    Option,
    StagePlan,
    Taken,
)
from matchup.search.way import Walk, case_drives, stage_plan, walk
from matchup.wave.layout import Integers

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
LARGEST_WHOLE_SPACE = 200
"""Cushion spaces of up to so many members are looked at whole: up to here that takes about as many
blows as the optimiser does, since only the target is looked at on every cushion."""

Pair = tuple[int, int]
"""Hammer and stack."""


class Planner:
    """Plans for all hammers of one rig.

    Parameters
    ----------
    rig : Rig
    """

    def __init__(self, rig: Rig):
        self.rig = rig
        self.finder = WindowFinder(rig, job_demands(rig))
        self.courses = rig.job.courses
        self._targets: dict[Pair, tuple[StagePlan, ...]] = {}
        self._ways: dict[Pair, tuple[StagePlan, ...]] = {}
        self._objective = rig.job.search.objective
        self._is_fast = self._objective != "energy"
        self._cost_is_known_at_target = rig.job.drive is None or not self._is_fast

    # --- looking at cushions --------------------------------------------------------------------

    def options(self) -> list[Option]:
        """Return the best option, or the nearest miss, of every hammer in catalogue order."""
        hammers = range(len(self.rig.job.hammers))
        stacks = range(len(self.rig.stacks))
        if len(stacks) <= LARGEST_WHOLE_SPACE:
            self._look_at_targets([(h, c) for h in hammers for c in stacks])
            certificates = dict.fromkeys(hammers, self._whole())
        else:
            certificates = self._study()
        best = self._best()
        misses = {h: self._nearest(h) for h, c in best.items() if c is None}
        self._walk_misses(misses)
        softer = self._softer(best)
        shown = [pair for pair in (*best.items(), *softer.items()) if pair[1] is not None]
        self._find_ends([(h, c) for h, c in shown if c is not None])
        return [
            replace(
                self._miss(h, misses[h]) if c is None else self._option(h, c, softer.get(h)),
                certificate=certificates[h],
                analyses=int(self.rig.spent_on[h]),
            )
            for h, c in best.items()
        ]

    def _whole(self) -> str:
        if self.rig.job.cushions is None and len(self.rig.stacks) == 1:
            return "exact: no pile cushion to choose"
        if len(self.rig.stacks) == 1:
            return "exact: the one cushion given"
        return f"exact: all {len(self.rig.stacks)} cushions"

    def _study(self) -> dict[int, str]:
        """Let the optimiser propose cushions; return what certifies each hammer's answer."""
        from matchup.search.study import Study, Told, run_studies

        seed = self.rig.job.search.seed
        hammers = range(len(self.rig.job.hammers))
        running = [h for h in hammers if self._runs(h)]
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
        """Plan all stages of pairs not yet looked at; those that fail the target stop there."""
        pairs = list(dict.fromkeys(pairs))
        self._look_at_targets(pairs)
        self._look_on_the_way([pair for pair in pairs if self._target_works(*pair)])

    def _runs(self, hammer: int) -> list[int]:
        """Return the stages at which the pile must not run and does: at none a blow can help."""
        stages = range(len(self.rig.job.stages))
        if self.rig.job.drive is not None:
            stages = [course.target for course in self.courses if course.required]  # type: ignore[assignment]
        return [stage for stage in stages if self.rig.runs(stage, hammer)]

    def _look_at_targets(self, pairs: list[Pair]) -> None:
        """Find the windows at the targets of pairs not yet looked at."""
        fresh = [pair for pair in pairs if pair not in self._targets]
        if not fresh:
            return
        per_pair = []
        for h, c in fresh:
            # Weight against resistance takes no blow, and rules a hammer out on any cushion.
            stages = self._runs(h)[:1] or [course.target for course in self.courses]
            per_pair.append([(stage, h, c) for stage in stages])
        keys = [key for keys in per_pair for key in keys]
        cells = Cells(*np.array(keys).T)
        found = self.finder.find(cells)
        if self._is_fast:
            works = np.flatnonzero(found.state == OPEN)
            if works.size:
                some = cells.take(works)
                tops = self.finder.tops(some, found.at[works])
                fastest = self._fastest(some, found.at[works], tops)
                found.put(works, self.finder.strike(some, fastest))
        row = 0
        for pair, keys_of_pair in zip(fresh, per_pair, strict=True):
            rows = range(row, row + len(keys_of_pair))
            self._targets[pair] = tuple(stage_plan(self.finder, found, r) for r in rows)
            row += len(keys_of_pair)

    def _fastest(self, cells: Cells, low: Integers, top: Integers) -> Integers:
        """Return the settings between two at which the pile goes in fastest.

        That is the highest: the set grows at least in proportion to the stroke, and the blow rate
        falls at most in inverse proportion. For the same reason it takes the least blows and the
        least energy, and so costs the least. A rate that falls in a straight line between two given
        ones may fall faster; then every setting in between is looked at.
        """
        best = top.copy()
        for row, place in enumerate(cells.hammer.tolist()):
            hammer = self.rig.job.hammers[place]
            if hammer.blow_rate_full is None:
                continue
            at = np.arange(low[row], top[row] + 1)
            same = cells.take(np.full(at.size, row))
            sets, _, _ = self.finder.sets(same, at)
            strokes = self.finder.stroke(same.hammer, at).tolist()
            rates = np.array([hammer.blow_rate(stroke) for stroke in strokes], float)
            best[row] = at[np.argmax(rates * sets)]
        return best

    def _look_on_the_way(self, pairs: list[Pair]) -> None:
        """Plan the stages before the targets of pairs not yet planned."""
        fresh = [pair for pair in pairs if pair not in self._ways]
        walks = [w for pair in fresh for w in self._walks(*pair)]
        walk(self.finder, walks)
        for pair in fresh:
            plans = [p for w in walks if (w.hammer, w.stack) == pair for p in w.plans]
            order = {stage.name: place for place, stage in enumerate(self.rig.job.stages)}
            self._ways[pair] = tuple(sorted(plans, key=lambda p: order[p.stage.name]))

    def _walks(self, hammer: int, stack: int) -> list[Walk]:
        last = int(self.finder.last_settings(np.array([hammer]))[0])
        falls = self.rig.job.hammers[hammer].blow_rate_full is not None
        high = self._is_fast and not falls
        made = []
        for course, target in zip(self.courses, self._targets[hammer, stack], strict=True):
            wanted = last if high else target.at
            made.append(Walk(course, hammer, stack, target, [wanted] * len(course.stages)))
        return made

    def stage_plans(self, hammer: int, stack: int) -> tuple[StagePlan, ...]:
        """Return the plans of the stages looked at, in the order of the stages."""
        return self._ways.get((hammer, stack), self._targets[hammer, stack])

    def target_plan(self, hammer: int, stack: int) -> StagePlan:
        """Return the plan at the target of the required course that costs the most."""
        targets = self._required(self._targets[hammer, stack])
        return max(targets, key=lambda plan: (plan_cost(plan, self._objective), plan.shortfall))

    def _required(self, plans: Iterable[StagePlan]) -> list[StagePlan]:
        """Return the plans of required courses."""
        names = {course.case for course in self.courses if course.required}
        return [plan for plan in plans if plan.stage.case in names]

    # --- what a pair is worth -------------------------------------------------------------------

    def cost(self, hammer: int, stack: int) -> float:
        """Return what the objective makes of a pair; the least is the best."""
        if self._cost_is_known_at_target or (hammer, stack) not in self._ways:
            return plan_cost(self.target_plan(hammer, stack), self._objective)
        taken = [plan.taken for plan in self._required(self._ways[hammer, stack]) if plan.taken]
        return max(self._drive_cost(hammer, stack, one) for one in taken)

    def _drive_cost(self, hammer: int, stack: int, taken: Taken) -> float:
        """Return what the objective makes of a drive down to a station."""
        bill = self._bill(hammer, stack, taken)
        worth = taken.seconds if bill is None else bill.pile_time
        if self._objective == "cost":
            worth = bill.total if bill else None
        return math.inf if worth is None else worth

    def _bill(self, hammer: int, stack: int, taken: Taken) -> Bill | None:
        job = self.rig.job
        if job.cost is None:
            return None
        used = (taken.seconds, taken.energy, taken.cushions)
        return make_bill(job.cost, job.hammers[hammer], self.rig.stacks[stack], *used)

    def works(self, hammer: int, stack: int) -> bool:
        """Return whether a pair has been looked at, and works at all stages of every course."""
        return (hammer, stack) in self._ways and self._failing(hammer, stack) is None

    def _target_works(self, hammer: int, stack: int) -> bool:
        return all(p.verdict == DRIVES for p in self._required(self._targets[hammer, stack]))

    def _excess(self, hammer: int, stack: int) -> float:
        """Return how far a pair is from working; feasible at <= 0."""
        failing = self._failing(hammer, stack)
        if failing is None:
            return 0.0
        return min(max(failing.shortfall, 1e-6), 1e9)

    def _failing(self, hammer: int, stack: int) -> StagePlan | None:
        """Return the stage that is farthest from working, or None where all stages work.

        Over several ground cases a hammer may fail at several stages: what helps at this one is
        the most likely to help at the others. Of hopeless ones it is that with the most resistance.
        """
        plans = (*self._targets[hammer, stack], *self._ways.get((hammer, stack), ()))
        failing = [plan for plan in self._required(plans) if plan.verdict not in FINE]
        return max(
            failing,
            key=lambda p: (p.distance, p.stage.resistance, -VERDICTS.index(p.verdict)),
            default=None,
        )

    def _merit(self, hammer: int, stack: int) -> tuple[float, ...]:
        """Ties of cost go to the thinner cushion, then lower compression, then catalogue order.

        Thinner is fewer sheets where sheets are counted.
        """
        pile = self.rig.stacks[stack].pile
        thickness = (pile.sheets or pile.thickness) if pile else 0
        compression = self.target_plan(hammer, stack).compression
        return (self.cost(hammer, stack), thickness, compression, stack)

    def _uses(self, hammer: int, stack: int) -> tuple[float, float]:
        """Return the worst uses of both stress limits over the stages."""
        plans = self._required(self.stage_plans(hammer, stack))
        return max(p.compression_use for p in plans), max(p.tension_use for p in plans)

    # --- choosing -------------------------------------------------------------------------------

    def _best(self) -> dict[int, int | None]:
        """Return the best working stack of every hammer, None where there is none.

        The cheapest stack at the target is planned first. Where it works at every stage it is the
        best; else the next one is, until none is left.
        """
        queues: dict[int, list[int]] = {}
        for h, c in self._targets:
            queue = queues.setdefault(h, [])
            if self._target_works(h, c):
                queue.append(c)
        for h, queue in queues.items():
            queue.sort(key=lambda c: self._merit(h, c))
        best: dict[int, int | None] = dict.fromkeys(sorted(queues), None)
        at_once = 1 if self._cost_is_known_at_target else len(self.rig.stacks)
        while going := [h for h, queue in queues.items() if queue]:
            batch = {h: [queues[h].pop(0) for _ in queues[h][:at_once]] for h in going}
            # Where cheap ones fail, the next few fail likely too: fewer and fuller batches.
            at_once *= 2
            self._look_on_the_way([(h, c) for h, stacks in batch.items() for c in stacks])
            for h, stacks in batch.items():
                working = [c for c in stacks if self.works(h, c)]
                if working:
                    best[h] = min(working, key=lambda c: self._merit(h, c))
                    queues[h].clear()
        return best

    def _softer(self, best: dict[int, int | None]) -> dict[int, int]:
        """Return the softest of the stacks that gain enough for little, for every hammer."""
        queues = {h: self._softer_at_target(h, c) for h, c in best.items() if c is not None}
        found: dict[int, int] = {}
        self._look_on_the_way([(h, c) for h, queue in queues.items() for c in queue])
        for h, queue in queues.items():
            hard = self._uses(h, best[h])  # type: ignore[arg-type]
            gaining = [c for c in queue if self.works(h, c) and _gains(hard, self._uses(h, c))]
            if gaining:
                found[h] = min(gaining, key=lambda c: (max(self._uses(h, c)), c))
        return found

    def _softer_at_target(self, hammer: int, best: int) -> list[int]:
        """Return the stacks that may be a runner-up, as far as the target tells."""
        most = RUNNER_UP_COST * self.cost(hammer, best)
        hard = self._uses(hammer, best)
        return [
            c
            for h, c in self._targets
            if h == hammer
            and c != best
            and self._target_works(h, c)
            and self.cost(h, c) <= most
            and all(
                use <= limit
                for plan in self._required(self._targets[h, c])
                for use, limit in zip((plan.compression_use, plan.tension_use), hard, strict=True)
            )
        ]

    def _find_ends(self, pairs: list[Pair]) -> None:
        """Find the ends of the windows around the planned strokes of pairs.

        Of a drive's stages only the targets', since it has too many others.
        """
        keys = [
            (self.rig.job.stages.index(plan.stage), *pair)
            for pair in pairs
            for plan in self._ways[pair]
            if plan.verdict == DRIVES and (self.rig.job.drive is None or self._is_target(plan))
        ]
        if not keys:
            return
        plans = {pair: {p.stage.name: p for p in self._ways[pair]} for pair in pairs}
        names = [self.rig.job.stages[stage].name for stage, _, _ in keys]
        at = np.array([plans[h, c][name].at for name, (_, h, c) in zip(names, keys, strict=True)])
        cells = Cells(*np.array(keys).T)
        lows, tops = self.finder.ends(cells, at)
        low, top = (self.finder.stroke(cells.hammer, ends).tolist() for ends in (lows, tops))
        for row, (_, h, c) in enumerate(keys):
            plan = plans[h, c][names[row]]
            plans[h, c][names[row]] = replace(plan, low=low[row], top=top[row])
        for pair in pairs:
            self._ways[pair] = tuple(plans[pair].values())

    def _is_target(self, plan: StagePlan) -> bool:
        stages = self.rig.job.stages
        return any(stages[course.target] == plan.stage for course in self.courses)

    # --- telling --------------------------------------------------------------------------------

    def _option(self, hammer: int, stack: int, softer: int | None = None) -> Option:
        plans = self.stage_plans(hammer, stack)
        name = self.target_plan(hammer, stack).stage.name
        target = next(plan for plan in plans if plan.stage.name == name)
        return Option(
            hammer=self.rig.job.hammers[hammer],
            verdict=REDUCED if self._is_reduced(plans) else DRIVES,
            governs=self._governs(hammer, target),
            stack=self.rig.stacks[stack],
            plans=plans,
            target=target,
            cost=self.cost(hammer, stack),
            cases=tuple(
                replace(case, bill=self._bill(hammer, stack, case.taken) if case.reaches else None)
                for case in self._cases(hammer, plans)
            ),
            runner_up=None if softer is None else self._option(hammer, softer),
        )

    def _cases(self, hammer: int, plans: tuple[StagePlan, ...]) -> tuple[CaseDrive, ...]:
        return case_drives(self.rig.job, plans, float(self.rig.chains.weights[hammer]))

    def _is_reduced(self, plans: tuple[StagePlan, ...]) -> bool:
        """Return whether the stroke must stay below the target's at a stage on the way."""
        target = {plan.stage.case: plan for plan in plans if self._is_target(plan)}
        return any(
            plan.stroke < target[plan.stage.case].stroke
            for plan in self._required(plans)
            if plan.verdict != GOES_DOWN
        )

    def _governs(self, hammer: int, target: StagePlan) -> str:
        """Return what keeps the target's stroke from being lower or, for speed, higher."""
        strokes = self.finder.strokes[hammer]
        if self._is_fast:
            if target.at == strokes.size - 1:
                return "stroke range"
            if target.top is not None and target.stroke < target.top:
                return "blow rate"
            return "compression" if target.compression_use > target.tension_use else "tension"
        if target.lifted:
            return "tension"
        return "stroke range" if target.at == 0 else "set"

    def _nearest(self, hammer: int) -> int:
        """Return the nearest miss: the stack whose failing stage falls short by the least."""
        stacks = [c for h, c in self._targets if h == hammer]
        return min(stacks, key=lambda c: (self._excess(hammer, c), c))

    def _walk_misses(self, misses: dict[int, int]) -> None:
        """Find how far nearest misses get in every ground case of a drive."""
        if self.rig.job.drive is not None:
            self._look_on_the_way([(h, c) for h, c in misses.items() if not self._runs(h)])

    def _miss(self, hammer: int, nearest: int) -> Option:
        failing = self._failing(hammer, nearest)
        assert failing is not None
        plans = self.stage_plans(hammer, nearest)
        told = {plan.stage.name for plan in plans}
        return Option(
            hammer=self.rig.job.hammers[hammer],
            verdict=failing.verdict,
            governs=GOVERNS[failing.verdict],
            stack=self.rig.stacks[nearest],
            plans=plans if failing.stage.name in told else (*plans, failing),
            target=self.target_plan(hammer, nearest),
            cases=self._cases(hammer, plans),
            cost=math.inf,
            failing=failing,
        )


def _gains(hard: tuple[float, float], soft: tuple[float, float]) -> bool:
    """Return whether no use of a stress limit rises and one falls enough."""
    gains = [before - after for before, after in zip(hard, soft, strict=True)]
    return min(gains) >= 0 and max(gains) >= RUNNER_UP_GAIN


def plan_cost(plan: StagePlan, objective: str) -> float:
    """Return what an objective makes of a target's plan; the least is the best.

    ``energy``: blow energy [J]; ``time`` and ``cost``: time to drive a metre, infinite where the
    blow rate is not known [s/m].
    """
    if objective != "energy":
        return 1 / plan.speed if plan.speed else math.inf
    return plan.blow_energy
