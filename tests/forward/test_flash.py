"""Phases at equilibrium: equal fugacities, balances, one phase where there is one, ammonia over liquid."""

from __future__ import annotations

import numpy as np
import pytest
from forward.plant import chemistry_of
from hypothesis import given, settings
from hypothesis import strategies as st

from optimiser.forward.flash import flash_ph, flash_tp, rachford_rice
from optimiser.forward.properties import Properties
from optimiser.forward.stability import dew_point
from optimiser.forward.stream import FlashFailure

FLOWS = np.array([0.60, 0.20, 0.15, 0.02, 0.03]) * 6000.0
H2, N2, NH3 = 0, 1, 2
ATMOSPHERE = 101325.0


def _log_fugacities(state) -> np.ndarray:
    return np.log(state.flows / state.flows.sum()) + state.ln_phi


@pytest.mark.parametrize("kind", ["srk", "pr", "ideal"])
@pytest.mark.parametrize("temperature", [235.0, 263.0, 290.0, 305.0])
def test_two_phases_have_equal_fugacities_and_all_of_the_gas(kind: str, temperature: float) -> None:
    properties = Properties(chemistry_of(kind).mixture)
    phases = flash_tp(properties, FLOWS, temperature, 1.8e7)
    assert 0.5 < phases.vapour_fraction < 1.0
    assert phases.stability == 0.0
    assert _log_fugacities(phases.gas) == pytest.approx(_log_fugacities(phases.drops), abs=1e-11)
    assert phases.vapour + phases.liquid == pytest.approx(FLOWS, rel=1e-12)
    assert phases.enthalpy == pytest.approx(phases.gas.enthalpy + phases.drops.enthalpy)


def test_two_phases_have_less_gibbs_energy_than_one(properties) -> None:
    """The mixing of both phases in units of RT: equal fugacities alone may be a maximum."""
    phases = flash_tp(properties, FLOWS, 270.0, 1.8e7)
    alone = properties.gas(270.0, 1.8e7, FLOWS)
    together = sum(float(s.flows @ _log_fugacities(s)) for s in (phases.gas, phases.drops))
    assert together < float(FLOWS @ _log_fugacities(alone)) - 1.0


@pytest.mark.parametrize("temperature", [330.0, 400.0, 700.0])
def test_a_warm_gas_stands_alone(properties, temperature: float) -> None:
    phases = flash_tp(properties, FLOWS, temperature, 1.8e7)
    assert phases.vapour_fraction == 1.0
    assert phases.drops is None
    assert phases.stability > 0.0


def test_stability_reaches_zero_where_the_first_drop_forms(properties) -> None:
    """The dew point found by halving is the same whether the drop or the distance from it is watched."""
    low, high = 300.0, 340.0
    while high - low > 1e-6:
        middle = 0.5 * (low + high)
        wet = flash_tp(properties, FLOWS, middle, 1.8e7).drops is not None
        low, high = (middle, high) if wet else (low, middle)
    assert flash_tp(properties, FLOWS, high, 1.8e7).stability == pytest.approx(0.0, abs=1e-6)
    assert flash_tp(properties, FLOWS, low, 1.8e7).vapour_fraction == pytest.approx(1.0, abs=1e-5)


def test_cold_ammonia_condenses_whole(properties) -> None:
    flows = np.array([0.0, 0.0, 10.0, 0.0, 0.0])
    phases = flash_tp(properties, flows, 280.0, 5e6)
    assert phases.vapour_fraction == 0.0
    assert phases.gas is None and phases.liquid.tolist() == flows.tolist()


def test_a_species_that_is_absent_stays_absent(properties) -> None:
    flows = FLOWS.copy()
    flows[3:] = 0.0
    phases = flash_tp(properties, flows, 265.0, 1.8e7)
    assert phases.vapour[3:].tolist() == phases.liquid[3:].tolist() == [0.0, 0.0]
    assert _log_fugacities_present(phases) < 1e-11


def _log_fugacities_present(phases) -> float:
    gas, drops = phases.gas, phases.drops
    here = gas.flows > 0
    difference = np.log(drops.flows[here] / drops.flows.sum()) + drops.ln_phi[here]
    difference -= np.log(gas.flows[here] / gas.flows.sum()) + gas.ln_phi[here]
    return float(np.max(np.abs(difference)))


def test_the_search_may_begin_anywhere(properties) -> None:
    there = flash_tp(properties, FLOWS, 265.0, 1.8e7)
    for near in (240.0, 304.0, 400.0):
        begun = flash_tp(properties, FLOWS, 265.0, 1.8e7, flash_tp(properties, FLOWS, near, 1.8e7))
        assert begun.liquid == pytest.approx(there.liquid, rel=1e-10)


