"""Mean temperature differences, coefficients, steam saturation and cooling water."""

from __future__ import annotations

from decimal import Decimal
from typing import Any

import pytest
from CoolProp.CoolProp import PropsSI
from hypothesis import given
from hypothesis import strategies as st

from optimiser.engineering.heat import (
    coefficient_at,
    cooling_water_flow,
    log_mean,
    steam_saturation_temperature,
)


def _exact(d1: float, d2: float) -> float:
    """(d1 - d2)/ln(d1/d2) in 28 digits, so that nearly equal ends keep their digits."""
    a, b = Decimal(d1), Decimal(d2)
    return float(a) if a == b else float((a - b) / (a / b).ln())


@given(st.floats(0.5, 500.0), st.floats(0.5, 500.0))
def test_log_mean_is_exact_up_to_a_ratio_of_1000(d1: float, d2: float) -> None:
    assert log_mean(d1, d2) == pytest.approx(_exact(d1, d2), rel=1e-14)


@pytest.mark.parametrize(("ratio", "error"), [(1.0 + 1e-9, 1e-14), (1e3, 1e-14), (1e6, 1e-8)])
def test_log_mean_keeps_its_stated_error(ratio: float, error: float) -> None:
    assert log_mean(7.0 * ratio, 7.0) == pytest.approx(_exact(7.0 * ratio, 7.0), rel=error)


def test_log_mean_worked_values() -> None:
    assert log_mean(40.0, 20.0) == pytest.approx(28.8539, abs=1e-4)
    assert log_mean(10.0, 10.0) == pytest.approx(10.0, rel=1e-15)


def test_coefficient_worked_value() -> None:
    assert coefficient_at(400.0, 300e5) == pytest.approx(527.80, abs=0.01)
    assert coefficient_at(400.0, 150e5) == 400.0


@pytest.mark.parametrize("bar", [1.0, 2.0, 5.0, 10.0, 20.0, 40.0, 60.0, 80.0, 100.0])
def test_steam_saturation_against_coolprop(bar: float) -> None:
    # CoolProp 8, IAPWS-95; IF97 is a fit to it.
    assert steam_saturation_temperature(bar * 1e5) == pytest.approx(
        PropsSI("T", "P", bar * 1e5, "Q", 0, "Water"), abs=0.05
    )


def test_steam_saturation_against_the_verification_table(figures: dict[str, Any]) -> None:
    # IAPWS R7-97(2012), six decimals, from memory.
    for pressure, temperature in figures["steam"]["cases"]:
        assert steam_saturation_temperature(pressure) == pytest.approx(temperature, abs=1e-6)


def test_cooling_water_worked_value() -> None:
    assert cooling_water_flow(41.8e6, 10.0) == pytest.approx(1.0)
