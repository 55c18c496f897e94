"""The command as a user's shell drives it: processes, streams and exit statuses."""

from __future__ import annotations

import json
import os
import pty
import re
import signal
import subprocess
import sys
import time
from collections.abc import Sequence
from functools import cache
from pathlib import Path

import pytest

from tests import examples

PROGRAM = (sys.executable, "-m", "matchup")
ROOT = Path(__file__).parents[2]
FINAL = str(examples.path("final_set"))
TUBE = str(examples.path("dolphin_tube"))
STAGES = str(examples.path("three_stages"))
DRIVE = "examples/hollowmere_landing/whole_drive.toml"
CURLEW = ("--hammer", "Curlew")
GOSHAWK = ("--hammer", "Goshawk")
COMMANDS = ("rank", "check", "window", "blow", "new", "lint", "schema", "completion")

Done = subprocess.CompletedProcess[str]


def run(*arguments: str, **environment: str) -> Done:
    return subprocess.run(
        [*PROGRAM, *arguments],
        cwd=ROOT,
        env=os.environ | environment,
        capture_output=True,
        text=True,
        timeout=60,
    )


@cache
def once(*arguments: str) -> Done:
    """A run that several tests look at."""
    return run(*arguments)


def on_terminal(arguments: Sequence[str], **environment: str) -> str:
    """Run on a pseudo-terminal; return what it showed."""
    leader, follower = pty.openpty()
    env = {k: v for k, v in os.environ.items() if k != "NO_COLOR"} | {"TERM": "xterm"} | environment
    process = subprocess.Popen(
        [*PROGRAM, *arguments], cwd=ROOT, env=env, stdout=follower, stderr=follower
    )
    os.close(follower)
    shown = b""
    try:
        while part := os.read(leader, 65536):
            shown += part
    except OSError:
        pass  # the other end is closed
    os.close(leader)
    process.wait(timeout=60)
    return shown.decode().replace("\r\n", "\n")


# --- answers and exit statuses -------------------------------------------------------------------


def test_rank_says_yes_in_100_columns_whatever_the_terminal():
    done = run("rank", FINAL, COLUMNS="60")
    assert done.returncode == 0
    assert done.stderr == ""
    assert done.stdout.startswith("Hollowmere landing, row B, final set: 12 of 19 hammers")
    assert 80 < max(map(len, done.stdout.splitlines())) <= 100


def test_rank_says_no(tmp_path):
    text = examples.path("dolphin_tube").read_text(encoding="utf-8")
    text = text.replace("../../", f"{ROOT.as_posix()}/").replace('"60 blows/ft"', '"9 in"')
    (tmp_path / "job.toml").write_text(text, encoding="utf-8")
    done = run("rank", str(tmp_path / "job.toml"))
    assert done.returncode == 3
    assert "none of the 14 hammers can drive this pile within the limits" in done.stdout


@pytest.mark.parametrize(("hammer", "status"), [("Goshawk", 0), ("Pipit", 3)])
def test_check_says_yes_or_no(hammer, status):
    done = once("check", TUBE, "--hammer", hammer)
    assert done.returncode == status
    assert done.stdout.startswith("Yes: Goshawk drives" if status == 0 else "No: Pipit does not")


def test_window_says_where_and_no_where_there_is_none():
    assert once("window", TUBE, *GOSHAWK).returncode == 0
    closed = run("window", TUBE, "--hammer", "Pipit")
    assert closed.returncode == 3
    assert "no stroke works" in closed.stdout


def test_blow_takes_every_selection_whatever_it_does_to_the_pile():
    done = run(
        "blow", STAGES, *CURLEW, "--stroke", "1.5 m", "--cushion", "oak", "--thickness", "10 cm",
        "--wear", "worn", "--stage", "silty sand", "--display", "us", "--traces",
    )  # fmt: skip
    assert done.returncode == 0
    head = "Curlew at stage 'silty sand': stroke 4.92 ft on 3.94 in of oak (worn) gives"
    assert done.stdout.startswith(head)
    assert re.search(r"peak tension +\S+ ksi +2\d\d% of the limit", done.stdout)
    assert "head velocity" in done.stdout


