"""The loop closed: balances to 1e-6, inerts as a plant builds them up, starts where nothing closes."""

from __future__ import annotations

import numpy as np
import pytest
from forward.plant import closed, middle, prepared

from optimiser.engineering.costs import load_equipment
from optimiser.forward.audit import audit
from optimiser.forward.limits import case_limits
from optimiser.forward.starts import attempts, retreated
from optimiser.forward.stream import BedFailure, SetpointFailure
from optimiser.forward.tear import LoopBalance, Mixing, first_split
from optimiser.forward.walk import Section
from optimiser.inputs import parse_case
from optimiser.inputs.lookup import find_case
from optimiser.inputs.paths import result_paths

TEXT = find_case("ammonia-loop").read_text(encoding="utf-8")
H2, N2, NH3, AR, CH4 = range(5)


def test_the_recycle_comes_back(plant) -> None:
    walk = plant.walk
    assert np.abs(walk.tear_error) == pytest.approx(np.zeros(5), abs=1e-6 * walk.recycle.total)
    assert walk.quantities["product.rate"] == pytest.approx(plant.setpoints["feed.product_rate"], rel=1e-6)


def test_elements_mass_and_energy_close(plant, chemistry) -> None:
    streams, q = plant.walk.streams, plant.walk.quantities
    fed, out = streams["feed.syngas"], [streams["product"], streams["purge"]]
    for element in ("H", "N", "C", "Ar"):
        atoms = np.array([s.elements.get(element, 0.0) for s in chemistry.mixture.species])
        assert sum(float(atoms @ s.flows) for s in out) == pytest.approx(float(atoms @ fed.flows), rel=1e-6)
    mass = np.array(chemistry.mixture.molar_mass)
    assert sum(float(mass @ s.flows) for s in out) == pytest.approx(float(mass @ fed.flows), rel=1e-6)
    work = 0.95 * (q["compression.power"] + q["loop.circulator_power"])
    heat = sum(q[f"compression.{s}.intercooler_duty"] for s in ("low", "middle", "high"))
    heat += q["reactor.boiler.duty"] + q["condensation.water_cooler.duty"] + q["condensation.chiller.duty"]
    made = streams["product"].flows[NH3] + streams["purge"].flows[NH3]
    gap = fed.enthalpy(chemistry.mixture) + work - heat - sum(s.enthalpy(chemistry.mixture) for s in out)
    assert abs(gap) < 1e-6 * made * 46e3


def test_every_result_path_is_computed(plant) -> None:
    missing = set(result_paths(plant.section.case)) - set(plant.walk.quantities)
    assert missing == set()
    assert all(np.isfinite(v) for v in plant.walk.quantities.values())


def test_inerts_build_up_as_the_purge_falls(plant) -> None:
    found = []
    high = plant.setpoints | {"loop.pressure": 220e5}
    for purge in (0.08, 0.02, 0.005):
        walk = plant.section.converge(high | {"loop.purge_fraction": purge}, tolerance=1e-6)
        streams = walk.streams
        # All argon that comes in leaves, with the purge or dissolved in the product.
        left = streams["purge"].flows[AR] + streams["product"].flows[AR]
        assert left == pytest.approx(streams["makeup"].flows[AR], rel=1e-4)
        found.append(walk.quantities["loop.inerts"])
    assert found == sorted(found)
    assert found[2] > 3.0 * found[0]


def test_a_start_closes_loosely_in_a_few_passes(plant) -> None:
    start = plant.section.converge(plant.setpoints)
    assert start.passes <= 8
    assert start.recycle.vapour == pytest.approx(plant.walk.recycle.vapour, rel=2e-3)
    assert start.quantities["product.rate"] == pytest.approx(plant.setpoints["feed.product_rate"], rel=2e-3)


def test_positions_are_those_asked_for(plant) -> None:
    asked = {"bed1": [0.25, 1.0], "bed2": [0.5, 0.75, 1.0], "bed3": [1.0]}
    walk = plant.section.converge(plant.setpoints, positions=asked)
    assert {name: profile.positions.tolist() for name, profile in walk.beds.items()} == asked
    same = plant.section.converge(plant.setpoints, positions=[0.5, 1.0])
    assert all(profile.positions.tolist() == [0.5, 1.0] for profile in same.beds.values())


