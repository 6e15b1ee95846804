"""The condensing train: water cooler, cold exchanger, chiller, separator; the purge; the cold side."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from optimiser.engineering.heat import log_mean
from optimiser.engineering.refrigeration import refrigeration_work
from optimiser.engineering.vessels import separator_diameter, separator_volume
from optimiser.forward.bed import needed
from optimiser.forward.exchange import Exchanged, exchange
from optimiser.forward.flash import Phases, flash_ph, flash_tp
from optimiser.forward.properties import Properties, State
from optimiser.forward.stream import Floats, SetpointFailure, Stream
from optimiser.inputs.case import Case

COOLERS = ("water_cooler", "cold_exchanger", "chiller")
USES = {"water_cooler": "water_cooled", "cold_exchanger": "exchanger", "chiller": "chiller"}


@dataclass(frozen=True)
class Refrigeration:
    """The machine behind the chiller: power W, heat into cooling water W, area of its condenser m2."""

    power: float
    rejected: float
    condenser_area: float


@dataclass
class TrainPass:
    """The train in one pass.

    Attributes:
        stages: phases after each cooler present, by its name.
        exchangers: of the coolers present, in order.
        refrigeration: None without a chiller.
        water_duties: heat into cooling water, W.
    """

    inlet: Phases
    stages: dict[str, Phases] = field(default_factory=dict)
    exchangers: list[Exchanged] = field(default_factory=list)
    refrigeration: Refrigeration | None = None
    water_duties: list[float] = field(default_factory=list)

    @property
    def separator(self) -> Phases:
        """Phases at the end of the train."""
        return list(self.stages.values())[-1]


@dataclass(frozen=True)
class ColdSide:
    """The recycle before and after it is warmed; both the same state without a cold exchanger."""

    cold: State
    warm: State

    @property
    def duty(self) -> float:
        """Heat taken up, W."""
        return self.warm.enthalpy - self.cold.enthalpy


def present_coolers(case: Case) -> list[str]:
    """Coolers of the train that the case has, in the order of the gas."""
    return [name for name in COOLERS if getattr(case.condensation, name) is not None]


def cold_side(case: Case, properties: Properties, recycle: Stream, setpoints: dict[str, float]) -> ColdSide:
    """The recycle through the cold exchanger."""
    cold = properties.gas(recycle.temperature, recycle.pressure, recycle.vapour)
    if case.condensation.cold_exchanger is None:
        return ColdSide(cold, cold)
    target = needed(setpoints, "condensation.cold_exchanger.recycle_temperature")
    return ColdSide(cold, properties.gas(target, recycle.pressure, recycle.vapour))


def condense(
    case: Case,
    properties: Properties,
    inlet: Phases,
    recycle: ColdSide,
    setpoints: dict[str, float],
    near: TrainPass | None = None,
) -> TrainPass:
    """All coolers present.

    Args:
        inlet: from the reactor.
        recycle: cold side of the cold exchanger.
        setpoints: SI by path.
        near: an earlier pass, where the search for phases begins.
    """
    pressure = inlet.pressure - case.condensation.pressure_drop.si
    if pressure <= 0.0:
        raise SetpointFailure("condensation: no pressure is left")
    train, before = TrainPass(inlet), inlet
    flows = inlet.vapour + inlet.liquid
    for name in present_coolers(case):
        guess = near.stages.get(name) if near is not None else None
        if name == "cold_exchanger":
            left = before.enthalpy - recycle.duty
            after = flash_ph(properties, flows, left, pressure, guess or before)
        else:
            target = needed(setpoints, f"condensation.{name}.outlet_temperature")
            after = flash_tp(properties, flows, target, pressure, guess)
        train.stages[name] = after
        _exchanged(case, train, name, before, after, recycle)
        before = after
    return train


def _exchanged(case: Case, train: TrainPass, name: str, before: Phases, after: Phases, recycle: ColdSide) -> None:
    """Duty, area and cold side of one cooler."""
    plant, water = getattr(case.condensation, name), case.utilities
    duty = before.enthalpy - after.enthalpy
    if name == "water_cooler":
        cold = water.cooling_water_supply.si, water.cooling_water_return.si
        train.water_duties.append(duty)
    elif name == "cold_exchanger":
        cold = recycle.cold.temperature, recycle.warm.temperature
    else:
        evaporating = after.temperature - plant.evaporator_approach.si
        cold = evaporating, evaporating
        train.refrigeration = _refrigeration(case, duty, evaporating)
        train.water_duties.append(train.refrigeration.rejected)
    hot = before.temperature, after.temperature
    path, use = f"condensation.{name}", USES[name]
    train.exchangers.append(exchange(path, use, duty, hot, cold, before.pressure, plant.coefficient.si))


def _refrigeration(case: Case, duty: float, evaporating: float) -> Refrigeration:
    """Work between evaporator and condenser; the condenser gives it and the duty to cooling water."""
    plant, water = case.condensation.chiller, case.utilities
    assert plant is not None
    condensing = water.cooling_water_return.si + plant.condenser_approach.si
    work = float(refrigeration_work(duty, evaporating, condensing, plant.second_law_efficiency.si))
    rise = water.cooling_water_return.si - water.cooling_water_supply.si
    mean = log_mean(plant.condenser_approach.si, plant.condenser_approach.si + rise)
    area = (duty + work) / (plant.condenser_coefficient.si * mean)
    return Refrigeration(work / case.compression.driver_efficiency.si, duty + work, float(area))


@dataclass(frozen=True)
class Parted:
    """The separator's vapour in two: what is purged and what goes back, mol/s."""

    fraction: float
    purge: Floats
    recycle: Floats


def part(case: Case, vapour: Floats, makeup: float, setpoints: dict[str, float]) -> Parted:
    """Purge by its fraction or, where the recycle ratio is held, by what that leaves.

    Args:
        case: says whether the recycle ratio is held.
        vapour: from the separator, mol/s.
        makeup: molar flow of all feed, mol/s.
        setpoints: SI by path.
    """
    ratio = case.loop.recycle_ratio
    if ratio is not None and ratio.held:
        fraction = 1.0 - needed(setpoints, "loop.recycle_ratio") * makeup / float(vapour.sum())
    else:
        fraction = needed(setpoints, "loop.purge_fraction")
    return Parted(fraction, fraction * vapour, (1.0 - fraction) * vapour)


def separator_size(case: Case, properties: Properties, separator: Phases) -> tuple[float, float]:
    """Inside diameter m and volume m3; where there is no liquid, for drops of the species nearest to it."""
    plant, gas = case.condensation.separator, separator.gas
    if gas is None:
        return 0.0, 0.0
    drops = separator.drops
    if drops is None:
        heaviest = np.zeros_like(gas.flows)
        heaviest[int(np.argmin(gas.ln_phi))] = 1.0
        drops = properties.liquid(gas.temperature, gas.pressure, heaviest)
    light, heavy = (properties.mass(s.flows) / s.volume for s in (gas, drops))
    diameter = float(separator_diameter(gas.volume, light, heavy, plant.vapour_velocity_constant.si))
    return diameter, float(separator_volume(diameter, plant.length_over_diameter.si))
