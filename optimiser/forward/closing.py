"""Closes the loop of one case for one set of setpoints, pass after pass."""

from __future__ import annotations

import numpy as np

from optimiser.forward.bed import needed
from optimiser.forward.onepass import OnePass, species_fed
from optimiser.forward.reactor import BedRequest
from optimiser.forward.report import Pieces, Reporter
from optimiser.forward.stream import Floats, NotConverged, SetpointFailure, Stream, gas_stream
from optimiser.forward.tear import LoopBalance, Mixing, Split, first_split
from optimiser.forward.train import present_coolers
from optimiser.inputs.case import CoolStep

FIRST_PURGE = 0.02
LARGEST_GROWTH = 0.5
LEAST = 1e-12
"""Least flow of a species over that of the make-up; logarithms are taken."""


class Closing:
    """The search for the recycle that brings itself back.

    Unknown are the logarithms of the recycle of each species and of the make-up.
    """

    def __init__(self, passes: OnePass, reporter: Reporter, setpoints: dict[str, float]) -> None:
        self.case, self.chemistry = passes.case, passes.chemistry
        self._passes, self._reporter, self._known = passes, reporter, setpoints
        self._first = self._makeup()
        self.fed = species_fed(self.case, self.chemistry.mixture.names, self._first)
        self.balance = LoopBalance(self.chemistry, self.fed)
        self.passes = 0

    def run(
        self, request: BedRequest, tolerance: float, iterations: int, *, must_close: bool = True
    ) -> tuple[Pieces, Stream]:
        """The last pass and the recycle that it began with.

        Args:
            request: how beds are to be computed.
            tolerance: largest change of a logarithm that closes the loop.
            iterations: most passes, at least 1.
            must_close: whether a loop that is still open after them is a failure.

        Raises:
            ForwardFailure: a pass could not be computed, or the loop did not close.
        """
        mixing, pieces = Mixing(), None
        recycle = self._guess()
        x = self._unknowns(first_split(self.chemistry, self._purge()))
        for self.passes in range(1, iterations + 1):
            recycle = gas_stream("recycle", np.exp(x[:-1]), recycle.temperature, recycle.pressure)
            scale = float(np.exp(x[-1]))
            makeup = {name: scale * flow for name, flow in self._first.items()}
            pieces = self._passes.run(self._known, makeup, recycle, request, pieces)
            image = self._unknowns(self._split(pieces), float(x[-1]))
            found = pieces.train.separator
            moved = max(
                abs(found.pressure / recycle.pressure - 1.0),
                abs(found.temperature / recycle.temperature - 1.0),
            )
            if max(moved, float(np.max(np.abs(image - x)))) < tolerance:
                return pieces, recycle
            x = mixing.next(x, image)
            recycle = gas_stream("recycle", recycle.vapour, found.temperature, found.pressure)
        if pieces is not None and not must_close:
            return pieces, recycle
        raise NotConverged(f"the loop did not close within {iterations} passes")

    def _makeup(self) -> dict[str, float]:
        """Flow of each feed stream, mol/s: set, or a first guess in the shares that are set."""
        streams, known = self.case.feed.streams, self._known
        if self.case.feed.product_rate is None:
            return {name: needed(known, f"feed.streams.{name}.flow") for name in streams}
        shares = {
            name: needed(known, f"feed.streams.{name}.share") for name, s in streams.items() if s.share is not None
        }
        left = 1.0 - sum(shares.values())
        rest = [name for name in streams if name not in shares]
        if left < 0.0 or len(rest) > 1:
            raise SetpointFailure("the shares of the feed streams do not leave a remainder for one stream")
        shares |= dict.fromkeys(rest, left)
        total = self._first_flow()
        return {name: total * shares[name] for name in streams}

    def _first_flow(self) -> float:
        """Make-up that nine tenths of what it could make, mol/s."""
        product = self.chemistry.mixture.names.index(self.chemistry.products[0])
        rate = needed(self._known, "feed.product_rate") / self.chemistry.mixture.molar_mass[product]
        reaction = next(r for r in self.chemistry.reactions if r.nu[product] > 0)
        return float(rate * -sum(nu for nu in reaction.nu if nu < 0) / reaction.nu[product] / 0.9)

    def _purge(self) -> float:
        """The purge fraction, or a first guess where the recycle ratio is held in its place."""
        ratio = self.case.loop.recycle_ratio
        held = ratio is not None and ratio.held
        return FIRST_PURGE if held else max(needed(self._known, "loop.purge_fraction"), 1e-5)

    def _guess(self) -> Stream:
        """A first recycle: by the pressure drops that are known, at the last cooler's temperature."""
        case = self.case
        drop = case.loop.feed_pressure_drop.si + case.condensation.pressure_drop.si
        drop += sum(step.pressure_drop.si for step in case.reactor if isinstance(step, CoolStep))
        pressure = max(needed(self._known, "loop.pressure") - drop, 1e5)
        last = present_coolers(case)[-1]
        temperature = self._known.get(f"condensation.{last}.outlet_temperature", 300.0)
        return gas_stream("recycle", self.fed, temperature, pressure)

    def _split(self, pieces: Pieces) -> Split:
        """How a pass treats what enters the converter."""
        extents = np.sum([profile.extents[-1] for profile in pieces.reactor.beds.values()], axis=0)
        purge = pieces.parted.fraction
        return self.balance.read(pieces.mixed.flows, extents, pieces.train.separator, purge)

    def _unknowns(self, split: Split, present: float = 0.0) -> Floats:
        """Logarithms of the recycle that closes the loop with the split held, and of the make-up's growth.

        The make-up grows or shrinks by no more than half from its `present` growth (a logarithm), since a
        pass that condenses nothing says nothing of the make-up that would.
        """
        ratio = self.case.loop.recycle_ratio
        if ratio is not None and ratio.held:
            recycle, liquid = self.balance.solve_at_ratio(split, needed(self._known, "loop.recycle_ratio"))
        else:
            recycle, liquid = self.balance.solve(split)
        growth = 0.0
        if self.case.feed.product_rate is not None:
            made = max(self._reporter.product_rate(liquid), LEAST)
            wanted = float(np.log(needed(self._known, "feed.product_rate") / made))
            growth = min(max(wanted, present - LARGEST_GROWTH), present + LARGEST_GROWTH)
        flows = np.log(np.maximum(recycle, LEAST * float(self.fed.sum())))
        return np.append(flows + growth, growth)
