"""How long the commands take as a user meets them.

Run with ``python -m tests.bench.ranking``. Reports figures; asserts nothing.
"""

from __future__ import annotations

import os
import subprocess
import sys
import tempfile
import time
from pathlib import Path

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


def main() -> None:
    """Print the figures."""
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
