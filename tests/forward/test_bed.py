"""Beds against an integration by another method that knows no derivative of the enthalpy balance."""

from __future__ import annotations

import numpy as np
import pytest
from forward.plant import chemistry_of
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

from optimiser.engineering.flow import ergun_gradient
from optimiser.forward.bed import BedSize, KineticBeds
from optimiser.forward.properties import Properties
from optimiser.forward.stream import BedFailure, gas_stream

FLOWS = np.array([0.66, 0.22, 0.03, 0.04, 0.05]) * 6000.0
NH3 = 2


def _size(volume: float, diameter: float) -> BedSize:
    return BedSize(volume, diameter, 4.0 * volume / (np.pi * diameter**2))


def _by_scipy(chemistry, size: BedSize, temperature: float, pressure: float, activity: float) -> tuple[float, ...]:
    """Extent, temperature and pressure at the outlet, and the temperature half-way.

    Radau's method on extent and pressure alone; the temperature is the root of the enthalpy balance at every
    step, by bisection on the uncompiled formulas.
    """
    mixture, catalyst = chemistry.mixture, chemistry.catalyst
    nu = np.array(chemistry.reactions[0].nu)
    heat = mixture.gas(temperature, pressure, FLOWS.tolist()).enthalpy
    flux = float(FLOWS @ np.array(mixture.molar_mass)) / size.section

    def warm(extent: float, p: float) -> float:
        flows = (FLOWS + nu * extent).tolist()
        return float(brentq(lambda t: mixture.gas(t, p, flows).enthalpy - heat, 500.0, 1000.0, xtol=1e-11, rtol=1e-13))

    def slope(_: float, state: np.ndarray) -> list[float]:
        extent, p = state
        t = warm(extent, p)
        phase = mixture.gas(t, p, (FLOWS + nu * extent).tolist())
        rate = float(chemistry.rates(phase, t, p, activity)[0])
        fall = ergun_gradient(flux, phase.density, catalyst.viscosity(t), catalyst.pellet_diameter, catalyst.void)
        return [rate, -fall / size.section]

    half = 0.5 * size.volume
    found = solve_ivp(
        slope,
        (0.0, size.volume),
        [0.0, pressure],
        "Radau",
        t_eval=[half, size.volume],
        rtol=1e-8,
        atol=[1e-6, 1e-2],
    )
    (_, extent), (p_half, p) = found.y
    return extent, warm(extent, p), p, warm(found.y[0, 0], p_half)


@pytest.mark.parametrize(
    ("kind", "temperature", "pressure", "volume", "diameter"),
    [("srk", 660.0, 1.8e7, 15.0, 2.2), ("srk", 640.0, 1.0e7, 30.0, 3.0), ("ideal", 680.0, 2.4e7, 6.0, 1.6)],
)
def test_a_bed_is_what_radau_makes_of_it(
    kind: str, temperature: float, pressure: float, volume: float, diameter: float
) -> None:
    chemistry, size = chemistry_of(kind), _size(volume, diameter)
    beds = KineticBeds(chemistry, Properties(chemistry.mixture))
    inlet = gas_stream("in", FLOWS, temperature, pressure)
    profile = beds.integrate("bed", inlet, size, 0.7, (0.5, 1.0))
    extent, hot, p, half = _by_scipy(chemistry, size, temperature, pressure, 0.7)
    assert profile.extents[-1, 0] == pytest.approx(extent, rel=1e-6)
    assert profile.outlet.temperature == pytest.approx(hot, abs=1e-3)
    assert profile.temperature[0] == pytest.approx(half, abs=1e-3)
    assert profile.outlet.pressure == pytest.approx(p, rel=1e-7)


@pytest.fixture(scope="module")
def beds(chemistry, properties) -> KineticBeds:
    return KineticBeds(chemistry, properties)


@pytest.fixture
def inlet():
    return gas_stream("in", FLOWS, 650.0, 1.7e7)


def test_tolerances_agree(beds, inlet) -> None:
    exact = beds.integrate("bed", inlet, _size(15.0, 2.2), 0.7, (1.0,), 1e-11)
    audit = beds.integrate("bed", inlet, _size(15.0, 2.2), 0.7, (1.0,))
    start = beds.integrate("bed", inlet, _size(15.0, 2.2), 0.7, (1.0,), 1e-5)
    assert audit.outlet.temperature == pytest.approx(exact.outlet.temperature, abs=1e-4)
    assert start.outlet.temperature == pytest.approx(exact.outlet.temperature, abs=0.05)


