"""Where a start goes when the loop cannot be closed at the setpoints that were asked for.

Far corners of the ranges hold points that no plant could be run at: a cold bed converts so little that its
recycle loses all pressure in the catalyst. A start needs no more than a neighbour that exists, so the free
decisions retreat half the way to the middle of their ranges, and again. Where the middle is no better, most
of the pressure drop of the beds is left out, and at last the loop is left open after a pass or two: the
equations that a start is for bring both back.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from optimiser.inputs.case import Case

RETREATS = 3
LIGHT_DRAG = 0.1
CLOSED_PASSES, OPEN_PASSES = 20, 2


@dataclass(frozen=True)
class Attempt:
    """One try of a start.

    Attributes:
        setpoints: SI by path.
        drag: part of the beds' pressure drop that counts.
        iterations: most passes to make.
        must_close: whether a loop that stays open is a failure.
    """

    setpoints: dict[str, float]
    drag: float = 1.0
    iterations: int = CLOSED_PASSES
    must_close: bool = True


def attempts(case: Case, setpoints: Mapping[str, float]) -> Iterator[Attempt]:
    """What is to be tried, one after the other."""
    asked = dict(setpoints)
    yield Attempt(asked)
    known = asked
    for _ in range(RETREATS):
        known = retreated(case, known)
        if known == asked:
            break
        yield Attempt(known)
    yield Attempt(known, LIGHT_DRAG)
    yield Attempt(asked, LIGHT_DRAG, OPEN_PASSES, must_close=False)
    yield Attempt(known, LIGHT_DRAG, 1, must_close=False)


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
