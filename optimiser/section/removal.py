"""Condensation: the flash at every point that may be two-phase, by one equation of state for both phases.

A flash may end with one phase. Gas and liquid are brought to equilibrium at `dew_temperature`, which lies `superheat`
below the real one: where there is liquid the superheat is zero and the two are the same; where there is none, the
liquid is the first drop that the gas would form on cooling, a real liquid and never the gas over again. Either the
liquid share or the superheat is zero; the two are joined by the smooth Fischer-Burmeister function, which is off by at
most the square root of `SMOOTHING` right at the dew point and by far less away from it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from optimiser.chemistry.maths import log, sqrt
from optimiser.chemistry.mixture import Phase
from optimiser.section.frame import Frame

SMOOTHING = 1e-7
GAS_ROOTS, LIQUID_ROOTS = (0.2, 3.0, 1.0), (1e-3, 0.8, 0.2)
"""Bounds and start of compressibilities."""
SUPERHEAT = 100.0
"""Superheat that counts as much as all of a stream being liquid, K."""


@dataclass
class Flash:
    """Both phases at equilibrium: flows mol/s, temperature K, pressure Pa, enthalpy W.

    `flows` are those of both phases together.
    """

    flows: Sequence[Any]
    vapour: list[Any]
    liquid: list[Any]
    liquid_flow: Any
    temperature: Any
    pressure: Any
    enthalpy: Any
    vapour_phase: Phase
    liquid_phase: Phase
    fractions: list[Any]
    superheat: Any
    liquid_root: Any


def build_flash(
    frame: Frame, name: str, block: Any, total: Sequence[Any], temperature: Any, pressure: Any
) -> Flash:
    """Both phases of `total` (mol/s) at a temperature and pressure, either of which may be unknown.

    `name` is the stream that both phases form.
    """
    names = frame.mixture.names
    vapour = [frame.variable(block, f"vapour_{s}", "flow", 1e-9 * frame.flow) for s in names]
    fractions = [
        frame.variable(block, f"liquid_fraction_{s}", "trace", _least(frame, s), 1.1, start=0.8)
        for s in names
    ]
    liquid_flow = frame.variable(block, "liquid_flow", "flow", 0.0)
    superheat = frame.variable(block, "superheat", "temperature", 0.0, 900.0, start=1.0)
    for species, v, x, n in zip(names, vapour, fractions, total, strict=True):
        frame.equation(block, f"balance_{species}", v + liquid_flow * x - n == 0, frame.flow)
    frame.equation(block, "liquid_sum", sum(fractions) - 1.0 == 0)
    dew = frame.define(block, "dew_temperature", "temperature", temperature - superheat, 150.0, 1000.0, 300.0)
    # Both phases of the equilibrium by one equation of state, also where the gas is otherwise taken as ideal.
    saturated, _ = _phase(frame, block, "saturated", dew, (pressure, vapour, True), GAS_ROOTS)
    liquid, liquid_root = _phase(frame, block, "liquid", dew, (pressure, fractions, True), LIQUID_ROOTS)
    gas, _ = _phase(frame, block, "vapour", temperature, (pressure, vapour, False), GAS_ROOTS)
    for k, species in enumerate(names):
        gap = log(fractions[k]) + liquid.ln_phi[k] - log(saturated.fractions[k]) - saturated.ln_phi[k]
        frame.equation(block, f"equilibrium_{species}", gap == 0)
    share, over = liquid_flow / sum(total), superheat / SUPERHEAT
    either = share + over - sqrt(share * share + over * over + 2 * SMOOTHING)
    frame.equation(block, "one_or_two_phases", either == 0, 0.1)
    enthalpy = frame.define(block, "enthalpy", "heat", gas.enthalpy + liquid_flow * liquid.enthalpy)
    flows = [liquid_flow * x for x in fractions]
    flash = Flash(
        total,
        vapour,
        flows,
        liquid_flow,
        temperature,
        pressure,
        enthalpy,
        gas,
        liquid,
        fractions,
        superheat,
        liquid_root,
    )
    frame.flashes[name] = flash
    frame.stream(name, vapour, temperature, pressure, flows)
    return flash


def _phase(
    frame: Frame,
    block: Any,
    name: str,
    temperature: Any,
    rest: tuple[Any, Sequence[Any], bool],
    roots: tuple[float, float, float],
) -> tuple[Phase, Any]:
    """A phase with its compressibility as a variable; `rest`: pressure, flows, whether by the liquid's equation."""
    pressure, flows, liquid = rest
    low, high, start = roots
    root = frame.variable(block, f"{name}_compressibility", "ratio", low, high, start=start)
    phase = frame.mixture.phase(temperature, pressure, flows, root, liquid=liquid)
    frame.give(root, frame.equation(block, f"{name}_state", phase.residual == 0))
    return phase, root


def _least(frame: Frame, species: str) -> float:
    """Least fraction in a liquid: without it the liquid could be the gas over again, which solves every equation."""
    products = frame.chemistry.products
    return 0.7 if len(products) == 1 and species == products[0] else 1e-9
