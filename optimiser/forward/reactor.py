"""The reactor's steps as the gas meets them, and the feed on the other side of its exchangers."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np

from optimiser.chemistry.reactions import Chemistry
from optimiser.engineering.heat import steam_saturation_temperature
from optimiser.forward.bed import AUDIT_TOLERANCE, BedSize, KineticBeds, bed_size, needed
from optimiser.forward.exchange import Exchanged, exchange
from optimiser.forward.factor_bed import FactorBeds
from optimiser.forward.flash import Phases, flash_ph, flash_tp
from optimiser.forward.properties import Properties, State
from optimiser.forward.stream import BedFailure, BedProfile, SetpointFailure, Stream, gas_stream
from optimiser.inputs.case import BedStep, Case, CoolStep

Positions = Mapping[str, Sequence[float]]


@dataclass(frozen=True)
class BedRequest:
    """How beds are to be computed.

    Attributes:
        positions: by bed, parts of the volume at which a profile is wanted.
        tolerance: relative, of the integration.
        damkohler: coefficients by bed (see `factor_bed`); a bed without them is computed by its rate law.
        drag: part of the beds' pressure drop that counts; less than 1 in starts alone.
    """

    positions: Positions = field(default_factory=dict)
    tolerance: float = AUDIT_TOLERANCE
    damkohler: Mapping[str, tuple[float, ...]] = field(default_factory=dict)
    drag: float = 1.0


@dataclass
class ReactorPass:
    """The reactor in one pass.

    Attributes:
        outlet: both phases after the last step.
        streams: by name.
        beds: by name; `sizes` likewise.
        exchangers: in the order of the steps.
        duties: heat by sink, W.
        flashed: phases after coolers that may condense, by stream.
        feed_gap: heat that the feed lacks after its last exchanger, W; round-off where one of them closes the
            balance.
    """

    outlet: Phases
    streams: dict[str, Stream] = field(default_factory=dict)
    beds: dict[str, BedProfile] = field(default_factory=dict)
    sizes: dict[str, BedSize] = field(default_factory=dict)
    exchangers: list[Exchanged] = field(default_factory=list)
    duties: dict[str, float] = field(default_factory=dict)
    flashed: dict[str, Phases] = field(default_factory=dict)
    feed_gap: float = 0.0


@dataclass
class _Cooled:
    """One cooler's hot side; `after` is None until the heating of the feed gives it."""

    step: CoolStep
    before: Phases
    after: Phases | None
    flashed: bool

    @property
    def duty(self) -> float:
        assert self.after is not None
        return self.before.enthalpy - self.after.enthalpy


def gas_phases(state: State) -> Phases:
    """A gas alone as phases."""
    return Phases(
        state.flows,
        np.zeros_like(state.flows),
        state.temperature,
        state.pressure,
        state.enthalpy,
        state,
        None,
    )


