"""The audit of a point as a result shows it."""

from __future__ import annotations

from typing import Any

import numpy as np

from optimiser.findings.result import number
from optimiser.findings.run import Workshop
from optimiser.findings.units import Units
from optimiser.forward.audit import AuditLine, AuditPoint, audit
from optimiser.forward.limits import case_limits
from optimiser.forward.stream import Stream

_KELVIN = ("temperature", "temperature_difference")


def point_of(workshop: Workshop, values: dict[str, float]) -> AuditPoint:
    """What the model reports at its present point, for the audit."""
    frame = workshop.section.frame
    streams = {name: _stream(name, record) for name, record in frame.streams.items()}
    setpoints = {path: number(variable) for path, (variable, _) in frame.decisions.items()}
    makeup = {name: values[f"feed.streams.{name}.flow"] for name in workshop.case.feed.streams}
    limits = case_limits(workshop.case) if workshop.section.frame.has_freedom else {}
    return AuditPoint(setpoints, makeup, streams["recycle"], values, streams, limits)


def _stream(name: str, record: Any) -> Stream:
    vapour = np.array([number(n) for n in record.vapour])
    liquid = np.zeros_like(vapour)
    if record.liquid is not None:
        liquid = np.array([number(n) for n in record.liquid])
    return Stream(name, vapour, liquid, number(record.temperature), number(record.pressure))


def audit_point(workshop: Workshop, values: dict[str, float], units: Units) -> dict[str, Any]:
    """{passed, worst, lines} of the model's present point."""
    report = audit(workshop.forward, point_of(workshop, values))
    rows = [_row(line, units) for line in report.lines]
    return {"passed": report.passed, "worst": _row(report.worst, units), "lines": rows}


def _row(line: AuditLine, units: Units) -> dict[str, Any]:
    """A line in the trade's units; differences in K for temperatures, of fractions as they are, else relative."""
    kelvin = line.dimension in _KELVIN
    size = 1.0 if kelvin or line.dimension == "fraction" else max(abs(line.audit), abs(line.model), 1e-300)
    return {
        "what": line.what,
        "model": units.plain(line.dimension, line.model)["value"],
        "audit": units.plain(line.dimension, line.audit)["value"],
        "quantity_unit": units.plain(line.dimension, line.audit)["unit"],
        "difference": line.difference / size,
        "allowed": line.allowed / size,
        "unit": "K" if kelvin else "-",
        "passed": line.passed,
    }
