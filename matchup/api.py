"""The steps behind each command, for use from Python.

Every function is a straight list: load, select, compute, show. Numbers are SI floats; wherever a
quantity is given, a string with its unit is accepted too.
"""

from __future__ import annotations

import os
from collections.abc import Sequence
from contextlib import suppress
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any

from matchup import __version__
from matchup.analysis.rig import Tell
from matchup.analysis.single import Blow, compute_blow
from matchup.errors import AnalysisError, InputError, Problem
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
from matchup.report.damaged import damage_document
from matchup.report.document import blow_document, check_document, ranking_document
from matchup.report.driven import chosen_case, drive_document, drive_page, stations_table
from matchup.report.files import figure_kind, refuse_taken, write_file, write_folder
from matchup.report.mapped import map_document, map_page, map_table
from matchup.report.one_blow import blow_page, envelope_table, trace_table
from matchup.report.opinions import formula_fields, opinion_document, opinions_page
from matchup.report.options import options_table, schedule_table
from matchup.report.page import Headline, Page, page_html, page_text
from matchup.report.proven import criterion_document
from matchup.report.ranked import check_page, ranking_page
from matchup.report.shown import Units
from matchup.report.table import Table, tabled
from matchup.report.tender.bundle import NAMES, report_files
from matchup.report.tender.dossier import Dossier
from matchup.report.tender.sections import sections
from matchup.report.together import together_document, together_page, together_table
from matchup.search.criterion import Criterion, find_criterion
from matchup.search.fatigue import Damage, find_damage
from matchup.search.opinion import Opinion, second_opinion
from matchup.search.option import Option, Ranking
from matchup.search.ranking import rank_hammers, with_odds
from matchup.search.stroke_map import StrokeMap, map_strokes
from matchup.search.together import Together, put_together
from matchup.units import UnitError, parse_quantity

if TYPE_CHECKING:
    import pandas as pd
    from matplotlib.figure import Figure

__all__ = [
    "BlowResult",
    "CheckResult",
    "DriveResult",
    "RankingResult",
    "ReportResult",
    "TogetherResult",
    "WindowResult",
    "blow",
    "check",
    "drive",
    "load_job",
    "rank",
    "rank_together",
    "tender_report",
    "window",
]

JobLike = Job | str | os.PathLike[str]


class _Shown:
    """What all results have in common: a page that becomes text and HTML."""

    def page(self, display: str | None = None) -> Page:
        """Return the result as blocks of prose and tables."""
        raise NotImplementedError

    def to_text(self, display: str | None = None, width: int = 100) -> str:
        """Return the result as it is printed, in ``metric`` or ``us`` units or the job's."""
        return page_text(self.page(display), width)

    def figure(self, display: str | None = None) -> Figure:
        """Return the result as a figure of matplotlib, to be shown, changed or saved."""
        raise NotImplementedError

    def plot(self, path: str | os.PathLike[str], display: str | None = None) -> None:
        """Draw the result to a file, as SVG, PNG or PDF by the file's ending.

        Raises
        ------
        InputError
            If the ending is another one, or the file can't be written.
        """
        kind = figure_kind(Path(path))
        from matchup.report.figures.drawing import rendered

        write_file(Path(path), rendered(self.figure(display), kind), "plot")

    def _repr_html_(self) -> str:
        from matchup.report.figures.drawing import rendered
        from matchup.report.picture import picture_html

        figure = self.figure()
        drawn = picture_html(rendered(figure, "svg"), figure.get_suptitle())
        return f"{page_html(self.page())}{drawn}"

    def __str__(self) -> str:
        return self.to_text()


