"""How long the ranking of whole drives takes, and how few blows it spends.

Run with ``python -m tests.bench.drive``. Reports figures; asserts nothing.

Fifty hammers, forty stations, three ground cases and thirty cushions (two materials of fifteen
counts) on a pile of 25 m. To compare with, the blows that exact root-finding of every window
would take: the lowest stroke and the highest of every station, hammer and cushion, in the wear
state or states that count. That number is estimated from the windows of a random sample of such
cells, each found on a rig of its own so that nothing is reused, times the number of cells.
"""

from __future__ import annotations

import tempfile
import time
from dataclasses import replace
from pathlib import Path

import numpy as np

from matchup import load_job
from matchup.analysis.cells import OPEN, Cells, job_demands
from matchup.analysis.rig import Rig
from matchup.analysis.window import WindowFinder
from matchup.model.job import Job
from matchup.search.ranking import rank_hammers

FOLDER = Path(__file__).parents[2] / "examples" / "hollowmere_landing"
HAMMERS = 50
SAMPLE = 60


def large_drive() -> Job:
    """Return the example's drive on a pile of 25 m, with fifty hammers from 2 to 20 t."""
    text = (FOLDER / "whole_drive.toml").read_text(encoding="utf-8")
    for old, new in (
        ("../../", f"{FOLDER.parents[1].as_posix()}/"),
        ("layers_b2.csv", (FOLDER / "layers_b2.csv").as_posix()),
        ('length = "24 m"', 'length = "25 m"'),
        ('start = "2 m"', 'start = "2.5 m"'),
        ('penetration = "21 m"', 'penetration = "22 m"'),
    ):
        assert old in text
        text = text.replace(old, new)
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "drive.toml"
        path.write_text(text, encoding="utf-8")
        job = load_job(path)
    curlew = next(hammer for hammer in job.hammers if hammer.name == "Curlew")
    hammers = tuple(
        replace(curlew, name=f"{mass:.0f} kg", ram_mass=float(mass), hammer_mass=None)
        for mass in np.geomspace(2e3, 20e3, HAMMERS)
    )
    return replace(job, hammers=hammers)


def every_window(job: Job, seed: int = 5) -> tuple[float, float]:
    """Return the blows that exact windows of all cells would take, and their standard error."""
    random = np.random.default_rng(seed)
    whole = Rig(job)
    cells = len(job.stages) * len(job.hammers) * len(whole.stacks)
    spent = []
    for _ in range(SAMPLE):
        stage, hammer = (int(random.integers(len(part))) for part in (job.stages, job.hammers))
        stack = int(random.integers(len(whole.stacks)))
        rig = Rig(replace(job, stages=(job.stages[stage],), hammers=(job.hammers[hammer],)))
        finder = WindowFinder(rig, job_demands(rig))
        zero = np.zeros(1, np.int64)
        cell = Cells(zero, zero, np.array([stack]))
        found = finder.find(cell)
        if found.state[0] == OPEN:
            finder.tops(cell, found.at)
        spent.append(rig.spent)
    return cells * float(np.mean(spent)), cells * float(np.std(spent)) / SAMPLE**0.5


def main() -> None:
    """Print the figures."""
    rank_hammers(load_job(FOLDER / "final_set.toml"))  # compiles
    job = large_drive()
    stations = len(job.stages) // 3
    started = time.perf_counter()
    ranking = rank_hammers(job)
    seconds = time.perf_counter() - started
    print(
        f"{len(job.hammers)} hammers x {stations} stations x 3 cases x "
        f"{len(Rig(job).stacks)} cushions: {seconds:.1f} s, {ranking.analyses} blows "
        f"({1e6 * seconds / ranking.analyses:.0f} us each), {len(ranking.options)} hammers drive"
    )
    blows, error = every_window(job)
    print(
        f"exact root-finding of every window, from {SAMPLE} of them: {blows / 1e6:.2f} million "
        f"blows, standard error {error / 1e6:.2f}; {blows / ranking.analyses:.0f} times as many"
    )


if __name__ == "__main__":
    main()
