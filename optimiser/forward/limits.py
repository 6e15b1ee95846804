"""Everything that a case forbids, by result path: limits, minimum approaches, ranges of decisions."""

from __future__ import annotations

from optimiser.inputs.case import Case, CoolStep

Ends = tuple[float | None, float | None]


def case_limits(case: Case) -> dict[str, Ends]:
    """(low, high) by result path, SI; None for an open side, the tightest of several ends."""
    found: dict[str, Ends] = {}
    for path, limit in case.limits.items():
        _tighten(found, path, (limit.low, limit.high))
    for path, setting in case.settings().items():
        _tighten(found, path, (setting.low, setting.high))
    for step in case.reactor:
        if isinstance(step, CoolStep):
            _tighten(found, f"reactor.{step.name}.approach", (step.minimum_approach.si, None))
    for name in ("water_cooler", "cold_exchanger"):
        cooler = getattr(case.condensation, name)
        if cooler is not None:
            _tighten(found, f"condensation.{name}.approach", (cooler.minimum_approach.si, None))
    return found


def _tighten(found: dict[str, Ends], path: str, ends: Ends) -> None:
    low, high = found.get(path, (None, None))
    lows = [end for end in (low, ends[0]) if end is not None]
    highs = [end for end in (high, ends[1]) if end is not None]
    found[path] = max(lows, default=None), min(highs, default=None)
