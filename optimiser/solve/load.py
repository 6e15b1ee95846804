"""Starting values: a walk through the section in plain numbers, written into the model's variables."""

from __future__ import annotations

from typing import Any

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
        _load_flash(section, flash, walk.streams[name], walk.dews.get(name))
    for bed in section.reactor.beds:
        _load_bed(bed, walk.beds[bed.name])
    loop = frame.model.loop
    loop.feed_enthalpy.set_value(walk.streams["converter_feed"].enthalpy(frame.mixture))
    _set(frame.reported["loop.purge_fraction"].variables[0], walk.quantities["loop.purge_fraction"])
    _set(frame.reported["feed.flow"].variables[0], walk.quantities["feed.flow"])


def _load_flash(section: SectionModel, flash: Any, stream: Any, first: Any) -> None:
    """Both phases; a gas without liquid starts with the first drop that it would form."""
    mixture, flow = section.frame.mixture, section.frame.flow
    temperature, pressure, dew = stream.temperature, stream.pressure, stream.temperature
    total = float(stream.liquid.sum())
    if total > 1e-9 * float(stream.vapour.sum()):
        fractions = stream.liquid / total
    else:
        dew, fractions = first.temperature, first.fractions
    for variable, x in zip(flash.fractions, fractions, strict=True):
        _set(variable, max(float(x), 2e-9))
    _set(flash.liquid_flow, max(total, 1e-6 * flow))
    _set(flash.superheat, max(temperature - dew, 1e-4))
    _set(flash.liquid_root, mixture.liquid(dew, pressure, list(fractions)).compressibility)


def _load_bed(bed: Any, profile: Any) -> None:
    for k, point in enumerate(bed.points):
        _set(point.temperature, profile.temperature[k])
        _set(point.pressure, profile.pressure[k])
        for variable, extent in zip(point.extents, profile.extents[k], strict=True):
            _set(variable, extent)
