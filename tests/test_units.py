"""Units: every spelling of the table against `pint`, and nothing that is guessed."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from matchup import units
from matchup.units import (
    QUANTITIES,
    UnitError,
    display_unit,
    format_quantity,
    parse_number,
    parse_quantity,
    to_display,
    unit_factor,
)
from tests import pint_units

TABLE = units._UNITS
COUNTS = units._BLOW_COUNT
SPELLINGS = [(dimension, unit) for dimension, known in TABLE.items() for unit in known]
OF_DIMENSION = {kind.dimension: name for name, kind in QUANTITIES.items()}


@pytest.mark.parametrize(("dimension", "unit"), SPELLINGS)
def test_every_spelling_is_what_pint_says(dimension, unit):
    expected = pint_units.factor(unit, dimension)
    assert unit_factor(unit, OF_DIMENSION[dimension]) == pytest.approx(expected, rel=1e-12)
    read = parse_quantity(f"2.5 {unit}", OF_DIMENSION[dimension])
    assert read == pytest.approx(2.5 * expected, rel=1e-12)


@pytest.mark.parametrize("unit", COUNTS)
def test_every_blow_count_is_over_the_length_that_pint_says(unit):
    length = pint_units.length_of_count(unit)
    assert parse_quantity(f"60 {unit}", "set") == pytest.approx(length / 60, rel=1e-12)
    assert parse_quantity(f"60 {unit}".replace("/", " / "), "set") == pytest.approx(length / 60)


def test_exact_definitions():
    # International yard and pound agreement (1959); standard gravity, ISO 80000-3.
    assert units.INCH == 0.0254
    assert units.POUND == 0.45359237
    assert units.GRAVITY == 9.80665
    assert parse_quantity("1 ft", "length") == 0.3048
    assert parse_quantity("1 lbf", "force") == 0.45359237 * 9.80665


def test_weight_stands_for_mass_through_standard_gravity():
    assert parse_quantity("9.80665 kN", "mass") == pytest.approx(1000.0, rel=1e-12)
    assert parse_quantity("2 kip", "mass") == pytest.approx(2000 * 0.45359237, rel=1e-12)


@pytest.mark.parametrize("quantity", QUANTITIES)
@pytest.mark.parametrize("system", ["metric", "us"])
@given(value=st.floats(1e-9, 1e12))
def test_values_come_back_from_their_display_units(quantity, system, value):
    shown = to_display(value, quantity, system)
    text = f"{shown!r} {display_unit(quantity, system)}"
    assert parse_quantity(text, quantity) == pytest.approx(value, rel=1e-9)
    printed = format_quantity(value, quantity, system, digits=12)
    assert parse_quantity(printed, quantity) == pytest.approx(value, rel=1e-9)


@pytest.mark.parametrize(
    ("text", "quantity", "must", "do"),
    [
        # What parsers of free text read as a knot, a millipascal and a mass times a length.
        ("500 kn", "force", "'kn' is none", "Did you mean 'kN'?"),
        ("50 mPa", "stress", "'mPa' is none", "Did you mean 'MPa'?"),
        ("50 ft lb", "energy", "'ft lb' is none", "Did you mean 'ft-lb'?"),
        ("50 KN", "force", "'KN' is none", "Did you mean 'kN'?"),
        ("2 Mm", "length", "'Mm' is none", "Did you mean 'm"),
        ("2 ton", "mass", "without doubt, and 'ton' may be several", "t (1000 kg), short"),
        ("2 tons", "force", "without doubt, and 'tons' may be", "long ton (2240 lb)"),
        ("5 k", "force", "'k' may be several", "Write kip or kN."),
        ("5 #", "mass", "'#' may be several", "Write lb or lbf."),
        ("24 kg", "length", "must be a length, and 'kg' is not a unit of length", "m or ft"),
        ("24 kg", "area", "must be an area, and 'kg'", "cm2 or in2"),
        ("24", "length", "must have a unit", '"12 m"'),
        ("", "length", "must be one number with a unit", '"12 m"'),
        ("m", "length", "must be one number with a unit", ""),
        ("1,5 m", "length", "must be one number with a unit", "decimal comma"),
        ("1,500.5 m", "length", "must be one number with a unit", "decimal comma"),
        ("1 500 m", "length", "must be one number with a unit", ""),
        ("1\u00a0500 m", "length", "must be one number with a unit", ""),
        ("1'500 m", "length", "must be one number with a unit", ""),
        ("1.5.2 m", "length", "must be one number with a unit", ""),
        ("5 ft 3 in", "length", "'ft 3 in' is none", ""),
        ("1/2 in", "length", "'/2 in' is none", ""),
        ("\u0661\u0662 m", "length", "must be one number with a unit", ""),
        ("nan m", "length", "must be one number with a unit", ""),
        ("inf m", "length", "must be one number with a unit", ""),
        ("1e400 m", "length", "must be a number of possible size", ""),
        ("1e30 GPa", "stress", "must be a number of possible size", ""),
        ("1e-40 m", "length", "must be a number of possible size", ""),
        ("60 blows/yd", "set", "a blow count over a known length", "blows/25cm"),
        ("0 blows/ft", "set", "must be a blow count > 0", ""),
        ("-3 blows/ft", "set", "must be a blow count > 0", ""),
        ("60 blows/ft", "length", "'blows/ft' is none", ""),
        ("24 !!", "length", "'!!' is none", "Use for example m or ft."),
    ],
)
def test_what_is_no_value_is_refused_with_what_to_do(text, quantity, must, do):
    with pytest.raises(UnitError) as caught:
        parse_quantity(text, quantity)
    assert must in caught.value.must
    assert do in caught.value.do
    assert str(caught.value).endswith(".")


@pytest.mark.parametrize(
    ("text", "quantity", "value"),
    [
        ("400mm", "length", 0.4),
        ("  400   mm ", "length", 0.4),
        ("+4.e2 mm", "length", 0.4),
        ("\u22124 m", "length", -4.0),
        ("1600 cm²", "area", 0.16),
        ("1600 cm^2", "area", 0.16),
        ("50 N / mm²", "stress", 50e6),
        ("30 kN·m", "energy", 30e3),
        ("2 blow/mm", "number", None),
        ("85 %", "number", 0.85),
        ("0.85", "number", 0.85),
        ("0.85 -", "number", 0.85),
        ("0 m", "length", 0.0),
    ],
)
def test_usual_ways_of_writing(text, quantity, value):
    if value is None:
        with pytest.raises(UnitError):
            parse_quantity(text, quantity)
    else:
        assert parse_quantity(text, quantity) == pytest.approx(value, rel=1e-12)


@pytest.mark.parametrize(
    ("text", "value"), [("7.5", 7.5), (" -3 ", -3.0), ("\u22123", -3.0), ("1e3", 1000.0)]
)
def test_plain_numbers(text, value):
    assert parse_number(text) == value


@pytest.mark.parametrize("text", ["7,5", "1 000", "", "x", "nan", "inf", "1e999", "0x10", "1_0"])
def test_what_is_no_plain_number_is_refused(text):
    with pytest.raises(UnitError, match="must be a number"):
        parse_number(text)


@given(text=st.text(max_size=20), quantity=st.sampled_from(list(QUANTITIES)))
def test_any_text_is_a_value_or_a_unit_error(text, quantity):
    try:
        value = parse_quantity(text, quantity)
    except UnitError:
        return
    assert math.isfinite(value)


@given(number=st.floats(allow_nan=False), spelling=st.sampled_from(SPELLINGS))
def test_a_number_with_a_known_unit_is_read_in_full_or_refused(number, spelling):
    dimension, unit = spelling
    expected = number * pint_units.factor(unit, dimension)
    try:
        value = parse_quantity(f"{number!r} {unit}", OF_DIMENSION[dimension])
    except UnitError:
        assert not 1e-30 <= abs(expected) <= 1e30
    else:
        assert value == pytest.approx(expected, rel=1e-12)