@dataclass(frozen=True)
class RankingResult(_Shown):
    """A ranking that knows how to show itself.

    Parameters
    ----------
    ranking : Ranking
    opinions : tuple of Opinion
        What dynamic formulas make of the options, best first; empty where not asked for.
    """

    ranking: Ranking
    opinions: tuple[Opinion, ...] = ()

    @property
    def job(self) -> Job:
        """The job that was ranked."""
        return self.ranking.job

    @property
    def options(self) -> tuple[Option, ...]:
        """The hammers that drive the pile, best first."""
        return self.ranking.options

    @property
    def rejected(self) -> tuple[Option, ...]:
        """The hammers that do not, nearest miss first."""
        return self.ranking.rejected

    def page(self, display: str | None = None) -> Page:
        """Return the ranking as blocks of prose and tables."""
        units = _units(self.job, display)
        return self._with_opinions(ranking_page(self.ranking, units), units)

    def _with_opinions(self, page: Page, units: Units) -> Page:
        """Return a page with the second opinion before its foot."""
        if not self.opinions:
            return page
        return [*page[:-1], *opinions_page(self.opinions, units), page[-1]]

    def _document(self, document: dict[str, Any]) -> dict[str, Any]:
        """Return a document with the second opinion by hammer."""
        if not self.opinions:
            return document
        told = {opinion.hammer: opinion_document(opinion) for opinion in self.opinions}
        return document | {"formulas": told}

    def figure(self, display: str | None = None) -> Figure:
        """Draw the trade-off of the hammers that drive, or how near the others come."""
        from matchup.report.figures.tradeoff import ranking_figure

        return ranking_figure(self.ranking, _units(self.job, display))

    def to_frame(self) -> pd.DataFrame:
        """Return every hammer as a row of a tidy data frame, best first.

        Columns are those of the JSON document, with its fixed units in their names whatever the
        display: ``stroke_m``, ``set_mm``, ``blow_energy_kJ``. Cushion and window are spread over
        columns; what is nested deeper is left to `to_dict`.
        """
        document = ranking_document(self.ranking, _units(self.job, None))
        return _frame([*document["options"], *document["rejected"]])

    def to_csv(self, display: str | None = None) -> str:
        """Return the table of all hammers as CSV."""
        everyone = (*self.options, *self.rejected)
        objective = self.job.search.objective
        units = _units(self.job, display)
        table = options_table(everyone, units, objective)
        if self.opinions:
            fields = formula_fields(units)
            table = table.beside(tabled(self.opinions, fields))
        return table.to_csv()

    def to_dict(self, display: str | None = None) -> dict[str, object]:
        """Return the JSON document as plain data; `display` changes its sentences alone."""
        return self._document(ranking_document(self.ranking, _units(self.job, display)))


@dataclass(frozen=True)
class TogetherResult(_Shown):
    """Several jobs and the hammer that serves them all.

    Parameters
    ----------
    together : Together
    """

    together: Together

    @property
    def best(self) -> str | None:
        """Name of the hammer that serves all jobs best; None where none does."""
        return self.together.best.name if self.together.best else None

    def _shown_in(self, display: str | None) -> Units:
        return _units(self.together.rankings[0].job, display)

    def page(self, display: str | None = None) -> Page:
        """Return the answer as blocks of prose and tables."""
        return together_page(self.together, self._shown_in(display))

    def figure(self, display: str | None = None) -> Figure:
        """Refuse: there is a figure for each job, and none for all of them."""
        must = "must be left out with several jobs; each has a figure of its own"
        raise InputError([Problem(None, None, "plot", must, "")])

    def to_frame(self) -> pd.DataFrame:
        """Return every hammer as a row, best first."""
        import pandas as pd

        return pd.DataFrame(together_table(self.together, self._shown_in(None)).to_records())

    def to_csv(self, display: str | None = None) -> str:
        """Return the table of hammers as CSV."""
        return together_table(self.together, self._shown_in(display)).to_csv()

    def to_dict(self, display: str | None = None) -> dict[str, Any]:
        """Return the JSON document as plain data; `display` changes its sentences alone."""
        return together_document(self.together, self._shown_in(display))


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

    def page(self, display: str | None = None) -> Page:
        """Return the answer as blocks of prose and tables."""
        units = _units(self.job, display)
        return self._with_opinions(check_page(self.ranking, units), units)

    def figure(self, display: str | None = None) -> Figure:
        """Draw what the hammer hangs on, or else how far it is from what is asked of it."""
        odds = self.option.odds
        if odds is not None and odds.influences is not None:
            from matchup.report.figures.doubt import doubt_figure

            return doubt_figure(odds)
        from matchup.report.figures.margins import margins_figure

        return margins_figure((self.option,), self.ranking, _units(self.job, display))

    def to_csv(self, display: str | None = None) -> str:
        """Return what the hammer does at every stage as CSV."""
        return schedule_table((self.option,), _units(self.job, display)).to_csv()

    def to_dict(self, display: str | None = None) -> dict[str, object]:
        """Return the JSON document as plain data; `display` changes its sentences alone."""
        return self._document(check_document(self.ranking, _units(self.job, display)))


