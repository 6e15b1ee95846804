"""Rules that no single field can tell, each by a function of its own.

They look at the data as written, so that they find what is wrong even where other values cannot be read.
"""

from __future__ import annotations

from optimiser.inputs import money_checks, reactor_checks
from optimiser.inputs.document import Path_
from optimiser.inputs.draft import Draft, Problems
from optimiser.inputs.errors import InputProblem, nearest


def check(draft: Draft) -> list[InputProblem]:
    """All rules."""
    rules = (*_RULES, *reactor_checks.RULES, *money_checks.RULES)
    return [problem for rule in rules for problem in rule(draft)]


def _species(draft: Draft) -> Problems:
    """Species are those of the model."""
    if draft.species is None:
        return
    for name in draft.mapping("feed", "streams"):
        for species in draft.mapping("feed", "streams", name, "composition"):
            if species not in draft.species:
                path = ("feed", "streams", name, "composition", species)
                wanted = f"a species of the model: {', '.join(draft.species)}"
                yield draft.document.problem(path, species, wanted, nearest(species, draft.species), key=True)


def _amounts(draft: Draft) -> Problems:
    """How much is fed: by the product wanted and shares, or by the flow of every stream."""
    streams = draft.mapping("feed", "streams")
    place: Path_ = ("feed", "streams")
    if not streams:
        if "streams" in draft.mapping("feed"):
            yield draft.document.problem(place, None, "at least one stream, by name")
        return
    flows = [name for name, stream in streams.items() if isinstance(stream, dict) and "flow" in stream]
    shares = [name for name, stream in streams.items() if isinstance(stream, dict) and "share" in stream]
    if "product_rate" not in draft.mapping("feed"):
        wanted = "`flow:` here, since the case has no product_rate"
        for name in streams:
            if name not in flows:
                yield draft.document.problem((*place, name, "flow"), "", wanted)
        for name in shares:
            wanted = "no share where every stream states its flow"
            yield draft.document.problem((*place, name, "share"), None, wanted, key=True)
        return
    for name in flows:
        wanted = "no flow beside product_rate; a share of the feed instead"
        yield draft.document.problem((*place, name, "flow"), None, wanted, key=True)
    yield from _shares(draft, place, list(streams), shares)


def _shares(draft: Draft, place: Path_, streams: list[str], shares: list[str]) -> Problems:
    if len(shares) != len(streams) - 1:
        read = f"{len(shares)} of {len(streams)} streams with a share"
        yield draft.document.problem(place, read, "a share for every stream but one, which takes the rest")
    least = [draft.setting((*place, name, "share"), "fraction") for name in shares]
    total = sum(setting.low for setting in least if setting is not None)
    if total >= 1.0:
        read = f"shares of {total:.4g} at least"
        yield draft.document.problem(place, read, "shares that leave something for the other stream")


# Names that would stand for something else in paths of results.
_TAKEN = {
    "compression": ("power", "entry", "total"),
    "reactor": ("catalyst_volume", "conversion", "pressure_drop", "feed"),
}


def _names(draft: Draft) -> Problems:
    """Names of stages and of steps, each once; `-` and `_` count as the same sign."""
    stages = [(("compression", "stages", k, "stage"), s) for k, s in draft.listed("compression", "stages")]
    steps = [
        (("reactor", k, key), s) for k, s in draft.listed("reactor") for key in ("bed", "cool") if key in s
    ]
    for entries in (stages, steps):
        seen: dict[str, str] = {}
        for path, item in entries:
            name = item.get(str(path[-1]))
            if not isinstance(name, str):
                continue
            plain = name.replace("-", "_")
            if plain in seen:
                wanted = f"a name of its own; {seen[plain]} stands before it"
                yield draft.document.problem(path, name, wanted)
            elif name in _TAKEN[str(path[0])]:
                yield draft.document.problem(path, name, f"another name; {path[0]}.{name} is a result")
            seen.setdefault(plain, name)


def _stages(draft: Draft) -> Problems:
    """Every stage but the last has a discharge pressure."""
    stages = draft.listed("compression", "stages")
    for k, stage in stages:
        path = ("compression", "stages", k, "discharge_pressure")
        last = k == stages[-1][0]
        if last and "discharge_pressure" in stage:
            wanted = "no discharge_pressure for the last stage, which delivers loop.pressure"
            yield draft.document.problem(path, None, wanted, key=True)
        elif not last and "discharge_pressure" not in stage:
            yield draft.document.problem(path, "", "`discharge_pressure:` for every stage but the last")


def _purge(draft: Draft) -> Problems:
    """Purge and recycle give each other, so one of them at most is held."""
    purge = draft.setting(("loop", "purge_fraction"), "fraction")
    ratio = draft.setting(("loop", "recycle_ratio"), "ratio")
    if purge is not None and ratio is not None and purge.held and ratio.held:
        wanted = (
            "a range here or for loop.purge_fraction: each follows from the other, so both cannot be held"
        )
        yield draft.document.problem(("loop", "recycle_ratio"), None, wanted)


def _train(draft: Draft) -> Problems:
    """Something condenses the product."""
    train = draft.mapping("condensation")
    if "condensation" in draft.mapping() and not train.keys() & {"water_cooler", "chiller"}:
        yield draft.document.problem(("condensation",), "", "`water_cooler:`, `chiller:` or both")
    if "cold_exchanger" in train and "chiller" not in train:
        wanted = "a chiller beside it, or no cold exchanger: without one nothing is colder than the gas"
        yield draft.document.problem(("condensation", "cold_exchanger"), "", wanted, key=True)


def _water(draft: Draft) -> Problems:
    """Water leaves warmer than it came, and cools what is warmer than it."""
    supply = draft.value(("utilities", "cooling_water_supply"), "temperature", "25 degC")
    back = draft.value(("utilities", "cooling_water_return"), "temperature", "35 degC")
    cooled = draft.value(("compression", "intercooler_temperature"), "temperature", "40 degC")
    if supply is not None and back is not None and back <= supply:
        path = ("utilities", "cooling_water_return")
        yield draft.document.problem(path, None, "a temperature above cooling_water_supply")
    if supply is not None and cooled is not None and cooled <= supply:
        path = ("compression", "intercooler_temperature")
        yield draft.document.problem(path, None, "a temperature above utilities.cooling_water_supply")
    for k, step in draft.listed("reactor"):
        cold = draft.value(("reactor", k, "water_inlet"), "temperature", "105 degC")
        warm = draft.value(("reactor", k, "water_outlet"), "temperature", "180 degC")
        if step.get("sink") == "boiler_feed_water" and cold is not None and warm is not None and warm <= cold:
            yield draft.document.problem(
                ("reactor", k, "water_outlet"), None, "a temperature above water_inlet"
            )


_RULES = (_species, _amounts, _names, _stages, _purge, _train, _water)
