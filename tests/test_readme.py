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


@pytest.mark.parametrize(
    ("mark", "arguments"),
    [
        ("command 1", ("rank", "final_set")),
        ("rank soft_over_dense", ("rank", "soft_over_dense")),
        (
            "drive soft_over_dense Thrush",
            ("drive", "soft_over_dense", "--hammer", "Thrush", "--criterion"),
        ),
    ],
)
def test_the_printed_output_is_what_the_command_prints_today(mark, arguments):
    shown = re.search(rf"<!-- output of {mark}.*?-->\n```text\n(.*?)```", TEXT, re.S).group(1)
    command, job, *options = arguments
    printed = run(command, f"examples/hollowmere_landing/{job}.toml", *options).splitlines()
    at = 0
    for line in shown.splitlines():
        if line.strip() == "...":
            continue
        assert line in printed[at:], f"not printed, or out of order: {line!r}"
        at = printed.index(line, at) + 1


def block(kind: str, mark: str = "") -> str:
    """The first block of a kind, behind a mark."""
    return re.search(rf"{mark}```{kind}\n(.*?)```", TEXT, re.S).group(1)


def annotated_job() -> str:
    catalogs = (ROOT / "catalogs_demo").as_posix()
    return block("toml").replace("../../catalogs_demo", catalogs)


def test_the_annotated_job_is_a_sound_job(tmp_path):
    path = tmp_path / "job.toml"
    path.write_text(annotated_job(), encoding="utf-8")
    assert "sound job" in run("lint", str(path))


@pytest.mark.parametrize("kind", ["layers", "table"])
def test_the_annotated_ground_makes_a_sound_job_of_it(tmp_path, kind):
    """The [[stages]] of the annotated job make way for the annotated [ground] and [target]."""
    job = annotated_job()
    stages, limits = job.index("[[stages]]"), job.index("[limits]")
    ground = block("toml", "The ground of a job:\n\n")
    (tmp_path / "layers.csv").write_text(block("csv", "<!-- layers -->\n"), encoding="utf-8")
    (tmp_path / "resistance.csv").write_text(
        block("csv", "<!-- resistance -->\n"), encoding="utf-8"
    )
    if kind == "table":
        ground = ground.replace("layers = ", "# ").replace("# table", "table")
        ground = ground.replace('"api 2011"', '"table"')
    path = tmp_path / "job.toml"
    path.write_text(job[:stages] + ground + job[limits:], encoding="utf-8")
    files = (str(path), str(tmp_path / "layers.csv"), str(tmp_path / "resistance.csv"))
    assert run("lint", *files).count("sound") == 3


def test_every_key_of_ground_and_target_is_annotated():
    from matchup.inputs.schema import GroundKeys, TargetKeys

    ground, _, target = block("toml", "The ground of a job:\n\n").partition("[target]")
    for text, keys in ((ground, GroundKeys), (target, TargetKeys)):
        assert set(keys.model_fields) == set(re.findall(r"^(?:# )?(\w+) = ", text, re.M))


def test_every_method_stands_in_the_table():
    from matchup.ground.methods import METHODS

    table = TEXT.split("| method | needs | resistance |")[1].split("\n\n")[0]
    assert re.findall(r"^\| `([^`]+)`", table, re.M) == list(METHODS)


def test_the_annotated_catalogues_are_sound(tmp_path):
    paths = []
    catalogues = TEXT.split("## Catalogues")[1].split("\n## ")[0]
    for number, text in enumerate(re.findall(r"```csv\n(.*?)```", catalogues, re.S)):
        paths.append(tmp_path / f"{number}.csv")
        paths[-1].write_text(text, encoding="utf-8")
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
