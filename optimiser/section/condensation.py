"""The condensing train: water cooler, cold exchanger, chiller and the separator at its end."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

from optimiser.engineering.refrigeration import refrigeration_work
from optimiser.engineering.vessels import separator_diameter
from optimiser.section.exchange import Exchanger, build_exchanger
from optimiser.section.frame import Frame, Gas, gas_at, temperature_at
from optimiser.section.removal import Flash, build_flash

# What stands on the cold side of each cooler, as equipment.
_USES = {"water_cooler": "water_cooled", "cold_exchanger": "exchanger", "chiller": "chiller"}


@dataclass
class Train:
    """What the train hands on.

    Attributes:
        separator: both phases at the last temperature.
        recycle: gas to the circulator.
        water_duties: heat into cooling water, W.
        power: electric power of the refrigeration machine, W (0 without one).
    """

    separator: Flash
    recycle: Gas
    purge: list[Any]
    exchangers: list[Exchanger] = field(default_factory=list)
    water_duties: list[Any] = field(default_factory=list)
    power: Any = 0.0
    condenser_area: Any = None


def build_train(frame: Frame, inlet: Gas | Flash, flows: list[Any]) -> Train:
    """All coolers present, then separator, purge and the cold side of the cold exchanger.

    Args:
        inlet: reactor outlet, W and K.
        flows: both phases together, mol/s.
    """
    plant, names = frame.case.condensation, frame.mixture.names
    block = frame.block("condensation")
    pressure = frame.define(block, "pressure", "pressure", inlet.pressure - plant.pressure_drop.si, low=1e3)
    frame.report("condensation.separator.pressure", "pressure", pressure)
    frame.stream("condensation.in", *_phases(inlet, flows))
    coolers = [c for c in ("water_cooler", "cold_exchanger", "chiller") if getattr(plant, c) is not None]
    stages: dict[str, Flash] = {}
    for name in coolers:
        stages[name] = _cooled(frame, name, flows, pressure)
    separator = stages[coolers[-1]]
    purge, recycle = _purge(frame, separator, names)
    train = Train(separator, recycle, purge)
    before: Any = inlet
    for name in coolers:
        _duty(frame, train, name, before, stages[name], separator)
        before = stages[name]
    _separator(frame, separator)
    return train


def _phases(inlet: Gas | Flash, flows: list[Any]) -> tuple[Any, Any, Any, Any]:
    if isinstance(inlet, Flash):
        return inlet.vapour, inlet.temperature, inlet.pressure, inlet.liquid
    return flows, inlet.temperature, inlet.pressure, None


def _cooled(frame: Frame, name: str, flows: list[Any], pressure: Any) -> Flash:
    """Both phases after one cooler."""
    path = f"condensation.{name}"
    block, plant = frame.block(path), getattr(frame.case.condensation, name)
    if name == "cold_exchanger":
        temperature = temperature_at(frame, block, "outlet", 200.0, 500.0)
        frame.report(f"{path}.outlet_temperature", "temperature", temperature)
    else:
        setting = plant.outlet_temperature
        temperature = frame.decision(
            block, "temperature", "temperature", f"{path}.outlet_temperature", setting, "temperature"
        )
    return build_flash(frame, f"{path}.out", block, flows, temperature, pressure)


def _purge(frame: Frame, separator: Flash, names: Any) -> tuple[list[Any], Gas]:
    """Purge from the separator's vapour; the rest is warmed in the cold exchanger where there is one."""
    block, loop = frame.block("purge"), frame.case.loop
    fraction = frame.variable(block, "fraction", "fraction", 0.0, 1.0, start=0.03)
    frame.model.scaling_factor[fraction] = 20.0
    frame.report("loop.purge_fraction", "fraction", fraction)
    frame.follow("loop.purge_fraction", fraction, loop.purge_fraction, "trace")
    flows = [
        frame.define(block, f"recycle_{s}", "flow", (1.0 - fraction) * v, low=1e-9 * frame.flow)
        for s, v in zip(names, separator.vapour, strict=True)
    ]
    purge = [fraction * v for v in separator.vapour]
    total = frame.define(block, "flow", "flow", sum(purge))
    frame.model.scaling_factor[total] = 20.0 / frame.flow
    frame.report("purge.flow", "molar_flow", total)
    frame.stream("separator.vapour", separator.vapour, separator.temperature, separator.pressure)
    frame.stream("product", [0.0] * len(names), separator.temperature, separator.pressure, separator.liquid)
    frame.stream("purge", purge, separator.temperature, separator.pressure)
    frame.stream("recycle", flows, separator.temperature, separator.pressure)
    temperature: Any = separator.temperature
    if frame.case.condensation.cold_exchanger is not None:
        setting = frame.case.condensation.cold_exchanger.recycle_temperature
        path = "condensation.cold_exchanger.recycle_temperature"
        temperature = frame.decision(block, "temperature", "temperature", path, setting, "temperature")
    return purge, gas_at(frame, block, "recycle", flows, temperature, separator.pressure)


