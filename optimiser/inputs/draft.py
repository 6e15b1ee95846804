"""A case as written, which may still be wrong, for rules that look at more than one value."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from functools import cached_property
from typing import Any

from optimiser.inputs.document import Document, Path_
from optimiser.inputs.errors import InputProblem
from optimiser.inputs.paths import mapping
from optimiser.quantities import Money, Setting, UnitProblem, parse_setting, parse_unit
from optimiser.quantities.units import currency_in

Problems = Iterator[InputProblem]


def _names(things: Iterable[Any]) -> list[str]:
    """Names of things that have one, or that are names themselves."""
    return [str(getattr(thing, "name", thing)) for thing in things]


@dataclass(frozen=True)
class Draft:
    """A case that may still be wrong; `model` is None where the model cannot be read."""

    document: Document
    money: Money
    model: Any = None

    def mapping(self, *path: str) -> dict[str, Any]:
        """The mapping at a path, empty where there is none."""
        return mapping(self.document.data, *path)

    def listed(self, *path: str) -> list[tuple[int, dict[str, Any]]]:
        """Items of a list that are mappings, with their positions."""
        found = self.mapping(*path[:-1]).get(path[-1])
        numbered = enumerate(found) if isinstance(found, list) else ()
        return [(k, item) for k, item in numbered if isinstance(item, dict)]

    def setting(self, path: Path_, dimension: str) -> Setting | None:
        """A value or range, None where it is missing or cannot be read."""
        text = self.document.text(path)
        try:
            return parse_setting(text, dimension, self.money)
        except UnitProblem:
            return None

    def value(self, path: Path_, dimension: str, default: str) -> float | None:
        """A value in SI; its default where it is missing, None where it cannot be read."""
        if self.document.text(path):
            setting = self.setting(path, dimension)
            return None if setting is None else setting.low
        return parse_setting(default, dimension).low

    @cached_property
    def species(self) -> list[str] | None:
        """Names of the model's species."""
        return None if self.model is None else _names(self.model.species)

    @cached_property
    def reacting(self) -> set[str] | None:
        """Species that take part in a reaction of the model."""
        if self.model is None:
            return None
        reactions = self.model.reactions
        numbers = reactions.values() if isinstance(reactions, dict) else [r.species for r in reactions]
        return {str(species) for reaction in numbers for species in reaction}

    @cached_property
    def unrated(self) -> list[str]:
        """Reactions of the model that have no rate law."""
        if self.model is None:
            return []
        reactions = _names(self.model.reactions)
        if hasattr(self.model, "law_of"):
            return [name for name in reactions if self.model.law_of(name) is None]
        return [name for name in reactions if name not in _names(self.model.rate_laws)]

    @cached_property
    def catalyst_currency(self) -> str | None:
        """Currency in which the model states the price of its catalyst."""
        catalyst = getattr(self.model, "catalyst", None)
        unit = getattr(getattr(catalyst, "price", None), "unit", "")
        return getattr(catalyst, "currency", None) or currency_in(parse_unit(unit).powers)
