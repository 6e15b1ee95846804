"""Annual cost and capital of the section, item by item.

Every item is a variable, so that each may carry a limit and shows in the result. Money is in the currency of the case;
annual money is per year of `hours_per_year`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from optimiser.engineering.correlations import ATMOSPHERE
from optimiser.engineering.costs import CostBasis, capital_recovery, gauge_bar
from optimiser.engineering.heat import cooling_water_flow
from optimiser.engineering.vessels import separator_volume, shell_mass, wall_thickness
from optimiser.section.compression import Compressed
from optimiser.section.condensation import Train
from optimiser.section.frame import Bought, Frame
from optimiser.section.makeup import MakeUp
from optimiser.section.reactor import Reactor

CARBON_DIOXIDE = 0.0440095
"""Molar mass, kg/mol."""
YEAR = 365.25 * 86400.0
"""One calendar year, s."""


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
    earned = _credits(frame, inventory)
    block = frame.block("costs")
    shown = {name: frame.define(block, name, "money", item) for name, item in (items | earned).items()}
    for name, variable in shown.items():
        frame.report(f"costs.{name}", "money_per_year", variable)
    total = frame.define(
        block, "total", "money", sum(shown[n] for n in items) - sum(shown[n] for n in earned), start=1e8
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
    year_of_life = YEAR / life
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
    recovery = capital_recovery(economics.interest.si, economics.life.si / YEAR)
    return {
        "capital_recovery": capital * recovery,
        "maintenance": capital * economics.maintenance.si,
        "fixed": economics.fixed_cost.si,
    }


def cost_basis(frame: Frame) -> CostBasis:
    """How the case states its capital: year, currency, fees and place."""
    economics = frame.case.economics
    stated = economics.cost_index
    index = stated.si if stated is not None else frame.equipment.cost_index(economics.cost_year)
    rate = economics.exchange_rate.si if economics.exchange_rate is not None else 1.0
    return CostBasis(index, rate, economics.fees_factor.si, economics.location_factor.si)


@dataclass
class _Asset:
    """One kind of capital: what its parts cost and the size by which a quoted price is moved."""

    parts: list[Any]
    size: Any


def _capital(frame: Frame, inventory: Inventory) -> Any:
    """Capital by kind and in total, money."""
    block, basis = frame.block("capital"), cost_basis(frame)
    total: Any = 0.0
    for name, asset in _assets(frame, inventory, basis).items():
        quote = next((q for kind, q in frame.case.economics.quoted.items() if kind == name), None)
        cost = sum(asset.parts)
        if quote is not None:
            index = frame.equipment.cost_index(quote.year)
            cost = basis.quote(quote.cost.si, asset.size, quote.size.si, quote.exponent.si, index)
        variable = frame.define(block, name, "money", cost, low=0.0)
        frame.report(f"capital.{name}", "money", variable)
        total = total + variable
    everything = frame.define(block, "total", "money", total, low=0.0, start=1e8)
    frame.report("capital.total", "money", everything)
    return everything


def _assets(frame: Frame, inventory: Inventory, basis: CostBasis) -> dict[str, _Asset]:
    compressed, train = inventory.compressed, inventory.train
    driver = frame.case.compression.driver_efficiency.si
    machine = _Buyer(frame, basis)
    assets = {
        "compressors": _Asset(
            [
                machine.compressor(name, power, driver)
                for name, power in zip(compressed.names, compressed.powers, strict=True)
            ],
            sum(compressed.powers),
        ),
        "circulator": _Asset(
            [machine.compressor("circulator", inventory.circulator, driver)], inventory.circulator
        ),
        "exchangers": _exchangers(machine, inventory),
        "converter": _Asset(
            [
                machine.vessel(bed.name, bed.diameter, bed.length, inventory.pressure)
                for bed in inventory.reactor.beds
            ],
            frame.reported["reactor.catalyst_volume"].variables[0],
        ),
        "separator": _separator(machine, train),
    }
    if frame.case.condensation.chiller is not None:
        cost = machine.compressor("refrigeration", train.power, driver)
        condenser = machine.exchanger("refrigeration condenser", "water_cooled", train.condenser_area, None)
        assets["refrigeration"] = _Asset([cost, condenser], train.power)
    return assets


def _exchangers(machine: _Buyer, inventory: Inventory) -> _Asset:
    """Every exchanger of the section; which correlation serves it follows from its cold side."""
    bought: list[Any] = []
    areas: list[Any] = []
    for exchanger in [*inventory.reactor.exchangers, *inventory.train.exchangers]:
        bought.append(machine.exchanger(exchanger.path, exchanger.use, exchanger.area, exchanger.pressure))
        areas.append(exchanger.area)
    compressed = inventory.compressed
    for name, area, pressure in zip(compressed.names, compressed.areas, compressed.pressures, strict=True):
        bought.append(machine.exchanger(f"{name} intercooler", "water_cooled", area, pressure))
        areas.append(area)
    return _Asset(bought, sum(areas))


def _separator(machine: _Buyer, train: Train) -> _Asset:
    diameter = machine.frame.reported["condensation.separator.diameter"].variables[0]
    slender = machine.frame.case.condensation.separator.length_over_diameter.si
    volume = separator_volume(diameter, slender)
    size = machine.frame.define(machine.frame.block("separator_size"), "volume", "volume", volume)
    machine.frame.report("condensation.separator.volume", "volume", size)
    return _Asset(
        [machine.vessel("separator", diameter, slender * diameter, train.separator.pressure, 1.0)], size
    )


@dataclass
class _Buyer:
    """Buys equipment by its correlation, one Block for each item so that equal items share their derivatives."""

    frame: Frame
    basis: CostBasis

    def _buy(self, name: str, use: str, size: Any, pressure: Any = None, material: float = 1.0) -> Any:
        block = self.frame.block(f"capital_of_{name}")
        correlation = self.frame.equipment.for_use(use)
        gauge = None
        if pressure is not None and correlation.pressure is not None:
            gauge = gauge_bar(self.frame.case.vessels.design_pressure_factor.si * pressure)
        cost = self.basis.item(correlation, size, gauge, material)
        self.frame.bought.append(Bought(name, correlation, size, pressure))
        return self.frame.define(block, "cost", "money", cost, low=0.0)

    def compressor(self, name: str, power: Any, driver_efficiency: float) -> Any:
        """Machine by its shaft power and drive by its electric power."""
        return self._buy(name, "compressor", power * driver_efficiency) + self._buy(
            f"{name} drive", "drive", power
        )

    def exchanger(self, path: str, use: str, area: Any, pressure: Any) -> Any:
        """Exchanger by area and by the pressure of the loop gas in it."""
        return self._buy(path, use, area, pressure)

    def vessel(self, name: str, diameter: Any, length: Any, pressure: Any, slack: float | None = None) -> Any:
        """Pressure vessel by the mass of its shell; `slack` is its length over what it holds."""
        case = self.frame.case.vessels
        block = self.frame.block(f"shell_of_{name}")
        design = case.design_pressure_factor.si * pressure - ATMOSPHERE
        wall = wall_thickness(
            design,
            diameter / 2.0,
            case.allowable_stress.si,
            case.joint_efficiency.si,
            case.corrosion_allowance.si,
        )
        stretched = (case.length_factor.si if slack is None else slack) * length
        mass = shell_mass(diameter, stretched, wall, case.steel_density.si)
        shell = self.frame.define(block, "mass", "mass", mass, low=1.0)
        return self._buy(name, "vessel", shell, None, case.material_factor.si)
