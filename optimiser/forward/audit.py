"""The audit: the section rebuilt at the decisions of an optimum, and everything reported compared with it.

Beds by a stiff integrator, phases by their own flash, one pass from the optimum's recycle stream. Nothing here knows
the equations that the optimum was found with.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from optimiser.forward.streams import Stream
from optimiser.forward.walk import Section, Walk
from optimiser.quantities import Limit

Floats = NDArray[np.float64]
RELATIVE = 1e-3
"""Allowed difference of product, work, duties, areas and costs, and of the loop's closure, relative."""
KELVIN = 0.2
BALANCE = 1e-6
FRACTION = 2e-3
LEAST_SHARE = 1e-4
"""A species that is less of a stream than this is compared with the stream and not with itself."""


@dataclass(frozen=True)
class Line:
    """One comparison; `difference` and `allowed` are relative unless the dimension is a temperature or a fraction."""

    what: str
    model: float
    audit: float
    difference: float
    allowed: float
    dimension: str

    @property
    def passed(self) -> bool:
        """Whether the difference is allowed; a difference that is no number is not."""
        return bool(self.difference <= self.allowed)


@dataclass
class Point:
    """What an optimum reports.

    Attributes:
        setpoints: decisions by path, SI.
        makeup: flow of each feed stream, mol/s.
        recycle: gas at the mixing point.
        quantities: reported quantities by path, SI; `dimensions` of the same paths.
        streams: reported streams.
        limits: limits and ranges by result path, SI.
    """

    setpoints: dict[str, float]
    makeup: dict[str, float]
    recycle: Stream
    quantities: Mapping[str, float]
    dimensions: Mapping[str, str]
    streams: Mapping[str, Stream]
    limits: Mapping[str, Limit] = field(default_factory=dict)


def audit(section: Section, point: Point) -> tuple[list[Line], Walk]:
    """Every line of the audit, and the pass behind it."""
    walk = section.walk(point.setpoints, point.makeup, point.recycle)
    add_approaches(section, walk)
    lines = [
        *_closure(section, walk, point),
        *_balances(section, point),
        _energy(section, walk, point),
        *_streams(walk, point),
        *_quantities(walk, point),
        *_limits(walk, point),
    ]
    return lines, walk


def add_approaches(section: Section, walk: Walk) -> None:
    """Approach of each bed to equilibrium, both ways, of its first reaction."""
    from optimiser.chemistry.equilibrium import approach_fraction, approach_temperature

    for name, profile in walk.beds.items():
        inlet, outlet = walk.streams[f"reactor.{name}.in"], walk.streams[f"reactor.{name}.out"]
        state = (outlet.temperature, outlet.pressure)
        fraction = approach_fraction(
            section.chemistry, inlet.vapour.tolist(), profile.extents[-1].tolist(), *state
        )
        phase = section.mixture.gas(*state, outlet.vapour.tolist())
        kelvin = approach_temperature(section.chemistry, phase, *state)
        walk.quantities[f"reactor.{name}.approach_fraction"] = fraction[0]
        walk.quantities[f"reactor.{name}.approach_temperature"] = kelvin[0]


def _closure(section: Section, walk: Walk, point: Point) -> list[Line]:
    """The recycle comes back as it went in, species by species."""
    lines = []
    total = float(point.recycle.vapour.sum())
    for k, name in enumerate(section.mixture.names):
        given, back = float(point.recycle.vapour[k]), float(walk.recycle.vapour[k])
        base = max(given, LEAST_SHARE * total)
        lines.append(
            Line(
                f"closure of the loop, {name}", given, back, abs(back - given) / base, RELATIVE, "molar_flow"
            )
        )
    return lines


def _balances(section: Section, point: Point) -> list[Line]:
    """Reported streams: what goes in of each element, and of mass, comes out."""
    species = section.mixture.species
    fed = sum(point.streams[f"feed.{name}"].flows for name in point.makeup)
    out = point.streams["product"].flows + point.streams["purge"].flows
    lines = []
    for element in sorted({e for s in species for e in s.elements}):
        atoms = np.array([s.elements.get(element, 0.0) for s in species])
        lines.append(
            _relative(f"balance of {element}", float(atoms @ fed), float(atoms @ out), BALANCE, "molar_flow")
        )
    mass = np.array(section.mixture.molar_mass)
    lines.append(_relative("balance of mass", float(mass @ fed), float(mass @ out), BALANCE, "mass_flow"))
    return lines


