"""Rules of the reactor: the order of its steps, what each of them states, how the feed's heating closes."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

from optimiser.inputs.document import Path_
from optimiser.inputs.draft import Draft, Problems


def _steps(draft: Draft) -> Problems:
    """The reactor begins with a bed, and something stands between two beds."""
    steps = draft.listed("reactor")
    if steps and "cool" in steps[0][1] and "bed" not in steps[0][1]:
        wanted = "a bed as first step; the feed reaches its inlet temperature in the coolers with sink: feed"
        yield draft.document.problem(("reactor", steps[0][0], "cool"), None, wanted, key=True)
    for (_, before), (k, step) in pairwise(steps):
        if "bed" in before and "bed" in step:
            wanted = "a cooler between two beds (make one bed of them if there is none)"
            yield draft.document.problem(("reactor", k, "bed"), None, wanted, key=True)


def _beds(draft: Draft) -> Problems:
    """Each bed has one size beside its volume, and as much of an approach as its rate needs."""
    for k, bed in draft.listed("reactor"):
        if "bed" not in bed:
            continue
        place: Path_ = ("reactor", k)
        yield from _one_of(draft, place, bed, ("diameter", "length_over_diameter"))
        pair = ("approach_fraction", "approach_temperature")
        rate = bed.get("rate", "kinetic")
        if rate == "approach":
            yield from _one_of(draft, place, bed, pair)
            continue
        for key in pair:
            if key in bed:
                yield draft.document.problem((*place, key), None, "`rate: approach` beside it", key=True)
        if rate in ("kinetic", "damkohler") and draft.unrated:
            wanted = f"`rate: approach`; the model has no rate law for {', '.join(draft.unrated)}"
            yield draft.document.problem((*place, "rate"), None, wanted)


def _one_of(draft: Draft, place: Path_, item: dict[str, Any], keys: tuple[str, str]) -> Problems:
    stated = [key for key in keys if key in item]
    if not stated:
        yield draft.document.problem((*place, keys[0]), "", f"`{keys[0]}:` or `{keys[1]}:`")
    if len(stated) == 2:
        yield draft.document.problem(
            (*place, keys[1]), None, f"only one of {keys[0]} and {keys[1]}", key=True
        )


_SINK_KEYS = {
    "steam_pressure": "steam",
    "water_inlet": "boiler_feed_water",
    "water_outlet": "boiler_feed_water",
}
_OTHER_SINKS = ("steam", "boiler_feed_water", "cooling_water")


def _coolers(draft: Draft) -> Problems:
    """Outlet temperatures stand where nothing else gives them; keys of one sink stand with that sink."""
    steps = dict(draft.listed("reactor"))
    for k, step in steps.items():
        if "cool" not in step:
            continue
        path: Path_ = ("reactor", k, "outlet_temperature")
        before_bed = "bed" in steps.get(k + 1, {})
        if before_bed and "outlet_temperature" in step:
            wanted = f"no outlet here: inlet_temperature of {steps[k + 1]['bed']} is the same temperature"
            yield draft.document.problem(path, None, wanted, key=True)
        if not before_bed and "outlet_temperature" not in step and step.get("sink") in _OTHER_SINKS:
            yield draft.document.problem(path, "", "`outlet_temperature:` where no bed follows")
        for key, sink in _SINK_KEYS.items():
            if key in step and step.get("sink") in {"feed", *_OTHER_SINKS} - {sink}:
                yield draft.document.problem((*path[:2], key), None, f"`sink: {sink}` beside it", key=True)


def _closing(draft: Draft) -> Problems:
    """Exactly one cooler takes whatever heat the feed still needs."""
    steps = dict(draft.listed("reactor"))
    closing = [
        (k, step)
        for k, step in steps.items()
        if step.get("sink") == "feed"
        and "outlet_temperature" not in step
        and "bed" not in steps.get(k + 1, {})
    ]
    wanted = (
        "one cooler with `sink: feed` that no bed follows and that has no outlet_temperature: it closes the"
    )
    if steps and not closing:
        yield draft.document.problem(("reactor",), "", f"{wanted} heating of the feed")
    for k, step in closing[1:]:
        read = f"{closing[0][1].get('cool')} and {step.get('cool')}"
        yield draft.document.problem(("reactor", k), read, f"only {wanted} heating of the feed")


RULES = (_steps, _beds, _coolers, _closing)
