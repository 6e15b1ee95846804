"""Make-up: the feed streams, let down to the lowest of their pressures and mixed."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from optimiser.section.frame import Frame


@dataclass
class MakeUp:
    """Mixed make-up before compression.

    Attributes:
        flow: total molar flow, mol/s.
        flows: molar flow of each species, mol/s (0 for a species that no stream brings).
        fractions: mole fractions; numbers where the mixing ratio is not a decision.
        molar_enthalpy: J/mol.
    """

    flow: Any
    flows: list[Any]
    fractions: list[Any]
    molar_enthalpy: Any
    temperature: float | None
    pressure: float


def build_makeup(frame: Frame) -> MakeUp:
    """Balances of the feed streams. Their flows, or their shares of a common total, are decisions or held."""
    case, mixture = frame.case, frame.mixture
    block = frame.block("makeup")
    streams = case.feed.streams
    pressure = min(stream.pressure.si for stream in streams.values())
    total = frame.variable(block, "flow", "flow", low=1e-3 * frame.flow, start=frame.flow)
    frame.report("feed.flow", "molar_flow", total)
    shares = _shares(frame, block, total)
    fractions = [
        sum(shares[name] * stream.composition.get(species, 0.0) for name, stream in streams.items())
        for species in mixture.names
    ]
    enthalpy: Any = 0.0
    for name, stream in streams.items():
        held = [stream.composition.get(species, 0.0) for species in mixture.names]
        phase = mixture.gas(stream.temperature.si, stream.pressure.si, held)
        enthalpy = enthalpy + shares[name] * phase.enthalpy
        flow = frame.define(block, f"flow_{name}", "flow", shares[name] * total)
        frame.report(f"feed.streams.{name}.flow", "molar_flow", flow)
        frame.follow(f"feed.streams.{name}.flow", flow, stream.flow, "flow")
        frame.stream(f"feed.{name}", [flow * y for y in held], stream.temperature.si, stream.pressure.si)
    single = next(iter(streams.values())).temperature.si if len(streams) == 1 else None
    flows = [total * y for y in fractions]
    return MakeUp(total, flows, fractions, enthalpy, single, pressure)


def _shares(frame: Frame, block: Any, total: Any) -> dict[str, Any]:
    """Molar share of each stream: stated, following from stated flows, or the remainder."""
    streams = frame.case.feed.streams
    if len(streams) == 1:
        return dict.fromkeys(streams, 1.0)
    shares: dict[str, Any] = {}
    for name, stream in streams.items():
        if stream.share is not None:
            path = f"feed.streams.{name}.share"
            shares[name] = frame.decision(block, f"share_{name}", "fraction", path, stream.share, "fraction")
        elif stream.flow is not None:
            shares[name] = frame.variable(block, f"share_{name}", "fraction", 0.0, 1.0, 1.0 / len(streams))
    rest = [name for name in streams if name not in shares]
    if rest:
        shares[rest[0]] = 1.0 - sum(shares.values())
    else:
        frame.equation(block, "shares", sum(shares.values()) == 1.0)
    return {name: shares[name] for name in streams}
