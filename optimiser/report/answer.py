"""The answer, first on the page: how good the point is, the objective, the product and what it costs."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from optimiser.report.layout import Result, Start
from optimiser.report.look import ALERT, BAD, GAP, GOOD, QUIET, banner
from optimiser.report.numbers import amount, number
from optimiser.report.plain import plain

if TYPE_CHECKING:
    from rich.console import RenderableType
    from rich.text import Text

# Starts whose objectives differ by less than this part of it reached the same optimum.
SAME = 1e-4
# Status of a start that the solver finished to its tolerance.
CONVERGED = "converged"
DIRECTIONS = {"maximise": "highest within the limits", "minimise": "lowest within the limits"}


def answer(result: Result, title: str) -> list[RenderableType]:
    """Title, grade and the figures that the reader came for."""
    blocks: list[RenderableType] = [_title(result, title)]
    if not settled(result):
        blocks.append(_sentence(result.get("stopped", "")))
    figures = _figures(result)
    if figures:
        blocks += ["", _figure_table(figures)]
    blocks += _starts(result)
    return blocks


def settled(result: Result) -> bool:
    """Whether the run ended with a point that its audit confirms."""
    audit = result.get("audit")
    return result.get("status") in ("optimal", "calculated") and bool(audit and audit["passed"])


def _title(result: Result, title: str) -> RenderableType:
    grade = result.get("grade") or result.get("status", "")
    style = GOOD if settled(result) else (BAD if result.get("status") in ("conflict", "failed") else ALERT)
    return banner(title, grade, style)


def _sentence(text: str) -> Text:
    from rich.text import Text

    words = plain(text).rstrip(".")
    return Text(f"{words[:1].upper()}{words[1:]}.")


def _figures(result: Result) -> list[tuple[str, str]]:
    """Pairs (amount, what it is), those that the result has."""
    pairs = [_objective(result), *_product(result)]
    ratio = result.get("recycle_ratio")
    if ratio:
        pairs.append((amount(ratio), "recycle ratio, recycle to make-up"))
    return [pair for pair in pairs if pair is not None]


def _objective(result: Result) -> tuple[str, str] | None:
    objective = result.get("objective")
    if not objective or objective["value"] is None:
        return None
    remark = f", {DIRECTIONS[objective['direction']]}" if result.get("status") == "optimal" else ""
    return amount(objective, 5), plain(objective["name"]) + remark


def _product(result: Result) -> list[tuple[str, str] | None]:
    product: Any = result.get("product")
    if not product:
        return []
    purity = product.get("purity")
    return [
        (amount(product["rate"]), f"product, {amount(purity)} pure" if purity else "product"),
        _named(product, "cost", "levelised cost of the product"),
        _named(product, "marginal_cost", "cost of a little more product"),
        _named(product, "yield", "product on feed, by mass"),
    ]


def _named(product: Any, key: str, words: str) -> tuple[str, str] | None:
    found = product.get(key)
    return (amount(found), words) if found else None


def _figure_table(figures: list[tuple[str, str]]) -> RenderableType:
    from rich.padding import Padding
    from rich.table import Table
    from rich.text import Text

    table = Table.grid(padding=(0, GAP + 1))
    table.add_column(no_wrap=True)
    table.add_column(overflow="fold")
    for value, words in figures:
        table.add_row(Text(value, style="bold"), Text(words, style=QUIET))
    return Padding(table, (0, 0, 0, 2))


def _starts(result: Result) -> list[RenderableType]:
    """How many of several starts came to this optimum, so that a lucky one is seen as such."""
    from rich.text import Text

    starts = result.get("starts") or []
    objective = result.get("objective")
    if len(starts) < 2 or not objective or objective["value"] is None or result.get("status") != "optimal":
        return []
    return ["", Text("  " + _agreement(starts, objective["value"], objective["unit"]), style=QUIET)]


def _agreement(starts: list[Start], best: float, unit: str) -> str:
    values = [s["objective"] for s in starts if s["objective"] is not None and s["status"] == CONVERGED]
    same = [v for v in values if abs(v - best) <= SAME * abs(best)]
    parts = [f"{len(same)} of {len(starts)} starts reached this optimum"]
    others = [v for v in values if v not in same]
    if others:
        span = " to ".join(dict.fromkeys(number(v, 5) for v in (min(others), max(others))))
        parts.append(f"{len(others)} ended at {span} {unit}")
    if len(values) < len(starts):
        parts.append(f"{len(starts) - len(values)} found none")
    return "; ".join(parts)
