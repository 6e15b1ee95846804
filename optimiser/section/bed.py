"""Adiabatic fixed beds: Radau collocation in catalyst volume with the catalyst's rate law and Ergun's pressure drop.

A bed reads from its inlet to its outlet. Unknown at each point are the extents of reaction, temperature, pressure,
compressibility, the rates and the fall of the squared pressure; the flows follow from the extents and the enthalpy
flow is that of the inlet. The square of the pressure is the state that Ergun's equation makes nearly linear.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

from pyomo.core import Block, Param

from optimiser.engineering.flow import ergun_gradient
from optimiser.inputs.case import BedStep
from optimiser.section.collocation import POINTS, RADAU_DERIVATIVE, element_edges
from optimiser.section.frame import Frame, Gas

PI = 3.141592653589793
COLDEST, HOTTEST = 300.0, 1000.0


@dataclass
class Bed:
    """One bed: its decisions, its points and its outlet."""

    name: str
    volume: Any
    diameter: Any
    length: Any
    inlet: Gas
    outlet: Gas
    points: list[Any] = field(default_factory=list)
    extents: Any = None


def _geometry(frame: Frame, block: Any, step: BedStep) -> tuple[Any, Any, Any]:
    """Volume, diameter and length; the case states the diameter or the slenderness."""
    path = f"reactor.{step.name}"
    volume = frame.decision(block, "volume", "volume", f"{path}.volume", step.volume, "volume")
    if step.diameter is not None:
        diameter = frame.decision(block, "diameter", "length", f"{path}.diameter", step.diameter, "length")
    else:
        slender = step.length_over_diameter
        assert slender is not None
        ratio = frame.decision(
            block, "slenderness", "ratio", f"{path}.length_over_diameter", slender, "ratio"
        )
        diameter = frame.variable(block, "diameter", "length", 0.05, 20.0, start=2.0)
        frame.equation(
            block, "slenderness_is", PI / 4 * diameter * diameter * diameter * ratio - volume == 0, 10.0
        )
        frame.report(f"{path}.diameter", "length", diameter)
    length = frame.define(block, "length", "length", 4.0 * volume / (PI * diameter * diameter), low=0.01)
    frame.report(f"{path}.length", "length", length)
    return volume, diameter, length


def build_bed(frame: Frame, step: BedStep, inlet: Gas) -> Bed:
    """A bed from its inlet gas."""
    block = frame.block(f"reactor.{step.name}")
    volume, diameter, length = _geometry(frame, block, step)
    mass = sum(n * m for n, m in zip(inlet.flows, frame.mixture.molar_mass, strict=True))
    flux = frame.define(block, "mass_flux", "mass_flux", 4.0 * mass / (PI * diameter * diameter), low=1e-4)
    builder = build_kinetic_points if step.rate == "kinetic" else build_factor_points
    points = builder(frame, block, step, inlet, (volume, length, flux))
    last = points[-1]
    flows = frame.flows(block, "outlet", _flows(frame, inlet.flows, last.extents))
    outlet = Gas(flows, last.temperature, last.pressure, last.phase, inlet.enthalpy)
    bed = Bed(step.name, volume, diameter, length, inlet, outlet, points, last.extents)
    _report(frame, block, bed, inlet)
    return bed


def _flows(frame: Frame, inlet: Sequence[Any], extents: Sequence[Any]) -> list[Any]:
    """Flows after the reactions have gone by their extents, mol/s."""
    result = []
    for k, flow in enumerate(inlet):
        for reaction, extent in zip(frame.chemistry.reactions, extents, strict=True):
            if reaction.nu[k]:
                flow = flow + reaction.nu[k] * extent
        result.append(flow)
    return result


@dataclass
class Point:
    """Unknowns at one point of a bed."""

    extents: list[Any]
    temperature: Any
    pressure: Any
    phase: Any
    rates: list[Any]
    fall: Any


def _point(frame: Frame, block: Any, inlet: Gas, sizes: tuple[Any, Any, Any]) -> Point:
    """State at one point: equation of state and energy balance."""
    extents = [frame.variable(block, f"extent_{r.name}", "flow") for r in frame.chemistry.reactions]
    temperature = frame.variable(block, "temperature", "temperature", COLDEST, HOTTEST, start=700.0)
    pressure = frame.variable(block, "pressure", "pressure", 1e3)
    root = frame.variable(block, "compressibility", "ratio", 0.2, 3.0, start=1.05)
    phase = frame.mixture.phase(temperature, pressure, _flows(frame, inlet.flows, extents), root)
    frame.give(root, frame.equation(block, "state", phase.residual == 0))
    frame.equation(block, "energy", phase.enthalpy - inlet.enthalpy == 0, frame.nominal("heat"))
    catalyst, flux = frame.chemistry.catalyst, sizes[2]
    gradient = ergun_gradient(
        flux, phase.density, catalyst.viscosity(temperature), catalyst.pellet_diameter, catalyst.void
    )
    fall = frame.define(
        block, "fall", "gradient", 2.0 * pressure / frame.nominal("pressure") * gradient, low=0.0
    )
    return Point(extents, temperature, pressure, phase, [], fall)


def build_kinetic_points(
    frame: Frame, block: Any, step: BedStep, inlet: Gas, sizes: tuple[Any, Any, Any]
) -> list[Point]:
    """All collocation points of a bed with a rate law, element by element."""
    edges = element_edges(step.elements)
    block.points = Block(range(step.elements * POINTS))
    block.elements = Block(range(step.elements))
    points: list[Point] = []
    for element in range(step.elements):
        fresh = []
        for k in range(POINTS):
            cell = block.points[element * POINTS + k]
            point = _point(frame, cell, inlet, sizes)
            activity = step.activity.si
            rates = frame.chemistry.rates(point.phase, point.temperature, point.pressure, activity)
            size = frame.flow / 30.0
            point.rates = [
                _rate(frame, cell, reaction.name, rate, size)
                for reaction, rate in zip(frame.chemistry.reactions, rates, strict=True)
            ]
            fresh.append(point)
        width = edges[element + 1] - edges[element]
        before = points[-1] if points else None
        _collocate(frame, block.elements[element], (before, fresh), inlet, width, sizes)
        points += fresh
    return points


def _rate(frame: Frame, cell: Any, name: str, rate: Any, size: float) -> Any:
    """A reaction's rate as a variable, mol/(m3 s)."""
    variable = frame.define(cell, f"rate_{name}", "flow", rate)
    frame.model.scaling_factor[variable] = 1.0 / size
    frame.model.scaling_factor[cell.component(f"rate_{name}_is")] = 1.0 / size
    return variable


