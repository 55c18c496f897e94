"""What a report says, in the order in which a reviewer of a tender reads."""

from __future__ import annotations

import sys
from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from matchup.report.bills import bills_blocks
from matchup.report.closing import ground
from matchup.report.doubted import doubt_blocks
from matchup.report.driven import answer, cases_table, chosen_case, stations_table
from matchup.report.one_blow import figures_table
from matchup.report.options import margins_table, options_table, schedule_table
from matchup.report.page import Block, Headline, Prose
from matchup.report.picture import Picture
from matchup.report.proven import criterion_page
from matchup.report.ranked import REACH, failures, softer_prose
from matchup.report.sentences import (
    CAUTION,
    on_stack,
    reason,
    rests_on,
    searched,
    verdict_sentence,
    warned,
    where,
)
from matchup.report.shown import Units
from matchup.report.table import Column, Table
from matchup.report.tender.dossier import Dossier
from matchup.report.tender.echo import (
    cushions_table,
    hammers_table,
    inputs_table,
    stages_table,
)

if TYPE_CHECKING:
    from matplotlib.figure import Figure

METHOD = (
    "A blow is a chain after E. A. L. Smith (1960): rigid ram, hammer cushion, helmet, pile "
    "cushion and an elastic pile on elastic-plastic shaft and toe springs with damping, from "
    "equilibrium under weight. Waves travel exactly, since all segments take one time step. "
    "Cushions take no tension and lose energy by their coefficient of restitution.",
    "The set is the largest toe displacement less the toe quake. Every blow carries an energy "
    "audit; one that fails it is refused.",
    "For every hammer, strokes and cushions were searched for the plan that reaches the set "
    "within both stress limits, in every wear state and at 2 % more and less stroke.",
    "Not modelled: diesel and vibratory hammers, repeated blows with residual stresses, splices, "
    "followers, bending.",
)
AS_PLANNED = (
    "At the planned stroke, in the wear state that decides. The plan's own figures are the worst "
    "over the wear states and over 2 % more and less stroke, so they are a little higher."
)
FEW_STAGES = 12
"""Up to so many stages are echoed in the report itself; more stand in the workbook."""


@dataclass(frozen=True, slots=True)
class Section:
    """A part of the report.

    Parameters
    ----------
    heading : str
    blocks : tuple of Block
    """

    heading: str
    blocks: tuple[Block, ...]


def sections(dossier: Dossier, units: Units) -> tuple[Section, ...]:
    """Return the report, section by section."""
    parts: tuple[Callable[[Dossier, Units], Section | None], ...] = (
        _answer,
        _options,
        _rejected,
        _plan,
        _doubt,
        _window,
        _blows,
        _inputs,
        _methods,
        _cautions,
        _about,
    )
    made = [part(dossier, units) for part in parts]
    return tuple(section for section in made if section is not None)


def _answer(dossier: Dossier, units: Units) -> Section:
    sentence = verdict_sentence(dossier.ranking, units)
    return Section("The answer", (Headline(sentence[:1].upper() + sentence[1:]),))


def _options(dossier: Dossier, units: Units) -> Section | None:
    ranking = dossier.ranking
    if not ranking.options:
        return None
    from matchup.report.figures.tradeoff import tradeoff_figure

    blocks: list[Block] = [
        options_table(ranking.options, units, ranking.job.search.objective),
        *bills_blocks(ranking.options, ranking.job),
        *softer_prose(ranking, units),
    ]
    if len(ranking.options) > 1:
        blocks.append(
            _picture(
                "tradeoff",
                tradeoff_figure(ranking, units),
                "Highest stress against blow energy and time for every hammer that drives; full "
                "dots are beaten by no other in all of them.",
            )
        )
    return Section("Hammers that drive the pile, best first", (*blocks, Prose((REACH,))))


def _rejected(dossier: Dossier, units: Units) -> Section | None:
    ranking = dossier.ranking
    if not ranking.rejected:
        return None
    from matchup.report.figures.margins import margins_figure

    picture = _picture(
        "margins",
        margins_figure(ranking.rejected, ranking, units),
        "Margins of set, compression and tension of the hammers that can't drive the pile.",
    )
    return Section(
        "Hammers that can't, nearest miss first",
        (picture, Prose(failures(ranking, units), "Why, and what would help:")),
    )


def _plan(dossier: Dossier, units: Units) -> Section:
    """Return what the option in detail does: margins, and every stage or the whole drive."""
    job, option = dossier.job, dossier.detail
    name = option.hammer.name
    if not option.drives:
        told = f"{name} {option.verdict}: {reason(option, job, units)}."
        heading = f"Why {name} can't"
    else:
        told = (
            answer(option, job, units).removeprefix("Yes: ")
            if option.cases
            else (f"{name}{on_stack(option.stack, units)}: {reason(option, job, units)}.")
        )
        heading = f"Driving with {name}"
    if option.misfits:
        return Section(heading, (Headline(told),))
    blocks: list[Block] = [Headline(told), margins_table(option, dossier.ranking, units)]
    blocks += _drive(dossier, units) if option.cases else [schedule_table((option,), units)]
    return Section(heading, tuple(blocks))


