"""Walls, masses and separators against closed-form cases."""

from __future__ import annotations

from math import pi
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimiser.engineering.vessels import (
    gas_velocity_limit,
    separator_diameter,
    separator_volume,
    shell_mass,
    thick_wall,
    thin_wall,
    wall_out_of_range,
    wall_thickness,
)


@pytest.mark.parametrize("name", ["thin", "high", "us"])
def test_thin_walls_of_the_code(figures: dict[str, Any], name: str) -> None:
    # ASME VIII-1 UG-27(c), closed form.
    case = figures["vessel"][name]
    wall = thin_wall(case["pressure"], case["radius"], case["stress"], case["efficiency"])
    assert wall == pytest.approx(case["thickness"], rel=2e-6)


def test_thin_and_thick_side_by_side(figures: dict[str, Any]) -> None:
    case = figures["vessel"]["both"]
    given_values = (case["pressure"], case["radius"], case["stress"], case["efficiency"])
    assert thin_wall(*given_values) == pytest.approx(case["thin"], abs=5e-7)
    assert thick_wall(*given_values) == pytest.approx(case["thick"], abs=5e-7)


def test_wall_takes_the_form_of_its_range() -> None:
    assert wall_thickness(10e6, 1.0, 138e6, 1.0, 3e-3) == pytest.approx(78.98485e-3, abs=1e-8)
    assert wall_thickness(38e6, 1.0, 100e6) == thin_wall(38e6, 1.0, 100e6)
    assert wall_thickness(50e6, 1.0, 100e6) == thick_wall(50e6, 1.0, 100e6)


def test_forms_meet_at_the_limit_and_part_as_stated_above_it() -> None:
    assert thin_wall(0.385, 1.0, 1.0) == pytest.approx(thick_wall(0.385, 1.0, 1.0), abs=3e-5)
    assert thin_wall(0.5, 1.0, 1.0) / thick_wall(0.5, 1.0, 1.0) == pytest.approx(1.0 - 0.024, abs=5e-4)


@given(st.floats(0.01, 0.384))
def test_thin_form_is_on_the_safe_side_within_its_range(share: float) -> None:
    excess = thin_wall(share, 1.0, 1.0) / thick_wall(share, 1.0, 1.0) - 1.0
    assert 0.0 <= excess <= 0.0113


def test_wall_out_of_range_names_both_pressures() -> None:
    assert wall_out_of_range(38e6, 100e6) is None
    text = "design pressure 400 bar is above 385 bar, where the thin-wall formula ends"
    assert wall_out_of_range(40e6, 100e6) == text


def test_shell_mass_worked_value() -> None:
    assert shell_mass(2.0, 10.0, 0.1, 7850.0) == pytest.approx(62673.1, abs=0.1)


@given(st.floats(0.1, 5.0), st.floats(0.0, 20.0), st.floats(1e-3, 0.5))
def test_shell_mass_is_outside_less_inside_volume(diameter: float, length: float, wall: float) -> None:
    def volume(d: float) -> float:
        return pi / 4 * d**2 * length + pi / 6 * d**3

    exact = volume(diameter + 2 * wall) - volume(diameter)
    assert shell_mass(diameter, length, wall, 1.0) == pytest.approx(exact, rel=1e-9)


def test_separator_worked_values() -> None:
    assert gas_velocity_limit(50.0, 600.0, 0.05) == pytest.approx(0.165831, abs=1e-6)
    diameter = separator_diameter(0.5, 50.0, 600.0, 0.05)
    assert diameter == pytest.approx(1.95933, abs=1e-5)
    assert pi / 4 * diameter**2 * gas_velocity_limit(50.0, 600.0, 0.05) == pytest.approx(0.5)
    assert separator_volume(2.0, 3.0) == pytest.approx(18.8496, abs=1e-4)


def test_pressure_factor_of_upright_vessels(figures: dict[str, Any]) -> None:
    # Turton et al., appendix A: F_P is this wall at 850 bar with 3.15 mm corrosion, over 6.3 mm.
    case = figures["turton"]["worked"]["vessel_pressure"]
    for gauge, diameter, factor in zip(case["barg"], case["diameter"], case["factor"], strict=True):
        wall = thin_wall((gauge + 1.0) * 1e5, diameter / 2.0, 850e5) + 3.15e-3
        assert wall / 6.3e-3 == pytest.approx(factor, abs=6e-4)
