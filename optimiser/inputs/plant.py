"""Feed, compression and loop as a case states them. Keys of the file are the names of the fields."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Annotated, Any

from pydantic import AfterValidator, BeforeValidator, Field, StrictStr, ValidationInfo

from optimiser.inputs.fields import (
    Coefficient,
    Efficiency,
    FeedPrice,
    FlowSetting,
    Kind,
    MassFlowSetting,
    Pressure,
    PressureDrop,
    PressureSetting,
    RatioSetting,
    Section,
    ShareSetting,
    Temperature,
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
