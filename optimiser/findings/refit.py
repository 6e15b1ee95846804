"""Beds told by a Damkohler number: their factor is fitted to the kinetic bed, and again at the optimum until it rests.

The factor is 1 - exp(-Da) with ln Da = c + a ln(V/F) + b ln(P/100 bar) - e (1/T - 1/T_reference). All four numbers are
fitted: the value and its slopes by residence, pressure and inlet temperature are those of the kinetic bed, so that the
optimum's own conditions are met too, and not only its objective at one point.
"""

from __future__ import annotations

import math
from typing import Any

from optimiser.chemistry.equilibrium import equilibrium_extents
from optimiser.findings.result import number
from optimiser.findings.run import Workshop
from optimiser.inputs.case import BedStep
from optimiser.section.approach import REFERENCE_TEMPERATURE
from optimiser.solve.backends import solve
from optimiser.solve.ending import Ending

ROUNDS = 12
RESTING = 1e-6
"""The fit rests when the objective moves by less than this part of itself."""
_STEP = 0.02
# A factor of exactly 1 has no Damkohler number; closer to equilibrium than this it makes no difference.
_MOST = 1.0 - 1e-9


def factor_steps(workshop: Workshop) -> list[BedStep]:
    """Beds whose factor is fitted."""
    return [s for s in workshop.case.reactor if isinstance(s, BedStep) and s.rate == "damkohler"]


def fit_factors(workshop: Workshop) -> None:
    """Fit every such bed at the model's present point and hand the numbers to the solver."""
    for step in factor_steps(workshop):
        bed = next(b for b in workshop.section.reactor.beds if b.name == step.name)
        coefficients = _fit(workshop, step, bed)
        block = workshop.section.model.component(f"reactor_{step.name}")
        for k, value in enumerate(coefficients):
            block.damkohler[k].set_value(value)
    workshop.nlp.refresh()


def _fit(workshop: Workshop, step: BedStep, bed: Any) -> tuple[float, float, float, float]:
    flows = [number(n) for n in bed.inlet.flows]
    state = (number(bed.inlet.temperature), number(bed.inlet.pressure), number(bed.volume))
    temperature, pressure, volume = state
    base = _log_number(workshop, step, flows, state)
    a = (_log_number(workshop, step, flows, (temperature, pressure, volume * (1 + _STEP))) - base) / math.log1p(_STEP)
    b = (_log_number(workshop, step, flows, (temperature, pressure * (1 + _STEP), volume)) - base) / math.log1p(_STEP)
    warmer = temperature * (1 + 0.2 * _STEP)
    rise = 1.0 / warmer - 1.0 / temperature
    e = -(_log_number(workshop, step, flows, (warmer, pressure, volume)) - base) / rise
    c = base - a * math.log(volume / sum(flows)) - b * math.log(pressure / 1e7)
    c += e * (1.0 / temperature - 1.0 / REFERENCE_TEMPERATURE)
    return c, a, b, e


def _log_number(
    workshop: Workshop, step: BedStep, flows: list[float], state: tuple[float, float, float]
) -> float:
    """ln Da of the kinetic bed at an inlet temperature, pressure and volume."""
    temperature, pressure, volume = state
    outlet = workshop.forward.kinetic_bed(step, flows, temperature, pressure, volume)
    most = equilibrium_extents(workshop.chemistry, flows, outlet.temperature, outlet.pressure)
    factor = min(float(outlet.extents[0]) / float(most[0]), _MOST)
    return math.log(-math.log1p(-factor))


def refit(workshop: Workshop, ending: Ending) -> Ending:
    """Fit at the optimum and solve again until the objective rests."""
    if not factor_steps(workshop):
        return ending
    for _ in range(ROUNDS):
        workshop.nlp.load(ending.x)
        fit_factors(workshop)
        again = solve(workshop.nlp, ending.x, warm=ending)
        if not again.converged:
            again = solve(workshop.nlp, ending.x)
        moved = abs(again.objective - ending.objective) / abs(again.objective)
        ending = again
        if not ending.converged or moved < RESTING:
            break
    return ending
