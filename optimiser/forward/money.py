"""What a pass costs: capital item by item from its sizes, operating costs and credits from its flows.

Money is in the currency of the case, annual money a year of its hours of operation.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from optimiser.chemistry.reactions import Chemistry
from optimiser.engineering.correlations import ATMOSPHERE
from optimiser.engineering.costs import CostBasis, Equipment, capital_recovery, gauge_bar
from optimiser.engineering.heat import cooling_water_flow
from optimiser.engineering.vessels import shell_mass, wall_thickness
from optimiser.forward.bed import BedSize
from optimiser.forward.exchange import Exchanged
from optimiser.forward.stream import Floats
from optimiser.forward.train import Refrigeration
from optimiser.inputs.case import Case

CARBON_DIOXIDE = 0.0440095
"""Molar mass, kg/mol."""
YEAR = 365.25 * 86400.0
"""s."""


@dataclass
class Bill:
    """Sizes and flows that cost money.

    Attributes:
        makeup: flow of each feed stream, mol/s.
        stage_powers: electric, W; `circulator` likewise.
        exchangers: all, intercoolers among them.
        beds: sizes.
        pressure: of the loop, Pa; `separator_pressure` of the separator.
        separator: diameter m and volume m3.
        refrigeration: None without a chiller.
        water: heat into cooling water, W; `steam` into steam, `boiler_water` into boiler feed water (None
            where no step has that sink).
        purge: mol/s.
        product: contained, kg/s.
    """

    makeup: dict[str, float]
    stage_powers: list[float]
    circulator: float
    exchangers: list[Exchanged]
    beds: list[BedSize]
    pressure: float
    separator_pressure: float
    separator: tuple[float, float]
    refrigeration: Refrigeration | None
    water: float
    steam: float | None
    boiler_water: float | None
    purge: Floats
    product: float

    @property
    def electricity(self) -> float:
        """All electric power, W."""
        cold = self.refrigeration.power if self.refrigeration is not None else 0.0
        return sum(self.stage_powers) + self.circulator + cold


class Accounts:
    """Prices and correlations of one case."""

    def __init__(self, case: Case, chemistry: Chemistry, equipment: Equipment) -> None:
        self.case, self.chemistry, self.equipment = case, chemistry, equipment
        economics = case.economics
        stated = economics.cost_index
        index = stated.si if stated is not None else equipment.cost_index(economics.cost_year)
        rate = economics.exchange_rate.si if economics.exchange_rate is not None else 1.0
        self.basis = CostBasis(index, rate, economics.fees_factor.si, economics.location_factor.si)

    def quantities(self, bill: Bill) -> dict[str, float]:
        """Every cost and capital by result path."""
        capital = self._capital(bill)
        capital["total"] = sum(capital.values())
        spent = self._operating(bill) | self._fixed(capital["total"])
        earned = self._credits(bill)
        total = sum(spent.values()) - sum(earned.values())
        costs = spent | earned | {"total": total}
        shown = {f"capital.{name}": value for name, value in capital.items()}
        shown |= {f"costs.{name}": value for name, value in costs.items()}
        made = bill.product * self.case.economics.hours_per_year.si
        return shown | {"product.cost": total / made if made > 0.0 else math.inf}

    def _operating(self, bill: Bill) -> dict[str, float]:
        case, year = self.case, self.case.economics.hours_per_year.si
        prices, power = case.prices, bill.electricity
        rise = case.utilities.cooling_water_return.si - case.utilities.cooling_water_supply.si
        items = {
            "feed": self._feed(bill) * year,
            "electricity": power * prices.electricity.si * year,
            "cooling_water": float(cooling_water_flow(bill.water, rise)) * prices.cooling_water.si * year,
            "catalyst": self._catalyst(bill),
        }
        if prices.carbon is not None:
            carbon = float(self.chemistry.mixture.carbon_flow(bill.purge.tolist())) * CARBON_DIOXIDE
            items["carbon"] = (carbon + power * prices.electricity_carbon.si) * prices.carbon.si * year
        return items

    def _catalyst(self, bill: Bill) -> float:
        """A year's share of the charge."""
        catalyst, case = self.chemistry.catalyst, self.case
        price = case.prices.catalyst.si if case.prices.catalyst is not None else catalyst.price
        stated = case.economics.catalyst_life
        life = stated.si if stated is not None else catalyst.life
        return sum(bed.volume for bed in bill.beds) * catalyst.bulk_density * price * YEAR / life

    def _feed(self, bill: Bill) -> float:
        """Money a second."""
        mixture, cost = self.chemistry.mixture, 0.0
        for name, stream in self.case.feed.streams.items():
            fractions = [float(stream.composition.get(s, 0.0)) for s in mixture.names]
            cost += bill.makeup[name] * stream.price_per_mole(mixture.species, fractions)
        return cost

    def _fixed(self, capital: float) -> dict[str, float]:
        economics = self.case.economics
        recovery = float(capital_recovery(economics.interest.si, economics.life.years))
        return {
            "capital_recovery": capital * recovery,
            "maintenance": capital * economics.maintenance.si,
            "fixed": economics.fixed_cost.si,
        }

    def heating_value(self, purge: Floats) -> float:
        """Lower heating value of the purge, W."""
        return float(sum(n * s.lhv for n, s in zip(purge, self.chemistry.mixture.species, strict=True)))

    def _credits(self, bill: Bill) -> dict[str, float]:
        prices, year = self.case.prices, self.case.economics.hours_per_year.si
        items = {"fuel_credit": self.heating_value(bill.purge) * prices.fuel.si * year}
        if bill.steam is not None:
            items["steam_credit"] = bill.steam * prices.steam.si * year
        if bill.boiler_water is not None:
            items["water_heat_credit"] = bill.boiler_water * prices.boiler_feed_water_heat.si * year
        return items

    def _capital(self, bill: Bill) -> dict[str, float]:
        """Each kind of capital by correlation, or by the price quoted for it."""
        slender = self.case.condensation.separator.length_over_diameter.si
        kinds: dict[str, tuple[Callable[[], float], float]] = {
            "compressors": (lambda: sum(map(self._machine, bill.stage_powers)), sum(bill.stage_powers)),
            "circulator": (lambda: self._machine(bill.circulator), bill.circulator),
            "exchangers": (
                lambda: sum(map(self._exchanger, bill.exchangers)),
                sum(e.area for e in bill.exchangers),
            ),
            "converter": (lambda: self._converter(bill), sum(bed.volume for bed in bill.beds)),
            "separator": (lambda: self._separator(bill, slender), bill.separator[1]),
        }
        cold = bill.refrigeration
        if cold is not None:
            kinds["refrigeration"] = (lambda: self._refrigeration(cold), cold.power)
        return {name: self._priced(name, *kind) for name, kind in kinds.items()}

    def _priced(self, name: str, correlated: Callable[[], float], size: float) -> float:
        quote = self.case.economics.quoted.get(name)  # type: ignore[call-overload]
        if quote is None:
            return correlated()
        index = self.equipment.cost_index(quote.year)
        return float(self.basis.quote(quote.cost.si, size, quote.size.si, quote.exponent.si, index))

    def _item(self, use: str, size: float, pressure: float | None = None, material: float = 1.0) -> float:
        """One item; `pressure` is that of operation, Pa."""
        correlation, gauge = self.equipment.for_use(use), None
        if pressure is not None and correlation.pressure is not None:
            gauge = gauge_bar(self.case.vessels.design_pressure_factor.si * pressure)
        return float(self.basis.item(correlation, size, gauge, material))

    def _machine(self, power: float) -> float:
        """A compressor by its shaft power with its drive by its electric power, W."""
        shaft = power * self.case.compression.driver_efficiency.si
        return self._item("compressor", shaft) + self._item("drive", power)

    def _exchanger(self, exchanger: Exchanged) -> float:
        return self._item(exchanger.use, exchanger.area, exchanger.pressure)

    def _refrigeration(self, cold: Refrigeration) -> float:
        return self._machine(cold.power) + self._item("water_cooled", cold.condenser_area)

    def _converter(self, bill: Bill) -> float:
        factor = self.case.vessels.length_factor.si
        return sum(self._shell(bed.diameter, factor * bed.length, bill.pressure) for bed in bill.beds)

    def _separator(self, bill: Bill, slender: float) -> float:
        diameter = bill.separator[0]
        return self._shell(diameter, slender * diameter, bill.separator_pressure)

    def _shell(self, diameter: float, length: float, pressure: float) -> float:
        """A pressure vessel by the mass of its shell."""
        case = self.case.vessels
        design = case.design_pressure_factor.si * pressure - ATMOSPHERE
        strength = case.allowable_stress.si, case.joint_efficiency.si, case.corrosion_allowance.si
        wall = wall_thickness(design, diameter / 2.0, *strength)
        mass = float(shell_mass(diameter, length, wall, case.steel_density.si))
        return self._item("vessel", mass, None, case.material_factor.si)
