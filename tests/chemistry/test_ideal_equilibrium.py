"""Equilibrium constant, heat and equilibrium of the ideal gas against cantera 3.2 with its nasa_gas.yaml.

The file's reference pressure says 1 atm where its entropies are those of 1 bar, so cantera is given the pressure times
1.01325. The enthalpy shift of ammonia is taken off here, since cantera has none.
"""

from __future__ import annotations

import math
from dataclasses import replace
from functools import cache
from typing import Any

import pytest
from hypothesis import given, seed, settings
from hypothesis import strategies as st

from optimiser.chemistry.equilibrium import approach_temperature, equilibrium_extents
from optimiser.chemistry.maths import R
from optimiser.chemistry.mixture import Mixture
from optimiser.chemistry.reactions import Chemistry
from optimiser.inputs.model import read_model

ATM = 101325.0
AMOUNT = st.floats(0.05, 3.0)
STATES = st.tuples(
    st.floats(450.0, 990.0),
    st.floats(1.0, 300.0),
    st.tuples(AMOUNT, AMOUNT, st.floats(0.0, 1.0), st.floats(0.01, 1.0), st.floats(0.01, 1.0)),
)


@cache
def _unshifted(kind: str = "ideal") -> Chemistry:
    chemistry = Chemistry.build(read_model("ammonia"), kind)
    plain = [replace(s, enthalpy_shift=0.0) for s in chemistry.mixture.species]
    mixture = Mixture(plain, None, chemistry.mixture._liquid)
    reactions = tuple(replace(r, species=tuple(plain)) for r in chemistry.reactions)
    return replace(chemistry, mixture=mixture, reactions=reactions)


@cache
def _cantera() -> Any:
    import cantera

    species = {s.name: s for s in cantera.Species.list_from_file("nasa_gas.yaml")}
    return cantera.Solution(thermo="ideal-gas", species=[species[n] for n in _unshifted().mixture.names])


@pytest.mark.parametrize("temperature", [300.0, 400.0, 500.0, 600.0, 700.0, 800.0, 900.0, 1000.0])
def test_equilibrium_constant(temperature: float) -> None:
    gas, reaction = _cantera(), _unshifted().reactions[0]
    gas.TP = temperature, 1e5
    theirs = -float(gas.standard_gibbs_RT @ reaction.nu)
    # cantera's are those of the gas at 1e5 Pa, taken from a standard of 1 atm; the polynomials alone are wanted.
    theirs += sum(reaction.nu) * math.log(1e5 / ATM)
    assert float(reaction.ln_k(temperature)) == pytest.approx(theirs, abs=1e-6)


@seed(21)
@settings(max_examples=60)
@given(STATES)
def test_equilibrium_of_any_gas(state: tuple[float, float, tuple[float, ...]]) -> None:
    temperature, bar, flows = state
    chemistry, gas = _unshifted(), _cantera()
    gas.TPX = temperature, bar * 1e5 * 1.01325, list(flows)
    gas.equilibrate("TP", rtol=1e-11, max_steps=5000)
    extent = float(equilibrium_extents(chemistry, flows, temperature, bar * 1e5)[0])
    end = [n + nu * extent for n, nu in zip(flows, chemistry.reactions[0].nu, strict=True)]
    assert [n / sum(end) for n in end] == pytest.approx(list(gas.X), abs=1e-6)
    phase = chemistry.mixture.gas(temperature, bar * 1e5, end)
    assert approach_temperature(chemistry, phase, temperature, bar * 1e5)[0] == pytest.approx(0.0, abs=1e-6)


@seed(22)
@settings(max_examples=40)
@given(STATES, st.floats(0.1, 0.9))
def test_adiabatic_rise(state: tuple[float, float, tuple[float, ...]], share: float) -> None:
    """Part of the scarcer reactant turned without heat exchange: end temperatures agree within 0.1 K below 1000 K."""
    flows = state[2]
    start = 500.0
    chemistry, gas = _unshifted(), _cantera()
    extent = share * 0.4 * min(flows[0] / 1.5, flows[1] / 0.5)
    end = [n + nu * extent for n, nu in zip(flows, chemistry.reactions[0].nu, strict=True)]
    gas.TPX = start, 100e5, list(flows)
    heat = gas.enthalpy_mass
    gas.X = end
    gas.HP = heat, 100e5
    before = float(chemistry.mixture.gas(start, 100e5, flows).enthalpy)
    low, high = start, 1900.0
    for _ in range(50):
        middle = 0.5 * (low + high)
        now = float(chemistry.mixture.gas(middle, 100e5, end).enthalpy)
        low, high = (middle, high) if now < before else (low, middle)
    assert low == pytest.approx(gas.T, abs=0.1)
    assert low > start


@pytest.mark.parametrize("kind", ["srk", "pr"])
def test_ammonia_shift_lowers_the_constant_by_its_heat(kind: str) -> None:
    """Active Thermochemical Tables: -45.558 kJ/mol at 298.15 K, 0.382 above the polynomials' -45.94."""
    reaction = Chemistry.build(read_model("ammonia"), kind).reactions[0]
    plain = _unshifted().reactions[0]
    assert float(reaction.enthalpy(298.15)) == pytest.approx(-45558.0, abs=10.0)
    assert float(plain.enthalpy(298.15)) == pytest.approx(-45940.0, abs=10.0)
    for temperature in (400.0, 700.0):
        lower = float(plain.ln_k(temperature)) - float(reaction.ln_k(temperature))
        assert lower == pytest.approx(382.0 / (R * temperature), rel=1e-9)
