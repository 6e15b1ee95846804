"""Cubic equations of state in their common two-parameter form, and the ideal gas.

P = RT/(v - b) - a/((v + d1 b)(v + d2 b)), with d1, d2 = 1, 0 for Soave (1972) and 1 +- sqrt(2) for Peng and Robinson
(1976); a by Soave's alpha function, mixing by van der Waals one-fluid rules with binary parameters.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from optimiser.chemistry.maths import R, log, sqrt


@dataclass(frozen=True)
class CubicKind:
    """Constants of one cubic equation of state."""

    omega_a: float
    omega_b: float
    delta_1: float
    delta_2: float
    slope: tuple[float, float, float]


KINDS = {
    "srk": CubicKind(0.42748023, 0.08664035, 1.0, 0.0, (0.480, 1.574, -0.176)),
    "pr": CubicKind(0.45723553, 0.07779607, 1.0 + 2**0.5, 1.0 - 2**0.5, (0.37464, 1.54226, -0.26992)),
}


class Cubic:
    """A cubic equation of state of a mixture.

    Args:
        kind: "srk" or "pr".
        critical_temperature: K, one for each species.
        critical_pressure: Pa.
        acentric: acentric factors.
        binary: symmetric binary parameters (k0, k1), k = k0 + k1 (T - 273.15 K).
    """

    def __init__(
        self,
        kind: str,
        critical_temperature: Sequence[float],
        critical_pressure: Sequence[float],
        acentric: Sequence[float],
        binary: Sequence[Sequence[tuple[float, float]]],
    ) -> None:
        self.kind = KINDS[kind]
        self._b = [
            self.kind.omega_b * R * tc / pc
            for tc, pc in zip(critical_temperature, critical_pressure, strict=True)
        ]
        c0, c1, c2 = self.kind.slope
        # sqrt(a alpha) = p - q sqrt(T) for Soave's alpha: linear in the root of the temperature.
        self._p, self._q = [], []
        for tc, pc, w in zip(critical_temperature, critical_pressure, acentric, strict=True):
            root_a = math.sqrt(self.kind.omega_a * R * R * tc * tc / pc)
            m = c0 + c1 * w + c2 * w * w
            self._p.append(root_a * (1.0 + m))
            self._q.append(root_a * m / math.sqrt(tc))
        self._binary = binary

    def mix(self, temperature: Any, pressure: Any, fractions: Sequence[Any]) -> CubicMix:
        """Mixture parameters at a state."""
        return CubicMix(self, temperature, pressure, fractions)


class CubicMix:
    """A mixture at a temperature, pressure and composition; everything that its properties share."""

    def __init__(self, eos: Cubic, temperature: Any, pressure: Any, fractions: Sequence[Any]) -> None:
        self.eos, self.fractions, self.temperature = eos, fractions, temperature
        root_t = sqrt(temperature)
        roots = [p - q * root_t for p, q in zip(eos._p, eos._q, strict=True)]
        slopes = [-0.5 * q / root_t for q in eos._q]
        count = len(roots)
        weighted = [y * s for y, s in zip(fractions, roots, strict=True)]
        weighted_slopes = [y * s for y, s in zip(fractions, slopes, strict=True)]
        self.pair_sums, self.slope_sums, binary_slope = [], [], 0.0
        shift = temperature - 273.15
        for i in range(count):
            total, slope = 0.0, 0.0
            for j in range(count):
                k0, k1 = eos._binary[i][j]
                keep = 1.0 - k0 if k1 == 0.0 else 1.0 - k0 - k1 * shift
                total = total + keep * weighted[j]
                slope = slope + keep * weighted_slopes[j]
                if k1 != 0.0:
                    binary_slope = binary_slope - k1 * weighted[i] * weighted[j]
            self.pair_sums.append(roots[i] * total)
            self.slope_sums.append((total, slope))
        a = sum(y * s for y, s in zip(fractions, self.pair_sums, strict=True))
        slope_a = (
            2.0 * sum(w * t for w, (t, _) in zip(weighted_slopes, self.slope_sums, strict=True))
            + binary_slope
        )
        b = sum(y * bi for y, bi in zip(fractions, eos._b, strict=True))
        rt = R * temperature
        self.a, self.b, self.slope_a, self.rt = a, b, slope_a, rt
        self.big_a, self.big_b = a * pressure / (rt * rt), b * pressure / rt

    def coefficients(self) -> tuple[Any, Any, Any]:
        """c2, c1, c0 of Z^3 + c2 Z^2 + c1 Z + c0."""
        big_a, big_b = self.big_a, self.big_b
        total = self.eos.kind.delta_1 + self.eos.kind.delta_2
        product = self.eos.kind.delta_1 * self.eos.kind.delta_2
        square = big_b * big_b
        c2 = (total - 1.0) * big_b - 1.0
        c1 = big_a - total * big_b + (product - total) * square
        c0 = -(big_a * big_b) - product * square * (big_b + 1.0)
        return c2, c1, c0

    def residual(self, root: Any) -> Any:
        """The cubic in the compressibility, zero at each root."""
        c2, c1, c0 = self.coefficients()
        return ((root + c2) * root + c1) * root + c0

    def _attraction(self, root: Any) -> Any:
        kind = self.eos.kind
        upper = root + kind.delta_1 * self.big_b
        lower = root + kind.delta_2 * self.big_b if kind.delta_2 else root
        return log(upper / lower) / (kind.delta_1 - kind.delta_2)

    def ln_phi(self, root: Any) -> list[Any]:
        """Logarithms of the fugacity coefficients."""
        attraction = self._attraction(root) / (self.b * self.rt)
        repulsion = log(root - self.big_b)
        part = ((root - 1.0) + self.a * attraction) / self.b
        return [
            bi * part - repulsion - 2.0 * attraction * s
            for bi, s in zip(self.eos._b, self.pair_sums, strict=True)
        ]

    def enthalpy_departure(self, root: Any) -> Any:
        """H - H(ideal gas), J/mol."""
        pull = (self.temperature * self.slope_a - self.a) / self.b
        return self.rt * (root - 1.0) + pull * self._attraction(root)

    def entropy_departure(self, root: Any) -> Any:
        """S - S(ideal gas at the same temperature and pressure), J/mol/K."""
        return R * log(root - self.big_b) + self.slope_a / self.b * self._attraction(root)

    def roots(self) -> list[float]:
        """Real roots above B, ascending; numbers only, by Cardano's formulas and two Newton steps."""
        c2, c1, c0 = (float(c) for c in self.coefficients())
        found = [_polished(z, c2, c1, c0) for z in _cubic_roots(c2, c1, c0)]
        return sorted(z for z in found if z > float(self.big_b))


