"""The result of a run as plain data, ready for JSON: every number beside its unit, none of them missing or infinite."""

from __future__ import annotations

from typing import Any

from optimiser.findings.units import Units
from optimiser.findings.worth import Binding, bindings, marginal
from optimiser.inputs.case import Case
from optimiser.section.build import SectionModel
from optimiser.section.frame import Reported
from optimiser.solve.ending import Ending
from optimiser.solve.nlp import Nlp

# Name, dimension and direction of each objective.
OBJECTIVES = {
    "yield per unit cost": ("mass_per_money", "maximise"),
    "levelised cost": ("money_per_mass", "minimise"),
    "annual profit": ("money_per_year", "maximise"),
    "yield": ("ratio", "maximise"),
}
# A decision sits at an end of its range when it is this close to it, as a part of the range.
AT_END = 1e-4


def number(value: Any) -> float:
    """Value of a variable, an expression or a plain number."""
    if isinstance(value, int | float):
        return float(value)
    if hasattr(value, "value") and value.value is not None and not hasattr(value, "expr"):
        return float(value.value)
    from pyomo.core import value as evaluate

    return float(evaluate(value))


def reported_value(reported: Reported) -> float:
    """SI value of a reported quantity at the model's present point."""
    return float(reported.pick(number(v) for v in reported.variables))


def quantities(section: SectionModel) -> dict[str, float]:
    """All reported quantities, SI."""
    return {path: reported_value(reported) for path, reported in section.frame.reported.items()}


def decisions(section: SectionModel, units: Units) -> dict[str, Any]:
    """Each decision with its range and where in it it sits."""
    shown = {}
    for path, (variable, setting) in section.frame.decisions.items():
        dimension = section.frame.reported.get(path, section.frame.reported.get("product.rate"))
        assert dimension is not None
        value = number(variable)
        low = None if setting.held else units.show(path, dimension.dimension, setting.low)["value"]
        high = None if setting.held else units.show(path, dimension.dimension, setting.high)["value"]
        shown[path] = units.show(path, dimension.dimension, value) | {
            "low": low,
            "high": high,
            "at": "held" if setting.held else _place(value, setting.low, setting.high),
        }
    return shown


def _place(value: float, low: float, high: float) -> str:
    room = AT_END * (high - low)
    if value - low < room:
        return "low"
    return "high" if high - value < room else "inside"


def objective(case: Case, units: Units, value: float) -> dict[str, Any]:
    """{name, value, unit, direction} from the SI value."""
    dimension, direction = OBJECTIVES[case.objective]
    return {"name": case.objective, **units.plain(dimension, value), "direction": direction}


def binding_rows(
    section: SectionModel, nlp: Nlp, ending: Ending, units: Units, values: dict[str, float]
) -> list[dict[str, Any]]:
    """Binding limits, the ones worth most money first."""
    rows = [_binding(section, units, values, b) for b in bindings(section, nlp, ending)]
    return sorted(rows, key=lambda row: -abs(row["worth_per_year"] or row["worth"]))


def _binding(
    section: SectionModel, units: Units, values: dict[str, float], binding: Binding
) -> dict[str, Any]:
    case, edge = section.frame.case, binding.edge
    dimension = section.frame.reported[edge.reported].dimension
    unit = edge.unit or units.unit(edge.reported, dimension)
    step = units.step(unit, dimension)
    goal, _ = OBJECTIVES[case.objective]
    goal_unit = units.plain(goal, 1.0)["unit"]
    worth = units.plain(goal, binding.worth * step)["value"]
    a_year = _per_year(case, values, binding.worth * step, edge.reported)
    return {
        "path": edge.path,
        "name": edge.reported,
        "value": units.convert(values[edge.reported], unit, dimension),
        "limit": units.convert(edge.value, unit, dimension),
        "unit": unit,
        "side": edge.side,
        "worth": worth,
        "worth_unit": f"{goal_unit} per {_difference(unit)}",
        "worth_per_year": a_year,
        "worth_per_year_unit": f"{case.economics.currency}/year per {_difference(unit)}",
    }


