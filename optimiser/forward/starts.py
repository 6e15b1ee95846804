"""Setpoints for a start where the loop cannot be closed at those that were asked for.

Far corners of the ranges hold points that no plant could be run at: a cold bed converts so little that its
    recycle
loses all pressure in the catalyst. A start needs no more than a neighbour that exists, so the free decisions
retreat half the way to the middle of their ranges, and again.
"""

from __future__ import annotations

import re
from collections.abc import Mapping

from optimiser.inputs.case import Case

RETREATS = 4


def retreated(case: Case, setpoints: Mapping[str, float]) -> dict[str, float]:
    """Setpoints one retreat further in; what is held stays, stage pressures follow the loop's."""
    settings, moved = case.settings(), dict(setpoints)
    for path, setting in settings.items():
        if setting.held or path not in moved or _stage(path):
            continue
        moved[path] = 0.5 * moved[path] + 0.25 * (setting.low + setting.high)
    factor = moved["loop.pressure"] / setpoints["loop.pressure"]
    stages = case.compression.stages
    for k, stage in enumerate(stages, start=1):
        path, allowed = f"compression.{stage.name}.discharge_pressure", stage.discharge_pressure
        if allowed is not None and not allowed.held and path in moved:
            wanted = moved[path] * factor ** (k / len(stages))
            moved[path] = min(max(wanted, allowed.low), allowed.high)
    return moved


def _stage(path: str) -> bool:
    return re.fullmatch(r"compression\.[^.]+\.discharge_pressure", path) is not None
