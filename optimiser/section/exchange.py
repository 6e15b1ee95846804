"""Heat exchange: coefficient, mean temperature difference, area and minimum approach of every exchanger."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from optimiser.engineering.heat import coefficient_at, log_mean
from optimiser.quantities import Quantity
from optimiser.section.frame import Edge, Frame


@dataclass(frozen=True)
class Exchanger:
    """What costs need to know of one exchanger: duty W, area m2, pressure of the loop gas Pa.

    `use` names the correlation by what stands on the cold side.
    """

    path: str
    use: str
    duty: Any
    area: Any
    pressure: Any


def exchanger_coefficient(reference: float, pressure: Any) -> Any:
    """Overall coefficient at the hot side's pressure, W/m2/K."""
    return coefficient_at(reference, pressure)


def build_exchanger(
    frame: Frame,
    block: Any,
    path: str,
    duty: Any,
    differences: tuple[Any, Any],
    pressure: Any,
    coefficient: float,
    minimum: Quantity | None,
    use: str,
) -> Exchanger:
    """Counter-current exchanger from its duty and its two end differences.

    Args:
        duty: W.
        differences: hot minus cold at either end, K.
        pressure: of the hot side, Pa.
        coefficient: W/m2/K at 150 bar.
        minimum: smallest difference allowed at either end; None where the design has none (water-cooled ends).
    """
    ends = [
        frame.define(block, f"difference_{k}", "difference", difference, low=0.5, start=40.0)
        for k, difference in enumerate(differences, start=1)
    ]
    mean = frame.define(block, "mean_difference", "difference", log_mean(*ends), low=0.1, start=40.0)
    area = frame.define(
        block, "area", "area", duty / (exchanger_coefficient(coefficient, pressure) * mean), low=0.0
    )
    frame.report(f"{path}.duty", "power", duty)
    frame.report(f"{path}.area", "area", area)
    frame.report(f"{path}.approach", "temperature_difference", *ends, pick=min)
    if minimum is not None:
        for end in ends:
            edge = Edge(f"{path}.minimum_approach", end, "low", minimum.si, minimum.unit, f"{path}.approach")
            frame.edge(edge)
    return Exchanger(path, use, duty, area, pressure)
