"""Ergun's equation against a published case and the PyPI package fluids."""

from __future__ import annotations

from typing import Any

import fluids
import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimiser.engineering.flow import ergun_gradient, packed_bed_reynolds


def test_published_case(figures: dict[str, Any]) -> None:
    # Ergun, Chem. Eng. Prog. 48 (1952) 89; case of the package fluids.
    case = figures["ergun"]["case"]
    flux = case["velocity"] * case["density"]
    gradient = ergun_gradient(flux, case["density"], case["viscosity"], case["pellet_diameter"], case["void"])
    assert gradient == pytest.approx(case["gradient"], rel=1e-12)


def test_worked_reynolds() -> None:
    assert packed_bed_reynolds(1.0, 1e-3, 8e-4, 0.4) == pytest.approx(4.0 / 3.0)


@given(
    velocity=st.floats(1e-3, 5.0),
    density=st.floats(1.0, 200.0),
    viscosity=st.floats(1e-5, 1e-4),
    diameter=st.floats(1e-3, 2e-2),
    void=st.floats(0.3, 0.6),
)
def test_same_as_fluids(
    velocity: float, density: float, viscosity: float, diameter: float, void: float
) -> None:
    ours = ergun_gradient(velocity * density, density, viscosity, diameter, void)
    theirs = fluids.Ergun(dp=diameter, voidage=void, vs=velocity, rho=density, mu=viscosity)
    assert ours == pytest.approx(theirs, rel=1e-12)
