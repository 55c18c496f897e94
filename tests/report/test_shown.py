"""Numbers as people see them."""

from __future__ import annotations

import math

import pytest

from matchup.report.shown import Units, share_text

METRIC, US = Units("metric"), Units("us")
INCH = 0.0254
"""International yard and pound agreement, 1959; exact. [m]"""


@pytest.mark.parametrize(
    ("share", "text"),
    [
        (0.441, "44%"),
        (0.994, "99%"),
        (0.996, "99.6%"),
        (0.9999, "just under 100%"),
        (1.0, "100%"),
        (1.0001, "just over 100%"),
        (1.004, "100.4%"),
        (1.03, "103%"),
    ],
)
def test_nobody_reads_100_percent_of_what_is_exceeded_or_not(share, text):
    assert share_text(share) == text


def test_a_value_and_its_bound_have_the_same_decimals_and_look_different():
    assert METRIC.together(3.2e-3, 4e-3, "set") == ("3.2 mm", "4.0 mm")
    assert METRIC.together(3.97e-3, 4e-3, "set") == ("3.97 mm", "4.00 mm")
    assert METRIC.together(4e-3, 4e-3, "set") == ("4.0 mm", "4.0 mm")
    assert METRIC.together(4e-3 * (1 - 1e-9), 4e-3, "set") == ("4.0000 mm", "4.0000 mm")


def test_absent_and_infinite_values_are_none():
    assert METRIC.value(None, "set") is None
    assert METRIC.value(math.nan, "set") is None
    assert METRIC.value(math.inf, "set") is None
    assert METRIC.speed(None) is None


def test_us_units_are_by_definition():
    assert US.value(INCH, "set") == pytest.approx(1.0)
    assert US.value(12 * INCH, "stroke") == pytest.approx(1.0)
    assert US.speed(12 * INCH) == pytest.approx(60.0)
    assert US.blow_count(12 * INCH / 60) == pytest.approx(60.0)
    assert METRIC.blow_count(0.250 / 248) == pytest.approx(248.0)
    assert METRIC.blow_count(0.0) is None


@pytest.mark.parametrize(
    ("told", "shown"),
    [
        ("toe quake 3.3 mm (a source of 250 mm)", "toe quake 0.13 in (a source of 250 mm)"),
        ("density 2400 kg/m3 (common practice)", "density 150 lb/ft3 (common practice)"),
        ("modulus 210 GPa (a source)", "modulus 30500 ksi (a source)"),
        ("shaft damping 0.33 s/m (silty sand)", "shaft damping 0.101 s/ft (silty sand)"),
        ("100 mm of nylon on 1500 cm2", "3.94 in of nylon on 233 in2"),
        ("6 in of nylon", "6 in of nylon"),
    ],
)  # fmt: skip
def test_readers_words_are_shown_in_us_units_and_sources_left_as_printed(told, shown):
    assert US.retold(told) == shown
    assert METRIC.retold(told) == told
