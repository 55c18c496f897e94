"""Hammers that are set by energy in the ranking: the same search, told in energies."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

import matchup
from matchup.analysis.rig import Rig
from tests import jobs

G = 9.80665


def by_energy(tonnes: float, **more: object):
    """The energy-set twin of a hydraulic hammer: steps of the same stroke."""
    hammer = jobs.hydraulic(tonnes, name=f"energy {tonnes:g} t", **more)
    return replace(hammer, kind="double-acting", set_by_energy=True)


@pytest.fixture(scope="module")
def twins():
    job = jobs.small_job(hammers=(jobs.hydraulic(5.0), by_energy(5.0)))
    return matchup.rank(job)


def test_a_hammer_and_its_energy_set_twin_do_the_same(twins):
    plain, energy = sorted(twins.options, key=lambda option: option.hammer.set_by_energy)
    assert plain.target.stroke == energy.target.stroke
    assert plain.target.set == energy.target.set
    assert plain.stack == energy.stack
    assert plain.target.energy_set is None
    assert energy.target.energy_set == pytest.approx(5000 * G * energy.target.stroke, rel=1e-12)


def test_the_setting_is_told_as_an_energy_beside_its_equivalent_stroke(twins):
    energy = next(option for option in twins.options if option.hammer.set_by_energy)
    stroke = energy.target.stroke
    told = f"{5000 * G * stroke / 1e3:.1f} kJ ({stroke:.2f} m)"
    alone = matchup.check(twins.job, energy.hammer.name)
    assert told in alone.to_text()
    header, *rows = (line.split(",") for line in twins.to_csv().splitlines())
    cells = {row[header.index("hammer")]: row[header.index("energy_set_kJ")] for row in rows}
    assert float(cells["energy 5 t"]) == pytest.approx(5 * G * stroke, rel=1e-9)
    assert cells["hydraulic 5 t"] == ""
    document = alone.to_dict()
    assert document["energy_set_kJ"] == pytest.approx(5 * G * stroke, rel=1e-9)
    assert document["schedule"][0]["energy_set_kJ"] == document["energy_set_kJ"]
    assert "set at" not in matchup.check(twins.job, "hydraulic 5 t").to_text()


def test_a_blow_may_be_asked_for_by_its_energy(twins):
    name = "energy 5 t"
    stroke = 0.5
    energy = 5000 * G * stroke
    same = {"cushion": "oak", "sheets": 6}
    by_stroke = matchup.blow(twins.job, name, stroke, **same)
    told = matchup.blow(twins.job, name, energy=f"{energy / 1e3!r} kJ", **same)
    assert told.blow.set == pytest.approx(by_stroke.blow.set, rel=1e-9)
    assert told.to_dict()["energy_set_kJ"] == pytest.approx(energy / 1e3, rel=1e-12)
    with pytest.raises(matchup.InputError, match="together with a stroke"):
        matchup.blow(twins.job, name, stroke, energy=energy, **same)


def test_the_fastest_setting_is_found_where_the_rate_falls_with_the_setting():
    # From 90 to 12 blows a minute: speed peaks inside the range of settings.
    hammer = by_energy(5.0, blow_rate_max=90 / 60, blow_rate_full=12 / 60)
    job = jobs.small_job(hammers=(hammer,), objective="time")
    option = matchup.rank(job).options[0]
    rig = Rig(job)
    best = 0.0
    for stack in range(len(rig.stacks)):
        cell = jobs.scan(rig, 0, 0, stack)
        limits = job.limits.compression, job.limits.tension
        window = jobs.plain_window(cell, job.stages[0].set_needed, *limits)
        if window.state != "open":
            continue
        top = jobs.plain_top(cell, window.at, *limits)
        speeds = [
            hammer.blow_rate(cell.strokes[i]) * cell.sets[i] for i in range(window.at, top + 1)
        ]
        best = max(best, *speeds)
    assert option.target.speed == pytest.approx(best, rel=1e-9)
    assert option.target.stroke < hammer.stroke_max
    assert np.isfinite(best)
