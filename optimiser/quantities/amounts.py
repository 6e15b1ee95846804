"""Values with the unit that the user wrote: a quantity, a setting that may move, a limit.

All hold SI values; `text` writes them as a user would, and reading it gives the very same SI value.
"""

from __future__ import annotations

from dataclasses import dataclass

from optimiser.quantities.dimensions import DIMENSIONS
from optimiser.quantities.units import parse_unit

_YEAR = parse_unit("year").factor


def unit_scale(unit: str, dimension: str, currency: str = "EUR") -> float:
    """Size in SI of a difference of one unit: 1e5 for bar, 1 for degC, 1000 for kEUR."""
    return parse_unit(unit).factor / DIMENSIONS[dimension].unit(currency).factor


def to_shown(si: float, unit: str, dimension: str, currency: str = "EUR") -> float:
    """An SI value in a unit. Only temperatures know an offset."""
    offset = parse_unit(unit).offset if dimension == "temperature" else 0.0
    return (si - offset) / unit_scale(unit, dimension, currency)


def from_shown(value: float, unit: str, dimension: str, currency: str = "EUR") -> float:
    """The SI value of a number in a unit."""
    offset = parse_unit(unit).offset if dimension == "temperature" else 0.0
    return value * unit_scale(unit, dimension, currency) + offset


def shown_unit(dimension: str, currency: str = "EUR") -> str:
    """The unit in which the trade writes a dimension."""
    return DIMENSIONS[dimension].shown_in(currency)


def number_text(si: float, unit: str, dimension: str) -> str:
    """The shortest number that reads back as this SI value."""
    value = to_shown(si, unit, dimension)
    for digits in range(1, 17):
        text = f"{value:.{digits}g}"
        if from_shown(float(text), unit, dimension) == si:
            return _plain(text)
    return _plain(f"{value:.17g}")


def _plain(text: str) -> str:
    """Without an exponent where people would not write one: 8e+06 is 8000000."""
    value = float(text)
    whole = f"{value:.0f}"
    return whole if "e+" in text and len(whole) <= 15 and float(whole) == value else text


@dataclass(frozen=True)
class Quantity:
    """One value.

    Attributes:
        si: in SI (money: in the currency of the case; annual money: a year).
        unit: as the user wrote it; empty for a bare number.
        dimension: name in `DIMENSIONS`.
    """

    si: float
    unit: str
    dimension: str

    def shown(self) -> float:
        """The number in the user's unit."""
        return to_shown(self.si, self.unit, self.dimension)

    @property
    def years(self) -> float:
        """A time in years."""
        return self.si / _YEAR

    @property
    def text(self) -> str:
        """As a user would write it."""
        return _with_unit(number_text(self.si, self.unit, self.dimension), self.unit)


@dataclass(frozen=True)
class Setting:
    """What may move between two ends, or is held where they are equal; SI."""

    low: float
    high: float
    unit: str
    dimension: str

    @property
    def held(self) -> bool:
        """Whether there is nothing to move."""
        return self.low == self.high

    @property
    def value(self) -> float:
        """The held value, SI; ValueError for a range."""
        if not self.held:
            raise ValueError(f"{self.text} is a range")
        return self.low

    @property
    def text(self) -> str:
        """As a user would write it."""
        low, high = (number_text(end, self.unit, self.dimension) for end in (self.low, self.high))
        return _with_unit(low if self.held else f"{low} .. {high}", self.unit)


@dataclass(frozen=True)
class Limit:
    """What must not be passed; an end is None where there is no limit; SI."""

    low: float | None
    high: float | None
    unit: str
    dimension: str

    @property
    def text(self) -> str:
        """As a user would write it."""
        low, high = (self._number(end) for end in (self.low, self.high))
        if not low:
            return _with_unit(f"<= {high}", self.unit)
        return _with_unit(f"{low} .. {high}" if high else f">= {low}", self.unit)

    def _number(self, end: float | None) -> str:
        return "" if end is None else number_text(end, self.unit, self.dimension)


def _with_unit(number: str, unit: str) -> str:
    return f"{number} {unit}".rstrip()
