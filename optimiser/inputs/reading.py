"""From a case file to a checked, frozen case: everything that is wrong is told in one go."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

from optimiser.inputs.case import Case
from optimiser.inputs.checks import check
from optimiser.inputs.document import Document
from optimiser.inputs.draft import Draft
from optimiser.inputs.errors import InputError, InputProblem
from optimiser.inputs.lookup import find_case
from optimiser.inputs.overrides import apply_sets
from optimiser.inputs.paths import mapping, paths_of
from optimiser.inputs.validation import validated
from optimiser.inputs.yaml_reader import parse_document, read_document
from optimiser.quantities import CURRENCIES, Money, UnitProblem, parse_quantity


def read_case(name: str | Path, sets: Sequence[str] = (), model: Any = None) -> Case:
    """A case by path or by shipped name, with values replaced.

    Args:
        sets: `PATH=VALUE`, applied one after the other.
        model: the model of its chemistry, where it is already read; by default the one that the case names.

    Raises:
        InputError: everything that is wrong, with its place.
    """
    return case_from(read_document(find_case(str(name)), str(name)), sets, model)


def parse_case(text: str, sets: Sequence[str] = (), model: Any = None, file: str = "case") -> Case:
    """As `read_case`, from a text; a model named by path is looked for from the current folder."""
    return case_from(parse_document(text, file), sets, model)


def case_from(document: Document, sets: Sequence[str], model: Any) -> Case:
    """A checked case from a document, which the options change."""
    if isinstance(document.data, dict):
        apply_sets(document, sets)
    money = _money(document.data)
    problems: list[InputProblem] = []
    if model is None:
        model, problems = _model(document)
    draft = Draft(document, money, model)
    context = {
        "money": money,
        "document": document,
        "paths": paths_of(mapping(document.data), draft.reacting),
        "problems": problems,
    }
    case, found = validated(Case, document, context)
    problems = _each_place_once(_without_misspelt([*problems, *found, *check(draft)]))
    if problems or case is None:
        raise InputError(problems)
    return case.model_copy(update={"path": document.path, "sha256": document.sha256})


def _without_misspelt(problems: list[InputProblem]) -> list[InputProblem]:
    """Without the missing keys that stand there misspelt."""
    misspelt = [p for p in problems if p.nearest and p.path.endswith(p.read)]
    meant = {p.path.removesuffix(p.read) + str(p.nearest) for p in misspelt}
    return [p for p in problems if p.read or p.path not in meant]


def _each_place_once(problems: list[InputProblem]) -> list[InputProblem]:
    """The first problem of each value: a second one there would only follow from it."""
    first: dict[tuple[str, str], InputProblem] = {}
    for problem in problems:
        first.setdefault((problem.file, problem.path), problem)
    return list(first.values())


def _money(data: Any) -> Money:
    """Currency and exchange rate, needed before any price is read; what is wrong with them is told later."""
    economics = mapping(data, "economics")
    currency = economics.get("currency")
    currency = currency if currency in CURRENCIES else "EUR"
    try:
        rate = parse_quantity(str(economics.get("exchange_rate")), "exchange_rate", currency).si
    except UnitProblem:
        return Money(currency)
    return Money(currency, rate)


def _model(document: Document) -> tuple[Any, list[InputProblem]]:
    """The model that a case names; one that is not there is a problem of the line that names it."""
    from optimiser.inputs.lookup import find_model
    from optimiser.inputs.model import read_model

    name = mapping(document.data).get("model")
    if not isinstance(name, str):
        return None, []
    try:
        find_model(name, document.path)
    except InputError as problem:
        missing = problem.errors[0]
        return None, [document.problem(("model",), name, missing.wanted, missing.nearest)]
    try:
        return read_model(name, relative_to=document.path), []
    except InputError as problem:
        return None, problem.errors
