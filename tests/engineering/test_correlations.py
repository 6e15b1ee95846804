"""Cost correlations: published values, strict rise with size, pressure factors, ranges."""

from __future__ import annotations

from math import log
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimiser.engineering.correlations import (
    LogQuadratic,
    PowerLaw,
    bare_module,
    gauge_bar,
    out_of_range,
    purchased_cost,
)
from optimiser.engineering.equipment import load_equipment

CORRELATIONS = load_equipment().correlations
NAMES = sorted(CORRELATIONS)
PRESSED = sorted(name for name in NAMES if CORRELATIONS[name].pressure is not None)


def _sized(name: str, share: float) -> float:
    """A size in SI from 1/100 of the lower end of the range (share 0) to 1000 times the upper (share 1)."""
    correlation = CORRELATIONS[name]
    low, high = correlation.low * 1e-2, correlation.high * 1e3
    return low * (high / low) ** share * correlation.scale


def test_purchased_costs(figures: dict[str, Any]) -> None:
    # Turton et al., appendix A.
    worked = figures["turton"]["worked"]
    exchanger = worked["exchanger"]
    curve = CORRELATIONS["exchanger_floating_head"].curve
    assert curve.purchased(exchanger["area"]) == pytest.approx(exchanger["purchased"], abs=0.1)
    for name, case, key in (
        ("compressor_centrifugal", worked["compressor"], "power"),
        ("vessel_vertical", worked["vessel"], "volume"),
    ):
        for size, cost in zip(case[key], case["purchased"], strict=True):
            assert CORRELATIONS[name].curve.purchased(size) == pytest.approx(cost, abs=0.6)


def test_bare_module_of_an_exchanger(figures: dict[str, Any]) -> None:
    case = figures["turton"]["worked"]["exchanger"]
    floating = CORRELATIONS["exchanger_floating_head"]
    assert floating.fixed + floating.scaled == pytest.approx(case["factor_low"])
    assert bare_module(floating, case["area"]) == pytest.approx(case["bare_module"], rel=1e-3)
    assert floating.pressure is not None
    assert floating.pressure.at(100.0) == pytest.approx(case["pressure_factor_100"], abs=2e-5)
    ratio = bare_module(floating, case["area"], 100.0) / purchased_cost(floating, case["area"])
    assert ratio == pytest.approx(case["factor_100"], abs=3e-5)


def test_bare_module_of_the_book(figures: dict[str, Any]) -> None:
    # The book's own example in three figures, from memory; its rounding and ours differ by 1.3 %.
    case = figures["turton"]["published"]["exchanger"]
    floating = CORRELATIONS["exchanger_floating_head"]
    assert purchased_cost(floating, case["area"]) == pytest.approx(case["purchased"], rel=0.015)
    assert bare_module(floating, case["area"]) == pytest.approx(case["bare_module"], rel=0.015)


def test_cost_by_shell_mass() -> None:
    # Towler and Sinnott, Chemical Engineering Design, costs of January 2010.
    vessel = CORRELATIONS["vessel_shell_mass"]
    assert vessel.curve == PowerLaw(11600.0, 34.0, 0.85)
    assert vessel.curve.purchased(1e5) == pytest.approx(616215.0, abs=0.1)
    assert bare_module(vessel, 1e5, material=1.5) == pytest.approx(616215.0 * (2.25 + 1.82 * 1.5), rel=1e-3)


@pytest.mark.parametrize("name", NAMES)
@given(share=st.floats(0.0, 1.0), more=st.floats(1.001, 10.0))
def test_cost_rises_strictly_with_size(name: str, share: float, more: float) -> None:
    size = _sized(name, share)
    assert bare_module(CORRELATIONS[name], size * more, 50.0) > bare_module(CORRELATIONS[name], size, 50.0)


@pytest.mark.parametrize("name", NAMES)
@given(share=st.floats(0.0, 1.0))
def test_curve_is_followed_on_its_rising_branch(name: str, share: float) -> None:
    correlation = CORRELATIONS[name]
    low, high = correlation.rising
    size = low * (high / low) ** share
    cost = purchased_cost(correlation, size * correlation.scale)
    assert cost == pytest.approx(correlation.curve.purchased(size), rel=0.01)


