"""Starting values: a walk through the section in plain numbers, written into the model's variables."""

from __future__ import annotations

from typing import Any

import numpy as np

from optimiser.forward.walk import Walk
from optimiser.section.build import SectionModel


def _set(variable: Any, number: float) -> None:
    """Set a free variable; numbers, expressions and held variables are left alone."""
    if hasattr(variable, "set_value") and getattr(variable, "fixed", True) is False:
        variable.set_value(float(number), skip_validation=True)


def load_walk(section: SectionModel, walk: Walk) -> None:
    """Write decisions, streams, phases and beds of `walk` into the model."""
    frame = section.frame
    for path, (variable, _) in frame.decisions.items():
        if path in walk.quantities:
            _set(variable, walk.quantities[path])
    for name, record in frame.streams.items():
        stream = walk.streams.get(name)
        if stream is None:
            continue
        _set(record.temperature, stream.temperature)
        _set(record.pressure, stream.pressure)
        for variable, flow in zip(record.vapour, stream.vapour, strict=True):
            _set(variable, max(float(flow), 1e-8 * frame.flow))
    for name, flash in frame.flashes.items():
        _load_flash(section, flash, walk.streams[name])
    for bed in section.reactor.beds:
        _load_bed(bed, walk.beds[bed.name])
    loop = frame.model.loop
    loop.feed_enthalpy.set_value(walk.streams["converter_feed"].enthalpy(frame.mixture))
    _set(frame.reported["loop.purge_fraction"].variables[0], walk.quantities["loop.purge_fraction"])
    _set(frame.reported["feed.flow"].variables[0], walk.quantities["feed.flow"])


def _load_flash(section: SectionModel, flash: Any, stream: Any) -> None:
    """Both phases; a liquid that is absent starts from the composition nearest to forming."""
    mixture = section.frame.mixture
    liquid = np.asarray(stream.liquid, dtype=float)
    total = float(liquid.sum())
    temperature, pressure = stream.temperature, stream.pressure
    vapour = np.maximum(stream.vapour, 1e-8 * section.frame.flow)
    stability = 0.0
    if total > 1e-9 * float(vapour.sum()):
        fractions = liquid / total
    else:
        cap = 0.9 * max(
            s.critical_temperature for s in mixture.species if s.name in section.frame.chemistry.products
        )
        fractions, stability = _shadow(mixture, vapour, min(temperature, cap), pressure)
    for variable, x in zip(flash.fractions, fractions, strict=True):
        _set(variable, max(float(x), 2e-9))
    _set(flash.liquid_flow, max(total, 1e-6 * section.frame.flow))
    _set(flash.stability, max(stability, 1e-6))
    phase = mixture.liquid(temperature, pressure, list(fractions))
    _set(flash.liquid_root, phase.compressibility)


def _shadow(mixture: Any, vapour: Any, temperature: float, pressure: float) -> tuple[Any, float]:
    """Composition of the liquid nearest to forming from a gas, and how far it is from forming."""
    gas = mixture.gas(temperature, pressure, list(vapour))
    start = np.log(np.asarray(gas.fractions)) + np.asarray(gas.ln_phi)
    heaviest = int(np.argmin(gas.ln_phi))
    fractions = np.full(len(vapour), 1e-3)
    fractions[heaviest] = 1.0
    total = float(fractions.sum())
    for _ in range(30):
        liquid = mixture.liquid(temperature, pressure, list(fractions / fractions.sum()))
        fractions = np.exp(start - np.asarray(liquid.ln_phi))
        total = float(fractions.sum())
    return fractions / total, max(-float(np.log(total)), 0.0)


def _load_bed(bed: Any, profile: Any) -> None:
    for k, point in enumerate(bed.points):
        _set(point.temperature, profile.temperature[k])
        _set(point.pressure, profile.pressure[k])
        for variable, extent in zip(point.extents, profile.extents[k], strict=True):
            _set(variable, extent)
