"""Texts to values: `150 bar`, `80 .. 250 bar`, `<= 520 degC`, `5 %`, `0.07 EUR/kWh`."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from optimiser.quantities.amounts import Limit, Quantity, Setting, from_shown, number_text
from optimiser.quantities.dimensions import DIMENSIONS, Dimension, powers_of
from optimiser.quantities.nearest import nearest_name
from optimiser.quantities.units import UNIT_NAMES, UnknownUnit, currency_in, parse_unit

_NUMBER = re.compile(r"\s*([+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?)(?![\d,])\s*(.*?)\s*", re.DOTALL)
_COMMA = re.compile(r"[+-]?[\d.]*,\d|[+-]?\d[\d.]*,")
_SIDES = {"<=": "high", "≤": "high", ">=": "low", "≥": "low"}


class UnitProblem(Exception):
    """A text that is no value of the wanted kind.

    Attributes:
        read: the text, or the part of it that is wrong.
        wanted: what should stand there, as a sentence without capital and stop.
        nearest: the valid name that comes closest, or None.
    """

    def __init__(self, read: str, wanted: str, nearest: str | None = None) -> None:
        super().__init__(f"{read!r}: {wanted}")
        self.read, self.wanted, self.nearest = read, wanted, nearest


@dataclass(frozen=True)
class Money:
    """The currency of a case, and what one USD costs in it (None if not stated)."""

    currency: str = "EUR"
    per_usd: float | None = None


def parse_quantity(text: str, dimension: str, money: Money | str = "EUR") -> Quantity:
    """One value with its unit.

    Raises:
        UnitProblem: what is wrong and what is wanted.
    """
    kind, money = DIMENSIONS[dimension], _money(money)
    number, unit = _split(text, kind, money)
    si, unit = _si(text, number, unit, kind, money)
    return Quantity(si, unit, dimension)


def parse_setting(text: str, dimension: str, money: Money | str = "EUR") -> Setting:
    """A held value or a range `low .. high`. Raises UnitProblem."""
    low, high, unit = _ends(text, DIMENSIONS[dimension], _money(money))
    return Setting(low, high, unit, dimension)


def parse_limit(text: str, dimension: str, money: Money | str = "EUR") -> Limit:
    """A limit `<= high`, `>= low` or `low .. high`. Raises UnitProblem."""
    kind, money = DIMENSIONS[dimension], _money(money)
    text = text.strip()
    for sign, side in _SIDES.items():
        if text.startswith(sign):
            value = parse_quantity(text.removeprefix(sign), dimension, money)
            low, high = (value.si, None) if side == "low" else (None, value.si)
            return Limit(low, high, value.unit, dimension)
    sample = kind.sample(money.currency)
    if ".." not in text:
        wanted = f"a limit: `<= {sample}`, `>= {sample}` or a range with `..`"
        raise UnitProblem(text, wanted)
    low, high, unit = _ends(text, kind, money)
    return Limit(low, high, unit, dimension)


def dimension_of(text: str, candidates: tuple[str, ...], money: Money | str = "EUR") -> str:
    """Which of several dimensions a text has by its unit, the first if none fits."""
    money = _money(money)
    match = _NUMBER.fullmatch(text)
    try:
        unit = parse_unit(_in_currency(match[2], money.currency) if match else "")
    except UnknownUnit:
        return candidates[0]
    fitting = [name for name in candidates if powers_of(DIMENSIONS[name], money.currency) == unit.powers]
    return fitting[0] if fitting else candidates[0]


def _money(money: Money | str) -> Money:
    return Money(money) if isinstance(money, str) else money


def _ends(text: str, kind: Dimension, money: Money) -> tuple[float, float, str]:
    """Both ends of a range in SI, equal for a held value, and their unit."""
    parts = [part.strip() for part in text.split("..")]
    if len(parts) == 1:
        value = parse_quantity(text, kind.name, money)
        return value.si, value.si, value.unit
    if len(parts) != 2 or not all(parts):
        raise UnitProblem(text, f"a value or a range with two ends, such as `{_range_sample(kind, money)}`")
    units = [match[2] if (match := _NUMBER.fullmatch(part)) else "" for part in parts]
    ends = [_split(part, kind, money, units[1 - k], text) for k, part in enumerate(parts)]
    (low, unit), (high, other) = (_si(text, number, unit, kind, money) for number, unit in ends)
    if other != unit:
        # In the unit of the lower end, and such that the text of the range reads back to the same value.
        high = from_shown(float(number_text(high, unit, kind.name)), unit, kind.name)
    if low > high:
        raise UnitProblem(text, "a range from its lower to its higher end; turn the two round")
    return low, high, unit


def _range_sample(kind: Dimension, money: Money) -> str:
    sample = kind.sample(money.currency)
    number = float(kind.example)
    return f"{number * 0.8:g} .. {sample}"


def _split(
    text: str, kind: Dimension, money: Money, fallback: str = "", whole: str | None = None
) -> tuple[float, str]:
    """Number and unit text of one value; `fallback` is the unit where none is written."""
    sample, read = kind.sample(money.currency), (whole or text).strip()
    if _COMMA.match(text.strip()):
        raise UnitProblem(read, "a number without commas, such as 1000 for 1,000 and 0.5 for 0,5")
    match = _NUMBER.fullmatch(text)
    if match is None:
        raise UnitProblem(read, f"{kind.words}: a number and its unit, such as `{sample}`")
    number, unit = float(match[1]), match[2] or fallback
    if not math.isfinite(number):
        raise UnitProblem(read, "a number of a size that a computer can hold")
    if unit == "-":
        unit = ""
    if not unit and not kind.bare:
        raise UnitProblem(read, f"{kind.words} with its unit, such as `{sample}`")
    return number, unit


def _si(read: str, number: float, unit: str, kind: Dimension, money: Money) -> tuple[float, str]:
    """SI value, and the unit that it is shown in: that of the text, in the currency of the case."""
    read = read.strip()
    rate, unit = _checked(read, unit, kind, money)
    si = from_shown(number * rate, unit, kind.name, money.currency)
    sample = kind.sample(money.currency)
    if kind.low is not None and (si < kind.low or (kind.low_open and si == kind.low)):
        raise UnitProblem(read, f"{kind.words} {_floor(kind)}, such as `{sample}`")
    if kind.high is not None and si > kind.high:
        raise UnitProblem(read, f"{kind.words} of at most 1 (100 %), such as `{sample}`")
    return si, unit


def _floor(kind: Dimension) -> str:
    if kind.name == "temperature":
        return "above absolute zero"
    return "above 0" if kind.low_open else "of at least 0"


def _checked(read: str, unit: str, kind: Dimension, money: Money) -> tuple[float, str]:
    """Rate of exchange (1 without) and unit in the currency of the case, once the unit fits the dimension."""
    sample = kind.sample(money.currency)
    try:
        powers = parse_unit(unit).powers
    except UnknownUnit as problem:
        near = nearest_name(problem.part, UNIT_NAMES, least=0.5)
        gauge = "pressures are absolute; add 1.013 bar to a gauge pressure; " if "barg" in unit else ""
        raise UnitProblem(read, f"{gauge}{kind.words} in a known unit, such as `{sample}`", near) from None
    wanted = powers_of(kind, money.currency)
    if unit in kind.refused:
        raise UnitProblem(read, f"{kind.words}, such as `{sample}`")
    if powers == wanted:
        return 1.0, unit
    other = currency_in(powers)
    swapped = _in_currency(unit, money.currency)
    if other is None or other == money.currency or parse_unit(swapped).powers != wanted:
        raise UnitProblem(read, f"{kind.words}, such as `{sample}`")
    if other != "USD" or money.per_usd is None:
        raise UnitProblem(read, _no_rate(other, money))
    return money.per_usd, swapped


def _no_rate(other: str, money: Money) -> str:
    own = f"money in {money.currency}, the currency of the case"
    if other == "USD":
        return f"{own}, or economics.exchange_rate in {money.currency}/USD"
    return f"{own}; only USD can be converted"


def _in_currency(unit: str, currency: str) -> str:
    """The unit with every currency in it replaced; kUSD becomes kEUR."""
    return re.sub(r"(?<![A-Za-z])([kM]?)(EUR|USD|GBP|JPY|CNY|INR)(?![A-Za-z])", rf"\g<1>{currency}", unit)