def test_problems_come_together_with_status_1():
    done = run("blow", FINAL, "--hammer", "Curlow", "--cushion", "cork", "--stroke", "0.6")
    assert done.returncode == 1
    assert done.stdout == ""
    assert len(re.findall(r"^(stroke|hammer|cushion): must", done.stderr, re.M)) == 3
    assert "3 problems found." in done.stderr


def test_an_analysis_at_fault_has_status_1_and_no_stray_colon():
    done = run(
        "blow", STAGES, "--hammer", "Albatross", "--stage", "soft clay", "--stroke", "0.5 m",
        "--cushion", "oak", "--sheets", "4",
    )  # fmt: skip
    assert done.returncode == 1
    assert done.stderr.startswith("Albatross at stage 'soft clay'")


@pytest.mark.parametrize(
    "arguments",
    [
        ("rank",),
        ("rank", FINAL, "--nonsense"),
        ("rank", FINAL, "--workers", "0"),
        ("rank", FINAL, "--workers=-3"),
        ("rank", FINAL, "--workers", "many"),
        ("rank", FINAL, "--seed=-1"),
        ("rank", FINAL, "--display", "imperial"),
        ("check", FINAL, *CURLEW, "--csv", "."),
        ("check", FINAL, *CURLEW, "--csv", ""),
        ("check", FINAL, *CURLEW, "--csv", "no/such/folder/x.csv"),
        ("nonsense",),
    ],
)
def test_wrong_usage_has_status_2_and_one_box(arguments):
    done = run(*arguments)
    assert done.returncode == 2
    assert done.stdout == ""
    assert "Error" in done.stderr
    assert "Traceback" not in done.stderr


def test_a_missing_job_is_a_problem_not_a_usage():
    done = once("rank", "nowhere.toml")
    assert done.returncode == 1
    assert "nowhere.toml" in done.stderr


# --- JSON ----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "arguments",
    [
        ("rank", TUBE),
        ("check", TUBE, "--hammer", "Pipit"),
        ("window", TUBE, *GOSHAWK),
        ("blow", TUBE, *GOSHAWK, "--best"),
        ("rank", "nowhere.toml"),
        ("rank", TUBE, "--workers", "0"),
        ("rank", TUBE, "--nonsense"),
        ("lint", TUBE),
        ("schema",),
    ],
)
def test_json_is_one_document_and_nothing_else(arguments):
    done = run(*arguments, *(["--json"] if arguments != ("schema",) else []))
    document = json.loads(done.stdout)
    assert done.stderr == ""
    assert done.stdout.isascii()
    if done.returncode in (1, 2):
        keys = {"file", "line", "place", "must", "found", "do"}
        assert all(set(problem) == keys for problem in document["problems"])


# --- files ---------------------------------------------------------------------------------------


def test_csv_is_written_whole_and_said_on_stderr(tmp_path):
    file = tmp_path / "hammers.csv"
    done = run("check", TUBE, *GOSHAWK, "--csv", str(file), "--json")
    assert json.loads(done.stdout)["can"] is True
    assert done.stderr == f"wrote {file}\n"
    assert file.read_text(encoding="utf-8").startswith("hammer,stage,penetration_ft,")
    assert [path.name for path in tmp_path.iterdir()] == ["hammers.csv"]


def test_csv_of_a_traced_blow_is_written_beside_json(tmp_path):
    file = tmp_path / "trace.csv"
    done = run(
        "blow", TUBE, *GOSHAWK, "--stroke", "2 ft", "--traces", "--json", "--csv", str(file),
        "--quiet",
    )  # fmt: skip
    rows = len(json.loads(done.stdout)["trace"]["time_ms"])
    assert len(file.read_text(encoding="utf-8").splitlines()) == 1 + rows
    assert done.stderr == ""


def test_a_csv_that_cannot_be_written_leaves_nothing(tmp_path):
    target = tmp_path / "there.csv"
    target.write_text("mine")
    # A folder where the half-written file would lie: it can't be made.
    (tmp_path / "there.csv.part").mkdir()
    done = run("check", TUBE, *GOSHAWK, "--csv", str(target))
    assert done.returncode == 1
    assert "--csv: must be a file that can be written" in done.stderr
    assert "Traceback" not in done.stderr
    assert target.read_text() == "mine"
    assert sorted(p.name for p in tmp_path.iterdir()) == ["there.csv", "there.csv.part"]


