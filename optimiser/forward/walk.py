"""One pass through the section in plain numbers, from the recycle stream at the mixing point to the new recycle."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from optimiser.chemistry.reactions import Chemistry
from optimiser.engineering.costs import Equipment
from optimiser.engineering.heat import coefficient_at, log_mean, steam_saturation_temperature
from optimiser.engineering.refrigeration import refrigeration_work
from optimiser.engineering.vessels import separator_diameter, separator_volume
from optimiser.forward.beds import BedIntegrator, BedProfile, factor_bed
from optimiser.forward.compression import compress
from optimiser.forward.streams import StateProblem, Stream, flash, flash_at_enthalpy, gas, gas_temperature
from optimiser.inputs.case import BedStep, Case, CoolStep

Floats = NDArray[np.float64]
PI = 3.141592653589793
SHARPER = 1e-3
"""Flashes settle to this part of the tolerance of the beds."""


@dataclass
class Exchange:
    """One exchanger: what stands on its cold side, duty W, area m2, pressure of the loop gas Pa."""

    use: str
    duty: float
    area: float
    pressure: float


@dataclass
class Walk:
    """What a pass found.

    Attributes:
        streams: by name.
        beds: profiles by name.
        quantities: by result path, SI.
        recycle: at loop pressure, as it comes back; `given` is the one that the pass began with.
        settled: how far flashes settle, in ln K.
        exchangers: by path; `powers`, electric, by name, W; `water`, heat into cooling water, W.
        sunk: heat by sink of the reactor's coolers, W.
    """

    streams: dict[str, Stream] = field(default_factory=dict)
    beds: dict[str, BedProfile] = field(default_factory=dict)
    quantities: dict[str, float] = field(default_factory=dict)
    exchangers: dict[str, Exchange] = field(default_factory=dict)
    powers: dict[str, float] = field(default_factory=dict)
    water: float = 0.0
    sunk: dict[str, float] = field(default_factory=dict)
    condenser_area: float = 0.0
    given: Stream | None = None
    settled: float = 1e-12

    @property
    def recycle(self) -> Stream:
        """Recycle as the pass returns it."""
        return self.streams["circulator.out"]

    def put(self, stream: Stream) -> Stream:
        """Keep a stream under its name."""
        self.streams[stream.name] = stream
        return stream


class Section:
    """A case ready to be walked through."""

    def __init__(self, case: Case, chemistry: Chemistry, equipment: Equipment) -> None:
        self.case, self.chemistry, self.equipment = case, chemistry, equipment
        self.mixture = chemistry.mixture
        self.integrator = BedIntegrator(chemistry)

    def walk(
        self,
        setpoints: Mapping[str, float],
        makeup: Mapping[str, float],
        recycle: Stream,
        positions: Mapping[str, Sequence[float]] | None = None,
        tolerance: float = 1e-9,
    ) -> Walk:
        """One pass.

        Args:
            setpoints: every decision by path, SI, with `loop.purge_fraction`.
            makeup: molar flow of each feed stream, mol/s.
            recycle: gas at loop pressure at the mixing point.
            positions: where each bed's profile is wanted.
            tolerance: of the bed integration.
        """
        walk = Walk(given=recycle, settled=SHARPER * tolerance)
        walk.quantities.update(setpoints)
        fresh = self._makeup(walk, makeup)
        cooled = self._compression(walk, fresh, setpoints)
        feed = self._mix(walk, cooled, recycle, setpoints)
        outlet = self._reactor(walk, feed, setpoints, positions or {}, tolerance)
        separator = self._train(walk, outlet, setpoints)
        self._return(walk, separator, setpoints)
        self._report(walk, feed, fresh)
        from optimiser.forward.costs import add_costs

        add_costs(self, walk)
        return walk

    def kinetic_bed(
        self, step: BedStep, flows: Sequence[float], state: tuple[float, float], sizes: tuple[float, float]
    ) -> BedProfile:
        """A bed by its rate law alone, whatever `rate` the case states.

        Args:
            flows: of the inlet, mol/s.
            state: its temperature K and pressure Pa.
            sizes: volume m3 and diameter m.
        """
        return self.integrator.integrate(step, np.asarray(flows, dtype=float), *state, sizes)

    def round_trip(
        self, setpoints: Mapping[str, float], fresh: Floats, recycle: Floats, tolerance: float
    ) -> tuple[Stream, Stream, dict[str, float]]:
        """Beds and separator alone, for closing the loop.

        Returns:
            The separator's vapour and liquid, and the hottest temperature of each bed, K.
        """
        pressure = setpoints["loop.pressure"] - self.case.loop.feed_pressure_drop.si
        flows, walk = fresh + recycle, Walk(settled=SHARPER * tolerance)
        for step in self.case.reactor:
            if isinstance(step, CoolStep):
                pressure -= step.pressure_drop.si
                continue
            start = gas("in", flows, setpoints[f"reactor.{step.name}.inlet_temperature"], pressure)
            outlet = self._bed(walk, step, start, setpoints, (1.0,), tolerance)
            flows, pressure = outlet.vapour, outlet.pressure
        pressure -= self.case.condensation.pressure_drop.si
        if pressure <= 0:
            raise StateProblem("the pressure drops of the section use up the loop pressure")
        end = self._separator_temperature(setpoints)
        separator = flash(self.mixture, "separator", flows, end, pressure, walk.settled)
        empty = np.zeros_like(flows)
        vapour = gas("vapour", separator.vapour, separator.temperature, pressure)
        liquid = Stream("liquid", empty, separator.liquid, separator.temperature, pressure)
        return vapour, liquid, {name: walk.quantities[f"reactor.{name}.hottest"] for name in walk.beds}

    def _separator_temperature(self, setpoints: Mapping[str, float]) -> float:
        final = "water_cooler" if self.case.condensation.chiller is None else "chiller"
        return setpoints[f"condensation.{final}.outlet_temperature"]

    def _makeup(self, walk: Walk, makeup: Mapping[str, float]) -> Stream:
        """Feed streams let down to the lowest of their pressures and mixed."""
        streams, names = self.case.feed.streams, self.mixture.names
        pressure = min(s.pressure.si for s in streams.values())
        total, enthalpy = np.zeros(len(names)), 0.0
        for name, data in streams.items():
            flows = makeup[name] * np.array([data.composition.get(s, 0.0) for s in names])
            stream = walk.put(gas(f"feed.{name}", flows, data.temperature.si, data.pressure.si))
            enthalpy += stream.enthalpy(self.mixture)
            total = total + flows
            walk.quantities[f"feed.streams.{name}.flow"] = makeup[name]
        walk.quantities["feed.flow"] = float(total.sum())
        guess = next(iter(streams.values())).temperature.si
        temperature = (
            guess if len(streams) == 1 else gas_temperature(self.mixture, total, pressure, enthalpy, guess)
        )
        return walk.put(gas("makeup", total, temperature, pressure))

    def _compression(self, walk: Walk, inlet: Stream, setpoints: Mapping[str, float]) -> Stream:
        plant, water = self.case.compression, self.case.utilities
        supply, back = water.cooling_water_supply.si, water.cooling_water_return.si
        drop, cold = plant.intercooler_pressure_drop.si, plant.intercooler_temperature.si
        stream, power = inlet, 0.0
        for stage in plant.stages:
            path = f"compression.{stage.name}"
            delivery = setpoints.get(f"{path}.discharge_pressure", setpoints["loop.pressure"] + drop)
            walk.put(gas(f"{path}.in", stream.vapour, stream.temperature, stream.pressure))
            out, work = compress(
                self.mixture, stream, delivery, plant.isentropic_efficiency.si, f"{path}.out"
            )
            walk.put(out)
            cooled = walk.put(gas(f"{path}.cooled", out.vapour, cold, delivery - drop))
            duty = out.enthalpy(self.mixture) - cooled.enthalpy(self.mixture)
            coefficient = coefficient_at(plant.coefficient.si, delivery)
            area = duty / (coefficient * log_mean(out.temperature - back, cold - supply))
            walk.powers[path] = work / plant.driver_efficiency.si
            walk.exchangers[path] = Exchange("water_cooled", duty, area, delivery)
            walk.water += duty
            power += walk.powers[path]
            walk.quantities |= {
                f"{path}.ratio": delivery / stream.pressure,
                f"{path}.discharge_temperature": out.temperature,
                f"{path}.power": walk.powers[path],
                f"{path}.intercooler_duty": duty,
                f"{path}.intercooler_area": area,
            }
            stream = cooled
        walk.quantities["compression.power"] = power
        return stream

    def _mix(self, walk: Walk, fresh: Stream, recycle: Stream, setpoints: Mapping[str, float]) -> Stream:
        """Make-up and recycle at loop pressure."""
        pressure = setpoints["loop.pressure"]
        flows = fresh.vapour + recycle.vapour
        enthalpy = fresh.enthalpy(self.mixture) + recycle.enthalpy(self.mixture)
        temperature = gas_temperature(self.mixture, flows, pressure, enthalpy, recycle.temperature)
        return walk.put(gas("converter_feed", flows, temperature, pressure))

    def _reactor(
        self,
        walk: Walk,
        feed: Stream,
        setpoints: Mapping[str, float],
        positions: Mapping[str, Sequence[float]],
        tolerance: float,
    ) -> Stream:
        steps, pressure = self.case.reactor, feed.pressure - self.case.loop.feed_pressure_drop.si
        first = next(s for s in steps if isinstance(s, BedStep))
        stream = gas("heated", feed.vapour, setpoints[f"reactor.{first.name}.inlet_temperature"], pressure)
        heated, enthalpy = stream, feed.enthalpy(self.mixture)
        needed = heated.enthalpy(self.mixture) - enthalpy
        duties: dict[str, tuple[CoolStep, Stream, Stream, float]] = {}
        for k, step in enumerate(steps):
            if isinstance(step, BedStep):
                stream = self._bed(walk, step, stream, setpoints, positions.get(step.name, (1.0,)), tolerance)
                continue
            following = steps[k + 1] if k + 1 < len(steps) else None
            last = not any(isinstance(s, BedStep) for s in steps[k:])
            closing = needed - sum(d for s, _, _, d in duties.values() if s.sink == "feed")
            condensing = last and step.sink != "steam"
            out = self._cooled(walk, step, following, stream, setpoints, closing, may_condense=condensing)
            duty = stream.enthalpy(self.mixture) - out.enthalpy(self.mixture)
            duties[step.name] = (step, stream, walk.put(out), duty)
            walk.quantities[f"reactor.{step.name}.outlet_temperature"] = out.temperature
            stream = out
        self._cold_sides(walk, duties, feed, heated, enthalpy)
        return stream

    def _cooled(
        self,
        walk: Walk,
        step: CoolStep,
        following: Any,
        hot: Stream,
        setpoints: Mapping[str, float],
        closing: float,
        *,
        may_condense: bool,
    ) -> Stream:
        """Gas after one cooler."""
        name, pressure = f"reactor.{step.name}.out", hot.pressure - step.pressure_drop.si
        if isinstance(following, BedStep):
            temperature = setpoints[f"reactor.{following.name}.inlet_temperature"]
        elif step.outlet_temperature is not None:
            temperature = setpoints[f"reactor.{step.name}.outlet_temperature"]
        else:
            target = hot.enthalpy(self.mixture) - closing
            guess = max(hot.temperature - 150.0, 300.0)
            return flash_at_enthalpy(self.mixture, name, hot.flows, pressure, target, guess, walk.settled)
        if may_condense:
            return flash(self.mixture, name, hot.flows, temperature, pressure, walk.settled)
        return gas(name, hot.flows, temperature, pressure)

    def _bed(
        self,
        walk: Walk,
        step: BedStep,
        inlet: Stream,
        setpoints: Mapping[str, float],
        positions: Sequence[float],
        tolerance: float,
    ) -> Stream:
        path = f"reactor.{step.name}"
        walk.put(gas(f"{path}.in", inlet.vapour, inlet.temperature, inlet.pressure))
        sizes = bed_sizes(step, setpoints)
        start = (inlet.vapour, inlet.temperature, inlet.pressure, sizes)
        if step.rate == "approach":
            profile = factor_bed(self.chemistry, step, *start, _stated(step, setpoints))
        else:
            profile = self.integrator.integrate(step, *start, positions, tolerance)
        walk.beds[step.name] = profile
        outlet = walk.put(gas(f"{path}.out", profile.flows, profile.temperature[-1], profile.pressure[-1]))
        wanted = [self.mixture.names.index(p) for p in self.chemistry.products]
        walk.quantities |= {
            f"{path}.outlet_temperature": outlet.temperature,
            f"{path}.hottest": max(inlet.temperature, float(np.max(profile.temperature))),
            f"{path}.pressure_drop": inlet.pressure - outlet.pressure,
            f"{path}.length": profile.length,
            f"{path}.volume": sizes[0],
            f"{path}.diameter": sizes[1],
            f"{path}.product_fraction": float(outlet.vapour[wanted].sum() / outlet.vapour.sum()),
        }
        return outlet

    def _cold_sides(
        self,
        walk: Walk,
        duties: dict[str, tuple[CoolStep, Stream, Stream, float]],
        feed: Stream,
        heated: Stream,
        enthalpy: float,
    ) -> None:
        """Areas of the reactor's coolers; the feed meets those that heat it in reverse order."""
        water = self.case.utilities
        mixture = self.mixture
        cold = gas_temperature(mixture, feed.vapour, heated.pressure, enthalpy, feed.temperature)
        for name, (step, hot, out, duty) in reversed(list(duties.items())):
            walk.sunk[step.sink] = walk.sunk.get(step.sink, 0.0) + duty
            if step.sink == "feed":
                enthalpy += duty
                warm = gas_temperature(mixture, feed.vapour, heated.pressure, enthalpy, cold + 50.0)
                walk.put(gas(f"feed.after.{name}", feed.vapour, warm, heated.pressure))
                ends, use = (hot.temperature - warm, out.temperature - cold), "exchanger"
                cold = warm
            else:
                use = "water_cooled"
                if step.sink == "steam":
                    boiling = float(steam_saturation_temperature(step.steam_pressure.si))
                    sides = (boiling, boiling)
                elif step.sink == "boiler_feed_water":
                    sides = (step.water_outlet.si, step.water_inlet.si)
                else:
                    sides = (water.cooling_water_return.si, water.cooling_water_supply.si)
                    walk.water += duty
                ends = (hot.temperature - sides[0], out.temperature - sides[1])
            self._exchange(walk, f"reactor.{name}", use, duty, ends, hot.pressure, step.coefficient.si)

    def _exchange(
        self,
        walk: Walk,
        path: str,
        use: str,
        duty: float,
        ends: tuple[float, float],
        pressure: float,
        coefficient: float,
    ) -> None:
        # A pass that is only a start may cross temperatures; half a kelvin is the least that the section allows too.
        mean = float(log_mean(max(ends[0], 0.5), max(ends[1], 0.5)))
        area = duty / (float(coefficient_at(coefficient, pressure)) * mean)
        walk.exchangers[path] = Exchange(use, duty, area, pressure)
        walk.quantities |= {f"{path}.duty": duty, f"{path}.area": area, f"{path}.approach": min(ends)}

    def _train(self, walk: Walk, inlet: Stream, setpoints: Mapping[str, float]) -> Stream:
        """Water cooler, cold exchanger and chiller; the separator stands at the last outlet."""
        plant, mixture = self.case.condensation, self.mixture
        walk.put(Stream("condensation.in", inlet.vapour, inlet.liquid, inlet.temperature, inlet.pressure))
        pressure = inlet.pressure - plant.pressure_drop.si
        flows, hot = inlet.flows, inlet
        last = plant.chiller or plant.water_cooler
        final = "chiller" if last is plant.chiller else "water_cooler"
        end = setpoints[f"condensation.{final}.outlet_temperature"]
        separator = flash(mixture, f"condensation.{final}.out", flows, end, pressure, walk.settled)
        water = self.case.utilities
        if plant.water_cooler is not None:
            temperature = setpoints["condensation.water_cooler.outlet_temperature"]
            out = flash(mixture, "condensation.water_cooler.out", flows, temperature, pressure, walk.settled)
            ends = (
                hot.temperature - water.cooling_water_return.si,
                temperature - water.cooling_water_supply.si,
            )
            duty = self._cool(walk, "water_cooler", hot, out, ends, "water_cooled")
            walk.water += duty
            hot = out
        vapour = separator.vapour * (1.0 - setpoints["loop.purge_fraction"])
        back = gas("circulator.in", vapour, separator.temperature, pressure)
        if plant.cold_exchanger is not None:
            cold = back.enthalpy(mixture)
            warm = setpoints["condensation.cold_exchanger.recycle_temperature"]
            back = gas("circulator.in", vapour, warm, pressure)
            duty = back.enthalpy(mixture) - cold
            target = hot.enthalpy(mixture) - duty
            out = flash_at_enthalpy(
                mixture,
                "condensation.cold_exchanger.out",
                flows,
                pressure,
                target,
                hot.temperature - 5.0,
                walk.settled,
            )
            ends = (hot.temperature - warm, out.temperature - separator.temperature)
            self._cool(walk, "cold_exchanger", hot, out, ends, "exchanger")
            hot = out
        walk.put(back)
        if plant.chiller is not None:
            self._chill(walk, hot, separator)
        else:
            walk.put(separator)
        return separator

    def _cool(
        self, walk: Walk, name: str, hot: Stream, out: Stream, ends: tuple[float, float], use: str
    ) -> float:
        """One cooler of the train: duty and area."""
        plant = getattr(self.case.condensation, name)
        duty = hot.enthalpy(self.mixture) - out.enthalpy(self.mixture)
        path = f"condensation.{name}"
        self._exchange(walk, path, use, duty, ends, hot.pressure, plant.coefficient.si)
        walk.quantities[f"{path}.outlet_temperature"] = out.temperature
        walk.put(out)
        return duty

    def _chill(self, walk: Walk, hot: Stream, separator: Stream) -> None:
        plant, water = self.case.condensation.chiller, self.case.utilities
        assert plant is not None
        approach = plant.evaporator_approach.si
        evaporating = separator.temperature - approach
        condensing = water.cooling_water_return.si + plant.condenser_approach.si
        duty = self._cool(
            walk, "chiller", hot, separator, (hot.temperature - evaporating, approach), "chiller"
        )
        work = float(refrigeration_work(duty, evaporating, condensing, plant.second_law_efficiency.si))
        power = work / self.case.compression.driver_efficiency.si
        rise = water.cooling_water_return.si - water.cooling_water_supply.si
        mean = float(log_mean(plant.condenser_approach.si, plant.condenser_approach.si + rise))
        walk.condenser_area = (duty + work) / (plant.condenser_coefficient.si * mean)
        walk.water += duty + work
        walk.powers["refrigeration"] = power
        walk.quantities["condensation.chiller.power"] = power

    def _return(self, walk: Walk, separator: Stream, setpoints: Mapping[str, float]) -> None:
        """Purge, product and circulator."""
        purge = setpoints["loop.purge_fraction"]
        temperature, pressure = separator.temperature, separator.pressure
        walk.put(gas("separator.vapour", separator.vapour, temperature, pressure))
        walk.put(gas("purge", purge * separator.vapour, temperature, pressure))
        walk.put(gas("recycle", (1.0 - purge) * separator.vapour, temperature, pressure))
        walk.put(Stream("product", np.zeros_like(separator.liquid), separator.liquid, temperature, pressure))
        loop = setpoints["loop.pressure"]
        out, work = compress(
            self.mixture,
            walk.streams["circulator.in"],
            loop,
            self.case.loop.circulator_efficiency.si,
            "circulator.out",
        )
        walk.put(out)
        walk.powers["circulator"] = work / self.case.compression.driver_efficiency.si
        walk.quantities["loop.circulator_power"] = walk.powers["circulator"]
        walk.quantities["loop.pressure_drop"] = loop - pressure

    def _report(self, walk: Walk, feed: Stream, fresh: Stream) -> None:
        """Quantities of the section as a whole."""
        names, mixture = self.mixture.names, self.mixture
        beds = [s.name for s in self.case.reactor if isinstance(s, BedStep)]
        last = walk.streams[f"reactor.{beds[-1]}.out"]
        key, wanted = (
            names.index(self.chemistry.key_reactant),
            [names.index(p) for p in self.chemistry.products],
        )
        product, purge = walk.streams["product"], walk.streams["purge"]
        separator = walk.streams["separator.vapour"]
        mass = np.array(mixture.molar_mass)
        made = float((product.liquid * mass)[wanted].sum())
        total = float(product.liquid.sum())
        walk.quantities |= {
            "loop.recycle_ratio": float(walk.recycle.vapour.sum() / fresh.vapour.sum()),
            "reactor.catalyst_volume": sum(walk.quantities[f"reactor.{b}.volume"] for b in beds),
            "reactor.conversion": 1.0 - float(last.vapour[key] / feed.vapour[key]),
            "reactor.pressure_drop": walk.streams[f"reactor.{beds[0]}.in"].pressure
            - walk.streams["condensation.in"].pressure,
            "condensation.separator.pressure": separator.pressure,
            "condensation.separator.vapour_fraction": float(
                separator.vapour.sum() / (separator.vapour.sum() + total)
            ),
            "product.rate": made,
            "product.flow": total,
            "product.purity": float(product.liquid[wanted].sum() / total) if total > 0 else 0.0,
            "product.yield": made / float(fresh.vapour @ mass),
            "purge.flow": float(purge.vapour.sum()),
            "purge.heating_value": float(
                sum(n * s.lhv for n, s in zip(purge.vapour, mixture.species, strict=True))
            ),
        }
        idle = [names.index(i) for i in self.chemistry.inerts]
        if idle:
            walk.quantities["loop.inerts"] = float(feed.vapour[idle].sum() / feed.vapour.sum())
        if total > 0:
            self._separator(walk, separator, product)

    def _separator(self, walk: Walk, vapour: Stream, product: Stream) -> None:
        plant = self.case.condensation.separator
        gas_phase = self.mixture.gas(vapour.temperature, vapour.pressure, vapour.vapour.tolist())
        liquid = self.mixture.liquid(product.temperature, product.pressure, product.liquid.tolist())
        diameter = float(
            separator_diameter(
                float(gas_phase.volume),
                float(gas_phase.density),
                float(liquid.density),
                plant.vapour_velocity_constant.si,
            )
        )
        walk.quantities["condensation.separator.diameter"] = diameter
        volume = float(separator_volume(diameter, plant.length_over_diameter.si))
        walk.quantities["condensation.separator.volume"] = volume


def bed_sizes(step: BedStep, setpoints: Mapping[str, float]) -> tuple[float, float]:
    """Volume m3 and diameter m of a bed."""
    path = f"reactor.{step.name}"
    volume = setpoints[f"{path}.volume"]
    if step.diameter is not None:
        return volume, setpoints[f"{path}.diameter"]
    return volume, float((4.0 * volume / (PI * setpoints[f"{path}.length_over_diameter"])) ** (1.0 / 3.0))


def _stated(step: BedStep, setpoints: Mapping[str, float]) -> tuple[str, float]:
    if step.approach_fraction is not None:
        return "fraction", setpoints[f"reactor.{step.name}.approach_fraction"]
    return "temperature", setpoints[f"reactor.{step.name}.approach_temperature"]