def test_the_recycle_ratio_may_be_held_instead_of_the_purge(chemistry) -> None:
    purge = "  purge_fraction: 0.3 .. 10 %"
    case = parse_case(TEXT.replace(purge, f"{purge}\n  recycle_ratio: 3.5"))
    section = Section(case, chemistry, load_equipment())
    walk = closed(section, middle(case))
    assert walk.quantities["loop.recycle_ratio"] == pytest.approx(3.5, rel=1e-6)
    assert 0.0 < walk.quantities["loop.purge_fraction"] < 0.1
    assert np.abs(walk.tear_error).max() < 1e-6 * walk.recycle.total


def test_stated_feed_flows_are_kept(chemistry) -> None:
    changed = TEXT.replace("  product_rate: 1000 t/d", "  #").replace(
        "      price: 2 EUR/kmol", "      flow: 5000 kmol/h\n      price: 2 EUR/kmol"
    )
    case = parse_case(changed)
    section = Section(case, chemistry, load_equipment())
    walk = closed(section, middle(case))
    assert walk.quantities["feed.flow"] == pytest.approx(5000 / 3.6)
    assert np.abs(walk.tear_error).max() < 1e-6 * walk.recycle.total


TWO = """    hydrogen:
      composition: {H2: 0.99, CH4: 0.01}
      temperature: 45 degC
      pressure: 30 bar
      price: 2.4 EUR/kmol
      share: 74.6 %
    nitrogen:
      composition: {N2: 0.995, Ar: 0.005}
      temperature: 25 degC
      pressure: 25 bar
      price: 0.8 EUR/kmol

"""


def test_two_feed_streams_in_a_ratio_short_of_hydrogen(chemistry) -> None:
    """Nitrogen that cannot react builds up until the purge takes it; no flow turns negative on the way."""
    text = TEXT[: TEXT.index("    syngas:")] + TWO + TEXT[TEXT.index("compression:\n") :]
    case = parse_case(text)
    section = Section(case, chemistry, load_equipment())
    walk = closed(section, middle(case))
    feed = walk.streams["converter_feed"].flows
    assert walk.quantities["feed.streams.hydrogen.flow"] / walk.quantities["feed.flow"] == pytest.approx(0.746)
    assert feed[H2] / feed[N2] < 2.9
    assert np.abs(walk.tear_error).max() < 1e-6 * walk.recycle.total


def test_a_loop_without_refrigeration_starts_although_it_makes_next_to_nothing(chemistry) -> None:
    """In the middle of its ranges the water cooler condenses nothing; the start is open, and finite."""
    cold = TEXT[TEXT.index("  cold_exchanger:") : TEXT.index("utilities:")]
    text = TEXT.replace(cold, "\n").replace("  product.purity: '>= 95 %'", "  product.purity: '>= 80 %'")
    case = parse_case(text)
    start = Section(case, chemistry, load_equipment()).start(middle(case))
    assert np.isfinite(start.recycle.vapour).all()
    assert all(np.isfinite(profile.temperature).all() for profile in start.beds.values())


COLD = {"loop.pressure": 90e5, **{f"reactor.bed{k}.inlet_temperature": 620.0 for k in (1, 2, 3)}}


def test_a_corner_where_no_loop_closes_still_starts(plant) -> None:
    corner = plant.setpoints | COLD | {f"reactor.bed{k}.volume": 38.0 for k in (1, 2, 3)}
    corner |= {"compression.low.discharge_pressure": 38e5, "compression.middle.discharge_pressure": 58e5}
    with pytest.raises(BedFailure):
        plant.section.converge(corner)
    start = plant.section.start(corner)
    assert start.setpoints["loop.pressure"] > 90e5
    assert start.quantities["loop.recycle_ratio"] < 8.0


def test_retreats_end_in_the_middle_and_keep_what_is_held(plant) -> None:
    case = plant.section.case
    corner = {path: s.high for path, s in case.settings().items()}
    once = retreated(case, corner)
    purge = case.loop.purge_fraction
    assert once["loop.purge_fraction"] == pytest.approx(0.75 * purge.high + 0.25 * purge.low)
    assert once["reactor.bed1.diameter"] == corner["reactor.bed1.diameter"]
    assert once["compression.low.discharge_pressure"] < corner["compression.low.discharge_pressure"]
    tries = list(attempts(case, corner))
    assert [t.must_close for t in tries] == [True] * 5 + [False] * 2
    assert len(list(attempts(case, middle(case)))) < len(tries)


def test_what_is_missing_is_named(plant) -> None:
    less = {k: v for k, v in plant.setpoints.items() if k != "condensation.chiller.outlet_temperature"}
    with pytest.raises(SetpointFailure, match=r"condensation\.chiller\.outlet_temperature is not set"):
        plant.section.converge(less)


