"""Staged compression of an ideal gas in closed form, for checks: the section itself compresses a real gas.

Sources:
    [1] Isentropic work of an ideal gas with constant heat capacities, any text on thermodynamics.
"""

from __future__ import annotations

from typing import Any

from optimiser.chemistry.maths import R, power


def staged_work(
    inlet_temperature: Any, ratio: Any, heat_capacity_ratio: Any, efficiency: Any = 1.0, stages: int = 1
) -> Any:
    """Shaft work of equal-ratio stages with cooling to the inlet temperature between them, J/mol [1].

    w = n k/(k-1) R T1 (r^((k-1)/(n k)) - 1)/eta.

    Range: ideal gas, constant k; 4 % low for the make-up and 10 % low for the circulator of a synthesis at
    200 bar.
    Worked value: 300 K, ratio 10, k = 1.4, efficiency 0.78, one stage: 10416.877 J/mol.

    Args:
        inlet_temperature: T1, K.
        ratio: r, last discharge over first inlet pressure, -.
        heat_capacity_ratio: k, cp/cv, a number above 1, -.
        efficiency: eta, isentropic, -.
        stages: n, at least 1.
    """
    exponent = (heat_capacity_ratio - 1.0) / heat_capacity_ratio
    rise = power(ratio, exponent / stages) - 1.0
    return stages * R * inlet_temperature * rise / (exponent * efficiency)


def stage_discharge_temperature(
    inlet_temperature: Any, ratio: Any, heat_capacity_ratio: Any, efficiency: Any = 1.0
) -> Any:
    """Temperature after one stage, K [1]: T1 (1 + (r^((k-1)/k) - 1)/eta).

    Worked value: 300 K, ratio 10, k = 1.4, efficiency 0.78: 657.96 K. Arguments as for `staged_work`.
    """
    exponent = (heat_capacity_ratio - 1.0) / heat_capacity_ratio
    return inlet_temperature * (1.0 + (power(ratio, exponent) - 1.0) / efficiency)
