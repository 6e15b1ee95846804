"""Beds told by a Damkohler number: their factor is fitted to the kinetic bed, and again at the optimum until it rests.

The factor is 1 - exp(-Da) with ln Da = c + a ln(V/F) + b ln(P/100 bar) - e (1/T - 1/T_reference). All four numbers are
fitted: the value and its slopes by residence, pressure and inlet temperature are those of the kinetic bed, so that the
optimum's own conditions are met too, and not only its objective at one point.
"""

from __future__ import annotations

import math
from typing import Any

from optimiser.chemistry.equilibrium import equilibrium_extents
from optimiser.engineering.flow import ergun_gradient
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
        block.fall_share.set_value(_fall_share(workshop, step, bed))
    workshop.nlp.refresh()


def _fit(workshop: Workshop, step: BedStep, bed: Any) -> tuple[float, float, float, float]:
    flows = [number(n) for n in bed.inlet.flows]
    temperature, pressure, volume = (
        number(v) for v in (bed.inlet.temperature, bed.inlet.pressure, bed.volume)
    )

    def log_number(t: float, p: float, v: float) -> float:
        return _log_number(workshop, step, flows, (t, p), (v, number(bed.diameter)))

    base, grown = log_number(temperature, pressure, volume), math.log1p(_STEP)
    a = (log_number(temperature, pressure, volume * (1 + _STEP)) - base) / grown
    b = (log_number(temperature, pressure * (1 + _STEP), volume) - base) / grown
    warmer = temperature * (1 + 0.2 * _STEP)
    e = -(log_number(warmer, pressure, volume) - base) / (1.0 / warmer - 1.0 / temperature)
    c = base - a * math.log(volume / sum(flows)) - b * math.log(pressure / 1e7)
    c += e * (1.0 / temperature - 1.0 / REFERENCE_TEMPERATURE)
    return c, a, b, e


def _fall_share(workshop: Workshop, step: BedStep, bed: Any) -> float:
    """Fall of the squared pressure along the integrated bed over what the outlet's gradient would make of it."""
    flows = [number(n) for n in bed.inlet.flows]
    pressure = number(bed.inlet.pressure)
    sizes = (number(bed.volume), number(bed.diameter))
    profile = workshop.forward.kinetic_bed(step, flows, (number(bed.inlet.temperature), pressure), sizes)
    catalyst, mixture = workshop.chemistry.catalyst, workshop.chemistry.mixture
    out = (float(profile.temperature[-1]), float(profile.pressure[-1]))
    flux = sum(n * m for n, m in zip(flows, mixture.molar_mass, strict=True)) * profile.length / sizes[0]
    density = float(mixture.gas(*out, profile.flows.tolist()).density)
    viscosity = float(catalyst.viscosity(out[0]))
    gradient = ergun_gradient(flux, density, viscosity, catalyst.pellet_diameter, catalyst.void)
    return float((pressure**2 - out[1] ** 2) / (2.0 * out[1] * gradient * profile.length))


def _log_number(
    workshop: Workshop,
    step: BedStep,
    flows: list[float],
    state: tuple[float, float],
    sizes: tuple[float, float],
) -> float:
    """Ln Da of the kinetic bed at an inlet temperature and pressure, with a volume and diameter."""
    outlet = workshop.forward.kinetic_bed(step, flows, state, sizes)
    most = equilibrium_extents(
        workshop.chemistry, flows, float(outlet.temperature[-1]), float(outlet.pressure[-1])
    )
    factor = min(max(float(outlet.extents[-1, 0]) / float(most[0]), 1e-6), _MOST)
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
