"""Smooth maxima and minima against the exact ones, with the errors that their docstrings state."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimiser.engineering.smooth import proportional_max, proportional_min, smooth_max, smooth_min

anything = st.floats(-1e4, 1e4)
positive = st.floats(1e-3, 1e6)
EPSILON = 1e-4


def test_worked_values() -> None:
    assert smooth_max(3.0, 3.0, 0.2) == pytest.approx(3.1, abs=1e-12)
    assert smooth_min(3.0, 3.0, 0.2) == pytest.approx(2.9, abs=1e-12)
    assert proportional_max(4.0, 4.0, 1e-4) == pytest.approx(4.04, abs=1e-12)
    assert proportional_min(4.0, 4.0, 1e-4) == pytest.approx(3.96, abs=1e-12)


@given(anything, anything, st.floats(1e-3, 10.0))
def test_additive_pair_errs_by_half_its_width_at_most(a: float, b: float, delta: float) -> None:
    rounding = 1e-11
    assert -rounding <= smooth_max(a, b, delta) - max(a, b) <= delta / 2 + rounding
    assert -rounding <= min(a, b) - smooth_min(a, b, delta) <= delta / 2 + rounding


@given(positive, positive)
def test_proportional_pair_errs_by_one_percent_at_most(a: float, b: float) -> None:
    assert 1.0 - 1e-14 <= proportional_max(a, b, EPSILON) / max(a, b) <= 1.01 + 1e-14
    assert 0.99 - 1e-14 <= proportional_min(a, b, EPSILON) / min(a, b) <= 1.0 + 1e-14


@given(st.floats(1e-4, 1e4), st.floats(1.001, 100.0), positive)
def test_smaller_of_a_size_and_a_bound_grows_less_than_the_size(
    share: float, more: float, bound: float
) -> None:
    # This is what makes the number of parallel units rise.
    a = share * bound
    assert proportional_min(a * more, bound, EPSILON) < more * proportional_min(a, bound, EPSILON)
    assert proportional_min(a * more, bound, EPSILON) > proportional_min(a, bound, EPSILON)
