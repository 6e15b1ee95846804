"""Reactions, catalyst and rate laws of a model, ready to be asked by beds."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from optimiser.chemistry.effectiveness import EFFECTIVENESS
from optimiser.chemistry.eos import Cubic
from optimiser.chemistry.maths import R
from optimiser.chemistry.mixture import Mixture, Phase
from optimiser.chemistry.rates import Arrhenius, RateLaw
from optimiser.chemistry.species import Species
from optimiser.chemistry.thermo import enthalpy_sum, gibbs_sum

if TYPE_CHECKING:
    from optimiser.inputs.model import CatalystData, LawData, Model, SpeciesData


@dataclass(frozen=True)
class Reaction:
    """A reaction with its stoichiometric numbers in species order, products positive."""

    name: str
    nu: tuple[float, ...]
    species: tuple[Species, ...]

    def ln_k(self, temperature: Any) -> Any:
        """Logarithm of the equilibrium constant at a standard pressure of 1 bar, from Gibbs energies; T in K."""
        return gibbs_sum(self.species, self.nu, temperature) * (-1.0 / R) / temperature

    def enthalpy(self, temperature: Any) -> Any:
        """Standard enthalpy of reaction, J/mol; T in K."""
        return enthalpy_sum(self.species, self.nu, temperature)


@dataclass(frozen=True)
class Catalyst:
    """A catalyst as packed.

    Attributes:
        bulk_density: kg per m3 of bed.
        void: share of the bed between pellets.
        pellet_diameter: m.
        gas_viscosity: Pa s at `viscosity_temperature`; grows with T^`viscosity_exponent`.
        price: money per kg in the model's currency (EUR); life: s.
        temperature_range, pressure_range: where the rate law was measured, K and Pa.
    """

    bulk_density: float
    void: float
    pellet_diameter: float
    gas_viscosity: float
    viscosity_temperature: float
    viscosity_exponent: float
    price: float
    life: float
    temperature_range: tuple[float, float]
    pressure_range: tuple[float, float]

    def viscosity(self, temperature: Any) -> Any:
        """Viscosity of the gas in the bed, Pa s; a straight line in T, the tangent of the power law."""
        slope = self.viscosity_exponent / self.viscosity_temperature
        return self.gas_viscosity * (1.0 - self.viscosity_exponent + slope * temperature)


@dataclass(frozen=True)
class Chemistry:
    """A model with its equation of state.

    Attributes:
        products: names of the wanted species; key_reactant: the one that conversion is counted by.
        inerts: species that no reaction touches.
        effectiveness: name of a published function, or None.
    """

    mixture: Mixture
    reactions: tuple[Reaction, ...]
    laws: tuple[RateLaw, ...]
    catalyst: Catalyst
    products: tuple[str, ...]
    key_reactant: str
    inerts: tuple[str, ...]
    effectiveness: str | None

    @classmethod
    def build(cls, model: Model, kind: str, species: Sequence[str] | None = None) -> Chemistry:
        """Chemistry of a model.

        Args:
            kind: equation of state, "srk", "pr" or "ideal".
            species: those present; None for all. A species that never occurs must be left out, since equilibrium
                between phases takes the logarithm of every fraction.
        """
        names = [n for n in model.species if species is None or n in species]
        kept = tuple(_species(n, model.species[n]) for n in names)
        reactions = tuple(
            Reaction(name, tuple(numbers.get(n, 0.0) for n in names), kept)
            for name, numbers in model.reactions.items()
        )
        laws = tuple(
            _law(model.rate_laws[r.name], r.nu, names) for r in reactions if r.name in model.rate_laws
        )
        touched = {n for numbers in model.reactions.values() for n in numbers}
        return cls(
            build_mixture(model, kind, kept),
            reactions,
            laws,
            _catalyst(model.catalyst),
            model.products,
            model.key_reactant,
            tuple(n for n in names if n not in touched),
            model.effectiveness,
        )

    def rates(self, phase: Phase, temperature: Any, pressure: Any, activity: Any) -> list[Any]:
        """Rate of each reaction's extent, mol per m3 of bed and second, with activity and effectiveness."""
        factor: Any = activity
        if self.effectiveness is not None:
            function = EFFECTIVENESS[self.effectiveness][0]
            fractions = dict(zip(self.mixture.names, phase.fractions, strict=True))
            factor = factor * function(temperature, pressure, fractions)
        return [
            factor * law.rate(phase.fugacity, temperature, reaction.ln_k(temperature))
            for law, reaction in zip(self.laws, self.reactions, strict=True)
        ]

    def range_faults(self, temperatures: tuple[float, float], pressures: tuple[float, float]) -> list[str]:
        """Where a bed leaves the range of its rate law or of its effectiveness factor, in words; K and Pa."""
        catalyst, faults = self.catalyst, []
        ranges = [("rate law", catalyst.temperature_range, catalyst.pressure_range)]
        if self.effectiveness is not None:
            _, t_range, p_range = EFFECTIVENESS[self.effectiveness]
            ranges.append((f"effectiveness factor {self.effectiveness}", t_range, p_range))
        for name, t_range, p_range in ranges:
            faults += _outside(f"the {name} is used", temperatures, t_range, 1.0, 273.15, "degC")
            faults += _outside(f"the {name} is used", pressures, p_range, 1e5, 0.0, "bar")
        return faults


