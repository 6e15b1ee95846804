"""The whole section: pieces joined to a loop, objective, limits and the quantities that a result reports."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from pyomo.core import ConcreteModel, Objective, maximize, minimize

from optimiser.chemistry.reactions import Chemistry
from optimiser.engineering.costs import Equipment
from optimiser.inputs.case import Case
from optimiser.quantities import Limit
from optimiser.section import approach
from optimiser.section.compression import build_circulator, build_compression
from optimiser.section.condensation import Train, build_train
from optimiser.section.costs import Inventory, build_costs
from optimiser.section.frame import Edge, Frame, StreamRecord, temperature_at
from optimiser.section.makeup import MakeUp, build_makeup
from optimiser.section.reactor import Reactor, build_reactor
from optimiser.section.removal import Flash


@dataclass
class SectionModel:
    """The Pyomo model of a case with the registry of what is in it."""

    frame: Frame
    reactor: Reactor
    direction: str

    @property
    def model(self) -> ConcreteModel:
        """The Pyomo model."""
        return self.frame.model


def nominal_flow(case: Case, chemistry: Chemistry) -> float:
    """Typical molar flow of make-up, mol/s: stated, or from the product wanted at nine tenths of what it could make."""
    if case.feed.product_rate is not None:
        product = chemistry.products[0]
        mass = chemistry.mixture.molar_mass[chemistry.mixture.names.index(product)]
        return case.feed.product_rate.high / mass * _feed_per_product(chemistry, product) / 0.9
    return float(sum(stream.flow.high for stream in case.feed.streams.values() if stream.flow is not None))


def _feed_per_product(chemistry: Chemistry, product: str) -> float:
    """Moles of reactants that one mole of product takes."""
    k = chemistry.mixture.names.index(product)
    reaction = next(r for r in chemistry.reactions if r.nu[k] > 0)
    return float(-sum(nu for nu in reaction.nu if nu < 0) / reaction.nu[k])


def build_section(case: Case, chemistry: Chemistry, equipment: Equipment) -> SectionModel:
    """Assemble the model of a case; nothing is solved.

    The gas goes make-up, compression, mixing with the recycle, reactor, condensing train; the separator's vapour goes
    purge, cold exchanger, circulator, and closes the loop.
    """
    frame = Frame(case, chemistry, equipment, nominal_flow(case, chemistry))
    loop = frame.block("loop")
    pressure = frame.decision(loop, "pressure", "pressure", "loop.pressure", case.loop.pressure, "pressure")
    makeup = build_makeup(frame)
    compressed = build_compression(frame, makeup, pressure)
    feed = [frame.variable(loop, f"feed_{name}", "flow", 1e-9 * frame.flow) for name in frame.mixture.names]
    heat = frame.variable(loop, "feed_enthalpy", "heat")
    bed_pressure = frame.define(
        loop, "bed_pressure", "pressure", pressure - case.loop.feed_pressure_drop.si, low=1e3
    )
    reactor = build_reactor(frame, feed, heat, bed_pressure)
    train = build_train(frame, reactor.outlet, list(reactor.beds[-1].outlet.flows))
    power, circulated = build_circulator(frame, train.recycle, pressure)
    for name, n, fresh, back in zip(
        frame.mixture.names, feed, makeup.flows, train.recycle.flows, strict=True
    ):
        frame.equation(loop, f"mixing_{name}", n - fresh - back == 0, frame.flow)
    balance = heat - makeup.flow * compressed.molar_enthalpy - circulated
    frame.equation(loop, "mixing_heat", balance == 0, frame.nominal("heat"))
    _report_loop(frame, makeup, reactor, train, feed)
    product = _report_product(frame, makeup, train)
    inventory = Inventory(makeup, compressed, reactor, train, power, product, pressure)
    total = build_costs(frame, inventory)
    _approaches(frame, reactor)
    _limits(frame)
    return SectionModel(frame, reactor, _objective(frame, inventory, total))


def _report_loop(frame: Frame, makeup: MakeUp, reactor: Reactor, train: Train, feed: list[Any]) -> None:
    """Recycle ratio, inerts and conversion, with the temperature of the mixed feed."""
    block, case, names = frame.block("loop_report"), frame.case, frame.mixture.names
    ratio = frame.define(block, "recycle_ratio", "ratio", sum(train.recycle.flows) / makeup.flow, start=4.0)
    frame.report("loop.recycle_ratio", "ratio", ratio)
    frame.follow("loop.recycle_ratio", ratio, case.loop.recycle_ratio, "ratio")
    idle = [n for name, n in zip(names, feed, strict=True) if name in frame.chemistry.inerts]
    if idle:
        inerts = frame.define(block, "inerts", "fraction", sum(idle) / sum(feed))
        frame.report("loop.inerts", "fraction", inerts)
    key = names.index(frame.chemistry.key_reactant)
    left = reactor.beds[-1].outlet.flows[key]
    conversion = frame.define(block, "conversion", "fraction", 1.0 - left / feed[key])
    frame.report("reactor.conversion", "fraction", conversion)
    volume = frame.define(block, "catalyst_volume", "volume", sum(bed.volume for bed in reactor.beds))
    frame.report("reactor.catalyst_volume", "volume", volume)
    first, last = frame.streams[f"reactor.{reactor.beds[0].name}.in"], reactor.outlet.pressure
    drop = frame.define(block, "pressure_drop", "pressure", first.pressure - last)
    frame.model.scaling_factor[drop] = 1e-5
    frame.report("reactor.pressure_drop", "pressure_difference", drop)
    mixed = temperature_at(frame, block, "converter_feed")
    pressure = frame.decisions["loop.pressure"][0]
    root = frame.variable(block, "converter_feed_compressibility", "ratio", 0.2, 3.0, start=1.03)
    phase = frame.mixture.phase(mixed, pressure, feed, root)
    frame.give(root, frame.equation(block, "converter_feed_state", phase.residual == 0))
    balance = phase.enthalpy - frame.model.loop.feed_enthalpy == 0
    frame.give(mixed, frame.equation(block, "converter_feed_heat", balance, frame.nominal("heat")))
    frame.stream("converter_feed", feed, mixed, pressure)


def _report_product(frame: Frame, makeup: MakeUp, train: Train) -> Any:
    """Contained product, its rate and purity, kg/s."""
    block, names, mixture = frame.block("product"), frame.mixture.names, frame.mixture
    liquid = train.separator.liquid
    wanted = [names.index(p) for p in frame.chemistry.products]
    rate = frame.define(
        block, "rate", "mass_flow", sum(liquid[k] * mixture.molar_mass[k] for k in wanted), low=1e-9
    )
    frame.report("product.rate", "mass_flow", rate)
    frame.follow("feed.product_rate", rate, frame.case.feed.product_rate, "mass_flow")
    flow = train.separator.liquid_flow
    frame.report("product.flow", "molar_flow", flow)
    fractions = train.separator.liquid_phase.fractions
    purity = frame.define(block, "purity", "ratio", sum(fractions[k] for k in wanted))
    frame.report("product.purity", "fraction", purity)
    mass = sum(n * m for n, m in zip(makeup.flows, mixture.molar_mass, strict=True))
    gain = frame.define(block, "yield", "ratio", rate / mass)
    frame.report("product.yield", "ratio", gain)
    return rate


def _approaches(frame: Frame, reactor: Reactor) -> None:
    """The approach of a bed enters the model only where a limit asks for it."""
    for bed in reactor.beds:
        path = f"reactor.{bed.name}"
        wanted = {p for p in frame.case.limits if p.startswith(path + ".approach")} - frame.reported.keys()
        if f"{path}.approach_temperature" in wanted:
            approach.report_temperature(frame, bed.name, bed.outlet)
        if f"{path}.approach_fraction" in wanted:
            approach.report_fraction(frame, bed.name, bed.inlet, bed.outlet, bed.extents[0])


def _limits(frame: Frame) -> None:
    """The user's limits as bounds of the variables that they name."""
    for path, limit in frame.case.limits.items():
        for side, end in (("low", limit.low), ("high", limit.high)):
            if end is not None:
                _limit(frame, path, side, float(end), limit)


