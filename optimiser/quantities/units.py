"""Units that designers write, each as a size in SI and powers of base units.

The table stands alone: pint would take longer to load than all else that reading a case needs (0.25 s more on
0.2 s). The tests hold every unit of the table against that library's own definitions.

Currencies are base units of their own, so that two of them never mix without a rate.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache

CURRENCIES = ("EUR", "USD", "GBP", "JPY", "CNY", "INR")
_BASES = ("m", "kg", "s", "K", "mol", *CURRENCIES)

# Size of one unit in terms of another. A year is the Julian year; psi is exact by international pound, inch
# and standard gravity; a calorie is the thermochemical one, in which kinetics are published.
_TABLE: dict[str, tuple[float, str]] = {
    "-": (1.0, ""),
    "%": (1e-2, ""),
    "ppm": (1e-6, ""),
    "mol%": (1e-2, ""),
    "wt%": (1e-2, ""),
    "mm": (1e-3, "m"),
    "cm": (1e-2, "m"),
    "km": (1e3, "m"),
    "L": (1e-3, "m3"),
    "g": (1e-3, "kg"),
    "t": (1e3, "kg"),
    "kt": (1e6, "kg"),
    "Mt": (1e9, "kg"),
    "lb": (0.45359237, "kg"),
    "min": (60.0, "s"),
    "h": (3600.0, "s"),
    "d": (86400.0, "s"),
    "year": (365.25 * 86400.0, "s"),
    "mmol": (1e-3, "mol"),
    "kmol": (1e3, "mol"),
    # Normal cubic metre: ideal gas at 0 degC and 101325 Pa, p/(R T) with R = 8.31446261815324 J/mol/K.
    "Nm3": (101325.0 / (8.31446261815324 * 273.15), "mol"),
    "N": (1.0, "kg*m/s2"),
    "Pa": (1.0, "kg/m/s2"),
    "kPa": (1e3, "Pa"),
    "MPa": (1e6, "Pa"),
    "mbar": (1e2, "Pa"),
    "bar": (1e5, "Pa"),
    "atm": (101325.0, "Pa"),
    "psi": (0.45359237 * 9.80665 / 0.0254**2, "Pa"),
    "J": (1.0, "kg*m2/s2"),
    "kJ": (1e3, "J"),
    "MJ": (1e6, "J"),
    "GJ": (1e9, "J"),
    "cal": (4.184, "J"),
    "kcal": (4184.0, "J"),
    "W": (1.0, "J/s"),
    "kW": (1e3, "W"),
    "MW": (1e6, "W"),
    "GW": (1e9, "W"),
    "Wh": (3.6e3, "J"),
    "kWh": (3.6e6, "J"),
    "MWh": (3.6e9, "J"),
    "GWh": (3.6e12, "J"),
    "cP": (1e-3, "Pa*s"),
} | {f"{prefix}{c}": (size, c) for c in CURRENCIES for prefix, size in (("k", 1e3), ("M", 1e6))}

# Scales whose zero is not that of the kelvin: size of one degree, and zero, both in K.
_SCALES = {"degC": (1.0, 273.15), "degF": (5.0 / 9.0, 273.15 - 32.0 * 5.0 / 9.0)}
_SPELLINGS = {"°C": "degC", "°F": "degF", "yr": "year", "years": "year", "Nm³": "Nm3", "m²": "m2", "m³": "m3"}

UNIT_NAMES = (*_BASES, *_TABLE, *_SCALES)
_LONGEST = 60
_TOKEN = re.compile(r"\s*(\*\*|[*/^()]|[A-Za-z°%][A-Za-z°%²³]*\d*|-?\d+|-(?!\d))")

Powers = tuple[tuple[str, int], ...]


class UnknownUnit(Exception):
    """A unit text that cannot be read; `part` is the name or sign at fault."""

    def __init__(self, part: str) -> None:
        super().__init__(f"unknown unit {part!r}")
        self.part = part


@dataclass(frozen=True)
class Unit:
    """A unit: value in SI = factor x number + offset; `powers` of base units, sorted by name."""

    factor: float
    powers: Powers = ()
    offset: float = 0.0

    def times(self, other: Unit, power: int) -> Unit:
        """This unit times a power of another."""
        if self.offset or other.offset:
            raise UnknownUnit("degrees inside a compound unit (write K)")
        counts = dict(self.powers)
        for base, count in other.powers:
            counts[base] = counts.get(base, 0) + power * count
        kept = tuple(sorted((base, count) for base, count in counts.items() if count))
        return Unit(self.factor * other.factor**power, kept)


@lru_cache(maxsize=1024)
def parse_unit(text: str) -> Unit:
    """A unit text such as `EUR/kWh`, `W/m2/K` or `W/(m2*K)`.

    Multiplication is `*` or a space, division `/`, powers `m2`, `m^2` or `m**2`. Empty text and `-` are pure
    numbers.

    Raises:
        UnknownUnit: a name or a sign that is not known.
    """
    if len(text) > _LONGEST:
        raise UnknownUnit(f"{text[:_LONGEST]}...")
    tokens = _tokens(text)
    if not tokens:
        return Unit(1.0)
    if len(tokens) == 1 and tokens[0] in (*_SCALES, *_SPELLINGS):
        return _atom(tokens[0])
    unit = _product(tokens)
    if tokens:
        raise UnknownUnit(tokens[0])
    return unit


def _tokens(text: str) -> list[str]:
    tokens, at = [], 0
    text = text.rstrip()
    while at < len(text):
        match = _TOKEN.match(text, at)
        if match is None:
            raise UnknownUnit(text[at:].strip())
        tokens.append(match[1])
        at = match.end()
    return tokens


def _product(tokens: list[str]) -> Unit:
    """Factors up to the end or a closing bracket; tokens are used up."""
    unit = _power(tokens)
    while tokens and tokens[0] != ")":
        sign = tokens.pop(0) if tokens[0] in ("*", "/") else "*"
        unit = unit.times(_power(tokens), -1 if sign == "/" else 1)
    return unit


def _power(tokens: list[str]) -> Unit:
    """One factor with its power."""
    if not tokens:
        raise UnknownUnit("end of the text after / or *")
    token = tokens.pop(0)
    if token == "(":
        unit = _product(tokens)
        if not tokens:
            raise UnknownUnit("( without )")
        tokens.pop(0)
    else:
        unit = _atom(token)
    if tokens and tokens[0] in ("^", "**"):
        tokens.pop(0)
        return _raised(unit, tokens.pop(0) if tokens else "")
    return unit


def _raised(unit: Unit, power: str) -> Unit:
    if not re.fullmatch(r"-?[1-4]", power):
        raise UnknownUnit(f"power {power!r}")
    return Unit(1.0).times(unit, int(power))


def _atom(token: str) -> Unit:
    """A unit by name, or by name and trailing power (`m2`)."""
    token = _SPELLINGS.get(token, token)
    known = _named(token)
    if known is not None:
        return known
    name, power = re.sub(r"\d+$", "", token), re.sub(r"^\D*", "", token)
    known = _named(name) if power else None
    if known is None:
        raise UnknownUnit(token)
    return _raised(known, power)


@lru_cache(maxsize=256)
def _named(name: str) -> Unit | None:
    if name == "1":
        return Unit(1.0)
    if name in _BASES:
        return Unit(1.0, ((name, 1),))
    if name in _SCALES:
        size, zero = _SCALES[name]
        return Unit(size, (("K", 1),), zero)
    if name not in _TABLE:
        return None
    size, of = _TABLE[name]
    unit = parse_unit(of)
    return Unit(size * unit.factor, unit.powers)


def currency_in(powers: Powers) -> str | None:
    """The first currency among the powers."""
    return next((base for base, _ in powers if base in CURRENCIES), None)