@dataclass(frozen=True)
class DriveResult(CheckResult):
    """The whole drive of one hammer, and whether it reaches the target.

    Parameters
    ----------
    case : str or None
        Whose stations are shown.
    criterion : Criterion or None
        The termination criterion, where it was asked for.
    damage : tuple of Damage
        By fatigue, detail by detail in every case; empty where the job does not ask for it.
    """

    case: str | None = None
    criterion: Criterion | None = None
    damage: tuple[Damage, ...] = ()

    def page(self, display: str | None = None) -> Page:
        """Return the drive as blocks of prose and tables."""
        return drive_page(
            self.ranking, _units(self.job, display), self.case, self.criterion, self.damage
        )

    def figure(self, display: str | None = None) -> Figure:
        """Draw resistance, stroke, blow count and stresses by depth, ground cases as bands."""
        if self.option.misfits:
            return super().figure(display)
        from matchup.report.figures.drive import drive_figure

        told = chosen_case(self.option, self.case)
        return drive_figure(self.option, told, self.job, _units(self.job, display))

    def to_frame(self) -> pd.DataFrame:
        """Return every station of every case as a row, in the JSON document's fixed units."""
        import pandas as pd

        return pd.DataFrame(self.to_dict()["stations"])

    def to_csv(self, display: str | None = None) -> str:
        """Return every station of every case as CSV."""
        return stations_table(self.option.cases, _units(self.job, display)).to_csv()

    def to_dict(self, display: str | None = None) -> dict[str, Any]:
        """Return the JSON document as plain data; `display` changes its sentences alone."""
        document = drive_document(self.ranking, _units(self.job, display))
        told = None if self.criterion is None else criterion_document(self.criterion)
        damage = damage_document(self.damage, self.job.fatigue)
        return document | {"criterion": told, "fatigue": damage}


@dataclass(frozen=True)
class WindowResult(_Shown):
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

    def page(self, display: str | None = None) -> Page:
        """Return the map as blocks of prose and a grid."""
        return map_page(self.map, _units(self.map.job, display))

    def figure(self, display: str | None = None) -> Figure:
        """Draw where the hammer works in the plane of stroke and cushion."""
        from matchup.report.figures.window import window_figure

        return window_figure(self.map, _units(self.map.job, display))

    def to_frame(self) -> pd.DataFrame:
        """Return every cell as a row of a tidy data frame, in the JSON document's fixed units."""
        return _frame(map_document(self.map)["cells"])

    def to_csv(self, display: str | None = None) -> str:
        """Return every cell as CSV."""
        return map_table(self.map, _units(self.map.job, display)).to_csv()

    def to_dict(self) -> dict[str, object]:
        """Return the JSON document as plain data."""
        return map_document(self.map)


