"""Limits of a case: texts by result path to values of the dimension of what they limit."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from optimiser.inputs.document import Document
from optimiser.inputs.errors import InputProblem, nearest
from optimiser.quantities import DIMENSIONS, Limit, Money, UnitProblem, parse_limit


def read_limits(
    texts: Mapping[str, Any], known: Mapping[str, str], money: Money, document: Document
) -> tuple[dict[str, Limit], list[InputProblem]]:
    """Those limits that can be read, and what is wrong with the others.

    Args:
        known: result paths with their dimensions.
    """
    limits: dict[str, Limit] = {}
    problems: list[InputProblem] = []
    for path, text in texts.items():
        read = _limit(path, text, known, money, document)
        if isinstance(read, Limit):
            limits[path] = read
        else:
            problems.append(read)
    return limits, problems


def _limit(
    path: str, text: Any, known: Mapping[str, str], money: Money, document: Document
) -> Limit | InputProblem:
    place = ("limits", path)
    if isinstance(text, Limit):
        return text
    if path == "feed.product_rate":
        return document.problem(place, path, "the path of a result", "product.rate", key=True)
    if path not in known:
        wanted = "the path of a quantity that a result of this case reports"
        return document.problem(place, path, wanted, nearest(path, known), key=True)
    sample = f"<= {DIMENSIONS[known[path]].sample(money.currency)}"
    if isinstance(text, bool) or not isinstance(text, int | float | str):
        return document.problem(place, None, f"a limit, such as `{sample}`")
    try:
        return parse_limit(document.text(place) or str(text), known[path], money)
    except UnitProblem as problem:
        return document.problem(place, problem.read, problem.wanted, problem.nearest)
