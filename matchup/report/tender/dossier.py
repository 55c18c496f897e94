"""All that a report tells of, as plain results."""

from __future__ import annotations

from dataclasses import dataclass

from matchup.analysis.single import Blow
from matchup.model.job import Job
from matchup.search.criterion import Criterion
from matchup.search.option import Option, Ranking
from matchup.search.stroke_map import StrokeMap


@dataclass(frozen=True)
class Dossier:
    """Results for a report.

    Parameters
    ----------
    ranking : Ranking
    detail : Option
        The one told in full: of the ranking's options or of the rejected.
    map : StrokeMap
        Of its hammer, at the target, or where it fails.
    blows : tuple of Blow
        At its target, or where it fails, and at its station with the highest stress where that is
        another one; empty where there is no blow to compute.
    version : str
        Of the program that made them.
    criterion : Criterion or None
        Of a whole drive that reaches its target.
    """

    ranking: Ranking
    detail: Option
    map: StrokeMap
    blows: tuple[Blow, ...]
    version: str
    criterion: Criterion | None = None

    @property
    def job(self) -> Job:
        """The job."""
        return self.ranking.job
