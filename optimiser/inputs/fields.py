"""Kinds of fields: each is declared once with its dimension, meaning, default and the reason for the default.

The declaration drives reading, checking, the text of a resolved case and the reference table of keys.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Annotated, Any

from pydantic import BaseModel, ConfigDict, Field, GetCoreSchemaHandler, ValidationInfo
from pydantic_core import PydanticCustomError, core_schema

from optimiser.quantities import (
    Limit,
    Money,
    Quantity,
    Setting,
    UnitProblem,
    dimension_of,
    number_text,
    parse_limit,
    parse_quantity,
    parse_setting,
)

Value = Quantity | Setting | Limit
_PARSERS: dict[str, Callable[[str, str, Money], Value]] = {
    "quantity": parse_quantity,
    "setting": parse_setting,
    "limit": parse_limit,
}


def fault(read: str | None, wanted: str, nearest: str | None = None) -> PydanticCustomError:
    """A validation error in our own words; `read` is None for the text in the file."""
    context = {"read": read, "wanted": wanted, "nearest": nearest}
    return PydanticCustomError("input", "{wanted}", context)


def money_of(info: ValidationInfo) -> Money:
    """Currency of the case that is being read."""
    money = (info.context or {}).get("money", Money())
    assert isinstance(money, Money)
    return money


@dataclass(frozen=True)
class Kind:
    """How a text becomes a quantity, a setting or a limit.

    Attributes:
        dimension: names of dimensions; the one that the text's unit fits is taken.
        form: "quantity", "setting" or "limit".
        least: smallest value allowed, SI; `above`: whether it is itself not allowed.
        most: largest value allowed, SI.
    """

    dimension: tuple[str, ...]
    form: str = "quantity"
    least: float | None = None
    above: bool = False
    most: float | None = None

    def __get_pydantic_core_schema__(
        self, source: Any, handler: GetCoreSchemaHandler
    ) -> core_schema.CoreSchema:
        """Read from text with the money of the case as context."""
        return core_schema.with_info_plain_validator_function(self.read)

    def read(self, value: Any, info: ValidationInfo) -> Value:
        """A value as written in a file."""
        if isinstance(value, Quantity | Setting | Limit):
            return value
        money = money_of(info)
        if isinstance(value, bool) or not isinstance(value, int | float | str):
            raise fault(_named(value), self.sample(money.currency))
        text = str(value).replace("{money}", money.currency)
        dimension = self.dimension[0]
        if len(self.dimension) > 1:
            dimension = dimension_of(text, self.dimension, money)
        try:
            made = _PARSERS[self.form](text, dimension, money)
        except UnitProblem as problem:
            raise fault(problem.read, problem.wanted, problem.nearest) from None
        self._within(made)
        return made

    def sample(self, currency: str) -> str:
        """What a value of this kind is, with an example."""
        from optimiser.quantities import DIMENSIONS

        kind = DIMENSIONS[self.dimension[0]]
        return f"{kind.words}, such as `{kind.sample(currency)}`"

    def _within(self, made: Value) -> None:
        ends = [made.si] if isinstance(made, Quantity) else [made.low, made.high]
        for end in ends:
            if end is None:
                continue
            if self.least is not None and (end < self.least or (self.above and end == self.least)):
                side = "above" if self.above else "of at least"
                raise fault(None, f"a value {side} {_amount(self.least, made)}")
            if self.most is not None and end > self.most:
                raise fault(None, f"a value of at most {_amount(self.most, made)}")


def _amount(si: float, like: Value) -> str:
    """An SI value in the unit of another."""
    return f"{number_text(si, like.unit, like.dimension)} {like.unit}".rstrip()


def _named(value: Any) -> str:
    names = {dict: "a mapping", list: "a list", bool: "true or false", type(None): "nothing"}
    return names.get(type(value), "something else")


class Section(BaseModel):
    """A mapping of a file: unknown keys are refused, nothing can be changed after reading."""

    model_config = ConfigDict(
        extra="forbid", frozen=True, arbitrary_types_allowed=True, validate_default=True
    )


def said(default: Any = ..., *, meaning: str, reason: str = "") -> Any:
    """A field with its meaning, and the reason for its default where it has one."""
    return Field(default, description=meaning, json_schema_extra={"reason": reason})


def _quantity(*dimension: str, least: float | None = None, above: bool = False) -> Kind:
    return Kind(dimension, "quantity", least, above)


def _setting(*dimension: str, above: bool = True) -> Kind:
    return Kind(dimension, "setting", 0.0 if above else None, above)


Temperature = Annotated[Quantity, _quantity("temperature")]
Difference = Annotated[Quantity, _quantity("temperature_difference", least=0.0, above=True)]
Pressure = Annotated[Quantity, _quantity("pressure")]
PressureDrop = Annotated[Quantity, _quantity("pressure_difference")]
Stress = Annotated[Quantity, _quantity("stress")]
Coefficient = Annotated[Quantity, _quantity("coefficient")]
Efficiency = Annotated[Quantity, _quantity("fraction", least=0.0, above=True)]
Share = Annotated[Quantity, _quantity("fraction")]
Ratio = Annotated[Quantity, _quantity("ratio", least=0.0, above=True)]
Factor = Annotated[Quantity, _quantity("ratio", least=1.0)]
Allowance = Annotated[Quantity, _quantity("length")]
Density = Annotated[Quantity, _quantity("density")]
Velocity = Annotated[Quantity, _quantity("velocity")]
Years = Annotated[Quantity, _quantity("years")]
Hours = Annotated[Quantity, Kind(("hours",), most=8784 * 3600.0)]
Amount = Annotated[Quantity, _quantity("money", least=0.0)]
MoneyPerYear = Annotated[Quantity, _quantity("money_per_year", least=0.0)]
EnergyPrice = Annotated[Quantity, _quantity("energy_price")]
MassPrice = Annotated[Quantity, _quantity("mass_price")]
VolumePrice = Annotated[Quantity, _quantity("volume_price")]
FeedPrice = Annotated[Quantity, _quantity("mass_price", "molar_price", "energy_price")]
CarbonIntensity = Annotated[Quantity, _quantity("mass_intensity")]
Rate = Annotated[Quantity, _quantity("exchange_rate")]
AssetSize = Annotated[Quantity, _quantity("power", "area", "volume", least=0.0, above=True)]

TemperatureSetting = Annotated[Setting, _setting("temperature", above=False)]
DifferenceSetting = Annotated[Setting, _setting("temperature_difference", above=False)]
PressureSetting = Annotated[Setting, _setting("pressure")]
VolumeSetting = Annotated[Setting, _setting("volume")]
LengthSetting = Annotated[Setting, _setting("length")]
RatioSetting = Annotated[Setting, _setting("ratio")]
ShareSetting = Annotated[Setting, _setting("fraction")]
FlowSetting = Annotated[Setting, _setting("molar_flow")]
MassFlowSetting = Annotated[Setting, _setting("mass_flow")]
