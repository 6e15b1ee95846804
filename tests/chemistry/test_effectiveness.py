"""Effectiveness factor of Dyson & Simon (1968) between and beside its published pressures: smooth, and a share.

What it is at the published pressures is tested in `test_outside_figures`.
"""

from __future__ import annotations

import pytest
from hypothesis import given, seed, settings
from hypothesis import strategies as st

from optimiser.chemistry.effectiveness import DYSON_SIMON_SETS, dyson_simon, dyson_simon_set

ATM = 101325.0
STEP = 1e-3
PUBLISHED = [atm for atm, _ in DYSON_SIMON_SETS]


def _factor(temperature: float, atm: float, conversion: float) -> float:
    return float(dyson_simon(temperature, atm * ATM, conversion))


@pytest.mark.parametrize("atm", PUBLISHED)
@pytest.mark.parametrize(("temperature", "conversion"), [(640.0, 0.05), (690.0, 0.15), (740.0, 0.25)])
def test_no_jump_and_no_corner_at_a_published_pressure(atm: float, temperature: float, conversion: float) -> None:
    """Straight pieces would turn their slope at a point and show a second difference of about 1e-6."""
    below, here, above = (_factor(temperature, atm + h, conversion) for h in (-STEP, 0.0, STEP))
    assert abs(above - below) < 2e-5
    assert abs(above - 2.0 * here + below) < 2e-8


@pytest.mark.parametrize("part", [0, 1])
def test_halfway_between_two_pressures_stands_the_mean(part: int) -> None:
    """Linear in pressure; rounding the corners over an atm moves the middle by less than 0.002."""
    (low, first), (high, second) = DYSON_SIMON_SETS[part : part + 2]
    for temperature, conversion in ((650.0, 0.1), (700.0, 0.2)):
        mean = sum(float(dyson_simon_set(b, temperature, conversion)) for b in (first, second)) / 2.0
        assert 0.1 < mean < 0.9
        assert _factor(temperature, 0.5 * (low + high), conversion) == pytest.approx(mean, abs=0.002)


@seed(23)
@settings(max_examples=200)
@given(st.floats(550.0, 850.0), st.floats(50.0, 400.0), st.floats(0.0, 0.5))
def test_the_factor_is_a_share(temperature: float, atm: float, conversion: float) -> None:
    """Beyond its range too, where the polynomials alone run from far below 0 to far above 1."""
    assert 0.0 < _factor(temperature, atm, conversion) <= 1.0


def test_outside_the_published_pressures_the_nearest_set_holds() -> None:
    for near, far in ((150.0, 80.0), (300.0, 420.0)):
        assert _factor(700.0, far, 0.15) == pytest.approx(_factor(700.0, near, 0.15), abs=0.01)
