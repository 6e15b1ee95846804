"""The audit finds what is wrong: one thing is falsified at a time, and the line that fails must name it.

The untouched optimum passes every line first. Then a reported figure, a stream or a decision is moved a little past
what the audit allows, and last a piece of the audit's own physics is broken, piece by piece of the plant.
"""

from __future__ import annotations

from copy import deepcopy
from dataclasses import replace

import numpy as np
import pytest

from optimiser.findings.audits import audit_point, point_of
from optimiser.findings.units import Units
from optimiser.forward.audit import BALANCE, FRACTION, KELVIN, RELATIVE, audit
from optimiser.forward.walk import Section

KELVINS = ("temperature", "temperature_difference")


@pytest.fixture
def point(solved):
    """What the optimum reports, free to be falsified."""
    true = point_of(solved.workshop, dict(solved.values))
    return replace(
        true,
        setpoints=dict(true.setpoints),
        makeup=dict(true.makeup),
        recycle=deepcopy(true.recycle),
        streams=deepcopy(dict(true.streams)),
        limits=dict(true.limits),
    )


def failures(solved, point):
    """What every failing line is about."""
    return [line.what for line in audit(solved.workshop.forward, point)[0] if not line.passed]


def fresh_section(solved):
    """A forward calculation with no integrator built yet, for falsified physics."""
    workshop = solved.workshop
    return Section(workshop.case, workshop.chemistry, workshop.equipment)


# -- The truth passes, and nothing reported goes without a line -----------------------------------------------------


def test_the_optimum_passes_every_line(solved, point):
    lines, _ = audit(solved.workshop.forward, point)
    assert len(lines) > 200
    assert [line.what for line in lines if not line.passed] == []
    # With room: what the collocation and the rounded corners leave is less than half of what is allowed.
    assert max(line.difference / line.allowed for line in lines) < 0.5


def test_every_reported_figure_and_stream_has_a_line(solved, point):
    names = {line.what for line in audit(solved.workshop.forward, point)[0]}
    assert set(point.quantities) <= names
    assert {f"temperature of {name}" for name in point.streams} <= names
    assert {f"pressure of {name}" for name in point.streams} <= names
    assert {f"flows of {name}" for name in point.streams} <= names
    wet = {name for name, stream in point.streams.items() if stream.liquid.any()}
    assert {"condensation.chiller.out", "product"} <= wet
    assert {f"vapour in {name}" for name in wet} <= names
    assert {f"limit on {path}" for path in point.limits} <= names
    assert {f"balance of {e}" for e in ("H", "N", "C", "Ar", "mass")} <= names
    assert {f"closure of the loop, {s}" for s in solved.workshop.forward.mixture.names} <= names


# -- Every reported figure, one at a time ----------------------------------------------------------------------------


def moved(value, dimension):
    """A little past what the audit allows."""
    if dimension in KELVINS:
        return value + 1.5 * KELVIN
    if dimension == "fraction":
        return value + 1.5 * FRACTION
    return value * (1.0 + 1.5 * RELATIVE)


def test_each_reported_figure_is_missed_when_it_is_false(solved, point):
    """All figures of the result are falsified at once, which leaves the audit's own pass alone: every line fails."""
    false = {path: moved(value, point.dimensions[path]) for path, value in point.quantities.items()}
    assert set(point.quantities) <= set(failures(solved, replace(point, quantities=false)))


