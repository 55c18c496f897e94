"""Fatigue: rainflow counting by hand and by another algorithm, the curve and the sum by hand.

The history of the first example is that of the worked example of ASTM E1049 as we remember it; its
count is worked out by hand here, so it does not rest on memory. The shape of the curve of
EN 1993-1-9 is from memory; what is checked is that its pieces meet and the arithmetic.
"""

from __future__ import annotations

import math
from collections import Counter
from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import matchup
from matchup.analysis.single import compute_blow
from matchup.errors import ModelError
from matchup.model.cushion import Stack
from matchup.model.fatigue import Curve, Detail, Fatigue, rainflow
from matchup.model.limits import stress_limits
from matchup.model.pile import Section
from matchup.search.fatigue import find_damage, section_stresses, stations
from matchup.search.ranking import rank_hammers
from tests import examples


def counted(history: list[float]) -> dict[float, float]:
    found: Counter[float] = Counter()
    for size, count in zip(*rainflow(np.array(history, float)), strict=True):
        found[round(float(size), 9)] += float(count)
    return dict(found)


def test_a_history_counted_by_hand():
    """-2 1 -3 5 -1 3 -4 4 -2.

    1-(-2): 3 <= 4, holds the start: half of 3. Then 1-(-3): 4 <= 8, start: half of 4. 3-(-1): 4
    within 5..-4: one of 4. Left -3 5 -4 4 -2: ranges 8, 9, 8, 6, half each.
    """
    assert counted([-2, 1, -3, 5, -1, 3, -4, 4, -2]) == {3: 0.5, 4: 1.5, 8: 1.0, 9: 0.5, 6: 0.5}


def test_points_on_the_way_and_standstill_count_nothing():
    plain = [0, 4, 1, 3, -2]
    slow = [0, 0, 2, 4, 4, 2.5, 1, 1, 3, 0.5, -2, -2]
    assert counted(slow) == counted(plain) == {4: 0.5, 6: 0.5, 2: 1.0}
    assert counted([1.0]) == counted([1.0, 1.0]) == {}
    assert counted([0.0, 3.0]) == {3: 0.5}


def four_points(history: list[float]) -> dict[float, float]:
    """The four-point method: an inner range that both its neighbours cover is a cycle."""
    apart = [x for x, before in zip(history, [None, *history], strict=False) if x != before]
    points = [
        x
        for i, x in enumerate(apart)
        if i in (0, len(apart) - 1) or (x - apart[i - 1]) * (apart[i + 1] - x) < 0
    ]
    found: Counter[float] = Counter()
    again = True
    while again:
        again = False
        for i in range(len(points) - 3):
            outer, inner, last = (abs(b - a) for a, b in pairwise(points[i : i + 4]))
            if inner <= outer and inner <= last:
                found[inner] += 1.0
                del points[i + 1 : i + 3]
                again = True
                break
    for a, b in pairwise(points):
        found[abs(b - a)] += 0.5
    return dict(found)


@settings(max_examples=300, deadline=None)
@given(st.lists(st.integers(-30, 30), min_size=1, max_size=40))
def test_the_four_point_method_counts_the_same(history):
    assert counted(history) == four_points([float(x) for x in history])


# --- the curve and the sum -----------------------------------------------------------------------


def test_the_curve_by_hand():
    curve = Curve(100.0)
    knee = 100 * (2 / 5) ** (1 / 3)
    end = knee * (5 / 100) ** (1 / 5)
    ranges = np.array([200.0, 100.0, knee, end, 0.999 * end])
    assert curve.cycles(ranges) == pytest.approx([2e6 / 8, 2e6, 5e6, 1e8, math.inf])
    # The printed factors of the standard, from memory, are these roots: 0.737 and 0.549.
    assert (round(knee / 100, 3), round(end / knee, 3)) == (0.737, 0.549)
    assert Curve(100.0, 4.0).cycles(np.array([200.0, 10.0])) == pytest.approx([2e6 / 16, 2e10])


def test_the_sum_by_hand():
    """1000 cycles at twice the category, 500 at the category: 1000 / 250e3 + 500 / 2e6."""
    damage = Curve(100.0).damage(np.array([200.0, 100.0, 1.0]), np.array([1000.0, 500.0, 1e9]))
    assert damage == pytest.approx(0.004 + 0.00025)