def _duty(frame: Frame, train: Train, name: str, hot: Any, cold: Flash, separator: Flash) -> None:
    """Duty and area of one cooler of the train."""
    path = f"condensation.{name}"
    block, plant = frame.block(f"{path}.exchange"), getattr(frame.case.condensation, name)
    duty = frame.define(block, "duty", "heat", hot.enthalpy - cold.enthalpy, low=0.0)
    water, minimum = frame.case.utilities, getattr(plant, "minimum_approach", None)
    ends: tuple[Any, Any]
    if name == "water_cooler":
        ends = (
            hot.temperature - water.cooling_water_return.si,
            cold.temperature - water.cooling_water_supply.si,
        )
        train.water_duties.append(duty)
    elif name == "cold_exchanger":
        left = gas_at(frame, block, "cold_in", train.recycle.flows, separator.temperature, separator.pressure)
        balance = duty - (train.recycle.enthalpy - left.enthalpy)
        frame.equation(block, "balance", balance == 0, frame.nominal("heat"))
        ends = (hot.temperature - train.recycle.temperature, cold.temperature - separator.temperature)
    else:
        evaporating = cold.temperature - plant.evaporator_approach.si
        ends = (hot.temperature - evaporating, plant.evaporator_approach.si)
        _refrigeration(frame, block, train, duty, evaporating)
    coefficient, use = plant.coefficient.si, _USES[name]
    train.exchangers.append(
        build_exchanger(frame, block, path, duty, ends, hot.pressure, coefficient, minimum, use)
    )


def _refrigeration(frame: Frame, block: Any, train: Train, duty: Any, evaporating: Any) -> None:
    """Work of the machine between its evaporating and condensing temperatures, and its condenser."""
    plant, water = frame.case.condensation.chiller, frame.case.utilities
    assert plant is not None
    condensing = water.cooling_water_return.si + plant.condenser_approach.si
    work = refrigeration_work(duty, evaporating, condensing, plant.second_law_efficiency.si)
    power = frame.define(block, "power", "heat", work / frame.case.compression.driver_efficiency.si, low=0.0)
    frame.report("condensation.chiller.power", "power", power)
    rejected = frame.define(block, "rejected", "heat", duty + work, low=0.0)
    train.power = power
    train.water_duties.append(rejected)
    train.condenser_area = frame.define(
        block, "condenser_area", "area", rejected / _condenser_basis(frame), low=0.0
    )


def _condenser_basis(frame: Frame) -> float:
    """U times mean temperature difference of the refrigerant's condenser, W/m2."""
    from optimiser.engineering.heat import log_mean

    plant, water = frame.case.condensation.chiller, frame.case.utilities
    assert plant is not None
    rise = water.cooling_water_return.si - water.cooling_water_supply.si
    mean = log_mean(plant.condenser_approach.si, plant.condenser_approach.si + rise)
    return float(plant.condenser_coefficient.si * mean)


def _separator(frame: Frame, separator: Flash) -> None:
    """Size of the separator by the velocity at which gas no longer carries drops with it."""
    plant, block = frame.case.condensation.separator, frame.block("separator")
    gas, liquid = separator.vapour_phase, separator.liquid_phase
    share = separator.liquid_flow / (separator.liquid_flow + gas.total)
    fraction = frame.define(block, "vapour_fraction", "ratio", 1.0 - share)
    frame.report("condensation.separator.vapour_fraction", "fraction", fraction)
    density = frame.define(block, "vapour_density", "difference", gas.density, low=1e-3)
    heavy = frame.define(block, "liquid_density", "difference", liquid.density, low=1.0, start=500.0)
    size = separator_diameter(gas.volume, density, heavy, plant.vapour_velocity_constant.si)
    diameter = frame.define(block, "diameter", "length", size, low=0.01)
    frame.report("condensation.separator.diameter", "length", diameter)
