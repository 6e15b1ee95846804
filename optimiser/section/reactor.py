"""The reactor: an ordered list of named steps, read in the order in which gas meets them.

Coolers whose sink is the feed form one train on the cold side: the feed meets them in the reverse order and reaches
the first bed's inlet temperature, so one of them takes whatever duty is left.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

from optimiser.engineering.heat import steam_saturation_temperature
from optimiser.inputs.case import BedStep, CoolStep
from optimiser.section.bed import Bed, build_bed
from optimiser.section.exchange import Exchanger, build_exchanger
from optimiser.section.frame import Frame, Gas, gas_at, temperature_at
from optimiser.section.removal import Flash, build_flash


@dataclass
class Reactor:
    """What the reactor hands on.

    Attributes:
        beds: in order.
        exchangers: all coolers; `duties` their heat by sink, W.
        outlet: gas, or both phases where the last cooler may condense.
    """

    outlet: Gas | Flash
    beds: list[Bed] = field(default_factory=list)
    exchangers: list[Exchanger] = field(default_factory=list)
    duties: dict[str, list[Any]] = field(default_factory=dict)


@dataclass
class _Cooled:
    """A cooler whose hot side is known; its cold side follows when all of them are."""

    step: CoolStep
    duty: Any
    hot_in: Any
    hot_out: Any
    pressure: Any


def build_reactor(frame: Frame, feed_flows: list[Any], feed_enthalpy: Any, pressure: Any) -> Reactor:
    """All steps.

    Args:
        feed_flows: of the converter feed, mol/s.
        feed_enthalpy: of the converter feed before it is heated, W.
        pressure: on the feed side and at the first bed, Pa.
    """
    steps = frame.case.reactor
    block = frame.block("reactor_feed")
    first = next(step for step in steps if isinstance(step, BedStep))
    temperature = _inlet_temperature(frame, block, first)
    gas: Any = gas_at(frame, block, "inlet", feed_flows, temperature, pressure)
    heated = gas
    reactor = Reactor(gas)
    cooled: list[_Cooled] = []
    for position, step in enumerate(steps):
        if isinstance(step, BedStep):
            bed = build_bed(frame, step, gas)
            reactor.beds.append(bed)
            gas = bed.outlet
            continue
        following = steps[position + 1] if position + 1 < len(steps) else None
        gas, record = _cool(frame, step, following, gas, after_beds=_after_beds(frame, position))
        cooled.append(record)
    reactor.outlet = gas
    _cold_sides(frame, reactor, cooled, feed_flows, feed_enthalpy, heated)
    return reactor


def _after_beds(frame: Frame, position: int) -> bool:
    return not any(isinstance(step, BedStep) for step in frame.case.reactor[position:])


def _inlet_temperature(frame: Frame, block: Any, step: BedStep) -> Any:
    path = f"reactor.{step.name}.inlet_temperature"
    return frame.decision(block, "temperature", "temperature", path, step.inlet_temperature, "temperature")


def _cool(
    frame: Frame, step: CoolStep, following: Any, gas: Gas, *, after_beds: bool
) -> tuple[Gas | Flash, _Cooled]:
    """The hot side of one cooler: outlet state and duty."""
    path = f"reactor.{step.name}"
    block = frame.block(path)
    pressure = frame.define(block, "pressure", "pressure", gas.pressure - step.pressure_drop.si, low=1e3)
    if isinstance(following, BedStep):
        temperature = _inlet_temperature(frame, block, following)
    elif step.outlet_temperature is not None:
        setting = step.outlet_temperature
        temperature = frame.decision(
            block, "temperature", "temperature", f"{path}.outlet_temperature", setting, "temperature"
        )
    else:
        temperature = temperature_at(frame, block, "outlet")
    outlet: Gas | Flash
    if after_beds and step.sink != "steam":
        outlet = build_flash(frame, f"{path}.out", block, gas.flows, temperature, pressure)
    else:
        outlet = gas_at(frame, block, "outlet", gas.flows, temperature, pressure)
        frame.stream(f"{path}.out", gas.flows, temperature, pressure)
    duty = frame.define(block, "duty", "heat", gas.enthalpy - outlet.enthalpy, low=0.0)
    frame.report(f"{path}.outlet_temperature", "temperature", temperature)
    return outlet, _Cooled(step, duty, gas.temperature, temperature, gas.pressure)


def _cold_sides(
    frame: Frame,
    reactor: Reactor,
    cooled: list[_Cooled],
    feed_flows: list[Any],
    feed_enthalpy: Any,
    heated: Gas,
) -> None:
    """Cold sides and areas; the feed's balance over its exchangers closes the heat of the section."""
    for record in cooled:
        reactor.duties.setdefault(record.step.sink, []).append(record.duty)
    block = frame.block("feed_heating")
    cold_in = temperature_at(frame, block, "entry")
    entry = gas_at(frame, block, "entry", feed_flows, cold_in, heated.pressure)
    frame.give(
        cold_in, frame.equation(block, "entry_is", entry.enthalpy - feed_enthalpy == 0, frame.nominal("heat"))
    )
    remaining = [r for r in reversed(cooled) if r.step.sink == "feed"]
    enthalpy, temperature = entry.enthalpy, cold_in
    for record in reversed(cooled):
        if record.step.sink != "feed":
            _against_utility(frame, reactor, record)
            continue
        remaining.pop(0)
        enthalpy = enthalpy + record.duty
        warm, enthalpy = _feed_after(frame, record, enthalpy, heated, last=not remaining)
        differences = (record.hot_in - warm, record.hot_out - temperature)
        frame.stream(f"feed.after.{record.step.name}", feed_flows, warm, heated.pressure)
        _exchanger(frame, reactor, record, differences)
        temperature = warm


