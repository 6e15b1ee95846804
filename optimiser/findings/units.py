"""Numbers in the user's units: what the case wrote for a path, else the trade's unit of its dimension."""

from __future__ import annotations

from typing import Any

from optimiser.inputs.case import Case
from optimiser.quantities import shown_unit, to_shown, unit_scale


class Units:
    """Units of one result."""

    def __init__(self, case: Case) -> None:
        self._currency = case.economics.currency
        self._written = {path: setting.unit for path, setting in case.settings().items()}
        for path, limit in case.limits.items():
            self._written.setdefault(path, limit.unit)

    def unit(self, path: str, dimension: str) -> str:
        """The unit in which a quantity is shown."""
        return self._written.get(path) or shown_unit(dimension, self._currency)

    def show(self, path: str, dimension: str, si: float) -> dict[str, Any]:
        """{value, unit} of an SI value."""
        unit = self.unit(path, dimension)
        return {"value": float(to_shown(si, unit, dimension, self._currency)), "unit": unit}

    def plain(self, dimension: str, si: float) -> dict[str, Any]:
        """{value, unit} in the trade's unit."""
        unit = shown_unit(dimension, self._currency)
        return {"value": float(to_shown(si, unit, dimension, self._currency)), "unit": unit}

    def convert(self, si: float, unit: str, dimension: str) -> float:
        """An SI value in a unit of the user's choice."""
        return float(to_shown(si, unit, dimension, self._currency))

    def step(self, unit: str, dimension: str) -> float:
        """Size in SI of one unit, as a difference (1 degC is 1 K)."""
        return unit_scale(unit, dimension, self._currency)
