"""The audit: an optimum's numbers against one pass through the section, computed apart from the equations
solved.

One pass begins with the optimum's own recycle. The loop must close on it, everything reported must be what
the pass gives, the reported streams must balance among themselves, and every limit must hold for the pass's
own values.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from optimiser.forward.agreement import AuditLine, Comparison
from optimiser.forward.balances import balance_lines
from optimiser.forward.stream import ForwardFailure, Stream, Walk
from optimiser.forward.walk import Section

__all__ = ["AuditLine", "AuditPoint", "AuditReport", "audit"]


@dataclass(frozen=True)
class AuditPoint:
    """What an optimum claims.

    Attributes:
        setpoints: SI by path.
        makeup: flow of each feed stream, mol/s.
        recycle: gas after the purge, before it is warmed.
        quantities: reported, SI by result path.
        streams: reported, by name.
        limits: (low, high) by result path, SI; None for an open side.
        damkohler: coefficients of beds with `rate: damkohler`, by bed.
    """

    setpoints: Mapping[str, float]
    makeup: Mapping[str, float]
    recycle: Stream
    quantities: Mapping[str, float]
    streams: Mapping[str, Stream]
    limits: Mapping[str, tuple[float | None, float | None]] = field(default_factory=dict)
    damkohler: Mapping[str, tuple[float, ...]] = field(default_factory=dict)


@dataclass(frozen=True)
class AuditReport:
    """The verdict.

    Attributes:
        lines: everything compared.
        walk: the audit's own pass; None where it could not be made.
    """

    lines: list[AuditLine]
    walk: Walk | None

    @property
    def passed(self) -> bool:
        """Whether every line passed."""
        return all(line.passed for line in self.lines)

    @property
    def worst(self) -> AuditLine:
        """The line that uses most of what it is allowed."""
        return max(self.lines, key=lambda line: line.share)

    @property
    def failed(self) -> list[AuditLine]:
        """The lines that did not pass, the worst first."""
        return sorted((line for line in self.lines if not line.passed), key=lambda line: -line.share)


def audit(section: Section, point: AuditPoint) -> AuditReport:
    """Audit a point of a section's case.

    A pass that cannot be made is a failed audit whose one line says why.
    """
    try:
        walk = section.walk(point.setpoints, point.makeup, point.recycle, damkohler=point.damkohler)
    except (ForwardFailure, ArithmeticError) as problem:
        why = f"one pass from the optimum's recycle: {problem}"
        return AuditReport([AuditLine(why, 0.0, 0.0, 1.0, 0.0, "fraction")], None)
    comparison = Comparison(section.case, section.chemistry.mixture.names, walk)
    lines = [
        *comparison.closure(point.recycle),
        *balance_lines(section.case, section.chemistry, point.streams, point.quantities, walk),
        *comparison.streams(point.streams),
        *comparison.quantities(point.quantities),
        *comparison.limits(point.limits),
    ]
    return AuditReport(lines, walk)