@pytest.mark.parametrize(
    ("made", "field"),
    [
        (lambda: Curve(0.0), "category"),
        (lambda: Curve(1.0, 0.5), "slope"),
        (lambda: Detail(" ", 1.0, Curve(1.0)), "name"),
        (lambda: Detail("a", -1.0, Curve(1.0)), "at"),
        (lambda: Detail("a", 1.0, Curve(1.0), 0.9), "concentration"),
        (lambda: Fatigue(()), "details"),
        (lambda: Fatigue((Detail("a", 1.0, Curve(1.0)),) * 2), "details"),
        (lambda: Fatigue((Detail("a", 1.0, Curve(1.0)),), 0.0), "allowed"),
    ],
)
def test_what_can_not_be(made, field):
    with pytest.raises(ModelError) as caught:
        made()
    assert field in [fault.field for fault in caught.value.faults]


# --- a drive -------------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def driven():
    job = matchup.load_job(examples.path("spliced_tube"))
    (hammer,) = [h for h in job.hammers if h.name == "Stork"]
    ranking = rank_hammers(replace(job, hammers=(hammer,)), 1)
    return ranking.job, ranking.options[0]


def test_the_stations_stand_for_all_blows(driven):
    _, option = driven
    for case in option.cases:
        parts = stations(case.plans)
        assert sum(blows for _, blows in parts) == pytest.approx(case.taken.blows)
        # Straight in the blows per length: half of each way at the set of either end.
        inner = [(plan, blows) for plan, blows in parts][1:-1]
        for plan, blows in inner:
            i = case.plans.index(plan)
            way = 0.5 * (case.plans[i + 1].stage.penetration - case.plans[i - 1].stage.penetration)
            assert blows == pytest.approx(way / plan.set, rel=1e-9)


def test_the_damage_is_that_of_every_blow_counted_one_by_one(driven):
    job, option = driven
    found = {(one.detail.name, one.case): one for one in find_damage(job, option)}
    for case in option.cases:
        for detail in job.fatigue.details:
            damage, largest = 0.0, 0.0
            for plan, blows in stations(case.plans):
                blow = compute_blow(
                    job, plan.stage, option.hammer, option.stack, "new", plan.stroke
                )
                segment = np.searchsorted(blow.waves.distance, detail.at) - 1
                area = math.pi * (0.762 - 0.016) * 0.016
                stress = (detail.concentration * blow.waves.force[:, segment] / area).tolist()
                for size, count in four_points(stress).items():
                    largest = max(largest, size)
                    if size >= 0.405 * detail.curve.category:
                        damage += blows * count / float(detail.curve.cycles(np.array([size]))[0])
            one = found[detail.name, case.case]
            assert one.damage == pytest.approx(damage, rel=1e-3)
            assert one.largest == pytest.approx(largest, rel=1e-9)


def test_a_steeper_curve_and_a_concentration_do_what_they_must(driven):
    """On one slope m, a concentration k does k**m times the damage, exactly."""
    job, option = driven
    curve = Curve(60e6, 3.0)
    pair = (Detail("plain", 15.0, curve), Detail("sharp", 15.0, curve, 2.0))
    found = find_damage(replace(job, fatigue=Fatigue(pair)), option)
    by_name = {(one.detail.name, one.case): one.damage for one in found}
    for case in option.cases:
        ratio = by_name["sharp", case.case] / by_name["plain", case.case]
        assert ratio == pytest.approx(8.0, rel=1e-12)


def test_the_history_agrees_with_the_envelope(driven):
    """The march's extremes are at nodes, the history in segments: half a soil spring apart."""
    job, option = driven
    plan = option.target
    blow = compute_blow(job, plan.stage, option.hammer, option.stack, "new", plan.stroke)
    for at in (0.0, 7.0, 15.0, 29.0):
        (stress,) = section_stresses(job.pile, blow, at)
        node = int(np.argmin(np.abs(blow.envelope.distance - at)))
        assert stress.max() == pytest.approx(blow.envelope.compression[node], rel=0.05)


def test_where_parts_meet_both_are_told():
    job = matchup.load_job(examples.path("spliced_tube"))
    upper = replace(job.pile.toe, length=14.0, name="upper")
    lower = replace(upper, length=15.0, name="lower", section=Section.pipe(0.762, 0.012, "open"))
    pile = replace(job.pile, parts=(upper, lower))
    changed = replace(job, pile=pile, limits=stress_limits(pile, "en 12699"), fatigue=None)
    (hammer,) = [h for h in job.hammers if h.name == "Stork"]
    blow = compute_blow(changed, changed.stages[-1], hammer, Stack(), "new", 1.0)
    above, below = section_stresses(pile, blow, 14.0)
    assert upper.section.area > lower.section.area
    assert below.max() > above.max()
    (inside,) = section_stresses(pile, blow, 3.0)
    assert inside.shape == above.shape
