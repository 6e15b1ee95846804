"""A case: everything that a designer states about one synthesis section, as frozen objects."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Annotated, Any, Literal

from pydantic import Discriminator, Field, Tag

from optimiser.inputs.fields import (
    Allowance,
    AssetSize,
    CarbonIntensity,
    Coefficient,
    Density,
    Difference,
    DifferenceSetting,
    Efficiency,
    EnergyPrice,
    ExchangeRate,
    FactorSetting,
    FeedPrice,
    FlowSetting,
    Fraction,
    Hours,
    Length,
    LengthSetting,
    MassFlowSetting,
    MassPrice,
    Money,
    MoneyPerYear,
    Pressure,
    PressureDrop,
    PressureSetting,
    Ratio,
    RatioSetting,
    Section,
    Share,
    ShareSetting,
    Stress,
    Temperature,
    TemperatureSetting,
    Velocity,
    VolumePrice,
    VolumeSetting,
    Years,
    said,
)
from optimiser.quantities import Setting

Name = Annotated[str, Field(pattern=r"^[A-Za-z][A-Za-z0-9_-]{0,39}$")]


class FeedStream(Section):
    """One stream of fresh feed."""

    composition: dict[str, Fraction] = said(meaning="mole fractions; they must add up to 1")
    temperature: Temperature = said(meaning="at battery limit")
    pressure: Pressure = said(meaning="at battery limit; streams mix at the lowest of their pressures")
    price: FeedPrice = said(meaning="by mass, by amount or by lower heating value")
    flow: FlowSetting | None = said(None, meaning="molar flow, where no product rate is wanted")
    share: ShareSetting | None = said(None, meaning="part of all feed, molar; all streams but one state it")

    def price_per_mole(self, species: Sequence[Any], fractions: Sequence[float]) -> float:
        """Price for each mole of the stream, money/mol; `fractions` are of `species`."""
        if self.price.dimension == "molar_price":
            return self.price.si
        if self.price.dimension == "energy_price":
            return self.price.si * sum(y * s.lhv for y, s in zip(fractions, species, strict=True))
        return self.price.si * sum(y * s.molar_mass for y, s in zip(fractions, species, strict=True))


class Feed(Section):
    """Fresh feed and how much is wanted of the product."""

    product_rate: MassFlowSetting | None = said(None, meaning="contained product wanted; the feed follows")
    streams: dict[Name, FeedStream] = said(meaning="one or several streams by name")


class Stage(Section):
    """One stage of make-up compression."""

    stage: Name = said(meaning="its name")
    discharge_pressure: PressureSetting | None = said(
        None, meaning="discharge pressure; the last stage has none, it delivers loop pressure"
    )

    @property
    def name(self) -> str:
        """Name in paths."""
        return self.stage


class Compression(Section):
    """Make-up compression in intercooled stages."""

    isentropic_efficiency: Efficiency = said("0.78", meaning="of every stage", reason="middle of 0.70 to 0.85")
    driver_efficiency: Efficiency = said("0.95", meaning="of every electric drive", reason="common practice")
    intercooler_temperature: Temperature = said(
        "40 degC", meaning="after every stage, the last one too", reason="cooling water with some approach"
    )
    intercooler_pressure_drop: PressureDrop = said("0.5 bar", meaning="of each intercooler", reason="common practice")
    coefficient: Coefficient = said(
        "250 W/m2/K", meaning="intercoolers, at 150 bar", reason="gas to water under pressure, 150 to 500"
    )
    stages: tuple[Stage, ...] = said(meaning="in order; at least one")


class Loop(Section):
    """The synthesis loop."""

    pressure: PressureSetting = said(meaning="where make-up and circulator deliver")
    feed_pressure_drop: PressureDrop = said(
        "2 bar", meaning="from there to the first bed", reason="exchangers and pipes, common practice"
    )
    purge_fraction: ShareSetting | None = said(None, meaning="part of the separator's vapour that is purged")
    recycle_ratio: RatioSetting | None = said(None, meaning="recycle to make-up, molar; follows from the purge")
    circulator_efficiency: Efficiency = said("0.75", meaning="isentropic", reason="common practice")


class BedStep(Section):
    """An adiabatic bed."""

    bed: Name = said(meaning="its name")
    rate: Literal["kinetic", "approach", "damkohler"] = said(
        "kinetic", meaning="rate law, stated approach to equilibrium, or approach fitted to the rate law",
        reason="only a rate law knows that a cold catalyst sleeps",
    )  # fmt: skip
    inlet_temperature: TemperatureSetting = said(meaning="of the gas that enters")
    volume: VolumeSetting = said(meaning="of catalyst as packed")
    diameter: LengthSetting | None = said(None, meaning="inside; or state length_over_diameter")
    length_over_diameter: RatioSetting | None = said(None, meaning="slenderness; or state diameter")
    activity: Efficiency = said(
        "0.7", meaning="of the catalyst, 1 when fresh", reason="sizes are for the end of a run, not for its start"
    )
    elements: Annotated[int, Field(ge=2, le=60)] = said(
        6, meaning="collocation elements", reason="outlets within 0.01 K, points within 0.1 K of integration"
    )
    approach_fraction: FactorSetting | None = said(None, meaning="extent over extent at equilibrium (rate: approach)")
    approach_temperature: DifferenceSetting | None = said(
        None, meaning="kelvin short of equilibrium (rate: approach)"
    )

    @property
    def name(self) -> str:
        """Name in paths."""
        return self.bed


class CoolStep(Section):
    """A cooler between or after beds; what it heats is its sink."""

    cool: Name = said(meaning="its name")
    sink: Literal["feed", "steam", "boiler_feed_water", "cooling_water"] = said(meaning="what takes the heat")
    outlet_temperature: TemperatureSetting | None = said(
        None, meaning="of the gas; left out where a bed follows or where it closes the heating of the feed"
    )
    minimum_approach: Difference = said("15 K", meaning="at either end", reason="gas to gas, 15 to 30 K")
    coefficient: Coefficient = said(
        "350 W/m2/K", meaning="at 150 bar; grows with pressure to the 0.4", reason="gas to gas 150 to 500 at pressure"
    )
    pressure_drop: PressureDrop = said("0.3 bar", meaning="of the gas that is cooled", reason="common practice")
    steam_pressure: Pressure = said("40 bar", meaning="of steam raised (sink: steam)", reason="common header")
    water_inlet: Temperature = said(
        "105 degC", meaning="of boiler feed water (its sink)", reason="from the deaerator"
    )
    water_outlet: Temperature = said(
        "180 degC", meaning="of boiler feed water (its sink)", reason="short of boiling at 12 bar"
    )

    @property
    def name(self) -> str:
        """Name in paths."""
        return self.cool


class WaterCooler(Section):
    """Condensing cooler on cooling water."""

    outlet_temperature: TemperatureSetting = said(meaning="of the gas")
    minimum_approach: Difference = said("5 K", meaning="at either end", reason="water at both ends is cheap")
    coefficient: Coefficient = said("400 W/m2/K", meaning="at 150 bar", reason="condenser with inert gas, 200 to 600")


class ColdExchanger(Section):
    """Separator's vapour against the gas to the chiller."""

    recycle_temperature: TemperatureSetting = said(meaning="of the vapour that leaves warmed")
    minimum_approach: Difference = said("5 K", meaning="at either end", reason="cold is dear")
    coefficient: Coefficient = said("300 W/m2/K", meaning="at 150 bar", reason="gas to gas, partly condensing")


