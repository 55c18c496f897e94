"""The steps behind each command, for use from Python.

Every function is a straight list: load, select, compute, show. Numbers are SI floats; wherever a
quantity is given, a string with its unit is accepted too.
"""

from __future__ import annotations

import html
import os
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from matchup.analysis.rig import Tell
from matchup.analysis.single import Blow, compute_blow
from matchup.errors import InputError, Problem
from matchup.inputs import load_job
from matchup.model.job import Job
from matchup.model.selection import (
    Selected,
    Selection,
    pick_wear,
    select,
    select_cell,
    select_hammer,
)
from matchup.report.document import blow_document
from matchup.report.mapped import map_document, map_table, map_text
from matchup.report.one_blow import blow_text, envelope_table, trace_table
from matchup.report.ranked import (
    check_document,
    check_text,
    options_table,
    ranking_document,
    ranking_text,
    schedule_table,
)
from matchup.report.shown import Units
from matchup.report.table import Table
from matchup.search.option import Option, Ranking
from matchup.search.ranking import rank_hammers
from matchup.search.stroke_map import StrokeMap, map_strokes
from matchup.units import UnitError, parse_quantity

if TYPE_CHECKING:
    import pandas as pd

__all__ = [
    "BlowResult",
    "CheckResult",
    "RankingResult",
    "WindowResult",
    "blow",
    "check",
    "load_job",
    "rank",
    "window",
]

JobLike = Job | str | os.PathLike[str]


@dataclass(frozen=True)
class RankingResult:
    """A ranking that knows how to show itself.

    Parameters
    ----------
    ranking : Ranking
    """

    ranking: Ranking

    @property
    def options(self) -> tuple[Option, ...]:
        """The hammers that drive the pile, best first."""
        return self.ranking.options

    @property
    def rejected(self) -> tuple[Option, ...]:
        """The hammers that do not, nearest miss first."""
        return self.ranking.rejected

    def units(self, display: str | None = None) -> Units:
        """Return the display units: the job's, or ``metric`` or ``us``."""
        return Units(display or self.ranking.job.display)

    def to_frame(self) -> pd.DataFrame:
        """Return every hammer as a row of a tidy data frame, in the units its columns name."""
        import pandas as pd

        documents = ranking_document(self.ranking, self.units())
        rows = []
        for group in ("options", "rejected"):
            for document in documents[group]:  # type: ignore[attr-defined]
                cushion = document["cushion"] or {}
                low, high = document["stroke_window_m"] or (None, None)
                flat = {k: v for k, v in document.items() if not isinstance(v, (dict, list))}
                flat |= {f"cushion_{key}": value for key, value in cushion.items()}
                rows.append(flat | {"stroke_low_m": low, "stroke_high_m": high})
        return pd.DataFrame(rows).drop(
            columns=["cushion", "stroke_window_m", "runner_up"], errors="ignore"
        )

    def to_text(self, display: str | None = None, width: int = 100) -> str:
        """Return the ranking as it is printed."""
        return ranking_text(self.ranking, self.units(display), width)

    def to_csv(self, display: str | None = None) -> str:
        """Return the table of all hammers as CSV."""
        everyone = (*self.options, *self.rejected)
        return options_table(everyone, self.units(display)).to_csv()

    def to_dict(self, display: str | None = None) -> dict[str, object]:
        """Return the JSON document as plain data."""
        return ranking_document(self.ranking, self.units(display))

    def _repr_html_(self) -> str:
        return f"<pre>{html.escape(self.to_text())}</pre>"

    def __str__(self) -> str:
        return self.to_text()


@dataclass(frozen=True)
class CheckResult(RankingResult):
    """The answer for one hammer: a ranking of that hammer alone, told as yes or no."""

    @property
    def can(self) -> bool:
        """Whether the hammer can drive the pile."""
        return bool(self.options)

    @property
    def option(self) -> Option:
        """The hammer's best plan, or its nearest miss."""
        return (*self.options, *self.rejected)[0]

    def to_text(self, display: str | None = None, width: int = 100) -> str:
        """Return the answer as it is printed."""
        return check_text(self.ranking, self.units(display), width)

    def to_csv(self, display: str | None = None) -> str:
        """Return what the hammer does at every stage as CSV."""
        return schedule_table((self.option,), self.units(display)).to_csv()

    def to_dict(self, display: str | None = None) -> dict[str, object]:
        """Return the JSON document as plain data."""
        return check_document(self.ranking, self.units(display))


