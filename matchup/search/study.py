"""Look for the best cushion of every hammer in a space too large to look at whole.

The only home of the optimiser. One trial is one cushion with all its windows; trials of all
hammers are asked for in batches, answered together by the solver, and told. A study's own proposals
end in a descent: neighbours of the best cushion are looked at until none is better.
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
        """Return the places of the next batch of cushions."""
        self._asked = []
        for _ in range(BATCH):
            trial = self._study.ask()
            kind = trial.suggest_categorical("kind", list(range(self.kinds)))
            size = trial.suggest_int("size", 0, self.sizes - 1)
            self._asked.append((trial, int(kind) * self.sizes + size))
        return [place for _, place in self._asked]

    def tell(self, answer: Callable[[int], Told]) -> None:
        """Tell what came of the batch."""
        for trial, place in self._asked:
            told = answer(place)
            trial.set_constraint("excess", told.excess)
            self._study.tell(trial, told.cost)
            self.note(place, told)

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
        """Return the places next to the best one that nothing has been told of yet.

        Next to: up to two sizes thinner or thicker, and the same sizes of the other materials.
        """
        _, size = divmod(self.best, self.sizes)
        near = [
            kind * self.sizes + at
            for kind in range(self.kinds)
            for at in (size - 2, size - 1, size, size + 1, size + 2)
            if 0 <= at < self.sizes
        ]
        return [place for place in near if place not in self.told]


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
