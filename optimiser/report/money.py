"""Annual cost by item with shares, and the capital behind it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from optimiser.report.layout import Costs, Result
from optimiser.report.look import GAP, QUIET, Look, heading
from optimiser.report.numbers import column, share
from optimiser.report.plain import plain

if TYPE_CHECKING:
    from rich.console import RenderableType
    from rich.table import Table

# A bar of this length [characters] stands for the whole cost.
WHOLE_BAR = 16
# Cost and capital stand side by side from this width on [characters].
SIDE_BY_SIDE = 96


def costs(result: Result, look: Look) -> list[RenderableType]:
    """Cost by item, largest first, and capital; side by side where there is room."""
    found = result.get("costs")
    if not found:
        return []
    annual, capital = _annual(found, look), _capital(found)
    return [heading("Costs"), *_beside(annual, capital, look)]


def _beside(annual: Table, capital: Table | None, look: Look) -> list[RenderableType]:
    from rich.padding import Padding
    from rich.table import Table

    if capital is None or look.width < SIDE_BY_SIDE:
        below: list[RenderableType] = [] if capital is None else ["", Padding(capital, (0, 0, 0, 2))]
        return [Padding(annual, (0, 0, 0, 2)), *below]
    both = Table.grid(padding=(0, 3 * GAP))
    both.add_row(annual, capital)
    return [Padding(both, (0, 0, 0, 2))]


def _annual(found: Costs, look: Look) -> Table:
    from rich.text import Text

    items = sorted(found["items"].items(), key=lambda pair: -abs(pair[1]["value"]))
    values = column([*(item["value"] for _, item in items), found["total"]["value"]])
    table = _grid("a year", found["total"]["unit"], "share", "")
    for (name, item), value in zip(items, values[:-1], strict=True):
        bar = Text(look.bar * round(WHOLE_BAR * max(item["share"] or 0.0, 0.0)), style=QUIET)
        table.add_row(_name(name), value, share(item["share"]), bar)
    table.add_row(Text("total", style="bold"), Text(values[-1], style="bold"), "", "")
    return table


def _capital(found: Costs) -> Table | None:
    """Capital by item, largest first, the total last."""
    from rich.text import Text

    capital = found["capital"]
    if not capital:
        return None
    names = sorted(capital, key=lambda name: (name == "total", -(capital[name]["value"] or 0.0)))
    table = _grid("capital", capital[names[0]]["unit"])
    for name, value in zip(names, column([capital[n]["value"] for n in names]), strict=True):
        style = "bold" if name == "total" else ""
        table.add_row(Text(_name(name), style=style), Text(value, style=style))
    return table


def _grid(title: str, unit: str, *further: str) -> Table:
    from rich.table import Table
    from rich.text import Text

    table = Table.grid(padding=(0, GAP))
    table.add_column(no_wrap=True)
    for head in (title, *further):
        table.add_column(justify="right" if head else "left", no_wrap=True)
    table.add_row("", *(Text(text, style=QUIET) for text in (title, *further)))
    table.add_row("", Text(plain(unit), style=QUIET), *("" for _ in further))
    return table


def _name(name: str) -> str:
    return plain(name.replace("_", " "))