@dataclass(frozen=True)
class BlowResult(_Shown):
    """One blow that knows how to show itself.

    Parameters
    ----------
    blow : Blow
    job : Job
    """

    blow: Blow
    job: Job

    def page(self, display: str | None = None) -> Page:
        """Return the blow as blocks of prose and a table."""
        return blow_page(self.blow, self.job, _units(self.job, display))

    def figure(self, display: str | None = None) -> Figure:
        """Draw the waves of the blow, what the head feels of them, and the stresses."""
        from matchup.report.figures.blow import blow_figure

        return blow_figure(self.blow, self.job.pile, _units(self.job, display))

    def trace_table(self, display: str | None = None) -> Table:
        """Return head and toe against time."""
        return trace_table(self.blow, _units(self.job, display))

    def envelope_table(self, display: str | None = None) -> Table:
        """Return the largest stresses along the pile."""
        return envelope_table(self.blow, _units(self.job, display))

    def to_frame(self) -> pd.DataFrame:
        """Return head and toe against time, in the JSON document's fixed units."""
        import pandas as pd

        return pd.DataFrame(blow_document(self.blow, traces=True)["trace"])

    def to_csv(self, display: str | None = None) -> str:
        """Return head and toe against time as CSV."""
        return self.trace_table(display).to_csv()

    def to_dict(self, traces: bool = False) -> dict[str, object]:
        """Return the JSON document as plain data."""
        return blow_document(self.blow, traces)


@dataclass(frozen=True)
class ReportResult(_Shown):
    """A tender report that can be shown and written.

    Parameters
    ----------
    dossier : Dossier
    """

    dossier: Dossier

    @property
    def can(self) -> bool:
        """Whether any hammer can drive the pile."""
        return bool(self.dossier.ranking.options)

    def page(self, display: str | None = None) -> Page:
        """Return the report as blocks, each section under its heading."""
        parts = sections(self.dossier, _units(self.dossier.job, display))
        return [block for part in parts for block in (Headline(part.heading), *part.blocks)]

    def files(self, display: str | None = None) -> dict[str, bytes]:
        """Return the report's files by name: web page, PDF, workbook, CSV and JSON.

        The PDF needs the extra ``pdf`` and is left out without it.
        """
        return report_files(self.dossier, _units(self.dossier.job, display))

    def write(
        self, folder: str | os.PathLike[str], display: str | None = None, force: bool = False
    ) -> tuple[str, ...]:
        """Write the report's files to a folder, all or none, and return their names.

        Parameters
        ----------
        folder : path
            Made if need be.
        force : bool
            Replace the files of a report that is there.

        Raises
        ------
        InputError
            If the folder holds a report already, or can't be written to.
        """
        if not force:
            refuse_taken(Path(folder), NAMES, "output")
        made = self.files(display)
        write_folder(Path(folder), made, "output")
        return tuple(made)

    def _repr_html_(self) -> str:
        return page_html(self.page())


def _units(job: Job, display: str | None) -> Units:
    return Units(display or job.display)


def _frame(documents: Sequence[dict[str, Any]]) -> pd.DataFrame:
    """Return flat rows of documents: a cushion and a window as columns, the rest of it left out."""
    import pandas as pd

    rows = []
    for document in documents:
        row = {k: v for k, v in document.items() if not isinstance(v, (dict, list))}
        row.pop("cushion", None)
        cushion = document["cushion"] or dict.fromkeys(("material", "sheets", "thickness_mm"))
        row |= {f"cushion_{key}": value for key, value in cushion.items()}
        if "stroke_window_m" in document:
            row.pop("stroke_window_m", None)
            low, high = document["stroke_window_m"] or (None, None)
            row |= {"stroke_low_m": low, "stroke_high_m": high}
        rows.append(row)
    return pd.DataFrame(rows)


