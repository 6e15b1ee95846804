"""Numbers as a reader wants them: four or five digits that mean something, thousands apart, then the unit."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from typing import Any

# From here on whole numbers are shown; below, decimals make up the digits.
WHOLE = 1000.0
# Outside this span a power of ten reads better than a row of zeros.
SMALLEST, LARGEST = 1e-4, 1e12


def number(value: float | None, digits: int = 4) -> str:
    """A computed number.

    Args:
        value: the number; None is shown as a dash.
        digits: significant digits below 1000; above, five are kept and thousands are set apart.
    """
    if value is None or not math.isfinite(value):
        return "-"
    if value == 0.0:
        return "0"
    exponent = _exponent(value, digits)
    if not SMALLEST <= abs(value) < LARGEST:
        return f"{value:.{digits - 1}e}"
    if 10.0**exponent >= WHOLE:
        return f"{_significant(value, max(digits, 5)):,.0f}"
    return f"{value:.{digits - 1 - exponent}f}"


def written(value: float | None) -> str:
    """A number that a user wrote, such as the end of a range: no more digits than it needs, six at most."""
    if value is None or not math.isfinite(value):
        return "-"
    rounded = _significant(value, 6)
    if rounded != 0.0 and not SMALLEST <= abs(rounded) < LARGEST:
        return f"{rounded:g}"
    text = f"{rounded:,.10f}"
    return text.rstrip("0").rstrip(".")


def column(values: Sequence[float | None]) -> list[str]:
    """Numbers of one column to one decimal place: that of the largest with four digits, five from 1000 on."""
    known = [abs(v) for v in values if v is not None and math.isfinite(v) and v != 0.0]
    if not known or not SMALLEST <= max(known) < LARGEST:
        return [number(v) for v in values]
    exponent = _exponent(max(known), 4)
    decimals = (4 if 10.0**exponent >= WHOLE else 3) - exponent
    return [_placed(v, decimals) for v in values]


def _placed(value: float | None, decimals: int) -> str:
    """The number to that decimal place (before the point if negative), but never rounded away to nothing."""
    if value is None or not math.isfinite(value) or value == 0.0:
        return number(value)
    rounded = round(value, decimals)
    return f"{rounded:,.{max(decimals, 0)}f}" if rounded != 0.0 else number(value, 2)


def share(value: float | None) -> str:
    """A part of a whole (1 is all of it) in percent with one decimal."""
    return "-" if value is None or not math.isfinite(value) else f"{100.0 * value:.1f} %"


def mole_percent(fraction: float | None) -> str:
    """A mole fraction in percent with two decimals; traces are shown as such."""
    if fraction is None or not math.isfinite(fraction):
        return "-"
    percent = 100.0 * fraction
    if percent == 0.0:
        return "0"
    return "<0.01" if 0.0 < percent < 0.005 else f"{percent:.2f}"


def unit_name(unit: str | None) -> str:
    """The unit as shown: nothing for pure numbers."""
    return "" if unit in (None, "", "-", "1") else str(unit)


def amount(quantity: Any, digits: int = 4) -> str:
    """A quantity {value, unit} as text, such as `412.4 degC`; a dash if there is none."""
    if not quantity:
        return "-"
    return f"{number(quantity.get('value'), digits)} {unit_name(quantity.get('unit'))}".rstrip()


def aligned(pairs: Iterable[tuple[str, str]]) -> list[str]:
    """Texts (number, unit) set so that numbers end and units begin in one column."""
    rows = list(pairs)
    left = max((len(n) for n, _ in rows), default=0)
    right = max((len(u) for _, u in rows), default=0)
    return [f"{n:>{left}} {u:<{right}}" if right else f"{n:>{left}}" for n, u in rows]


def _exponent(value: float, digits: int) -> int:
    """Power of ten of the number once it is rounded, so that 999.96 counts as 1000."""
    return int(f"{value:.{digits - 1}e}".partition("e")[2])


def _significant(value: float, digits: int) -> float:
    return float(f"{value:.{digits}g}")