@pytest.mark.skipif(os.geteuid() == 0, reason="nothing is read-only for the superuser")
def test_a_read_only_folder_is_a_clear_problem(tmp_path):
    tmp_path.chmod(0o500)
    done = run("check", TUBE, *GOSHAWK, "--csv", str(tmp_path / "x.csv"))
    tmp_path.chmod(0o700)
    assert done.returncode == 2
    assert "permission denied" in done.stderr


def test_csv_to_a_device_leaves_the_device():
    done = run("check", TUBE, *GOSHAWK, "--csv", os.devnull, "--quiet")
    assert done.returncode == 0
    assert done.stderr == ""
    assert not Path(os.devnull).is_file()


# --- streams -------------------------------------------------------------------------------------


def test_a_closed_pipe_is_silent():
    done = subprocess.run(
        f"set -o pipefail; '{sys.executable}' -m matchup check '{TUBE}' --hammer Goshawk | head -1",
        shell=True,
        executable="/bin/bash",
        cwd=ROOT,
        capture_output=True,
        text=True,
    )
    assert done.returncode == 0
    assert done.stderr == ""
    assert len(done.stdout.splitlines()) == 1


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="a device of Linux")
def test_a_full_disk_is_told_without_a_traceback():
    with open("/dev/full", "w") as full:
        done = subprocess.run(
            [*PROGRAM, "check", TUBE, *GOSHAWK],
            cwd=ROOT,
            stdout=full,
            stderr=subprocess.PIPE,
            text=True,
        )
    assert done.returncode == 1
    assert done.stderr == "the output can't be written: No space left on device.\n"


def test_a_name_that_a_console_cannot_write_does_not_end_the_run():
    done = run("check", FINAL, "--hammer", "Größe", PYTHONIOENCODING="ascii")
    assert done.returncode == 1
    assert "Gr\\xf6\\xdfe" in done.stderr


def test_ctrl_c_ends_with_130_and_leaves_nothing(tmp_path):
    process = subprocess.Popen(
        [*PROGRAM, "rank", DRIVE, "--csv", str(tmp_path / "x.csv")],
        cwd=ROOT,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
    )
    # Any moment of the run will do; this one lies after the start and before the answer.
    time.sleep(1.0)
    process.send_signal(signal.SIGINT)
    out, error = process.communicate(timeout=60)
    assert process.returncode == 130
    assert out == ""
    assert error == "stopped\n"
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize("columns", [80, 100])
def test_a_terminal_gets_lines_that_fit(columns):
    shown = on_terminal(["check", TUBE, *GOSHAWK, "--quiet"], COLUMNS=str(columns))
    lines = shown.splitlines()
    assert lines[0].startswith("Yes: Goshawk drives")
    assert columns - 30 < max(map(len, lines)) <= columns
    assert "\x1b" not in shown


def test_no_colour_where_none_is_wanted():
    assert "\x1b[" in on_terminal(["rank", "--nonsense"])
    assert "\x1b[3" not in on_terminal(["rank", "--nonsense"], NO_COLOR="1")


# --- help ----------------------------------------------------------------------------------------

LOOK = """
import sys
from matchup.cli.main import main
main(["{command}", "--help"])
heavy = {{"numba", "numpy", "pandas", "scipy", "optuna", "openpyxl", "pydantic"}} & set(sys.modules)
sys.exit(f"imported: {{heavy}}" if heavy else 0)
"""


@pytest.mark.parametrize("command", COMMANDS)
def test_help_names_the_command_and_imports_nothing_heavy(command):
    done = subprocess.run(
        [sys.executable, "-c", LOOK.format(command=command)],
        cwd=ROOT,
        capture_output=True,
        text=True,
    )
    assert done.returncode == 0, done.stderr
    assert f"Usage: matchup {command}" in done.stdout


def test_version_is_the_packages():
    import matchup

    assert once("--version").stdout.strip() == f"matchup {matchup.__version__}"
