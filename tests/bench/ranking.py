"""How long the commands take as a user meets them.

Run with ``python -m tests.bench.ranking``. Reports figures; asserts nothing.
"""

from __future__ import annotations

import os
import subprocess
import sys
import tempfile
import time
from dataclasses import replace
from pathlib import Path

import numpy as np

from matchup import load_job
from matchup.model.job import Job
from matchup.search.ranking import rank_hammers

JOB = Path(__file__).parents[2] / "examples" / "hollowmere_landing" / "final_set.toml"


def timed(arguments: list[str], cache: str) -> float:
    """Return the seconds that a command takes as a whole process."""
    started = time.perf_counter()
    subprocess.run(
        [sys.executable, "-m", "matchup", *arguments],
        check=True,
        stdout=subprocess.DEVNULL,
        stderr=subprocess.DEVNULL,
        env={**os.environ, "XDG_CACHE_HOME": cache},
    )
    return time.perf_counter() - started


def large_job() -> Job:
    """Return the three-stage example with fifty hammers from 2 to 16 t."""
    job = load_job(JOB.with_name("three_stages.toml"))
    curlew = next(hammer for hammer in job.hammers if hammer.name == "Curlew")
    hammers = tuple(
        replace(curlew, name=f"{mass:.0f} kg", ram_mass=float(mass), hammer_mass=None)
        for mass in np.geomspace(2e3, 16e3, 50)
    )
    return replace(job, hammers=hammers)


def main() -> None:
    """Print the figures."""
    job = large_job()
    rank_hammers(load_job(JOB))
    ranking = rank_hammers(job)
    members = len(job.cushions.cushions()) if job.cushions else 1
    print(
        f"50 hammers x 3 stages x {members} cushions x 2 wear states: {ranking.runtime:.2f} s, "
        f"{ranking.analyses} blows, {len(ranking.options)} hammers drive"
    )
    with tempfile.TemporaryDirectory() as cache:
        first = timed(["rank", str(JOB)], cache)
        warm = sorted(timed(["rank", str(JOB)], cache) for _ in range(5))[2]
        bare = sorted(timed(["--help"], cache) for _ in range(5))[2]
    started = time.perf_counter()
    subprocess.run([sys.executable, "-c", "pass"], check=True)
    python = time.perf_counter() - started
    print(f"matchup rank, first run with compilation: {first:.2f} s")
    print(f"matchup rank, warm, median of 5:          {warm:.2f} s")
    print(
        f"matchup --help, median of 5:              {bare:.2f} s "
        f"({bare / python:.0f} x bare Python)"
    )


if __name__ == "__main__":
    main()
