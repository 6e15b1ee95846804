"""Phases at equilibrium, apart from the smoothed equations of the section: one phase or two, both by the
equation of state.

A tangent-plane test decides whether a gas stands alone [1]. Where it does not, successive substitution in the
equilibrium ratios, with Rachford and Rice's equation inside, comes close, and Newton's method in the liquid
flows ends at round-off.

Sources:
    [1] Michelsen, M. L., The isothermal flash problem, Fluid Phase Equilibria 9 (1982) 1-19 and 21-40.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from optimiser.forward.properties import Properties, State
from optimiser.forward.stability import beside
from optimiser.forward.stream import FlashFailure, Floats, Stream

Booleans = NDArray[np.bool_]

CLOSE = 1e-3
"""Change of ln K at which Newton's method takes over from substitution."""
EXACT = 1e-12
DENSE = 0.55
"""Co-volume over volume above which a phase is a liquid, whichever root was asked for."""
ROUNDS = 400


@dataclass
class Phases:
    """What stands at equilibrium.

    Attributes:
        vapour, liquid: mol/s, shape (species,); zeros for a phase that is absent.
        temperature: K.
        pressure: Pa.
        enthalpy: W.
        gas, drops: the state of each phase, or None.
        stability: how far a liquid is from forming out of a gas alone, -; infinite where no trial liquid
            differs from it, 0 where there is liquid.
    """

    vapour: Floats
    liquid: Floats
    temperature: float
    pressure: float
    enthalpy: float
    gas: State | None
    drops: State | None
    stability: float = 0.0

    @property
    def vapour_fraction(self) -> float:
        """Molar."""
        gas, drops = float(self.vapour.sum()), float(self.liquid.sum())
        return gas / (gas + drops)

    @property
    def heat_capacity(self) -> float:
        """Of both phases as they are, W/K: nothing condenses."""
        return sum(s.heat_capacity for s in (self.gas, self.drops) if s is not None)

    def stream(self, name: str) -> Stream:
        """As a stream of the section."""
        return Stream(name, self.vapour, self.liquid, self.temperature, self.pressure)


def flash_tp(
    properties: Properties, flows: Floats, temperature: float, pressure: float, near: Phases | None = None
) -> Phases:
    """Phases at a temperature (K) and pressure (Pa).

    Args:
        flows: both phases together, mol/s; a species may be absent.
        near: phases at a state close by, where the search begins.

    Raises:
        FlashFailure: the iteration did not settle.
    """
    ratios = _ratios_of(near)
    if ratios is not None:
        found = _split(properties, flows, temperature, pressure, ratios)
        if found is not None:
            return found
    gas = properties.vapour(temperature, pressure, flows)
    dense = gas.packing > DENSE
    distance, ratios = beside(properties, gas, liquid=not dense)
    found = None if ratios is None else _split(properties, flows, temperature, pressure, ratios)
    if found is not None:
        return found
    if dense or ratios is not None:
        # Either no other root, or unstable as a gas while no gas stands beside the liquid: all is liquid.
        drops = properties.liquid(temperature, pressure, flows)
        return Phases(np.zeros_like(flows), flows, temperature, pressure, drops.enthalpy, None, drops)
    return _alone(gas, distance)


def _alone(gas: State, distance: float) -> Phases:
    """A gas without liquid."""
    none = np.zeros_like(gas.flows)
    return Phases(gas.flows, none, gas.temperature, gas.pressure, gas.enthalpy, gas, None, distance)


def _ratios_of(near: Phases | None) -> Floats | None:
    """Logarithms of the equilibrium ratios of phases found before."""
    if near is None or near.gas is None or near.drops is None:
        return None
    return near.drops.ln_phi - near.gas.ln_phi


def rachford_rice(fractions: Floats, ratios: Floats, guess: float = 0.5) -> float:
    """Vapour fraction at which sum of z (K - 1)/(1 + v (K - 1)) is zero, within 1e-12.

    Below 0 or above 1 it says that one phase stands alone; infinite where all ratios lie on one side of 1.
    """
    excess = ratios - 1.0
    if excess.max() <= 0.0 or excess.min() >= 0.0:
        return -np.inf if excess.max() <= 0.0 else np.inf
    first, last = -1.0 / float(excess.max()), -1.0 / float(excess.min())
    low, high = first, last
    v = min(max(guess, low + 1e-3 * (high - low)), high - 1e-3 * (high - low))
    for _ in range(200):
        parts = excess / (1.0 + v * excess)
        value, slope = float(fractions @ parts), -float(fractions @ (parts * parts))
        low, high = (v, high) if value > 0.0 else (low, v)
        # Times the distances from both poles the sum is nearly straight, and Newton's method takes few steps.
        poles = (v - first) * (last - v)
        step = v - poles * value / ((first + last - 2.0 * v) * value + poles * slope)
        if abs(step - v) < 1e-12:
            return v
        v = step if low < step < high else 0.5 * (low + high)
    return v


