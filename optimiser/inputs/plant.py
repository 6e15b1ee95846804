"""The plant as a case states it, piece by piece. Keys of the file are the names of the fields."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Annotated, Any, Literal

from pydantic import AfterValidator, BeforeValidator, Field, StrictInt, StrictStr, ValidationInfo

from optimiser.inputs.fields import (
    Allowance,
    Coefficient,
    Density,
    Difference,
    DifferenceSetting,
    Efficiency,
    Factor,
    FeedPrice,
    FlowSetting,
    Kind,
    LengthSetting,
    MassFlowSetting,
    Pressure,
    PressureDrop,
    PressureSetting,
    Ratio,
    RatioSetting,
    Section,
    ShareSetting,
    Stress,
    Temperature,
    TemperatureSetting,
    Velocity,
    VolumeSetting,
    fault,
    said,
)
from optimiser.quantities import Quantity

Name = Annotated[StrictStr, Field(pattern=r"^[A-Za-z][A-Za-z0-9_-]{0,39}$")]
_FRACTION = Kind(("fraction",))
# How far mole fractions may be from adding up to 1, as rounded analyses are.
SLACK = 1e-4


def _fraction(value: Any, info: ValidationInfo) -> float:
    read = _FRACTION.read(value, info)
    assert isinstance(read, Quantity)
    return read.si


def _whole(composition: dict[str, float]) -> dict[str, float]:
    """Fractions that add up to 1, what rounding left over spread among them."""
    total = sum(composition.values())
    if abs(total - 1.0) > SLACK:
        raise fault(f"a sum of {total:.6g}", "mole fractions that add up to 1")
    if abs(total - 1.0) < 1e-12:
        return composition
    return {species: fraction / total for species, fraction in composition.items()}


Composition = Annotated[dict[StrictStr, Annotated[float, BeforeValidator(_fraction)]], AfterValidator(_whole)]


class FeedStream(Section):
    """One stream of fresh feed."""

    composition: Composition = said(meaning="mole fraction of each species; they add up to 1")
    temperature: Temperature = said(meaning="at battery limit")
    pressure: Pressure = said(meaning="at battery limit; streams mix at the lowest of their pressures")
    price: FeedPrice = said(meaning="by mass, by amount or by lower heating value")
    flow: FlowSetting | None = said(None, meaning="molar flow, where no product rate is stated")
    share: ShareSetting | None = said(None, meaning="part of all feed, molar; every stream but one has it")

    def price_per_mole(self, species: Sequence[Any], fractions: Sequence[float]) -> float:
        """Price of a mole of the stream, money/mol.

        Args:
            species: with `molar_mass` in kg/mol and `lhv` in J/mol.
            fractions: of each of them in the stream.
        """
        if self.price.dimension == "molar_price":
            return self.price.si
        heat = self.price.dimension == "energy_price"
        worth = sum(
            y * float(s.lhv if heat else s.molar_mass) for y, s in zip(fractions, species, strict=True)
        )
        return self.price.si * worth


class Feed(Section):
    """Fresh feed, and how much product is wanted of it."""

    product_rate: MassFlowSetting | None = said(
        None, meaning="contained product; the feed's flow follows from it"
    )
    streams: dict[Name, FeedStream] = said(meaning="one or several streams by name")


class Stage(Section):
    """One stage of make-up compression."""

    stage: Name = said(meaning="its name")
    discharge_pressure: PressureSetting | None = said(
        None, meaning="every stage but the last has one; the last delivers loop pressure"
    )

    @property
    def name(self) -> str:
        """Name in paths."""
        return self.stage


class Compression(Section):
    """Make-up compression in intercooled stages."""

    isentropic_efficiency: Efficiency = said(
        "78 %", meaning="of every stage", reason="centrifugal stages reach 70 to 85 %"
    )
    driver_efficiency: Efficiency = said(
        "95 %", meaning="of every electric drive, gear included", reason="common practice, 94 to 97 %"
    )
    intercooler_temperature: Temperature = said(
        "40 degC", meaning="after every stage, the last one too", reason="15 K above the cooling water"
    )
    intercooler_pressure_drop: PressureDrop = said(
        "0.5 bar", meaning="of each intercooler", reason="common practice"
    )
    coefficient: Coefficient = said(
        "250 W/m2/K",
        meaning="heat transfer of the intercoolers at 150 bar; it goes with pressure to the power 0.4",
        reason="gas at pressure, 150 to 500 W/m2/K",
    )
    stages: Annotated[tuple[Stage, ...], Field(min_length=1)] = said(
        meaning="in the order in which gas meets them"
    )


class Loop(Section):
    """The synthesis loop."""

    pressure: PressureSetting = said(meaning="at which make-up and circulator deliver")
    feed_pressure_drop: PressureDrop = said(
        "2 bar", meaning="from there to the first bed", reason="exchangers and pipes, common practice"
    )
    purge_fraction: ShareSetting = said(meaning="part of the separator's vapour that is purged")
    recycle_ratio: RatioSetting | None = said(
        None, meaning="recycle to make-up, molar; follows from the purge where it is not stated"
    )
    circulator_efficiency: Efficiency = said(
        "75 %", meaning="isentropic", reason="a stage of small pressure ratio, 70 to 80 %"
    )


class BedStep(Section):
    """An adiabatic bed of catalyst."""

    bed: Name = said(meaning="its name")
    rate: Literal["kinetic", "approach", "damkohler"] = said(
        "kinetic",
        meaning="rate law, stated approach to equilibrium, or approach fitted to the rate law",
        reason="only a rate law knows that a cold catalyst sleeps",
    )
    inlet_temperature: TemperatureSetting = said(meaning="of the gas that enters")
    volume: VolumeSetting = said(meaning="of catalyst as packed")
    diameter: LengthSetting | None = said(None, meaning="inside; or state length_over_diameter")
    length_over_diameter: RatioSetting | None = said(None, meaning="or state diameter")
    activity: Efficiency = said(
        "70 %",
        meaning="of the catalyst, 100 % when fresh",
        reason="sized for the end of a run, not its start",
    )
    elements: Annotated[StrictInt, Field(ge=2, le=60)] = said(
        8, meaning="pieces into which the bed is cut for the calculation", reason="outlets within 0.01 K"
    )
    approach_fraction: ShareSetting | None = said(
        None, meaning="extent over extent at equilibrium (rate: approach)"
    )
    approach_temperature: DifferenceSetting | None = said(
        None, meaning="how far short of equilibrium, as a temperature difference (rate: approach)"
    )

    @property
    def name(self) -> str:
        """Name in paths."""
        return self.bed

    @property
    def kind(self) -> str:
        """`bed`."""
        return "bed"


class CoolStep(Section):
    """A cooler between or after beds; its sink is what it heats."""

    cool: Name = said(meaning="its name")
    sink: Literal["feed", "steam", "boiler_feed_water", "cooling_water"] = said(meaning="what takes the heat")
    outlet_temperature: TemperatureSetting | None = said(
        None,
        meaning="of the gas; left out before a bed and for the one step that closes the heating of the feed",
    )
    minimum_approach: Difference = said("15 K", meaning="at either end", reason="gas against gas, 15 to 30 K")
    coefficient: Coefficient = said(
        "300 W/m2/K",
        meaning="heat transfer at 150 bar; it goes with pressure to the power 0.4",
        reason="gas at 100 to 250 bar against gas or boiling water, 150 to 500 W/m2/K",
    )
    pressure_drop: PressureDrop = said("0.3 bar", meaning="of the gas", reason="common practice")
    steam_pressure: Pressure = said(
        "40 bar", meaning="of the steam raised (sink: steam)", reason="a usual header"
    )
    water_inlet: Temperature = said(
        "105 degC", meaning="of the water (sink: boiler_feed_water)", reason="as it leaves a deaerator"
    )
    water_outlet: Temperature = said(
        "180 degC", meaning="of the water (sink: boiler_feed_water)", reason="short of boiling above 10 bar"
    )

    @property
    def name(self) -> str:
        """Name in paths."""
        return self.cool

    @property
    def kind(self) -> str:
        """`cool`."""
        return "cool"


class WaterCooler(Section):
    """Condensing cooler on cooling water."""

    outlet_temperature: TemperatureSetting = said(meaning="of the gas")
    minimum_approach: Difference = said("5 K", meaning="at either end", reason="water at both ends is cheap")
    coefficient: Coefficient = said(
        "400 W/m2/K", meaning="as for reactor coolers", reason="condensing beside gas at pressure, 200 to 600"
    )


class ColdExchanger(Section):
    """The separator's vapour against the gas on its way to the chiller."""

    recycle_temperature: TemperatureSetting = said(meaning="of the vapour as it leaves, warmed")
    minimum_approach: Difference = said("5 K", meaning="at either end", reason="cold is dear")
    coefficient: Coefficient = said(
        "300 W/m2/K",
        meaning="as for reactor coolers",
        reason="gas against gas, in part condensing, 150 to 500",
    )


