"""Rate laws as data: r = k prod f^a (1 - (Q/K)^n) K^j / prod D^m, written multiplied out.

Forward minus reverse, with the powers of each species joined and zero powers dropped: as a product with Q, a species
that is absent would give 0 times infinity. A species that may be absent and stands under a negative or broken power is
guarded: g(f) = (f + sqrt(f^2 + 4 d^2))/2 with d small beside any partial pressure that matters.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from optimiser.chemistry.maths import exp, power, sqrt


@dataclass(frozen=True)
class Arrhenius:
    """A exp(-E/(R T)): `log_factor` is ln A in the law's own units, `activation` is E/R in K."""

    log_factor: float
    activation: float

    def at(self, temperature: Any, shift: Any = 0.0) -> Any:
        """The constant times exp(shift); the logarithms are added first, so that nothing overflows."""
        return exp(self.log_factor - self.activation / temperature + shift)


@dataclass(frozen=True)
class Adsorption:
    """One factor of the denominator: (1 + sum of constants times powers) to `exponent`."""

    terms: tuple[tuple[Arrhenius, Mapping[int, float]], ...]
    exponent: float


@dataclass(frozen=True)
class RateLaw:
    """One reaction's law.

    Attributes:
        constant: k.
        powers: exponent a of each species, by position.
        driving_power: n of (Q/K)^n; None for an irreversible reaction.
        equilibrium_power: j of K^j.
        nu: stoichiometric numbers of the reaction, in species order.
        pressure_unit: Pa in one unit of the law's pressure.
        rate_unit: mol/(m3 s) in one unit of the law's rate, bed volume, with any stated factor.
        guard: d, in the law's pressure unit.
        guarded: species that the guard applies to, by position.
    """

    constant: Arrhenius
    powers: Mapping[int, float]
    driving_power: float | None
    equilibrium_power: float
    nu: Sequence[float]
    pressure_unit: float
    rate_unit: float
    guard: float
    guarded: frozenset[int]
    adsorption: tuple[Adsorption, ...] = field(default=())

    def rate(self, fugacity_bar: Sequence[Any], temperature: Any, ln_k: Any) -> Any:
        """Rate of the reaction's extent, mol/(m3 s), before activity and effectiveness.

        Args:
            fugacity_bar: fugacity of each species, bar.
            temperature: K.
            ln_k: logarithm of the equilibrium constant of the reaction at 1 bar.
        """
        f = [self._guarded(k, x * (1e5 / self.pressure_unit)) for k, x in enumerate(fugacity_bar)]
        ln_k = ln_k + self._standard_shift()
        forward = self._term(f, temperature, ln_k * self.equilibrium_power, self.powers)
        if self.driving_power is not None:
            reverse = {
                k: self.powers.get(k, 0.0) + self.driving_power * nu
                for k, nu in enumerate(self.nu)
                if nu or k in self.powers
            }
            shift = ln_k * (self.equilibrium_power - self.driving_power)
            forward = forward - self._term(f, temperature, shift, reverse)
        for factor in self.adsorption:
            forward = forward / power(self._denominator(factor, f, temperature), factor.exponent)
        return forward * self.rate_unit

    def _standard_shift(self) -> float:
        """Ln of what turns K in bar into K in the law's pressure unit."""
        import math

        return sum(self.nu) * math.log(1e5 / self.pressure_unit)

    def _guarded(self, k: int, f: Any) -> Any:
        if self.guard == 0.0 or k not in self.guarded:
            return f
        return (f + sqrt(f * f + 4.0 * self.guard * self.guard)) / 2.0

    def _term(self, f: Sequence[Any], temperature: Any, shift: Any, powers: Mapping[int, float]) -> Any:
        term = self.constant.at(temperature, shift)
        below: Any = None
        for k, a in powers.items():
            if a > 0:
                term = term * power(f[k], a)
            elif a < 0:
                below = power(f[k], -a) if below is None else below * power(f[k], -a)
        return term if below is None else term / below

    @staticmethod
    def _denominator(factor: Adsorption, f: Sequence[Any], temperature: Any) -> Any:
        total: Any = 1.0
        for constant, powers in factor.terms:
            term = constant.at(temperature)
            for k, a in powers.items():
                term = term * power(f[k], a)
            total = total + term
        return total