class ReactorWalk:
    """Computes the steps of one case; holds what all passes share."""

    def __init__(self, case: Case, chemistry: Chemistry, properties: Properties) -> None:
        self.case, self.properties = case, properties
        self.kinetic, self.factor = KineticBeds(chemistry, properties), FactorBeds(chemistry, properties)

    def walk(
        self, feed: State, setpoints: dict[str, float], request: BedRequest, near: Phases | None = None
    ) -> ReactorPass:
        """All steps.

        Args:
            feed: of the converter after its pressure drop, not yet heated.
            setpoints: SI by path.
            request: how beds are to be computed.
            near: the outlet of an earlier pass, where the search for phases begins.
        """
        steps, cooled = self.case.reactor, []
        first = next(s for s in steps if isinstance(s, BedStep))
        inlet = self._inlet_temperature(first, setpoints)
        heated = self.properties.gas(inlet, feed.pressure, feed.flows)
        result = ReactorPass(gas_phases(heated))
        gas: Phases = result.outlet
        for k, step in enumerate(steps):
            if isinstance(step, BedStep):
                gas = self._bed(step, gas, setpoints, request, result)
                continue
            following = steps[k + 1] if k + 1 < len(steps) else None
            flashed = step.sink != "steam" and not any(isinstance(s, BedStep) for s in steps[k:])
            record = _Cooled(step, gas, None, flashed)
            target = self._hot_outlet(step, following, setpoints)
            pressure = gas.pressure - step.pressure_drop.si
            if pressure <= 0.0:
                raise SetpointFailure(f"reactor.{step.name}: no pressure is left")
            if target is not None:
                record.after = self._cool_to(record, target, pressure)
            gas = record.after or Phases(gas.vapour, gas.liquid, gas.temperature, pressure, np.nan, None, None)
            cooled.append(record)
        self._close(cooled, heated.enthalpy - feed.enthalpy, near)
        result.outlet = gas if cooled == [] or isinstance(steps[-1], BedStep) else _done(cooled[-1])
        self._cold_sides(result, cooled, feed, heated)
        return result

    def _inlet_temperature(self, step: BedStep, setpoints: dict[str, float]) -> float:
        return needed(setpoints, f"reactor.{step.name}.inlet_temperature")

    def _hot_outlet(self, step: CoolStep, following: object, setpoints: dict[str, float]) -> float | None:
        """Temperature of the gas after a cooler; None for the one that closes the heating of the feed."""
        if isinstance(following, BedStep):
            return self._inlet_temperature(following, setpoints)
        path = f"reactor.{step.name}.outlet_temperature"
        if step.outlet_temperature is not None:
            return needed(setpoints, path)
        return None

    def _bed(
        self,
        step: BedStep,
        gas: Phases,
        setpoints: dict[str, float],
        request: BedRequest,
        result: ReactorPass,
    ) -> Phases:
        """One bed; its profile and streams are kept in `result`."""
        inlet = gas_stream(f"reactor.{step.name}.in", gas.vapour, gas.temperature, gas.pressure)
        size = bed_size(step, setpoints)
        profile = self.compute_bed(step, inlet, size, setpoints, request)
        leaving = profile.outlet
        if leaving.vapour.min() < -1e-9 * leaving.total:
            raise BedFailure(step.name, "a species is used up beyond what there is")
        result.beds[step.name], result.sizes[step.name] = profile, size
        result.streams |= {inlet.name: inlet, leaving.name: leaving}
        return gas_phases(self.properties.gas(leaving.temperature, leaving.pressure, leaving.vapour))

    def compute_bed(
        self, step: BedStep, inlet: Stream, size: BedSize, setpoints: dict[str, float], request: BedRequest
    ) -> BedProfile:
        """A bed by its rate law or by its approach to equilibrium, as the case says."""
        coefficients = request.damkohler.get(step.name, ())
        if step.rate == "kinetic" or (step.rate == "damkohler" and not coefficients):
            how = request.positions.get(step.name), request.tolerance, request.drag
            return self.kinetic.integrate(step.name, inlet, size, step.activity.si, *how)
        return self.factor.solve(step, inlet, size, setpoints, coefficients, request.drag)

    def _cool_to(self, record: _Cooled, temperature: float, pressure: float) -> Phases:
        flows = record.before.vapour + record.before.liquid
        if record.flashed:
            return flash_tp(self.properties, flows, temperature, pressure)
        return gas_phases(self.properties.gas(temperature, pressure, flows))

    def _close(self, cooled: list[_Cooled], heat: float, near: Phases | None) -> None:
        """Give the cooler that closes the heating of the feed what duty is left.

        The outlet of a cooler after it is known by its temperature, so the heat of that one moves with this
        one's outlet; if that one heats feed too, the two together would leave the split between them open.
        """
        waiting = [k for k, record in enumerate(cooled) if record.after is None]
        if not waiting:
            return
        # No bed follows it, since that bed's inlet would have said its outlet: a cooler does, or nothing.
        record, *later = cooled[waiting[0] :]
        following = later[0] if later else None
        if len(waiting) > 1 or (following is not None and following.step.sink == "feed"):
            raise SetpointFailure(f"reactor.{record.step.name}: what it leaves to the next feed exchanger is not said")
        others = sum(r.duty for r in cooled if r.step.sink == "feed" and r is not record)
        left = record.before.enthalpy - (heat - others)
        pressure = record.before.pressure - record.step.pressure_drop.si
        record.after = self._at_enthalpy(record, left, pressure, near)
        if following is not None:
            following.before = record.after

    def _at_enthalpy(self, record: _Cooled, enthalpy: float, pressure: float, near: Phases | None) -> Phases:
        flows = record.before.vapour + record.before.liquid
        if not record.flashed:
            guess = record.before.temperature - 100.0
            return gas_phases(self.properties.gas_at_enthalpy(flows, pressure, enthalpy, guess))
        cold = max(record.before.temperature - 250.0, 300.0)
        return flash_ph(self.properties, flows, enthalpy, pressure, cold if near is None else near)

    def _cold_sides(self, result: ReactorPass, cooled: list[_Cooled], feed: State, heated: State) -> None:
        """Cold sides and areas; the feed meets its exchangers in the reverse order of the list."""
        enthalpy, temperature = feed.enthalpy, feed.temperature
        exchangers: dict[str, Exchanged] = {}
        for record in reversed(cooled):
            step = record.step
            if step.sink == "feed":
                enthalpy += record.duty
                warm = self.properties.gas_at_enthalpy(feed.flows, feed.pressure, enthalpy, temperature + 50.0)
                cold = temperature, warm.temperature
                temperature = warm.temperature
                name = f"feed.after.{step.name}"
                result.streams[name] = gas_stream(name, feed.flows, temperature, feed.pressure)
            else:
                cold = self._utility(step)
            exchangers[step.name] = self._exchanger(record, cold)
            result.duties[step.sink] = result.duties.get(step.sink, 0.0) + record.duty
            name = f"reactor.{step.name}.out"
            result.streams[name] = _done(record).stream(name)
            if record.flashed:
                result.flashed[name] = _done(record)
        result.exchangers = [exchangers[record.step.name] for record in cooled]
        result.feed_gap = heated.enthalpy - enthalpy

    def _utility(self, step: CoolStep) -> tuple[float, float]:
        """Temperatures in and out of what takes the heat, K."""
        if step.sink == "steam":
            boiling = float(steam_saturation_temperature(step.steam_pressure.si))
            return boiling, boiling
        if step.sink == "boiler_feed_water":
            return step.water_inlet.si, step.water_outlet.si
        water = self.case.utilities
        return water.cooling_water_supply.si, water.cooling_water_return.si

    def _exchanger(self, record: _Cooled, cold: tuple[float, float]) -> Exchanged:
        step, after = record.step, _done(record)
        hot = record.before.temperature, after.temperature
        use = "exchanger" if step.sink == "feed" else "water_cooled"
        path, pressure = f"reactor.{step.name}", record.before.pressure
        return exchange(path, use, record.duty, hot, cold, pressure, step.coefficient.si)


def _done(record: _Cooled) -> Phases:
    assert record.after is not None
    return record.after