class Chiller(Section):
    """Condenser cooled by boiling refrigerant; the separator stands at its outlet."""

    outlet_temperature: TemperatureSetting = said(meaning="of the gas, and of the separator")
    evaporator_approach: Difference = said(
        "5 K", meaning="from refrigerant to outlet", reason="common practice"
    )
    coefficient: Coefficient = said(
        "400 W/m2/K", meaning="as for reactor coolers", reason="condensing beside gas at pressure, 200 to 600"
    )
    second_law_efficiency: Efficiency = said(
        "50 %", meaning="of the machine against Carnot", reason="industrial machines reach 45 to 60 %"
    )
    condenser_approach: Difference = said(
        "8 K", meaning="from cooling water return to condensing refrigerant", reason="common practice"
    )
    condenser_coefficient: Coefficient = said(
        "800 W/m2/K",
        meaning="heat transfer of the refrigerant's condenser, at its own pressure",
        reason="clean refrigerant against water, 600 to 1200",
    )


class Separator(Section):
    """Upright vessel in which liquid and gas part."""

    vapour_velocity_constant: Velocity = said(
        "0.05 m/s", meaning="K of Souders and Brown", reason="the low end of practice, for high pressure"
    )
    length_over_diameter: Ratio = said("3", meaning="of the vessel", reason="common practice, 3 to 5")


