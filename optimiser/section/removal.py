"""Condensation: the flash at every point that may be two-phase, by one equation of state for both phases.

A flash may end with one phase. Where there is no liquid, its composition is that of the liquid nearest to forming, and
`stability` says how far it is from forming: ln(x) + ln(phi_liquid) = ln(y) + ln(phi_vapour) + stability. Either the
liquid fraction or the stability is zero; the two are joined by the smooth Fischer-Burmeister function, which is off by
at most the square root of `SMOOTHING` right at the dew point and by far less away from it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from optimiser.chemistry.maths import log, sqrt
from optimiser.chemistry.mixture import Phase
from optimiser.section.frame import Frame

SMOOTHING = 1e-7
CAP_ROUNDING = 0.3
"""Width over which the cap of a liquid's temperature is rounded, K; 30 K below it the cap is off by 1 mK."""


@dataclass
class Flash:
    """Both phases at equilibrium: flows mol/s, temperature K, pressure Pa, enthalpy W."""

    vapour: list[Any]
    liquid: list[Any]
    liquid_flow: Any
    temperature: Any
    pressure: Any
    enthalpy: Any
    vapour_phase: Phase
    liquid_phase: Phase
    fractions: list[Any]
    stability: Any
    liquid_root: Any


@dataclass(frozen=True)
class _Cap:
    """Above `temperature` (K) a species of that critical point has no liquid root to compute with.

    A liquid that is only thought of is then taken at the cap, and its fugacities are carried on from there by the
    slope of the logarithm of its vapour pressure, 7 Tc/T^2 (Guggenheim's rule gives 5.4 to 7), so that it stays as far
    from forming as it should be.
    """

    temperature: float
    slope: float

    def apply(self, temperature: Any) -> tuple[Any, Any]:
        """Temperature of the liquid, and what its logarithms of fugacity gain above the cap."""
        over = temperature - self.temperature
        excess = (over + sqrt(over * over + CAP_ROUNDING * CAP_ROUNDING)) / 2.0
        return temperature - excess, self.slope * excess


def _cap(frame: Frame) -> _Cap:
    names = frame.chemistry.products
    critical = max(s.critical_temperature for s in frame.mixture.species if s.name in names)
    at = 0.9 * critical
    return _Cap(at, 7.0 * critical / (at * at))


def build_flash(
    frame: Frame,
    name: str,
    block: Any,
    total: Sequence[Any],
    temperature: Any,
    pressure: Any,
    *,
    may_be_hot: bool = False,
) -> Flash:
    """Both phases of `total` (mol/s) at a temperature and pressure, either of which may be unknown.

    `name` is the stream that both phases form; `may_be_hot` where it may be hotter than any liquid.
    """
    mixture, names = frame.mixture, frame.mixture.names
    cold, gain = _cap(frame).apply(temperature) if may_be_hot else (temperature, 0.0)
    vapour = [frame.variable(block, f"vapour_{s}", "flow", 1e-9 * frame.flow) for s in names]
    fractions = [
        frame.variable(block, f"liquid_fraction_{s}", "trace", _least(frame, s), 1.1, start=0.5) for s in names
    ]
    liquid_flow = frame.variable(block, "liquid_flow", "flow", 0.0)
    stability = frame.variable(block, "stability", "ratio", 0.0, 50.0, start=0.0)
    for species, v, x, n in zip(names, vapour, fractions, total, strict=True):
        frame.equation(block, f"balance_{species}", v + liquid_flow * x - n == 0, frame.flow)
    frame.equation(block, "liquid_sum", sum(fractions) - 1.0 == 0)
    gas_root = frame.variable(block, "vapour_compressibility", "ratio", 0.2, 3.0, start=1.0)
    liquid_root = frame.variable(block, "liquid_compressibility", "ratio", 1e-3, 1.5, start=0.2)
    gas = mixture.phase(temperature, pressure, vapour, gas_root)
    liquid = mixture.phase(cold, pressure, fractions, liquid_root, liquid=True)
    frame.give(gas_root, frame.equation(block, "vapour_state", gas.residual == 0))
    frame.give(liquid_root, frame.equation(block, "liquid_state", liquid.residual == 0))
    for k, species in enumerate(names):
        difference = log(fractions[k]) + liquid.ln_phi[k] - log(gas.fractions[k]) - gas.ln_phi[k] - stability + gain
        frame.equation(block, f"equilibrium_{species}", difference == 0)
    total_flow = sum(total)
    share = liquid_flow / total_flow
    either = share + stability - sqrt(share * share + stability * stability + 2 * SMOOTHING)
    frame.equation(block, "one_or_two_phases", either == 0, 0.1)
    enthalpy = frame.define(block, "enthalpy", "heat", gas.enthalpy + liquid_flow * liquid.enthalpy)
    flows = [liquid_flow * x for x in fractions]
    flash = Flash(
        vapour, flows, liquid_flow, temperature, pressure, enthalpy, gas, liquid, fractions, stability, liquid_root
    )
    frame.flashes[name] = flash
    frame.stream(name, vapour, temperature, pressure, flows)
    return flash


def _least(frame: Frame, species: str) -> float:
    """Least fraction in a liquid: without it the liquid could be the gas over again, which solves every equation."""
    products = frame.chemistry.products
    return 0.3 if len(products) == 1 and species == products[0] else 1e-9
