"""The keys of a case as rows of a table, from their declarations."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from pydantic import BaseModel
from pydantic_core import PydanticUndefined

from optimiser.inputs.case import Case
from optimiser.inputs.fields import Kind
from optimiser.inputs.validation import kinds_of, models_in

# Where a path leads through names that users give.
_NAMED = {
    "streams": "STREAM",
    "composition": "SPECIES",
    "stages": "STAGE",
    "limits": "RESULT",
    "quoted": "ITEM",
}
_STEPS = {"BedStep": "BED", "CoolStep": "COOLER"}


@dataclass(frozen=True)
class KeyRow:
    """One key of a case.

    Attributes:
        path: dotted; capitals stand for names that users give.
        dimension: of its value, empty for texts and the like; several with `or` between.
        default: as a user would write it, empty without one.
        required: whether a case must have it.
        meaning: what it is; reason: why the default is what it is.
    """

    path: str
    dimension: str
    default: str
    required: bool
    meaning: str
    reason: str


def describe_schema() -> list[KeyRow]:
    """All keys of a case in the order of their declaration."""
    return list(_rows(Case, ""))


def _rows(model: type[BaseModel], prefix: str) -> Iterator[KeyRow]:
    for name, field in model.model_fields.items():
        if field.exclude:
            continue
        inner = models_in(field.annotation)
        path = f"{prefix}{name}"
        if not inner:
            yield _row(path if name not in _NAMED else f"{path}.{_NAMED[name]}", field)
            continue
        for part in inner:
            yield from _rows(part, _prefix(prefix, name, part, len(inner) > 1))


def _prefix(prefix: str, name: str, part: type[BaseModel], choice: bool) -> str:
    """Path of a mapping; stages and steps are reached by their own names."""
    if choice:
        return f"{prefix}{name}.{_STEPS[part.__name__]}."
    if name == "stages":
        return f"{prefix}{_NAMED[name]}."
    return f"{prefix}{name}.{_NAMED[name]}." if name in _NAMED else f"{prefix}{name}."


def _row(path: str, field: Any) -> KeyRow:
    kinds = [kind for kind in kinds_of(field) if isinstance(kind, Kind)]
    extra = field.json_schema_extra or {}
    required = field.default is PydanticUndefined
    default = "" if required or field.default in (None, {}) else str(field.default)
    dimension = " or ".join(kinds[0].dimension) if kinds else ""
    return KeyRow(path, dimension, default, required, field.description or "", str(extra.get("reason", "")))
