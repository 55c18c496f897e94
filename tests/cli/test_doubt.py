"""Samples from the command line: what is printed, what scripts read, and exit statuses."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

from tests import examples

ROOT = Path(__file__).parents[2]
DOUBT = str(examples.path("whole_drive_in_doubt"))


def run(*arguments: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "matchup", *arguments],
        cwd=ROOT,
        capture_output=True,
        text=True,
        timeout=300,
    )


def test_a_ranking_with_samples_is_the_same_with_any_number_of_workers(tmp_path):
    table = tmp_path / "options.csv"
    one = run("rank", DOUBT, "--samples", "16", "--json", "--workers", "1", "--csv", str(table))
    assert one.returncode == 0
    options = json.loads(one.stdout)["options"]
    known = [option["odds"] is not None for option in options]
    assert known == [place < 5 for place in range(len(options))]
    assert all(option["odds"]["samples"] == 16 for option in options[:5])
    assert "works_percent" in table.read_text(encoding="utf-8").splitlines()[0]
    two = run("rank", DOUBT, "--samples", "16", "--json", "--workers", "2", "--seed", "7")
    assert json.loads(two.stdout)["options"] == options


def test_a_check_says_what_the_hammer_hangs_on_and_draws_it(tmp_path):
    figure = tmp_path / "doubt.svg"
    done = run("check", DOUBT, "--hammer", "Curlew", "--samples", "16", "--plot", str(figure))
    assert done.returncode == 0
    assert "Under doubt: Curlew works in" in done.stdout
    assert "hangs on" in done.stdout
    assert figure.read_text(encoding="utf-8").startswith("<?xml")


def test_samples_of_a_job_without_doubt_are_a_problem():
    done = run("check", str(examples.path("final_set")), "--hammer", "Curlew", "--samples", "16")
    assert done.returncode == 1
    assert "samples: must be left out, or the job must say in [doubt]" in done.stderr
    assert run("check", DOUBT, "--samples", "-1").returncode == 2