def _split(properties: Properties, flows: Floats, temperature: float, pressure: float, logs: Floats) -> Phases | None:
    """Two phases from a guess of ln K; None where they turn out to be one."""
    total = float(flows.sum())
    fractions, here, v = flows / total, flows > 0, 0.5
    for _ in range(ROUNDS):
        ratios = np.exp(logs)
        v = rachford_rice(fractions, np.where(here, ratios, 1.0), v)
        if not 0.0 < v < 1.0:
            return None
        liquid = (1.0 - v) * flows / (1.0 + v * (ratios - 1.0))
        gas, drops = _states(properties, flows, liquid, temperature, pressure)
        fresh = drops.ln_phi - gas.ln_phi
        moved = float(np.max(np.abs(fresh - logs)[here]))
        logs = fresh
        if moved < CLOSE:
            return _newton(properties, flows, gas, drops)
    raise FlashFailure(f"the phases did not part at {temperature:.2f} K and {pressure / 1e5:.4g} bar")


def _states(
    properties: Properties, flows: Floats, liquid: Floats, temperature: float, pressure: float
) -> tuple[State, State]:
    gas = properties.vapour(temperature, pressure, flows - liquid)
    return gas, properties.liquid(temperature, pressure, liquid)


def _imbalance(gas: State, drops: State, here: Booleans) -> Floats:
    """ln(fugacity in the liquid) less that in the gas, of the species present."""
    x, y = drops.flows[here] / drops.flows.sum(), gas.flows[here] / gas.flows.sum()
    return np.asarray(np.log(x / y) + drops.ln_phi[here] - gas.ln_phi[here])


def _newton(properties: Properties, flows: Floats, gas: State, drops: State) -> Phases | None:
    """Equal fugacities to round-off; unknown are the liquid flows of the species present."""
    here = flows > 0
    temperature, pressure = gas.temperature, gas.pressure
    for _ in range(40):
        error = _imbalance(gas, drops, here)
        if float(np.max(np.abs(error))) < EXACT:
            heat = gas.enthalpy + drops.enthalpy
            return Phases(gas.flows, drops.flows, temperature, pressure, heat, gas, drops)
        slopes = properties.fugacity_slopes(drops, liquid=True) + properties.fugacity_slopes(gas, liquid=False)
        slopes -= 1.0 / drops.flows.sum() + 1.0 / gas.flows.sum()
        small = slopes[np.ix_(here, here)]
        small += np.diag(1.0 / drops.flows[here] + 1.0 / gas.flows[here])
        step = np.asarray(np.linalg.solve(small, -error), dtype=np.float64)
        liquid = drops.flows.copy()
        liquid[here] = liquid[here] + _share(drops.flows[here], gas.flows[here], step) * step
        if float(liquid.sum()) < 1e-12 * float(flows.sum()):
            return None
        gas, drops = _states(properties, flows, liquid, temperature, pressure)
    if float(np.max(np.abs(_imbalance(gas, drops, here)))) < 1e3 * EXACT:
        heat = gas.enthalpy + drops.enthalpy
        return Phases(gas.flows, drops.flows, temperature, pressure, heat, gas, drops)
    raise FlashFailure(f"the phases did not settle at {temperature:.2f} K and {pressure / 1e5:.4g} bar")


def _share(liquid: Floats, vapour: Floats, step: Floats) -> float:
    """Part of a step that empties neither phase of a species by more than nine tenths."""
    room = np.where(step < 0, liquid, vapour)
    return float(min(1.0, 0.9 * np.min(room / np.maximum(np.abs(step), 1e-300))))


def flash_ph(properties: Properties, flows: Floats, enthalpy: float, pressure: float, guess: float | Phases) -> Phases:
    """Phases of an enthalpy flow (W) at a pressure (Pa).

    Args:
        guess: a temperature, K, or phases close by.

    Raises:
        FlashFailure: no temperature was found.
    """
    near = None if isinstance(guess, float) else guess
    temperature = guess if isinstance(guess, float) else guess.temperature
    if near is None or near.drops is None:
        found = properties.gas_at_enthalpy(flows, pressure, enthalpy, temperature)
        alone = properties.vapour(found.temperature, pressure, flows)
        distance, ratios = beside(properties, alone, liquid=True)
        if ratios is None and alone.packing < DENSE:
            return _alone(alone, distance)
        # Condensing releases heat, so both phases together are warmer than the gas alone.
        temperature = alone.temperature
    return _phases_at_enthalpy(properties, flows, enthalpy, pressure, temperature, near)


def _phases_at_enthalpy(
    properties: Properties,
    flows: Floats,
    enthalpy: float,
    pressure: float,
    temperature: float,
    near: Phases | None,
) -> Phases:
    """Secants in the temperature, kept between sides that are known to be too cold and too warm."""
    low, high, last = 0.0, np.inf, (np.nan, np.nan)
    for _ in range(80):
        near = flash_tp(properties, flows, temperature, pressure, near)
        error = near.enthalpy - enthalpy
        first = last[0] != last[0]
        slope = near.heat_capacity if first else (error - last[1]) / (temperature - last[0])
        step = error / max(slope, near.heat_capacity)
        if abs(step) < 1e-9 or high - low < 1e-11 * temperature:
            return near
        low, high = (temperature, high) if error < 0 else (low, temperature)
        last = temperature, error
        temperature = _between(temperature - step, last[0], low, high)
    raise FlashFailure(f"no temperature found for the phases at {pressure / 1e5:.4g} bar")


def _between(wanted: float, present: float, low: float, high: float) -> float:
    """A temperature between known sides, near the wanted one."""
    if low < wanted < high:
        return wanted
    if np.isfinite(high) and low > 0.0:
        return 0.5 * (low + high)
    return present + 0.2 * (wanted - present)
