"""Work of a refrigeration machine from its two temperature levels.

Sources:
    [1] Carnot's limit, exact; second-law efficiency of 0.45 to 0.60 for industrial ammonia machines from
        memory.
"""

from __future__ import annotations

from typing import Any


def refrigeration_work(duty: Any, evaporating: Any, condensing: Any, second_law_efficiency: Any) -> Any:
    """Shaft work that lifts a duty from the evaporating to the condensing temperature, W [1].

    W = Q (Tc - Te)/Te/eta2. It grows as the level falls, which is what a colder separator costs.

    Range: Te < Tc; Te from about 235 to 285 K for one refrigerant, with eta2 falling off outside.
    Worked value: 1 MW from 253.15 K to 308 K at 0.5: 433.34 kW.

    Args:
        duty: Q taken up at the evaporator, W.
        evaporating: Te, K.
        condensing: Tc, K.
        second_law_efficiency: eta2, Carnot's work over the real one, -.
    """
    return duty * (condensing - evaporating) / (evaporating * second_law_efficiency)
