"""Isentropic compression of a real gas with an efficiency, in plain numbers."""

from __future__ import annotations

from optimiser.chemistry.mixture import Mixture
from optimiser.forward.streams import Stream, gas, gas_temperature


def compress(
    mixture: Mixture, inlet: Stream, pressure: float, efficiency: float, name: str
) -> tuple[Stream, float]:
    """Gas at a higher pressure (Pa) and the shaft work that it took, W.

    The entropy of the ideal compression is that of the inlet; the real one takes 1/efficiency of its work.
    """
    n = inlet.vapour.tolist()
    start = mixture.gas(inlet.temperature, inlet.pressure, n)
    entropy, enthalpy = float(start.entropy_fixed), float(start.enthalpy)
    guess = inlet.temperature * (pressure / inlet.pressure) ** 0.28
    ideal = _isentropic(mixture, n, pressure, entropy, guess)
    work = (float(mixture.gas(ideal, pressure, n).enthalpy) - enthalpy) / efficiency
    temperature = gas_temperature(mixture, inlet.vapour, pressure, enthalpy + work, ideal)
    return gas(name, inlet.vapour, temperature, pressure), work


def _isentropic(mixture: Mixture, n: list[float], pressure: float, entropy: float, guess: float) -> float:
    """Temperature at which a gas has an entropy flow, by secant in the logarithm of temperature; K."""
    x0, x1 = guess, guess * 1.01
    g0 = float(mixture.gas(x0, pressure, n).entropy_fixed) - entropy
    for _ in range(50):
        g1 = float(mixture.gas(x1, pressure, n).entropy_fixed) - entropy
        if abs(x1 - x0) < 1e-10 or g1 == g0:
            break
        x0, x1, g0 = x1, x1 - g1 * (x1 - x0) / (g1 - g0), g1
    return x1