class Chiller(Section):
    """Refrigerated condenser; the separator stands at its outlet."""

    outlet_temperature: TemperatureSetting = said(meaning="of the gas, and of the separator")
    evaporator_approach: Difference = said("5 K", meaning="outlet over evaporating refrigerant", reason="common practice")
    condenser_approach: Difference = said(
        "8 K", meaning="condensing refrigerant over cooling water return", reason="common practice"
    )
    coefficient: Coefficient = said("400 W/m2/K", meaning="at 150 bar", reason="condenser with inert gas, 200 to 600")
    condenser_coefficient: Coefficient = said(
        "800 W/m2/K", meaning="refrigerant's condenser", reason="clean ammonia, 600 to 1200"
    )
    second_law_efficiency: Efficiency = said("0.5", meaning="against Carnot", reason="industrial machines 0.45 to 0.60")


class Separator(Section):
    """Vessel in which liquid and gas part."""

    vapour_velocity_constant: Velocity = said(
        "0.05 m/s", meaning="K of Souders and Brown", reason="low end, for high pressure"
    )
    length_over_diameter: Ratio = said("3", meaning="slenderness", reason="common practice")


class Condensation(Section):
    """From reactor to separator; at least one cooler."""

    pressure_drop: PressureDrop = said("3 bar", meaning="of the train, taken in its first cooler", reason="common practice")
    water_cooler: WaterCooler | None = said(None, meaning="left out where there is none")
    cold_exchanger: ColdExchanger | None = said(None, meaning="left out where there is none")
    chiller: Chiller | None = said(None, meaning="left out where there is none")
    separator: Separator = said({}, meaning="at the end of the train")


