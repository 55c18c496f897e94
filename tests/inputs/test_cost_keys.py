"""The keys of ``[cost]`` and the prices of the catalogues: read as typed, never converted."""

from __future__ import annotations

import pytest

from matchup.model.cost import Amount, Fuel
from tests.inputs.written import CUSHIONS, HAMMERS, JOB, line_in, replaced

DRIVE = """\
[ground]
layers = "layers.csv"
method = "direct"
start = "4 m"
every = "4 m"
cases = ["best"]
[target]
penetration = "21 m"
set = "4 mm"
"""
LAYERS = (
    "top [m],bottom [m],soil,unit_weight [kN/m3],unit_shaft [kPa],unit_toe [MPa],water [m]\n"
    "0,25,sand,18,30,5,1\n"
)
COST = """\
[cost]
currency = "EUR"
piles = 40
rigs = 2
shift = "9 h"
move = "20 min"
rig_day = "2100 EUR"
crew_day = "2400EUR"
mobilisation = "1.2e4 EUR"
splices = 1
splice_time = "45 min"
splice_price = "180 EUR"
cushion_time = "10 min"
fuel_use = "25 l / h"
fuel_price = "1.6 EUR/l"
fuel_co2 = "2.7 kg/l"
"""
HIRED = "".join(
    f"{line},{more}\n"
    for line, more in zip(
        HAMMERS.splitlines(),
        (
            "blow_rate_max [1/min],day_rate [EUR],mobilisation [EUR],fuel_use [l/h]",
            "60,680,2800,30",
            "14,290,3400,",
        ),
        strict=True,
    )
)
PRICED = "".join(
    f"{line},{more}\n"
    for line, more in zip(CUSHIONS.splitlines(), ("price [EUR]", "9", "24", ""), strict=True)
)


def by_ground(cost: str = COST, more: str = "") -> str:
    head, _, rest = JOB.partition("[[stages]]")
    return head + DRIVE + rest[rest.index("[limits]") :] + more + cost


@pytest.fixture
def contract(desk):
    desk.put("layers.csv", LAYERS)
    return desk


def test_every_key_is_read(contract):
    job = contract.load(by_ground(), HIRED, PRICED)
    assert job.notices == ()
    cost = job.cost
    assert (cost.currency, cost.piles, cost.rigs) == ("EUR", 40, 2)
    assert (cost.shift, cost.move) == (9 * 3600, 20 * 60)
    assert (cost.rig_day, cost.crew_day, cost.mobilisation) == (2100, 2400, 12000)
    assert (cost.splices, cost.splice_time, cost.splice_price) == (1, 2700, 180)
    assert cost.cushion_time == 600
    assert cost.fuel == Fuel("l", Amount(25, "l/h"), 1.6, 2.7)
    curlew, raven = job.hammers
    assert (curlew.day_rate, curlew.mobilisation) == (Amount(680, "EUR"), Amount(2800, "EUR"))
    assert (curlew.fuel_use, raven.fuel_use) == (Amount(30, "l/h"), None)
    assert [m.price for m in job.cushions.materials] == [Amount(9, "EUR"), Amount(24, "EUR")]


WRONG = [
    ('"2100 EUR"', '"2100 USD"', "cost.rig_day", "must be in the job's currency, EUR"),
    ('"2100 EUR"', '"2100"', "cost.rig_day", "must be a text of a number and its unit"),
    ('"2100 EUR"', "2100", "cost.rig_day", "must be a text of a number and its unit"),
    ('"2100 EUR"', '"-1 EUR"', "cost.rig_day", "must be >= 0"),
    (
        '"2100 EUR"',
        '"2,100 EUR"',
        "cost.rig_day",
        "must be a number with a decimal point and no thousands separator",
    ),
    ('"25 l / h"', '"25 kWh/h"', "cost.fuel_use", "must be in l/h or l/MJ"),
    ('"1.6 EUR/l"', '"1.6 USD/l"', "cost.fuel_price", "must be in EUR for a unit of fuel"),
    ('"1.6 EUR/l"', '"1.6 EUR"', "cost.fuel_price", "must be in EUR for a unit of fuel"),
    ('"2.7 kg/l"', '"2.7 kg/kWh"', "cost.fuel_co2", "must be for the unit of `fuel_price`, l"),
    ('"2.7 kg/l"', '"2.7 t/l"', "cost.fuel_co2", "must be in kg for a unit of fuel"),
    ("piles = 40", "piles = 0", "cost.piles", "must be >= 1"),
    ("rigs = 2", "rigs = 50", "cost.rigs", "must be >= 1, and no more than `piles`"),
    ('shift = "9 h"', 'shift = "25 h"', "cost.shift", "must be at most a day"),
    ('shift = "9 h"\n', "", "cost.shift", "must be given"),
    ("piles = 40\n", "", "cost.piles", "must be given"),
    ("piles = 40", 'piles = "forty"', "cost.piles", "must be a whole number"),
    ("rigs = 2", "riggs = 2", "cost.riggs", "must be a known key"),
]


