"""What every piece of plant is built with: scaled variables, equations, decisions and reported quantities.

Variables are in SI units. Their nominal values, by kind, go into the model's `scaling_factor` suffix, so that the
solver sees numbers of order one.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from typing import Any

from pyomo.core import Block, ConcreteModel, Constraint, Suffix, Var

from optimiser.chemistry.mixture import Mixture, Phase
from optimiser.chemistry.reactions import Chemistry
from optimiser.engineering.costs import Correlation, Equipment
from optimiser.inputs.case import Case
from optimiser.quantities import Setting

# Size of one scaled unit of each kind of variable, in SI units. Those marked by None grow with the plant: the frame
# multiplies its nominal molar flow by the factor in `_PER_FLOW`.
_NOMINAL = {
    "temperature": 100.0,
    "difference": 30.0,
    "pressure": 1e7,
    "ratio": 1.0,
    "fraction": 0.1,
    "trace": 0.01,
    "volume": 10.0,
    "length": 5.0,
    "area": 500.0,
    "mass_flux": 10.0,
    "gradient": 1e4,
    "mass": 1e5,
    "molar_enthalpy": 1e4,
}
_PER_FLOW = {"flow": 1.0, "heat": 1e4, "money": 1e4, "mass_flow": 0.01}


@dataclass(frozen=True)
class Reported:
    """A quantity that a result reports and that may carry a limit.

    `variables` holds more than one where the quantity is the largest (`pick` is max) or smallest (min) of several.
    """

    path: str
    dimension: str
    variables: tuple[Any, ...]
    pick: Any = max


@dataclass
class StreamRecord:
    """A stream of the section as variables or expressions."""

    vapour: Sequence[Any]
    liquid: Sequence[Any] | None
    temperature: Any
    pressure: Any


@dataclass(frozen=True)
class Edge:
    """One end of a variable's range that a user set: the path that moves it, in what unit it was written."""

    path: str
    variable: Any
    side: str
    value: float
    unit: str
    reported: str


@dataclass(frozen=True)
class Bought:
    """A piece of equipment with the correlation that costs it; size SI, pressure Pa or None."""

    name: str
    correlation: Correlation
    size: Any
    pressure: Any