def _outside(
    what: str, used: tuple[float, float], stated: tuple[float, float], unit: float, zero: float, name: str
) -> list[str]:
    """A sentence where a range is left by more than round-off."""
    slack = 1e-6 * stated[1]
    if used[0] >= stated[0] - slack and used[1] <= stated[1] + slack:
        return []
    low, high, a, b = ((x - zero) / unit for x in (*stated, *used))
    where = f"{a:.0f}" if math.isclose(a, b) else f"{a:.0f} .. {b:.0f}"
    return [f"{what} at {where} {name}, outside its range of {low:.0f} .. {high:.0f} {name}"]


def _species(name: str, data: SpeciesData) -> Species:
    shift = data.enthalpy_shift.si if data.enthalpy_shift is not None else 0.0
    ranges = tuple((part.range.low, part.range.high, part.coefficients) for part in data.nasa)
    critical = data.critical
    return Species(
        name,
        data.elements,
        data.molar_mass.si,
        ranges,
        critical.temperature.si,
        critical.pressure.si,
        critical.acentric,
        shift,
    )


def _catalyst(data: CatalystData) -> Catalyst:
    return Catalyst(
        bulk_density=data.bulk_density.si,
        void=data.void.si,
        pellet_diameter=data.pellet_diameter.si,
        gas_viscosity=data.viscosity.value.si,
        viscosity_temperature=data.viscosity.temperature.si,
        viscosity_exponent=data.viscosity.exponent,
        price=data.price.si,
        life=data.life.si,
        temperature_range=(data.range.temperature.low, data.range.temperature.high),
        pressure_range=(data.range.pressure.low, data.range.pressure.high),
    )


def build_mixture(model: Model, kind: str, kept: Sequence[Species]) -> Mixture:
    """Species with the equation of state of that kind; for "ideal" the liquid is by SRK."""
    cubic = "srk" if kind == "ideal" else kind
    pairs = {frozenset(pair.pair): (pair.k, 0.0) for pair in getattr(model.binary, cubic)}
    binary = [[pairs.get(frozenset((a.name, b.name)), (0.0, 0.0)) for b in kept] for a in kept]
    liquid = Cubic(
        cubic,
        [s.critical_temperature for s in kept],
        [s.critical_pressure for s in kept],
        [s.acentric for s in kept],
        binary,
    )
    return Mixture(kept, None if kind == "ideal" else liquid, liquid)


def _law(data: LawData, nu: Sequence[float], names: Sequence[str]) -> RateLaw:
    """A law in species order."""
    where = {name: k for k, name in enumerate(names)}
    guard = data.guard
    return RateLaw(
        Arrhenius(data.log_factor, data.activation_temperature),
        {where[n]: a for n, a in data.powers.items()},
        data.driving_power,
        data.equilibrium_power,
        nu,
        data.pascals,
        data.rate_size,
        guard.value if guard is not None else 0.0,
        frozenset(where[n] for n in guard.species) if guard is not None else frozenset(),
    )