class Utilities(Section):
    """Cooling water."""

    cooling_water_supply: Temperature = said("25 degC", meaning="to the plant", reason="tower in a mild climate")
    cooling_water_return: Temperature = said("35 degC", meaning="from the plant", reason="10 K of rise")


class Vessels(Section):
    """Walls of the converter and separator shells; the shell is kept at feed temperature."""

    allowable_stress: Stress = said("120 MPa", meaning="at shell temperature", reason="low-alloy steel, to be confirmed")
    joint_efficiency: Efficiency = said("1", meaning="of welds", reason="fully examined")
    corrosion_allowance: Allowance = said("3 mm", meaning="on every wall", reason="common practice")
    design_pressure_factor: Ratio = said("1.1", meaning="design over operating pressure", reason="common practice")
    length_factor: Ratio = said(
        "1.25", meaning="shell length over bed length", reason="room for distribution and exchangers, invented"
    )
    material_factor: Ratio = said(
        "1.5", meaning="cost over carbon steel", reason="chromium-molybdenum for hydrogen service, from memory"
    )
    steel_density: Density = said("7850 kg/m3", meaning="of the wall", reason="steel")


class Prices(Section):
    """What is bought and sold beside feed."""

    electricity: EnergyPrice = said(meaning="for all drives")
    cooling_water: VolumePrice = said(meaning="circulated")
    fuel: EnergyPrice = said(meaning="credit for the purge by lower heating value; 0 for none")
    steam: EnergyPrice = said("0 {money}/GJ", meaning="credit for heat in steam raised", reason="nothing is sold unless stated")
    boiler_feed_water_heat: EnergyPrice = said(
        "0 {money}/GJ", meaning="credit for heat in boiler feed water", reason="nothing is sold unless stated"
    )
    catalyst: MassPrice | None = said(None, meaning="instead of the model's")
    product: MassPrice | None = said(None, meaning="contained product; needed for annual profit")
    carbon: MassPrice | None = said(None, meaning="of CO2 from the purge burnt and from electricity")
    electricity_carbon: CarbonIntensity = said("0 kg/kWh", meaning="CO2 of electricity", reason="none unless stated")


class Quote(Section):
    """A quoted cost in place of correlations."""

    cost: Money = said(meaning="installed, in the money of its year")
    size: AssetSize = said(meaning="power, area or volume that it was quoted for")
    exponent: Ratio = said("0.65", meaning="of cost with size", reason="six-tenths rule")
    year: int = said(meaning="of the quote")


Asset = Literal["compressors", "circulator", "exchangers", "converter", "separator", "refrigeration"]


