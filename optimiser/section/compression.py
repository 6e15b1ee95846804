"""Make-up compression in intercooled stages, and the circulator: isentropic with an efficiency, real gas."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from optimiser.chemistry.mixture import Phase
from optimiser.engineering.heat import log_mean
from optimiser.section.exchange import exchanger_coefficient
from optimiser.section.frame import Frame, Gas, gas_at, temperature_at
from optimiser.section.makeup import MakeUp


@dataclass
class Compressed:
    """Make-up as it enters the loop, and what compression used.

    Attributes:
        molar_enthalpy: J/mol.
        names: of the stages, as paths.
        powers: electric power of each stage, W.
        duties: heat into cooling water of each intercooler, W.
        areas: area of each intercooler, m2; `pressures` their design basis, Pa.
    """

    molar_enthalpy: Any
    temperature: float
    names: list[str]
    powers: list[Any]
    duties: list[Any]
    areas: list[Any]
    pressures: list[Any]


def _molar_state(
    frame: Frame, block: Any, name: str, fractions: list[Any], temperature: Any, pressure: Any
) -> Phase:
    root = frame.variable(block, f"{name}_compressibility", "ratio", 0.2, 3.0, start=1.03)
    phase = frame.mixture.phase(temperature, pressure, fractions, root)
    frame.give(root, frame.equation(block, f"{name}_state", phase.residual == 0))
    return phase


def build_compression(frame: Frame, makeup: MakeUp, loop_pressure: Any) -> Compressed:
    """All stages; each ends in an intercooler, the last one too, and the last delivers at loop pressure."""
    plant = frame.case.compression
    cooled = plant.intercooler_temperature.si
    drop = plant.intercooler_pressure_drop.si
    result = Compressed(None, cooled, [], [], [], [], [])
    entry = frame.block("compression_entry")
    temperature: Any = makeup.temperature
    if temperature is None:
        temperature = temperature_at(frame, entry, "makeup")
    inlet = _molar_state(frame, entry, "makeup", makeup.fractions, temperature, makeup.pressure)
    if makeup.temperature is None:
        mixing = inlet.enthalpy - makeup.molar_enthalpy == 0
        frame.give(temperature, frame.equation(entry, "mixing", mixing, frame.nominal("molar_enthalpy")))
    frame.stream("makeup", makeup.flows, temperature, makeup.pressure)
    pressure: Any = makeup.pressure
    for stage in plant.stages:
        block = frame.block(f"compression.{stage.name}")
        if stage.discharge_pressure is None:
            discharge = loop_pressure + drop
        else:
            path = f"compression.{stage.name}.discharge_pressure"
            discharge = frame.decision(
                block, "discharge", "pressure", path, stage.discharge_pressure, "pressure"
            )
        name = f"compression.{stage.name}"
        frame.stream(f"{name}.in", makeup.flows, temperature, pressure)
        inlet = _stage(frame, block, name, makeup, inlet, (temperature, pressure, discharge), result)
        temperature, pressure = cooled, discharge - drop
        frame.stream(f"{name}.cooled", makeup.flows, temperature, pressure)
    result.molar_enthalpy = inlet.enthalpy
    total = frame.block("compression_total")
    frame.report("compression.power", "power", frame.define(total, "power", "heat", sum(result.powers)))
    return result


def _stage(
    frame: Frame,
    block: Any,
    name: str,
    makeup: MakeUp,
    inlet: Phase,
    state: tuple[Any, Any, Any],
    result: Compressed,
) -> Phase:
    """One stage and its intercooler; returns the cooled gas."""
    plant, fractions = frame.case.compression, makeup.fractions
    _, pressure_in, discharge = state
    cooled, water = plant.intercooler_temperature.si, frame.case.utilities
    ratio = frame.define(block, "ratio", "ratio", discharge / pressure_in, low=1.0, high=20.0, start=2.0)
    frame.report(f"{name}.ratio", "ratio", ratio)
    ideal = frame.variable(block, "isentropic_temperature", "temperature", 230.0, 900.0, start=400.0)
    ideal_gas = _molar_state(frame, block, "isentropic", fractions, ideal, discharge)
    frame.give(
        ideal, frame.equation(block, "isentropic", ideal_gas.entropy_fixed - inlet.entropy_fixed == 0, 30.0)
    )
    out = frame.variable(block, "discharge_temperature", "temperature", 230.0, 900.0, start=420.0)
    gas = _molar_state(frame, block, "discharge", fractions, out, discharge)
    work = frame.define(
        block,
        "molar_work",
        "molar_enthalpy",
        (ideal_gas.enthalpy - inlet.enthalpy) / plant.isentropic_efficiency.si,
        low=0.0,
        start=5e3,
    )
    heating = gas.enthalpy - inlet.enthalpy - work == 0
    frame.give(out, frame.equation(block, "work", heating, frame.nominal("molar_enthalpy")))
    frame.report(f"{name}.discharge_temperature", "temperature", out)
    frame.stream(f"{name}.out", makeup.flows, out, discharge)
    power = frame.define(block, "power", "heat", makeup.flow * work / plant.driver_efficiency.si, low=0.0)
    frame.report(f"{name}.power", "power", power)
    cold = _molar_state(
        frame, block, "cooled", fractions, cooled, discharge - plant.intercooler_pressure_drop.si
    )
    duty = frame.define(
        block, "intercooler_duty", "heat", makeup.flow * (gas.enthalpy - cold.enthalpy), low=0.0
    )
    frame.report(f"{name}.intercooler_duty", "power", duty)
    hot_end = frame.define(
        block, "hot_end", "difference", out - water.cooling_water_return.si, low=1.0, start=100.0
    )
    mean = log_mean(hot_end, cooled - water.cooling_water_supply.si)
    coefficient = exchanger_coefficient(plant.coefficient.si, discharge)
    area = frame.define(block, "intercooler_area", "area", duty / (coefficient * mean), low=0.0)
    frame.report(f"{name}.intercooler_area", "area", area)
    result.names.append(name)
    result.powers.append(power)
    result.duties.append(duty)
    result.areas.append(area)
    result.pressures.append(discharge)
    return cold


def build_circulator(frame: Frame, inlet: Gas, loop_pressure: Any) -> tuple[Any, Any]:
    """The circulator against the section's own pressure drop.

    Returns:
        Electric power, W, and enthalpy flow at loop pressure, W.
    """
    block = frame.block("circulator")
    loop, driver = frame.case.loop, frame.case.compression.driver_efficiency.si
    ideal = frame.variable(block, "isentropic_temperature", "temperature", 200.0, 600.0, start=300.0)
    ideal_gas = gas_at(frame, block, "isentropic", inlet.flows, ideal, loop_pressure)
    size = 30.0 * frame.flow
    same = ideal_gas.phase.entropy_fixed - inlet.phase.entropy_fixed == 0
    frame.give(ideal, frame.equation(block, "isentropic", same, size))
    work = frame.define(
        block, "work", "heat", (ideal_gas.enthalpy - inlet.enthalpy) / loop.circulator_efficiency.si, low=0.0
    )
    out = temperature_at(frame, block, "discharge", 200.0, 600.0)
    gas = gas_at(frame, block, "discharge", inlet.flows, out, loop_pressure)
    heating = gas.enthalpy - inlet.enthalpy - work == 0
    frame.give(out, frame.equation(block, "balance", heating, frame.nominal("heat")))
    power = frame.define(block, "power", "heat", work / driver, low=0.0)
    frame.report("loop.circulator_power", "power", power)
    frame.report(
        "loop.pressure_drop",
        "pressure_difference",
        frame.define(block, "head", "pressure", loop_pressure - inlet.pressure),
    )
    frame.stream("circulator.in", inlet.flows, inlet.temperature, inlet.pressure)
    frame.stream("circulator.out", inlet.flows, out, loop_pressure)
    return power, gas.enthalpy
