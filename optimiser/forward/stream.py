"""Streams, bed profiles and the whole pass as plain numbers, and what may go wrong on the way.

Exceptions:
    ForwardFailure (ArithmeticError)
    +-- BedFailure        a bed could not be integrated
    +-- FlashFailure      phases or their temperature could not be found
    +-- SetpointFailure   setpoints are missing, or ask for what cannot be
    +-- NotConverged      the loop did not close
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    from optimiser.chemistry.mixture import Mixture
    from optimiser.forward.stability import Dew

Floats = NDArray[np.float64]


class ForwardFailure(ArithmeticError):
    """The section could not be computed; the message says where and why."""


class BedFailure(ForwardFailure):
    """A bed could not be integrated: `name` and `why`."""

    def __init__(self, name: str, why: str) -> None:
        self.name, self.why = name, why
        super().__init__(f"bed {name}: {why}")


class FlashFailure(ForwardFailure):
    """Phases at equilibrium, or the temperature of a state, could not be found."""


class SetpointFailure(ForwardFailure):
    """A value that the pass needs is missing or impossible."""


class NotConverged(ForwardFailure):
    """The loop did not close within its iterations."""


@dataclass
class Stream:
    """A stream in one or two phases.

    Attributes:
        name: as in the section.
        vapour: flow of each species in the gas, mol/s.
        liquid: flow of each species in the liquid, mol/s; zeros where there is none.
        temperature: K.
        pressure: Pa.
    """

    name: str
    vapour: Floats
    liquid: Floats
    temperature: float
    pressure: float

    @property
    def flows(self) -> Floats:
        """Both phases together, mol/s."""
        return self.vapour + self.liquid

    @property
    def total(self) -> float:
        """Molar flow, mol/s."""
        return float(self.vapour.sum() + self.liquid.sum())

    def named(self, name: str) -> Stream:
        """The same state under another name."""
        return Stream(name, self.vapour, self.liquid, self.temperature, self.pressure)

    def enthalpy(self, mixture: Mixture) -> float:
        """Enthalpy flow with formation enthalpies, W; each phase by the equation of state's own root."""
        state = self.temperature, self.pressure
        heat = 0.0
        if self.vapour.any():
            heat += float(mixture.gas(*state, self.vapour.tolist()).enthalpy)
        if self.liquid.any():
            heat += float(mixture.liquid(*state, self.liquid.tolist()).enthalpy)
        return heat


def gas_stream(name: str, flows: Floats, temperature: float, pressure: float) -> Stream:
    """A stream of gas alone."""
    return Stream(name, flows, np.zeros_like(flows), temperature, pressure)


@dataclass
class BedProfile:
    """A bed along its catalyst volume.

    Attributes:
        positions: parts of the volume, ascending; the last is the outlet, 1.
        extents: of each reaction at each position, mol/s, shape (positions, reactions).
        temperature: K.
        pressure: Pa.
        rates: of the extents, mol per m3 of bed and second, shape of `extents`; zeros for a bed without a
            rate law.
        hottest: highest temperature anywhere in the bed, its inlet included, K.
        inlet, outlet: streams.
        length: m.
    """

    positions: Floats
    extents: Floats
    temperature: Floats
    pressure: Floats
    rates: Floats
    hottest: float
    inlet: Stream
    outlet: Stream
    length: float

    @property
    def flows(self) -> Floats:
        """Of each species at the outlet, mol/s."""
        return self.outlet.vapour


@dataclass
class Walk:
    """One pass through the section.

    Attributes:
        streams: by name.
        beds: by name.
        quantities: every reported quantity by result path, SI (annual money: a year).
        recycle: as computed at the end of the pass: after the purge, before it is warmed.
        tear_error: recycle computed less recycle given, mol/s, for each species.
        feed_gap: heat that the feed exchangers fail to give or give too much, W; 0 where one of them closes
            the balance.
        passes: how many passes were made.
        makeup: flow of each feed stream, mol/s.
        setpoints: that the pass was made at, SI by path.
        dews: dew points of the streams of gas that could condense but do not, by name; of starts alone.
    """

    streams: dict[str, Stream]
    beds: dict[str, BedProfile]
    quantities: dict[str, float]
    recycle: Stream
    tear_error: Floats
    feed_gap: float = 0.0
    passes: int = 1
    makeup: dict[str, float] = field(default_factory=dict)
    setpoints: dict[str, float] = field(default_factory=dict)
    dews: dict[str, Dew] = field(default_factory=dict)
