"""The record of force along the pile is the march itself, and moves as waves must."""

from __future__ import annotations

import numpy as np
import pytest

from matchup.wave.layout import Blows
from matchup.wave.record import record
from tests import examples
from tests.chains import Head, hit, soil, uniform_bar

SEGMENTS = 100
SHORT = Head(ram=0.05, velocity=1.0, k1=400.0, helmet=0.01, k2=400.0)
"""Strikes a pulse much shorter than the bar and leaves."""


def recorded(steps: int, toe: tuple[float, float, float] = (0.0, 0.0, 0.0)) -> np.ndarray:
    bar = uniform_bar(SEGMENTS)
    substeps = np.array([SHORT.substeps(bar.step)], np.int64)
    blows = Blows(np.zeros(1, np.int64), substeps, np.array([SHORT.row()]))
    forces = np.zeros((steps, SEGMENTS))
    grounds = soil(bar.weight.size, toe=toe)
    record(bar, grounds, blows, 0, forces)
    return forces


def test_a_wave_moves_on_by_one_segment_a_step_unchanged():
    forces = recorded(SEGMENTS)
    for steps in (1, 17, 60):
        np.testing.assert_allclose(forces[steps:, steps:], forces[:-steps, :-steps], atol=1e-15)


def test_what_enters_at_the_head_is_the_head_force():
    forces = recorded(SEGMENTS)
    outcome = hit(uniform_bar(SEGMENTS), SHORT, steps=SEGMENTS)
    np.testing.assert_allclose(forces[:, 0], outcome.force, rtol=1e-12, atol=1e-15)


@pytest.mark.parametrize(("toe", "sign", "accuracy"), [(0.0, -1.0, 1e-12), (1e12, 1.0, 1e-8)])
def test_all_of_the_picture_is_the_wave_down_and_its_reflection(toe, sign, accuracy):
    # Closed form until the wave is back at the head: F(x, t) = f(t - x/c) -+ f(t - (2L - x)/c).
    steps = 2 * SEGMENTS - 1
    forces = recorded(steps, toe=(toe, toe, 0.0))
    sent = np.concatenate((np.zeros(2 * SEGMENTS), forces[:, 0]))
    at = np.arange(steps)[:, None] + 2 * SEGMENTS
    segment = np.arange(SEGMENTS)
    formula = sent[at - segment] + sign * sent[at - (2 * SEGMENTS - 1 - segment)]
    # A fixed toe is a spring of 1e12 times the impedance over the travel time.
    np.testing.assert_allclose(forces, formula, atol=accuracy)


@pytest.mark.parametrize(("name", "hammer"), [("final_set", "Avocet"), ("dolphin_tube", "Goshawk")])
def test_the_record_of_a_blow_stays_within_its_envelope_and_reaches_it(name, hammer):
    blow = examples.best_blow(name, hammer).blow
    area = examples.ranking(name).job.pile.section.area
    most = blow.waves.force.max(axis=0) / area
    least = blow.waves.force.min(axis=0) / area
    ends = blow.envelope
    # Where waves cross, the middle of a segment sees other pairs of them than its ends, half a
    # step apart: 3 % of the largest, the accuracy asked of tension.
    squeeze = np.maximum(ends.compression[1:], ends.compression[:-1])
    pull = np.maximum(ends.tension[1:], ends.tension[:-1])
    assert (most <= squeeze + 0.03 * blow.compression).all()
    assert (-least <= pull + 0.03 * max(blow.tension, 0.01 * blow.compression)).all()
    # Peaks overstate by at most half a node's soil resistance: about 1 % here.
    assert most.max() == pytest.approx(blow.compression, rel=0.02)
    assert blow.waves.time[-1] == pytest.approx(blow.duration, rel=1e-12)
