"""What can be said of a case without solving it: what is free, what is held, whether the equations fit."""

from __future__ import annotations

from typing import Any

from optimiser.findings.answer import empty_ranges
from optimiser.findings.freedom import Freedom, count_freedom
from optimiser.findings.run import Workshop, open_workshop
from optimiser.findings.units import Units
from optimiser.inputs.case import Case


def check_case(case: Case) -> dict[str, Any]:
    """Build the section, count its freedom and look for what cannot be right; nothing is solved."""
    clash = empty_ranges(case)
    workshop = open_workshop(case)
    decisions = [variable for variable, _ in workshop.section.frame.decisions.values()]
    freedom = count_freedom(workshop.nlp, decisions)
    status = "conflict" if clash else _status(freedom)
    units = Units(case)
    return {
        "status": status,
        **_settings(workshop, units),
        "limits": _limits(workshop, units),
        "variables": freedom.variables,
        "equations": freedom.equations,
        "freedom": freedom.degrees,
        "groups": _groups(freedom),
        "warnings": ([clash] if clash else []) + fuel_warnings(workshop),
    }


def _status(freedom: Freedom) -> str:
    if freedom.over:
        return "over-specified"
    return "under-specified" if freedom.under else "ready"


def _groups(freedom: Freedom) -> list[str]:
    """The groups as sentences."""
    groups = []
    if freedom.over:
        groups.append(f"too many values are stated for the equations of: {', '.join(_pieces(freedom.over))}")
    if freedom.under:
        groups.append(f"nothing states or gives: {', '.join(_pieces(freedom.under))}")
    return groups


def _pieces(names: list[str]) -> list[str]:
    """Names of the Blocks, each once."""
    return list(dict.fromkeys(name.split(".")[0].split("[")[0].replace("_", " ") for name in names))


def _settings(workshop: Workshop, units: Units) -> dict[str, list[dict[str, Any]]]:
    free, held = [], []
    reported = workshop.section.frame.reported
    for path, (_, setting) in workshop.section.frame.decisions.items():
        dimension = reported[path if path in reported else "product.rate"].dimension
        low = units.show(path, dimension, setting.low)
        if setting.held:
            held.append({"path": path, **low})
            continue
        high = units.show(path, dimension, setting.high)
        free.append({"path": path, "low": low["value"], "high": high["value"], "unit": low["unit"]})
    return {"free": free, "held": held}


def _limits(workshop: Workshop, units: Units) -> list[dict[str, Any]]:
    rows = []
    for path, limit in workshop.case.limits.items():
        dimension = workshop.section.frame.reported[path].dimension
        row: dict[str, Any] = {"path": f"limits.{path}", "unit": limit.unit}
        for side, end in (("low", limit.low), ("high", limit.high)):
            row[side] = None if end is None else units.convert(end, limit.unit, dimension)
        rows.append(row)
    return rows


def fuel_warnings(workshop: Workshop) -> list[str]:
    """Feeds that are worth more burnt than they cost: the optimum would be to purge them."""
    found = []
    case, mixture = workshop.case, workshop.chemistry.mixture
    for name, stream in case.feed.streams.items():
        composition = [stream.composition.get(s, 0.0) for s in mixture.names]
        price = stream.price_per_mole(mixture.species, composition)
        value = (
            sum(y * s.lhv for y, s in zip(composition, mixture.species, strict=True)) * case.prices.fuel.si
        )
        if value > price:
            found.append(
                f"feed.streams.{name}: its heating value at prices.fuel is worth {value / price:.2f} times its price, "
                "so purging it pays; lower prices.fuel or check the price of the feed"
            )
    return found
