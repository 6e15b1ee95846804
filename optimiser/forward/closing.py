"""Closing the loop: the recycle that a pass begins with is the one that it ends with.

Direct substitution, since the beds forget what they are given; but an inert forgets nothing and builds up over as many
rounds as the purge is small, so it is scaled by what comes in over what goes out. Where a product rate is wanted, the
make-up is scaled to it along the way. Starts need no more than a loose closure.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from optimiser.forward.streams import StateProblem, gas
from optimiser.forward.walk import Section, Walk

Floats = NDArray[np.float64]
MOST = 8.0
"""Largest recycle to make-up of a start: a reactor that converts next to nothing would run away from it."""
STEP = 0.7
"""Largest change of the logarithm of a flow in one round."""


def makeup_guess(section: Section, setpoints: Mapping[str, float]) -> dict[str, float]:
    """Flow of each feed stream, mol/s: stated, or what nine tenths of it would turn into the product wanted."""
    feed, chemistry = section.case.feed, section.chemistry
    if feed.product_rate is None:
        return {name: setpoints[f"feed.streams.{name}.flow"] for name in feed.streams}
    k = section.mixture.names.index(chemistry.products[0])
    reaction = next(r for r in chemistry.reactions if r.nu[k] > 0)
    used = -sum(nu for nu in reaction.nu if nu < 0) / reaction.nu[k]
    total = setpoints["feed.product_rate"] / section.mixture.molar_mass[k] * used / 0.9
    shares = {name: setpoints.get(f"feed.streams.{name}.share") for name in feed.streams}
    rest = 1.0 - sum(s for s in shares.values() if s is not None)
    return {name: total * (rest if s is None else s) for name, s in shares.items()}


def _first_recycle(section: Section, makeup: Mapping[str, float], setpoints: Mapping[str, float]) -> Floats:
    """A plausible recycle: four times the make-up, poor in product, with inerts as the purge lets them build up."""
    names, chemistry = section.mixture.names, section.chemistry
    fresh = fresh_flows(section, makeup)
    ratio = setpoints.get("loop.recycle_ratio", 4.0)
    flows = ratio * fresh
    total = float(flows.sum())
    for k, name in enumerate(names):
        if name in chemistry.inerts:
            flows[k] = min(fresh[k] / max(setpoints["loop.purge_fraction"], 1e-4), 0.15 * total)
        elif name in chemistry.products:
            flows[k] = max(flows[k], 0.03 * total)
    return np.maximum(flows, 1e-6 * total)


def converge(
    section: Section,
    setpoints: dict[str, float],
    *,
    positions: Mapping[str, Sequence[float]] | None = None,
    closure: float = 2e-2,
    rounds: int = 10,
    tolerance: float = 1e-5,
) -> Walk:
    """A walk whose recycle closes within `closure` (relative, each species), or the last of `rounds` walks."""
    setpoints = {"loop.purge_fraction": 0.03, **setpoints}
    purge = setpoints["loop.purge_fraction"]
    makeup = makeup_guess(section, setpoints)
    wanted = setpoints.get("feed.product_rate") if section.case.feed.product_rate is not None else None
    guess = sum(makeup.values())
    flows = _first_recycle(section, makeup, setpoints)
    for _ in range(rounds):
        fresh = fresh_flows(section, makeup)
        try:
            vapour, liquid, hottest = section.round_trip(setpoints, fresh, flows, tolerance)
        except StateProblem:
            flows = 0.6 * flows  # Too much gas for the beds: the next round tries less.
            continue
        cooler = _cooler_inlets(section, setpoints, hottest)
        gap = _gap(
            section, fresh, flows, vapour.vapour * (1.0 - purge), vapour.vapour * purge + liquid.liquid
        )
        made = _product(section, liquid.liquid)
        scale = min(max(wanted / max(made, 1e-9), 0.8), 1.25) if wanted is not None else 1.0
        if float(np.max(np.abs(gap))) < closure and abs(scale - 1.0) < closure and cooler == setpoints:
            break
        setpoints = cooler
        scale = min(scale, 1.3 * guess / sum(makeup.values()))
        makeup = {name: flow * scale for name, flow in makeup.items()}
        flows = flows * np.exp(np.clip(gap, -STEP, STEP)) * scale
        flows *= min(1.0, MOST * float(fresh.sum()) / float(flows.sum()))
    recycle = gas("given", flows, 300.0, setpoints["loop.pressure"])
    return section.walk(setpoints, makeup, recycle, positions, tolerance)


def fresh_flows(section: Section, makeup: Mapping[str, float]) -> Floats:
    """Flow of each species in the make-up, mol/s."""
    names = section.mixture.names
    fresh = np.zeros(len(names))
    for name, data in section.case.feed.streams.items():
        fresh += makeup[name] * np.array([data.composition.get(s, 0.0) for s in names])
    return fresh


def _product(section: Section, liquid: Floats) -> float:
    """Contained product, kg/s."""
    wanted = [section.mixture.names.index(p) for p in section.chemistry.products]
    return float(sum(liquid[k] * section.mixture.molar_mass[k] for k in wanted))


def _gap(section: Section, fresh: Floats, given: Floats, back: Floats, out: Floats) -> Floats:
    """Change of the logarithm of each recycle flow: of inerts by the balance of the whole section."""
    gap = np.log(np.maximum(back, 1e-12)) - np.log(given)
    for k, name in enumerate(section.mixture.names):
        if name in section.chemistry.inerts:
            gap[k] = float(np.log(fresh[k] / out[k]))
    return np.asarray(gap)


def _cooler_inlets(
    section: Section, setpoints: dict[str, float], hottest: Mapping[str, float]
) -> dict[str, float]:
    """Setpoints with the inlet of each bed that passes its own limit lowered, as far as its range goes."""
    limits, settings = section.case.limits, section.case.settings()
    changed = dict(setpoints)
    for name, temperature in hottest.items():
        limit, path = limits.get(f"reactor.{name}.hottest"), f"reactor.{name}.inlet_temperature"
        if limit is None or limit.high is None or temperature <= limit.high or settings[path].held:
            continue
        changed[path] = max(setpoints[path] - 0.8 * (temperature - limit.high + 2.0), settings[path].low)
    return changed
