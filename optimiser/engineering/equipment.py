"""The equipment file `models/equipment.yaml` as checked, frozen objects.

Errors: EquipmentError (a ValueError) lists everything wrong with a file; UnknownCostYearError (a LookupError)
is a year without a plant cost index.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from functools import cache
from pathlib import Path
from typing import Any, TypeGuard

from optimiser.engineering.correlations import (
    SIZE_UNITS,
    Correlation,
    Curve,
    LogQuadratic,
    PowerLaw,
    PressureFactor,
)

USES = ("exchanger", "water_cooled", "chiller", "compressor", "drive", "vessel")
CURVES: dict[str, Callable[[float, float, float], Curve]] = {"log-quadratic": LogQuadratic, "power": PowerLaw}
_KEYS = (
    "title",
    "size",
    "unit",
    "range",
    "curve",
    "coefficients",
    "bare_module",
    "pressure_factor",
    "year",
    "index",
    "currency",
    "source",
    "confidence",
)


class EquipmentError(ValueError):
    """Everything that is wrong with an equipment file, one line each."""

    def __init__(self, file: Path, problems: list[str]) -> None:
        self.file = file
        self.problems = problems
        super().__init__("\n".join(f"{file}: {problem}" for problem in problems))


class UnknownCostYearError(LookupError):
    """A year for which there is no plant cost index."""

    def __init__(self, year: int, known: tuple[int, ...]) -> None:
        self.year, self.known = year, known
        years = ", ".join(str(y) for y in known)
        super().__init__(
            f"no plant cost index for {year}; known are {years}; state the index of any other year"
        )


@dataclass(frozen=True)
class Equipment:
    """Correlations, what each is used for, and the plant cost indices.

    Attributes:
        correlations: by name.
        uses: name of the correlation for each of `USES`.
        indices: plant cost index by year.
    """

    correlations: Mapping[str, Correlation]
    uses: Mapping[str, str]
    indices: Mapping[int, float]

    def for_use(self, use: str) -> Correlation:
        """The correlation of one of `USES`."""
        return self.correlations[self.uses[use]]

    def cost_index(self, year: int) -> float:
        """Plant cost index of a year, never interpolated: prices jump (596 to 709 within 2020 to 2021).

        Raises:
            UnknownCostYearError: not in the file; names the years that are.
        """
        if year not in self.indices:
            raise UnknownCostYearError(year, tuple(sorted(self.indices)))
        return self.indices[year]


def load_equipment(file: Path | None = None) -> Equipment:
    """Equipment from a file, or the one that comes with the package.

    Raises:
        EquipmentError: the file is not as it has to be; all faults together.
        OSError: it cannot be read.
    """
    return _shipped() if file is None else read_equipment(file)


def cost_index(year: int) -> float:
    """As `Equipment.cost_index`, from the shipped file. Worked value: 2019: 607.5."""
    return _shipped().cost_index(year)


@cache
def _shipped() -> Equipment:
    return read_equipment(_shipped_file())


def _shipped_file() -> Path:
    """From a checkout the file lies beside the package, from a wheel inside it."""
    package = Path(__file__).resolve().parent.parent
    beside = package.parent / "models" / "equipment.yaml"
    return beside if beside.exists() else package / "_shipped" / "models" / "equipment.yaml"


def read_equipment(file: Path) -> Equipment:
    """Equipment from a file; raises as `load_equipment`."""
    from ruamel.yaml import YAML
    from ruamel.yaml.error import YAMLError

    try:
        tree = YAML(typ="safe", pure=True).load(file.read_text(encoding="utf-8"))
    except YAMLError as error:
        raise EquipmentError(file, [str(error)]) from error
    problems: list[str] = []
    equipment = _equipment(_Reader(problems, "", tree))
    if problems:
        raise EquipmentError(file, problems)
    return equipment


class _Reader:
    """One mapping of the file; what is wrong is noted and a harmless value goes on in its place."""

    def __init__(self, problems: list[str], path: str, tree: Any) -> None:
        self.problems, self.path = problems, path
        self.tree = tree if isinstance(tree, dict) else {}
        if not isinstance(tree, dict):
            self.fault("", "a mapping is wanted")

    def fault(self, key: object, text: str) -> None:
        place = ".".join(str(part) for part in (self.path, key) if part != "")
        self.problems.append(f"{place}: {text}" if place else text)

    def keys(self, allowed: tuple[str, ...]) -> None:
        """Unknown keys, with the nearest that is known."""
        for key in self.tree:
            if key not in allowed:
                near = get_close_matches(str(key), allowed, 1)
                self.fault(key, f"unknown key{f', did you mean {near[0]}?' if near else ''}")

    def inner(self, key: Any) -> _Reader:
        return _Reader(self.problems, f"{self.path}.{key}".lstrip("."), self.tree.get(key))

    def text(self, key: str, among: tuple[str, ...] | None = None) -> str:
        value = self.tree.get(key)
        if not isinstance(value, str) or not value.strip():
            self.fault(key, "text is wanted")
        elif among is not None and value not in among:
            self.fault(key, f"{value} is none of {', '.join(among)}")
        return str(value)

    def number(self, key: Any) -> float:
        value = self.tree.get(key)
        if _is_number(value) and value > 0:
            return float(value)
        self.fault(key, "a number above 0 is wanted")
        return 1.0

    def numbers(self, key: str, count: int) -> tuple[float, ...]:
        value = self.tree.get(key)
        if isinstance(value, list) and len(value) == count and all(_is_number(v) for v in value):
            return tuple(float(v) for v in value)
        self.fault(key, f"a list of {count} numbers is wanted")
        return (1.0,) * count

    def span(self, key: str) -> tuple[float, float]:
        low, high = self.numbers(key, 2)
        if key in self.tree and not 0 < low <= high:
            self.fault(key, "a range above 0, low end first, is wanted")
        return low, high


def _is_number(value: Any) -> TypeGuard[float]:
    return isinstance(value, (int, float)) and not isinstance(value, bool) and abs(value) < 1e300


def _equipment(top: _Reader) -> Equipment:
    top.keys(("equipment", "uses", "correlations", "cost_index"))
    if top.tree.get("equipment") != 1:
        top.fault("equipment", "1 is wanted, the version of this layout")
    listed = top.inner("correlations")
    correlations = {str(name): _correlation(str(name), listed.inner(name)) for name in listed.tree}
    uses = top.inner("uses")
    uses.keys(USES)
    chosen = {use: uses.text(use, tuple(correlations)) for use in USES}
    return Equipment(correlations, chosen, _indices(top.inner("cost_index")))


def _indices(table: _Reader) -> dict[int, float]:
    table.keys(("source", "years"))
    table.text("source")
    years = table.inner("years")
    found: dict[int, float] = {}
    for year in years.tree:
        if not isinstance(year, int):
            years.fault(year, "a year is wanted")
            continue
        row = years.inner(year)
        row.keys(("value", "confidence"))
        row.text("confidence")
        found[year] = row.number("value")
    return found


def _correlation(name: str, read: _Reader) -> Correlation:
    read.keys(_KEYS)
    low, high = read.span("range")
    curve = CURVES.get(read.text("curve", tuple(CURVES)), LogQuadratic)(*read.numbers("coefficients", 3))
    fixed, scaled = read.numbers("bare_module", 2)
    result = Correlation(
        name=name,
        title=read.text("title"),
        size=read.text("size"),
        unit=read.text("unit", tuple(SIZE_UNITS)),
        low=low,
        high=high,
        curve=curve,
        fixed=fixed,
        scaled=scaled,
        pressure=_pressure(read.inner("pressure_factor")) if "pressure_factor" in read.tree else None,
        year=int(read.number("year")),
        index=read.number("index"),
        currency=read.text("currency", ("USD",)),
        source=read.text("source"),
        confidence=read.text("confidence"),
    )
    rising = curve.rising(low, high)
    if not rising[0] < rising[1]:
        read.fault("coefficients", "the cost rises nowhere within the range")
    return result


def _pressure(read: _Reader) -> PressureFactor:
    read.keys(("coefficients", "range"))
    c1, c2, c3 = read.numbers("coefficients", 3)
    low, high = read.span("range")
    return PressureFactor(c1, c2, c3, low, high)
