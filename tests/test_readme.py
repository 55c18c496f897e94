"""The README is true: its commands, its printed output, its Python."""

from __future__ import annotations

import re
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
TEXT = (ROOT / "README.md").read_text(encoding="utf-8")


def run(*arguments: str) -> str:
    done = subprocess.run(
        [sys.executable, "-m", "matchup", *arguments],
        cwd=ROOT,
        capture_output=True,
        text=True,
        check=True,
    )
    return done.stdout


def test_the_printed_output_is_what_the_command_prints_today():
    shown = re.search(r"<!-- output of command 1.*?-->\n```text\n(.*?)```", TEXT, re.S).group(1)
    printed = run("rank", "examples/hollowmere_landing/final_set.toml").splitlines()
    at = 0
    for line in shown.splitlines():
        if line.strip() == "...":
            continue
        assert line in printed[at:], f"not printed, or out of order: {line!r}"
        at = printed.index(line, at) + 1


def test_the_annotated_job_is_a_sound_job(tmp_path):
    job = re.search(r"```toml\n(.*?)```", TEXT, re.S).group(1)
    catalogs = (ROOT / "catalogs_demo").as_posix()
    path = tmp_path / "job.toml"
    path.write_text(job.replace("../../catalogs_demo", catalogs), encoding="utf-8")
    assert "sound job" in run("lint", str(path))


def test_the_annotated_catalogues_are_sound(tmp_path):
    paths = []
    for number, block in enumerate(re.findall(r"```csv\n(.*?)```", TEXT, re.S)):
        paths.append(tmp_path / f"{number}.csv")
        paths[-1].write_text(block, encoding="utf-8")
    assert len(paths) == 3
    assert run("lint", *map(str, paths)).count("sound") == 3


def test_the_python_example_runs():
    code = re.search(r"```python\n(.*?)```", TEXT, re.S).group(1)
    done = subprocess.run(
        [sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True
    )
    assert "True 0.0" in done.stdout


def test_every_command_of_the_program_stands_in_the_table():
    listed = set(re.findall(r"^\| `matchup (\w+)", TEXT, re.M))
    shown = set(re.findall(r"^[│ ]+(\w+)  ", run("--help"), re.M))
    assert shown
    assert shown == listed


@pytest.mark.parametrize("name", sorted(p.name for p in (ROOT / "examples").rglob("*.toml")))
def test_every_example_is_marked_as_invented_and_sound(name):
    (path,) = (ROOT / "examples").rglob(name)
    assert "invented" in path.read_text(encoding="utf-8").splitlines()[0]
    assert "sound job" in run("lint", str(path))
