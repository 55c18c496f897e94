"""The bill of a contract against a sheet of its own, row by row; what no other option beats."""

from __future__ import annotations

import csv
import io
from dataclasses import replace

import pytest

from matchup.errors import InputError, ModelError
from matchup.model.cost import Amount, Cost, Fuel
from matchup.model.cushion import Cushion, Stack
from matchup.model.job import Drive, Job
from matchup.search.bill import make_bill
from matchup.search.option import Option
from matchup.search.ranking import rank_hammers
from matchup.search.tradeoff import costs, is_beaten
from tests import jobs
from tests.report.plans import option, plan

PRICED = replace(jobs.OAK, price=Amount(24.0, "EUR"))
ON_OAK = Stack(Cushion(PRICED, 0.225, 0.16, 9))
COST = Cost(
    currency="EUR",
    piles=85,
    rigs=2,
    shift=9 * 3600,
    move=25 * 60,
    rig_day=2000.0,
    crew_day=2500.0,
    mobilisation=11000.0,
    splices=1,
    splice_time=40 * 60,
    splice_price=180.0,
    cushion_time=12 * 60,
    fuel=Fuel("l", Amount(28.0, "l/h"), 1.6, 2.7),
)
HAMMER = jobs.hydraulic(6.0, day_rate=Amount(800.0, "EUR"), mobilisation=Amount(3000.0, "EUR"))

SHEET = """\
line,unit,count of a pile,price
moving,min,25,
driving,min,22,
splicing,min,40,
changing 2 cushions,min,24,
cushions,sheet,27,24
splices,piece,1,180
"""
"""What a pile takes, as an estimator would write it down: 22 minutes of driving, three cushions."""


def by_sheet(rates_a_day: float, mobilisation: float, litres: float) -> dict[str, float]:
    """Work out the contract from the sheet alone."""
    rows = list(csv.DictReader(io.StringIO(SHEET)))
    minutes = sum(float(row["count of a pile"]) for row in rows if row["unit"] == "min")
    goods = sum(float(r["count of a pile"]) * float(r["price"]) for r in rows if r["price"])
    rig_days = 85 * minutes / 60 / 9
    return {
        "hours": minutes / 60,
        "rig_days": rig_days,
        "days": 43 * minutes / 60 / 9,
        "total": rig_days * rates_a_day + 2 * mobilisation + 85 * (goods + litres * 1.6),
        "litres": 85 * litres,
    }


def test_the_bill_is_that_of_the_sheet():
    bill = make_bill(COST, HAMMER, ON_OAK, 22 * 60, 50e6, 3)
    sheet = by_sheet(2000 + 2500 + 800, 11000 + 3000, 28 * 22 / 60)
    assert bill.pile_time == pytest.approx(3600 * sheet["hours"])
    assert bill.days == pytest.approx(sheet["days"])
    assert bill.rig_days == pytest.approx(sheet["rig_days"])
    assert bill.fuel == pytest.approx(sheet["litres"])
    assert bill.co2 == pytest.approx(2.7 * sheet["litres"])
    assert bill.total == pytest.approx(sheet["total"])
    assert bill.per_pile == pytest.approx(sheet["total"] / 85)
    assert bill.energy == 85 * 50e6
    assert dict(bill.parts)["pile cushions"] == 85 * 27 * 24


def test_fuel_may_go_by_energy_and_a_hammers_own_use_wins():
    by_energy = replace(COST, fuel=Fuel("kWh", Amount(0.8, "kWh/MJ"), 0.3))
    bill = make_bill(by_energy, HAMMER, ON_OAK, 22 * 60, 50e6, 3)
    assert bill.fuel == pytest.approx(85 * 0.8 * 50)
    assert bill.co2 is None
    own = replace(HAMMER, fuel_use=Amount(1.2, "kWh/MJ"))
    assert make_bill(by_energy, own, ON_OAK, 1320, 50e6, 3).fuel == pytest.approx(85 * 1.2 * 50)


def test_what_is_not_known_is_not_taken_for_nothing():
    unpriced = Stack(Cushion(jobs.OAK, 0.225, 0.16, 9))
    bill = make_bill(COST, jobs.hydraulic(6.0), unpriced, 1320, 50e6, 1)
    assert bill.unknown == ("hammer", "mobilisation", "pile cushions")
    assert bill.total is None
    assert bill.days is not None
    no_rate = make_bill(COST, HAMMER, ON_OAK, None, 50e6, 1)
    assert (no_rate.days, no_rate.total, no_rate.fuel) == (None, None, None)


def test_what_the_job_gives_no_price_of_is_no_part():
    bare = Cost("EUR", 10, 8 * 3600, 1200)
    bill = make_bill(bare, HAMMER, Stack(), 1200, 1e6, 1)
    assert [name for name, _ in bill.parts] == ["hammer", "mobilisation"]
    assert bill.total == pytest.approx(10 * 2400 / 28800 * 800 + 3000)


