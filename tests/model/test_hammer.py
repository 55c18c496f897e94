"""A hammer has settings, and a setting has a stroke: its own, or the one of an energy."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from matchup.analysis.cells import is_setting, settings
from matchup.errors import ModelError
from matchup.model.hammer import Hammer
from tests import jobs

G = 9.80665
BY_STROKE = jobs.hydraulic(5.0, 1.5)
BY_ENERGY = replace(BY_STROKE, kind="double-acting", set_by_energy=True)


def test_an_energy_and_its_equivalent_stroke_give_the_same_blow():
    # W_r = m g h, and v = sqrt(2 eta W_r / m).
    energy = 40e3
    stroke = BY_ENERGY.stroke_of(energy)
    assert stroke == pytest.approx(energy / (5000 * G), rel=1e-12)
    assert BY_ENERGY.impact_velocity(stroke) == pytest.approx(
        math.sqrt(2 * 0.85 * energy / 5000), rel=1e-12
    )
    assert BY_STROKE.impact_velocity(stroke) == BY_ENERGY.impact_velocity(stroke)


def test_a_rake_takes_its_cosine_off_a_fall_and_nothing_off_an_energy_that_is_set():
    rake = math.radians(20)
    fallen = BY_STROKE.impact_velocity(1.0, rake) / BY_STROKE.impact_velocity(1.0)
    assert fallen == pytest.approx(math.sqrt(math.cos(rake)), rel=1e-12)
    assert BY_ENERGY.impact_velocity(1.0, rake) == BY_ENERGY.impact_velocity(1.0)


def test_the_blow_rate_lies_on_the_line_between_both_ends_of_the_settings():
    hammer = replace(BY_ENERGY, blow_rate_max=1.2, blow_rate_full=0.5)
    assert hammer.blow_rate(hammer.stroke_min) == 1.2
    assert hammer.blow_rate(hammer.stroke_max) == pytest.approx(0.5, rel=1e-12)
    middle = 0.5 * (hammer.stroke_min + hammer.stroke_max)
    assert hammer.blow_rate(middle) == pytest.approx(0.85, rel=1e-12)
    assert hammer.blow_rate(0.5 * hammer.stroke_min) == 1.2
    only = replace(hammer, stroke_min=hammer.stroke_max)
    assert only.blow_rate(only.stroke_max) == 0.5


def test_an_energy_that_can_be_set_freely_is_planned_in_hundredths_of_the_largest():
    hammer = replace(BY_ENERGY, stroke_step=None, stroke_min=0.3, stroke_max=1.5)
    strokes = settings(hammer)
    assert np.diff(strokes) == pytest.approx(0.015, rel=1e-9)
    assert (strokes[0], strokes[-1]) == (0.3, 1.5)
    assert is_setting(hammer, 0.315)


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"kind": "drop"}, "kind"),
        ({"kind": "air"}, "kind"),
        ({"set_by_energy": False}, "kind"),
        ({"blow_rate_full": 0.5, "blow_rate_max": None}, "blow_rate_full"),
        ({"blow_rate_full": 0.8, "blow_rate_max": 0.7}, "blow_rate_full"),
        ({"blow_rate_full": 0.5, "lift_speed": 0.4}, "lift_speed"),
    ],
)
def test_a_hammer_says_what_does_not_go_together(change, field):
    with pytest.raises(ModelError) as caught:
        replace(BY_ENERGY, **change)
    assert [fault.field for fault in caught.value.faults] == [field]


def test_a_hydraulic_hammer_may_be_set_by_either():
    assert isinstance(replace(BY_ENERGY, kind="hydraulic"), Hammer)
    assert isinstance(replace(BY_STROKE, kind="hydraulic"), Hammer)