def _collocate(
    frame: Frame,
    block: Any,
    points: tuple[Point | None, list[Point]],
    inlet: Gas,
    width: float,
    sizes: tuple[Any, Any, Any],
) -> None:
    """Radau equations of one element: slopes of the extents and of the squared pressure."""
    before, fresh = points
    volume, length, _ = sizes
    unit = frame.nominal("pressure")
    start = before.pressure if before else inlet.pressure
    squares = [p * p / unit**2 for p in [start, *(point.pressure for point in fresh)]]
    for k, point in enumerate(fresh):
        weights = RADAU_DERIVATIVE[k]
        for r, reaction in enumerate(frame.chemistry.reactions):
            slope = sum(weights[j + 1] * other.extents[r] for j, other in enumerate(fresh))
            if before is not None:
                slope = slope + weights[0] * before.extents[r]
            equation = slope - width * volume * point.rates[r] == 0
            frame.equation(block, f"extent_{reaction.name}_{k}", equation, frame.flow)
        slope = sum(weights[j] * square for j, square in enumerate(squares))
        frame.equation(block, f"pressure_{k}", slope + width * length * point.fall / unit == 0)


def build_factor_points(
    frame: Frame, block: Any, step: BedStep, inlet: Gas, sizes: tuple[Any, Any, Any]
) -> list[Point]:
    """The outlet point of a bed that goes a stated part of the way to equilibrium; Ergun over the whole bed."""
    from optimiser.section.approach import close_by_factor

    block.outlet_point = Block(concrete=True)
    point = _point(frame, block.outlet_point, inlet, sizes)
    unit = frame.nominal("pressure")
    fall = (point.pressure * point.pressure - inlet.pressure * inlet.pressure) / unit**2
    # The gradient is that of the outlet; a bed that is fitted to its rate law is fitted in this too.
    block.fall_share = Param(mutable=True, initialize=1.0)
    frame.equation(
        block.outlet_point, "pressure_fall", fall + block.fall_share * sizes[1] * point.fall / unit == 0
    )
    close_by_factor(frame, block, step, inlet, point, sizes[0])
    return [point]


def _report(frame: Frame, block: Any, bed: Bed, inlet: Gas) -> None:
    """Quantities of the bed that a result shows and a limit may name."""
    path = f"reactor.{bed.name}"
    points = [point.temperature for point in bed.points]
    frame.report(f"{path}.outlet_temperature", "temperature", points[-1])
    frame.report(f"{path}.hottest", "temperature", inlet.temperature, *points)
    drop = frame.define(block, "pressure_drop", "pressure", inlet.pressure - bed.outlet.pressure)
    frame.model.scaling_factor[drop] = 1e-5
    frame.report(f"{path}.pressure_drop", "pressure_difference", drop)
    total = sum(bed.outlet.flows)
    names = frame.mixture.names
    made = sum(bed.outlet.flows[names.index(p)] for p in frame.chemistry.products)
    fraction = frame.define(block, "product_fraction", "fraction", made / total)
    frame.report(f"{path}.product_fraction", "fraction", fraction)
    frame.stream(f"{path}.in", inlet.flows, inlet.temperature, inlet.pressure)
    frame.stream(f"{path}.out", bed.outlet.flows, bed.outlet.temperature, bed.outlet.pressure)
