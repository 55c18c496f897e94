"""``matchup report``."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated, Literal

from cyclopts import Parameter
from cyclopts.validators import Number

from matchup.cli.show import THE_ANSWER_IS_NO, Common, Progress, Samples, tell


def report(
    job: Annotated[Path, Parameter(help="Job file.")],
    *,
    output: Annotated[Path, Parameter(name=("--output", "-o"), help="New or empty folder.")],
    detail: Annotated[
        str | None, Parameter(help="Hammer told in full; default: the best one.")
    ] = None,
    force: Annotated[bool, Parameter(negative="", help="Replace a report that is there.")] = False,
    seed: Annotated[
        int | None, Parameter(help="Replaces the job's seed.", validator=Number(gte=0))
    ] = None,
    samples: Samples = None,
    display: Annotated[
        Literal["metric", "us"] | None, Parameter(help="Units of the output; default: the job's.")
    ] = None,
    workers: Annotated[
        int | None, Parameter(help="Threads; default: all processors.", validator=Number(gte=1))
    ] = None,
    quiet: Annotated[bool, Parameter(negative="", help="No messages on stderr.")] = False,
) -> int:
    """Write the tender report: web page, PDF, workbook, CSV and JSON."""
    from matchup import api
    from matchup.report.files import refuse_taken
    from matchup.report.tender.bundle import NAMES, PAPER

    common = Common(display=display, workers=workers, quiet=quiet)
    if not force:
        refuse_taken(output, NAMES, "--output")
    with Progress(common) as progress:
        result = api.tender_report(job, detail, workers, seed, progress, samples)
        names = result.write(output, display, force)
    print(f"wrote {', '.join(names)} to {output}")
    if PAPER not in names:
        tell(common, f"{PAPER} was left out: it needs the extra, pip install 'matchup[pdf]'")
    return 0 if result.can else THE_ANSWER_IS_NO
