"""Masses on springs: elastic-plastic stop, and cushions between free masses, against closed forms.

All values follow from the equation given (exact). No gravity.
"""

from __future__ import annotations

import numpy as np
import pytest

from matchup.wave.laws import cushion_force
from tests.chains import Head, hit, soil, uniform_bar


def test_a_mass_on_an_elastic_plastic_spring_goes_as_far_as_printed():
    # Dmax = M v0**2/(2 Ru) + q/2: 6000 kg, 3 m/s, 1 MN, 2.5 mm; printed as 28.25 mm.
    printed = 28.25e-3
    mass, velocity, strength, quake = 6000.0, 3.0, 1e6, 2.5e-3
    formula = mass * velocity**2 / (2 * strength) + quake / 2
    # Helmet and pile of 2 kg each, so stiff that they are as good as rigid: 1e11 N/m the contacts,
    # 1.25e11 N/m the pile. Restitution 0.1 in the contacts calms the light masses.
    light, travel, contact = 2.0, 4e-6, 1e11
    bar = uniform_bar(4, travel, light / travel)
    head = Head(mass, velocity, contact, light, contact, 0.1, 0.1)
    grounds = soil(bar.weight.size, toe=(strength / quake, strength, 0.0))
    outcome = hit(bar, head, grounds, steps=round(40e-3 / bar.step))
    program = outcome.row["toe_most"]
    assert formula == pytest.approx(printed, abs=1e-8)
    # 4 kg of 6000 are hit plastically: 7e-4 of the energy. Contacts and pile hold (1 MN)**2/2 times
    # 2.8e-11 m/N, 14 J of 27 kJ: 5e-4.
    assert program == pytest.approx(formula, rel=1.3e-3)
    assert program < formula


@pytest.mark.parametrize(
    ("restitution", "ram_printed", "helmet_printed", "lost_printed"),
    [(1.0, 2.800, 7.000, 0.0), (0.5, 3.150, 5.250, 0.125)],
)
def test_a_cushion_between_free_masses_gives_newtons_restitution(
    restitution, ram_printed, helmet_printed, lost_printed
):
    # Unloading stiffness k/e**2 gives Newton's e: 5000 kg at 4.2 m/s on 1000 kg at rest.
    ram, helmet, velocity = 5000.0, 1000.0, 4.2
    common = ram * velocity / (ram + helmet)
    ram_formula = common - restitution * helmet / (ram + helmet) * velocity
    helmet_formula = common + restitution * ram / (ram + helmet) * velocity
    reduced = ram * helmet / (ram + helmet)
    lost_formula = (1 - restitution**2) * reduced / ram
    # The pile's cushion is next to nothing, 1 N/m, so the helmet is free.
    bar = uniform_bar(10, 0.005, 1e6)
    outcome = hit(bar, Head(ram, velocity, 1e9, helmet, 1.0, restitution), steps=10, substeps=400)
    ram_v = outcome.row["ram_velocity"]
    helmet_v = (outcome.row["momentum"] - ram * ram_v) / helmet
    energy = 0.5 * ram * ram_v**2 + 0.5 * helmet * helmet_v**2
    lost = 1 - energy / (0.5 * ram * velocity**2)
    for printed, formula, program in (
        (ram_printed, ram_formula, ram_v),
        (helmet_printed, helmet_formula, helmet_v),
        (lost_printed, lost_formula, lost),
    ):
        assert formula == pytest.approx(printed, abs=1e-12)
        # 1e-4: the step in which the cushion lets go is not the moment in which it does.
        assert program == pytest.approx(formula, abs=1e-4)


@pytest.mark.parametrize("restitution", [0.25, 0.5, 0.8, 1.0])
def test_a_cushion_cycle_gives_back_the_square_of_the_restitution(restitution):
    # exact: from unloading along k/e**2 to zero force.
    loading = 3e8
    unloading = loading / restitution**2
    most = 4e-3
    down = np.linspace(0.0, most, 20_001)
    force_down = np.array([cushion_force(x, x, loading, unloading) for x in down])
    up = down[::-1]
    force_up = np.array([cushion_force(x, most, loading, unloading) for x in up])
    put_in = np.trapezoid(force_down, down)
    given_back = -np.trapezoid(force_up, up)
    assert put_in == pytest.approx(0.5 * loading * most**2, rel=1e-12)
    # 1e-7: the sampling of the corner where the cushion lets go.
    assert given_back / put_in == pytest.approx(restitution**2, abs=1e-7)