def _difference(unit: str) -> str:
    """Unit of a difference: a degree Celsius of difference is a kelvin."""
    return {"degC": "K", "degF": "delta_degF"}.get(unit, unit)


def _per_year(case: Case, values: dict[str, float], worth: float, path: str) -> float | None:
    """Worth in money a year; None where the objective knows no money or the limit is on the product itself."""
    if case.objective == "yield" or path in ("product.rate", "feed.product_rate"):
        return None
    product = values["product.rate"] * case.economics.hours_per_year.si
    if case.objective == "annual profit":
        return worth
    if case.objective == "levelised cost":
        return worth * product
    return worth * values["costs.total"] / (product / values["costs.total"])


def streams(section: SectionModel, units: Units) -> dict[str, Any]:
    """State, flow and composition of each stream."""
    names = section.frame.mixture.names
    shown = {}
    for name, record in section.frame.streams.items():
        vapour = [number(n) for n in record.vapour]
        liquid = [number(n) for n in record.liquid] if record.liquid is not None else [0.0] * len(names)
        total = sum(vapour) + sum(liquid)
        shown[name] = {
            "temperature": units.plain("temperature", number(record.temperature)),
            "pressure": units.plain("pressure", number(record.pressure)),
            "flow": units.plain("molar_flow", total),
            "vapour_fraction": sum(vapour) / total,
            "composition": {s: (v + x) / total for s, v, x in zip(names, vapour, liquid, strict=True)},
        }
    return shown


def costs(section: SectionModel, units: Units, values: dict[str, float]) -> dict[str, Any]:
    """Annual cost by item with its share of the gross cost, and capital by item."""
    items = {p.removeprefix("costs."): v for p, v in values.items() if p.startswith("costs.")}
    total = items.pop("total")
    gross = sum(v for name, v in items.items() if not name.endswith("credit"))
    shown = {}
    for name, value in items.items():
        signed = -value if name.endswith("credit") else value
        shown[name] = units.plain("money_per_year", signed) | {"share": signed / gross}
    capital = {p.removeprefix("capital."): v for p, v in values.items() if p.startswith("capital.")}
    return {
        "currency": section.frame.case.economics.currency,
        "items": dict(sorted(shown.items(), key=lambda item: -abs(item[1]["value"]))),
        "total": units.plain("money_per_year", total),
        "capital": {name: units.plain("money", value) for name, value in capital.items()},
    }


def product(
    section: SectionModel, nlp: Nlp, ending: Ending, units: Units, values: dict[str, float]
) -> dict[str, Any]:
    """Rate, purity, yield and cost of the product, with what one more unit of it costs where its rate is held."""
    frame = section.frame
    shown: dict[str, Any] = {
        "rate": units.show("feed.product_rate", "mass_flow", values["product.rate"]),
        "purity": units.show("product.purity", "fraction", values["product.purity"]),
        "yield": units.plain("ratio", values["product.yield"]),
        "cost": units.plain("money_per_mass", values["product.cost"]),
    }
    slope = marginal(section, nlp, ending, "feed.product_rate")
    shown["marginal_cost"] = None
    if slope is not None:
        cost = _marginal_cost(frame.case, values, slope)
        shown["marginal_cost"] = None if cost is None else units.plain("money_per_mass", cost)
    return shown


def _marginal_cost(case: Case, values: dict[str, float], slope: float) -> float | None:
    """Money for each further kilogram, from the slope of the minimised objective with the product rate (kg/s).

    With m product a year and C cost a year: for -m/C, dC/dm = C/m + (C^2/m) d(-m/C)/dm; for C/m, dC/dm = C/m + m
    d(C/m)/dm; for profit, price less d(profit)/dm.
    """
    seconds, total = case.economics.hours_per_year.si, values["costs.total"]
    made = values["product.rate"] * seconds
    slope = slope / seconds
    if case.objective == "yield per unit cost":
        return total / made + total * total / made * slope
    if case.objective == "levelised cost":
        return total / made + made * slope
    if case.objective == "annual profit" and case.prices.product is not None:
        return case.prices.product.si + slope
    return None
