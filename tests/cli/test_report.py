"""The report and figures as commands: exit statuses, files, and what is refused at once."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

from matchup.report.tender.bundle import NAMES
from tests import examples

ROOT = Path(__file__).parents[2]
PROGRAM = (sys.executable, "-m", "matchup")
FINAL = examples.path("final_set")
CURLEW = ("--hammer", "Curlew")


def run(*arguments: object) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [*PROGRAM, *map(str, arguments)], cwd=ROOT, capture_output=True, text=True, timeout=120
    )


def short_job(folder: Path, needed: str) -> Path:
    """A job of one hammer and three cushions."""
    text = FINAL.read_text(encoding="utf-8")
    text = text.replace("../../", f"{ROOT.as_posix()}/")
    text = text.replace("sheets = { from = 4, to = 18 }", "sheets = [4, 8, 12]")
    text = text.replace('set = "4 mm"', f'set = "{needed}"')
    rows = (ROOT / "catalogs_demo" / "hammers.csv").read_text(encoding="utf-8").splitlines()
    hammers = folder / "hammers.csv"
    hammers.write_text("\n".join([rows[0], *(r for r in rows if r.startswith("Curlew"))]))
    text = text.replace(f"{ROOT.as_posix()}/catalogs_demo/hammers.csv", "hammers.csv")
    job = folder / "job.toml"
    job.write_text(text, encoding="utf-8")
    return job


@pytest.mark.parametrize(("needed", "status"), [("4 mm", 0), ("60 mm", 3)])
def test_report_says_yes_or_no_and_writes_either_way(tmp_path, needed, status):
    done = run("report", short_job(tmp_path, needed), "-o", tmp_path / "out")
    assert done.returncode == status
    assert done.stderr == ""
    assert done.stdout == f"wrote {', '.join(NAMES)} to {tmp_path / 'out'}\n"
    assert sorted(path.name for path in (tmp_path / "out").iterdir()) == sorted(NAMES)
    again = run("report", short_job(tmp_path, needed), "-o", tmp_path / "out")
    assert again.returncode == 1
    assert "must not hold a report yet" in again.stderr


def test_report_of_a_faulty_job_writes_nothing(tmp_path):
    job = short_job(tmp_path, "4 mm")
    job.write_text(job.read_text().replace('length = "24 m"', 'length = "24"'))
    done = run("report", job, "-o", tmp_path / "out")
    assert done.returncode == 1
    assert "pile.length" in done.stderr
    assert not (tmp_path / "out").exists()


def test_report_in_place_of_a_file_is_a_problem(tmp_path):
    (tmp_path / "taken").write_text("mine")
    done = run("report", FINAL, "-o", tmp_path / "taken")
    assert done.returncode == 1
    assert "must be a folder, or not exist yet, but got a file" in done.stderr
    assert (tmp_path / "taken").read_text() == "mine"


def test_a_detail_that_is_no_hammer_is_a_problem(tmp_path):
    done = run("report", FINAL, "-o", tmp_path / "out", "--detail", "Curlow")
    assert done.returncode == 1
    assert "Did you mean 'Curlew'?" in done.stderr
    assert not (tmp_path / "out").exists()


@pytest.mark.skipif(os.geteuid() == 0, reason="root may write anywhere")
def test_a_folder_that_can_t_be_written_to_is_a_problem(tmp_path):
    tmp_path.chmod(0o500)
    done = run("report", short_job(tmp_path, "4 mm"), "-o", tmp_path / "out")
    assert done.returncode == 1
    assert "must be a folder that can be written to" in done.stderr


@pytest.mark.parametrize(
    ("command", "more", "name"),
    [
        ("window", CURLEW, "figure.svg"),
        ("blow", (*CURLEW, "--best"), "figure.png"),
        ("rank", (), "figure.pdf"),
    ],
)
def test_plot_draws_beside_the_answer(tmp_path, command, more, name):
    job = short_job(tmp_path, "4 mm")
    done = run(command, job, *more, "--plot", tmp_path / name)
    assert done.returncode == 0
    assert done.stderr == f"wrote {tmp_path / name}\n"
    assert done.stdout == run(command, job, *more).stdout or command == "rank"
    assert (tmp_path / name).read_bytes()[:4] in (b"<?xm", b"\x89PNG", b"%PDF")


@pytest.mark.parametrize("command", ["rank", "window", "blow", "drive"])
def test_another_ending_is_refused_before_anything_is_computed(tmp_path, command):
    done = run(command, FINAL, "--plot", tmp_path / "figure.jpg")
    assert done.returncode == 2
    assert "Must end in .svg, .png or .pdf, but got" in " ".join(
        done.stderr.replace("│", "").split()
    )
    assert not (tmp_path / "figure.jpg").exists()


def test_figures_cost_nothing_where_none_is_drawn():
    code = (
        "import sys; from matchup.cli.main import main; main(['window', sys.argv[1], '--hammer', "
        "'Curlew']); print('matplotlib' in sys.modules, file=sys.stderr)"
    )
    done = subprocess.run(
        [sys.executable, "-c", code, str(FINAL)], capture_output=True, text=True, cwd=ROOT
    )
    assert done.stderr == "False\n"