def _drive(dossier: Dossier, units: Units) -> list[Block]:
    from matchup.report.figures.drive import drive_figure

    option = dossier.detail
    told = chosen_case(option, None)
    blocks: list[Block] = [
        cases_table(option, units),
        _picture(
            "drive",
            drive_figure(option, told, dossier.job, units),
            f"Resistance, stroke, blow count and stresses by depth; case {told.case} in full, the "
            "band is over all ground cases.",
        ),
        Headline(f"Case {told.case}, station by station:"),
        stations_table((told,), units),
    ]
    if dossier.criterion is not None:
        blocks += criterion_page(dossier.criterion, dossier.job, units)
    return blocks


def _doubt(dossier: Dossier, units: Units) -> Section | None:
    blocks = doubt_blocks(dossier.ranking, units)
    if not blocks:
        return None
    odds = dossier.detail.odds
    if odds is not None and odds.influences is not None:
        from matchup.report.figures.doubt import doubt_figure

        blocks.append(
            _picture(
                "doubt",
                doubt_figure(odds),
                f"What {dossier.detail.hammer.name} hangs on: the drive with one input at a time "
                "at its P10 and P90, and each input's share of the doubt.",
            )
        )
    return Section("What becomes of the plans under doubt", tuple(blocks))


def _window(dossier: Dossier, units: Units) -> Section:
    from matchup.report.figures.window import window_figure

    option, found = dossier.detail, dossier.map
    chosen = (option.stack, option.target.stroke) if option.drives else None
    picture = _picture(
        "window",
        window_figure(found, units, chosen),
        f"Where {option.hammer.name} works {where(found.stage, dossier.job, units)}, by stroke and "
        "cushion, and what closes each edge.",
    )
    return Section(f"Strokes and cushions for {option.hammer.name}", (picture,))


def _blows(dossier: Dossier, units: Units) -> Section | None:
    if not dossier.blows:
        return None
    from matchup.report.figures.blow import blow_figure

    blocks: list[Block] = [Prose((AS_PLANNED,))]
    for number, blow in enumerate(dossier.blows, 1):
        why = "where the stress is highest"
        if number == 1:
            why = "at the target" if dossier.detail.drives else "where it fails"
        at = where(blow.stage, dossier.job, units)
        blocks += [
            Headline(f"{at[0].upper()}{at[1:]}, {why}:"),
            _picture(
                f"blow_{number}",
                blow_figure(blow, dossier.job.pile, units),
                f"One blow of {blow.hammer.name} {at}: force in the pile over time and position, "
                "the record at the head, and the largest stresses along the pile against their "
                "limits.",
            ),
            figures_table(blow, units),
        ]
    return Section(
        "One blow in detail" if len(dossier.blows) == 1 else "Two blows in detail", tuple(blocks)
    )


def _inputs(dossier: Dossier, units: Units) -> Section:
    job = dossier.job
    blocks: list[Block] = [inputs_table(job, units)]
    if len(job.stages) <= FEW_STAGES:
        blocks.append(stages_table(job, units))
    else:
        blocks.append(Prose((f"The {len(job.stages)} stages stand in the workbook.",)))
    cushions = cushions_table(job, units)
    blocks += [hammers_table(job, units), *([cushions] if cushions else [])]
    return Section("Inputs as understood", tuple(blocks))


def _methods(dossier: Dossier, units: Units) -> Section:
    lines = (*METHOD, *rests_on(dossier.job, units), searched(dossier.ranking, timed=False))
    blocks = (*ground(dossier.job, units), Prose(lines))
    return Section("Methods, sources and what was taken by default", blocks)


def _cautions(dossier: Dossier, units: Units) -> Section:
    return Section("Cautions", (Prose((*warned(dossier.job), CAUTION)),))


def _about(dossier: Dossier, units: Units) -> Section:
    """Return what it takes to get the same report again."""
    python = ".".join(map(str, sys.version_info[:3]))
    line = (
        f"Made by matchup {dossier.version} with Python {python}, seed "
        f"{dossier.job.search.seed}. The same files and seed give the same report, byte by byte."
    )
    return Section("How to get this report again", (Prose((line,)), files_table(dossier)))


def files_table(dossier: Dossier) -> Table:
    """Return the files that were read, and their digests."""
    columns = (Column("file", "file"), Column("sha256", "SHA-256"))
    return Table(columns, dossier.job.digests)


def _picture(name: str, figure: Figure, words: str) -> Picture:
    from matchup.report.figures.drawing import rendered

    return Picture(name, rendered(figure, "svg"), words)
