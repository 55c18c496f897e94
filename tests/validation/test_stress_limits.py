"""Driving stress limits against the figures printed in the published rules.

Sources, all as quoted second-hand: FHWA-NHI-16-009 (2016) Eqs. 8-17, 8-33, 8-62 and 8-63 for AASHTO
LRFD 10.7.8; M. Tomlinson and J. Woodward, *Pile Design and Construction Practice*, Table 2.4 for
EN 12699. That EN 12699's limit includes the prestress is from memory.
"""

from __future__ import annotations

import math
import re

import pytest

from matchup.errors import ModelError
from matchup.model.limits import RULES, stress_limits
from matchup.model.pile import Pile, Section, concrete_modulus

KSI = 6894757.293168361
MPA = 1e6


def pile(material: str, strength: float, prestress: float = 0.0) -> Pile:
    return Pile.uniform(material, Section.square(0.4), 20.0, 30e9, 2400.0, strength, prestress)


@pytest.mark.parametrize(
    ("rule", "material", "strength", "prestress", "unit", "compression", "tension", "digit"),
    [
        # f'c 6 ksi, fpe 0.8 ksi: printed 4.30 and 1.033 ksi.
        ("aashto", "concrete", 6 * KSI, 0.8 * KSI, KSI, 4.30, 1.033, 0.0005),
        # fy 50 ksi: printed 45 ksi; tension the same, common practice.
        ("aashto", "steel", 50 * KSI, 0.0, KSI, 45.0, 45.0, 0.0005),
        # fck 45 MPa: printed 36.0 and, monitored, 39.6 MPa.
        ("en 12699", "concrete", 45 * MPA, 0.0, MPA, 36.0, None, 0.05),
        ("en 12699 monitored", "concrete", 45 * MPA, 0.0, MPA, 39.6, None, 0.05),
        # fy 355 MPa: printed 319.5 and, monitored, 383.4 MPa.
        ("en 12699", "steel", 355 * MPA, 0.0, MPA, 319.5, 319.5, 0.05),
        ("en 12699 monitored", "steel", 355 * MPA, 0.0, MPA, 383.4, 383.4, 0.05),
    ],
)
def test_limits_are_the_printed_ones(
    rule, material, strength, prestress, unit, compression, tension, digit
):
    given = {} if tension is not None else {"tension_stress": 1 * MPA}
    limits = stress_limits(pile(material, strength, prestress), rule, **given)
    assert limits.compression / unit == pytest.approx(compression, abs=digit)
    if tension is not None:
        assert limits.tension / unit == pytest.approx(tension, abs=digit)


@pytest.mark.parametrize(
    ("species", "limit_ksi"), [("Douglas fir", 3.74), ("southern pine", 3.59), ("red oak", 3.29)]
)
def test_timber_limits_are_the_reference_value_times_the_printed_factors(species, limit_ksi):
    reference = limit_ksi / (1.15 * 2.6)  # the printed limit is 1.15 x 2.6 Fco
    limits = stress_limits(pile("timber", reference * KSI), "aashto")
    assert limits.compression / KSI == pytest.approx(limit_ksi, abs=0.005)
    assert limits.tension == limits.compression


def test_the_metric_form_of_the_tension_allowance_is_a_quarter_of_the_root():
    # 0.095 sqrt(f'c in ksi) ksi is printed as 0.25 sqrt(f'c in MPa) MPa.
    limits = stress_limits(pile("concrete", 40 * MPA), "aashto")
    assert limits.tension / MPA == pytest.approx(0.25 * math.sqrt(40), rel=5e-3)


def test_severe_corrosion_leaves_the_prestress_alone():
    limits = stress_limits(pile("concrete", 50 * MPA, 6 * MPA), "aashto severe corrosion")
    assert limits.tension == 6 * MPA
    with pytest.raises(ModelError, match="tension"):
        stress_limits(pile("concrete", 50 * MPA), "aashto severe corrosion")


def test_prestress_is_taken_off_in_compression_and_added_in_tension():
    limits = stress_limits(pile("concrete", 50 * MPA, 6 * MPA), compression=0.85, tension=0.03)
    assert limits.compression == pytest.approx((0.85 * 50 - 6) * MPA)
    assert limits.tension == pytest.approx((0.03 * 50 + 6) * MPA)


