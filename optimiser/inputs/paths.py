"""Result paths: every quantity that a result of a case reports and that may carry a limit, with its dimension."""

from __future__ import annotations

from optimiser.inputs.case import BedStep, Case

_EXCHANGER = {"duty": "power", "area": "area", "approach": "temperature_difference", "outlet_temperature": "temperature"}
_BED = {
    "inlet_temperature": "temperature",
    "outlet_temperature": "temperature",
    "hottest": "temperature",
    "pressure_drop": "pressure",
    "length": "length",
    "diameter": "length",
    "volume": "volume",
    "product_fraction": "fraction",
    "approach_fraction": "fraction",
    "approach_temperature": "temperature_difference",
}
_STAGE = {
    "discharge_temperature": "temperature",
    "discharge_pressure": "pressure",
    "power": "power",
    "ratio": "ratio",
    "intercooler_duty": "power",
    "intercooler_area": "area",
}
_FIXED = {
    "feed.flow": "molar_flow",
    "feed.product_rate": "mass_flow",
    "compression.power": "power",
    "loop.pressure": "pressure",
    "loop.recycle_ratio": "ratio",
    "loop.purge_fraction": "fraction",
    "loop.inerts": "fraction",
    "loop.pressure_drop": "pressure",
    "loop.circulator_power": "power",
    "reactor.catalyst_volume": "volume",
    "reactor.conversion": "fraction",
    "reactor.pressure_drop": "pressure",
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
_COSTS = ("feed", "electricity", "cooling_water", "catalyst", "capital_recovery", "maintenance", "fixed", "total")
_CAPITAL = ("compressors", "circulator", "exchangers", "converter", "separator", "total")


def result_paths(case: Case) -> dict[str, str]:
    """Path to dimension of everything that a limit of this case may name."""
    paths = dict(_FIXED)
    for name, stream in case.feed.streams.items():
        paths[f"feed.streams.{name}.flow"] = "molar_flow"
        if stream.share is not None:
            paths[f"feed.streams.{name}.share"] = "fraction"
    for k, stage in enumerate(case.compression.stages):
        last = k == len(case.compression.stages) - 1
        paths |= _under(f"compression.{stage.name}", _STAGE, ("discharge_pressure",) if last else ())
    for step in case.reactor:
        if isinstance(step, BedStep):
            paths |= _under(f"reactor.{step.name}", _BED)
            if step.length_over_diameter is not None:
                paths[f"reactor.{step.name}.length_over_diameter"] = "ratio"
        else:
            paths |= _under(f"reactor.{step.name}", _EXCHANGER)
    return paths | _train(case) | _money(case)


def _under(prefix: str, names: dict[str, str], without: tuple[str, ...] = ()) -> dict[str, str]:
    return {f"{prefix}.{name}": dimension for name, dimension in names.items() if name not in without}


def _train(case: Case) -> dict[str, str]:
    paths: dict[str, str] = {}
    for part in ("water_cooler", "cold_exchanger", "chiller"):
        if getattr(case.condensation, part) is not None:
            paths |= _under(f"condensation.{part}", _EXCHANGER)
    if case.condensation.cold_exchanger is not None:
        paths["condensation.cold_exchanger.recycle_temperature"] = "temperature"
    if case.condensation.chiller is not None:
        paths["condensation.chiller.power"] = "power"
    return paths


def _money(case: Case) -> dict[str, str]:
    costs, capital = [*_COSTS, "fuel_credit"], [*_CAPITAL]
    sinks = {getattr(step, "sink", None) for step in case.reactor}
    costs += ["steam_credit"] if "steam" in sinks else []
    costs += ["water_heat_credit"] if "boiler_feed_water" in sinks else []
    costs += ["carbon"] if case.prices.carbon is not None else []
    capital += ["refrigeration"] if case.condensation.chiller is not None else []
    return {f"costs.{c}": "money_per_year" for c in costs} | {f"capital.{c}": "money" for c in capital}