# Pieces of plant by what is falsified: figure, factor or kelvin added, and lines that must fail beside its own.
PIECES = {
    "bed outlet": ("reactor.bed2.outlet_temperature", "K", set()),
    "bed length": ("reactor.bed1.length", "x", set()),
    "bed pressure drop": ("reactor.bed3.pressure_drop", "x", set()),
    "compression stage": ("compression.middle.power", "x", set()),
    "all compression": ("compression.power", "x", {"balance of energy over heat of reaction"}),
    "intercooler": ("compression.low.intercooler_duty", "x", {"balance of energy over heat of reaction"}),
    "circulator": ("loop.circulator_power", "x", {"balance of energy over heat of reaction"}),
    "water cooler": ("condensation.water_cooler.duty", "x", {"balance of energy over heat of reaction"}),
    "chiller": ("condensation.chiller.duty", "x", {"balance of energy over heat of reaction"}),
    "boiler": ("reactor.boiler.duty", "x", {"balance of energy over heat of reaction"}),
    "area": ("condensation.cold_exchanger.area", "x", set()),
    "approach": ("reactor.preheat.approach", "K", set()),
    "refrigeration": ("condensation.chiller.power", "x", set()),
    "steam credit": ("costs.steam_credit", "x", set()),
    "fuel credit": ("costs.fuel_credit", "x", set()),
    "product": ("product.rate", "x", set()),
    "purge": ("purge.flow", "x", set()),
    "recycle": ("loop.recycle_ratio", "x", set()),
    "separator": ("condensation.separator.diameter", "x", set()),
    "converter": ("capital.converter", "x", set()),
    "total": ("costs.total", "x", set()),
}


@pytest.mark.parametrize("piece", PIECES)
def test_one_false_figure_fails_its_own_line_and_the_balance_that_it_enters_alone(solved, point, piece):
    """1 % or 1 K wrong; no other line cries, so the failing line says where to look."""
    path, how, also = PIECES[piece]
    value = point.quantities[path]
    false = {**point.quantities, path: value + 1.0 if how == "K" else 1.01 * value}
    assert set(failures(solved, replace(point, quantities=false))) == {path} | also


# -- Decisions that are not the ones the rest was computed with ------------------------------------------------------

DECISIONS = {
    "reactor.bed1.volume": (1.02, "reactor.bed1.outlet_temperature"),
    "reactor.bed3.volume": (1.02, "temperature of reactor.bed3.out"),
    "reactor.bed2.inlet_temperature": (1.002, "reactor.bed2.outlet_temperature"),
    "loop.pressure": (1.01, "compression.high.ratio"),
    "compression.low.discharge_pressure": (1.01, "compression.low.power"),
    "loop.purge_fraction": (1.02, "purge.flow"),
    "condensation.chiller.outlet_temperature": (0.998, "condensation.chiller.duty"),
    "condensation.water_cooler.outlet_temperature": (1.002, "condensation.water_cooler.duty"),
    "condensation.cold_exchanger.recycle_temperature": (0.998, "condensation.cold_exchanger.duty"),
    "reactor.boiler.outlet_temperature": (1.002, "reactor.boiler.duty"),
}


@pytest.mark.parametrize("path", DECISIONS)
def test_a_decision_other_than_the_one_computed_with_is_found(solved, point, path):
    """The reported decision is moved and all else left: the first figure downstream of it fails."""
    factor, downstream = DECISIONS[path]
    point.setpoints[path] *= factor
    point = replace(point, quantities={**point.quantities, path: point.setpoints[path]})
    assert downstream in failures(solved, point)


def test_a_bed_volume_used_that_is_not_the_one_reported(solved, point):
    """2 % more catalyst in the result than in the bed: the length gives it away too."""
    path = "reactor.bed2.volume"
    point = replace(point, quantities={**point.quantities, path: 1.02 * point.quantities[path]})
    assert failures(solved, point) == [path]
    point.setpoints[path] *= 1.02
    names = failures(solved, point)
    assert "reactor.bed2.length" in names
    assert "reactor.bed2.pressure_drop" in names
    assert path not in names


# -- Streams ---------------------------------------------------------------------------------------------------------

# Those that carry the recycle or come out of it.
LOOP = ("recycle", "circulator.in", "circulator.out", "separator.vapour", "purge", "product")
STREAMS = (
    "makeup",
    "compression.high.out",
    "reactor.bed1.in",
    "reactor.bed3.out",
    "feed.after.preheat",
    "condensation.cold_exchanger.out",
    "separator.vapour",
    "circulator.out",
    "converter_feed",
)


@pytest.mark.parametrize("name", STREAMS)
def test_a_false_stream_temperature_is_found(solved, point, name):
    point.streams[name].temperature += 0.5
    assert failures(solved, point) == [f"temperature of {name}"]


@pytest.mark.parametrize("name", STREAMS)
def test_a_false_stream_pressure_is_found(solved, point, name):
    point.streams[name].pressure *= 1.002
    assert failures(solved, point) == [f"pressure of {name}"]


