"""How a page may look where it is shown: its width, colour or none, lines drawn or typed."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from io import StringIO
from typing import TYPE_CHECKING

from optimiser.report.plain import plain

if TYPE_CHECKING:
    from rich.console import RenderableType
    from rich.text import Text

# A page is laid out for this span of widths [characters]; longer lines would be hard to follow.
NARROWEST, WIDEST = 60, 100
# Two columns of a table stand this far apart [characters].
GAP = 2

HEADING = "bold"
QUIET = "dim"
GOOD = "green"
ALERT = "yellow"
BAD = "red"
MONEY = "cyan"


@dataclass(frozen=True)
class Look:
    """What the place of the page allows.

    Attributes:
        width: line length [characters].
        colour: whether styles may be sent; plain text has none.
        drawn: whether lines may be drawn with characters beyond ASCII.
    """

    width: int = 80
    colour: bool = False
    drawn: bool = False

    @property
    def rail(self) -> str:
        """One piece of the line on which a decision sits."""
        return "─" if self.drawn else "-"

    @property
    def knob(self) -> str:
        """The place of a decision on its line."""
        return "●" if self.drawn else "o"

    @property
    def bar(self) -> str:
        """One piece of a bar that shows a share."""
        return "━" if self.drawn else "="

    @property
    def bullet(self) -> str:
        """What begins an item of a list."""
        return "•" if self.drawn else "-"


def render(blocks: Iterable[RenderableType], look: Look) -> str:
    """The blocks one below the other as text that ends with a line end; no line ends with blanks.

    Texts are taken as they are: nothing in them is read as markup.
    """
    from rich.console import Console

    console = Console(
        file=StringIO(),
        width=min(max(look.width, NARROWEST), WIDEST),
        force_terminal=look.colour,
        color_system="standard" if look.colour else None,
        markup=False,
        highlight=False,
        emoji=False,
        legacy_windows=False,
    )
    with console.capture() as captured:
        for block in blocks:
            console.print(block)
    lines = captured.get().splitlines()
    return "\n".join(line.rstrip() for line in lines) + "\n"


def banner(title: str, verdict: str, style: str) -> RenderableType:
    """First line of a page: the title, and at the right the verdict in its colour."""
    from rich.table import Table
    from rich.text import Text

    table = Table.grid(expand=True, padding=(0, GAP))
    table.add_column(ratio=1, overflow="fold")
    table.add_column(justify="right")
    table.add_row(Text(plain(title), style=HEADING), Text(plain(verdict), style=style))
    return table


def heading(title: str, remark: str = "") -> Text:
    """Title of a section with a quiet remark behind it."""
    from rich.text import Text

    text = Text("\n")
    text.append(title, style=HEADING)
    if remark:
        text.append(f"   {remark}", style=QUIET)
    return text


def bulleted(items: Iterable[str], look: Look, style: str = "") -> RenderableType:
    """Items below one another, their further lines set in."""
    from rich.table import Table
    from rich.text import Text

    table = Table.grid(padding=(0, 1))
    table.add_column(no_wrap=True)
    table.add_column(overflow="fold")
    for item in items:
        table.add_row(f"  {look.bullet}", Text(item, style=style))
    return table
