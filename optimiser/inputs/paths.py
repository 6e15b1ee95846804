"""Result paths: every quantity that a result reports and that may carry a limit, with its dimension."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from optimiser.inputs.case import Case

_EXCHANGER = {
    "duty": "power",
    "area": "area",
    "approach": "temperature_difference",
    "outlet_temperature": "temperature",
}
_BED = {
    "inlet_temperature": "temperature",
    "outlet_temperature": "temperature",
    "hottest": "temperature",
    "pressure_drop": "pressure_difference",
    "length": "length",
    "diameter": "length",
    "volume": "volume",
    "product_fraction": "fraction",
    "approach_fraction": "fraction",
    "approach_temperature": "temperature_difference",
}
_STAGE = {
    "discharge_temperature": "temperature",
    "power": "power",
    "ratio": "ratio",
    "intercooler_duty": "power",
    "intercooler_area": "area",
}
_ALWAYS = {
    "feed.flow": "molar_flow",
    "compression.power": "power",
    "loop.pressure": "pressure",
    "loop.recycle_ratio": "ratio",
    "loop.purge_fraction": "fraction",
    "loop.pressure_drop": "pressure_difference",
    "loop.circulator_power": "power",
    "reactor.catalyst_volume": "volume",
    "reactor.conversion": "fraction",
    "reactor.pressure_drop": "pressure_difference",
    "condensation.separator.pressure": "pressure",
    "condensation.separator.volume": "volume",
    "condensation.separator.diameter": "length",
    "condensation.separator.vapour_fraction": "fraction",
    "product.rate": "mass_flow",
    "product.flow": "molar_flow",
    "product.purity": "fraction",
    "product.yield": "ratio",
    "product.cost": "money_per_mass",
    "purge.flow": "molar_flow",
    "purge.heating_value": "power",
}
_COSTS = (
    "feed",
    "electricity",
    "cooling_water",
    "catalyst",
    "capital_recovery",
    "maintenance",
    "fixed",
    "fuel_credit",
    "total",
)
_CAPITAL = ("compressors", "circulator", "exchangers", "converter", "separator", "total")


def result_paths(case: Case, reacting: Iterable[str] | None = None) -> dict[str, str]:
    """Path to dimension of everything that a limit of this case may name.

    Args:
        reacting: species that take part in a reaction; None if not known, then inerts are expected.
    """
    return paths_of(case.resolved(), reacting)


def paths_of(data: Mapping[str, Any], reacting: Iterable[str] | None = None) -> dict[str, str]:
    """As `result_paths`, from the data of a file that may still be wrong."""
    paths = dict(_ALWAYS)
    if _has_inerts(data, reacting):
        paths["loop.inerts"] = "fraction"
    for name, stream in mapping(data, "feed", "streams").items():
        paths[f"feed.streams.{name}.flow"] = "molar_flow"
        if isinstance(stream, dict) and "share" in stream:
            paths[f"feed.streams.{name}.share"] = "fraction"
    for stage in items(data, "compression", "stages"):
        paths |= _under(f"compression.{stage.get('stage')}", _STAGE)
        if "discharge_pressure" in stage:
            paths[f"compression.{stage.get('stage')}.discharge_pressure"] = "pressure"
    for step in items(data, "reactor"):
        paths |= _step(step)
    return paths | _train(data) | _money(data)


def mapping(data: Any, *path: str) -> dict[str, Any]:
    """The mapping at a path, empty where there is none."""
    for part in path:
        data = data.get(part) if isinstance(data, dict) else None
    return data if isinstance(data, dict) else {}


def items(data: Any, *path: str) -> list[dict[str, Any]]:
    """The items at a path that are mappings, empty where there is no list."""
    for part in path:
        data = data.get(part) if isinstance(data, dict) else None
    return [item for item in data if isinstance(item, dict)] if isinstance(data, list) else []


def _under(prefix: str, names: Mapping[str, str]) -> dict[str, str]:
    return {f"{prefix}.{name}": dimension for name, dimension in names.items()}


def _has_inerts(data: Mapping[str, Any], reacting: Iterable[str] | None) -> bool:
    """Whether a species is fed that takes part in no reaction."""
    if reacting is None:
        return True
    streams = mapping(data, "feed", "streams").values()
    fed = {species for stream in streams for species, y in mapping(stream, "composition").items() if y != 0}
    return bool(fed - set(reacting))


def _step(step: dict[str, Any]) -> dict[str, str]:
    if "cool" in step:
        return _under(f"reactor.{step['cool']}", _EXCHANGER)
    if "bed" not in step:
        return {}
    paths = _under(f"reactor.{step['bed']}", _BED)
    if "length_over_diameter" in step:
        paths[f"reactor.{step['bed']}.length_over_diameter"] = "ratio"
    return paths


def _train(data: Mapping[str, Any]) -> dict[str, str]:
    paths: dict[str, str] = {}
    train = mapping(data, "condensation")
    for part in ("water_cooler", "cold_exchanger", "chiller"):
        if part in train:
            paths |= _under(f"condensation.{part}", _EXCHANGER)
    if "cold_exchanger" in train:
        paths["condensation.cold_exchanger.recycle_temperature"] = "temperature"
    if "chiller" in train:
        paths["condensation.chiller.power"] = "power"
    return paths


def _money(data: Mapping[str, Any]) -> dict[str, str]:
    costs, capital = [*_COSTS], [*_CAPITAL]
    sinks = {step.get("sink") for step in items(data, "reactor")}
    costs += ["steam_credit"] if "steam" in sinks else []
    costs += ["water_heat_credit"] if "boiler_feed_water" in sinks else []
    costs += ["carbon"] if "carbon" in mapping(data, "prices") else []
    capital += ["refrigeration"] if "chiller" in mapping(data, "condensation") else []
    return {f"costs.{c}": "money_per_year" for c in costs} | {f"capital.{c}": "money" for c in capital}