def _energy(section: Section, walk: Walk, point: Point) -> Line:
    """Enthalpy in plus shaft work less heat given away, against enthalpy out, relative to the heat of reaction.

    Reported streams and duties alone: the audit's own pass closes by construction.
    """
    mixture, q = section.mixture, point.quantities
    fed = sum(point.streams[f"feed.{name}"].enthalpy(mixture) for name in point.makeup)
    out = point.streams["product"].enthalpy(mixture) + point.streams["purge"].enthalpy(mixture)
    driver = section.case.compression.driver_efficiency.si
    work = (q["compression.power"] + q["loop.circulator_power"]) * driver
    stages = [s.name for s in section.case.compression.stages]
    taken = sum(q[f"compression.{name}.intercooler_duty"] for name in stages)
    for step in section.case.reactor:
        if getattr(step, "sink", "feed") != "feed":
            taken += q[f"reactor.{step.name}.duty"]
    for part in ("water_cooler", "chiller"):
        taken += q.get(f"condensation.{part}.duty", 0.0)
    heat = _heat_of_reaction(section, walk)
    gap = abs(fed + work - taken - out) / heat
    return Line("balance of energy over heat of reaction", fed + work - taken, out, gap, BALANCE, "power")


def _heat_of_reaction(section: Section, walk: Walk) -> float:
    """Heat that the reactions release or take, W."""
    total = 0.0
    for profile in walk.beds.values():
        for extent, reaction in zip(profile.extents[-1], section.chemistry.reactions, strict=True):
            total += abs(float(extent) * float(reaction.enthalpy(float(profile.temperature[-1]))))
    return total


def _streams(walk: Walk, point: Point) -> list[Line]:
    """Temperature, pressure, each flow, and the share of vapour where there is liquid, of every stream."""
    lines = []
    for name, reported in point.streams.items():
        found = walk.streams.get(name)
        if found is None:
            continue
        given, known = reported.temperature, found.temperature
        lines.append(Line(f"temperature of {name}", given, known, abs(given - known), KELVIN, "temperature"))
        pressures = (reported.pressure, found.pressure)
        lines.append(_relative(f"pressure of {name}", *pressures, RELATIVE, "pressure"))
        base = np.maximum(np.abs(found.flows), max(LEAST_SHARE * float(found.flows.sum()), 1e-9))
        gaps = np.abs(reported.flows - found.flows) / base
        worst = int(np.argmax(gaps))
        flows = (float(reported.flows[worst]), float(found.flows[worst]))
        lines.append(Line(f"flows of {name}", *flows, float(gaps[worst]), RELATIVE, "molar_flow"))
        if reported.liquid.any() or found.liquid.any():
            shares = (_vapour_share(reported), _vapour_share(found))
            gap = abs(shares[0] - shares[1])
            lines.append(Line(f"vapour in {name}", *shares, gap, FRACTION, "fraction"))
    return lines


def _vapour_share(stream: Stream) -> float:
    total = float(stream.flows.sum())
    return float(stream.vapour.sum()) / total if total else 1.0


def _quantities(walk: Walk, point: Point) -> list[Line]:
    """Every reported quantity that the pass has found too."""
    lines = []
    for path, value in point.quantities.items():
        if path not in walk.quantities:
            continue
        found, dimension = float(walk.quantities[path]), point.dimensions[path]
        if dimension in ("temperature", "temperature_difference"):
            lines.append(Line(path, value, found, abs(value - found), KELVIN, dimension))
        elif dimension == "fraction":
            lines.append(Line(path, value, found, abs(value - found), FRACTION, dimension))
        else:
            lines.append(
                _relative(path, value, found, RELATIVE, dimension, point.quantities.get("costs.total"))
            )
    return lines


def _relative(
    what: str, model: float, found: float, allowed: float, dimension: str, total: float | None = None
) -> Line:
    """A relative comparison; an item of cost that is next to nothing is compared with a millionth of the total."""
    base = max(abs(model), abs(found))
    if dimension == "money_per_year" and total is not None:
        base = max(base, 1e-6 * abs(total))
    gap = abs(model - found)
    return Line(what, model, found, gap / base if gap != 0.0 else 0.0, allowed, dimension)


def _limits(walk: Walk, point: Point) -> list[Line]:
    """Every limit and range held by the audit's own values, to 0.1 % of its value or 0.2 K."""
    lines = []
    for path, limit in point.limits.items():
        if path not in walk.quantities:
            continue
        found, dimension = float(walk.quantities[path]), point.dimensions[path]
        for end, sign in ((limit.low, -1.0), (limit.high, 1.0)):
            if end is None:
                continue
            kelvin = dimension in ("temperature", "temperature_difference")
            passed_by = max(sign * (found - end), 0.0)
            gap = passed_by if kelvin else passed_by / max(abs(end), 1e-12)
            lines.append(Line(f"limit on {path}", end, found, gap, KELVIN if kelvin else RELATIVE, dimension))
    return lines
