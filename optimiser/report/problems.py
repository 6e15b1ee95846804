"""What is wrong with an input: where it stands, what was read, what is wanted, the nearest valid name."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, Protocol

from optimiser.report.plain import plain

# Fields of one error in JSON, in this order.
FIELDS = ("file", "line", "column", "path", "read", "wanted", "nearest")


class Problem(Protocol):
    """One thing wrong with what a user wrote."""

    @property
    def file(self) -> str | None:
        """The file, or the option of the command line, in which it stands."""

    @property
    def line(self) -> int | None:
        """Line, counted from 1."""

    @property
    def column(self) -> int | None:
        """Column, counted from 1."""

    @property
    def path(self) -> str | None:
        """Dotted path of the value."""

    @property
    def read(self) -> str | None:
        """What was found."""

    @property
    def wanted(self) -> str:
        """What should stand there."""

    @property
    def nearest(self) -> str | None:
        """The valid name that comes closest."""


def problem_rows(problems: Sequence[Problem]) -> list[dict[str, Any]]:
    """The problems as JSON rows; what is not known is null."""
    return [{field: getattr(problem, field, None) for field in FIELDS} for problem in problems]


def problems_text(problems: Sequence[Problem]) -> str:
    """The problems below one another, as text that ends with a line end."""
    count = len(problems)
    last = "1 thing to mend.\n" if count == 1 else f"{count} things to mend.\n"
    return "\n".join([*(_told(problem) for problem in problems), last])


def _told(problem: Problem) -> str:
    pairs = [("read", problem.read), ("wanted", problem.wanted), ("nearest", problem.nearest)]
    lines = [f"  {name:<8}{plain(text)}\n" for name, text in pairs if text not in (None, "")]
    return "".join([f"{_place(problem)}\n", *lines])


def _place(problem: Problem) -> str:
    """File, line and column the way editors and terminals know how to open them, then the path."""
    parts = [p for p in (problem.file, problem.line, problem.column) if p not in (None, "")]
    where = ":".join(plain(part) for part in parts)
    return "  ".join(text for text in (where, plain(problem.path or "")) if text)
