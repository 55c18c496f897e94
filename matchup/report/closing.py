"""The end of every page: what the answer rests on, and the caution."""

from __future__ import annotations

from matchup.model.job import Job
from matchup.report.page import Page, Prose
from matchup.report.sentences import CAUTION, basis
from matchup.report.shown import Units


def closing(job: Job, units: Units, *lines: str) -> Page:
    """Return the ground of a whole drive, then limits and defaults, `lines`, and the caution."""
    return [*ground(job, units), Prose((*basis(job, units), *lines, CAUTION))]


def ground(job: Job, units: Units) -> list[Prose]:
    """Return what the resistances of a whole drive rest on; nothing for stages by hand."""
    if job.drive is None:
        return []
    return [Prose(tuple(map(units.retold, job.drive.basis)), "Ground:")]