@dataclass(frozen=True)
class WindowResult:
    """Stroke against cushion for one hammer.

    Parameters
    ----------
    map : StrokeMap
    """

    map: StrokeMap

    @property
    def is_open(self) -> bool:
        """Whether any stroke works on any cushion."""
        return self.map.is_open

    def units(self, display: str | None = None) -> Units:
        """Return the display units: the job's, or ``metric`` or ``us``."""
        return Units(display or self.map.job.display)

    def to_frame(self) -> pd.DataFrame:
        """Return every cell as a row of a data frame."""
        import pandas as pd

        return pd.DataFrame(map_table(self.map, self.units()).to_records())

    def to_text(self, display: str | None = None, width: int = 100) -> str:
        """Return the map as it is printed."""
        return map_text(self.map, self.units(display), width)

    def to_csv(self, display: str | None = None) -> str:
        """Return every cell as CSV."""
        return map_table(self.map, self.units(display)).to_csv()

    def to_dict(self) -> dict[str, object]:
        """Return the JSON document as plain data."""
        return map_document(self.map)

    def _repr_html_(self) -> str:
        return f"<pre>{html.escape(self.to_text())}</pre>"

    def __str__(self) -> str:
        return self.to_text()


@dataclass(frozen=True)
class BlowResult:
    """One blow that knows how to show itself.

    Parameters
    ----------
    blow : Blow
    job : Job
    """

    blow: Blow
    job: Job

    def units(self, display: str | None = None) -> Units:
        """Return the display units: the job's, or ``metric`` or ``us``."""
        return Units(display or self.job.display)

    def trace_table(self, display: str | None = None) -> Table:
        """Return head and toe against time."""
        return trace_table(self.blow, self.units(display))

    def envelope_table(self, display: str | None = None) -> Table:
        """Return the largest stresses along the pile."""
        return envelope_table(self.blow, self.units(display))

    def to_frame(self) -> pd.DataFrame:
        """Return head and toe against time as a data frame."""
        import pandas as pd

        return pd.DataFrame(self.trace_table().to_records())

    def to_text(self, display: str | None = None, width: int = 100) -> str:
        """Return the blow as it is printed."""
        return blow_text(self.blow, self.job, self.units(display), width)

    def to_csv(self, display: str | None = None) -> str:
        """Return head and toe against time as CSV."""
        return self.trace_table(display).to_csv()

    def to_dict(self, traces: bool = False) -> dict[str, object]:
        """Return the JSON document as plain data."""
        return blow_document(self.blow, traces)

    def _repr_html_(self) -> str:
        return f"<pre>{html.escape(self.to_text())}</pre>"

    def __str__(self) -> str:
        return self.to_text()


def rank(
    job: JobLike,
    workers: int | None = None,
    seed: int | None = None,
    tell: Tell | None = None,
) -> RankingResult:
    """Rank all hammers of a job.

    Parameters
    ----------
    job : Job or path
    workers : int or None
        Threads; None takes as many as there are processors. The answer does not depend on it.
    seed : int or None
        Replaces the job's.
    tell : callable or None
        Called with the number of blows of every batch, for showing progress.

    Raises
    ------
    InputError
        With every problem of the job's files.
    """
    job = _job(job)
    if seed is not None:
        job = replace(job, search=replace(job.search, seed=seed))
    return RankingResult(rank_hammers(job, workers, tell))


def check(
    job: JobLike,
    hammer: str | None = None,
    workers: int | None = None,
    tell: Tell | None = None,
) -> CheckResult:
    """Answer whether one hammer can drive the pile, and if not, what stops it.

    Parameters
    ----------
    job : Job or path
    hammer : str or None
        Name; may be left out where the job has one hammer.
    workers : int or None
        Threads; None takes as many as there are processors.
    tell : callable or None
        Called with the number of blows of every batch, for showing progress.

    Raises
    ------
    InputError
        If the job or the selection has problems.
    """
    job = _job(job)
    alone = replace(job, hammers=(select_hammer(job, hammer),))
    return CheckResult(rank_hammers(alone, workers, tell))


