"""The audit of a point as a result shows it."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from optimiser.findings.result import number
from optimiser.findings.run import Workshop
from optimiser.findings.units import Units
from optimiser.forward.audit import KELVIN, Line, Point, audit
from optimiser.forward.streams import StateProblem, Stream
from optimiser.quantities import Limit

_KELVIN = ("temperature", "temperature_difference")


def point_of(workshop: Workshop, values: dict[str, float]) -> Point:
    """What the model reports at its present point, for the audit."""
    frame = workshop.section.frame
    streams = {name: _stream(name, record) for name, record in frame.streams.items()}
    setpoints = {path: number(variable) for path, (variable, _) in frame.decisions.items()}
    setpoints["loop.purge_fraction"] = values["loop.purge_fraction"]
    makeup = {name: values[f"feed.streams.{name}.flow"] for name in workshop.case.feed.streams}
    dimensions = {path: reported.dimension for path, reported in frame.reported.items()}
    limits = dict(workshop.case.limits)
    for path, setting in workshop.case.settings().items():
        if not setting.held and path not in limits:
            limits[path] = Limit(setting.low, setting.high, setting.unit, setting.dimension)
    return Point(setpoints, makeup, streams["circulator.out"], values, dimensions, streams, limits)


def _stream(name: str, record: Any) -> Stream:
    vapour = np.array([number(n) for n in record.vapour])
    liquid = np.zeros_like(vapour)
    if record.liquid is not None:
        liquid = np.array([number(n) for n in record.liquid])
    return Stream(name, vapour, liquid, number(record.temperature), number(record.pressure))


def audit_point(workshop: Workshop, values: dict[str, float], units: Units) -> dict[str, Any]:
    """{passed, worst, lines} of the model's present point."""
    try:
        lines, _ = audit(workshop.forward, point_of(workshop, values))
    except (StateProblem, ArithmeticError, ValueError) as problem:
        return {
            "passed": False,
            "worst": None,
            "lines": [],
            "reason": f"the section cannot be rebuilt: {problem}",
        }
    rows = [_row(line, units) for line in lines]
    worst = max(lines, key=_badness)
    return {"passed": all(line.passed for line in lines), "worst": _row(worst, units), "lines": rows}


def _badness(line: Line) -> float:
    """Difference over what is allowed; a difference that is no number is worse than any."""
    share = line.difference / line.allowed
    return share if math.isfinite(share) else math.inf


def _finite(value: float) -> float | None:
    return float(value) if math.isfinite(value) else None


def _row(line: Line, units: Units) -> dict[str, Any]:
    """A line with numbers in the trade's units; differences in K for temperatures, else relative."""
    kelvin = line.dimension in _KELVIN and line.allowed == KELVIN
    return {
        "what": line.what,
        "model": _finite(units.plain(line.dimension, line.model)["value"]),
        "audit": _finite(units.plain(line.dimension, line.audit)["value"]),
        "quantity_unit": units.plain(line.dimension, line.audit)["unit"],
        "difference": _finite(line.difference),
        "allowed": line.allowed,
        "unit": "K" if kelvin else "-",
        "passed": line.passed,
    }
