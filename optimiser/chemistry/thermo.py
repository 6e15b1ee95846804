"""Ideal-gas enthalpy, entropy and Gibbs energy from NASA seven-coefficient polynomials.

H/RT = a1 + a2 T/2 + a3 T^2/3 + a4 T^3/4 + a5 T^4/5 + a6/T; S/R = a1 ln T + a2 T + a3 T^2/2 + a4 T^3/3 + a5 T^4/4 + a7
(McBride, Gordon & Reno, NASA TM-4513, 1993), standard pressure 1 bar. Coefficients are joined over the species before
they meet the temperature, so that a mixture's expression is hardly larger than a species'. Numbers pick the range of
their temperature; symbols use the lowest range, 200 to 1000 K, since an expression cannot choose.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from optimiser.chemistry.maths import R, log
from optimiser.chemistry.species import Species


def _coefficient(species: Species, temperature: Any, k: int) -> Any:
    ranges = species.nasa
    if len(ranges) == 1 or not isinstance(temperature, int | float | np.ndarray):
        return ranges[0][2][k]
    if isinstance(temperature, np.ndarray):
        return np.where(temperature <= ranges[0][1], ranges[0][2][k], ranges[-1][2][k])
    return ranges[0 if temperature <= ranges[0][1] else -1][2][k]


def _joined(species: Sequence[Species], flows: Sequence[Any], temperature: Any, k: int) -> Any:
    """Sum over the species of flow times coefficient, leaving out what is zero."""
    terms = []
    for s, n in zip(species, flows, strict=True):
        coefficient = _coefficient(s, temperature, k)
        absent = isinstance(n, int | float) and n == 0.0
        if not absent and not (isinstance(coefficient, float) and coefficient == 0.0):
            terms.append(n * coefficient)
    return sum(terms) if terms else 0.0


def enthalpy_sum(species: Sequence[Species], flows: Sequence[Any], temperature: Any) -> Any:
    """Sum of flow times molar enthalpy; W for flows in mol/s and a temperature in K."""
    a = [_joined(species, flows, temperature, k) for k in range(6)]
    shift = sum(n * s.enthalpy_shift for s, n in zip(species, flows, strict=True) if s.enthalpy_shift)
    t = temperature / 1000.0
    c = (a[0] * 1e3, a[1] * 5e5, a[2] * (1e9 / 3.0), a[3] * 2.5e11, a[4] * 2e14)
    return R * (((((c[4] * t + c[3]) * t + c[2]) * t + c[1]) * t + c[0]) * t + a[5]) + shift


def entropy_sum(species: Sequence[Species], flows: Sequence[Any], temperature: Any) -> Any:
    """Sum of flow times standard molar entropy at 1 bar; W/K for flows in mol/s and a temperature in K."""
    a = [_joined(species, flows, temperature, k) for k in (0, 1, 2, 3, 4, 6)]
    t = temperature / 1000.0
    series = (((a[4] * 2.5e11 * t + a[3] * (1e9 / 3.0)) * t + a[2] * 5e5) * t + a[1] * 1e3) * t
    return R * (a[0] * log(temperature) + series + a[5])


def gibbs_sum(species: Sequence[Species], flows: Sequence[Any], temperature: Any) -> Any:
    """Sum of flow times standard molar Gibbs energy at 1 bar; W for flows in mol/s and a temperature in K."""
    return enthalpy_sum(species, flows, temperature) - temperature * entropy_sum(species, flows, temperature)
