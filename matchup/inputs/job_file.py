"""The job file: TOML to a checked job, with every problem of every file told at once."""

from __future__ import annotations

import os
from pathlib import Path
from typing import TYPE_CHECKING

from matchup.errors import ModelError
from matchup.inputs.cushions import CushionCatalogue, read_cushions
from matchup.inputs.findings import Findings
from matchup.inputs.hammers import read_hammers
from matchup.inputs.job_text import JobText, named_file, read_job_text
from matchup.model.job import Drive, Job
from matchup.model.pile import Pile
from matchup.model.stage import Stage

if TYPE_CHECKING:
    from matchup.inputs.schema import JobKeys


def load_job(path: str | os.PathLike[str]) -> Job:
    """Read a job file and its catalogues.

    Parameters
    ----------
    path : path
        Of the job file; the paths in it are relative to it.

    Raises
    ------
    InputError
        With every problem of the job file and of its catalogues, in file order.
    """
    findings = Findings()
    text = read_job_text(Path(path), findings)
    findings.close()
    assert text is not None
    from matchup.inputs.job_keys import read_keys

    return _build(text, read_keys(text), findings)


def _stages(
    text: JobText, keys: JobKeys, pile: Pile | None, findings: Findings
) -> tuple[tuple[Stage, ...] | None, Drive | None]:
    """Return the stages: as given by hand, or from the ground."""
    if keys.ground is None:
        from matchup.inputs.build_stages import build_stages

        return build_stages(text, keys, pile), None
    if keys.stages is not None:
        must = "must be left out: the stages follow from the [ground]"
        text.wrong(("stages",), must, "Keep either the [[stages]] or the [ground].")
    from matchup.inputs.build_ground import build_drive

    return build_drive(text, keys, pile, findings)


def _build(text: JobText, keys: JobKeys, findings: Findings) -> Job:
    """Return the job, once every part of it has been looked at."""
    from matchup.inputs import (
        build_cost,
        build_cushions,
        build_doubt,
        build_fatigue,
        build_limits,
        build_pile,
        build_site,
        build_stages,
    )

    pile = build_pile.build_pile(text, keys.pile)
    limits = build_limits.build_limits(text, keys, pile)
    stages, drive = _stages(text, keys, pile, findings)
    analysis, search = build_stages.build_settings(text, keys)
    doubt = build_doubt.build_doubt(text, keys, stages)

    cushions = named_file(text, ("catalog", "cushions"), keys.catalog.cushions)
    known = read_cushions(cushions, findings) if cushions else CushionCatalogue(complete=False)
    file = named_file(text, ("catalog", "hammers"), keys.catalog.hammers)
    hammers = read_hammers(file, known if cushions else None, findings) if file else ()
    build_cushions.check_catalogue(text, keys, hammers)
    space = build_cushions.build_cushion_space(text, keys, pile, known)
    others = build_cushions.build_hammer_cushions(text, keys, known)
    hammers = build_cushions.with_helmets(text, keys, hammers)
    cost = build_cost.build_cost(text, keys, hammers, space)
    fatigue = build_fatigue.build_fatigue(text, keys, pile)
    site = build_site.build_site(text, keys, hammers)
    unknown = [hammer.name for hammer in hammers if hammer.blow_rate(hammer.stroke_max) is None]
    if keys.search.objective == "time" and 0 < len(unknown) < len(hammers):
        what = f"puts {', '.join(unknown)} last: their rows give no blow rate"
        text.notice(("search", "objective"), what)
    findings.close()
    assert pile is not None
    assert limits is not None
    assert stages is not None
    assert search is not None
    try:
        return Job(
            title=keys.title,
            hammers=hammers,
            pile=pile,
            cushions=space,
            stages=stages,
            limits=limits,
            hammer_cushions=others,
            search=search,
            analysis=analysis,
            drive=drive,
            doubt=doubt,
            cost=cost,
            site=site,
            fatigue=fatigue,
            display=keys.display,
            file=text.file,
            notices=tuple(findings.notices),
            digests=tuple(findings.digests.items()),
        )
    except ModelError as error:
        text.wrong_model(error, ())
        findings.close()
        raise