@pytest.mark.parametrize("name", ["condensation.water_cooler.out", "condensation.chiller.out", "condensation.in"])
def test_a_false_split_into_phases_is_found(solved, point, name):
    """Half a per cent of the stream counted as the other phase, with nothing lost."""
    stream, part = point.streams[name], 0.005
    stream.vapour, stream.liquid = stream.vapour * (1.0 - part), stream.liquid + part * stream.vapour
    assert failures(solved, point) == [f"vapour in {name}"]


@pytest.mark.parametrize("name", STREAMS)
@pytest.mark.parametrize("species", ["NH3", "Ar"])
def test_a_false_composition_is_found(solved, point, name, species):
    stream = point.streams[name]
    k = solved.workshop.forward.mixture.names.index(species)
    other = solved.workshop.forward.mixture.names.index("H2")
    wrong = 0.01 * max(stream.vapour[k], 1e-2 * stream.vapour.sum())
    stream.vapour[k] += wrong
    stream.vapour[other] -= wrong
    assert failures(solved, point) == [f"flows of {name}"]


@pytest.mark.parametrize("species", ["H2", "N2", "NH3"])
def test_a_recycle_that_does_not_come_back_is_found(solved, point, species):
    """2 % more of one species at the mixing point."""
    k = solved.workshop.forward.mixture.names.index(species)
    point.recycle.vapour[k] *= 1.02
    names = failures(solved, point)
    assert {n for n in names if n.startswith("closure")} & {f"closure of the loop, {s}" for s in ("H2", "N2", "NH3")}
    assert "flows of reactor.bed1.in" in names


@pytest.mark.parametrize("species", ["Ar", "CH4"])
def test_an_inert_that_does_not_come_back_is_found_by_the_balance(solved, point, species):
    """An inert returns nearly as it was given, less the purge: closure sees little of it, the balance all of it."""
    names = solved.workshop.forward.mixture.names
    k, element = names.index(species), {"Ar": "Ar", "CH4": "C"}[species]
    for stream in [point.recycle, *(s for name, s in point.streams.items() if name in LOOP)]:
        stream.vapour[k] *= 1.02
        stream.liquid[k] *= 1.02
    found = failures(solved, point)
    assert f"balance of {element}" in found
    assert f"closure of the loop, {species}" not in found


def test_gas_that_is_forgotten_in_the_product_is_found(solved, point):
    """Hydrogen, nitrogen and inerts dissolved in the liquid leave out of the loop: without them nothing balances."""
    k = solved.workshop.forward.mixture.names.index("NH3")
    pure = np.zeros_like(point.streams["product"].liquid)
    pure[k] = point.streams["product"].liquid[k]
    point.streams["product"].liquid = pure
    names = failures(solved, point)
    assert {"balance of H", "balance of N", "balance of C", "balance of Ar", "balance of mass"} <= set(names)
    assert "flows of product" in names


def test_a_purge_of_no_inerts_is_found(solved, point):
    purge = point.streams["purge"]
    for species in ("Ar", "CH4"):
        purge.vapour[solved.workshop.forward.mixture.names.index(species)] = 0.0
    names = failures(solved, point)
    assert {"balance of Ar", "balance of C", "flows of purge"} <= set(names)


def test_a_leak_of_ten_parts_in_a_million_is_found(solved, point):
    """Balances are held far tighter than figures: nothing in them is an approximation."""
    point.streams["product"].liquid = point.streams["product"].liquid * (1.0 - 10.0 * BALANCE)
    assert {"balance of H", "balance of N", "balance of mass"} <= set(failures(solved, point))


@pytest.mark.parametrize("factor", [0.99, 1.01])
def test_a_false_feed_is_found(solved, point, factor):
    (name,) = point.makeup
    point.makeup[name] *= factor
    names = failures(solved, point)
    assert {f"feed.streams.{name}.flow", "feed.flow", "costs.feed", f"flows of feed.{name}"} <= set(names)


# -- Limits ----------------------------------------------------------------------------------------------------------

