"""Balances of reported streams among themselves: elements and mass of the section and its parts, energy of
the whole.

They need no pass: a wrong equation shows here even where the pass shares it.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence

import numpy as np

from optimiser.chemistry.reactions import Chemistry
from optimiser.forward.agreement import AuditLine, compared
from optimiser.forward.stream import Floats, Stream, Walk
from optimiser.inputs.case import Case, CoolStep

BALANCE = 1e-6
REFERENCE_TEMPERATURE = 298.15


def balance_lines(
    case: Case,
    chemistry: Chemistry,
    streams: Mapping[str, Stream],
    quantities: Mapping[str, float],
    walk: Walk,
) -> Iterator[AuditLine]:
    """All balances.

    Args:
        case: names the pieces of plant.
        chemistry: for elements, masses and enthalpies.
        streams: reported.
        quantities: reported; works and duties are taken from them.
        walk: gives the heat of reaction that energy is measured by.
    """
    feeds = [f"feed.{name}" for name in case.feed.streams]
    envelopes = [
        ("the section", feeds, ["product", "purge"]),
        ("the reactor", ["converter_feed"], ["condensation.in"]),
        ("the separator", ["condensation.in"], ["separator.vapour", "product"]),
        ("the purge", ["separator.vapour"], ["purge", "recycle"]),
    ]
    for name, entering, leaving in envelopes:
        missing = [s for s in (*entering, *leaving) if s not in streams]
        if missing:
            yield _missing(f"balance of {name}", missing)
            continue
        flows = _sum(streams, entering), _sum(streams, leaving)
        yield from _element_lines(chemistry, name, *flows)
    yield _energy(case, chemistry, streams, quantities, walk, feeds)


def _sum(streams: Mapping[str, Stream], names: Sequence[str]) -> Floats:
    return np.asarray(sum(streams[name].flows for name in names))


def _missing(what: str, names: Sequence[str]) -> AuditLine:
    return AuditLine(f"{what}: {', '.join(names)} is not reported", 0.0, 0.0, 1.0, 0.0, "fraction")


def _element_lines(chemistry: Chemistry, name: str, entering: Floats, leaving: Floats) -> Iterator[AuditLine]:
    """Each element and the mass, as fractions of what enters."""
    species = chemistry.mixture.species
    for element in sorted({e for s in species for e in s.elements}):
        atoms = np.array([s.elements.get(element, 0.0) for s in species])
        fed, left = float(atoms @ entering), float(atoms @ leaving)
        size = fed if fed > 0.0 else float(entering.sum())
        yield compared(f"element {element} of {name}", left / size, fed / size, BALANCE, "fraction")
    mass = np.array(chemistry.mixture.molar_mass)
    fed = float(mass @ entering)
    yield compared(f"mass of {name}", float(mass @ leaving) / fed, 1.0, BALANCE, "fraction")


def _energy(
    case: Case,
    chemistry: Chemistry,
    streams: Mapping[str, Stream],
    quantities: Mapping[str, float],
    walk: Walk,
    feeds: Sequence[str],
) -> AuditLine:
    """Enthalpy in and work in, less heat out and enthalpy out, over the heat that the reactions release."""
    what = "energy of the section"
    missing = [s for s in (*feeds, "product", "purge") if s not in streams]
    missing += [path for path in (*work_paths(case), *duty_paths(case)) if path not in quantities]
    if missing:
        return _missing(what, missing)
    mixture = chemistry.mixture
    shaft = case.compression.driver_efficiency.si * sum(quantities[path] for path in work_paths(case))
    entering = sum(streams[name].enthalpy(mixture) for name in feeds) + shaft
    leaving = sum(streams[name].enthalpy(mixture) for name in ("product", "purge"))
    leaving += sum(quantities[path] for path in duty_paths(case))
    released = reaction_heat(chemistry, walk)
    return compared(what, (leaving - entering) / released, 0.0, BALANCE, "fraction")


def work_paths(case: Case) -> list[str]:
    """Electric powers of machines that work on the gas."""
    return [
        *(f"compression.{stage.name}.power" for stage in case.compression.stages),
        "loop.circulator_power",
    ]


def duty_paths(case: Case) -> list[str]:
    """Heats that leave the section; what one stream of the section gives another does not."""
    paths = [f"compression.{stage.name}.intercooler_duty" for stage in case.compression.stages]
    paths += [f"reactor.{s.name}.duty" for s in case.reactor if isinstance(s, CoolStep) and s.sink != "feed"]
    coolers = ("water_cooler", "chiller")
    return paths + [f"condensation.{c}.duty" for c in coolers if getattr(case.condensation, c) is not None]


def reaction_heat(chemistry: Chemistry, walk: Walk) -> float:
    """Heat released or taken up by all reactions in all beds at 298 K, W."""
    extents = sum(profile.extents[-1] for profile in walk.beds.values())
    heats = [abs(float(reaction.enthalpy(REFERENCE_TEMPERATURE))) for reaction in chemistry.reactions]
    return float(np.abs(extents) @ np.array(heats))
