"""States of a mixture in plain numbers, fast: the formulas of `chemistry`, compiled once.

The compressibility is a closed-form root of the cubic, so that a state can be asked for as gas or as liquid
whatever was asked before. Derivatives follow the root: dZ/dx = -(dr/dx)/(dr/dZ), r being the equation of
state.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any

import numpy as np

from optimiser.chemistry.eos import IdealMix
from optimiser.chemistry.mixture import Mixture
from optimiser.forward.stream import FlashFailure, Floats

LARGEST_POLISH = 1e-5
COLDEST, HOTTEST = 100.0, 2000.0
"""Where Newton's method may look for a temperature, K."""


@dataclass(slots=True)
class State:
    """One phase at a state.

    Attributes:
        temperature: K.
        pressure: Pa.
        flows: mol/s, shape (species,).
        compressibility: -.
        packing: co-volume over volume, -; 0 for an ideal gas.
        enthalpy: W; `heat_capacity` its slope by temperature, W/K.
        entropy: without the ideal mixing term, W/K; `entropy_slope` its slope by temperature, W/K2.
        volume: m3/s.
        ln_phi: logarithms of the fugacity coefficients, shape (species,).
    """

    temperature: float
    pressure: float
    flows: Floats
    compressibility: float
    packing: float
    enthalpy: float
    heat_capacity: float
    entropy: float
    entropy_slope: float
    volume: float
    ln_phi: Floats


class Compiled:
    """A casadi function called through buffers: a few microseconds where an ordinary call takes thirty."""

    def __init__(self, name: str, arguments: list[Any], results: list[Any]) -> None:
        import casadi

        function = casadi.Function(name, arguments, [casadi.densify(casadi.SX(r)) for r in results])
        self._buffer, self._run = function.buffer()
        self.inputs: list[Floats] = [np.zeros(function.nnz_in(k)) for k in range(function.n_in())]
        self.outputs: list[Floats] = [np.zeros(function.size_out(k), order="F") for k in range(function.n_out())]
        for k, array in enumerate(self.inputs):
            self._buffer.set_arg(k, array.data)
        for k, array in enumerate(self.outputs):
            self._buffer.set_res(k, array.reshape(-1, order="F").data)

    def __call__(self, temperature: float, pressure: float, flows: Floats, root: float = 0.0) -> list[Floats]:
        """Outputs, overwritten by the next call."""
        inputs = self.inputs
        inputs[0][0], inputs[1][0] = temperature, pressure
        inputs[2][:] = flows
        inputs[3][0] = root
        self._run()
        return self.outputs


def cubic_roots(c2: float, c1: float, c0: float) -> tuple[float, ...]:
    """Real roots of x^3 + c2 x^2 + c1 x + c0, ascending: Cardano's formula, polished by Newton's method."""
    third = c2 / 3.0
    p, q = c1 - c2 * third, c0 + third * (2.0 * third * third - c1)
    discriminant = 0.25 * q * q + p * p * p / 27.0
    if discriminant > 0.0:
        root = math.sqrt(discriminant)
        # The larger of the two cube roots is the one that loses no digits.
        u = math.cbrt(-0.5 * q - math.copysign(root, q))
        raw: tuple[float, ...] = (u - p / (3.0 * u) - third,)
    else:
        size = 2.0 * math.sqrt(max(-p / 3.0, 0.0))
        angle = math.acos(max(-1.0, min(1.0, 3.0 * q / (p * size)))) / 3.0 if size > 0.0 else 0.0
        raw = tuple(sorted(size * math.cos(angle - 2.0 * math.pi * k / 3.0) - third for k in range(3)))
    return tuple(_polished(x, c2, c1, c0) for x in raw)


def _polished(x: float, c2: float, c1: float, c0: float) -> float:
    for _ in range(2):
        slope = (3.0 * x + 2.0 * c2) * x + c1
        step = (((x + c2) * x + c1) * x + c0) / slope if slope != 0.0 else 0.0
        # Where roots fall together the slope is round-off, and so would the step be.
        if abs(step) > LARGEST_POLISH:
            break
        x -= step
    return x


