"""Beds by approach: the outlet holds what was stated, the heat balance and Ergun's equation."""

from __future__ import annotations

import math

import numpy as np
import pytest
from forward.plant import prepared

from optimiser.chemistry.equilibrium import approach_fraction, approach_temperature, equilibrium_extents
from optimiser.engineering.flow import ergun_gradient
from optimiser.forward.bed import BedSize
from optimiser.forward.factor_bed import FactorBeds, damkohler_factor
from optimiser.forward.stream import BedFailure, SetpointFailure, gas_stream

FLOWS = np.array([0.66, 0.22, 0.03, 0.04, 0.05]) * 6000.0
SIZE = BedSize(15.0, 2.2, 15.0 / (np.pi * 1.1**2))
COEFFICIENTS = (5.0, 1.0, 1.5, 10000.0)


@pytest.fixture(scope="module")
def step():
    return prepared().bed_steps[0]


@pytest.fixture(scope="module")
def beds(chemistry, properties) -> FactorBeds:
    return FactorBeds(chemistry, properties)


@pytest.fixture
def inlet():
    return gas_stream("in", FLOWS, 660.0, 1.8e7)


def _stated(step, **changes):
    return step.model_copy(update={"rate": "approach", **changes})


def _balanced(profile, chemistry) -> bool:
    released = -chemistry.reactions[0].enthalpy(700.0) * profile.extents[-1, 0]
    gap = profile.outlet.enthalpy(chemistry.mixture) - profile.inlet.enthalpy(chemistry.mixture)
    return abs(gap) < 1e-8 * released


@pytest.mark.parametrize("fraction", [0.3, 0.85, 1.0])
def test_a_stated_fraction_is_reached(beds, step, inlet, chemistry, fraction: float) -> None:
    stated = _stated(step, approach_fraction=object())
    profile = beds.solve(stated, inlet, SIZE, {"reactor.bed1.approach_fraction": fraction})
    out = profile.outlet
    found = approach_fraction(chemistry, FLOWS.tolist(), profile.extents[-1], out.temperature, out.pressure)
    assert found[0] == pytest.approx(fraction, abs=1e-7)
    assert _balanced(profile, chemistry)


@pytest.mark.parametrize("kelvin", [0.0, 12.0, 60.0])
def test_a_stated_distance_in_kelvin_is_reached(beds, step, inlet, chemistry, kelvin: float) -> None:
    profile = beds.solve(_stated(step), inlet, SIZE, {"reactor.bed1.approach_temperature": kelvin})
    out = profile.outlet
    gas = chemistry.mixture.gas(out.temperature, out.pressure, out.vapour.tolist())
    found = approach_temperature(chemistry, gas, out.temperature, out.pressure)
    assert found[0] == pytest.approx(kelvin, abs=1e-5)
    assert _balanced(profile, chemistry)


def test_damkohler_is_the_printed_formula(inlet) -> None:
    volume, flow = 15.0, FLOWS.sum()
    number = math.exp(5.0) * (volume / flow) * 1.8**1.5 * math.exp(-10000.0 * (1 / 660.0 - 1 / 700.0))
    assert damkohler_factor(COEFFICIENTS, inlet, volume) == pytest.approx(1.0 - math.exp(-number))


def test_a_damkohler_bed_makes_that_part_of_equilibrium(beds, step, inlet, chemistry) -> None:
    stated = step.model_copy(update={"rate": "damkohler"})
    profile = beds.solve(stated, inlet, SIZE, {}, COEFFICIENTS)
    out = profile.outlet
    most = equilibrium_extents(chemistry, FLOWS.tolist(), out.temperature, out.pressure)
    factor = damkohler_factor(COEFFICIENTS, inlet, SIZE.volume)
    assert profile.extents[-1] == pytest.approx(factor * most, rel=1e-7)


@pytest.mark.parametrize("share", [1.0, 0.6])
def test_pressure_falls_by_ergun_with_the_outlets_gradient(beds, step, inlet, chemistry, share: float) -> None:
    stated = step.model_copy(update={"rate": "damkohler"})
    out = beds.solve(stated, inlet, SIZE, {}, (*COEFFICIENTS, share)).outlet
    catalyst, mixture = chemistry.catalyst, chemistry.mixture
    density = mixture.gas(out.temperature, out.pressure, out.vapour.tolist()).density
    flux = float(FLOWS @ np.array(mixture.molar_mass)) / SIZE.section
    viscosity = catalyst.viscosity(out.temperature)
    gradient = ergun_gradient(flux, density, viscosity, catalyst.pellet_diameter, catalyst.void)
    fall = inlet.pressure**2 - out.pressure**2
    assert fall == pytest.approx(2.0 * out.pressure * gradient * SIZE.length * share, rel=1e-8)


def test_faults_are_named(beds, step, inlet) -> None:
    with pytest.raises(SetpointFailure, match="approach_temperature is not set"):
        beds.solve(_stated(step), inlet, SIZE, {})
    slender = BedSize(40.0, 0.3, 40.0 / (np.pi * 0.15**2))
    with pytest.raises(BedFailure, match="the pressure falls to nothing"):
        beds.solve(_stated(step), inlet, slender, {"reactor.bed1.approach_temperature": 10.0})