def rank(
    job: JobLike,
    workers: int | None = None,
    seed: int | None = None,
    tell: Tell | None = None,
    *,
    samples: int | None = None,
    formulas: bool = False,
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
    samples : int or None
        Play so many samples of the job's doubt, zero for none; None takes the job's own number.
    formulas : bool
        Add the second opinion of dynamic formulas, which decides nothing.

    Raises
    ------
    InputError
        With every problem of the job's files.
    """
    job = _job(job)
    if seed is not None:
        job = replace(job, search=replace(job.search, seed=seed))
    wanted = _samples(job, samples)
    ranking = rank_hammers(job, workers, tell)
    if wanted:
        ranking = with_odds(ranking, wanted, workers, tell)
    return RankingResult(ranking, _opinions(ranking) if formulas else ())


def rank_together(
    jobs: Sequence[JobLike],
    workers: int | None = None,
    seed: int | None = None,
    tell: Tell | None = None,
) -> TogetherResult:
    """Rank the hammers of several jobs, and tell which one serves them all best.

    Parameters
    ----------
    jobs : sequence of Job or path
    workers : int or None
        Threads; None takes as many as there are processors.
    seed : int or None
        Replaces the jobs'.
    tell : callable or None
        Called with the number of blows of every batch, for showing progress.

    Raises
    ------
    InputError
        With every problem of all the jobs' files, or where they are priced in several currencies.
    """
    rankings = [rank(job, workers, seed, tell).ranking for job in _jobs(jobs)]
    return TogetherResult(put_together(rankings))


def _jobs(jobs: Sequence[JobLike]) -> list[Job]:
    """Return all jobs, or raise with the problems of all of them."""
    loaded: list[Job] = []
    problems: list[Problem] = []
    for one in jobs:
        try:
            loaded.append(_job(one))
        except InputError as error:
            problems += error.problems
    currencies = dict.fromkeys(job.cost.currency for job in loaded if job.cost)
    if len(currencies) > 1:
        must = "must be the same in all jobs; nothing is converted"
        problems.append(Problem(None, None, "cost.currency", must, ", ".join(currencies)))
    if problems or not jobs:
        empty = Problem(None, None, "jobs", "must be at least one", "")
        raise InputError(list(dict.fromkeys(problems)) or [empty])
    return loaded


def check(
    job: JobLike,
    hammer: str | None = None,
    workers: int | None = None,
    tell: Tell | None = None,
    *,
    samples: int | None = None,
    formulas: bool = False,
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
    samples : int or None
        Play so many samples of the job's doubt, zero for none; None takes the job's own number.
    formulas : bool
        Add the second opinion of dynamic formulas, which decides nothing.

    Raises
    ------
    InputError
        If the job or the selection has problems.
    """
    job = _job(job)
    alone = replace(job, hammers=(select_hammer(job, hammer),))
    ranking = _ranked_alone(alone, _samples(job, samples), workers, tell)
    return CheckResult(ranking, _opinions(ranking) if formulas else ())


def _opinions(ranking: Ranking) -> tuple[Opinion, ...]:
    """Return what dynamic formulas make of every hammer, best first."""
    everyone = (*ranking.options, *ranking.rejected)
    return tuple(second_opinion(o, ranking.job) for o in everyone if not o.misfits)


def drive(
    job: JobLike,
    hammer: str | None = None,
    workers: int | None = None,
    tell: Tell | None = None,
    *,
    cushion: str | None = None,
    sheets: int | None = None,
    thickness: float | str | None = None,
    hammer_cushion: str | None = None,
    case: str | None = None,
    criterion: bool = False,
    samples: int | None = None,
) -> DriveResult:
    """Predict the whole drive of one hammer, station by station in every ground case.

    Parameters
    ----------
    job : Job or path
        With a ``[ground]``.
    hammer : str or None
        Name; may be left out where the job has one hammer.
    workers : int or None
        Threads; None takes as many as there are processors.
    tell : callable or None
        Called with the number of blows of every batch, for showing progress.
    cushion, sheets, thickness, hammer_cushion
        The cushions to drive with, as for `blow`; where none is named, the best are looked for.
    case : str or None
        Whose stations are shown; the answer is about all required ones.
    criterion : bool
        Add the termination criterion: which set at which stroke proves which resistance.
    samples : int or None
        Play so many samples of the job's doubt, zero for none; None takes the job's own number.

    Raises
    ------
    InputError
        If the job or the selection has problems, or the job has no ``[ground]``.
    AnalysisError
        If a blow that fatigue is counted in can't be computed.
    """
    job = _job(job)
    problems: list[Problem] = []
    if job.drive is None:
        must = "must have a [ground], whose stages make a whole drive"
        problems.append(Problem(job.file, None, "ground", must, "", "`check` answers for stages."))
    known = [course.case for course in job.courses]
    if job.drive is not None and case is not None and case not in known:
        must = f"must be a case of the job: {', '.join(known)}"
        problems.append(Problem(None, None, "case", must, case))
    thickness = _quantity(thickness, "thickness", "thickness", problems)
    selection = Selection(hammer, None, cushion, sheets, thickness, None, hammer_cushion)
    alone = _with_selected(job, selection, problems)
    ranking = _ranked_alone(alone, _samples(job, samples), workers, tell)
    proof = None
    if criterion and ranking.options:
        proof = find_criterion(alone, ranking.options[0], workers, tell)
    damage = find_damage(alone, ranking.options[0]) if ranking.options else ()
    return DriveResult(ranking, case=case, criterion=proof, damage=damage)


def window(
    job: JobLike,
    hammer: str | None = None,
    stage: str | None = None,
    workers: int | None = None,
    tell: Tell | None = None,
    *,
    every_stage: bool = False,
) -> WindowResult:
    """Map stroke against cushion for one hammer: where it works, and what stops it.

    Parameters
    ----------
    job : Job or path
    hammer, stage : str or None
        Names; the stage that is not named is the target.
    workers : int or None
        Threads; None takes as many as there are processors.
    tell : callable or None
        Called with the number of blows of every batch, for showing progress.
    every_stage : bool
        Show where a stroke works at every stage, of every required ground case.

    Raises
    ------
    InputError
        If the job or the selection has problems.
    """
    job = _job(job)
    chosen, at = select_cell(job, hammer, stage)
    if every_stage and stage is not None:
        must = "must be left out where every stage is looked at"
        raise InputError([Problem(None, None, "stage", must, stage)])
    return WindowResult(map_strokes(job, chosen, None if every_stage else at, workers, tell))


def blow(
    job: JobLike,
    hammer: str | None = None,
    stroke: float | str | None = None,
    *,
    energy: float | str | None = None,
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
    energy : float, str or None
        In place of a stroke: the blow energy, ram weight times stroke, or the setting of a hammer
        that is set by energy. [J], or a text with its unit.
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
    stroke = _stroke_of(job, hammer, stroke, energy, problems)
    thickness = _quantity(thickness, "thickness", "thickness", problems)
    selection = Selection(hammer, stage, cushion, sheets, thickness, wear, hammer_cushion)
    pick = _best_plan if best else _select
    selected, stroke = pick(job, selection, stroke, problems)
    computed = compute_blow(
        job, selected.stage, selected.hammer, selected.stack, selected.wear, stroke
    )
    return BlowResult(computed, job)


def tender_report(
    job: JobLike,
    detail: str | None = None,
    workers: int | None = None,
    seed: int | None = None,
    tell: Tell | None = None,
    samples: int | None = None,
) -> ReportResult:
    """Compute all that a tender report tells of.

    Parameters
    ----------
    job : Job or path
    detail : str or None
        Name of the hammer that is told in full; None takes the best, or the nearest miss.
    workers : int or None
        Threads; None takes as many as there are processors.
    seed : int or None
        Replaces the job's.
    tell : callable or None
        Called with the number of blows of every batch, for showing progress.
    samples : int or None
        Play so many samples of the job's doubt, zero for none; None takes the job's own number.

    Raises
    ------
    InputError
        If the job has problems, or no hammer of that name.
    """
    job = _job(job)
    name = None if detail is None else select_hammer(job, detail).name
    wanted = _samples(job, samples)
    ranking = rank(job, workers, seed, tell, samples=0).ranking
    job = ranking.job
    everyone = (*ranking.options, *ranking.rejected)
    name = name or everyone[0].hammer.name
    if wanted:
        ranking = with_odds(ranking, wanted, workers, tell, influences=(name,))
        everyone = (*ranking.options, *ranking.rejected)
    option = next(o for o in everyone if o.hammer.name == name)
    alone = replace(job, hammers=(option.hammer,))
    proof = None
    if job.drive is not None and option.drives:
        proof = find_criterion(alone, option, workers, tell)
    plan = option.failing or option.target
    found = map_strokes(job, option.hammer, plan.stage, workers, tell)
    blows = _telling_blows(job, option)
    return ReportResult(Dossier(ranking, option, found, blows, __version__, proof))


def _telling_blows(job: Job, option: Option) -> tuple[Blow, ...]:
    """Return a blow at the target, and one where the stress is highest, where they can be had."""
    if option.misfits:
        return ()
    plans = [option.failing or option.target]
    tightest = option.tightest or max(option.plans, key=lambda plan: plan.stress_use)
    if tightest.stage != plans[0].stage:
        plans.append(tightest)
    wears = job.cushions.wears if job.cushions else (pick_wear(job, None, []),)
    telling = []
    for plan in plans:
        blows = []
        for wear in (plan.wear,) if plan.wear else wears:
            with suppress(AnalysisError):
                blows.append(
                    compute_blow(job, plan.stage, option.hammer, option.stack, wear, plan.stroke)
                )
        # Of the wear states, the one that decides.
        telling += sorted(blows, key=lambda blow: -blow.stress_use)[:1]
    return tuple(telling)


def _job(job: JobLike) -> Job:
    return job if isinstance(job, Job) else load_job(job)


def _samples(job: Job, samples: int | None) -> int:
    """Return how many samples to play."""
    if job.doubt is None:
        if samples:
            do = "For example shaft = { lognormal = { mean = 1.0, cov = 0.2 } } below [doubt]."
            must = "must be left out, or the job must say in [doubt] what is in doubt"
            raise InputError([Problem(job.file, None, "samples", must, str(samples), do)])
        return 0
    return (job.doubt.samples or 0) if samples is None else samples


def _ranked_alone(job: Job, samples: int, workers: int | None, tell: Tell | None) -> Ranking:
    """Return the ranking of a lone hammer, with its odds and what matters if samples are played."""
    ranking = rank_hammers(job, workers, tell)
    if not samples:
        return ranking
    return with_odds(ranking, samples, workers, tell, influences=(job.hammers[0].name,))


def _with_selected(job: Job, selection: Selection, problems: list[Problem]) -> Job:
    """Return the job with the named hammer alone, and the cushions where some are named."""
    try:
        hammer = select_hammer(job, selection.hammer)
        named = (selection.material, selection.sheets, selection.thickness)
        cushions, others = job.cushions, job.hammer_cushions
        if any(value is not None for value in named):
            only = replace(selection, hammer_cushion=others[0].text if others else None)
            chosen = select(job, only).stack.pile
            assert chosen is not None
            assert cushions is not None
            cushions = cushions.holding(chosen)
        if selection.hammer_cushion is not None:
            any_pile = replace(job, cushions=None)
            picked = select(
                any_pile,
                Selection(selection.hammer, None, None, None, None, None, selection.hammer_cushion),
            ).stack.hammer
            assert picked is not None
            others = (picked,)
    except InputError as error:
        raise InputError([*problems, *error.problems]) from None
    if problems:
        raise InputError(problems)
    return replace(job, hammers=(hammer,), cushions=cushions, hammer_cushions=others)


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


def _stroke_of(
    job: Job,
    hammer: str | None,
    stroke: float | None,
    energy: float | str | None,
    problems: list[Problem],
) -> float | None:
    """Return the stroke, or the one that an energy is equivalent to."""
    if energy is None:
        return stroke
    if stroke is not None:
        must = "must be left out together with a stroke"
        problems.append(Problem(None, None, "energy", must, str(energy)))
        return stroke
    joules = _quantity(energy, "energy", "energy", problems)
    if joules is None:
        return None
    try:
        return select_hammer(job, hammer).stroke_of(joules)
    except InputError as error:
        raise InputError([*problems, *error.problems]) from None


def _select(
    job: Job, selection: Selection, stroke: float | None, problems: list[Problem]
) -> tuple[Selected, float]:
    if stroke is None and not problems:
        do = 'For example "0.6 m", an energy, or --best for the best plan of the hammer.'
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
    if option.misfits:
        must = "must fit the pile and the site, to have a best plan"
        raise InputError(
            [Problem(None, None, "hammer", must, hammer.name, "`matchup check` says why.")]
        )
    planned = next((plan for plan in option.plans if plan.stage == stage), option.target)
    return Selected(hammer, stage, option.stack, wear), planned.stroke
