"""How long the samples of one option take.

Run with ``python -m tests.bench.doubt``. Reports figures; asserts nothing.
"""

from __future__ import annotations

import time
from dataclasses import replace

from matchup import load_job
from matchup.search.doubt import find_odds
from matchup.search.ranking import rank_hammers
from tests import examples

HAMMER = "Curlew"


def main() -> None:
    """Print the figures."""
    job = load_job(examples.path("whole_drive_in_doubt"))
    job = replace(job, hammers=tuple(h for h in job.hammers if h.name == HAMMER))
    (option,) = rank_hammers(job).options
    assert job.doubt is not None
    for strokes in ("adapt", "keep"):
        asked = replace(job, doubt=replace(job.doubt, strokes=strokes))
        find_odds(asked, option, 8)
        wall, processor = time.perf_counter(), time.process_time()
        odds = find_odds(asked, option, 1000)
        wall, processor = time.perf_counter() - wall, time.process_time() - processor
        stations = sum(stage.case == "best" for stage in job.stages)
        print(
            f"{odds.samples} samples, {stations} stations, strokes {strokes}: {wall:.1f} s, "
            f"{processor:.1f} s of processor time, {odds.analyses} blows"
        )


if __name__ == "__main__":
    main()
