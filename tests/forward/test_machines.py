"""Compression of hydrogen and nitrogen, 3:1, against outside figures, and the make-up train's own laws."""

from __future__ import annotations

import tomllib
from pathlib import Path

import numpy as np
import pytest
from forward.plant import chemistry_of, prepared

from optimiser.forward.machines import compress, compress_makeup, mixed_makeup
from optimiser.forward.properties import Properties
from optimiser.forward.stream import SetpointFailure

# CoolProp 8.0 and cantera 3.2, computed; see the file.
FIGURES = tomllib.loads((Path(__file__).parents[1] / "reference" / "engineering.toml").read_text(encoding="utf-8"))
MAKEUP, CIRCULATOR = (FIGURES["compressor"][f"real_gas_{name}"] for name in ("makeup", "circulator"))
SYNGAS = np.array([0.75, 0.25, 0.0, 0.0, 0.0])


def _staged(kind: str, stages: int) -> tuple[float, float]:
    """Work, J/mol, and last discharge temperature, K, of equal-ratio stages, cooled to the inlet between."""
    properties, work = Properties(chemistry_of(kind).mixture), 0.0
    cold, ratio = (
        MAKEUP["inlet_temperature"],
        (MAKEUP["outlet_pressure"] / MAKEUP["inlet_pressure"]) ** (1 / stages),
    )
    outlet = 0.0
    for k in range(stages):
        inlet = properties.gas(cold, MAKEUP["inlet_pressure"] * ratio**k, SYNGAS)
        machine = compress(properties, inlet, inlet.pressure * ratio, MAKEUP["efficiency"])
        work, outlet = work + machine.work, machine.outlet.temperature
    return work, outlet


# Peng and Robinson's compressibility of hydrogen is known to be 4 % low.
@pytest.mark.parametrize(
    ("kind", "figure", "allowed"), [("srk", "real", 0.02), ("pr", "real", 0.05), ("ideal", "ideal", 0.002)]
)
@pytest.mark.parametrize("row", [0, 1, 2])
def test_work_of_the_makeup(kind: str, figure: str, allowed: float, row: int) -> None:
    work, outlet = _staged(kind, MAKEUP["stages"][row])
    assert work == pytest.approx(MAKEUP[f"{figure}_work"][row], rel=allowed)
    if kind == "srk":
        assert outlet == pytest.approx(MAKEUP["outlet_temperature"][row], abs=3.0)


@pytest.mark.parametrize(("kind", "figure", "allowed"), [("srk", "real_work", 0.02), ("ideal", "ideal_work", 0.002)])
def test_work_of_the_circulator(kind: str, figure: str, allowed: float) -> None:
    properties = Properties(chemistry_of(kind).mixture)
    inlet = properties.gas(CIRCULATOR["inlet_temperature"], CIRCULATOR["inlet_pressure"], SYNGAS)
    machine = compress(properties, inlet, CIRCULATOR["outlet_pressure"], CIRCULATOR["efficiency"])
    assert machine.work == pytest.approx(CIRCULATOR[figure], rel=allowed)


def test_an_ideal_gas_leaves_as_cantera_says() -> None:
    import cantera as ct

    species = [s for s in ct.Species.list_from_file("nasa_gas.yaml") if s.name in ("H2", "N2")]
    gas = ct.Solution(thermo="ideal-gas", species=species)
    gas.TPX = 308.15, 25e5, "H2:0.75, N2:0.25"
    entropy, heat = gas.entropy_mole, gas.enthalpy_mole
    gas.SP = gas.entropy_mass, 80e5
    ideal, isentropic = gas.T, gas.enthalpy_mole - heat
    assert gas.entropy_mole == pytest.approx(entropy)
    gas.HP = (heat + isentropic / 0.78) / gas.mean_molecular_weight, 80e5
    properties = Properties(chemistry_of("ideal").mixture)
    machine = compress(properties, properties.gas(308.15, 25e5, SYNGAS), 80e5, 0.78)
    assert machine.ideal.temperature == pytest.approx(ideal, abs=0.02)
    assert machine.outlet.temperature == pytest.approx(gas.T, abs=0.02)
    assert machine.work == pytest.approx(isentropic / 0.78 / 1000.0, rel=1e-4)


def test_an_isentropic_machine_keeps_the_entropy(properties) -> None:
    machine = compress(properties, properties.gas(300.0, 5e6, SYNGAS), 2e7, 1.0)
    assert machine.outlet.entropy == pytest.approx(machine.inlet.entropy, rel=1e-10)
    assert machine.outlet.temperature == pytest.approx(machine.ideal.temperature, abs=1e-6)


def test_stages_hand_on_from_feed_to_loop(plant) -> None:
    case, properties = plant.section.case, plant.section.properties
    entry = mixed_makeup(case, properties, plant.walk.makeup)
    stages = compress_makeup(case, properties, entry, plant.setpoints)
    assert stages[-1].cooled.pressure == pytest.approx(plant.setpoints["loop.pressure"])
    assert all(s.cooled.temperature == case.compression.intercooler_temperature.si for s in stages)
    # Work that goes in comes out as heat of the coolers and as the gas's own enthalpy.
    work = sum(s.power for s in stages) * case.compression.driver_efficiency.si
    left = entry.enthalpy + work - sum(s.duty for s in stages)
    assert left == pytest.approx(stages[-1].cooled.enthalpy, abs=1e-9 * work)


def test_a_stage_without_its_pressure_is_named(plant) -> None:
    setpoints = dict(plant.setpoints)
    del setpoints["compression.middle.discharge_pressure"]
    with pytest.raises(SetpointFailure, match=r"compression\.middle\.discharge_pressure"):
        compress_makeup(
            plant.section.case,
            plant.section.properties,
            mixed_makeup(plant.section.case, plant.section.properties, plant.walk.makeup),
            setpoints,
        )


def test_feed_streams_mix_at_the_lowest_pressure_with_their_heat() -> None:
    section = prepared()
    case = section.case
    stream = case.feed.streams["syngas"]
    cold = stream.model_copy(update={"temperature": stream.temperature.__class__(280.0, "K", "temperature")})
    high = cold.model_copy(update={"pressure": stream.pressure.__class__(60e5, "bar", "pressure")})
    feed = case.feed.model_copy(update={"streams": {"warm": stream, "high": high}})
    mixed = mixed_makeup(case.model_copy(update={"feed": feed}), section.properties, {"warm": 3.0, "high": 1.0})
    assert mixed.pressure == 25e5
    fractions = np.array([stream.composition.get(n, 0.0) for n in section.chemistry.mixture.names])
    heat = section.properties.gas(308.15, 25e5, 3.0 * fractions).enthalpy
    heat += section.properties.gas(280.0, 60e5, fractions).enthalpy
    assert mixed.enthalpy == pytest.approx(heat, rel=1e-9)
    assert 280.0 < mixed.temperature < 308.15
