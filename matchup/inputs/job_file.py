"""The job file: TOML to a checked job, with every problem of every file told at once."""

from __future__ import annotations

import os
from pathlib import Path
from typing import TYPE_CHECKING

from matchup.inputs.cushions import CushionCatalogue, read_cushions
from matchup.inputs.findings import Findings
from matchup.inputs.hammers import read_hammers
from matchup.inputs.job_text import JobText, read_job_text
from matchup.inputs.table import file_fault
from matchup.model.job import Job

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


def _catalogue_file(text: JobText, key: str, named: str | None) -> Path | None:
    """Return the path of a catalogue, or note on its key why there is none to read."""
    if named is None or text.is_unread("catalog", key):
        return None
    path = text.folder / named
    fault = file_fault(path)
    if fault is None:
        return path
    typed = text.typed(("catalog", key))
    found = f"{typed}, {fault.found}" if fault.found else typed
    text.wrong(("catalog", key), fault.must, fault.do, found)
    return None


def _build(text: JobText, keys: JobKeys, findings: Findings) -> Job:
    """Return the job, once every part of it has been looked at."""
    from matchup.inputs import build_cushions, build_pile, build_stages

    pile = build_pile.build_pile(text, keys.pile)
    limits = build_pile.build_limits(text, keys, pile)
    stages = build_stages.build_stages(text, keys, pile)
    analysis, search = build_stages.build_settings(text, keys)

    cushions = _catalogue_file(text, "cushions", keys.catalog.cushions)
    known = read_cushions(cushions, findings) if cushions else CushionCatalogue(complete=False)
    file = _catalogue_file(text, "hammers", keys.catalog.hammers)
    hammers = read_hammers(file, known if cushions else None, findings) if file else ()
    build_cushions.check_catalogue(text, keys, hammers)
    space = build_cushions.build_cushion_space(text, keys, pile, known)
    others = build_cushions.build_hammer_cushions(text, keys, known)
    hammers = build_cushions.with_helmets(text, keys, hammers)
    findings.close()
    assert pile is not None
    assert limits is not None
    assert stages is not None
    assert search is not None
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
        display=keys.display,
        file=text.file,
        notices=tuple(findings.notices),
    )
