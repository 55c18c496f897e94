"""The least step at which something holds, for many rows at once."""

from __future__ import annotations

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

from matchup.search.steps import first_step


@given(
    firsts=st.lists(st.integers(1, 60), min_size=1, max_size=8),
    last=st.integers(1, 50),
    stride=st.integers(1, 9),
)
def test_what_holds_from_a_step_on_is_found_at_that_step(firsts, last, stride):
    edges = np.array(firsts)
    found = first_step(lambda rows, steps: steps >= edges[rows], edges.size, last, stride)
    assert found.tolist() == [first if first <= last else last + 1 for first in firsts]


def test_no_step_is_asked_about_twice_and_step_zero_never():
    asked: list[tuple[int, int]] = []

    def holds(rows, steps):
        asked.extend(zip(rows.tolist(), steps.tolist(), strict=True))
        return steps >= np.array([13, 29, 99])[rows]

    assert first_step(holds, 3, 40, 4).tolist() == [13, 29, 41]
    assert len(asked) == len(set(asked))
    assert min(step for _, step in asked) == 4
    assert max(step for _, step in asked) == 40


def test_of_what_holds_in_between_only_strides_tell():
    """A gap between strides is passed over; what a stride meets is refined within it."""
    holds_at = {6, 7, 20, 21, 22, 23, 24}
    found = first_step(lambda _, steps: np.isin(steps, list(holds_at)), 1, 40, 4)
    assert found.tolist() == [20]


def test_without_rows_nothing_is_asked():
    assert first_step(lambda rows, steps: 1 / 0, 0, 10, 2).size == 0