LIMITS = {
    "reactor.bed1.hottest": "high",
    "compression.low.discharge_temperature": "high",
    "reactor.pressure_drop": "high",
    "reactor.catalyst_volume": "high",
    "product.purity": "low",
    "loop.pressure": "high",
    "loop.purge_fraction": "low",
    "reactor.bed2.volume": "low",
    "condensation.water_cooler.outlet_temperature": "low",
}


@pytest.mark.parametrize("path", LIMITS)
def test_a_limit_passed_by_one_per_cent_is_found(solved, point, path):
    """The limit is set so that the optimum breaks it: a solver that overlooked it would report just this."""
    value, side = point.quantities[path], LIMITS[path]
    end = value / 1.01 if side == "high" else value * 1.01
    point.limits[path] = replace(point.limits[path], **{side: end, {"high": "low", "low": "high"}[side]: None})
    assert failures(solved, point) == [f"limit on {path}"]
    point.limits[path] = replace(point.limits[path], **{side: value})
    assert failures(solved, point) == []


# -- Faults in the forward twin, piece by piece ----------------------------------------------------------------------


def scaled(function, factor):
    return lambda *args, **kw: factor * function(*args, **kw)


def no_purge(monkeypatch, solved):
    for name in ("_train", "_return"):
        original = getattr(Section, name)

        def broken(self, walk, stream, setpoints, original=original):
            return original(self, walk, stream, {**setpoints, "loop.purge_fraction": 0.0})

        monkeypatch.setattr(Section, name, broken)


def wrong_heat_of_reaction(monkeypatch, solved):
    """5 kJ/mol on ammonia where the gas is heated and reacts, but not where its equilibrium is asked for."""
    from optimiser.chemistry import mixture

    original = mixture.enthalpy_sum

    def broken(species, flows, temperature):
        k = [s.name for s in species].index("NH3")
        return original(species, flows, temperature) + 5000.0 * flows[k]

    monkeypatch.setattr(mixture, "enthalpy_sum", broken)


def doubled_rate(monkeypatch, solved):
    from optimiser.chemistry.reactions import Chemistry

    original = Chemistry.rates
    monkeypatch.setattr(Chemistry, "rates", lambda *args: [2.0 * r for r in original(*args)])


def halved_friction(monkeypatch, solved):
    from optimiser.forward import beds

    monkeypatch.setattr(beds, "ergun_gradient", scaled(beds.ergun_gradient, 0.5))


def wrong_refrigeration(monkeypatch, solved):
    from optimiser.forward import walk

    monkeypatch.setattr(walk, "refrigeration_work", scaled(walk.refrigeration_work, 0.9))


def perfect_machines(monkeypatch, solved):
    from optimiser.forward import walk

    original = walk.compress
    monkeypatch.setattr(
        walk, "compress", lambda mixture, inlet, pressure, _, name: original(mixture, inlet, pressure, 1.0, name)
    )


def larger_areas(monkeypatch, solved):
    from optimiser.forward import walk

    monkeypatch.setattr(walk, "coefficient_at", scaled(walk.coefficient_at, 0.98))


def less_condensed(monkeypatch, solved):
    """Every flash half a kelvin too warm."""
    from optimiser.forward import walk

    original = walk.flash

    def broken(mixture, name, flows, temperature, *rest):
        out = original(mixture, name, flows, temperature + 0.5, *rest)
        return replace(out, temperature=temperature)

    monkeypatch.setattr(walk, "flash", broken)


def wider_separator(monkeypatch, solved):
    from optimiser.forward import walk

    monkeypatch.setattr(walk, "separator_diameter", scaled(walk.separator_diameter, 1.01))


def thinner_walls(monkeypatch, solved):
    from optimiser.forward import costs

    monkeypatch.setattr(costs, "wall_thickness", scaled(costs.wall_thickness, 0.97))


def more_cooling_water(monkeypatch, solved):
    from optimiser.forward import costs

    monkeypatch.setattr(costs, "cooling_water_flow", scaled(costs.cooling_water_flow, 1.02))


def other_interest(monkeypatch, solved):
    from optimiser.forward import costs

    monkeypatch.setattr(costs, "capital_recovery", scaled(costs.capital_recovery, 1.01))