def test_held_values_need_not_be_named(plant) -> None:
    less = {k: v for k, v in plant.setpoints.items() if not k.endswith(".diameter")}
    assert plant.section.converge(less).quantities["reactor.bed1.diameter"] == pytest.approx(2.2)


def test_a_split_that_is_right_closes_the_loop_at_once(plant, chemistry) -> None:
    """The linear balances, with conversion, saturation and dissolved shares of the closed loop."""
    walk = plant.walk
    feed, streams = walk.streams["converter_feed"].flows, walk.streams
    extents = np.sum([b.extents[-1] for b in walk.beds.values()], axis=0)
    from optimiser.forward.flash import Phases

    vapour, liquid = streams["separator.vapour"].vapour, streams["product"].liquid
    separator = Phases(vapour, liquid, 265.0, 1.5e7, 0.0, None, None)
    balance = LoopBalance(chemistry, streams["makeup"].flows)
    split = balance.read(feed, extents, separator, walk.quantities["loop.purge_fraction"])
    recycle, condensed = balance.solve(split)
    assert recycle == pytest.approx(walk.recycle.vapour, rel=1e-5)
    assert condensed == pytest.approx(liquid, rel=1e-5)
    again, _ = balance.solve_at_ratio(split, walk.quantities["loop.recycle_ratio"])
    assert again == pytest.approx(recycle, rel=1e-6)


def test_a_first_split_has_no_negative_flow(chemistry, plant) -> None:
    for purge in (1e-4, 0.5):
        recycle, liquid = LoopBalance(chemistry, plant.walk.streams["makeup"].flows).solve(
            first_split(chemistry, purge)
        )
        assert recycle.min() > 0.0
        assert liquid[NH3] > 0.0


def test_mixing_solves_a_slow_linear_iteration() -> None:
    """A fixed point that plain substitution nears by 1 % a round."""
    matrix, target = np.diag([0.99, 0.9, 0.3]), np.array([0.4, -0.2, 0.1])
    mixing, x = Mixing(), np.zeros(3)
    for _ in range(8):
        x = mixing.next(x, target + matrix @ (x - target))
    assert x == pytest.approx(target, abs=1e-6)


def test_the_case_forbids_what_it_states(plant) -> None:
    limits = case_limits(plant.section.case)
    assert limits["reactor.bed1.hottest"] == (None, plant.section.case.limits["reactor.bed1.hottest"].high)
    assert limits["loop.pressure"] == (80e5, plant.section.case.loop.pressure.high)
    assert limits["reactor.preheat.approach"] == (15.0, None)
    assert limits["condensation.cold_exchanger.approach"] == (5.0, None)
    tightened = case_limits(prepared("limits.loop.pressure=<= 200 bar").case)
    assert tightened["loop.pressure"] == (80e5, 200e5)


def test_a_kinetic_bed_is_that_of_the_loop(plant) -> None:
    profile, q = plant.walk.beds["bed2"], plant.walk.quantities
    step = plant.section.bed_steps[1]
    state = (profile.inlet.temperature, profile.inlet.pressure)
    sizes = (q["reactor.bed2.volume"], q["reactor.bed2.diameter"])
    alone = plant.section.kinetic_bed(step, profile.inlet.vapour.tolist(), state, sizes)
    assert alone.extents[-1] == pytest.approx(profile.extents[-1], rel=1e-6)
    assert alone.flows == pytest.approx(profile.outlet.vapour, rel=1e-7)


def test_a_damkohler_bed_is_kinetic_until_it_is_fitted(plant, chemistry) -> None:
    bed = "  - bed: bed3\n"
    section = Section(parse_case(TEXT.replace(bed, f"{bed}    rate: damkohler\n")), chemistry, load_equipment())
    same = section.walk(plant.setpoints, plant.walk.makeup, plant.walk.recycle)
    assert same.quantities["costs.total"] == pytest.approx(plant.walk.quantities["costs.total"], rel=1e-9)
    fitted = section.walk(
        plant.setpoints, plant.walk.makeup, plant.walk.recycle, damkohler={"bed3": (5.0, 1.0, 1.5, 1e4)}
    )
    assert fitted.beds["bed3"].positions.tolist() == [1.0]
    assert fitted.beds["bed3"].extents[-1, 0] != pytest.approx(plant.walk.beds["bed3"].extents[-1, 0], rel=1e-3)
    assert audit(section, _point(plant)).passed


def _point(plant):
    return plant.point
