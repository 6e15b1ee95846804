"""The whole section: one pass with the recycle given, and the loop closed for a start."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from optimiser.chemistry.reactions import Chemistry
from optimiser.engineering.costs import Equipment
from optimiser.forward.bed import AUDIT_TOLERANCE, DENSE, START_TOLERANCE, BedSize
from optimiser.forward.closing import Closing
from optimiser.forward.flash import flash_tp
from optimiser.forward.money import Accounts
from optimiser.forward.onepass import OnePass
from optimiser.forward.properties import Properties
from optimiser.forward.reactor import BedRequest
from optimiser.forward.report import Pieces, Reporter
from optimiser.forward.starts import attempts
from optimiser.forward.stream import BedProfile, Stream, Walk, gas_stream
from optimiser.inputs.case import BedStep, Case

__all__ = ["Section", "Walk"]

Positions = Mapping[str, Sequence[float]] | Sequence[float] | None
Coefficients = Mapping[str, tuple[float, ...]] | None


class Section:
    """A case prepared for any number of passes. Functions are compiled when they are first needed."""

    def __init__(self, case: Case, chemistry: Chemistry, equipment: Equipment) -> None:
        self.case, self.chemistry = case, chemistry
        self.properties = Properties(chemistry.mixture)
        self.passes = OnePass(case, chemistry, self.properties)
        accounts = Accounts(case, chemistry, equipment)
        self.reporter = Reporter(case, chemistry, self.properties, accounts)

    def walk(
        self,
        setpoints: Mapping[str, float],
        makeup: Mapping[str, float],
        recycle: Stream,
        positions: Positions = None,
        tolerance: float = AUDIT_TOLERANCE,
        damkohler: Coefficients = None,
    ) -> Walk:
        """One pass from a given recycle.

        Args:
            setpoints: SI by path; what the case holds need not be named.
            makeup: flow of each feed stream by name, mol/s.
            recycle: gas after the purge, before it is warmed.
            positions: parts of the volume at which beds are wanted, for all beds or by bed.
            tolerance: relative, of the integration of beds.
            damkohler: coefficients of beds with `rate: damkohler`, by bed (see `factor_bed`); without them
                such a bed is computed by its rate law.

        Raises:
            ForwardFailure: the pass could not be computed.
        """
        known = self._known(setpoints)
        request = self._request(positions, tolerance, damkohler)
        pieces = self.passes.run(known, dict(makeup), recycle, request)
        return self._finished(pieces, known, recycle)

    def converge(
        self,
        setpoints: Mapping[str, float],
        *,
        tolerance: float = 1e-3,
        iterations: int = 20,
        positions: Positions = None,
        damkohler: Coefficients = None,
        bed_tolerance: float = START_TOLERANCE,
        drag: float = 1.0,
        must_close: bool = True,
    ) -> Walk:
        """The loop closed, for a start; where the product rate is set, the make-up follows it.

        Args:
            setpoints: SI by path; what the case holds need not be named.
            tolerance: relative, of the recycle of each species, of the make-up and of the separator's state.
                The steps of the integrator leave noise of about ten times `bed_tolerance`, below which no loop closes.
            iterations: most passes to make.
            positions: as for `walk`.
            damkohler: as for `walk`.
            bed_tolerance: relative, of the integration of beds.
            drag: part of the beds' pressure drop that counts; a start may have less than 1.
            must_close: whether a loop that is open after the last pass is a failure; a start may be open.

        Raises:
            ForwardFailure: a pass could not be computed, or the loop did not close.
        """
        known = self._known(setpoints)
        request = self._request(positions, bed_tolerance, damkohler, drag)
        closing = Closing(self.passes, self.reporter, known)
        pieces, recycle = closing.run(request, tolerance, iterations, must_close=must_close)
        walk = self._finished(pieces, known, recycle, approaches=False)
        walk.passes = closing.passes
        walk.dews = self.passes.dews(pieces)
        return walk

    def start(
        self,
        setpoints: Mapping[str, float],
        *,
        tolerance: float = 1e-3,
        positions: Positions = None,
        damkohler: Coefficients = None,
    ) -> Walk:
        """The loop closed at these setpoints or, where that cannot be, near them (see `starts`).

        `Walk.setpoints` says where. Arguments as for `converge`.

        Raises:
            ForwardFailure: of the first try, when all others fail too.
        """
        how: dict[str, Any] = {"tolerance": tolerance, "positions": positions, "damkohler": damkohler}
        failure: ArithmeticError | None = None
        for attempt in attempts(self.case, self._known(setpoints)):
            how |= {
                "drag": attempt.drag,
                "iterations": attempt.iterations,
                "must_close": attempt.must_close,
            }
            try:
                return self.converge(attempt.setpoints, **how)
            except ArithmeticError as problem:
                failure = failure or problem
        assert failure is not None
        raise failure

    def prepare(self, positions: Positions = None) -> None:
        """Compile everything that starts need, so that processes that are forked from here share it."""
        mixture = self.chemistry.mixture
        flows = np.full(len(mixture.names), 1.0)
        flash_tp(self.properties, flows, 280.0, 1e7)
        if any(step.rate == "kinetic" for step in self.bed_steps):
            for asked in {tuple(p) for p in self._by_bed(positions).values()}:
                self.passes.reactor.kinetic.integrator(asked, START_TOLERANCE)

    @property
    def bed_steps(self) -> list[BedStep]:
        """Beds in order."""
        return [step for step in self.case.reactor if isinstance(step, BedStep)]

    def kinetic_bed(
        self,
        step: BedStep,
        flows: Sequence[float],
        state: tuple[float, float],
        sizes: tuple[float, float],
    ) -> BedProfile:
        """A bed by the catalyst's rate law, whatever `step.rate` says, at its outlet alone.

        Args:
            step: names the bed and its activity.
            flows: of the inlet, mol/s.
            state: of the inlet, K and Pa.
            sizes: volume of catalyst m3 and inside diameter m.
        """
        inlet = gas_stream(f"reactor.{step.name}.in", np.array(flows, dtype=float), *state)
        volume, diameter = sizes
        size = BedSize(volume, diameter, 4.0 * volume / (np.pi * diameter**2))
        return self.passes.reactor.kinetic.integrate(step.name, inlet, size, step.activity.si, (1.0,))

    def _known(self, setpoints: Mapping[str, float]) -> dict[str, float]:
        """Setpoints with what the case holds."""
        held = {path: s.low for path, s in self.case.settings().items() if s.held}
        return held | {path: float(value) for path, value in setpoints.items()}

    def _by_bed(self, positions: Positions) -> Mapping[str, Sequence[float]]:
        """Positions of each bed; the integrator's own where none are asked for."""
        if isinstance(positions, Mapping):
            return positions
        return {step.name: positions or DENSE for step in self.bed_steps}

    def _request(
        self, positions: Positions, tolerance: float, damkohler: Coefficients, drag: float = 1.0
    ) -> BedRequest:
        return BedRequest(self._by_bed(positions), tolerance, damkohler or {}, drag)

    def _finished(self, pieces: Pieces, known: dict[str, float], recycle: Stream, *, approaches: bool = True) -> Walk:
        streams = self.passes.streams(pieces)
        return Walk(
            streams,
            pieces.reactor.beds,
            self.reporter.quantities(pieces, known, approaches=approaches),
            streams["recycle"],
            streams["recycle"].flows - recycle.flows,
            pieces.reactor.feed_gap,
            makeup=pieces.makeup,
            setpoints=known,
        )
