"""Whether a phase stands alone: the tangent-plane test [1], and the dew point of a gas.

Sources:
    [1] Michelsen, M. L., The isothermal flash problem. Part I, Fluid Phase Equilibria 9 (1982) 1-19.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from optimiser.forward.properties import Properties, State
from optimiser.forward.stream import FlashFailure, Floats

CLOSE, EXACT = 1e-3, 1e-10
"""Changes of the logarithms of a trial at which it is as good as found, and found."""
ROUNDS = 400
COLDEST_DEW, HOTTEST_DEW = 180.0, 520.0


@dataclass(frozen=True)
class Trial:
    """Another phase beside a phase: `gain` is positive where it would form, minus infinity where it is the same."""

    gain: float
    state: State


def beside(properties: Properties, bulk: State, *, liquid: bool) -> tuple[float, Floats | None]:
    """Tangent-plane test of a phase with a trial of the other kind.

    Args:
        properties: of the mixture.
        bulk: the phase that may stand alone.
        liquid: whether the trial is a liquid.

    Returns:
        `Phases.stability`, and ln K to begin with, or None for a phase that stands alone.
    """
    trial = nearest(properties, bulk, liquid=liquid)
    if trial.gain <= 1e-12:
        return -trial.gain, None
    # Species that are absent may have any ratio.
    other = trial.state.ln_phi
    return 0.0, other - bulk.ln_phi if liquid else bulk.ln_phi - other


def nearest(properties: Properties, bulk: State, *, liquid: bool, early: bool = True) -> Trial:
    """The phase nearest to forming, by substitution; `early` stops as soon as it is sure to form."""
    here = bulk.flows > 0
    fractions, ask = bulk.flows / bulk.flows.sum(), properties.liquid if liquid else properties.vapour
    target = np.where(here, np.log(np.where(here, fractions, 1.0)) + bulk.ln_phi, 0.0)
    trial = np.where(here, 1e-3 if liquid else np.exp(target), 0.0)
    if liquid:
        trial[int(np.argmin(np.where(here, bulk.ln_phi, np.inf)))] = 1.0
    total = float(trial.sum())
    for _ in range(ROUNDS):
        other = ask(bulk.temperature, bulk.pressure, trial / trial.sum())
        fresh = np.where(here, np.exp(target - other.ln_phi), 0.0)
        moved = float(np.max(np.abs(np.log(fresh[here] / trial[here]))))
        trial, total = fresh, float(fresh.sum())
        if (early and moved < CLOSE and total > 1.1) or moved < EXACT:
            break
    alike = float(np.max(np.abs(np.log(trial[here] / fractions[here])))) < CLOSE
    return Trial(-np.inf if alike else float(np.log(total)), other)


@dataclass(frozen=True)
class Dew:
    """Where a gas forms its first drop: temperature, K, and the drop's mole fractions."""

    temperature: float
    fractions: Floats


def dew_point(properties: Properties, flows: Floats, pressure: float, guess: float = 320.0) -> Dew:
    """The dew point of a gas at a pressure (Pa), to a hundredth of a kelvin.

    Raises:
        FlashFailure: no liquid forms between `COLDEST_DEW` and `HOTTEST_DEW`.
    """
    low, high, temperature = COLDEST_DEW, HOTTEST_DEW, guess
    drop: Trial | None = None
    while high - low > 0.01:
        trial = nearest(properties, properties.vapour(temperature, pressure, flows), liquid=True, early=False)
        if trial.gain > 0.0:
            low, drop = temperature, trial
        else:
            high = temperature
        temperature = 0.5 * (low + high)
    if drop is None:
        raise FlashFailure(f"no liquid forms at {pressure / 1e5:.4g} bar above {COLDEST_DEW:.0f} K")
    return Dew(low, drop.state.flows)
