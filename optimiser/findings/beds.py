"""Beds as a result shows them: in, out, hottest, and their approach to equilibrium both ways."""

from __future__ import annotations

from typing import Any

from optimiser.chemistry.equilibrium import approach_fraction, approach_temperature
from optimiser.findings.result import number
from optimiser.findings.run import Workshop
from optimiser.findings.units import Units


def bed_rows(workshop: Workshop, units: Units, values: dict[str, float]) -> dict[str, Any]:
    """One entry for each bed; each value beside its unit. Adds the approaches to `values`."""
    return {bed.name: _row(workshop, bed, units, values) for bed in workshop.section.reactor.beds}


def _row(workshop: Workshop, bed: Any, units: Units, values: dict[str, float]) -> dict[str, Any]:
    path = f"reactor.{bed.name}"
    fraction, difference = bed_approach(workshop, bed)
    values.setdefault(f"{path}.approach_fraction", fraction)
    values.setdefault(f"{path}.approach_temperature", difference)

    def show(name: str, dimension: str, si: float) -> dict[str, Any]:
        return units.show(f"{path}.{name}", dimension, si)

    return {
        "inlet_temperature": show("inlet_temperature", "temperature", number(bed.inlet.temperature)),
        "outlet_temperature": show("outlet_temperature", "temperature", number(bed.outlet.temperature)),
        "hottest": show("hottest", "temperature", values[f"{path}.hottest"]),
        "inlet_pressure": show("inlet_pressure", "pressure", number(bed.inlet.pressure)),
        "pressure_drop": show("pressure_drop", "pressure_difference", values[f"{path}.pressure_drop"]),
        "volume": show("volume", "volume", number(bed.volume)),
        "length": show("length", "length", values[f"{path}.length"]),
        "diameter": show("diameter", "length", number(bed.diameter)),
        "inlet_product": show("inlet_product", "fraction", _product(workshop, bed.inlet.flows)),
        "outlet_product": show("outlet_product", "fraction", _product(workshop, bed.outlet.flows)),
        "approach_fraction": show("approach_fraction", "fraction", fraction),
        "approach_temperature": show("approach_temperature", "temperature_difference", difference),
    }


def _product(workshop: Workshop, flows: Any) -> float:
    amounts = [number(n) for n in flows]
    names = workshop.chemistry.mixture.names
    return sum(amounts[names.index(p)] for p in workshop.chemistry.products) / sum(amounts)


def bed_approach(workshop: Workshop, bed: Any) -> tuple[float, float]:
    """Approach of the first reaction: as a fraction and as a temperature difference, K."""
    chemistry = workshop.chemistry
    temperature, pressure = number(bed.outlet.temperature), number(bed.outlet.pressure)
    inlet = [number(n) for n in bed.inlet.flows]
    extents = [number(x) for x in bed.extents]
    fractions = approach_fraction(chemistry, inlet, extents, temperature, pressure)
    outlet = chemistry.mixture.gas(temperature, pressure, [number(n) for n in bed.outlet.flows])
    differences = approach_temperature(chemistry, outlet, temperature, pressure)
    return float(fractions[0]), float(differences[0])