@pytest.mark.parametrize("name", NAMES)
def test_above_the_range_units_stand_side_by_side(name: str) -> None:
    correlation = CORRELATIONS[name]
    one = correlation.curve.purchased(correlation.high)
    many = purchased_cost(correlation, 20.0 * correlation.high * correlation.scale)
    assert many == pytest.approx(20.0 * one, rel=2e-3)


@pytest.mark.parametrize("name", NAMES)
def test_below_the_range_the_smallest_is_bought(name: str) -> None:
    correlation = CORRELATIONS[name]
    least = correlation.curve.purchased(correlation.rising[0])
    assert purchased_cost(correlation, 0.01 * correlation.low * correlation.scale) == pytest.approx(
        least, rel=1e-3
    )


def test_falling_branches_are_cut() -> None:
    # d(ln C)/d(ln A) = K2 + 2 K3 log10 A is 0.05 where the rising branch begins.
    floating = CORRELATIONS["exchanger_floating_head"]
    assert floating.rising[0] == pytest.approx(10 ** (0.9009 / 0.6374))
    assert floating.curve.purchased(10.0) > floating.curve.purchased(21.0)
    assert CORRELATIONS["exchanger_u_tube"].rising == (10.0, 1000.0)
    # The drive's curve falls above 8.8 MW; a range that reached that far would be cut before it.
    drive = CORRELATIONS["drive_electric"].curve
    assert drive.rising(75.0, 20000.0)[1] == pytest.approx(10 ** (1.3691 / 0.3596))
    assert drive.purchased(10000.0) < drive.purchased(8837.0)
    assert LogQuadratic(3.0, 0.6, 0.0).rising(1.0, 2.0) == (1.0, 2.0)


@pytest.mark.parametrize("name", PRESSED)
@given(gauge=st.floats(-1.0, 400.0))
def test_pressure_factor_is_never_below_one(name: str, gauge: float) -> None:
    factor = CORRELATIONS[name].pressure
    assert factor is not None
    assert factor.at(gauge) >= 1.0
    if gauge <= factor.low:
        assert factor.at(gauge) <= 1.0015


@pytest.mark.parametrize("name", PRESSED)
@given(gauge=st.floats(5.0, 400.0))
def test_pressure_factor_follows_its_curve(name: str, gauge: float) -> None:
    factor = CORRELATIONS[name].pressure
    assert factor is not None
    assert factor.low == 5.0
    x = log(gauge) / log(10.0)
    curve = 10 ** (factor.c1 + factor.c2 * x + factor.c3 * x * x)
    assert max(curve, 1.0) <= factor.at(gauge) <= max(curve, 1.0) + 0.0015


@pytest.mark.parametrize("name", PRESSED)
@given(gauge=st.floats(-1.0, 400.0), more=st.floats(1.0, 50.0))
def test_pressure_factor_rises(name: str, gauge: float, more: float) -> None:
    factor = CORRELATIONS[name].pressure
    assert factor is not None
    assert factor.at(gauge + more) > factor.at(gauge)


def test_gauge_pressure_worked_value() -> None:
    assert gauge_bar(1e7) == pytest.approx(98.98675)


def test_out_of_range_names_correlation_value_and_range() -> None:
    exchanger, compressor = CORRELATIONS["exchanger_u_tube"], CORRELATIONS["compressor_centrifugal"]
    assert out_of_range(exchanger, 500.0, 100.0) is None
    assert out_of_range(exchanger, 500.0) is None
    assert out_of_range(exchanger, 4.0) == (
        "exchanger_u_tube: area 4 m2 is outside 10 .. 1000 m2, costed as the smallest unit"
    )
    assert out_of_range(exchanger, 12000.0, 220.0) == (
        "exchanger_u_tube: area 12000 m2 is outside 10 .. 1000 m2, costed as 12 units side by side; "
        "pressure 220 barg is above 140 barg, its factor is extrapolated"
    )
    assert out_of_range(compressor, 7.5e6, 300.0) == (
        "compressor_centrifugal: shaft power 7500 kW is outside 450 .. 3000 kW, "
        "costed as 3 units side by side"
    )