def _limit(frame: Frame, path: str, side: str, end: float, limit: Limit) -> None:
    for variable in frame.reported[path].variables:
        frame.edge(Edge(f"limits.{path}.{side}", variable, side, end, limit.unit, path))


def _objective(frame: Frame, inventory: Inventory, total: Any) -> str:
    """Set the objective; returns its direction."""
    case, model = frame.case, frame.model
    annual = inventory.product * case.economics.hours_per_year.si
    if case.objective == "yield per unit cost":
        model.objective = Objective(expr=annual / total, sense=maximize)
    elif case.objective == "levelised cost":
        model.objective = Objective(expr=total / annual, sense=minimize)
    elif case.objective == "annual profit":
        model.objective = Objective(expr=annual * _product_price(case) - total, sense=maximize)
        model.scaling_factor[model.objective] = 1.0 / frame.nominal("money")
    else:
        model.objective = Objective(expr=frame.reported["product.yield"].variables[0], sense=maximize)
    return "maximise" if model.objective.sense == maximize else "minimise"


def _product_price(case: Case) -> float:
    """Money for a kilogram of product; the reader has seen to it that it is stated."""
    assert case.prices.product is not None
    return case.prices.product.si


__all__ = ["Flash", "SectionModel", "StreamRecord", "build_section", "nominal_flow"]
