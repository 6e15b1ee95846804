"""Beds told by their approach to equilibrium, and the approach of any bed as a quantity that may carry a limit.

The fraction is the extent made over the extent at equilibrium, at the bed's own outlet temperature and pressure and
from its own inlet. The temperature difference is how far the outlet lies from the temperature at which its gas would be
at equilibrium; positive means short of equilibrium.
"""

from __future__ import annotations

from typing import Any

from pyomo.core import Block, Param

from optimiser.chemistry.maths import exp, log
from optimiser.inputs.case import BedStep
from optimiser.section.frame import Frame, Gas

# Temperature about which the Damkohler number's Arrhenius factor is written, K.
REFERENCE_TEMPERATURE = 700.0


def equilibrium_extents(frame: Frame, block: Block, inlet: Gas, temperature: Any, pressure: Any) -> list[Any]:
    """Extents at equilibrium at a temperature and pressure, from the inlet of a bed, mol/s."""
    reactions = frame.chemistry.reactions
    extents = [frame.variable(block, f"equilibrium_{r.name}", "flow") for r in reactions]
    flows = []
    for k, species in enumerate(frame.mixture.names):
        flow = inlet.flows[k] + sum(r.nu[k] * x for r, x in zip(reactions, extents, strict=True) if r.nu[k])
        flows.append(frame.define(block, f"equilibrium_flow_{species}", "flow", flow, low=1e-9 * frame.flow))
    root = frame.variable(block, "equilibrium_compressibility", "ratio", 0.2, 3.0, start=1.05)
    phase = frame.mixture.phase(temperature, pressure, flows, root)
    frame.give(root, frame.equation(block, "equilibrium_state", phase.residual == 0))
    for reaction, extent in zip(reactions, extents, strict=True):
        residual = _log_quotient(reaction, phase) - reaction.ln_k(temperature)
        frame.give(extent, frame.equation(block, f"equilibrium_of_{reaction.name}", residual == 0))
    return extents


def _log_quotient(reaction: Any, phase: Any) -> Any:
    return sum(nu * phase.ln_fugacity[k] for k, nu in enumerate(reaction.nu) if nu)


def _equilibrium_temperature(frame: Frame, block: Block, reaction: Any, phase: Any) -> Any:
    """Temperature at which a gas of this composition and these fugacities would be at equilibrium, K."""
    temperature = frame.variable(
        block, f"equilibrium_temperature_{reaction.name}", "temperature", 250.0, 1500.0, start=750.0
    )
    residual = _log_quotient(reaction, phase) - reaction.ln_k(temperature)
    frame.give(
        temperature, frame.equation(block, f"equilibrium_temperature_{reaction.name}_is", residual == 0)
    )
    return temperature


def _sign(reaction: Any) -> float:
    """+1 where equilibrium lies hotter than a gas short of it (exothermic), else -1."""
    return 1.0 if reaction.enthalpy(REFERENCE_TEMPERATURE) < 0 else -1.0


def report_fraction(frame: Frame, name: str, inlet: Gas, outlet: Gas, extent: Any) -> None:
    """Add the approach of a bed as a fraction, of its first reaction."""
    block = frame.block(f"approach_fraction_of_{name}")
    most = equilibrium_extents(frame, block, inlet, outlet.temperature, outlet.pressure)[0]
    fraction = frame.define(block, "fraction", "ratio", extent / most)
    frame.report(f"reactor.{name}.approach_fraction", "fraction", fraction)


def report_temperature(frame: Frame, name: str, outlet: Gas) -> None:
    """Add the approach of a bed as a temperature difference, of its first reaction."""
    block = frame.block(f"approach_temperature_of_{name}")
    reaction = frame.chemistry.reactions[0]
    ideal = _equilibrium_temperature(frame, block, reaction, outlet.phase)
    approach = frame.define(block, "approach", "difference", _sign(reaction) * (ideal - outlet.temperature))
    frame.report(f"reactor.{name}.approach_temperature", "temperature_difference", approach)


def close_by_factor(frame: Frame, block: Block, step: BedStep, inlet: Gas, point: Any, volume: Any) -> None:
    """The equations that fix the extents of a bed without a rate law at its outlet `point`."""
    path = f"reactor.{step.name}"
    if step.approach_temperature is not None:
        setting = step.approach_temperature
        approach = frame.decision(
            block, "approach", "difference", f"{path}.approach_temperature", setting, "temperature_difference"
        )
        for reaction in frame.chemistry.reactions:
            hotter = point.temperature + _sign(reaction) * approach
            residual = _log_quotient(reaction, point.phase) - reaction.ln_k(hotter)
            frame.equation(block, f"approach_of_{reaction.name}", residual == 0)
        return
    most = equilibrium_extents(frame, block, inlet, point.temperature, point.pressure)
    if step.approach_fraction is not None:
        factor = frame.decision(
            block, "factor", "ratio", f"{path}.approach_fraction", step.approach_fraction, "fraction"
        )
    else:
        factor = frame.define(
            block, "factor", "ratio", _damkohler_factor(block, inlet, volume), 0.0, 1.0, 0.9
        )
        frame.report(f"{path}.approach_fraction", "fraction", factor)
    for reaction, extent, limit in zip(frame.chemistry.reactions, point.extents, most, strict=True):
        frame.equation(block, f"extent_of_{reaction.name}", extent - factor * limit == 0, frame.flow)


def _damkohler_factor(block: Block, inlet: Gas, volume: Any) -> Any:
    """1 - exp(-Da), ln Da = c + a ln(V/F) + b ln(P/100 bar) - e (1/T - 1/T_reference), all of the bed's inlet.

    The four numbers are parameters of the model: they are fitted to the kinetic bed and fitted again at the optimum.
    """
    block.damkohler = Param(range(4), mutable=True, initialize=dict(enumerate((5.0, 1.0, 1.5, 10000.0))))
    c, a, b, e = (block.damkohler[k] for k in range(4))
    residence = volume / sum(inlet.flows)
    number = c + a * log(residence) + b * log(inlet.pressure / 1e7)
    number = number - e * (1.0 / inlet.temperature - 1.0 / REFERENCE_TEMPERATURE)
    return 1.0 - exp(-exp(number))