class _PhaseFunctions:
    """Compiled functions of one equation of state."""

    def __init__(self, mixture: Mixture, *, liquid: bool) -> None:
        self.mixture, self.liquid, self.count = mixture, liquid, len(mixture.names)

    @property
    def ideal(self) -> bool:
        """Whether it is that of the ideal gas."""
        return self.coefficients is None

    def _symbols(self) -> tuple[Any, Any, Any, Any, Any]:
        import casadi

        t, p, z = (casadi.SX.sym(name) for name in "TPZ")
        n = casadi.SX.sym("n", self.count)
        flows = [n[k] for k in range(self.count)]
        return t, p, n, z, self.mixture.phase(t, p, flows, z, liquid=self.liquid)

    def _following(self, phase: Any, z: Any) -> Callable[[Any, Any], Any]:
        """Derivative that follows the root of the equation of state."""
        import casadi

        residual = casadi.SX(phase.residual)
        slope = casadi.jacobian(residual, z)

        def derivative(value: Any, by: Any) -> Any:
            value = casadi.SX(value)
            through = casadi.jacobian(residual, by) / slope
            return casadi.jacobian(value, by) - casadi.jacobian(value, z) @ through

        return derivative

    @cached_property
    def coefficients(self) -> Compiled | None:
        """c2, c1, c0 of the cubic and B; None for the ideal gas."""
        t, p, n, z, phase = self._symbols()
        if isinstance(phase.mix, IdealMix):
            return None
        return Compiled("cubic", [t, p, n, z], [*phase.mix.coefficients(), phase.mix.big_b])

    @cached_property
    def values(self) -> Compiled:
        """Enthalpy, its slope, entropy, its slope, volume, ln phi."""
        import casadi

        t, p, n, z, phase = self._symbols()
        slope = self._following(phase, z)
        heat, entropy = phase.enthalpy, phase.entropy_fixed
        results = [
            heat,
            slope(heat, t),
            entropy,
            slope(entropy, t),
            phase.volume,
            casadi.vertcat(*phase.ln_phi),
        ]
        return Compiled("state", [t, p, n, z], results)

    @cached_property
    def slopes(self) -> Compiled:
        """d(ln phi)/d(flow), s/mol, shape (species, species)."""
        import casadi

        t, p, n, z, phase = self._symbols()
        logs = casadi.vertcat(*phase.ln_phi)
        return Compiled("slopes", [t, p, n, z], [self._following(phase, z)(logs, n)])

    def root(self, temperature: float, pressure: float, flows: Floats, least: bool) -> tuple[float, float]:
        """The least root above B, a liquid's, or the largest, a gas's; and B."""
        if self.coefficients is None:
            return 1.0, 0.0
        c2, c1, c0, b = (float(x[0, 0]) for x in self.coefficients(temperature, pressure, flows))
        roots = [z for z in cubic_roots(c2, c1, c0) if z > b]
        if not roots:
            raise FlashFailure(f"no compressibility at {temperature:.2f} K and {pressure / 1e5:.4g} bar")
        return roots[0] if least else roots[-1], b


class Properties:
    """States of one mixture. Functions are compiled when they are first asked for."""

    def __init__(self, mixture: Mixture) -> None:
        self.mixture = mixture
        self.molar_mass = np.array(mixture.molar_mass)
        self._gas, self._liquid = (_PhaseFunctions(mixture, liquid=liquid) for liquid in (False, True))

    def gas(self, temperature: float, pressure: float, flows: Floats) -> State:
        """The gas at a temperature (K), pressure (Pa) and flows (mol/s)."""
        return self._state(self._gas, temperature, pressure, flows, least=False)

    def liquid(self, temperature: float, pressure: float, flows: Floats) -> State:
        """The liquid at a temperature (K), pressure (Pa) and flows (mol/s)."""
        return self._state(self._liquid, temperature, pressure, flows, least=True)

    def vapour(self, temperature: float, pressure: float, flows: Floats) -> State:
        """The gas as phase equilibrium sees it: `gas`, with the fugacities of the liquid's equation of state.

        The two differ where gas is otherwise taken as ideal.
        """
        gas = self.gas(temperature, pressure, flows)
        if not self._gas.ideal:
            return gas
        real = self._state(self._liquid, temperature, pressure, flows, least=False)
        return replace(gas, ln_phi=real.ln_phi, packing=real.packing)

    def fugacity_slopes(self, state: State, *, liquid: bool) -> Floats:
        """d(ln phi)/d(flow) of a liquid or a vapour, s/mol, shape (species, species)."""
        at, root = (state.temperature, state.pressure, state.flows), state.compressibility
        if not liquid and self._gas.ideal:
            root, _ = self._liquid.root(*at, least=False)
        functions = self._liquid if liquid or self._gas.ideal else self._gas
        return functions.slopes(*at, root)[0].copy()

    def mass(self, flows: Floats) -> float:
        """Mass flow, kg/s."""
        return float(self.molar_mass @ flows)

    @staticmethod
    def _state(phase: _PhaseFunctions, temperature: float, pressure: float, flows: Floats, *, least: bool) -> State:
        root, b = phase.root(temperature, pressure, flows, least)
        *values, logs = phase.values(temperature, pressure, flows, root)
        heat, capacity, entropy, slope, volume = [float(x[0, 0]) for x in values]
        given = temperature, pressure, flows, root, b / root
        return State(*given, heat, capacity, entropy, slope, volume, logs[:, 0].copy())

    def gas_at_enthalpy(self, flows: Floats, pressure: float, enthalpy: float, guess: float) -> State:
        """The gas of an enthalpy flow, W."""
        return self._solved(flows, pressure, guess, lambda s: (s.enthalpy - enthalpy) / s.heat_capacity)

    def gas_at_entropy(self, flows: Floats, pressure: float, entropy: float, guess: float) -> State:
        """The gas of an entropy flow without mixing term, W/K."""
        return self._solved(flows, pressure, guess, lambda s: (s.entropy - entropy) / s.entropy_slope)

    def _solved(self, flows: Floats, pressure: float, guess: float, error: Callable[[State], float]) -> State:
        """Newton's method in the temperature; `error` is in kelvin."""
        temperature = guess
        for _ in range(60):
            state = self.gas(temperature, pressure, flows)
            step = error(state)
            if abs(step) < 1e-10 * temperature:
                return state
            temperature = min(max(temperature - step, 0.7 * temperature, COLDEST), 1.5 * temperature, HOTTEST)
        raise FlashFailure(f"no temperature found near {guess:.1f} K at {pressure / 1e5:.4g} bar")