def window(
    job: JobLike,
    hammer: str | None = None,
    stage: str | None = None,
    workers: int | None = None,
) -> WindowResult:
    """Map stroke against cushion for one hammer: where it works, and what stops it.

    Parameters
    ----------
    job : Job or path
    hammer, stage : str or None
        Names; the stage that is not named is the target.
    workers : int or None
        Threads; None takes as many as there are processors.

    Raises
    ------
    InputError
        If the job or the selection has problems.
    """
    job = _job(job)
    return WindowResult(map_strokes(job, *select_cell(job, hammer, stage), workers))


def blow(
    job: JobLike,
    hammer: str | None = None,
    stroke: float | str | None = None,
    *,
    stage: str | None = None,
    cushion: str | None = None,
    sheets: int | None = None,
    thickness: float | str | None = None,
    wear: str | None = None,
    hammer_cushion: str | None = None,
    best: bool = False,
) -> BlowResult:
    """Compute one blow in detail.

    Parameters
    ----------
    job : Job or path
    hammer, stage, cushion, wear, hammer_cushion : str or None
        Names; where there is only one choice it may be left out. The stage that is not named is
        the target, the wear state the first of the job's.
    stroke, thickness : float, str or None
        [m], or a text with its unit.
    sheets : int or None
    best : bool
        Take stroke and cushions of the hammer's best plan, so none of them may be given.

    Raises
    ------
    InputError
        If the job or the selection has problems.
    AnalysisError
        If the blow can't be computed or trusted.
    """
    job = _job(job)
    problems: list[Problem] = []
    stroke = _quantity(stroke, "stroke", "stroke", problems)
    thickness = _quantity(thickness, "thickness", "thickness", problems)
    selection = Selection(hammer, stage, cushion, sheets, thickness, wear, hammer_cushion)
    pick = _best_plan if best else _select
    selected, stroke = pick(job, selection, stroke, problems)
    computed = compute_blow(
        job, selected.stage, selected.hammer, selected.stack, selected.wear, stroke
    )
    return BlowResult(computed, job)


def _job(job: JobLike) -> Job:
    return job if isinstance(job, Job) else load_job(job)


def _quantity(
    value: float | str | None, quantity: str, place: str, problems: list[Problem]
) -> float | None:
    if value is None or isinstance(value, (int, float)):
        return value
    try:
        return parse_quantity(value, quantity)
    except UnitError as error:
        problems.append(Problem(None, None, place, error.must, value, error.do))
        return None


def _select(
    job: Job, selection: Selection, stroke: float | None, problems: list[Problem]
) -> tuple[Selected, float]:
    if stroke is None and not problems:
        do = 'For example "0.6 m", or --best for the best plan of the hammer.'
        problems.append(Problem(None, None, "stroke", "must be given", "nothing", do))
    if stroke is not None and not 0 < stroke < float("inf"):
        problems.append(Problem(None, None, "stroke", "must be > 0", f"{stroke:g} m"))
    try:
        selected = select(job, selection)
    except InputError as error:
        raise InputError([*problems, *error.problems]) from None
    if stroke is not None and stroke > selected.hammer.stroke_max * (1 + 1e-9):
        must = f"must be at most the hammer's {selected.hammer.stroke_max:g} m"
        problems.append(Problem(None, None, "stroke", must, f"{stroke:g} m"))
    if problems or stroke is None:
        raise InputError(problems)
    return selected, stroke


def _best_plan(
    job: Job, selection: Selection, stroke: float | None, problems: list[Problem]
) -> tuple[Selected, float]:
    """Return the best plan of the named hammer, as a selection and a stroke."""
    for place, value in (
        ("stroke", stroke),
        ("cushion", selection.material),
        ("sheets", selection.sheets),
        ("thickness", selection.thickness),
        ("hammer_cushion", selection.hammer_cushion),
    ):
        if value is not None:
            must = "must be left out with best, which chooses it"
            problems.append(Problem(None, None, place, must, str(value)))
    wear = pick_wear(job, selection.wear, problems)
    try:
        hammer, stage = select_cell(job, selection.hammer, selection.stage)
    except InputError as error:
        raise InputError([*problems, *error.problems]) from None
    if problems:
        raise InputError(problems)
    found = rank_hammers(replace(job, hammers=(hammer,)))
    option = (*found.options, *found.rejected)[0]
    planned = next((plan for plan in option.plans if plan.stage == stage), option.target)
    return Selected(hammer, stage, option.stack, wear), planned.stroke
