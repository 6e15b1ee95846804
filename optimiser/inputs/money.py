"""Prices and economics of a case."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field, StrictInt

from optimiser.inputs.fields import (
    Amount,
    AssetSize,
    CarbonIntensity,
    EnergyPrice,
    Factor,
    Hours,
    MassPrice,
    MoneyPerYear,
    Rate,
    Ratio,
    Section,
    Share,
    VolumePrice,
    Years,
    said,
)

# Kinds of equipment that a quote may stand for, and the dimension of the size that goes with its price.
ASSET_SIZES = {
    "compressors": "power",
    "circulator": "power",
    "exchangers": "area",
    "converter": "volume",
    "separator": "volume",
    "refrigeration": "power",
}
Asset = Literal["compressors", "circulator", "exchangers", "converter", "separator", "refrigeration"]
Year = Annotated[StrictInt, Field(ge=1900, le=2200)]
# Its plant cost index is among the shipped ones; other years are looked up.
COST_YEAR = 2023


class Prices(Section):
    """What is bought and sold beside the feed."""

    electricity: EnergyPrice = said(meaning="of all drives")
    cooling_water: VolumePrice = said(meaning="of what circulates")
    fuel: EnergyPrice = said(
        "0 {money}/kWh",
        meaning="credit for the purge by lower heating value",
        reason="a purge without a stated use earns nothing",
    )
    steam: EnergyPrice = said(
        "0 {money}/kWh",
        meaning="credit for heat given to steam",
        reason="heat without a stated buyer earns nothing",
    )
    boiler_feed_water_heat: EnergyPrice = said(
        "0 {money}/kWh",
        meaning="credit for heat given to boiler feed water",
        reason="heat without a stated buyer earns nothing",
    )
    catalyst: MassPrice | None = said(None, meaning="in place of the model's")
    product: MassPrice | None = said(None, meaning="of contained product; needed for annual profit")
    carbon: MassPrice | None = said(None, meaning="of CO2 from the purge, burnt, and from electricity")
    electricity_carbon: CarbonIntensity = said(
        "0 kg/kWh", meaning="CO2 from making electricity", reason="counts only beside a price of carbon"
    )


class Quote(Section):
    """A quoted price in place of a correlation."""

    cost: Amount = said(meaning="installed, in the money of its year")
    size: AssetSize = said(meaning="power, area or volume that it was quoted for")
    exponent: Ratio = said("0.65", meaning="of cost with size", reason="the six-tenths rule, a little safe")
    year: Year = said(meaning="of the quote")


class Economics(Section):
    """How capital becomes annual cost."""

    currency: Literal["EUR", "USD", "GBP", "JPY", "CNY", "INR"] = said(meaning="of all money in the case")
    exchange_rate: Rate | None = said(
        None, meaning="money of the case for one USD, in which equipment is costed; not for a case in USD"
    )
    interest: Share = said("8 %", meaning="a year", reason="common practice for such plants")
    life: Years = said("20 year", meaning="over which capital is paid back", reason="common practice")
    hours_per_year: Hours = said("8000 h", meaning="of operation", reason="a year less a month of stops")
    cost_year: Year = said(
        COST_YEAR, meaning="whose money the case is in", reason="last year with a known index"
    )
    cost_index: Ratio | None = said(None, meaning="plant cost index of that year, where it is not shipped")
    maintenance: Share = said("3 %", meaning="of capital, a year", reason="2 to 5 % in practice")
    fixed_cost: MoneyPerYear = said(
        "0 {money}/year", meaning="staff, insurance and the like", reason="what never moves moves no setpoint"
    )
    fees_factor: Factor = said(
        "1.18", meaning="contingency and fees on capital", reason="Turton et al.: 15 % and 3 %"
    )
    location_factor: Ratio = said(
        "1", meaning="cost at the site over the United States Gulf coast", reason="no site stated"
    )
    catalyst_life: Years | None = said(None, meaning="in place of the model's")
    quoted: dict[Asset, Quote] = said({}, meaning="quoted prices by kind of equipment")
