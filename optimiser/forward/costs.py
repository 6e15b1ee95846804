"""Annual cost and capital in plain numbers, for the audit."""

from __future__ import annotations

from typing import TYPE_CHECKING

from optimiser.engineering.correlations import ATMOSPHERE
from optimiser.engineering.costs import CostBasis, capital_recovery, gauge_bar
from optimiser.engineering.heat import cooling_water_flow
from optimiser.engineering.vessels import shell_mass, wall_thickness
from optimiser.inputs.case import BedStep

if TYPE_CHECKING:
    from optimiser.forward.walk import Section, Walk

YEAR = 365.25 * 86400.0
CARBON_DIOXIDE = 0.0440095


def add_costs(section: Section, walk: Walk) -> None:
    """Every cost of a walk as quantities: `costs.*` money a year, `capital.*` money, `product.cost` money/kg."""
    capital = _capital(section, walk)
    quantities = walk.quantities
    quantities |= {f"capital.{name}": value for name, value in capital.items()}
    quantities["capital.total"] = total = sum(capital.values())
    economics = section.case.economics
    costs = _operating(section, walk)
    costs["capital_recovery"] = total * float(
        capital_recovery(economics.interest.si, economics.life.si / YEAR)
    )
    costs["maintenance"] = total * economics.maintenance.si
    costs["fixed"] = economics.fixed_cost.si
    earned = _credits(section, walk)
    quantities |= {f"costs.{name}": value for name, value in (costs | earned).items()}
    quantities["costs.total"] = sum(costs.values()) - sum(earned.values())
    made = quantities["product.rate"] * economics.hours_per_year.si
    if made > 0:
        quantities["product.cost"] = quantities["costs.total"] / made


def _operating(section: Section, walk: Walk) -> dict[str, float]:
    case, mixture, catalyst = section.case, section.mixture, section.chemistry.catalyst
    prices, year = case.prices, case.economics.hours_per_year.si
    feed = 0.0
    for name, stream in case.feed.streams.items():
        fractions = [stream.composition.get(s, 0.0) for s in mixture.names]
        feed += walk.quantities[f"feed.streams.{name}.flow"] * stream.price_per_mole(
            mixture.species, fractions
        )
    power = sum(walk.powers.values())
    rise = case.utilities.cooling_water_return.si - case.utilities.cooling_water_supply.si
    price = prices.catalyst.si if prices.catalyst is not None else catalyst.price
    life = case.economics.catalyst_life.si if case.economics.catalyst_life is not None else catalyst.life
    kilograms = walk.quantities["reactor.catalyst_volume"] * catalyst.bulk_density
    costs = {
        "feed": feed * year,
        "electricity": power * prices.electricity.si * year,
        "cooling_water": float(cooling_water_flow(walk.water, rise)) * prices.cooling_water.si * year,
        "catalyst": kilograms * price * YEAR / life,
    }
    if prices.carbon is not None:
        carbon = float(mixture.carbon_flow(walk.streams["purge"].vapour.tolist()))
        emitted = carbon * CARBON_DIOXIDE + power * prices.electricity_carbon.si
        costs["carbon"] = emitted * prices.carbon.si * year
    return costs


def _credits(section: Section, walk: Walk) -> dict[str, float]:
    prices, year = section.case.prices, section.case.economics.hours_per_year.si
    earned = {"fuel_credit": walk.quantities["purge.heating_value"] * prices.fuel.si * year}
    if "steam" in walk.sunk:
        earned["steam_credit"] = walk.sunk["steam"] * prices.steam.si * year
    if "boiler_feed_water" in walk.sunk:
        earned["water_heat_credit"] = (
            walk.sunk["boiler_feed_water"] * prices.boiler_feed_water_heat.si * year
        )
    return earned