def test_energy_and_elements_are_kept_everywhere(beds, inlet, chemistry) -> None:
    profile = beds.integrate("bed", inlet, _size(15.0, 2.2), 0.7)
    mixture, heat = chemistry.mixture, inlet.enthalpy(chemistry.mixture)
    released = -chemistry.reactions[0].enthalpy(700.0) * profile.extents[-1, 0]
    nu = np.array(chemistry.reactions[0].nu)
    for extent, t, p in zip(profile.extents, profile.temperature, profile.pressure, strict=True):
        there = mixture.gas(t, p, (FLOWS + extent[0] * nu).tolist()).enthalpy
        assert abs(there - heat) < 1e-8 * released
    nitrogen = np.array([s.elements.get("N", 0.0) for s in mixture.species])
    assert nitrogen @ profile.flows == pytest.approx(nitrogen @ FLOWS, rel=1e-13)


def test_rates_are_the_slopes_of_the_extents(beds, inlet) -> None:
    positions = np.linspace(0.02, 1.0, 50)
    profile = beds.integrate("bed", inlet, _size(15.0, 2.2), 0.7, positions)
    middle = 25
    slope = (profile.extents[middle + 1] - profile.extents[middle - 1]) / (15.0 * 0.04)
    assert profile.rates[middle] == pytest.approx(slope, rel=2e-3)


def test_the_hottest_place_is_found_with_no_positions_asked_for(beds, inlet) -> None:
    profile = beds.integrate("bed", inlet, _size(15.0, 2.2), 0.7)
    assert profile.hottest == pytest.approx(profile.outlet.temperature)
    assert profile.positions[-1] == 1.0
    assert profile.length == pytest.approx(15.0 / (np.pi * 1.1**2))


def test_pressure_drop_is_near_ergun_of_the_mean_state(beds, inlet, chemistry) -> None:
    size = _size(15.0, 2.2)
    profile = beds.integrate("bed", inlet, size, 0.7)
    catalyst, mixture = chemistry.catalyst, chemistry.mixture
    ends = [mixture.gas(s.temperature, s.pressure, s.vapour.tolist()).density for s in (profile.inlet, profile.outlet)]
    flux = float(FLOWS @ np.array(mixture.molar_mass)) / size.section
    mean = 0.5 * (inlet.temperature + profile.outlet.temperature)
    viscosity = catalyst.viscosity(mean)
    gradient = ergun_gradient(flux, sum(ends) / 2.0, viscosity, catalyst.pellet_diameter, catalyst.void)
    assert inlet.pressure - profile.outlet.pressure == pytest.approx(gradient * size.length, rel=0.03)


def test_a_bed_without_catalyst_worth_the_name_only_loses_pressure(beds, inlet) -> None:
    profile = beds.integrate("bed", inlet, _size(15.0, 2.2), 1e-9)
    assert profile.extents[-1, 0] == pytest.approx(0.0, abs=1e-5)
    assert abs(profile.outlet.temperature - inlet.temperature) < 0.5  # Joule and Thomson's
    assert profile.outlet.pressure < inlet.pressure


def test_gas_short_of_hydrogen_and_free_of_ammonia_goes_through(beds) -> None:
    flows = np.array([0.05, 0.85, 0.0, 0.05, 0.05]) * 3000.0
    profile = beds.integrate("bed", gas_stream("in", flows, 650.0, 1.7e7), _size(20.0, 2.2), 1.0)
    assert profile.flows.min() > 0.0
    assert profile.flows[NH3] > 0.0


@pytest.mark.parametrize("diameter", [0.25, 0.6])
def test_a_bed_that_loses_its_pressure_says_so(beds, inlet, diameter: float) -> None:
    with pytest.raises(BedFailure, match="bed third: the pressure falls to nothing"):
        beds.integrate("third", inlet, _size(40.0, diameter), 0.7)


def test_part_of_the_drag_leaves_part_of_the_pressure_drop(beds, inlet) -> None:
    full, part = (beds.integrate("bed", inlet, _size(15.0, 2.2), 0.7, (1.0,), drag=d) for d in (1.0, 0.1))
    ratio = (inlet.pressure - part.outlet.pressure) / (inlet.pressure - full.outlet.pressure)
    assert ratio == pytest.approx(0.1, rel=0.02)
