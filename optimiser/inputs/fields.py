"""Kinds of fields of a case: each is declared once with its dimension, meaning, default and the reason for the default.

The declaration drives reading, checking, `resolved` output and the reference table of keys.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Annotated, Any

from pydantic import BaseModel, ConfigDict, Field, GetCoreSchemaHandler, ValidationInfo
from pydantic_core import PydanticCustomError, core_schema

from optimiser.quantities import (
    Limit,
    Money as Currency,
    Quantity,
    Setting,
    UnitProblem,
    dimension_of,
    parse_quantity,
    parse_setting,
)


def fault(read: str, wanted: str, nearest: str | None = None) -> PydanticCustomError:
    """A validation error in our own words."""
    return PydanticCustomError("case", "{read}", {"read": read, "wanted": wanted, "nearest": nearest or ""})


@dataclass(frozen=True)
class Kind:
    """How a text becomes a quantity, a setting or a limit.

    Attributes:
        dimension: names of dimensions, the first that fits is taken.
        form: "quantity" or "setting".
        least: smallest value allowed, SI; `above`: whether it is itself not allowed.
        most: largest value allowed, SI.
    """

    dimension: tuple[str, ...]
    form: str = "quantity"
    least: float | None = None
    above: bool = False
    most: float | None = None

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> core_schema.CoreSchema:
        """Read from text with the money of the case as context."""
        return core_schema.with_info_plain_validator_function(self.read)

    def read(self, value: Any, info: ValidationInfo) -> Quantity | Setting | Limit:
        """A value as written in a file."""
        if isinstance(value, Quantity | Setting | Limit):
            return value
        if isinstance(value, bool) or not isinstance(value, int | float | str):
            raise fault(f"{_named(value)} stands here", "a number with its unit")
        money: Currency = (info.context or {}).get("money", Currency())
        text = str(value).replace("{money}", money.currency)
        dimension = dimension_of(text, self.dimension, money)
        parse = parse_setting if self.form == "setting" else parse_quantity
        try:
            return self._within(parse(text, dimension, money), text)
        except UnitProblem as problem:
            raise fault(problem.read, problem.wanted, problem.nearest) from None

    def _within(self, made: Quantity | Setting, text: str) -> Quantity | Setting:
        ends = [made.si] if isinstance(made, Quantity) else [made.low, made.high]
        for end in ends:
            if self.least is not None and (end < self.least or (self.above and end == self.least)):
                raise fault(text, f"a value {'above' if self.above else 'of at least'} {self.least:g}")
            if self.most is not None and end > self.most:
                raise fault(text, f"a value of at most {self.most:g} in SI units")
        return made


def _named(value: Any) -> str:
    names = {dict: "a mapping", list: "a list", bool: "a yes or no", type(None): "nothing"}
    return names.get(type(value), "something else")


class Section(BaseModel):
    """A mapping of a case: unknown keys are refused, nothing can be changed after reading."""

    model_config = ConfigDict(extra="forbid", frozen=True, arbitrary_types_allowed=True, validate_default=True)


def said(default: Any = ..., *, meaning: str, reason: str = "") -> Any:
    """A field with its meaning, and the reason for its default where it has one."""
    return Field(default, description=meaning, json_schema_extra={"reason": reason})


Temperature = Annotated[Quantity, Kind(("temperature",))]
Difference = Annotated[Quantity, Kind(("temperature_difference",), least=0.0, above=True)]
Pressure = Annotated[Quantity, Kind(("pressure",), least=0.0, above=True)]
Stress = Annotated[Quantity, Kind(("stress",), least=0.0, above=True)]
PressureDrop = Annotated[Quantity, Kind(("pressure_difference",), least=0.0)]
Coefficient = Annotated[Quantity, Kind(("coefficient",), least=0.0, above=True)]
Efficiency = Annotated[Quantity, Kind(("fraction",), least=0.0, above=True, most=1.0)]
Share = Annotated[Quantity, Kind(("fraction",), least=0.0, most=1.0)]
Fraction = Annotated[Quantity, Kind(("fraction",), least=0.0)]
Ratio = Annotated[Quantity, Kind(("ratio",), least=0.0, above=True)]
Length = Annotated[Quantity, Kind(("length",), least=0.0, above=True)]
Allowance = Annotated[Quantity, Kind(("length",), least=0.0)]
Density = Annotated[Quantity, Kind(("density",), least=0.0, above=True)]
Velocity = Annotated[Quantity, Kind(("velocity",), least=0.0, above=True)]
Years = Annotated[Quantity, Kind(("time",), least=0.0, above=True)]
Hours = Annotated[Quantity, Kind(("duration",), least=0.0, above=True, most=8784 * 3600.0)]
Money = Annotated[Quantity, Kind(("money",), least=0.0)]
MoneyPerYear = Annotated[Quantity, Kind(("money_per_year",), least=0.0)]
EnergyPrice = Annotated[Quantity, Kind(("energy_price",), least=0.0)]
MassPrice = Annotated[Quantity, Kind(("mass_price",), least=0.0)]
VolumePrice = Annotated[Quantity, Kind(("volume_price",), least=0.0)]
FeedPrice = Annotated[Quantity, Kind(("mass_price", "molar_price", "energy_price"), least=0.0)]
CarbonIntensity = Annotated[Quantity, Kind(("mass_intensity",), least=0.0)]
ExchangeRate = Annotated[Quantity, Kind(("exchange_rate",))]
AssetSize = Annotated[Quantity, Kind(("power", "area", "volume"), least=0.0, above=True)]

TemperatureSetting = Annotated[Setting, Kind(("temperature",), "setting")]
DifferenceSetting = Annotated[Setting, Kind(("temperature_difference",), "setting")]
PressureSetting = Annotated[Setting, Kind(("pressure",), "setting", least=0.0, above=True)]
VolumeSetting = Annotated[Setting, Kind(("volume",), "setting", least=0.0, above=True)]
LengthSetting = Annotated[Setting, Kind(("length",), "setting", least=0.0, above=True)]
RatioSetting = Annotated[Setting, Kind(("ratio",), "setting", least=0.0, above=True)]
ShareSetting = Annotated[Setting, Kind(("fraction",), "setting", least=0.0, most=1.0)]
FactorSetting = Annotated[Setting, Kind(("fraction",), "setting", least=0.0, above=True, most=1.0)]
FlowSetting = Annotated[Setting, Kind(("molar_flow",), "setting", least=0.0, above=True)]
MassFlowSetting = Annotated[Setting, Kind(("mass_flow",), "setting", least=0.0, above=True)]