@dataclass
class Frame:
    """The model under construction and what has been registered in it.

    `flow` is the nominal molar flow of the make-up, mol/s.
    """

    case: Case
    chemistry: Chemistry
    equipment: Equipment
    flow: float
    model: ConcreteModel = field(default_factory=ConcreteModel)
    reported: dict[str, Reported] = field(default_factory=dict)
    decisions: dict[str, tuple[Any, Setting]] = field(default_factory=dict)
    streams: dict[str, StreamRecord] = field(default_factory=dict)
    edges: list[Edge] = field(default_factory=list)
    definitions: list[tuple[Any, Any]] = field(default_factory=list)
    holds: dict[str, Any] = field(default_factory=dict)
    flashes: dict[str, Any] = field(default_factory=dict)
    bought: list[Bought] = field(default_factory=list)

    def __post_init__(self) -> None:
        self.model.scaling_factor = Suffix(direction=Suffix.EXPORT)
        self._factor = self.model.scaling_factor

    @property
    def has_freedom(self) -> bool:
        """Whether the case frees anything; if not, limits are compared with what is calculated and bound nothing."""
        return any(not setting.held for setting in self.case.settings().values())

    @property
    def mixture(self) -> Mixture:
        """Species and equation of state."""
        return self.chemistry.mixture

    def nominal(self, kind: str) -> float:
        """Size of one scaled unit, SI."""
        return _NOMINAL[kind] if kind in _NOMINAL else _PER_FLOW[kind] * self.flow

    def block(self, name: str) -> Block:
        """A new block named by path; dots become underscores in the Pyomo name."""
        block = Block(concrete=True)
        self.model.add_component(re.sub(r"[.\- ]", "_", name), block)
        return block

    def variable(
        self,
        block: Block,
        name: str,
        kind: str,
        low: float | None = None,
        high: float | None = None,
        start: float | None = None,
    ) -> Any:
        """A free variable; its start is its nominal value unless given."""
        size = self.nominal(kind)
        variable = Var(bounds=(low, high), initialize=size if start is None else start)
        block.add_component(name, variable)
        self._factor[variable] = 1.0 / size
        return variable

    def equation(self, block: Block, name: str, expression: Any, size: float = 1.0) -> Any:
        """An equality; `size` is what one scaled unit of its residual is worth."""
        constraint = Constraint(expr=expression)
        block.add_component(name, constraint)
        if size != 1.0:
            self._factor[constraint] = 1.0 / size
        return constraint

    def define(
        self,
        block: Block,
        name: str,
        kind: str,
        expression: Any,
        low: float | None = None,
        high: float | None = None,
        start: float | None = None,
    ) -> Any:
        """A variable that equals an expression. Its start is computed from the others' before the first solve."""
        variable = self.variable(block, name, kind, low, high, start)
        constraint = self.equation(block, f"{name}_is", variable - expression == 0, self.nominal(kind))
        self.definitions.append((variable, constraint))
        return variable

    def give(self, variable: Any, constraint: Any) -> None:
        """Tell which equation gives a variable when a start is completed."""
        self.definitions.append((variable, constraint))

    def decision(
        self, block: Block, name: str, kind: str, path: str, setting: Setting, dimension: str
    ) -> Any:
        """A variable that the case holds or frees."""
        variable = self.variable(block, name, kind, start=setting.low)
        self.decisions[path] = (variable, setting)
        self.report(path, dimension, variable)
        if setting.held:
            variable.fix(setting.value)
            return variable
        for side, end in (("low", setting.low), ("high", setting.high)):
            self.edge(Edge(f"{path}.{side}", variable, side, float(end), setting.unit, path))
        variable.set_value((setting.low + setting.high) / 2)
        return variable

    def follow(self, path: str, variable: Any, setting: Setting | None, kind: str) -> None:
        """A setting on a variable that an equation already gives: a held value becomes an equation, a range an edge."""
        if setting is None:
            return
        self.decisions[path] = (variable, setting)
        if setting.held:
            name = path.replace(".", "_") + "_held"
            expression = variable - setting.value == 0
            self.holds[path] = self.equation(self.block(name), "held", expression, self.nominal(kind))
            return
        for side, end in (("low", setting.low), ("high", setting.high)):
            self.edge(Edge(f"{path}.{side}", variable, side, float(end), setting.unit, path))

    def edge(self, edge: Edge) -> None:
        """Tighten a bound; among several on one side the tightest counts and is the one that gets reported."""
        self.edges.append(edge)
        variable = edge.variable
        if variable.fixed or not self.has_freedom:
            return
        if edge.side == "low" and (variable.lb is None or edge.value > variable.lb):
            variable.setlb(edge.value)
        if edge.side == "high" and (variable.ub is None or edge.value < variable.ub):
            variable.setub(edge.value)

    def report(self, path: str, dimension: str, *variables: Any, pick: Any = max) -> None:
        """Make a quantity known under a result path."""
        self.reported[path] = Reported(path, dimension, variables, pick)

    def stream(
        self, name: str, vapour: Sequence[Any], temperature: Any, pressure: Any, liquid: Any = None
    ) -> None:
        """Make a stream known under a name."""
        self.streams[name] = StreamRecord(vapour, liquid, temperature, pressure)

    def flows(self, block: Block, name: str, expressions: Iterable[Any]) -> list[Any]:
        """Molar flows of all species as variables, each equal to an expression, mol/s."""
        names = self.mixture.names
        return [
            self.define(block, f"{name}_{species}", "flow", expression, low=1e-9 * self.flow)
            for species, expression in zip(names, expressions, strict=True)
        ]


@dataclass
class Gas:
    """A single-phase gas stream at a point of the section."""

    flows: Sequence[Any]
    temperature: Any
    pressure: Any
    phase: Phase
    enthalpy: Any


def gas_at(
    frame: Frame, block: Block, name: str, flows: Sequence[Any], temperature: Any, pressure: Any
) -> Gas:
    """A gas state with its compressibility and enthalpy as variables; `temperature` may be a number or a variable."""
    root = frame.variable(block, f"{name}_compressibility", "ratio", 0.2, 3.0, start=1.03)
    phase = frame.mixture.phase(temperature, pressure, flows, root)
    frame.give(root, frame.equation(block, f"{name}_state", phase.residual == 0))
    enthalpy = frame.define(block, f"{name}_enthalpy", "heat", phase.enthalpy)
    return Gas(flows, temperature, pressure, phase, enthalpy)


def temperature_at(frame: Frame, block: Block, name: str, low: float = 200.0, high: float = 1000.0) -> Any:
    """An unknown temperature, K."""
    return frame.variable(block, f"{name}_temperature", "temperature", low, high, start=400.0)