@pytest.mark.parametrize(("old", "new", "place", "must"), WRONG)
def test_a_wrong_key_is_told_where_it_stands(contract, old, new, place, must):
    text = replaced(by_ground(), (old, new))
    problem = contract.problem(text, HIRED, PRICED)
    assert (problem.place, problem.must) == (place, must)
    if new:
        assert problem.line == line_in(text, new)


def test_all_that_is_wrong_is_told_at_once(contract):
    text = replaced(by_ground(), ('"2100 EUR"', '"2100 USD"'), ("rigs = 2", "rigs = 0"))
    assert {p.place for p in contract.problems(text, HIRED, PRICED)} == {
        "cost.rig_day",
        "cost.rigs",
    }


def test_catalogues_in_another_currency_are_not_converted(contract):
    [problem] = contract.problems(by_ground(), HIRED.replace("rate [EUR]", "rate [GBP]"), PRICED)
    assert problem.place == "cost.currency"
    assert problem.must == "must be the currency of the catalogue's `day_rate`, GBP"


def test_a_price_needs_its_currency(contract):
    problems = contract.problems(by_ground(), HIRED.replace("day_rate [EUR]", "day_rate"), PRICED)
    assert ("day_rate", "must have its unit in brackets") in [(p.place, p.must) for p in problems]


def test_hammers_whose_cost_is_not_known_are_named(contract):
    job = contract.load(by_ground(), HIRED.replace("14,290,", "14,,"), PRICED)
    assert [n for n in job.notices if "cost" in n] == [
        f"job.toml, line {line_in(by_ground(), '[cost]')}: cost can't be told of Raven: no "
        "`day_rate`"
    ]
    job = contract.load(by_ground(), HIRED, CUSHIONS)
    assert [n.partition(": ")[2] for n in job.notices] == [
        "cost can't be told on plywood: no `price`",
        "cost can't be told on oak: no `price`",
    ]


def test_stages_by_hand_tell_no_cost(desk):
    job = desk.load(JOB + COST, HIRED, PRICED)
    assert [
        "cost has no effect: stages given by hand tell neither blows nor minutes" in n
        for n in job.notices
    ] == [True]
    problem = desk.problem(JOB + COST + '[search]\nobjective = "cost"\n', HIRED, PRICED)
    assert (problem.place, problem.must) == (
        "search.objective",
        "must be energy or time where stages are given by hand",
    )


def test_cost_needs_prices(contract):
    asked = '[search]\nobjective = "cost"\n'
    problem = contract.problem(by_ground("", asked), HIRED, PRICED)
    assert problem.must == "must be energy or time in a job without [cost]"
    problems = contract.problems(by_ground(COST, asked), HAMMERS, PRICED)
    assert [p.place for p in problems] == ["search.objective"] * 2
    assert "`blow_rate_max`" in problems[0].must
    assert "`day_rate` and `mobilisation`" in problems[1].must


def test_keys_without_effect_are_named(contract):
    text = replaced(by_ground(), ("splices = 1", "splices = 0"))
    notices = contract.load(text, HIRED, PRICED).notices
    assert [n.split(": ", 1)[1] for n in notices] == [
        "cost.splice_time has no effect: `splices` is 0",
        "cost.splice_price has no effect: `splices` is 0",
    ]
