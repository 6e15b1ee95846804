"""Compiled states against the formulas that they were compiled from, and their slopes against differences."""

from __future__ import annotations

import numpy as np
import pytest
from forward.plant import chemistry_of
from hypothesis import given, settings
from hypothesis import strategies as st

from optimiser.forward.properties import Properties, cubic_roots
from optimiser.forward.stream import FlashFailure

GAS = np.array([0.62, 0.21, 0.10, 0.03, 0.04]) * 5000.0
LIQUID = np.array([0.005, 0.002, 0.98, 0.003, 0.01]) * 700.0


@pytest.mark.parametrize("kind", ["srk", "pr", "ideal"])
@pytest.mark.parametrize(("temperature", "pressure"), [(260.0, 5e6), (310.0, 2e7), (700.0, 1.5e7)])
def test_a_gas_is_that_of_chemistry(kind: str, temperature: float, pressure: float) -> None:
    mixture = chemistry_of(kind).mixture
    state, phase = (
        Properties(mixture).gas(temperature, pressure, GAS),
        mixture.gas(temperature, pressure, GAS.tolist()),
    )
    assert state.compressibility == pytest.approx(phase.compressibility, rel=1e-13)
    assert state.enthalpy == pytest.approx(phase.enthalpy, rel=1e-12)
    assert state.entropy == pytest.approx(phase.entropy_fixed, rel=1e-12)
    assert state.volume == pytest.approx(phase.volume, rel=1e-12)
    assert state.ln_phi == pytest.approx(np.array(phase.ln_phi), abs=1e-12)


@pytest.mark.parametrize("kind", ["srk", "pr", "ideal"])
def test_a_liquid_is_that_of_chemistry(kind: str) -> None:
    mixture = chemistry_of(kind).mixture
    state, phase = (
        Properties(mixture).liquid(265.0, 1.5e7, LIQUID),
        mixture.liquid(265.0, 1.5e7, LIQUID.tolist()),
    )
    assert state.enthalpy == pytest.approx(phase.enthalpy, rel=1e-12)
    assert state.ln_phi == pytest.approx(np.array(phase.ln_phi), abs=1e-11)


@pytest.mark.parametrize("liquid", [False, True])
def test_slopes_follow_the_root(properties, liquid: bool) -> None:
    ask, flows = (properties.liquid, LIQUID) if liquid else (properties.gas, GAS)
    state, step = ask(280.0, 1.5e7, flows), 1e-3
    warmer, colder = ask(280.0 + step, 1.5e7, flows), ask(280.0 - step, 1.5e7, flows)
    assert state.heat_capacity == pytest.approx((warmer.enthalpy - colder.enthalpy) / (2 * step), rel=1e-6)
    assert state.entropy_slope == pytest.approx((warmer.entropy - colder.entropy) / (2 * step), rel=1e-6)
    slopes = properties.fugacity_slopes(state, liquid=liquid)
    for k in range(len(flows)):
        change = np.zeros(len(flows))
        change[k] = 1e-5 * flows.sum()
        up, down = (ask(280.0, 1.5e7, flows + sign * change).ln_phi for sign in (1.0, -1.0))
        assert slopes[:, k] == pytest.approx((up - down) / (2 * change[k]), rel=1e-4, abs=1e-10)


def test_enthalpy_is_that_of_the_fundamental_relations(properties) -> None:
    """dH = T dS at constant pressure and composition; the two departures are separate formulas."""
    state = properties.gas(320.0, 2e7, GAS)
    assert state.heat_capacity == pytest.approx(320.0 * state.entropy_slope, rel=1e-9)


def test_fugacities_obey_gibbs_and_duhem(properties) -> None:
    state = properties.liquid(270.0, 1.5e7, LIQUID)
    slopes = properties.fugacity_slopes(state, liquid=True)
    assert LIQUID @ slopes == pytest.approx(np.zeros(5), abs=1e-9)
    assert slopes @ LIQUID == pytest.approx(np.zeros(5), abs=1e-9)


@pytest.mark.parametrize("target", [250.0, 400.0, 800.0])
def test_temperature_is_found_from_enthalpy_and_entropy(properties, target: float) -> None:
    state = properties.gas(target, 1.7e7, GAS)
    by_heat = properties.gas_at_enthalpy(GAS, 1.7e7, state.enthalpy, 500.0)
    by_entropy = properties.gas_at_entropy(GAS, 1.7e7, state.entropy, 500.0)
    assert by_heat.temperature == pytest.approx(target, abs=1e-7)
    assert by_entropy.temperature == pytest.approx(target, abs=1e-7)


def test_an_enthalpy_that_no_temperature_has_is_a_failure(properties) -> None:
    with pytest.raises(FlashFailure, match="no temperature"):
        properties.gas_at_enthalpy(GAS, 1.7e7, -1e12, 500.0)


roots = st.floats(-3.0, 3.0).map(lambda x: round(x, 3))


@settings(deadline=None)
@given(st.tuples(roots, roots, roots))
def test_all_three_roots_are_found(wanted: tuple[float, float, float]) -> None:
    a, b, c = sorted(wanted)
    found = cubic_roots(-(a + b + c), a * b + b * c + c * a, -a * b * c)
    # Two roots that lie together are found to the root of round-off, or not told apart from none at all.
    assert found[-1] == pytest.approx(c, abs=2e-4) or (c - b < 1e-3 and found[0] == pytest.approx(a, abs=2e-4))
    if min(b - a, c - b) > 1e-3:
        assert found == pytest.approx((a, b, c), abs=1e-9)


@given(st.floats(-3.0, 3.0), st.floats(-2.0, 2.0), st.floats(0.05, 2.0))
@settings(deadline=None)
def test_a_single_root_is_found(real: float, middle: float, imaginary: float) -> None:
    square = middle**2 + imaginary**2
    found = cubic_roots(-(real + 2 * middle), square + 2 * middle * real, -real * square)
    assert len(found) == 1
    assert found[0] == pytest.approx(real, abs=1e-8)
