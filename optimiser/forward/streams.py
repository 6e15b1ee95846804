"""Streams and states in plain numbers: temperature from enthalpy, and the flash of one or two phases."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from optimiser.chemistry.mixture import Mixture

Floats = NDArray[np.float64]
SETTLED = 1e-12
ROUNDS = 300
COLDEST, HOTTEST = 120.0, 2500.0
"""Temperatures between which a state is looked for, K."""


class StateProblem(ArithmeticError):
    """A state that could not be found; the message says which."""


@dataclass
class Stream:
    """A stream: molar flows of both phases mol/s, K, Pa."""

    name: str
    vapour: Floats
    liquid: Floats
    temperature: float
    pressure: float

    @property
    def flows(self) -> Floats:
        """Both phases together, mol/s."""
        return self.vapour + self.liquid

    def enthalpy(self, mixture: Mixture) -> float:
        """W."""
        total = 0.0
        for flows, phase in ((self.vapour, mixture.gas), (self.liquid, mixture.liquid)):
            if flows.sum() > 0:
                total += float(phase(self.temperature, self.pressure, flows.tolist()).enthalpy)
        return total


def gas(name: str, flows: Sequence[float] | Floats, temperature: float, pressure: float) -> Stream:
    """A stream that is all vapour."""
    vapour = np.asarray(flows, dtype=float)
    return Stream(name, vapour, np.zeros_like(vapour), temperature, pressure)


def gas_temperature(mixture: Mixture, flows: Floats, pressure: float, enthalpy: float, guess: float) -> float:
    """Temperature of a gas with an enthalpy flow (W), K."""
    n = flows.tolist()

    def gap(temperature: float) -> float:
        return float(mixture.gas(temperature, pressure, n).enthalpy) - enthalpy

    return _rising_root(gap, guess, f"a gas of {enthalpy:.6g} W at {pressure / 1e5:.4g} bar")


def _rising_root(gap: Callable[[float], float], guess: float, what: str, precision: float = 1e-10) -> float:
    """Temperature at which a rising function is zero, K to `precision`: bracketed, then by the Illinois method.

    Enthalpy rises with temperature, with a kink where a phase appears; a bracket cannot be thrown off by it.
    """
    low, high = guess, guess
    below = above = gap(guess)
    width = 2.0
    while below > 0.0 and low > COLDEST:
        high, above = low, below
        low = max(low - width, COLDEST)
        below, width = gap(low), 2.0 * width
    while above < 0.0 and high < HOTTEST:
        low, below = high, above
        high = min(high + width, HOTTEST)
        above, width = gap(high), 2.0 * width
    if below > 0.0 or above < 0.0:
        raise StateProblem(f"no temperature found for {what}")
    for _ in range(100):
        if abs(high - low) < precision or above == below:
            break
        middle = high - above * (high - low) / (above - below)
        value = gap(middle)
        if value * above < 0.0:
            low, below = high, above
        else:
            below *= 0.5
        moved, high, above = abs(middle - high), middle, value
        if value == 0.0 or moved < precision:
            break
    return high


def flash(
    mixture: Mixture, name: str, flows: Floats, temperature: float, pressure: float, settled: float = SETTLED
) -> Stream:
    """Both phases at equilibrium, or the gas alone where no liquid forms; `settled` is the last change of ln K.

    Successive substitution of fugacity coefficients by the equation of state with the Rachford-Rice equation, started
    from the liquid nearest to forming.
    """
    total = float(flows.sum())
    z = flows / total
    liquid, excess = incipient_liquid(mixture, z, temperature, pressure)
    if excess <= 0.0:
        return gas(name, flows, temperature, pressure)
    ln_k = np.log(z) - np.log(liquid)
    share = 0.1
    for _ in range(ROUNDS):
        share = _rachford_rice(z, np.exp(ln_k), share)
        x = z / (1.0 + (1.0 - share) * (np.exp(ln_k) - 1.0))
        y = x * np.exp(ln_k)
        fresh = _ln_phi(mixture, x, temperature, pressure, liquid=True)
        fresh = fresh - _ln_phi(mixture, y, temperature, pressure, liquid=False)
        moved = float(np.max(np.abs(fresh - ln_k)))
        ln_k = fresh
        if moved < settled:
            break
    if not 0.0 < share < 1.0:
        return gas(name, flows, temperature, pressure)
    y = y / y.sum()
    vapour = np.clip((1.0 - share) * total * y, 0.0, flows)
    return Stream(name, vapour, flows - vapour, temperature, pressure)


def _ln_phi(
    mixture: Mixture, fractions: Floats, temperature: float, pressure: float, *, liquid: bool
) -> Floats:
    phase = mixture.liquid if liquid else mixture.condensing
    return np.array(
        [float(v) for v in phase(temperature, pressure, (fractions / fractions.sum()).tolist()).ln_phi]
    )


def incipient_liquid(
    mixture: Mixture, z: Floats, temperature: float, pressure: float
) -> tuple[Floats, float]:
    """The liquid nearest to forming from a gas: its composition, and ln of the sum of its unnormalised fractions.

    The logarithm is positive where the gas is not stable, so liquid forms.
    """
    potential = np.log(z) + _ln_phi(mixture, z, temperature, pressure, liquid=False)
    heavy = int(np.argmin(_ln_phi(mixture, z, temperature, pressure, liquid=False)))
    x = np.full(len(z), 3e-3)
    x[heavy] = 1.0
    for _ in range(ROUNDS):
        raw = np.exp(potential - _ln_phi(mixture, x, temperature, pressure, liquid=True))
        done = float(np.max(np.abs(raw / raw.sum() - x / x.sum())))
        x = raw
        if done < 1e-6:
            break
    total = float(x.sum())
    fractions = x / total
    if float(np.max(np.abs(fractions - z))) < 1e-6:
        return (
            fractions,
            -1.0,
        )  # The trial has become the gas itself: above its critical point there is one phase.
    return fractions, float(np.log(total))


def dew_temperature(mixture: Mixture, z: Floats, pressure: float, guess: float = 320.0) -> float:
    """Temperature at which a gas of these fractions forms its first liquid, K, to 0.05 K.

    Raises:
        StateProblem: between 200 and 500 K no liquid forms.
    """
    low, high = 200.0, 500.0
    if incipient_liquid(mixture, z, low, pressure)[1] <= 0.0:
        raise StateProblem(f"no liquid forms at {pressure / 1e5:.4g} bar above {low:.0f} K")
    while high - low > 0.05:
        middle = guess if low < guess < high else 0.5 * (low + high)
        guess = -1.0
        if incipient_liquid(mixture, z, middle, pressure)[1] > 0.0:
            low = middle
        else:
            high = middle
    return low


def _rachford_rice(z: Floats, k: Floats, guess: float) -> float:
    """Liquid share of all, from sum of x - y = 0; bounded Newton."""
    low, high = 0.0, 1.0
    share = min(max(guess, 1e-9), 1.0 - 1e-9)
    for _ in range(100):
        weight = 1.0 + (1.0 - share) * (k - 1.0)
        value = float(np.sum(z * (1.0 - k) / weight))
        slope = float(np.sum(-z * (k - 1.0) ** 2 / weight**2))
        if value > 0:
            low = share
        else:
            high = share
        step = -value / slope
        if abs(step) < 1e-14 or high - low < 1e-15:
            break  # Before the next trial: a step too small to move would be taken for one out of bounds.
        trial = share + step
        share = trial if low < trial < high else 0.5 * (low + high)
    return share


def flash_at_enthalpy(
    mixture: Mixture,
    name: str,
    flows: Floats,
    pressure: float,
    enthalpy: float,
    guess: float,
    settled: float = SETTLED,
) -> Stream:
    """Both phases at a pressure and an enthalpy flow (W); the temperature is found."""

    def gap(temperature: float) -> float:
        return flash(mixture, name, flows, temperature, pressure, settled).enthalpy(mixture) - enthalpy

    what = f"{name} of {enthalpy:.6g} W at {pressure / 1e5:.4g} bar"
    temperature = _rising_root(gap, guess, what, max(100.0 * settled, 1e-10))
    return flash(mixture, name, flows, temperature, pressure, settled)
