"""From bare-module costs to capital in the money of a case, and from capital to annual cost.

`Correlation`, `bare_module`, `out_of_range`, `Equipment`, `load_equipment` and `cost_index` are found here
too, so that users of costs need one import.

Sources:
    [1] Turton, R., et al., Analysis, Synthesis and Design of Chemical Processes: total module cost is 1.18
        times the sum of the bare modules (15 % contingency, 3 % fee).
    [2] Capacity exponents (the six-tenths rule), any text on cost estimating.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from optimiser.chemistry.maths import power
from optimiser.engineering.correlations import (
    Correlation,
    bare_module,
    gauge_bar,
    out_of_range,
    purchased_cost,
)
from optimiser.engineering.equipment import (
    Equipment,
    EquipmentError,
    UnknownCostYearError,
    cost_index,
    load_equipment,
)

__all__ = [
    "Correlation",
    "CostBasis",
    "Equipment",
    "EquipmentError",
    "UnknownCostYearError",
    "bare_module",
    "capital_recovery",
    "cost_index",
    "escalated",
    "gauge_bar",
    "load_equipment",
    "out_of_range",
    "purchased_cost",
    "quoted",
]


def escalated(cost: Any, index: float, base_index: float) -> Any:
    """Cost in the money of another year: C I/I0.

    Worked value: 100 at index 397 is 200.982 at index 797.9.
    """
    return cost * (index / base_index)


def quoted(cost: Any, size: Any, quoted_size: Any, exponent: Any) -> Any:
    """Cost at another size than the one a price was quoted for [2]: C (S/S0)^n, in the money of the quote.

    Range: sizes within a factor of about 5. Worked value: 1e6 at twice the size with 0.6: 1515716.57.

    Args:
        cost: C, of the quote.
        size: S, unit of `quoted_size`.
        quoted_size: S0, above 0.
        exponent: n, a number, usually 0.5 to 0.8.
    """
    return cost * power(size / quoted_size, exponent)


def capital_recovery(interest: Any, life: Any) -> Any:
    """Share of a capital to pay each year so that it is paid back with interest: i (1+i)^n/((1+i)^n - 1).

    Range: i > 0, n > 0. Worked value: 10 % over 20 years: 0.1174596248.

    Args:
        interest: i, a year, -.
        life: n, a number, years.
    """
    growth = power(1.0 + interest, life)
    return interest * growth / (growth - 1.0)


@dataclass(frozen=True)
class CostBasis:
    """How a case states its capital.

    Attributes:
        index: plant cost index of the year whose money the case is in.
        exchange_rate: money of the case per USD.
        fees_factor: contingency and fees on the bare modules [1].
        location_factor: cost at the site over cost at the United States Gulf coast.
    """

    index: float
    exchange_rate: float = 1.0
    fees_factor: float = 1.18
    location_factor: float = 1.0

    def item(
        self, correlation: Correlation, size: Any, pressure_barg: Any = None, material: Any = 1.0
    ) -> Any:
        """Capital of one item by its correlation, money of the case. Arguments as for `bare_module`."""
        cost = bare_module(correlation, size, pressure_barg, material)
        total = escalated(cost, self.index, correlation.index)
        return total * (self.exchange_rate * self.fees_factor * self.location_factor)

    def quote(self, cost: Any, size: Any, quoted_size: Any, exponent: Any, quoted_index: float) -> Any:
        """Capital of one item by a price quoted in the money of the case, in the year whose index is
        `quoted_index`.

        Only size and year are moved: a quote is for what the user says it is for, so no factor is laid on it.
        """
        return escalated(quoted(cost, size, quoted_size, exponent), self.index, quoted_index)