@pytest.mark.parametrize(
    ("changed", "field"),
    [
        ({"piles": 0}, "piles"),
        ({"rigs": 86}, "rigs"),
        ({"shift": 0.0}, "shift"),
        ({"shift": 90000.0}, "shift"),
        ({"move": -1.0}, "move"),
        ({"crew_day": -1.0}, "crew_day"),
        ({"currency": " "}, "currency"),
    ],
)
def test_a_contract_that_can_not_be(changed, field):
    with pytest.raises(ModelError) as caught:
        replace(COST, **changed)
    assert field in [fault.field for fault in caught.value.faults]


def test_fuel_is_used_in_its_own_unit():
    with pytest.raises(ModelError):
        Fuel("l", Amount(28.0, "kWh/h"))


# --- in a search ---------------------------------------------------------------------------------


def drive_job(**more: object) -> Job:
    """A drive of three stations with hammers that trade speed for hire."""
    stages = (
        jobs.stage("6 m", 6.0, 200.0, 150.0, case="best"),
        jobs.stage("9 m", 9.0, 350.0, 300.0, case="best"),
        jobs.stage("12.5 m", 12.5, 650.0, 550.0, 4.0, case="best"),
    )
    hammers = [
        jobs.hydraulic(tonnes, 1.2, day_rate=Amount(rate, "EUR"), mobilisation=Amount(900.0, "EUR"))
        for tonnes, rate in ((3.0, 300.0), (6.0, 900.0), (9.0, 4000.0))
    ]
    priced = [replace(m, price=Amount(p, "EUR")) for m, p in ((jobs.PLYWOOD, 9.0), (PRICED, 24.0))]
    made = jobs.job(
        stages=stages, hammers=hammers, cushions=jobs.space(priced, (3, 9, 12)), objective="energy"
    )
    cost = replace(COST, splices=0)
    return replace(made, drive=Drive(), cost=cost, **more)


@pytest.fixture(scope="module")
def by_cost() -> dict[str, tuple[Option, ...]]:
    made = {}
    for objective in ("energy", "time", "cost"):
        job = drive_job()
        job = replace(job, search=replace(job.search, objective=objective))
        made[objective] = rank_hammers(job, 1).options
    return made


def test_least_cost_is_least_over_all_cushions(by_cost):
    """Every cushion by itself, as a job of its own; the drive that costs the least is the best."""
    job = drive_job()
    job = replace(job, search=replace(job.search, objective="cost"))
    for best in by_cost["cost"]:
        totals = []
        for cushion in job.cushions.cushions():
            only = replace(job, hammers=(best.hammer,), cushions=job.cushions.holding(cushion))
            totals += [o.bill.total for o in rank_hammers(only, 1).options]
        assert best.bill.total == pytest.approx(min(totals), rel=1e-12)
        assert best.cost == best.bill.total
    assert [o.cost for o in by_cost["cost"]] == sorted(o.cost for o in by_cost["cost"])


def test_time_counts_all_of_a_pile_where_the_contract_is_given(by_cost):
    for option_ in by_cost["time"]:
        assert option_.cost == option_.bill.pile_time
        assert option_.bill.pile_time > option_.slowest.taken.seconds + COST.move - 1e-9


def test_no_objective_is_beaten_in_what_it_asks_for(by_cost):
    def least(objective: str, of) -> float:
        return min(of(o) for o in by_cost[objective])

    assert least("cost", lambda o: o.bill.total) <= least("energy", lambda o: o.bill.total)
    assert least("time", lambda o: o.bill.pile_time) <= least("energy", lambda o: o.bill.pile_time)


def test_the_energy_of_a_drive_lies_between_its_strokes(by_cost):
    for option_ in by_cost["energy"]:
        taken = option_.slowest.taken
        strokes = [p.blow_energy for p in option_.plans]
        mean = taken.energy / taken.blows
        assert min(strokes) * (1 - 1e-9) <= mean <= max(strokes) * (1 + 1e-9)


def test_cost_by_hand_given_stages_is_refused():
    job = replace(jobs.small_job(), cost=COST, hammers=(HAMMER,))
    with pytest.raises(InputError) as caught:
        rank_hammers(replace(job, search=replace(job.search, objective="cost")), 1)
    assert "where stages are given by hand" in str(caught.value)


# --- what no other beats -------------------------------------------------------------------------


def test_the_unbeaten_are_those_of_a_brute_force(by_cost):
    chosen = [
        option(plan(stroke, compression=use, tension=0.1, blow_rate=rate))
        for stroke in (0.3, 0.5, 0.7)
        for use in (0.4, 0.6, 0.8)
        for rate in (0.5, 0.7, None)
    ]
    for options in (chosen, by_cost["energy"], [*by_cost["energy"], *by_cost["cost"]]):
        table = [costs(o) for o in options]
        for mine, one in zip(table, options, strict=True):
            beaten = False
            for other in table:
                no_worse = not any(theirs > own for theirs, own in zip(other, mine, strict=True))
                better = any(theirs < own for theirs, own in zip(other, mine, strict=True))
                beaten = beaten or (no_worse and better)
            assert is_beaten(one, options) == beaten