def cooler_steam(monkeypatch, solved):
    from optimiser.forward import walk

    original = walk.steam_saturation_temperature
    monkeypatch.setattr(walk, "steam_saturation_temperature", lambda pressure: original(pressure) - 1.0)


FAULTS = {
    no_purge: {"purge.flow", "closure of the loop, Ar", "loop.circulator_power"},
    wrong_heat_of_reaction: {"reactor.bed1.outlet_temperature", "reactor.boiler.duty"},
    doubled_rate: {"reactor.bed1.outlet_temperature", "reactor.bed1.product_fraction", "reactor.conversion"},
    halved_friction: {"reactor.bed1.pressure_drop", "reactor.pressure_drop", "loop.circulator_power"},
    wrong_refrigeration: {"condensation.chiller.power", "costs.electricity", "capital.refrigeration"},
    perfect_machines: {"compression.low.power", "compression.high.discharge_temperature", "loop.circulator_power"},
    larger_areas: {"compression.low.intercooler_area", "reactor.preheat.area", "capital.exchangers"},
    less_condensed: {"product.rate", "closure of the loop, NH3", "condensation.chiller.duty"},
    wider_separator: {"condensation.separator.diameter", "condensation.separator.volume", "capital.separator"},
    thinner_walls: {"capital.converter", "capital.separator", "capital.total"},
    more_cooling_water: {"costs.cooling_water"},
    other_interest: {"costs.capital_recovery"},
    cooler_steam: {"reactor.boiler.approach", "reactor.boiler.area"},
}
# Faults that touch nothing else: whatever else fails must begin with one of these.
ALONE = {
    wrong_refrigeration: ("condensation.chiller.power", "costs.", "capital.", "product.cost"),
    larger_areas: ("compression.", "reactor.", "condensation.", "costs.", "capital.", "product.cost"),
    wider_separator: ("condensation.separator.", "costs.", "capital.", "product.cost"),
    thinner_walls: ("costs.", "capital.", "product.cost"),
    more_cooling_water: ("costs.", "product.cost"),
    other_interest: ("costs.", "product.cost"),
    cooler_steam: ("reactor.boiler.", "costs.", "capital.", "product.cost", "condensation.chiller"),
}


@pytest.mark.parametrize("fault", FAULTS, ids=lambda f: f.__name__)
def test_a_fault_in_one_piece_of_the_twin_is_found_and_named(solved, point, monkeypatch, fault):
    fault(monkeypatch, solved)
    lines, _ = audit(fresh_section(solved), point)
    names = {line.what for line in lines if not line.passed}
    assert FAULTS[fault] <= names
    if fault in ALONE:
        assert {name for name in names if not name.startswith(ALONE[fault])} == set()


# -- What users get ---------------------------------------------------------------------------------------------------


def test_a_section_that_cannot_be_rebuilt_fails_the_audit_in_words(solved, monkeypatch):
    """No state is found: the audit fails with the reason and raises nothing."""
    from optimiser.forward import walk
    from optimiser.forward.streams import StateProblem

    def broken(*_, **__):
        raise StateProblem("bed bed1 cannot be integrated")

    monkeypatch.setattr(walk.BedIntegrator, "integrate", broken)
    told = audit_point(solved.workshop, solved.values, Units(solved.workshop.case))
    assert told["passed"] is False
    assert "bed bed1 cannot be integrated" in told["reason"]


def test_told_result_names_the_worst_line(solved):
    values = {**solved.values, "condensation.chiller.power": 1.02 * solved.values["condensation.chiller.power"]}
    told = audit_point(solved.workshop, values, Units(solved.workshop.case))
    assert told["passed"] is False
    assert told["worst"]["what"] == "condensation.chiller.power"
    assert told["worst"]["passed"] is False
    true = audit_point(solved.workshop, solved.values, Units(solved.workshop.case))
    assert true["passed"] is True
    assert len(true["lines"]) == len(told["lines"])


@pytest.mark.parametrize("value", [float("nan"), float("inf")])
def test_a_figure_that_is_no_number_fails(solved, point, value):
    for path in ("product.rate", "reactor.bed1.outlet_temperature", "loop.inerts"):
        false = {**point.quantities, path: value}
        assert path in failures(solved, replace(point, quantities=false)), path