@pytest.mark.parametrize("temperature", [245.0, 290.0, 309.0, 315.0, 350.0, 500.0])
def test_the_temperature_of_an_enthalpy_is_found(properties, temperature: float) -> None:
    there = flash_tp(properties, FLOWS, temperature, 1.8e7)
    for guess in (temperature + 60.0, temperature - 25.0):
        found = flash_ph(properties, FLOWS, there.enthalpy, 1.8e7, guess)
        assert found.temperature == pytest.approx(temperature, abs=1e-6)
        assert found.enthalpy == pytest.approx(there.enthalpy, rel=1e-10)


fractions = st.lists(st.floats(0.01, 1.0), min_size=3, max_size=5).map(lambda x: np.array(x) / sum(x))


@settings(deadline=None)
@given(fractions, st.integers(0, 1000))
def test_rachford_and_rices_equation_is_solved(z: np.ndarray, seed: int) -> None:
    ratios = np.exp(np.random.default_rng(seed).uniform(-4.0, 4.0, len(z)))
    v = rachford_rice(z, ratios)
    if not np.isfinite(v):
        assert ratios.max() <= 1.0 or ratios.min() >= 1.0
        return
    parts = z * (ratios - 1.0) / (1.0 + v * (ratios - 1.0))
    assert abs(parts.sum()) < 1e-9 * np.abs(parts).sum()


# NH3 over its liquid in 3:1 syngas, mol-%, after Larson and Black, J. Am. Chem. Soc. 47 (1925) 1015, by the
# correlation log10 C = 4.1856 + 5.987879/sqrt(P/atm) - 1099.544/(T/K): degC, atm, mol-%. From memory; the
# model's binary parameters were fitted to it, so this tests the flash more than the parameters.
SATURATION = [
    (-20, 100, 2.76),
    (-10, 150, 3.13),
    (0, 150, 4.46),
    (0, 200, 3.83),
    (10, 200, 5.32),
    (20, 200, 7.21),
]


@pytest.mark.parametrize(("celsius", "atmospheres", "percent"), SATURATION)
def test_ammonia_over_its_liquid(properties, celsius: float, atmospheres: float, percent: float) -> None:
    flows = np.array([0.6, 0.2, 0.2, 0.0, 0.0])
    phases = flash_tp(properties, flows, celsius + 273.15, atmospheres * ATMOSPHERE)
    assert 100.0 * phases.vapour[NH3] / phases.vapour.sum() == pytest.approx(percent, rel=0.06)


def test_hydrogen_dissolves_in_the_liquid(properties) -> None:
    """0.8 mol-% at 25 degC and 100 atm (Wiebe and Tremearne 1934, from memory), within a factor of two."""
    phases = flash_tp(properties, np.array([0.5, 0.0, 0.5, 0.0, 0.0]), 298.15, 100.0 * ATMOSPHERE)
    assert 0.4 < 100.0 * phases.liquid[H2] / phases.liquid.sum() < 1.6


def test_a_liquid_gives_off_what_it_cannot_hold(properties) -> None:
    """So rich in ammonia that the whole has no root but a liquid's; the gas must be looked for from there."""
    flows = np.array([0.04, 0.01, 0.95, 0.0, 0.0])
    phases = flash_tp(properties, flows, 280.0, 3e6)
    assert 0.0 < phases.vapour_fraction < 0.1
    assert _log_fugacities_present(phases) < 1e-11
    assert phases.vapour[H2] > phases.liquid[H2]
    lean = np.array([0.004, 0.001, 0.995, 0.0, 0.0])
    assert flash_tp(properties, lean, 280.0, 3e7).vapour_fraction == 0.0


@pytest.mark.parametrize("kind", ["srk", "ideal"])
def test_the_dew_point_is_where_the_first_drop_forms(kind: str) -> None:
    properties = Properties(chemistry_of(kind).mixture)
    dew = dew_point(properties, FLOWS, 1.8e7)
    colder = flash_tp(properties, FLOWS, dew.temperature - 0.05, 1.8e7)
    assert colder.drops is not None
    assert flash_tp(properties, FLOWS, dew.temperature + 0.05, 1.8e7).drops is None
    assert dew.fractions == pytest.approx(colder.liquid / colder.liquid.sum(), rel=0.01)


def test_a_gas_without_a_dew_point_says_so(properties) -> None:
    with pytest.raises(FlashFailure, match="no liquid forms"):
        dew_point(properties, np.array([0.75, 0.25, 0.0, 0.0, 0.0]), 1.8e7)
