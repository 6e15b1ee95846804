"""Limits that bind, by what relaxing them is worth."""

from __future__ import annotations

from typing import TYPE_CHECKING

from optimiser.report.layout import BindingLimit, Result
from optimiser.report.look import GAP, MONEY, QUIET, heading
from optimiser.report.numbers import amount, number, unit_name, written
from optimiser.report.plain import plain

if TYPE_CHECKING:
    from rich.console import RenderableType

SIDES = {"low": "at least", "high": "at most"}


def binding(result: Result) -> list[RenderableType]:
    """Binding limits, the one that costs most money first."""
    from rich.text import Text

    limits = result.get("binding") or []
    if not limits and result.get("status") == "optimal":
        return [Text("\nNo limit binds: the optimum lies inside all ranges and limits.", style=QUIET)]
    if not limits:
        return []
    ordered = sorted(limits, key=_money, reverse=True)
    remark = "what relaxing each by one unit is worth, most money first"
    return [heading("Binding limits", remark), _limits(ordered)]


def _money(limit: BindingLimit) -> tuple[bool, float]:
    """Order by money; limits whose worth is not money come last, by worth."""
    per_year = limit["worth_per_year"]
    return (per_year is not None, abs(per_year if per_year is not None else limit["worth"]))


def _limits(limits: list[BindingLimit]) -> RenderableType:
    """Two lines each: path and worth, then what the limit says."""
    from rich.padding import Padding
    from rich.table import Table
    from rich.text import Text

    table = Table.grid(padding=(0, GAP), expand=True)
    table.add_column(ratio=1, overflow="fold")
    table.add_column(justify="right", no_wrap=True)
    for limit in limits:
        first, second = _worths(limit)
        table.add_row(Text(plain(limit["path"])), Text(first, style=MONEY))
        table.add_row(Text(f"  {_said(limit)}", style=QUIET), Text(second, style=QUIET))
    return Padding(table, (0, 0, 0, 2))


def _said(limit: BindingLimit) -> str:
    text = f"{SIDES[limit['side']]} {written(limit['limit'])} {unit_name(limit['unit'])}".rstrip()
    name = plain(limit["name"])
    return text if name in plain(limit["path"]) else f"{name}: {text}"


def _worths(limit: BindingLimit) -> tuple[str, str]:
    """What stands in front, money where there is any, and what stands below it."""
    worth = f"{number(limit['worth'])} {plain(limit['worth_unit'])}"
    if limit["worth_per_year"] is not None:
        return f"{number(limit['worth_per_year'])} {plain(limit['worth_per_year_unit'] or '')}", worth
    marginal = limit.get("marginal_cost")
    return worth, f"one more costs {amount(marginal)}" if marginal else ""
