"""Random sound files are read in full; random damage gives problems, or is read in full as well.

"In full" is what `tests.inputs.echo` says: each key and each cell that was typed is found in the
model or in a notice. No damage may raise anything but `InputError`, and none may take long.
"""

from __future__ import annotations

import signal
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from datetime import timedelta
from itertools import islice
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings

from matchup.errors import InputError
from matchup.inputs import load_job
from matchup.inputs.cushions import COLUMNS as CUSHION_COLUMNS
from matchup.inputs.cushions import read_cushions
from matchup.inputs.findings import Findings
from matchup.inputs.hammers import COLUMNS as HAMMER_COLUMNS
from matchup.inputs.lint import check_files
from matchup.inputs.schema import JobKeys, StageKeys, TargetKeys
from matchup.inputs.toml_lines import key_spots
from tests.inputs import echo
from tests.inputs.full_files import each_value_replaced
from tests.inputs.random_files import Files, broken, sound

NORMAL = settings(
    max_examples=100,
    deadline=timedelta(seconds=2),
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large],
)
LONG = settings(NORMAL, max_examples=5000)

# --- what must hold ------------------------------------------------------------------------------

FOLDER = Path(tempfile.mkdtemp(prefix="fuzz"))
JOB = FOLDER / "job.toml"


@contextmanager
def no_longer_than(seconds: int) -> Iterator[None]:
    """Raise if what is done inside hangs."""

    def stop(*_: object) -> None:
        raise TimeoutError(f"took longer than {seconds} s")

    before = signal.signal(signal.SIGALRM, stop)
    signal.alarm(seconds)
    try:
        yield
    finally:
        signal.alarm(0)
        signal.signal(signal.SIGALRM, before)


def put(files: Files) -> None:
    JOB.write_bytes(files.job)
    (FOLDER / "hammers.csv").write_bytes(files.hammers)
    (FOLDER / "cushions.csv").write_bytes(files.cushions)


def text_of(data: bytes) -> str:
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError:
        return data.decode("cp1252")


def lost(files: Files) -> list[str]:
    """Read the files and return what was typed and is nowhere."""
    job = load_job(JOB)
    findings = Findings()
    catalogue = read_cushions(FOLDER / "cushions.csv", findings)
    hammers, cushions = text_of(files.hammers), text_of(files.cushions)
    first, second = files.separators
    notices = [*job.notices, *findings.notices]
    return [
        *echo.lost_keys(job, text_of(files.job)),
        *echo.lost_cells(list(job.hammers), hammers, first, notices),
        *echo.lost_cells(list(catalogue.materials), cushions, second, notices),
        *echo.lost_hammer_cushions(list(job.hammers), hammers, first, catalogue),
    ]


def check_problems(error: InputError, files: Files) -> None:
    """Problems are sentences about places that are there, file by file and line by line."""
    assert error.problems
    sizes = {"job.toml": files.job, "hammers.csv": files.hammers, "cushions.csv": files.cushions}
    seen: list[tuple[str, int]] = []
    for problem in error.problems:
        assert problem.must.startswith("must ")
        assert "\n" not in str(problem)
        assert "but got ('" not in str(problem)
        name = Path(problem.file).name
        if name in sizes:
            count = len(sizes[name].splitlines()) + 1
            assert problem.line is None or 1 <= problem.line <= count
        seen.append((problem.file, problem.line or 0))
    files_seen = list(dict.fromkeys(file for file, _ in seen))
    assert seen == sorted(seen, key=lambda pair: (files_seen.index(pair[0]), pair[1]))


def check_broken(files: Files) -> None:
    put(files)
    with no_longer_than(10):
        try:
            nowhere = lost(files)
        except InputError as error:
            check_problems(error, files)
        else:
            assert not nowhere
        try:
            sound_files, _ = check_files([FOLDER / "hammers.csv", FOLDER / "cushions.csv", JOB])
        except InputError as error:
            check_problems(error, files)
        else:
            assert len(sound_files) == 3


def test_values_replaced_by_others_give_problems_or_are_read_in_full():
    for files in islice(each_value_replaced(), 0, None, 13):
        check_broken(files)


@pytest.mark.slow
def test_each_value_replaced_by_each_other_gives_problems_or_is_read_in_full():
    for files in each_value_replaced():
        check_broken(files)


@NORMAL
@given(sound())
def test_sound_files_are_read_in_full(files):
    put(files)
    assert lost(files) == []


@NORMAL
@given(sound())
def test_every_key_has_its_line_and_its_text(files):
    import tomllib

    text = files.job.decode()
    lines = text.split("\n")
    for path, spot in key_spots(text).items():
        item = tomllib.loads(text)
        for part in path:
            item = item[part]
        assert spot.typed[:20].split()[0] in lines[spot.line - 1]
        if not isinstance(item, (dict, list)):
            assert tomllib.loads(f"x = {spot.typed}")["x"] == item


@settings(NORMAL, max_examples=300)
@given(broken())
def test_damaged_files_give_problems_or_are_read_in_full(files):
    check_broken(files)


@pytest.mark.slow
@LONG
@given(broken())
def test_damaged_files_at_length(files):
    check_broken(files)


@pytest.mark.slow
@settings(LONG, max_examples=2000)
@given(sound())
def test_sound_files_at_length(files):
    put(files)
    assert lost(files) == []


def test_the_echo_knows_every_key_and_every_column():
    # Otherwise a key that is added to the job file could be dropped and no test would see it.
    keys = {"title", "display"}
    for name, field in JobKeys.model_fields.items():
        table = field.annotation
        models = [table, *getattr(table, "__args__", ())]
        for model in models:
            # What these hold is tested key by key elsewhere.
            elsewhere = ("stages", "ground", "cost", "site", "doubt", "fatigue")
            if hasattr(model, "model_fields") and name not in elsewhere:
                keys |= {f"{name}.{key}" for key in model.model_fields}
    keys -= {f"target.{key}" for key in TargetKeys.model_fields if key != "refusal"}
    assert set(echo.JOB_KEYS) == keys
    assert set(echo.STAGE_KEYS) == set(StageKeys.model_fields)
    of_hammer = {
        *echo.HAMMER_NUMBERS,
        *echo.ENERGIES,
        *echo.TRUTHS,
        *(echo.AMOUNTS - {"price"}),
        *echo.CUSHION_OF_HAMMER,
        "name",
        "kind",
        "source",
    }
    assert of_hammer == {spec.name for spec in HAMMER_COLUMNS}
    assert {*echo.CUSHION_NUMBERS, "price", "name", "use", "source"} == {
        s.name for s in CUSHION_COLUMNS
    }