class Economics(Section):
    """How capital becomes annual cost."""

    currency: Literal["EUR", "USD", "GBP", "JPY", "CNY", "INR"] = said(meaning="of all money of the case")
    exchange_rate: ExchangeRate | None = said(None, meaning="money of the case for one USD; correlations are in USD")
    interest: Share = said("8 %", meaning="a year", reason="common practice")
    life: Years = said("20 year", meaning="of the plant", reason="common practice")
    hours_per_year: Hours = said("8000 h", meaning="of operation a year", reason="common practice")
    cost_year: int = said(2023, meaning="whose money the case is in", reason="last year with a known index")
    cost_index: Ratio | None = said(None, meaning="plant cost index of that year, where it is not known here")
    maintenance: Share = said("3 %", meaning="of capital a year", reason="2 to 5 % is common practice")
    fixed_cost: MoneyPerYear = said("0 {money}/year", meaning="staff, insurance and the like", reason="does not move the optimum")
    fees_factor: Ratio = said("1.18", meaning="contingency and fees on capital", reason="Turton et al.: 15 % and 3 %")
    location_factor: Ratio = said("1", meaning="cost at the site over the basis", reason="no site stated")
    catalyst_life: Years | None = said(None, meaning="instead of the model's")
    quoted: dict[Asset, Quote] = said({}, meaning="quoted costs in place of correlations")


Objective = Literal["yield per unit cost", "levelised cost", "annual profit", "yield"]


def _step_kind(value: Any) -> str:
    if isinstance(value, BedStep) or (isinstance(value, dict) and "bed" in value):
        return "bed"
    return "cool"


Step = Annotated[Annotated[BedStep, Tag("bed")] | Annotated[CoolStep, Tag("cool")], Discriminator(_step_kind)]


class Case(Section):
    """A whole case."""

    setpoise: Literal[1] = said(meaning="version of this layout")
    title: str = said(meaning="for people")
    model: str = said(meaning="shipped model by name, or path of a model file beside the case")
    equation_of_state: Literal["srk", "pr", "ideal"] = said(
        "srk", meaning="of all gas and liquid", reason="SRK is within 1 % for H2-N2 to 300 bar"
    )
    feed: Feed = said(meaning="fresh feed")
    compression: Compression = said(meaning="of make-up")
    loop: Loop = said(meaning="pressure, purge and circulation")
    reactor: tuple[Step, ...] = said(meaning="beds and coolers in the order in which gas meets them")
    condensation: Condensation = said(meaning="removal of the product")
    utilities: Utilities = said({}, meaning="cooling water")
    vessels: Vessels = said({}, meaning="walls")
    limits: dict[str, Any] = said({}, meaning="result path to limit")
    prices: Prices = said(meaning="money")
    economics: Economics = said(meaning="money")
    objective: Objective = said("yield per unit cost", meaning="what is optimised", reason="what this tool is for")

    # Where the case came from; set by the reader.
    path: Path | None = Field(None, exclude=True)
    sha256: str = Field("", exclude=True)

    def settings(self) -> dict[str, Setting]:
        """All values that may be decisions, by path."""
        found: dict[str, Setting | None] = {"feed.product_rate": self.feed.product_rate}
        for name, stream in self.feed.streams.items():
            found[f"feed.streams.{name}.flow"] = stream.flow
            found[f"feed.streams.{name}.share"] = stream.share
        for stage in self.compression.stages:
            found[f"compression.{stage.name}.discharge_pressure"] = stage.discharge_pressure
        found["loop.pressure"] = self.loop.pressure
        found["loop.purge_fraction"] = self.loop.purge_fraction
        found["loop.recycle_ratio"] = self.loop.recycle_ratio
        for step in self.reactor:
            for key in _STEP_SETTINGS:
                found[f"reactor.{step.name}.{key}"] = getattr(step, key, None)
        for part, key in _TRAIN_SETTINGS:
            cooler = getattr(self.condensation, part)
            found[f"condensation.{part}.{key}"] = None if cooler is None else getattr(cooler, key)
        return {path: setting for path, setting in found.items() if setting is not None}

    def resolved_yaml(self) -> str:
        """The case with every default visible, as a user would write it; it reads back equal."""
        from optimiser.inputs.writing import write_case

        return write_case(self)


_STEP_SETTINGS = (
    "inlet_temperature",
    "volume",
    "diameter",
    "length_over_diameter",
    "approach_fraction",
    "approach_temperature",
    "outlet_temperature",
)
_TRAIN_SETTINGS = (
    ("water_cooler", "outlet_temperature"),
    ("cold_exchanger", "recycle_temperature"),
    ("chiller", "outlet_temperature"),
)
