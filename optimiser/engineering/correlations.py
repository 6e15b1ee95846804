"""Purchased and bare-module costs of equipment by size, pressure and material.

A published correlation is a curve fitted over a range of sizes. Outside it the curve may fall, and a falling
cost invites an optimum that is not there. So a curve is used on its rising branch only: below it the smallest
unit is bought, above it several of the largest stand side by side, and the cost rises strictly with size
everywhere.

Sources:
    [1] Turton, R., et al., Analysis, Synthesis and Design of Chemical Processes, appendix A (form of the
        curves).
    [2] Towler, G., Sinnott, R., Chemical Engineering Design, chapter on cost estimating (power
        form).
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass
from math import ceil
from typing import Any

from optimiser.chemistry.maths import exp, log, power
from optimiser.engineering.smooth import proportional_max, proportional_min, smooth_max

LN10 = 2.302585092994046
ATMOSPHERE = 101325.0
SIZE_ROUNDING = 1e-4
"""Square of the relative rounding at the ends of a range: it moves a size by 1 %, a cost by less."""
LEAST_EXPONENT = 0.05
"""Least d(ln cost)/d(ln size) that counts as rising: at zero a cost would have no slope to optimise by."""
PRESSURE_ROUNDING = 1.0
FACTOR_ROUNDING = 1e-3
SIZE_UNITS = {"m2": 1.0, "m3": 1.0, "kg": 1.0, "kW": 1e3}
"""Units that a correlation may be fitted in, as SI."""


class Curve(ABC):
    """Purchased cost of one unit in carbon steel at ambient pressure."""

    @abstractmethod
    def purchased(self, size: Any) -> Any:
        """Cost in the currency of the correlation; size in the unit of the fit."""

    @abstractmethod
    def rising(self, low: float, high: float) -> tuple[float, float]:
        """Part of the range of sizes in which the cost rises."""


@dataclass(frozen=True)
class LogQuadratic(Curve):
    """log10 C = K1 + K2 log10 A + K3 (log10 A)^2 [1].

    Worked value: K = (4.8306, -0.8509, 0.3187) at 100 m2: 25327.9.
    """

    k1: float
    k2: float
    k3: float

    def purchased(self, size: Any) -> Any:
        """Cost at a size above 0, unit of the fit."""
        x = log(size) / LN10
        return exp(LN10 * (self.k1 + x * (self.k2 + self.k3 * x)))

    def rising(self, low: float, high: float) -> tuple[float, float]:
        """Range cut at the size where d(ln C)/d(ln A) = K2 + 2 K3 log10 A is `LEAST_EXPONENT`."""
        if self.k3 == 0.0:
            return low, high
        turn = 10.0 ** ((LEAST_EXPONENT - self.k2) / (2.0 * self.k3))
        return (max(low, turn), high) if self.k3 > 0.0 else (low, min(high, turn))


@dataclass(frozen=True)
class PowerLaw(Curve):
    """C = a + b S^n [2].

    Worked value: a = 11600, b = 34, n = 0.85 at 100000 kg: 616215.0.
    """

    a: float
    b: float
    n: float

    def purchased(self, size: Any) -> Any:
        """Cost at a size above 0, unit of the fit."""
        return self.a + self.b * power(size, self.n)

    def rising(self, low: float, high: float) -> tuple[float, float]:
        """The whole range: b and n are positive."""
        return low, high


@dataclass(frozen=True)
class PressureFactor:
    """log10 F_P = C1 + C2 log10 p + C3 (log10 p)^2, p in barg, and 1 below the range [1].

    Attributes:
        low: lower end of the range, barg.
        high: upper end, barg; above it the curve is followed on, and `out_of_range` says so.
    """

    c1: float
    c2: float
    c3: float
    low: float
    high: float

    def at(self, pressure_barg: Any) -> Any:
        """F_P, never below 1: above the curve by at most 0.0015, most at the lower end of the range.

        Worked value: C = (0.03881, -0.11272, 0.08183) at 100 barg: 1.38258.
        """
        x = log(smooth_max(pressure_barg, self.low, PRESSURE_ROUNDING)) / LN10
        curve = exp(LN10 * (self.c1 + x * (self.c2 + self.c3 * x)))
        return smooth_max(curve, 1.0, FACTOR_ROUNDING)


@dataclass(frozen=True)
class Correlation:
    """A published cost correlation and where it holds.

    Attributes:
        name: as in the equipment file.
        title: what it is, for people.
        size: what it is sized by.
        unit: unit of the fit, one of `SIZE_UNITS`.
        low: lower end of the range, in `unit`.
        high: upper end, in `unit`.
        curve: purchased cost, in `currency`.
        fixed: B1 of the bare-module factor B1 + B2 F_M F_P.
        scaled: B2 of it.
        pressure: pressure factor; None where the size already carries the pressure or none is published.
        year: of the cost.
        index: plant cost index of that cost.
        currency: ISO code.
        source: where it is published.
        confidence: how far it was confirmed.
    """

    name: str
    title: str
    size: str
    unit: str
    low: float
    high: float
    curve: Curve
    fixed: float
    scaled: float
    pressure: PressureFactor | None
    year: int
    index: float
    currency: str
    source: str
    confidence: str

    @property
    def scale(self) -> float:
        """One unit of the fit in SI."""
        return SIZE_UNITS[self.unit]

    @property
    def rising(self) -> tuple[float, float]:
        """Sizes between which the curve is used, in `unit`."""
        return self.curve.rising(self.low, self.high)


def gauge_bar(pressure: Any) -> Any:
    """Gauge pressure in bar from absolute pressure in Pa. Worked value: 1e7 Pa: 98.98675 barg."""
    return (pressure - ATMOSPHERE) / 1e5


def purchased_cost(correlation: Correlation, size: Any) -> Any:
    """Cost of as many units as the size needs, carbon steel, ambient pressure, in money of the correlation's
    year.

    With a = size, not below the rising branch, and u = a, not above the range: C(u) a/u. So a/u units of size
    u, not rounded to whole units, because a whole number has no slope.

    Args:
        correlation: what to buy.
        size: m2, W, kg or m3, above 0.
    """
    low, high = correlation.rising
    needed = proportional_max(size / correlation.scale, low, SIZE_ROUNDING)
    unit = proportional_min(needed, high, SIZE_ROUNDING)
    return correlation.curve.purchased(unit) * needed / unit


def bare_module(correlation: Correlation, size: Any, pressure_barg: Any = None, material: Any = 1.0) -> Any:
    """Bare-module cost, in money of the correlation's year [1]: C (B1 + B2 F_M F_P).

    The bare module is the unit set up in the plant: freight, foundations, piping, instruments, erection and
    their overheads. Contingency and fees come on top (see `costs.CostBasis`).

    Range: as of the correlation; outside it see `out_of_range`.
    Worked value: floating-head exchanger, 100 m2, carbon steel, no pressure factor: 83328.9 USD of 2001,
    within 0.1 %.

    Args:
        correlation: what to buy.
        size: m2, W, kg or m3, above 0.
        pressure_barg: design gauge pressure, bar; not used where the correlation has no pressure factor.
        material: F_M, 1 for carbon steel.
    """
    factor: Any = 1.0
    if correlation.pressure is not None and pressure_barg is not None:
        factor = correlation.pressure.at(pressure_barg)
    return purchased_cost(correlation, size) * (correlation.fixed + correlation.scaled * material * factor)


def out_of_range(correlation: Correlation, size: float, pressure_barg: float | None = None) -> str | None:
    """What is outside the ranges, in words, or None. Plain numbers; arguments as for `bare_module`."""
    found = [_size_fault(correlation, size / correlation.scale)]
    if correlation.pressure is not None and pressure_barg is not None:
        found.append(_pressure_fault(correlation.pressure, pressure_barg))
    faults = [fault for fault in found if fault]
    return f"{correlation.name}: {'; '.join(faults)}" if faults else None


def _size_fault(correlation: Correlation, size: float) -> str | None:
    low, high, unit = correlation.low, correlation.high, correlation.unit
    stated = f"{correlation.size} {size:.6g} {unit} is outside {low:g} .. {high:g} {unit}"
    if size < low:
        return f"{stated}, costed as the smallest unit"
    if size > high:
        return f"{stated}, costed as {ceil(size / high)} units side by side"
    return None


def _pressure_fault(factor: PressureFactor, pressure: float) -> str | None:
    if pressure <= factor.high:
        return None
    return f"pressure {pressure:.4g} barg is above {factor.high:g} barg, its factor is extrapolated"
