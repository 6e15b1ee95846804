"""What can be wrong with what a user wrote.

Exception
`-- InputError            everything wrong with one case or model, told together

`InputProblem` is one entry of it. A problem is told with its place, what was read and what is wanted, so that
the user can mend it without looking anything up.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from optimiser.quantities.nearest import nearest_name as nearest

__all__ = ["InputError", "InputProblem", "nearest"]


@dataclass(frozen=True)
class InputProblem:
    """One thing wrong.

    Attributes:
        file: the file as the user named it, or the option of the command line.
        line, column: counted from 1; None where the place is not a file.
        path: dotted path of the value, empty for the whole file.
        read: what was found, empty where something is missing.
        wanted: what should stand there, as a sentence without capital and stop.
        nearest: the valid name that comes closest, or None.
    """

    file: str
    line: int | None
    column: int | None
    path: str
    read: str
    wanted: str
    nearest: str | None = None

    def __str__(self) -> str:
        place = ":".join(str(part) for part in (self.file, self.line, self.column) if part is not None)
        near = f" (nearest: {self.nearest})" if self.nearest else ""
        return f"{place} {self.path}: read {self.read!r}, wanted {self.wanted}{near}"


class InputError(Exception):
    """Everything wrong with an input; `errors` are in the order in which they stand in the file."""

    def __init__(self, errors: Iterable[InputProblem]) -> None:
        self.errors = sorted(errors, key=lambda p: (p.line or 0, p.column or 0))
        super().__init__("\n".join(str(problem) for problem in self.errors))
