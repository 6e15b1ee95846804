"""Removal of the product, cooling water and vessels as a case states them."""

from __future__ import annotations

from optimiser.inputs.fields import (
    Allowance,
    Coefficient,
    Density,
    Difference,
    Efficiency,
    Factor,
    PressureDrop,
    Ratio,
    Section,
    Stress,
    Temperature,
    TemperatureSetting,
    Velocity,
    said,
)


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
