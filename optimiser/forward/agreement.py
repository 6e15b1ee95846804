"""Lines of the audit that set a reported number beside the one that the audit's own pass gives."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass

import numpy as np

from optimiser.forward.stream import Floats, Stream, Walk
from optimiser.inputs.case import Case
from optimiser.inputs.paths import result_paths

RELATIVE = 1e-3
TEMPERATURE, DIFFERENCE, HOTTEST = 0.1, 0.2, 0.2
"""Allowed in a temperature, in a temperature difference and in the hottest spot of a bed, K."""
APPROACH_FRACTION = 0.002
TRACE = 1e-6
"""Part of a stream, or of the largest quantity of a kind, that is not told from nothing."""
LIMIT = 0.2
"""K by which a limit on a temperature may be passed."""
SETTING_DIMENSIONS = {
    "feed.product_rate": "mass_flow",
    "discharge_pressure": "pressure",
    "inlet_temperature": "temperature",
    "outlet_temperature": "temperature",
    "recycle_temperature": "temperature",
}


@dataclass(frozen=True)
class AuditLine:
    """One comparison; numbers in SI.

    Attributes:
        what: is compared, in words or as a result path.
        model: as reported.
        audit: as the audit has it.
        difference: between them, or how far a limit is passed; not negative.
        allowed: largest difference that passes.
        dimension: of the numbers.
    """

    what: str
    model: float
    audit: float
    difference: float
    allowed: float
    dimension: str

    @property
    def passed(self) -> bool:
        """Whether the difference is allowed."""
        return self.difference <= self.allowed

    @property
    def share(self) -> float:
        """Difference over what is allowed; infinite where nothing is."""
        return self.difference / self.allowed if self.allowed > 0.0 else (math.inf if self.difference > 0.0 else 0.0)


def compared(what: str, model: float, audit: float, allowed: float, dimension: str) -> AuditLine:
    """A line of two numbers; one that is no number never passes."""
    difference = abs(model - audit)
    if not math.isfinite(difference):
        return AuditLine(f"{what} is not a number", 0.0, 0.0, 1.0, 0.0, "fraction")
    return AuditLine(what, model, audit, difference, allowed, dimension)


class Comparison:
    """Reported numbers of one point beside a pass."""

    def __init__(self, case: Case, species: tuple[str, ...], walk: Walk) -> None:
        self.species, self.walk = species, walk
        self.dimensions = result_paths(case)

    def closure(self, recycle: Stream) -> Iterator[AuditLine]:
        """The recycle that the pass ends with beside the one that it began with, for each species.

        What is allowed is a part of the recycle, or of the feed where that is less: a species that leaves by
        a small purge alone comes back almost whole however wrong its recycle is.
        """
        back, total, fed = self.walk.recycle, recycle.total, self.walk.streams["makeup"].vapour
        for k, name in enumerate(self.species):
            given, found = float(recycle.vapour[k]), float(back.vapour[k])
            size = min(given, float(fed[k])) if fed[k] > 0.0 else given
            allowed = RELATIVE * size + TRACE * total
            yield compared(f"loop closure of {name}", given, found, allowed, "molar_flow")
        yield compared("loop closure of temperature", recycle.temperature, back.temperature, TEMPERATURE, "temperature")
        # What the circulator makes up is a small part of the pressure, and its power goes with that part.
        allowed = RELATIVE * (self.walk.quantities["loop.pressure"] - back.pressure)
        yield compared("loop closure of pressure", recycle.pressure, back.pressure, allowed, "pressure")

    def streams(self, reported: Mapping[str, Stream]) -> Iterator[AuditLine]:
        """Temperature, pressure, flows and liquid of every reported stream."""
        for name, stream in reported.items():
            found = self.walk.streams.get(name)
            if found is None:
                yield _unknown(f"stream {name}")
                continue
            what = f"stream {name}"
            yield compared(f"{what}: temperature", stream.temperature, found.temperature, TEMPERATURE, "temperature")
            allowed = RELATIVE * found.pressure
            yield compared(f"{what}: pressure", stream.pressure, found.pressure, allowed, "pressure")
            room = RELATIVE * np.abs(found.flows) + TRACE * found.total
            yield self._worst(f"{what}: flow", stream.flows, found.flows, room)
            if stream.liquid.any() or found.liquid.any():
                yield self._worst(f"{what}: liquid", stream.liquid, found.liquid, room)

    def _worst(self, what: str, model: Floats, audit: Floats, room: Floats) -> AuditLine:
        """The species that uses most of its room."""
        shares = np.abs(model - audit) / room
        k = int(np.argmax(np.where(np.isfinite(shares), shares, np.inf)))
        name = f"{what} of {self.species[k]}"
        return compared(name, float(model[k]), float(audit[k]), float(room[k]), "molar_flow")

    def quantities(self, reported: Mapping[str, float]) -> Iterator[AuditLine]:
        """Every reported quantity: decisions, work, duties, areas, product, costs."""
        largest = self._largest()
        for path, value in reported.items():
            if path not in self.walk.quantities:
                yield _unknown(path)
                continue
            found, dimension = self.walk.quantities[path], self._dimension(path)
            allowed = _allowed(path, dimension, found) + TRACE * largest.get(dimension, 0.0)
            yield compared(path, value, found, allowed, dimension)

    def limits(self, limits: Mapping[str, tuple[float | None, float | None]]) -> Iterator[AuditLine]:
        """Each end of each limit, by the audit's own value."""
        for path, ends in limits.items():
            if path not in self.walk.quantities:
                yield _unknown(f"limits.{path}")
                continue
            found, dimension = self.walk.quantities[path], self._dimension(path)
            for side, end, sign in zip(("low", "high"), ends, (-1.0, 1.0), strict=True):
                if end is not None:
                    yield _held(f"limits.{path}.{side}", end, found, sign, dimension)

    def _largest(self) -> dict[str, float]:
        """Largest size of each kind of quantity that has something to be small beside: money, power, area."""
        largest: dict[str, float] = {}
        for path, value in self.walk.quantities.items():
            dimension = self._dimension(path)
            if dimension in ("money", "money_per_year", "power", "area", "molar_flow"):
                largest[dimension] = max(largest.get(dimension, 0.0), abs(value))
        return largest

    def _dimension(self, path: str) -> str:
        if path in self.dimensions:
            return self.dimensions[path]
        return SETTING_DIMENSIONS.get(path) or SETTING_DIMENSIONS.get(path.rpartition(".")[2], "ratio")


def _allowed(path: str, dimension: str, value: float) -> float:
    """Largest difference that a quantity may show."""
    if path.endswith(".approach_fraction"):
        return APPROACH_FRACTION
    if path.endswith(".hottest"):
        return HOTTEST
    if dimension == "temperature":
        return TEMPERATURE
    if dimension == "temperature_difference":
        return DIFFERENCE
    return RELATIVE * abs(value)


def _held(what: str, end: float, found: float, sign: float, dimension: str) -> AuditLine:
    """One end of a limit: an upper one (`sign` 1) or a lower one (-1)."""
    if not math.isfinite(found):
        return AuditLine(f"{what} limits what is not a number", 0.0, 0.0, 1.0, 0.0, "fraction")
    thermal = dimension in ("temperature", "temperature_difference")
    allowed = LIMIT if thermal else RELATIVE * abs(end)
    return AuditLine(what, end, found, max(sign * (found - end), 0.0), allowed, dimension)


def _unknown(what: str) -> AuditLine:
    """A number that nobody checks is not audited, so it fails."""
    return AuditLine(f"{what} is reported, but the audit does not compute it", 0.0, 0.0, 1.0, 0.0, "fraction")
