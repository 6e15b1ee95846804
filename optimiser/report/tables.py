"""Tables of many columns, cut into as many parts as the width asks for, the first column repeated."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from optimiser.report.look import GAP, QUIET, Look

if TYPE_CHECKING:
    from rich.console import RenderableType

MARGIN = 2  # Blanks before a table [characters].


@dataclass(frozen=True)
class Column:
    """Cells of one quantity under its name and unit."""

    head: str
    unit: str
    cells: Sequence[str]

    @property
    def width(self) -> int:
        """Characters that the widest line of the column takes."""
        from rich.cells import cell_len

        return max(cell_len(text) for text in (self.head, self.unit, *self.cells))


def keyed(keys: Sequence[str], columns: Sequence[Column], look: Look) -> list[RenderableType]:
    """One row for each key; columns that do not fit beside the others go into a further table below."""
    parts = _parts(Column("", "", keys), columns, look.width)
    return [_table(keys, part) for part in parts]


def _parts(first: Column, columns: Sequence[Column], width: int) -> list[list[Column]]:
    room = width - MARGIN - first.width
    parts: list[list[Column]] = [[]]
    left = room
    for column in columns:
        need = GAP + column.width
        if need > left and parts[-1]:
            parts.append([])
            left = room
        parts[-1].append(column)
        left -= need
    return parts


def _table(keys: Sequence[str], columns: Sequence[Column]) -> RenderableType:
    from rich.padding import Padding
    from rich.table import Table
    from rich.text import Text

    table = Table.grid(padding=(0, GAP))
    table.add_column(overflow="fold")
    for _ in columns:
        table.add_column(justify="right", no_wrap=True)
    table.add_row("", *(Text(c.head, style=QUIET) for c in columns))
    if any(c.unit for c in columns):
        table.add_row("", *(Text(c.unit, style=QUIET) for c in columns))
    for row, key in enumerate(keys):
        table.add_row(Text(key), *(Text(c.cells[row]) for c in columns))
    return Padding(table, (0, 0, 0, MARGIN))
