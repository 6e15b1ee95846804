"""The reactor's steps as a case states them: beds of catalyst and coolers between and after them."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field, StrictInt

from optimiser.inputs.fields import (
    Coefficient,
    Difference,
    DifferenceSetting,
    Efficiency,
    LengthSetting,
    Pressure,
    PressureDrop,
    RatioSetting,
    Section,
    ShareSetting,
    Temperature,
    TemperatureSetting,
    VolumeSetting,
    said,
)
from optimiser.inputs.plant import Name


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
        6,
        meaning="collocation elements along the bed",
        reason="outlets within 0.05 K, points inside within 1 K of a stiff integration",
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
