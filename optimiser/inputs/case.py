"""A case: everything that a designer states about one synthesis section, as frozen objects."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Discriminator, Field, StrictStr, Tag, ValidationInfo

from optimiser.inputs.fields import Section, money_of, said
from optimiser.inputs.money import Economics, Prices
from optimiser.inputs.plant import Compression, Feed, FeedStream, Loop, Stage
from optimiser.inputs.removal import Condensation, Utilities, Vessels
from optimiser.inputs.steps import BedStep, CoolStep
from optimiser.quantities import Limit, Setting

__all__ = ["BedStep", "Case", "CoolStep", "FeedStream", "Objective", "Stage"]

Objective = Literal["yield per unit cost", "levelised cost", "annual profit", "yield"]


def _step_kind(value: Any) -> str | None:
    if isinstance(value, dict):
        return next((kind for kind in ("bed", "cool") if kind in value), None)
    return getattr(value, "kind", None)


Step = Annotated[Annotated[BedStep, Tag("bed")] | Annotated[CoolStep, Tag("cool")], Discriminator(_step_kind)]


def _read_limits(value: Any, info: ValidationInfo) -> Any:
    """Limits as texts become values by the dimension of what they limit; problems go to the reader's list."""
    if not isinstance(value, dict) or not info.context:
        return value
    from optimiser.inputs.limits import read_limits

    limits, problems = read_limits(value, info.context["paths"], money_of(info), info.context["document"])
    info.context["problems"].extend(problems)
    return limits


class Case(Section):
    """A whole case.

    Attributes:
        path: of the file it was read from, None without one; `sha256` of the file's bytes.
    """

    setpoise: Literal[1] = said(meaning="version of this layout")
    title: StrictStr = said(meaning="for people")
    model: StrictStr = said(meaning="shipped model by name, or path of a model file, from the case's folder")
    equation_of_state: Literal["srk", "pr", "ideal"] = said(
        "srk", meaning="of gas and liquid", reason="within 1 % for hydrogen and nitrogen to 300 bar"
    )
    feed: Feed = said(meaning="fresh feed")
    compression: Compression = said(meaning="of the make-up")
    loop: Loop = said(meaning="pressure, purge and circulation")
    reactor: Annotated[tuple[Step, ...], Field(min_length=1)] = said(
        meaning="beds and coolers in the order in which gas meets them"
    )
    condensation: Condensation = said(meaning="removal of the product")
    utilities: Utilities = said({}, meaning="cooling water")
    vessels: Vessels = said({}, meaning="walls of converter and separator")
    limits: Annotated[dict[StrictStr, Limit], BeforeValidator(_read_limits)] = said(
        {}, meaning="result path to what it must not pass"
    )
    prices: Prices = said(meaning="what is bought and sold beside the feed")
    economics: Economics = said(meaning="how capital becomes annual cost")
    objective: Objective = said(
        "yield per unit cost", meaning="what the optimum is best at", reason="product for each unit of cost"
    )

    path: Path | None = Field(None, exclude=True)
    sha256: str = Field("", exclude=True)

    def __eq__(self, other: object) -> bool:
        """Whether two cases state the same, wherever they were read from."""
        if not isinstance(other, Case):
            return NotImplemented
        stated = [name for name, field in type(self).model_fields.items() if not field.exclude]
        return all(getattr(self, name) == getattr(other, name) for name in stated)

    __hash__ = None  # type: ignore[assignment]

    def settings(self) -> dict[str, Setting]:
        """Everything that may be a decision, by path, held or free."""
        found: dict[str, Setting | None] = {"feed.product_rate": self.feed.product_rate}
        for name, stream in self.feed.streams.items():
            found[f"feed.streams.{name}.flow"] = stream.flow
            found[f"feed.streams.{name}.share"] = stream.share
        for stage in self.compression.stages:
            found[f"compression.{stage.name}.discharge_pressure"] = stage.discharge_pressure
        found |= _settings_in("loop", self.loop)
        for step in self.reactor:
            found |= _settings_in(f"reactor.{step.name}", step)
        for part in ("water_cooler", "cold_exchanger", "chiller"):
            found |= _settings_in(f"condensation.{part}", getattr(self.condensation, part))
        return {path: setting for path, setting in found.items() if setting is not None}

    def resolved(self) -> dict[str, Any]:
        """The case as nested data with every default visible, values as a user would write them."""
        from optimiser.inputs.writing import as_written

        return as_written(self)

    def resolved_yaml(self) -> str:
        """`resolved` as YAML; reading it gives an equal case."""
        from optimiser.inputs.writing import as_yaml

        return as_yaml(self.resolved())


def _settings_in(path: str, section: Section | None) -> dict[str, Setting | None]:
    """Settings among the fields of one mapping."""
    if section is None:
        return {}
    values = {name: getattr(section, name) for name in type(section).model_fields}
    return {f"{path}.{name}": value for name, value in values.items() if isinstance(value, Setting)}