def _feed_after(frame: Frame, record: _Cooled, enthalpy: Any, heated: Gas, *, last: bool) -> tuple[Any, Any]:
    """Temperature and enthalpy of the feed after one exchanger; after the last it is the first bed's inlet."""
    block = frame.block(f"feed_after_{record.step.name}")
    if last:
        frame.equation(block, "closing", enthalpy - heated.enthalpy == 0, frame.nominal("heat"))
        return heated.temperature, heated.enthalpy
    temperature = temperature_at(frame, block, "feed")
    gas = gas_at(frame, block, "feed", heated.flows, temperature, heated.pressure)
    balance = frame.equation(block, "balance", gas.enthalpy - enthalpy == 0, frame.nominal("heat"))
    frame.give(temperature, balance)
    return temperature, gas.enthalpy


def _against_utility(frame: Frame, reactor: Reactor, record: _Cooled) -> None:
    """Cooler that raises steam, heats boiler feed water or is cooled by cooling water."""
    step, water = record.step, frame.case.utilities
    if step.sink == "steam":
        boiling = steam_saturation_temperature(step.steam_pressure.si)
        cold_out, cold_in = boiling, boiling
    elif step.sink == "boiler_feed_water":
        cold_out, cold_in = step.water_outlet.si, step.water_inlet.si
    else:
        cold_out, cold_in = water.cooling_water_return.si, water.cooling_water_supply.si
    _exchanger(frame, reactor, record, (record.hot_in - cold_out, record.hot_out - cold_in))


def _exchanger(frame: Frame, reactor: Reactor, record: _Cooled, differences: tuple[Any, Any]) -> None:
    step = record.step
    path = f"reactor.{step.name}"
    exchanger = build_exchanger(
        frame,
        frame.block(f"{path}.exchanger"),
        path,
        record.duty,
        differences,
        record.pressure,
        step.coefficient.si,
        step.minimum_approach,
        "exchanger" if step.sink == "feed" else "water_cooled",
    )
    reactor.exchangers.append(exchanger)
