"""From a case file to a checked, frozen case."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

from optimiser.inputs.case import BedStep, Case, CoolStep
from optimiser.inputs.errors import InputError, InputProblem
from optimiser.inputs.lookup import find
from optimiser.inputs.model import Model, read_model
from optimiser.inputs.overrides import apply_sets
from optimiser.inputs.paths import result_paths
from optimiser.inputs.validation import validated
from optimiser.inputs.yaml_reader import Document, read_document
from optimiser.quantities import (
    CURRENCIES,
    Limit,
    Money,
    UnitProblem,
    nearest_name,
    parse_limit,
    parse_quantity,
)


def read_case(name: str, sets: Sequence[str] = ()) -> Case:
    """A case by path or by shipped name, with values replaced by `sets` (PATH=VALUE).

    Raises:
        InputError: everything that is wrong, in one go.
    """
    path = find(name, "cases")
    document = read_document(path)
    if isinstance(document.data, dict):
        apply_sets(document, list(sets))
    money, problems = _money(document)
    case, found = validated(Case, document, {"money": money})
    problems += found
    if case is None:
        raise InputError(problems)
    try:
        model = read_model(case.model, relative_to=path)
    except InputError as problem:
        raise InputError([*problems, *_at_model(document, problem)]) from None
    limits, found = _limits(case, document, money)
    problems += found + _meaning(case, model, document)
    if problems:
        raise InputError(problems)
    return _finished(case, limits, document, path)


def _finished(case: Case, limits: dict[str, Limit], document: Document, path: Path) -> Case:
    """The case with its limits read, its compositions as numbers, and where it came from."""
    streams = {
        name: stream.model_copy(update={"composition": _shares(stream.composition)})
        for name, stream in case.feed.streams.items()
    }
    feed = case.feed.model_copy(update={"streams": streams})
    extra = {"limits": limits, "feed": feed, "path": path, "sha256": document.sha256}
    return case.model_copy(update=extra)


def _shares(composition: dict[str, Any]) -> dict[str, float]:
    """Mole fractions as numbers that add up to 1 exactly."""
    total = sum(q.si for q in composition.values())
    return {name: q.si / total for name, q in composition.items()}


def _at_model(document: Document, problem: InputError) -> list[InputProblem]:
    """A model that is not there is a problem of the line that names it; problems inside it keep their places."""
    if all(p.line is None for p in problem.errors):
        first = problem.errors[0]
        return [document.problem(("model",), first.wanted, nearest=first.nearest)]
    return list(problem.errors)


def _money(document: Document) -> tuple[Money, list[InputProblem]]:
    """Currency and exchange rate, needed before any price can be read."""
    economics = document.data.get("economics") if isinstance(document.data, dict) else None
    economics = economics if isinstance(economics, dict) else {}
    stated = economics.get("currency")
    currency = stated if isinstance(stated, str) and stated in CURRENCIES else "EUR"
    rate = economics.get("exchange_rate")
    place = ("economics", "exchange_rate")
    if rate is None:
        wanted = f"exchange_rate: money of the case for one USD, such as 0.92 {currency}/USD"
        missing = stated in CURRENCIES and currency != "USD"
        return Money(currency), [document.problem(place, wanted, read="")] if missing else []
    try:
        per_usd = parse_quantity(str(rate), "exchange_rate", currency).si
    except UnitProblem:
        return Money(currency), []  # Told where the field itself is read.
    return Money(currency, per_usd), []


def _limits(case: Case, document: Document, money: Money) -> tuple[dict[str, Limit], list[InputProblem]]:
    known = result_paths(case)
    limits: dict[str, Limit] = {}
    problems = []
    for path, text in case.limits.items():
        place = ("limits", path)
        if path not in known:
            near = nearest_name(path, known)
            wanted = "the path of something that a result reports, such as loop.recycle_ratio"
            problems.append(document.problem(place, wanted, read=path, nearest=near, key=True))
            continue
        if isinstance(text, bool | dict | list) or text is None:
            problems.append(document.problem(place, "a limit such as <= 520 degC"))
            continue
        try:
            limits[path] = parse_limit(str(text), known[path], money)
        except UnitProblem as problem:
            problems.append(document.problem(place, problem.wanted, read=problem.read, nearest=problem.nearest))
    return limits, problems


def _told(
    document: Document, place: tuple[str | int, ...], read: str, wanted: str, near: str | None = None
) -> InputProblem:
    """A problem of meaning: what is wrong in words, and what to write."""
    return document.problem(place, wanted, read=read, nearest=near)


def _meaning(case: Case, model: Model, document: Document) -> list[InputProblem]:
    """Rules that no single field can tell, each by a function of its own."""
    rules = (_compositions, _amounts, _stages, _purge, _steps, _train, _objective, _water)
    return [problem for rule in rules for problem in rule(case, model, document)]


def _compositions(case: Case, model: Model, document: Document) -> list[InputProblem]:
    problems = []
    for name, stream in case.feed.streams.items():
        place = ("feed", "streams", name, "composition")
        for species in stream.composition:
            if species not in model.species:
                wanted = f"one of {', '.join(model.species)}"
                near = nearest_name(species, model.species)
                problems.append(_told(document, (*place, species), f"unknown species {species}", wanted, near))
        total = sum(q.si for q in stream.composition.values())
        if abs(total - 1.0) > 1e-4:
            read = f"the mole fractions add up to {total:.6g}"
            problems.append(_told(document, place, read, "fractions that add up to 1"))
    return problems


def _amounts(case: Case, model: Model, document: Document) -> list[InputProblem]:
    """Either the product or the flow of every stream; shares for all streams but one."""
    streams, place = case.feed.streams, ("feed",)
    if not streams:
        return [_told(document, (*place, "streams"), "there is no feed stream", "at least one")]
    flows = [n for n, s in streams.items() if s.flow is not None]
    shares = [n for n, s in streams.items() if s.share is not None]
    if case.feed.product_rate is None and len(flows) != len(streams):
        return [_told(document, place, "neither product_rate nor the flow of every stream", "one of them")]
    if case.feed.product_rate is not None and flows:
        at = (*place, "streams", flows[0], "flow")
        return [_told(document, at, "a flow beside product_rate", "share, or no product_rate")]
    if case.feed.product_rate is not None and len(shares) != len(streams) - 1:
        read = f"{len(shares)} of {len(streams)} streams state their share"
        return [_told(document, (*place, "streams"), read, "a share for all streams but one")]
    return []


def _stages(case: Case, model: Model, document: Document) -> list[InputProblem]:
    stages, place = case.compression.stages, ("compression", "stages")
    if not stages:
        return [_told(document, place, "there is no stage", "at least one")]
    problems = []
    for k, stage in enumerate(stages):
        last = k == len(stages) - 1
        if last and stage.discharge_pressure is not None:
            at = (*place, k, "discharge_pressure")
            problems.append(_told(document, at, "the last stage delivers loop.pressure", "no discharge_pressure here"))
        if not last and stage.discharge_pressure is None:
            read = f"stage {stage.name} has no discharge_pressure"
            problems.append(_told(document, (*place, k), read, "a pressure or a range"))
    return problems + _twice([s.name for s in stages], place, document)


def _twice(names: list[str], place: tuple[str | int, ...], document: Document) -> list[InputProblem]:
    return [
        _told(document, (*place, k), f"the name {name} stands twice", "a name of its own")
        for k, name in enumerate(names)
        if name in names[:k]
    ]


def _purge(case: Case, model: Model, document: Document) -> list[InputProblem]:
    purge, ratio = case.loop.purge_fraction, case.loop.recycle_ratio
    place = ("loop", "recycle_ratio")
    if purge is None and ratio is None:
        return [_told(document, ("loop",), "neither purge_fraction nor recycle_ratio", "one of them")]
    if purge is not None and ratio is not None and purge.held and ratio.held:
        read = "purge_fraction and recycle_ratio are both held, and one gives the other"
        return [_told(document, place, read, "a range for one of them, or leave one out")]
    return []


def _steps(case: Case, model: Model, document: Document) -> list[InputProblem]:
    steps, place = case.reactor, ("reactor",)
    problems = _twice([s.name for s in steps], place, document)
    if not steps or not isinstance(steps[0], BedStep):
        problems.append(_told(document, place, "the first step is not a bed", "- bed: with its name"))
    closing = []
    for k, step in enumerate(steps):
        following = steps[k + 1] if k + 1 < len(steps) else None
        if isinstance(step, BedStep):
            problems += _bed(step, model, document, (*place, k))
            if isinstance(following, BedStep):
                read = f"{following.name} follows {step.name} at once, so nothing sets its inlet"
                problems.append(_told(document, (*place, k + 1), read, "- cool: between them"))
        else:
            problems += _cooler(step, following, document, (*place, k))
            if step.sink == "feed" and step.outlet_temperature is None and not isinstance(following, BedStep):
                closing.append((k, step.name))
    if any(isinstance(s, BedStep) for s in steps) and len(closing) != 1:
        problems.append(_closing(closing, document))
    return problems


def _closing(closing: list[tuple[int, str]], document: Document) -> InputProblem:
    wanted = "one step - cool: with sink: feed after the last bed and without outlet_temperature"
    if not closing:
        return _told(document, ("reactor",), "nothing closes the heating of the feed", wanted)
    names = " and ".join(name for _, name in closing)
    read = f"{names} both close the heating of the feed"
    return _told(document, ("reactor", closing[1][0]), read, "outlet_temperature for all but one of them")


def _bed(step: BedStep, model: Model, document: Document, place: tuple[str | int, ...]) -> list[InputProblem]:
    problems = []
    if (step.diameter is None) == (step.length_over_diameter is None):
        problems.append(_told(document, place, f"{step.name} needs one of diameter and length_over_diameter", "one"))
    stated = [step.approach_fraction, step.approach_temperature].count(None)
    if step.rate == "approach" and stated != 1:
        read = f"{step.name} needs one of approach_fraction and approach_temperature"
        problems.append(_told(document, place, read, "one of them"))
    if step.rate != "approach" and stated != 2:
        read = f"{step.name} states an approach beside rate: {step.rate}"
        problems.append(_told(document, place, read, "rate: approach, or leave the approach out"))
    if step.rate != "approach" and set(model.rate_laws) != set(model.reactions):
        read = f"the model {model.name} has no rate law for rate: {step.rate}"
        problems.append(_told(document, place, read, "rate: approach"))
    return problems


def _cooler(
    step: CoolStep, following: Any, document: Document, place: tuple[str | int, ...]
) -> list[InputProblem]:
    problems = []
    if isinstance(following, BedStep) and step.outlet_temperature is not None:
        read = f"{step.name} states its outlet, and {following.name} states the same temperature as its inlet"
        problems.append(_told(document, (*place, "outlet_temperature"), read, "only the inlet_temperature of the bed"))
    if not isinstance(following, BedStep) and step.outlet_temperature is None and step.sink != "feed":
        problems.append(_told(document, place, f"{step.name} has no outlet_temperature", "a temperature or a range"))
    return problems


def _train(case: Case, model: Model, document: Document) -> list[InputProblem]:
    train = case.condensation
    if train.water_cooler is None and train.chiller is None:
        return [_told(document, ("condensation",), "there is no cooler", "water_cooler, chiller or both")]
    if train.cold_exchanger is not None and train.chiller is None:
        read = "a cold exchanger without a chiller has nothing cold"
        return [_told(document, ("condensation", "cold_exchanger"), read, "a chiller, or no cold_exchanger")]
    return []


def _objective(case: Case, model: Model, document: Document) -> list[InputProblem]:
    if case.objective == "annual profit" and case.prices.product is None:
        read = "annual profit needs the price of the product"
        return [_told(document, ("prices",), read, "prices.product")]
    if case.economics.cost_index is None:
        return _cost_year(case, document)
    return []


def _cost_year(case: Case, document: Document) -> list[InputProblem]:
    """Years whose plant cost index is known."""
    from optimiser.inputs.lookup import shipped

    equipment = read_document(shipped("models") / "equipment.yaml")
    known = sorted(int(year) for year in equipment.data["cost_index"]["years"])
    if case.economics.cost_year in known:
        return []
    read = f"no plant cost index is known for {case.economics.cost_year}"
    years = ", ".join(str(year) for year in known)
    return [_told(document, ("economics", "cost_year"), read, f"economics.cost_index, or one of {years}")]


def _water(case: Case, model: Model, document: Document) -> list[InputProblem]:
    water = case.utilities
    if water.cooling_water_return.si <= water.cooling_water_supply.si:
        read = "cooling water returns no warmer than it came"
        place = ("utilities", "cooling_water_return")
        return [_told(document, place, read, "a temperature above cooling_water_supply")]
    return []
