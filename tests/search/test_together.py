"""One hammer for several jobs: sums by hand, the choice against every choice, and as processes."""

from __future__ import annotations

import csv
import io
import json
import subprocess
import sys
from dataclasses import replace
from itertools import combinations
from pathlib import Path

import pytest

import matchup
from matchup.errors import InputError
from matchup.model.cost import Amount, Cost
from matchup.search.bill import MOBILISATION, Bill
from matchup.search.option import CaseDrive, Option, Ranking
from matchup.search.together import put_together
from tests import examples, jobs
from tests.report.plans import option, plan, ranking

ROOT = Path(__file__).parents[2]
FAILS = plan(1.2, 3.1, 0.5, 1.03, verdict="does not reach the set")


def bill(parts: dict[str, float], days: float) -> Bill:
    return Bill(3600.0, days, days, 1e9, None, None, tuple(parts.items()), 10)


def priced(name: str, parts: dict[str, float], days: float, **more: object) -> Option:
    drive = CaseDrive("best", True, (plan(),), None, None, bill(parts, days))
    return option(hammer=jobs.hydraulic(5.0, name=name), cases=(drive,), **more)


def failing(name: str) -> Option:
    return option(FAILS, verdict="does not reach the set", hammer=jobs.hydraulic(5.0, name=name))


def of(*options: Option, objective: str = "energy") -> Ranking:
    job = jobs.small_job(
        objective="energy" if objective == "cost" else objective,
        title=f"{len(options)} options",
    )
    if objective == "cost":
        job = replace(job, cost=Cost("EUR", 10, 3600.0, 60.0))
        hammers = tuple(
            replace(h, day_rate=Amount(1.0, "EUR"), mobilisation=Amount(1.0, "EUR"))
            for h in job.hammers
        )
        job = replace(job, hammers=hammers)
        job = replace(job, search=replace(job.search, objective="cost"))
    drives = [o for o in options if o.drives]
    return ranking(drives, [o for o in options if not o.drives], job)


SHEET = """\
hammer,job,rig,hammer hire,mobilisation,days
Heron,1,10000,4000,9000,5
Heron,2,6000,2400,7500,3
Stork,1,8000,5200,9900,4
Stork,2,5000,3200,8100,2.5
"""


@pytest.fixture
def contracts() -> list[Ranking]:
    rows = list(csv.DictReader(io.StringIO(SHEET)))
    made = []
    for job in ("1", "2"):
        mine = [
            priced(
                row["hammer"],
                {
                    "rig": float(row["rig"]),
                    "hammer": float(row["hammer hire"]),
                    MOBILISATION: float(row["mobilisation"]),
                },
                float(row["days"]),
            )
            for row in rows
            if row["job"] == job
        ]
        made.append(
            of(
                *mine,
                failing("Wren") if job == "1" else option(hammer=jobs.hydraulic(1.0, name="wren")),
                objective="cost",
            )
        )
    return made


def test_contracts_are_added_up_with_the_hammer_brought_once(contracts):
    found = put_together(contracts)
    rows = list(csv.DictReader(io.StringIO(SHEET)))
    for one in found.served[:2]:
        mine = [row for row in rows if row["hammer"] == one.name]
        work = sum(float(r["rig"]) + float(r["hammer hire"]) for r in mine)
        assert one.total == work + max(float(r["mobilisation"]) for r in mine)
        assert one.days == sum(float(r["days"]) for r in mine)
    # By hand, Heron: 22 400 and 9000; Stork: 21 400 and 9900.
    assert [(one.name, one.total) for one in found.served[:2]] == [
        ("Stork", 31300.0),
        ("Heron", 31400.0),
    ]
    assert found.measure == "cost"
    assert found.best.total == min(one.total for one in found.served if one.serves_all)


def test_names_are_one_hammer_whatever_their_case(contracts):
    found = put_together(contracts)
    wren = found.served[-1]
    assert (wren.name, wren.fails, wren.total) == ("Wren", (0,), None)


def test_those_that_fail_in_fewer_jobs_come_first():
    first = of(option(hammer=jobs.hydraulic(1, name="A")), failing("B"), failing("C"))
    second = of(failing("A"), failing("B"), option(hammer=jobs.hydraulic(1, name="C")))
    third = of(*(option(hammer=jobs.hydraulic(1, name=name)) for name in "AC"))
    found = put_together([first, second, third])
    assert [(one.name, one.fails) for one in found.served] == [
        ("A", (1,)),
        ("C", (0,)),
        ("B", (0, 1, 2)),
    ]
    assert found.best is None
    assert {one.name for one in found.pair} == {"A", "C"}
    assert found.served[2].options[2] is None


