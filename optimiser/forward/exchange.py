"""Exchangers in plain numbers: ends, mean difference, area."""

from __future__ import annotations

from dataclasses import dataclass

from optimiser.engineering.heat import coefficient_at, log_mean

LEAST_DIFFERENCE = 0.1
"""Ends that meet or cross are counted as this far apart, K, so that a start has an area."""


@dataclass(frozen=True)
class Exchanged:
    """One exchanger.

    Attributes:
        path: its result path.
        use: what stands on its cold side, as the cost correlations name it.
        duty: W.
        area: m2.
        approach: smaller of the two end differences, K; negative where temperatures cross.
        outlet_temperature: of the hot side, K.
        pressure: of the hot gas that enters, Pa.
    """

    path: str
    use: str
    duty: float
    area: float
    approach: float
    outlet_temperature: float
    pressure: float


def exchange(
    path: str,
    use: str,
    duty: float,
    hot: tuple[float, float],
    cold: tuple[float, float],
    pressure: float,
    coefficient: float,
) -> Exchanged:
    """A counter-current exchanger.

    Args:
        path: its result path.
        use: correlation that costs it.
        duty: W.
        hot: temperatures of the hot side in and out, K.
        cold: temperatures of the cold side in and out, K.
        pressure: of the hot gas that enters, Pa.
        coefficient: at 150 bar, W/m2/K.
    """
    ends = hot[0] - cold[1], hot[1] - cold[0]
    mean = log_mean(*(max(end, LEAST_DIFFERENCE) for end in ends))
    area = duty / (coefficient_at(coefficient, pressure) * mean)
    return Exchanged(path, use, duty, float(area), min(ends), hot[1], pressure)