def test_a_share_kept_back_for_bending_comes_off_both_limits_last():
    given = {"compression": 0.85, "tension": 0.03}
    whole = stress_limits(pile("concrete", 50 * MPA, 6 * MPA), **given)
    limits = stress_limits(pile("concrete", 50 * MPA, 6 * MPA), **given, bending=0.2)
    assert limits.compression == pytest.approx(0.8 * (0.85 * 50 - 6) * MPA)
    assert limits.tension == pytest.approx(0.8 * (0.03 * 50 + 6) * MPA)
    assert limits.parts[0].squeeze.text == f"{whole.parts[0].squeeze.text}, less 20% for bending"
    for share in (-0.1, 1.0, 10.0, math.nan):
        with pytest.raises(ModelError, match="bending"):
            stress_limits(pile("concrete", 50 * MPA, 6 * MPA), **given, bending=share)


@pytest.mark.parametrize("rule", list(RULES))
def test_a_formula_with_its_printed_numbers_gives_its_limit(rule):
    # The text behind the colon is arithmetic in the symbols that are told beside it.
    for material in RULES[rule]:
        prestress = 5 * MPA if material == "concrete" else 0.0
        ruled = stress_limits(pile(material, 40 * MPA, prestress), rule, tension_stress=1 * MPA)
        for limit in (ruled.parts[0].squeeze, ruled.parts[0].pull):
            if not limit.values:
                continue
            formula = limit.text.split(": ")[1].replace(" x ", " * ")
            formula = formula.replace("sqrt(f'c in ksi)", "(f'c / ksi)**0.5 * ksi")
            formula = re.sub(r"(\d) (f|F|\()", r"\1 * \2", formula).replace("f'c", "fc")
            names = {name.replace("'", ""): value for name, value in limit.values} | {"ksi": KSI}
            assert limit.stress == pytest.approx(eval(formula, {}, names), rel=1e-12)


def test_a_monitored_steel_limit_above_yield_is_warned_of():
    limits = stress_limits(pile("steel", 355 * MPA), "en 12699 monitored")
    assert any("above the yield stress" in text for text in limits.warnings)
    assert not stress_limits(pile("steel", 355 * MPA), "en 12699").warnings


def test_a_tension_limit_above_the_published_allowance_is_warned_of():
    weak = stress_limits(pile("concrete", 50 * MPA, 6 * MPA), compression=0.8, tension=0.1)
    assert any("times the published allowance" in text for text in weak.warnings)


def test_a_rule_without_a_tension_limit_asks_for_one():
    with pytest.raises(ModelError) as caught:
        stress_limits(pile("concrete", 45 * MPA), "en 12699")
    assert [fault.field for fault in caught.value.faults] == ["tension"]


def test_a_rule_says_which_materials_it_knows():
    with pytest.raises(ModelError) as caught:
        stress_limits(pile("timber", 9 * MPA), "en 12699")
    assert "steel and concrete" in caught.value.faults[0].must


def test_nothing_given_names_both_sides():
    with pytest.raises(ModelError) as caught:
        stress_limits(pile("steel", 355 * MPA))
    assert {fault.field for fault in caught.value.faults} == {"compression", "tension"}


@pytest.mark.parametrize("rule", list(RULES))
def test_every_rule_names_its_source_in_its_text(rule):
    for material in RULES[rule]:
        prestress = 5 * MPA if material == "concrete" else 0.0
        limits = stress_limits(pile(material, 40 * MPA, prestress), rule, tension_stress=1 * MPA)
        assert limits.parts[0].squeeze.text.startswith(("AASHTO LRFD 10.7.8", "EN 12699"))


def test_the_modulus_of_concrete_follows_the_printed_formula():
    # FHWA-NHI-16-009 Eq. 8-1: E[ksi] = 1820 sqrt(f'c[ksi]); 4 ksi gives 3640 ksi.
    assert concrete_modulus(4 * KSI) / KSI == pytest.approx(3640.0, rel=1e-12)
