"""Values of the decisions for each start: the case's own first, the others spread over the ranges."""

from __future__ import annotations

import re

from optimiser.inputs.case import Case
from optimiser.solve.starts import spread

# Where a range is open to walk in, starts keep this part of it away from either end.
MARGIN = 0.1


def starting_setpoints(case: Case, count: int, seed: int) -> list[dict[str, float]]:
    """One dictionary path -> SI value for each start.

    The first start stands in the middle of every range. Stage pressures follow from the others: they begin in equal
    ratios between the feed and the loop, since pressures drawn at random would compress backwards.
    """
    settings = case.settings()
    free = [path for path, setting in settings.items() if not setting.held and not _is_stage(path)]
    held = {path: setting.value for path, setting in settings.items() if setting.held}
    if not free:
        count = 1  # Nothing to spread: the section is calculated, and one start is all there is.
    shares = [[0.5] * len(free), *spread(max(count - 1, 1), max(len(free), 1), seed).tolist()]
    starts = []
    for share in shares[:count]:
        point = dict(held)
        for path, u in zip(free, share, strict=True):
            low, high = settings[path].low, settings[path].high
            point[path] = low + (MARGIN + (1.0 - 2.0 * MARGIN) * u) * (high - low)
        _stages(case, point)
        starts.append(point)
    return starts


def _is_stage(path: str) -> bool:
    return re.fullmatch(r"compression\.[^.]+\.discharge_pressure", path) is not None


def _stages(case: Case, point: dict[str, float]) -> None:
    """Discharge pressures in equal ratios, kept inside their ranges."""
    feed = min(stream.pressure.si for stream in case.feed.streams.values())
    stages = case.compression.stages
    ratio = (point["loop.pressure"] / feed) ** (1.0 / len(stages))
    for k, stage in enumerate(stages, start=1):
        setting = stage.discharge_pressure
        if setting is not None and not setting.held:
            target = feed * ratio**k
            point[f"compression.{stage.name}.discharge_pressure"] = min(
                max(target, setting.low), setting.high
            )
