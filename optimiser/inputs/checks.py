"""Rules that no single field can tell, each by a function of its own.

They look at the data as written, so that they find what is wrong even where other values cannot be read.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import Any

from optimiser.inputs.errors import InputProblem, nearest
from optimiser.inputs.money import ASSET_SIZES, COST_YEAR
from optimiser.inputs.paths import mapping
from optimiser.inputs.yaml_reader import Document, Path_
from optimiser.quantities import DIMENSIONS, Money, Setting, UnitProblem, dimension_of, parse_setting

Problems = Iterator[InputProblem]


@dataclass(frozen=True)
class Draft:
    """A case that may still be wrong; `model` is None where the model cannot be read."""

    document: Document
    money: Money
    model: Any = None

    def mapping(self, *path: str) -> dict[str, Any]:
        """The mapping at a path, empty where there is none."""
        return mapping(self.document.data, *path)

    def listed(self, *path: str) -> list[tuple[int, dict[str, Any]]]:
        """Items of a list that are mappings, with their positions."""
        found = self.mapping(*path[:-1]).get(path[-1])
        numbered = enumerate(found) if isinstance(found, list) else ()
        return [(k, item) for k, item in numbered if isinstance(item, dict)]

    def setting(self, path: Path_, dimension: str) -> Setting | None:
        """A value or range, None where it is missing or cannot be read."""
        text = self.document.text(path)
        try:
            return parse_setting(text, dimension, self.money)
        except UnitProblem:
            return None

    def value(self, path: Path_, dimension: str, default: str) -> float | None:
        """A value in SI; its default where it is missing, None where it cannot be read."""
        if self.document.text(path):
            setting = self.setting(path, dimension)
            return None if setting is None else setting.low
        return parse_setting(default, dimension).low

    @cached_property
    def species(self) -> list[str] | None:
        """Names of the model's species."""
        return None if self.model is None else [str(getattr(s, "name", s)) for s in self.model.species]

    @cached_property
    def reacting(self) -> set[str] | None:
        """Species that take part in a reaction of the model."""
        if self.model is None:
            return None
        reactions = self.model.reactions
        numbers = reactions.values() if isinstance(reactions, dict) else [r.species for r in reactions]
        return {str(species) for reaction in numbers for species in reaction}


def check(draft: Draft) -> list[InputProblem]:
    """All rules."""
    rules = (
        _species,
        _amounts,
        _names,
        _stages,
        _purge,
        _steps,
        _beds,
        _coolers,
        _closing,
        _train,
        _water,
        _product_price,
        _exchange_rate,
        _catalyst_price,
        _quotes,
        _cost_year,
    )
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
        if rate in ("kinetic", "damkohler") and _without_rate_law(draft):
            wanted = "`rate: approach`; the model has no rate law for each of its reactions"
            yield draft.document.problem((*place, "rate"), None, wanted)


def _one_of(draft: Draft, place: Path_, item: dict[str, Any], keys: tuple[str, str]) -> Problems:
    stated = [key for key in keys if key in item]
    if not stated:
        yield draft.document.problem((*place, keys[0]), "", f"`{keys[0]}:` or `{keys[1]}:`")
    if len(stated) == 2:
        yield draft.document.problem(
            (*place, keys[1]), None, f"only one of {keys[0]} and {keys[1]}", key=True
        )


def _without_rate_law(draft: Draft) -> bool:
    if draft.model is None:
        return False
    laws, reactions = draft.model.rate_laws, draft.model.reactions
    return {str(getattr(r, "name", r)) for r in reactions} != {str(getattr(law, "name", law)) for law in laws}


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
            if key in step and step.get("sink") != sink:
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


def _product_price(draft: Draft) -> Problems:
    """Profit needs something to sell."""
    if draft.mapping().get("objective") == "annual profit" and "product" not in draft.mapping("prices"):
        yield draft.document.problem(
            ("prices", "product"), "", "`product:`, the price that annual profit needs"
        )


def _exchange_rate(draft: Draft) -> Problems:
    """Equipment is costed in USD."""
    economics, path = draft.mapping("economics"), ("economics", "exchange_rate")
    currency = economics.get("currency")
    if currency == "USD" and "exchange_rate" in economics:
        yield draft.document.problem(path, None, "no exchange rate for a case in USD", key=True)
    elif (
        currency is not None
        and currency == draft.money.currency != "USD"
        and "exchange_rate" not in economics
    ):
        sample = DIMENSIONS["exchange_rate"].sample(currency)
        yield draft.document.problem(
            path, "", f"`exchange_rate:` for equipment costed in USD, such as `{sample}`"
        )


def _catalyst_price(draft: Draft) -> Problems:
    """The model's price of catalyst is in one currency only."""
    unit = getattr(getattr(getattr(draft.model, "catalyst", None), "price", None), "unit", "")
    if unit and "catalyst" not in draft.mapping("prices") and draft.money.currency not in unit:
        wanted = f"`catalyst:` in {draft.money.currency}; the model states {unit}"
        yield draft.document.problem(("prices", "catalyst"), "", wanted)


def _quotes(draft: Draft) -> Problems:
    """The size of a quoted item is what that kind of item is sized by."""
    for name, quote in draft.mapping("economics", "quoted").items():
        path = ("economics", "quoted", name, "size")
        text = draft.document.text(path)
        if name not in ASSET_SIZES or not isinstance(quote, dict) or not text:
            continue
        kind = DIMENSIONS[ASSET_SIZES[name]]
        if dimension_of(text, ("power", "area", "volume"), draft.money) != kind.name:
            yield draft.document.problem(path, None, f"{kind.words}, such as `{kind.sample('EUR')}`")


def _cost_year(draft: Draft) -> Problems:
    """Years are those whose plant cost index is shipped, or the index is stated."""
    economics = draft.mapping("economics")
    years: list[tuple[Path_, Any]] = []
    if "cost_index" not in economics:
        years.append((("economics", "cost_year"), economics.get("cost_year", COST_YEAR)))
    for name, quote in draft.mapping("economics", "quoted").items():
        if isinstance(quote, dict):
            years.append((("economics", "quoted", name, "year"), quote.get("year", COST_YEAR)))
    # The shipped index always has the default year; the file is only read for others.
    odd = [(path, year) for path, year in years if isinstance(year, int) and year != COST_YEAR]
    if not odd:
        return
    known = indexed_years()
    for path, year in odd:
        if year not in known:
            hint = " or economics.cost_index" if path[-1] == "cost_year" else ""
            yield draft.document.problem(path, None, f"one of {', '.join(map(str, known))}{hint}")


def indexed_years() -> list[int]:
    """Years whose plant cost index is shipped."""
    from optimiser.inputs.lookup import shipped
    from optimiser.inputs.yaml_reader import read_document

    equipment = read_document(shipped("models") / "equipment.yaml").data
    return sorted(int(year) for year in mapping(equipment, "cost_index", "years"))
