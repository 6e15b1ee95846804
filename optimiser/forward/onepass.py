"""One pass through the section with the recycle given, piece after piece."""

from __future__ import annotations

import numpy as np

from optimiser.chemistry.reactions import Chemistry
from optimiser.forward.bed import needed
from optimiser.forward.machines import compress, compress_makeup, feed_flows, mixed_makeup
from optimiser.forward.properties import Properties, State
from optimiser.forward.reactor import BedRequest, ReactorWalk
from optimiser.forward.report import Pieces
from optimiser.forward.stability import Dew, dew_point
from optimiser.forward.stream import Floats, SetpointFailure, Stream, gas_stream
from optimiser.forward.train import cold_side, condense, part
from optimiser.inputs.case import Case


class OnePass:
    """Computes passes of one case; holds what all of them share."""

    def __init__(self, case: Case, chemistry: Chemistry, properties: Properties) -> None:
        self.case, self.chemistry, self.properties = case, chemistry, properties
        self.reactor = ReactorWalk(case, chemistry, properties)

    def run(
        self,
        setpoints: dict[str, float],
        makeup: dict[str, float],
        recycle: Stream,
        request: BedRequest,
        near: Pieces | None = None,
    ) -> Pieces:
        """Make-up, compression, circulator, mixing, reactor, train and purge.

        Args:
            setpoints: SI by path, all of them.
            makeup: flow of each feed stream, mol/s.
            recycle: gas after the purge, before it is warmed.
            request: how beds are to be computed.
            near: an earlier pass, where the searches for phases begin.
        """
        case, properties = self.case, self.properties
        pressure = needed(setpoints, "loop.pressure")
        entry = mixed_makeup(case, properties, makeup)
        stages = compress_makeup(case, properties, entry, setpoints)
        side = cold_side(case, properties, recycle, setpoints)
        circulator = compress(properties, side.warm, pressure, case.loop.circulator_efficiency.si)
        mixed = self._mixed(stages[-1].cooled, circulator.outlet, pressure)
        lower = pressure - case.loop.feed_pressure_drop.si
        if lower <= 0.0:
            raise SetpointFailure("loop.feed_pressure_drop leaves no pressure")
        feed = properties.gas_at_enthalpy(mixed.flows, lower, mixed.enthalpy, mixed.temperature)
        reactor = self.reactor.walk(feed, setpoints, request, None if near is None else near.reactor.outlet)
        train = condense(case, properties, reactor.outlet, side, setpoints, None if near is None else near.train)
        parted = part(case, train.separator.vapour, sum(makeup.values()), setpoints)
        return Pieces(makeup, entry, stages, side, circulator, mixed, reactor, train, parted)

    def _mixed(self, fresh: State, back: State, pressure: float) -> State:
        """Make-up and recycle at loop pressure."""
        flows, heat = fresh.flows + back.flows, fresh.enthalpy + back.enthalpy
        guess = (fresh.heat_capacity * fresh.temperature + back.heat_capacity * back.temperature) / (
            fresh.heat_capacity + back.heat_capacity
        )
        return self.properties.gas_at_enthalpy(flows, pressure, heat, guess)

    def streams(self, pieces: Pieces) -> dict[str, Stream]:
        """All streams of a pass by name."""
        found = self._feed_streams(pieces)
        for stage in pieces.stages:
            machine, path = stage.machine, f"compression.{stage.name}"
            states = {
                "in": machine.inlet,
                "isentropic": machine.ideal,
                "out": machine.outlet,
                "cooled": stage.cooled,
            }
            found |= {f"{path}.{end}": _stream(f"{path}.{end}", state) for end, state in states.items()}
        machine = pieces.circulator
        found["circulator.in"] = _stream("circulator.in", machine.inlet)
        found["circulator.isentropic"] = _stream("circulator.isentropic", machine.ideal)
        found["circulator.out"] = _stream("circulator.out", machine.outlet)
        found["converter_feed"] = _stream("converter_feed", pieces.mixed)
        found |= pieces.reactor.streams
        found["condensation.in"] = pieces.reactor.outlet.stream("condensation.in")
        for name, phases in pieces.train.stages.items():
            found[f"condensation.{name}.out"] = phases.stream(f"condensation.{name}.out")
        return found | self._parted_streams(pieces)

    def _feed_streams(self, pieces: Pieces) -> dict[str, Stream]:
        names, found = self.chemistry.mixture.names, {}
        for name, stream in self.case.feed.streams.items():
            flows = feed_flows(self.case, names, name, pieces.makeup[name])
            found[f"feed.{name}"] = gas_stream(f"feed.{name}", flows, stream.temperature.si, stream.pressure.si)
        return found | {"makeup": _stream("makeup", pieces.entry)}

    def _parted_streams(self, pieces: Pieces) -> dict[str, Stream]:
        separator, parted = pieces.train.separator, pieces.parted
        state = separator.temperature, separator.pressure
        found = {
            "separator.vapour": gas_stream("separator.vapour", separator.vapour, *state),
            "purge": gas_stream("purge", parted.purge, *state),
            "recycle": gas_stream("recycle", parted.recycle, *state),
        }
        nothing = np.zeros_like(separator.liquid)
        return found | {"product": Stream("product", nothing, separator.liquid, *state)}

    def dews(self, pieces: Pieces) -> dict[str, Dew]:
        """Dew points of what goes through coolers that may condense it and stays gas, by stream."""
        found = {f"condensation.{name}.out": phases for name, phases in pieces.train.stages.items()}
        found |= pieces.reactor.flashed
        gases = {name: phases for name, phases in found.items() if phases.drops is None}
        at: dict[float, Dew] = {}
        for phases in gases.values():
            if phases.pressure not in at:
                at[phases.pressure] = dew_point(self.properties, phases.vapour, phases.pressure)
        return {name: at[phases.pressure] for name, phases in gases.items()}


def _stream(name: str, state: State) -> Stream:
    return gas_stream(name, state.flows, state.temperature, state.pressure)


def species_fed(case: Case, names: tuple[str, ...], makeup: dict[str, float]) -> Floats:
    """Flow of each species in all feed streams together, mol/s."""
    total = np.zeros(len(names))
    for name, flow in makeup.items():
        total = total + feed_flows(case, names, name, flow)
    return total
