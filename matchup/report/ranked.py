"""A ranking, or the answer for one hammer, as a page."""

from __future__ import annotations

from matchup.model.job import Job
from matchup.report.bills import bills_blocks
from matchup.report.closing import closing
from matchup.report.doubted import doubt_blocks
from matchup.report.options import margins_table, options_table, schedule_table
from matchup.report.page import Block, Headline, Page, Prose
from matchup.report.sentences import (
    reason,
    searched,
    softer_sentence,
    verdict_sentence,
)
from matchup.report.shown import Units
from matchup.search.option import Option, Ranking

SCHEDULES_SHOWN = 3
"""Stroke schedules printed with a ranking; `check` prints any hammer's."""
REACH = (
    "Reach: up to this multiple of the target stage's resistance every resistance is still "
    "overcome at the needed set within the limits."
)


def ranking_page(ranking: Ranking, units: Units) -> Page:
    """Return the ranking: answer first, then the options, then the failures."""
    job = ranking.job
    objective = job.search.objective
    page: list[Block] = [Headline(f"{job.title}: {verdict_sentence(ranking, units)}")]
    best = ranking.options[:SCHEDULES_SHOWN]
    if best:
        page.append(options_table(ranking.options, units, objective))
    if best and len(job.stages) > 1 and job.drive is None:
        which = f" of the best {len(best)}" if len(best) > 1 else ""
        page += [Headline(f"Stroke schedule{which}:"), schedule_table(best, units)]
    page += [*bills_blocks(ranking.options, job), *softer_prose(ranking, units)]
    page += doubt_blocks(ranking, units)
    if ranking.rejected:
        page.append(Prose(failures(ranking, units), "Hammers that can't, nearest miss first:"))
    return [*page, *foot(ranking, units)]


def softer_prose(ranking: Ranking, units: Units) -> list[Block]:
    """Return the softer runners-up of the best options; empty where there are none."""
    objective = ranking.job.search.objective
    best = ranking.options[:SCHEDULES_SHOWN]
    softer = [softer_sentence(option, objective, units) for option in best if option.runner_up]
    return [Prose(tuple(softer))] if softer else []


def failures(ranking: Ranking, units: Units) -> tuple[str, ...]:
    """Return a sentence for every hammer that can't: why, and what would help."""
    return tuple(_answer(option, ranking.job, units) for option in ranking.rejected)


def _answer(option: Option, job: Job, units: Units) -> str:
    return f"{option.hammer.name}: {option.verdict}; {reason(option, job, units)}."


def foot(ranking: Ranking, units: Units) -> Page:
    """Return what an answer rests on, how it was found, and the caution."""
    everyone = (*ranking.options, *ranking.rejected)
    reach = [REACH] if any(option.reach is not None for option in everyone) else []
    return closing(ranking.job, units, *reach, searched(ranking))


def check_page(ranking: Ranking, units: Units) -> Page:
    """Return the answer for one hammer: yes or no first, the reason, the margins."""
    job = ranking.job
    option = (*ranking.options, *ranking.rejected)[0]
    can = "Yes" if option.drives else "No"
    page: list[Block] = [
        Headline(f"{can}: {option.hammer.name} {option.verdict}; {reason(option, job, units)}."),
    ]
    if not option.misfits:
        page.append(margins_table(option, ranking, units))
    if len(job.stages) > 1 and option.drives and job.drive is None:
        page.append(schedule_table((option,), units))
    page += bills_blocks((option,), job)
    if option.runner_up is not None:
        page.append(Prose((softer_sentence(option, job.search.objective, units),)))
    page += doubt_blocks(ranking, units)
    return [*page, *foot(ranking, units)]
