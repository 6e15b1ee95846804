"""Annual cost and capital of the section, item by item.

Every item is a variable, so that each may carry a limit and shows in the result. Money is in the currency of the case;
annual money is per year of `hours_per_year`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from optimiser.engineering.costs import capital_recovery
from optimiser.engineering.heat import cooling_water_flow
from optimiser.engineering.vessels import separator_volume, shell_mass, wall_thickness
from optimiser.section.compression import Compressed
from optimiser.section.condensation import Train
from optimiser.section.exchange import Exchanger
from optimiser.section.frame import Frame
from optimiser.section.makeup import MakeUp
from optimiser.section.reactor import Reactor

CARBON_DIOXIDE = 0.0440095


@dataclass
class Inventory:
    """The parts of the section that cost money.

    Attributes:
        circulator: electric power, W.
        product: contained product, kg/s.
        pressure: of the loop, Pa.
    """

    makeup: MakeUp
    compressed: Compressed
    reactor: Reactor
    train: Train
    circulator: Any
    product: Any
    pressure: Any


def build_costs(frame: Frame, inventory: Inventory) -> Any:
    """All items and their total, money a year."""
    capital = _capital(frame, inventory)
    items = _operating(frame, inventory) | _fixed(frame, capital)
    credits = _credits(frame, inventory)
    block = frame.block("costs")
    shown = {name: frame.define(block, name, "money", item) for name, item in (items | credits).items()}
    for name, variable in shown.items():
        frame.report(f"costs.{name}", "money_per_year", variable)
    total = frame.define(
        block, "total", "money", sum(shown[n] for n in items) - sum(shown[n] for n in credits), start=1e8
    )
    frame.report("costs.total", "money_per_year", total)
    unit = frame.define(block, "unit_cost", "ratio", total / (inventory.product * _year(frame)))
    frame.report("product.cost", "money_per_mass", unit)
    return total


def _year(frame: Frame) -> float:
    return float(frame.case.economics.hours_per_year.si)


def _electricity(inventory: Inventory) -> Any:
    return sum(inventory.compressed.powers) + inventory.circulator + inventory.train.power


def _operating(frame: Frame, inventory: Inventory) -> dict[str, Any]:
    """Feed, utilities, catalyst and carbon."""
    case, year = frame.case, _year(frame)
    prices, economics, catalyst = case.prices, case.economics, frame.chemistry.catalyst
    power = _electricity(inventory)
    water = sum(inventory.compressed.duties) + sum(inventory.train.water_duties)
    water = water + sum(inventory.reactor.duties.get("cooling_water", []))
    rise = case.utilities.cooling_water_return.si - case.utilities.cooling_water_supply.si
    price = prices.catalyst.si if prices.catalyst is not None else catalyst.price
    life = economics.catalyst_life.si if economics.catalyst_life is not None else catalyst.life
    volume = sum(bed.volume for bed in inventory.reactor.beds)
    year_of_life = 365.25 * 86400.0 / life
    items = {
        "feed": _feed(frame, inventory) * year,
        "electricity": power * prices.electricity.si * year,
        "cooling_water": cooling_water_flow(water, rise) * prices.cooling_water.si * year,
        "catalyst": volume * catalyst.bulk_density * price * year_of_life,
    }
    if prices.carbon is not None:
        carbon = frame.chemistry.mixture.carbon_flow(inventory.train.purge)
        emitted = carbon * CARBON_DIOXIDE + power * prices.electricity_carbon.si
        items["carbon"] = emitted * prices.carbon.si * year
    return items


def _feed(frame: Frame, inventory: Inventory) -> Any:
    """Money a second for the feed streams, each priced by mass, by amount or by heating value."""
    cost: Any = 0.0
    mixture = frame.mixture
    for name, stream in frame.case.feed.streams.items():
        flow = frame.reported[f"feed.streams.{name}.flow"].variables[0]
        composition = [stream.composition.get(s, 0.0) for s in mixture.names]
        cost = cost + flow * stream.price_per_mole(mixture.species, composition)
    return cost


def _credits(frame: Frame, inventory: Inventory) -> dict[str, Any]:
    """What the section sells beside its product."""
    prices, year, block = frame.case.prices, _year(frame), frame.block("purge_value")
    value = sum(n * s.lhv for n, s in zip(inventory.train.purge, frame.mixture.species, strict=True))
    heating = frame.define(block, "heating_value", "heat", value)
    frame.report("purge.heating_value", "power", heating)
    items = {"fuel_credit": heating * prices.fuel.si * year}
    for sink, item, price in (
        ("steam", "steam_credit", prices.steam),
        ("boiler_feed_water", "water_heat_credit", prices.boiler_feed_water_heat),
    ):
        if sink in inventory.reactor.duties:
            items[item] = sum(inventory.reactor.duties[sink]) * price.si * year
    return items


def _fixed(frame: Frame, capital: Any) -> dict[str, Any]:
    economics = frame.case.economics
    recovery = capital_recovery(economics.interest.si, economics.life.years)
    return {
        "capital_recovery": capital * recovery,
        "maintenance": capital * economics.maintenance.si,
        "fixed": economics.fixed_cost.si,
    }
