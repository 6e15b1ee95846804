"""Chemical equilibrium in plain numbers, and how far a gas is from it.

Newton's method in the extents with the fugacities of the mixture's equation of state, damped so that no flow turns
negative: no solver package and no symbols.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from optimiser.chemistry.mixture import Phase
from optimiser.chemistry.reactions import Chemistry

Floats = NDArray[np.float64]
ITERATIONS = 200
TRACE = 1e-12


class NoEquilibrium(ArithmeticError):
    """The iteration did not settle; the message says at what state."""


def log_quotients(chemistry: Chemistry, phase: Phase) -> Floats:
    """Ln Q of each reaction, fugacities in bar."""
    logs = np.array([float(x) for x in phase.ln_fugacity])
    return np.array([np.dot(r.nu, np.where(np.array(r.nu) != 0, logs, 0.0)) for r in chemistry.reactions])


def equilibrium_extents(
    chemistry: Chemistry, flows: Sequence[float], temperature: float, pressure: float, shift: float = 0.0
) -> Floats:
    """Extents of the reactions at equilibrium, mol/s, shape (reactions,).

    Args:
        flows: of the gas that reacts, mol/s; a species may be absent.
        temperature: K.
        pressure: Pa.
        shift: kelvin added to the temperature for the equilibrium constants alone, for a stated approach.

    Raises:
        NoEquilibrium: after 200 iterations.
    """
    nu = np.array([r.nu for r in chemistry.reactions])
    ln_k = np.array([float(r.ln_k(temperature + shift)) for r in chemistry.reactions])
    start = np.array(flows, dtype=float)
    floor = TRACE * float(start.sum())
    extents = _interior(nu, start, floor)
    for _ in range(ITERATIONS):
        amounts = np.maximum(start + extents @ nu, floor)
        phase = chemistry.mixture.gas(temperature, pressure, amounts.tolist())
        gap = log_quotients(chemistry, phase) - ln_k
        step = np.linalg.solve(_slopes(nu, amounts), -gap)
        share = _largest_step(amounts, step @ nu)
        extents = extents + share * step
        if np.max(np.abs(step)) < 1e-12 * float(start.sum()) and share == 1.0:
            return extents
    raise NoEquilibrium(f"no chemical equilibrium found at {temperature:.2f} K and {pressure / 1e5:.4g} bar")


def _slopes(nu: Floats, amounts: Floats) -> Floats:
    """d(ln Q)/d(extent) of an ideal gas: a positive definite stand-in for the real one."""
    return np.asarray((nu / amounts) @ nu.T - np.outer(nu.sum(axis=1), nu.sum(axis=1)) / amounts.sum())


def _interior(nu: Floats, start: Floats, floor: float) -> Floats:
    """Extents from which every reacting species is present, as far as the elements allow; one reaction at a time."""
    extents = np.zeros(len(nu))
    for r, row in enumerate(nu):
        amounts = start + extents @ nu
        forward = min((amounts[k] / -row[k] for k in np.flatnonzero(row < 0)), default=0.0)
        backward = min((amounts[k] / row[k] for k in np.flatnonzero(row > 0)), default=0.0)
        if backward <= 100.0 * floor and forward > 0:
            extents[r] += 0.1 * forward
        elif forward <= 100.0 * floor and backward > 0:
            extents[r] -= 0.1 * backward
    return extents


def _largest_step(amounts: Floats, change: Floats) -> float:
    """Part of a step that takes no flow further than nine tenths of the way to zero."""
    falling = change < 0
    if not np.any(falling):
        return 1.0
    return float(min(1.0, 0.9 * np.min(amounts[falling] / -change[falling])))


def approach_fraction(
    chemistry: Chemistry,
    inlet: Sequence[float],
    extents: Sequence[float],
    temperature: float,
    pressure: float,
) -> list[float]:
    """Extent made over extent at equilibrium at an outlet's temperature and pressure, for each reaction."""
    most = equilibrium_extents(chemistry, inlet, temperature, pressure)
    return [float(x / m) for x, m in zip(extents, most, strict=True)]


def approach_temperature(
    chemistry: Chemistry, phase: Phase, temperature: float, pressure: float
) -> list[float]:
    """Kelvin between a gas and the temperature at which it would be at equilibrium; positive when short of it."""
    quotients = log_quotients(chemistry, phase)
    return [
        _approach(reaction, float(q), temperature)
        for reaction, q in zip(chemistry.reactions, quotients, strict=True)
    ]


def _approach(reaction: object, quotient: float, temperature: float) -> float:
    """Secant on ln K(T) = ln Q in 1/T, in which ln K is nearly straight."""
    ln_k = reaction.ln_k  # type: ignore[attr-defined]
    exothermic = reaction.enthalpy(temperature) < 0  # type: ignore[attr-defined]
    x0, x1 = 1.0 / temperature, 1.0 / (temperature + 5.0)
    g0, g1 = float(ln_k(1.0 / x0)) - quotient, float(ln_k(1.0 / x1)) - quotient
    for _ in range(50):
        if g1 == g0:
            break
        x0, x1 = x1, min(max(x1 - g1 * (x1 - x0) / (g1 - g0), 1.0 / 5000.0), 1.0 / 150.0)
        g0, g1 = g1, float(ln_k(1.0 / x1)) - quotient
        if abs(g1) < 1e-12:
            break
    there = 1.0 / x1
    return there - temperature if exothermic else temperature - there