def _capital(section: Section, walk: Walk) -> dict[str, float]:
    """Capital of each kind; a quoted cost takes the place of its correlations."""
    economics, equipment = section.case.economics, section.equipment
    shop = _Shop(section)
    capital: dict[str, float] = {}
    for name, (cost, size) in _assets(section, walk, shop).items():
        quote = next((q for asset, q in economics.quoted.items() if asset == name), None)
        if quote is not None:
            index = equipment.cost_index(quote.year)
            cost = float(shop.basis.quote(quote.cost.si, size, quote.size.si, quote.exponent.si, index))
        capital[name] = cost
    return capital


def _assets(section: Section, walk: Walk, shop: _Shop) -> dict[str, tuple[float, float]]:
    """Cost and size of each kind of capital."""
    q, vessels = walk.quantities, section.case.vessels
    stages = [p for name, p in walk.powers.items() if name.startswith("compression.")]
    beds = [s.name for s in section.case.reactor if isinstance(s, BedStep)]
    converter = 0.0
    for b in beds:
        path = f"reactor.{b}"
        length = q[f"{path}.length"] * vessels.length_factor.si
        converter += shop.vessel(q[f"{path}.diameter"], length, q["loop.pressure"])
    areas = sum(e.area for e in walk.exchangers.values())
    diameter = q.get("condensation.separator.diameter", 0.0)
    slender = section.case.condensation.separator.length_over_diameter.si
    separator = shop.vessel(diameter, slender * diameter, q["condensation.separator.pressure"])
    assets = {
        "compressors": (sum(shop.machine(p) for p in stages), sum(stages)),
        "circulator": (shop.machine(walk.powers["circulator"]), walk.powers["circulator"]),
        "exchangers": (
            sum(shop.exchanger(e.use, e.area, e.pressure) for e in walk.exchangers.values()),
            areas,
        ),
        "converter": (converter, q["reactor.catalyst_volume"]),
        "separator": (separator, q.get("condensation.separator.volume", 0.0)),
    }
    if "refrigeration" in walk.powers:
        power = walk.powers["refrigeration"]
        cost = shop.machine(power) + shop.exchanger("water_cooled", walk.condenser_area, None)
        assets["refrigeration"] = (cost, power)
    return assets


class _Shop:
    """Buys equipment by the published correlations, in the money of the case."""

    def __init__(self, section: Section) -> None:
        self.case, self.equipment = section.case, section.equipment
        economics = self.case.economics
        stated = economics.cost_index
        index = stated.si if stated is not None else self.equipment.cost_index(economics.cost_year)
        rate = economics.exchange_rate.si if economics.exchange_rate is not None else 1.0
        self.basis = CostBasis(index, rate, economics.fees_factor.si, economics.location_factor.si)

    def machine(self, power: float) -> float:
        """Compressor by shaft power and its drive by electric power (W)."""
        shaft = power * self.case.compression.driver_efficiency.si
        return self._item("compressor", shaft) + self._item("drive", power)

    def exchanger(self, use: str, area: float, pressure: float | None) -> float:
        """Exchanger by area (m2) and the pressure of its gas (Pa)."""
        return self._item(use, area, pressure)

    def vessel(self, diameter: float, length: float, pressure: float) -> float:
        """Vessel by the mass of its shell; m and Pa."""
        v = self.case.vessels
        design = v.design_pressure_factor.si * pressure - ATMOSPHERE
        strength = (v.allowable_stress.si, v.joint_efficiency.si, v.corrosion_allowance.si)
        wall = wall_thickness(design, diameter / 2.0, *strength)
        mass = float(shell_mass(diameter, length, wall, v.steel_density.si))
        return self._item("vessel", mass, None, v.material_factor.si)

    def _item(self, use: str, size: float, pressure: float | None = None, material: float = 1.0) -> float:
        correlation = self.equipment.for_use(use)
        gauge = None
        if pressure is not None and correlation.pressure is not None:
            gauge = float(gauge_bar(self.case.vessels.design_pressure_factor.si * pressure))
        return float(self.basis.item(correlation, max(size, 1e-9), gauge, material))