def test_the_pair_is_the_least_of_all_pairs():
    """Energies by hand; each job counts over the least that any hammer takes in it."""
    energies = {"A": (10, None, 30), "B": (None, 20, 20), "C": (12, None, 22), "D": (None, 26, 60)}

    def one(name: str, job: int) -> Option:
        energy = energies[name][job]
        if energy is None:
            return failing(name)
        return option(plan(energy / 100), hammer=jobs.hydraulic(1, name=name))

    found = put_together([of(*(one(name, job) for name in energies)) for job in range(3)])
    least = [min(e[j] for e in energies.values() if e[j]) for j in range(3)]
    worth = {
        pair: sum(min(energies[n][j] or 1e9 for n in pair) / least[j] for j in range(3))
        for pair in combinations(energies, 2)
    }
    assert {o.name for o in found.pair} == set(min(worth, key=worth.get))


def test_jobs_that_ask_for_different_things_are_ranked_by_energy():
    assert put_together([of(option()), of(option(), objective="time")]).measure == "energy"


# --- as processes --------------------------------------------------------------------------------


def run(*arguments: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "matchup", "rank", *arguments],
        cwd=ROOT,
        capture_output=True,
        text=True,
        check=False,
    )


def path(name: str) -> str:
    return str(examples.path(name).relative_to(ROOT))


def test_several_jobs_in_one_document():
    done = run(path("fender_piles"), path("final_set"), "--json")
    assert done.returncode == 0
    assert done.stderr == ""
    document = json.loads(done.stdout)
    titles = [job["title"] for job in document["jobs"]]
    assert titles == [examples.ranking(n).job.title for n in ("fender_piles", "final_set")]
    by_name = {one["hammer"]: one for one in document["hammers"]}
    for name, one in by_name.items():
        drives = [name in [o["hammer"] for o in job["options"]] for job in document["jobs"]]
        assert one["serves_all"] == all(drives)
        assert one["fails_in"] == [t for t, d in zip(titles, drives, strict=True) if not d]
    serving = [one for one in document["hammers"] if one["serves_all"]]
    assert document["best"] == min(serving, key=lambda o: sum(o["blow_energy_kJ"]))["hammer"]
    alone = examples.ranking("final_set").to_dict()
    assert document["jobs"][1]["options"] == json.loads(json.dumps(alone["options"]))


def test_no_hammer_for_all_of_them_is_told_by_the_exit_status():
    done = run(path("dolphin_tube"), path("final_set"))
    assert done.returncode == 3
    assert "none of 33 hammers serves all 2 jobs; two do between them: " in done.stdout
    assert "not in its catalogue" in done.stdout


def test_problems_of_all_jobs_are_told_at_once(tmp_path):
    for name in ("one.toml", "two.toml"):
        (tmp_path / name).write_text('title = "invented"\n')
    done = run(str(tmp_path / "one.toml"), path("final_set"), str(tmp_path / "two.toml"))
    assert done.returncode == 1
    assert done.stdout == ""
    assert "one.toml" in done.stderr
    assert "two.toml" in done.stderr


def test_what_there_is_for_one_job_alone_is_refused(tmp_path):
    for option_ in (["--plot", str(tmp_path / "x.svg")], ["--formulas"]):
        done = run(path("final_set"), path("fender_piles"), *option_)
        assert done.returncode == 1
        assert "must be left out with several jobs" in done.stderr


def test_one_currency():
    job = jobs.small_job()
    euros, dollars = (replace(job, cost=Cost(c, 10, 3600.0, 60.0)) for c in ("EUR", "USD"))
    with pytest.raises(InputError, match="must be the same in all jobs"):
        matchup.rank_together([euros, dollars])


def test_the_table_goes_to_a_file():
    result = matchup.rank_together([examples.ranking("final_set").job] * 2)
    rows = list(csv.DictReader(io.StringIO(result.to_csv())))
    assert len(rows) == 19
    assert len(result.to_frame()) == 19
    assert result.best == examples.ranking("final_set").options[0].hammer.name
    with pytest.raises(InputError):
        result.figure()
