"""Look for the best cushion of every hammer in a space too large to look at whole.

The only home of the optimiser. One trial is one cushion with all its windows; trials of all
hammers are asked for in batches, answered together by the solver, and told. A cushion that is
proposed a second time is replaced by the nearest one not looked at yet. The proposals end in a
descent: neighbours of the best cushion of every material are looked at until none is better.
"""

from __future__ import annotations

import warnings
from collections.abc import Callable
from dataclasses import dataclass, field

import optuna

BATCH = 8
"""Trials asked for at once, one kernel group."""
TRIALS = 48
"""Trials of a study before its descent."""
LARGEST_COST = 1e12
"""Stands for an infinite cost, which the sampler can't model."""
STARTING = 16
"""Trials drawn at random before the sampler models what it has seen."""


@dataclass(frozen=True, slots=True)
class Told:
    """What came of a cushion.

    Parameters
    ----------
    cost : float
        What is minimised; for a cushion that fails, what it would cost if its limits were none.
    excess : float
        Largest excess over what is allowed; feasible at <= 0.
    """

    cost: float
    excess: float

    @property
    def merit(self) -> tuple[float, float]:
        """Sorts feasible cushions by cost, after them the others by excess."""
        return (max(self.excess, 0.0), self.cost)


@dataclass
class Study:
    """The search of one hammer over ``kinds`` (materials) times ``sizes`` (thin to thick).

    Parameters
    ----------
    kinds, sizes : int
    seed : int
    told : dict
        Filled as the search goes on: what came of each cushion, by its place.
    """

    kinds: int
    sizes: int
    seed: int
    told: dict[int, Told] = field(default_factory=dict)
    best_after: int = 0

    def __post_init__(self) -> None:
        optuna.logging.set_verbosity(optuna.logging.ERROR)
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", optuna.exceptions.ExperimentalWarning)
            sampler = optuna.samplers.TPESampler(
                seed=self.seed, n_startup_trials=STARTING, multivariate=True, constant_liar=True
            )
        self._study = optuna.create_study(sampler=sampler)
        # The ends and the middle of every material first: they bracket the answer.
        for kind in range(self.kinds):
            for size in (0, self.sizes // 2, self.sizes - 1):
                self._study.enqueue_trial({"kind": kind, "size": size}, skip_if_exists=True)
        self._asked: list[tuple[optuna.Trial, int]] = []

    def ask(self) -> list[int]:
        """Return the places of the next batch of cushions.

        A place that is known already is told at once, and the nearest unknown one asked for.
        """
        self._asked = []
        fresh = set(range(self.kinds * self.sizes)) - set(self.told)
        while len(self._asked) < BATCH and (fresh or not self._asked):
            trial, place = self._propose()
            if place not in fresh and fresh:
                if place in self.told:
                    self._tell(trial, self.told[place])
                else:
                    self._study.tell(trial, state=optuna.trial.TrialState.FAIL)
                place = min(fresh, key=lambda other: (self._away(place, other), other))
                kind, size = divmod(place, self.sizes)
                self._study.enqueue_trial({"kind": kind, "size": size})
                trial, place = self._propose()
            fresh.discard(place)
            self._asked.append((trial, place))
        return [place for _, place in self._asked]

    def _propose(self) -> tuple[optuna.Trial, int]:
        trial = self._study.ask()
        kind = trial.suggest_categorical("kind", list(range(self.kinds)))
        size = trial.suggest_int("size", 0, self.sizes - 1)
        return trial, int(kind) * self.sizes + size

    def _away(self, place: int, other: int) -> tuple[bool, int]:
        """Return how far two cushions are apart: materials first, then sizes."""
        (kind, size), (other_kind, other_size) = (divmod(p, self.sizes) for p in (place, other))
        return kind != other_kind, abs(size - other_size)

    def tell(self, answer: Callable[[int], Told]) -> None:
        """Tell what came of the batch."""
        for trial, place in self._asked:
            told = answer(place)
            self._tell(trial, told)
            self.note(place, told)

    def _tell(self, trial: optuna.Trial, told: Told) -> None:
        trial.set_constraint("excess", told.excess)
        self._study.tell(trial, min(told.cost, LARGEST_COST))

    def note(self, place: int, told: Told) -> None:
        """Remember what came of a cushion."""
        if place in self.told:
            return
        if not self.told or told.merit < self.told[self.best].merit:
            self.best_after = len(self.told) + 1
        self.told[place] = told

    @property
    def best(self) -> int:
        """Place of the best cushion so far."""
        return min(self.told, key=lambda place: (self.told[place].merit, place))

    def neighbours(self) -> list[int]:
        """Return the places next to the best ones that nothing has been told of yet.

        Next to the best of every material, and to as thick a cushion of it as the best of all: up
        to two sizes thinner or thicker.
        """
        best: dict[int, int] = {}
        for place in sorted(self.told, key=lambda place: (self.told[place].merit, place)):
            best.setdefault(place // self.sizes, place % self.sizes)
        size_of_all = self.best % self.sizes
        near = [
            kind * self.sizes + at
            for kind in range(self.kinds)
            for middle in (best.get(kind, size_of_all), size_of_all)
            for at in range(max(0, middle - 2), min(self.sizes, middle + 3))
        ]
        return [place for place in dict.fromkeys(near) if place not in self.told]


def run_studies(
    studies: dict[int, Study], answer: Callable[[dict[int, list[int]]], dict[int, dict[int, Told]]]
) -> None:
    """Run the studies of several hammers side by side, so that their blows share batches.

    Parameters
    ----------
    studies : dict of int to Study
        By hammer.
    answer : callable
        Takes places by hammer, returns what came of each.
    """
    for _ in range(TRIALS // BATCH):
        asked = {hammer: study.ask() for hammer, study in studies.items()}
        answers = answer(asked)
        for hammer, study in studies.items():
            study.tell(answers[hammer].__getitem__)
    descending = dict(studies)
    while descending := {h: s for h, s in descending.items() if s.neighbours()}:
        answers = answer({hammer: study.neighbours() for hammer, study in descending.items()})
        for hammer, study in descending.items():
            for place, told in answers[hammer].items():
                study.note(place, told)
