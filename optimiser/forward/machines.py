"""Compression of real gas at constant composition: isentropic with an efficiency."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from optimiser.forward.properties import Properties, State
from optimiser.forward.stream import SetpointFailure
from optimiser.inputs.case import Case


@dataclass
class Compressed:
    """Gas before and after a machine.

    Attributes:
        inlet, ideal, outlet: states; `ideal` is the outlet of the isentropic machine.
        work: shaft work into the gas, W.
    """

    inlet: State
    ideal: State
    outlet: State
    work: float


def compress(properties: Properties, inlet: State, pressure: float, efficiency: float) -> Compressed:
    """Gas brought to a pressure (Pa) by a machine of an isentropic efficiency (-)."""
    guess = inlet.temperature * (pressure / inlet.pressure) ** 0.286
    ideal = properties.gas_at_entropy(inlet.flows, pressure, inlet.entropy, guess)
    work = (ideal.enthalpy - inlet.enthalpy) / efficiency
    warm = inlet.temperature + (ideal.temperature - inlet.temperature) / efficiency
    outlet = properties.gas_at_enthalpy(inlet.flows, pressure, inlet.enthalpy + work, warm)
    return Compressed(inlet, ideal, outlet, work)


@dataclass
class CompressedStage:
    """A stage with its intercooler.

    Attributes:
        name: of the stage.
        machine: the gas through it.
        cooled: after the intercooler.
        power: electric, W.
        duty: of the intercooler, W.
    """

    name: str
    machine: Compressed
    cooled: State
    power: float
    duty: float


def compress_makeup(
    case: Case, properties: Properties, inlet: State, setpoints: dict[str, float]
) -> list[CompressedStage]:
    """All stages of make-up compression; each ends in an intercooler, the last delivers at loop pressure."""
    plant = case.compression
    drop, stages = plant.intercooler_pressure_drop.si, []
    for stage in plant.stages:
        last = stage.discharge_pressure is None
        path = "loop.pressure" if last else f"compression.{stage.name}.discharge_pressure"
        if path not in setpoints:
            raise SetpointFailure(f"{path} is not set")
        discharge = setpoints[path] + (drop if last else 0.0)
        machine = compress(properties, inlet, discharge, plant.isentropic_efficiency.si)
        cooled = properties.gas(plant.intercooler_temperature.si, discharge - drop, inlet.flows)
        power = machine.work / plant.driver_efficiency.si
        duty = machine.outlet.enthalpy - cooled.enthalpy
        stages.append(CompressedStage(stage.name, machine, cooled, power, duty))
        inlet = cooled
    return stages


def mixed_makeup(case: Case, properties: Properties, makeup: dict[str, float]) -> State:
    """Feed streams let down to the lowest of their pressures and mixed.

    Args:
        makeup: molar flow of each feed stream by name, mol/s.
    """
    names, streams = properties.mixture.names, case.feed.streams
    pressure = min(stream.pressure.si for stream in streams.values())
    total, heat, guess = np.zeros(len(names)), 0.0, 0.0
    for name, stream in streams.items():
        flows = feed_flows(case, names, name, makeup[name])
        total = total + flows
        if makeup[name] > 0.0:
            heat += properties.gas(stream.temperature.si, stream.pressure.si, flows).enthalpy
        guess += stream.temperature.si * makeup[name]
    if len(streams) == 1:
        return properties.gas(next(iter(streams.values())).temperature.si, pressure, total)
    return properties.gas_at_enthalpy(total, pressure, heat, guess / sum(makeup.values()))


def feed_flows(case: Case, names: tuple[str, ...], stream: str, flow: float) -> np.ndarray:
    """Flow of each species in a feed stream of `flow`, mol/s."""
    composition = case.feed.streams[stream].composition
    return flow * np.array([float(composition.get(name, 0.0)) for name in names])
