"""Beds told by how far they go towards equilibrium: by a fraction, a Damkohler number, or some kelvin."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from optimiser.chemistry.equilibrium import equilibrium_extents
from optimiser.chemistry.reactions import Chemistry, Reaction
from optimiser.engineering.flow import ergun_gradient
from optimiser.forward.bed import BedSize, needed, reacted
from optimiser.forward.properties import Properties
from optimiser.forward.stream import BedFailure, BedProfile, Floats, Stream, gas_stream
from optimiser.inputs.case import BedStep

REFERENCE_TEMPERATURE, REFERENCE_PRESSURE = 700.0, 1e7


@dataclass(frozen=True)
class _Displaced(Reaction):
    """A reaction whose constant is taken some kelvin away from the gas."""

    shift: float = 0.0

    def ln_k(self, temperature: float) -> float:
        return float(Reaction.ln_k(self, temperature + self.shift))


def displaced(chemistry: Chemistry, approach: float) -> Chemistry:
    """The chemistry whose equilibrium lies `approach` kelvin short of the real one."""
    moved = tuple(
        _Displaced(r.name, r.nu, r.species, approach if r.enthalpy(REFERENCE_TEMPERATURE) < 0 else -approach)
        for r in chemistry.reactions
    )
    return replace(chemistry, reactions=moved)


def damkohler_factor(coefficients: tuple[float, ...], inlet: Stream, volume: float) -> float:
    """1 - exp(-Da), with ln Da = c + a ln(V/F) + b ln(P/100 bar) - e (1/T - 1/700 K), all of the inlet.

    Args:
        coefficients: c, a, b, e, which are fitted to the rate law; V/F is in m3 s/mol, e in K. A fifth is
            left to the pressure drop (see `FactorBeds.solve`).
        inlet: gas.
        volume: of catalyst, m3.
    """
    c, a, b, e = coefficients[:4]
    logarithm = c + a * math.log(volume / inlet.total) + b * math.log(inlet.pressure / REFERENCE_PRESSURE)
    logarithm -= e * (1.0 / inlet.temperature - 1.0 / REFERENCE_TEMPERATURE)
    return -math.expm1(-math.exp(min(logarithm, 100.0)))


class FactorBeds:
    """Beds of one chemistry without a rate law. They have an inlet and an outlet and nothing between."""

    def __init__(self, chemistry: Chemistry, properties: Properties) -> None:
        self.chemistry, self.properties = chemistry, properties

    def solve(
        self,
        step: BedStep,
        inlet: Stream,
        size: BedSize,
        setpoints: dict[str, float],
        coefficients: tuple[float, ...] = (),
        drag: float = 1.0,
    ) -> BedProfile:
        """The outlet: extents at its own temperature and pressure, enthalpy of the inlet, Ergun over the bed.

        Args:
            step: as in the case.
            inlet: gas.
            size: of the catalyst as packed.
            setpoints: hold the approach where the case states one.
            coefficients: of the Damkohler number, where `rate` is damkohler; a fifth is the fall of the
                squared pressure along the bed over what the outlet's gradient would make of it, 1 where it is
                left out.
            drag: part of the pressure drop that counts; less than 1 in starts alone.

        Raises:
            BedFailure: no outlet was found, or no pressure is left.
        """
        extents_at = self._law(step, inlet, size, setpoints, coefficients)
        heat = self.properties.gas(inlet.temperature, inlet.pressure, inlet.vapour).enthalpy
        share = drag * (coefficients[4] if len(coefficients) > 4 else 1.0)
        outlet = _Outlet(self, step.name, inlet, size, heat, share)
        extents, temperature, pressure = outlet.found(extents_at)
        flows = reacted(self.chemistry, inlet.vapour, extents)
        leaving = gas_stream(f"reactor.{step.name}.out", flows, temperature, pressure)
        hottest = max(inlet.temperature, temperature)
        single = (np.array([[*extents]]), np.array([temperature]), np.array([pressure]))
        rates = np.zeros_like(single[0])
        return BedProfile(np.array([1.0]), *single, rates, hottest, inlet, leaving, size.length)

    def _law(
        self,
        step: BedStep,
        inlet: Stream,
        size: BedSize,
        setpoints: dict[str, float],
        coefficients: tuple[float, ...],
    ) -> Callable[[float, float], Floats]:
        """Extents as a function of the outlet's temperature and pressure."""
        path, chemistry, factor = f"reactor.{step.name}", self.chemistry, 1.0
        if step.rate == "damkohler":
            factor = damkohler_factor(coefficients, inlet, size.volume)
        elif step.approach_fraction is not None:
            factor = needed(setpoints, f"{path}.approach_fraction")
        else:
            chemistry = displaced(chemistry, needed(setpoints, f"{path}.approach_temperature"))
        flows = inlet.vapour.tolist()
        return lambda temperature, pressure: factor * equilibrium_extents(chemistry, flows, temperature, pressure)


@dataclass
class _Outlet:
    """The search for one outlet."""

    beds: FactorBeds
    name: str
    inlet: Stream
    size: BedSize
    heat: float
    fall_share: float

    def found(self, extents_at: Callable[[float, float], Floats]) -> tuple[Floats, float, float]:
        """Extents mol/s, temperature K and pressure Pa.

        What a bed makes falls as it warms (exothermic) or rises, while its heat balance goes the other way,
        so the two cross once, between the inlet's temperature and that of the heat released there.
        """
        pressure, start = self.inlet.pressure, self.inlet.temperature
        extents: Floats = np.zeros(len(self.beds.chemistry.reactions))

        def error(temperature: float) -> float:
            nonlocal pressure, extents
            extents = extents_at(temperature, pressure)
            made, pressure = self._balanced(extents, pressure, temperature)
            return made - temperature

        a, fa = start, error(start)
        b = start + fa
        fb = error(b)
        for _ in range(80):
            middle = b - fb * (b - a) / (fb - fa) if fb != fa else b
            fm = error(middle)
            if abs(fm) < 1e-9 * start:
                break
            # Illinois: the side that stays is halved, so that both ends close in.
            a, fa = (b, fb) if fm * fb < 0 else (a, 0.5 * fa)
            b, fb = middle, fm
        else:
            raise BedFailure(self.name, "no outlet was found at which the stated approach and the heat balance agree")
        made, pressure = self._balanced(extents, pressure, middle)
        return extents, made, pressure

    def _balanced(self, extents: Floats, pressure: float, guess: float) -> tuple[float, float]:
        """Temperature by the heat balance and pressure by Ergun's equation, both of the outlet."""
        properties, chemistry = self.beds.properties, self.beds.chemistry
        flows, catalyst = reacted(chemistry, self.inlet.vapour, extents), chemistry.catalyst
        flux = properties.mass(self.inlet.vapour) / self.size.section
        for _ in range(50):
            gas = properties.gas_at_enthalpy(flows, pressure, self.heat, guess)
            density, guess = properties.mass(flows) / gas.volume, gas.temperature
            viscosity = catalyst.viscosity(guess)
            gradient = ergun_gradient(flux, density, viscosity, catalyst.pellet_diameter, catalyst.void)
            # P times the gradient hardly depends on P: what it is at the outlet holds over the whole bed.
            fall = 2.0 * pressure * gradient * self.size.length * self.fall_share
            square = self.inlet.pressure**2 - fall
            if square <= 1e-2 * self.inlet.pressure**2:
                raise BedFailure(self.name, "the pressure falls to nothing before the outlet: too long, or too slender")
            fresh = math.sqrt(square)
            if abs(fresh - pressure) < 1e-12 * pressure:
                break
            pressure = fresh
        return guess, fresh
