"""A model of a chemistry: species, reactions, binary parameters, catalyst and rate laws, as frozen data.

The numbers in use stand beside where they come from and how sure they are (`confidence`).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from pathlib import Path
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field, ValidationInfo

from optimiser.inputs.errors import InputError, InputProblem, nearest
from optimiser.inputs.fields import Kind, Section, fault
from optimiser.inputs.lookup import find_model
from optimiser.inputs.validation import validated
from optimiser.inputs.yaml_reader import Document, read_document
from optimiser.quantities import Money, Quantity, Setting

Confidence = Literal["confirmed", "quoted", "fitted", "from memory", "invented"]
GAS_CONSTANT = 8.31446261815324
# Factors of rates and pressures that published laws are printed in: Pa, and mol per m3 and second.
PRESSURES = {"atm": 101325.0, "bar": 1e5, "Pa": 1.0, "kPa": 1e3, "MPa": 1e6}
RATES = {"kmol/m3/h": 1000.0 / 3600.0, "mol/m3/s": 1.0, "kmol/m3/s": 1000.0}


@dataclass(frozen=True)
class Sourced:
    """A quantity with its source and how sure it is."""

    si: float
    unit: str
    source: str
    confidence: str


def _sourced(*dimensions: str) -> Any:
    """Reader of {value, source, confidence}."""
    kind = Kind(tuple(dimensions))

    def read(value: Any, info: ValidationInfo) -> Sourced:
        if isinstance(value, Sourced):
            return value
        if not isinstance(value, dict) or "value" not in value:
            raise fault("a number without its source", "{value: ..., source: ..., confidence: ...}")
        unknown = set(value) - {"value", "source", "confidence", "range", "note"}
        if unknown:
            raise fault(f"unknown key {sorted(unknown)[0]}", "value, source, confidence, range or note")
        if value.get("confidence") not in Confidence.__args__:  # type: ignore[attr-defined]
            raise fault(
                "no confidence is stated", "confidence: confirmed, quoted, fitted, from memory or invented"
            )
        quantity = kind.read(value["value"], info)
        assert isinstance(quantity, Quantity)
        return Sourced(quantity.si, quantity.unit, str(value.get("source", "")), str(value["confidence"]))

    return Annotated[Any, BeforeValidator(read)]


class NasaRange(Section):
    """Seven coefficients over a range of temperature."""

    range: Annotated[Setting, Kind(("temperature",), "setting")]
    coefficients: Annotated[tuple[float, ...], Field(min_length=7, max_length=7)]


class Critical(Section):
    """Critical point and acentric factor."""

    temperature: Annotated[Quantity, Kind(("temperature",))]
    pressure: Annotated[Quantity, Kind(("pressure",), least=0.0, above=True)]
    acentric: float


class SpeciesData(Section):
    """One species."""

    title: str
    elements: dict[str, float]
    molar_mass: Annotated[Quantity, Kind(("molar_mass",), least=0.0, above=True)]
    nasa: Annotated[tuple[NasaRange, ...], Field(min_length=1)]
    critical: Critical
    enthalpy_shift: _sourced("molar_energy") | None = None  # type: ignore[valid-type]
    source: str | list[str]
    confidence: Confidence


class Pair(Section):
    """One binary parameter."""

    pair: tuple[str, str]
    k: float
    source: str
    confidence: Confidence
    range: Annotated[Setting, Kind(("temperature",), "setting")] | None = None


class Binary(Section):
    """Binary parameters of each equation of state."""

    srk: tuple[Pair, ...] = ()
    pr: tuple[Pair, ...] = ()


class Viscosity(Section):
    """Viscosity of the gas in the beds at a temperature, and the power of temperature by which it grows."""

    value: Annotated[Quantity, Kind(("viscosity",), least=0.0, above=True)]
    temperature: Annotated[Quantity, Kind(("temperature",))]
    exponent: float
    source: str
    confidence: Confidence


class Ranges(Section):
    """Where the rate law was measured."""

    temperature: Annotated[Setting, Kind(("temperature",), "setting")]
    pressure: Annotated[Setting, Kind(("pressure",), "setting")]
    source: str
    confidence: Confidence


class CatalystData(Section):
    """The catalyst as packed."""

    title: str
    bulk_density: _sourced("density")  # type: ignore[valid-type]
    void: _sourced("fraction")  # type: ignore[valid-type]
    pellet_diameter: _sourced("length")  # type: ignore[valid-type]
    viscosity: Viscosity
    price: _sourced("mass_price")  # type: ignore[valid-type]
    life: _sourced("years")  # type: ignore[valid-type]
    range: Ranges


class Constant(Section):
    """A exp(-E/(R T))."""

    factor: Annotated[float, Field(gt=0)]
    activation: Annotated[Quantity, Kind(("molar_energy",))]
    gas_constant: Annotated[Quantity, Kind(("ratio",))] | None = None
    source: str
    confidence: Confidence


class Guard(Section):
    """Species that may be absent, and the smallest pressure that counts, in the law's unit."""

    species: tuple[str, ...]
    value: Annotated[float, Field(gt=0)]


