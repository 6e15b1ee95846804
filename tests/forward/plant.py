"""The shipped ammonia case as tests of the forward room use it: prepared, closed, changed."""

from __future__ import annotations

from dataclasses import dataclass, replace

from optimiser.chemistry.reactions import Chemistry
from optimiser.engineering.costs import load_equipment
from optimiser.forward.audit import AuditPoint
from optimiser.forward.bed import AUDIT_TOLERANCE
from optimiser.forward.limits import case_limits
from optimiser.forward.stream import Walk
from optimiser.forward.walk import Section
from optimiser.inputs import read_case
from optimiser.inputs.case import Case
from optimiser.inputs.model import read_model

CASE = "ammonia-loop"
CLOSED = 1e-7


def chemistry_of(kind: str = "srk") -> Chemistry:
    return Chemistry.build(read_model("ammonia"), kind)


def middle(case: Case) -> dict[str, float]:
    """The middle of every range, stage pressures in equal ratios."""
    points = {path: 0.5 * (s.low + s.high) for path, s in case.settings().items()}
    stages = case.compression.stages
    feed = min(stream.pressure.si for stream in case.feed.streams.values())
    ratio = (points["loop.pressure"] / feed) ** (1.0 / len(stages))
    for k, stage in enumerate(stages[:-1], start=1):
        points[f"compression.{stage.name}.discharge_pressure"] = feed * ratio**k
    return points


def prepared(*sets: str, chemistry: Chemistry | None = None) -> Section:
    """A section of the shipped case with changes."""
    case = read_case(CASE, list(sets))
    return Section(case, chemistry or chemistry_of(case.equation_of_state), load_equipment())


def closed(section: Section, setpoints: dict[str, float], **how) -> Walk:
    """The loop closed as far as the integrator's steps let it, and a last pass from its own recycle."""
    tight = section.converge(setpoints, tolerance=CLOSED, iterations=60, bed_tolerance=AUDIT_TOLERANCE, **how)
    return section.walk(setpoints, tight.makeup, tight.recycle)


def point_of(section: Section, walk: Walk) -> AuditPoint:
    """What a model that agrees with `walk` would report."""
    streams = dict(walk.streams)
    return AuditPoint(
        dict(walk.setpoints),
        dict(walk.makeup),
        walk.recycle,
        dict(walk.quantities),
        streams,
        case_limits(section.case),
    )


@dataclass
class Plant:
    """The shipped case closed in the middle of its ranges."""

    section: Section
    setpoints: dict[str, float]
    walk: Walk

    @property
    def point(self) -> AuditPoint:
        """What an optimum there would report, without limits, which the middle need not hold."""
        return replace(point_of(self.section, self.walk), limits={})
