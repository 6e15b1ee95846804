"""Kinds of quantity: the SI unit that the code counts in, the unit that the trade shows, the values allowed.

`money` in a unit stands for the currency of the case. Annual money counts in money a year, not a second.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

from optimiser.quantities.units import Powers, Unit, parse_unit


@dataclass(frozen=True)
class Dimension:
    """One kind of quantity.

    Attributes:
        si: unit inside the code.
        shown: unit in which the trade writes it; also the unit of examples in messages.
        words: what it is, as part of a sentence.
        example: a value as a user would write it, without its unit.
        low, high: SI values that a quantity of this kind cannot pass; nor be `low` if `low_open`.
        bare: whether a number without unit is meant.
        refused: units that fit by number but say something else.
    """

    name: str
    si: str
    shown: str
    words: str
    example: str
    low: float | None = None
    high: float | None = None
    low_open: bool = False
    bare: bool = False
    refused: tuple[str, ...] = ()

    def shown_in(self, currency: str) -> str:
        """The shown unit with the currency's name."""
        return self.shown.replace("money", currency)

    def sample(self, currency: str) -> str:
        """An example as a user would write it."""
        return f"{self.example} {self.shown_in(currency)}".removesuffix(" -")

    def unit(self, currency: str) -> Unit:
        """The SI unit."""
        return _si_unit(self.si, currency)


@lru_cache(maxsize=512)
def _si_unit(text: str, currency: str) -> Unit:
    return parse_unit(text.replace("money", currency))


def powers_of(dimension: Dimension, currency: str) -> Powers:
    """Powers of base units of a dimension."""
    return dimension.unit(currency).powers


# A difference in degrees Celsius cannot be told from a temperature.
_DEGREES = ("degC", "degF", "°C", "°F")
_ALL = (
    Dimension("temperature", "K", "degC", "a temperature", "400", low=0.0, low_open=True),
    Dimension("temperature_difference", "K", "K", "a temperature difference in K", "15", refused=_DEGREES),
    Dimension("pressure", "Pa", "bar", "an absolute pressure", "150", low=0.0, low_open=True),
    Dimension("pressure_difference", "Pa", "bar", "a pressure difference", "2", low=0.0),
    Dimension("stress", "Pa", "MPa", "a stress", "120", low=0.0, low_open=True),
    Dimension("molar_flow", "mol/s", "kmol/h", "a molar flow", "7000", low=0.0),
    Dimension("mass_flow", "kg/s", "t/d", "a mass flow", "1000", low=0.0),
    Dimension("volume", "m3", "m3", "a volume", "20", low=0.0),
    Dimension("area", "m2", "m2", "an area", "500", low=0.0),
    Dimension("length", "m", "m", "a length", "2.2", low=0.0),
    Dimension("power", "W", "kW", "a power or heat duty", "5000"),
    Dimension("velocity", "m/s", "m/s", "a velocity", "0.05", low=0.0, low_open=True),
    Dimension("density", "kg/m3", "kg/m3", "a density", "7850", low=0.0, low_open=True),
    Dimension("viscosity", "Pa*s", "cP", "a viscosity", "0.03", low=0.0, low_open=True),
    Dimension(
        "coefficient", "W/m2/K", "W/m2/K", "a heat transfer coefficient", "300", low=0.0, low_open=True
    ),
    Dimension("molar_mass", "kg/mol", "g/mol", "a molar mass", "17.03", low=0.0, low_open=True),
    Dimension("molar_energy", "J/mol", "kJ/mol", "an energy for each mole", "46"),
    Dimension("molar_entropy", "J/mol/K", "J/mol/K", "an entropy for each mole", "100"),
    Dimension("fraction", "-", "%", "a fraction", "5", low=0.0, high=1.0, bare=True, refused=("wt%",)),
    Dimension(
        "mass_fraction", "-", "%", "a mass fraction", "5", low=0.0, high=1.0, bare=True, refused=("mol%",)
    ),
    Dimension("ratio", "-", "-", "a ratio, which has no unit", "4", low=0.0, bare=True),
    Dimension("years", "s", "year", "a time", "10", low=0.0, low_open=True),
    Dimension("hours", "s", "h", "hours of a year", "8000", low=0.0, low_open=True),
    Dimension("money", "money", "money", "an amount of money", "1000000"),
    Dimension("money_per_year", "money/year", "money/year", "money a year", "1000000"),
    Dimension("energy_price", "money/J", "money/kWh", "a price of energy", "0.07", low=0.0),
    Dimension("mass_price", "money/kg", "money/t", "a price by mass", "200", low=0.0),
    Dimension("molar_price", "money/mol", "money/kmol", "a price by amount", "2", low=0.0),
    Dimension("volume_price", "money/m3", "money/m3", "a price by volume", "0.05", low=0.0),
    Dimension("money_per_mass", "money/kg", "money/t", "money for each mass", "400"),
    Dimension("mass_per_money", "kg/money", "kg/money", "mass for each money", "2"),
    Dimension("mass_intensity", "kg/J", "kg/kWh", "a mass for each energy", "0.2", low=0.0),
    Dimension(
        "exchange_rate",
        "money/USD",
        "money/USD",
        "money of the case for one USD",
        "0.92",
        low=0.0,
        low_open=True,
    ),
)
DIMENSIONS: dict[str, Dimension] = {dimension.name: dimension for dimension in _ALL}