class LawData(Section):
    """One rate law."""

    constant: Constant
    powers: dict[str, float]
    driving_power: float | None = 1.0
    equilibrium_power: float = 0.0
    pressure_unit: Literal["atm", "bar", "Pa", "kPa", "MPa"]
    rate_unit: Literal["kmol/m3/h", "mol/m3/s", "kmol/m3/s"]
    guard: Guard | None = None
    source: str
    confidence: Confidence

    @property
    def log_factor(self) -> float:
        """Ln of the prefactor."""
        return math.log(self.constant.factor)

    @property
    def activation_temperature(self) -> float:
        """E/R, K. An activation energy in calories was fitted with R = 1.987 cal/mol/K, and is read with it."""
        unit = self.constant.activation.unit
        if unit.replace(" ", "").startswith(("cal", "kcal")):
            return self.constant.activation.si / (4.184 * 1.987)
        return self.constant.activation.si / GAS_CONSTANT

    @property
    def pascals(self) -> float:
        """Pa in one unit of the law's pressure."""
        return PRESSURES[self.pressure_unit]

    @property
    def rate_size(self) -> float:
        """Mol per m3 of bed and second in one unit of the law's rate."""
        return RATES[self.rate_unit]


class Model(Section):
    """A whole model file."""

    setpoise_model: Literal[1]
    name: str
    title: str
    products: Annotated[tuple[str, ...], Field(min_length=1)]
    key_reactant: str
    sources: dict[str, str] = Field({})
    species: dict[str, SpeciesData]
    binary: Binary = Binary()
    reactions: dict[str, dict[str, float]]
    catalyst: CatalystData
    rate_laws: dict[str, LawData] = Field({})
    effectiveness: str | None = None
    path: Path | None = Field(None, exclude=True)
    sha256: str = Field("", exclude=True)


def read_model(name: str, relative_to: Path | None = None) -> Model:
    """A shipped model by name, or a model file by path (from the folder of `relative_to`).

    Raises:
        InputError: all that is wrong with it.
    """
    path = find_model(name, relative_to)
    document = read_document(path, path.name)
    context = {"money": Money()}
    model, problems = validated(Model, document, context)
    if model is not None:
        problems += _meaning(model, document)
    if problems or model is None:
        raise InputError(problems)
    return model.model_copy(update={"path": path, "sha256": document.sha256})


def _meaning(model: Model, document: Document) -> list[InputProblem]:
    """What no single field can tell: species known, elements balance, effectiveness known."""
    problems = []
    known = list(model.species)
    named: list[tuple[tuple[str | int, ...], str]] = [
        (("products", k), s) for k, s in enumerate(model.products)
    ]
    named.append((("key_reactant",), model.key_reactant))
    for reaction, numbers in model.reactions.items():
        named += [(("reactions", reaction, s), s) for s in numbers]
    for law, data in model.rate_laws.items():
        named += [(("rate_laws", law, "powers", s), s) for s in data.powers]
        if law not in model.reactions:
            wanted = f"one of {', '.join(model.reactions)}"
            problems.append(document.problem(("rate_laws", law), law, wanted, key=True))
    for path, species in named:
        if species not in model.species:
            wanted = f"one of {', '.join(known)}"
            problems.append(document.problem(path, species, wanted, nearest(species, known)))
    return problems or _balances(model, document)


def _balances(model: Model, document: Document) -> list[InputProblem]:
    problems = []
    for name, numbers in model.reactions.items():
        elements = {e for s in numbers for e in model.species[s].elements}
        for element in sorted(elements):
            excess = sum(nu * model.species[s].elements.get(element, 0.0) for s, nu in numbers.items())
            if abs(excess) > 1e-9:
                read = f"{element} does not balance: {excess:+g} atoms are made"
                problems.append(document.problem(("reactions", name), read, "numbers that balance"))
    return problems