class Condensation(Section):
    """From reactor to separator: water cooler, cold exchanger, chiller, those that there are."""

    pressure_drop: PressureDrop = said(
        "3 bar", meaning="of the train, taken at its entry", reason="common practice"
    )
    water_cooler: WaterCooler | None = said(None, meaning="left out where there is none")
    cold_exchanger: ColdExchanger | None = said(None, meaning="left out where there is none")
    chiller: Chiller | None = said(None, meaning="left out where there is none")
    separator: Separator = said({}, meaning="at the end of the train")


class Utilities(Section):
    """Cooling water."""

    cooling_water_supply: Temperature = said(
        "25 degC", meaning="as it comes", reason="cooling tower in a mild climate"
    )
    cooling_water_return: Temperature = said("35 degC", meaning="as it leaves", reason="10 K of rise")


class Vessels(Section):
    """Walls of converter and separator. The converter's shell is kept at feed temperature."""

    allowable_stress: Stress = said(
        "120 MPa", meaning="at the temperature of the shell", reason="low-alloy steel, to be confirmed"
    )
    joint_efficiency: Efficiency = said("100 %", meaning="of welds", reason="fully examined")
    corrosion_allowance: Allowance = said("3 mm", meaning="on every wall", reason="common practice")
    design_pressure_factor: Factor = said(
        "1.1", meaning="design over operating pressure", reason="common practice"
    )
    length_factor: Factor = said(
        "1.25", meaning="shell over bed, in length", reason="room for heads and gas distribution, invented"
    )
    material_factor: Factor = said(
        "1.5", meaning="cost over carbon steel", reason="chromium-molybdenum steel for hydrogen, from memory"
    )
    steel_density: Density = said("7850 kg/m3", meaning="of the wall", reason="steel")
