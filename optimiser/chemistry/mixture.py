"""Species and equation of state together: the phase that beds, compressors, exchangers and flashes ask."""

from __future__ import annotations

from collections.abc import Sequence
from functools import cached_property
from typing import Any

from optimiser.chemistry.eos import Cubic, CubicMix, IdealMix
from optimiser.chemistry.maths import R, exp, log
from optimiser.chemistry.species import Species
from optimiser.chemistry.thermo import enthalpy_sum, entropy_sum

STANDARD_PRESSURE = 1e5


class Mixture:
    """Species of a model in order, with their equation of state.

    `vapour` is None for an ideal gas: then all gas is ideal but for phase equilibrium, which both phases keep to by the
    cubic equation of the liquid. `liquid=True` in `phase` asks for that equation.
    """

    def __init__(self, species: Sequence[Species], vapour: Cubic | None, liquid: Cubic) -> None:
        self.species = tuple(species)
        self.names = tuple(s.name for s in species)
        self.molar_mass = [s.molar_mass for s in species]
        self._vapour, self._liquid = vapour, liquid

    def carbon_flow(self, flows: Sequence[Any]) -> Any:
        """Carbon atoms in a stream, mol/s."""
        return sum(n * s.elements.get("C", 0.0) for n, s in zip(flows, self.species, strict=True))

    def phase(
        self,
        temperature: Any,
        pressure: Any,
        flows: Sequence[Any],
        compressibility: Any,
        liquid: bool = False,
    ) -> Phase:
        """A phase whose compressibility the caller gives: a number, or a variable tied by `Phase.residual`."""
        return Phase(self, temperature, pressure, flows, compressibility, liquid)

    def gas(self, temperature: float, pressure: float, flows: Sequence[float]) -> Phase:
        """The vapour root; numbers only."""
        return self._solved(temperature, pressure, flows, liquid=False)

    def liquid(self, temperature: float, pressure: float, flows: Sequence[float]) -> Phase:
        """The liquid root; numbers only."""
        return self._solved(temperature, pressure, flows, liquid=True)

    def condensing(self, temperature: float, pressure: float, flows: Sequence[float]) -> Phase:
        """The vapour root as phase equilibrium sees it: by the liquid's equation of state; numbers only."""
        phase = Phase(self, temperature, pressure, flows, 1.0, liquid=True)
        phase.compressibility = phase.mix.roots()[-1]
        return phase

    def _solved(self, temperature: float, pressure: float, flows: Sequence[float], *, liquid: bool) -> Phase:
        phase = Phase(self, temperature, pressure, flows, 1.0, liquid)
        roots = phase.mix.roots()
        phase.compressibility = roots[0] if liquid else roots[-1]
        return phase


class Phase:
    """A phase at a temperature (K), pressure (Pa), molar flows (mol/s) and compressibility."""

    def __init__(
        self,
        mixture: Mixture,
        temperature: Any,
        pressure: Any,
        flows: Sequence[Any],
        compressibility: Any,
        liquid: bool,
    ) -> None:
        self.mixture, self.temperature, self.pressure = mixture, temperature, pressure
        self.flows, self.compressibility, self._is_liquid = list(flows), compressibility, liquid

    @cached_property
    def total(self) -> Any:
        """Molar flow, mol/s."""
        return sum(self.flows)

    @cached_property
    def fractions(self) -> list[Any]:
        """Mole fractions."""
        return [n / self.total for n in self.flows]

    @cached_property
    def mix(self) -> CubicMix | IdealMix:
        """The equation of state at this state."""
        eos = self.mixture._liquid if self._is_liquid else self.mixture._vapour
        if eos is None:
            return IdealMix(len(self.flows))
        return eos.mix(self.temperature, self.pressure, self.fractions)

    @cached_property
    def mass(self) -> Any:
        """Mass flow, kg/s."""
        return sum(n * m for n, m in zip(self.flows, self.mixture.molar_mass, strict=True))

    @cached_property
    def residual(self) -> Any:
        """Zero where the compressibility is a root of the equation of state."""
        return self.mix.residual(self.compressibility)

    @cached_property
    def enthalpy(self) -> Any:
        """Enthalpy flow with formation enthalpies, W."""
        ideal = enthalpy_sum(self.mixture.species, self.flows, self.temperature)
        return ideal + self.total * self.mix.enthalpy_departure(self.compressibility)

    @cached_property
    def entropy_fixed(self) -> Any:
        """Entropy flow without the ideal mixing term, W/K: for changes at constant composition."""
        ideal = entropy_sum(self.mixture.species, self.flows, self.temperature)
        pressure = R * log(self.pressure / STANDARD_PRESSURE)
        return ideal + self.total * (self.mix.entropy_departure(self.compressibility) - pressure)

    @cached_property
    def entropy(self) -> Any:
        """Entropy flow, W/K; every species must be present."""
        mixing = sum(n * log(y) for n, y in zip(self.flows, self.fractions, strict=True))
        return self.entropy_fixed - R * mixing

    @cached_property
    def ln_phi(self) -> list[Any]:
        """Logarithms of the fugacity coefficients."""
        return self.mix.ln_phi(self.compressibility)

    @cached_property
    def ln_fugacity(self) -> list[Any]:
        """Logarithms of the fugacities in bar; every species must be present."""
        pressure = log(self.pressure / STANDARD_PRESSURE)
        return [log(y) + p + pressure for y, p in zip(self.fractions, self.ln_phi, strict=True)]

    @cached_property
    def fugacity(self) -> list[Any]:
        """Fugacities, bar; safe where a species is absent."""
        bar = self.pressure / STANDARD_PRESSURE
        ideal = isinstance(self.mix, IdealMix)
        return [
            y * bar if ideal else y * bar * exp(p) for y, p in zip(self.fractions, self.ln_phi, strict=True)
        ]

    @cached_property
    def volume(self) -> Any:
        """Volume flow, m3/s."""
        return self.total * self.compressibility * R * self.temperature / self.pressure

    @cached_property
    def density(self) -> Any:
        """kg/m3."""
        return self.mass / self.volume