def _cubic_roots(c2: float, c1: float, c0: float) -> list[float]:
    """Real roots of z^3 + c2 z^2 + c1 z + c0."""
    third = c2 / 3.0
    q = third * third - c1 / 3.0
    r = third**3 - third * c1 / 2.0 + c0 / 2.0
    if r * r < q**3:
        angle, size = math.acos(max(-1.0, min(1.0, r / math.sqrt(q**3)))), -2.0 * math.sqrt(q)
        return [size * math.cos((angle + 2.0 * math.pi * k) / 3.0) - third for k in (0, 1, -1)]
    big = -math.copysign(math.cbrt(abs(r) + math.sqrt(r * r - q**3)), r)
    return [big + (q / big if big else 0.0) - third]


def _polished(z: float, c2: float, c1: float, c0: float) -> float:
    for _ in range(2):
        slope = (3.0 * z + 2.0 * c2) * z + c1
        if slope == 0.0:
            break
        z -= (((z + c2) * z + c1) * z + c0) / slope
    return z


class IdealMix:
    """The ideal gas with the interface of `CubicMix`."""

    def __init__(self, count: int) -> None:
        self.count = count

    def residual(self, root: Any) -> Any:
        """Zero at a compressibility of 1."""
        return root - 1.0

    def ln_phi(self, root: Any) -> list[Any]:
        """Zero for every species."""
        return [0.0] * self.count

    def enthalpy_departure(self, root: Any) -> Any:
        """Zero, J/mol."""
        return 0.0

    def entropy_departure(self, root: Any) -> Any:
        """Zero, J/mol/K."""
        return 0.0

    def roots(self) -> list[float]:
        """The one root."""
        return [1.0]
