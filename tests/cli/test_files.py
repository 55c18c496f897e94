"""The commands around the job: new, lint, schema, completion. Driven as processes."""

from __future__ import annotations

import json
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

EXAMPLES = Path(__file__).parents[2] / "examples" / "hollowmere_landing"
CATALOGS = Path(__file__).parents[2] / "catalogs_demo"


def run(*arguments: object) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "matchup", *map(str, arguments)], capture_output=True, text=True
    )


def test_new_writes_a_job_that_ranks(tmp_path):
    folder = tmp_path / "job one"
    made = run("new", folder)
    assert made.returncode == 0
    assert f"next: matchup rank {folder / 'job.toml'}" in made.stdout
    assert run("lint", folder / "job.toml").returncode == 0
    ranked = run("rank", folder / "job.toml", "--json")
    assert ranked.returncode == 0
    assert json.loads(ranked.stdout)["options"]


def test_new_says_what_every_key_is(tmp_path):
    run("new", tmp_path / "job")
    jobs = (tmp_path / "job" / name for name in ("job.toml", "drive.toml"))
    text = "".join(path.read_text(encoding="utf-8") for path in jobs)
    from matchup.inputs.schema import GroundKeys, JobKeys, PileKeys, StageKeys, TargetKeys

    for model in (JobKeys, PileKeys, StageKeys, GroundKeys, TargetKeys):
        missing = [name for name in model.model_fields if name not in text]
        assert not missing


def test_new_overwrites_nothing(tmp_path):
    (tmp_path / "hammers.csv").write_text("mine")
    again = run("new", tmp_path)
    assert again.returncode == 1
    assert "nothing is overwritten, but got hammers.csv" in again.stderr
    assert (tmp_path / "hammers.csv").read_text() == "mine"
    assert sorted(p.name for p in tmp_path.iterdir()) == ["hammers.csv"]


def test_new_in_place_of_a_file_is_a_clear_problem(tmp_path):
    (tmp_path / "taken").write_text("")
    refused = run("new", tmp_path / "taken")
    assert refused.returncode == 1
    assert "must be a folder that can be made" in refused.stderr


def test_lint_takes_several_files_and_tells_all_problems(tmp_path):
    job = (EXAMPLES / "final_set.toml").read_text(encoding="utf-8")
    bad = tmp_path / "bad.toml"
    bad.write_text(job.replace("../../catalogs_demo", CATALOGS.as_posix()).replace("24 m", "24"))
    csv = tmp_path / "bad.csv"
    csv.write_text(
        "name,kind,ram_mass [t],stroke_min [m],stroke_max [m],efficiency\nA,drop,1,2,1,3\n"
    )
    checked = run("lint", bad, csv, CATALOGS / "cushions.csv")
    assert checked.returncode == 1
    assert "line 13, pile.length" in checked.stderr
    assert "must be >= `stroke_min`" in checked.stderr
    assert "must be above 0 and at most 1, but got 3" in checked.stderr
    document = json.loads(run("lint", bad, csv, "--json").stdout)
    assert len(document["problems"]) == 3
    assert set(document["problems"][0]) == {"file", "line", "place", "must", "found", "do"}


def test_lint_passes_what_the_project_ships():
    checked = run("lint", *EXAMPLES.glob("*.toml"), *CATALOGS.glob("*.csv"))
    assert checked.returncode == 0
    files = [*EXAMPLES.glob("*.toml"), *CATALOGS.glob("*.csv")]
    assert len(checked.stdout.splitlines()) == len(files)


def test_schema_accepts_the_keys_of_the_examples():
    schema = json.loads(run("schema").stdout)
    assert schema["title"] == "matchup job file"
    for path in EXAMPLES.glob("*.toml"):
        data = tomllib.loads(path.read_text(encoding="utf-8"))
        assert set(data) <= set(schema["properties"])


@pytest.mark.parametrize("shell", ["bash", "zsh", "fish"])
def test_completion_is_a_script_that_names_the_commands(shell):
    script = run("completion", shell)
    assert script.returncode == 0
    assert "rank" in script.stdout
    assert "window" in script.stdout
