"""What a careful colleague would add to a result: ranges left, factors that know no catalyst."""

from __future__ import annotations

from optimiser.engineering.costs import gauge_bar
from optimiser.engineering.vessels import wall_out_of_range
from optimiser.findings.result import number
from optimiser.findings.run import Workshop
from optimiser.findings.units import Units
from optimiser.inputs.case import BedStep


def gather_warnings(workshop: Workshop, values: dict[str, float]) -> list[str]:
    """All warnings of a point; `values` are its reported quantities, SI."""
    return [
        *_cost(values),
        *_correlations(workshop),
        *_walls(workshop, values),
        *_chemistry(workshop, values),
        *_factors(workshop),
    ]


def broken_limits(workshop: Workshop, values: dict[str, float], units: Units) -> list[str]:
    """Limits that a section with nothing free does not keep to; elsewhere the optimum keeps to all of them."""
    frame = workshop.section.frame
    if frame.has_freedom:
        return []
    found: dict[str, str] = {}
    for edge in frame.edges:
        value = number(edge.variable)
        passed = value - edge.value if edge.side == "high" else edge.value - value
        if passed > 1e-6 * max(abs(edge.value), 1e-12):
            dimension = frame.reported[edge.reported].dimension
            shown, end = (units.convert(v, edge.unit, dimension) for v in (value, edge.value))
            sign = "<=" if edge.side == "high" else ">="
            found[edge.path] = f"{edge.reported} is {shown:.4g} {edge.unit}, its limit {sign} {end:.4g} {edge.unit}"
    return [f"limit broken: {sentence}" for sentence in found.values()]


def _cost(values: dict[str, float]) -> list[str]:
    if values["costs.total"] > 0:
        return []
    return [
        "the credits exceed the costs, so product per unit cost has no meaning here; set objective: annual profit"
    ]


def _correlations(workshop: Workshop) -> list[str]:
    """Cost correlations used outside the range that they were fitted to, one sentence for each way of leaving it."""
    factor = workshop.case.vessels.design_pressure_factor.si
    large: list[str] = []
    small: list[str] = []
    pressed: list[str] = []
    highest = 0.0
    for item in workshop.section.frame.bought:
        size, unit = number(item.size) / item.correlation.scale, item.correlation.unit
        if size > item.correlation.high:
            large.append(f"{item.name} ({size:,.0f} of {item.correlation.high:g} {unit})")
        elif size < item.correlation.low:
            small.append(f"{item.name} ({size:,.0f} of {item.correlation.low:g} {unit})")
        if item.pressure is not None and item.correlation.pressure is not None:
            gauge = float(gauge_bar(factor * number(item.pressure)))
            if gauge > item.correlation.pressure.high:
                pressed.append(item.name)
                highest = max(highest, gauge)
    return [
        *_listed("costed as several units side by side, being larger than their correlation's range", large),
        *_listed("costed as the smallest unit of their correlation's range", small),
        *_listed(f"pressure factor of the cost extrapolated, to {highest:.0f} barg", pressed),
    ]


def _listed(what: str, names: list[str]) -> list[str]:
    return [f"{what}: {', '.join(names)}"] if names else []


def _walls(workshop: Workshop, values: dict[str, float]) -> list[str]:
    case = workshop.case.vessels
    design = case.design_pressure_factor.si * values["loop.pressure"]
    fault = wall_out_of_range(design, case.allowable_stress.si, case.joint_efficiency.si)
    return [] if fault is None else [f"vessel walls: {fault}"]


def _chemistry(workshop: Workshop, values: dict[str, float]) -> list[str]:
    """Rate laws and polynomials outside the range that their source states."""
    found: list[str] = []
    for bed in workshop.section.reactor.beds:
        temperatures = [number(p.temperature) for p in bed.points]
        pressure = number(bed.inlet.pressure)
        coldest = min(number(bed.inlet.temperature), *temperatures)
        for fault in workshop.chemistry.range_faults((coldest, max(temperatures)), (pressure, pressure)):
            found.append(f"{bed.name}: {fault}")
    return found


def _factors(workshop: Workshop) -> list[str]:
    """Beds told by a constant approach: nothing tells the optimiser that their catalyst goes to sleep."""
    found = []
    free = [path for path, s in workshop.case.settings().items() if not s.held]
    for step in workshop.case.reactor:
        if not isinstance(step, BedStep) or step.rate != "approach":
            continue
        resting = [p for p in free if p == "loop.pressure" or p.startswith(f"reactor.{step.name}.")]
        if resting:
            found.append(
                f"{step.name} keeps a constant approach to equilibrium whatever its temperature, pressure and volume; "
                f"these decisions rest on it: {', '.join(resting)}. Use rate: kinetic or rate: damkohler to defend them"
            )
    return found
