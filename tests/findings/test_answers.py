"""Whole answers: every objective, kind of bed and equation of state, sections with nothing free, limits that clash."""

from __future__ import annotations

import json

import pytest

from optimiser.findings.answer import solve_case
from optimiser.findings.checking import check_case
from optimiser.inputs import parse_case, read_case

BEDS = ("bed1", "bed2", "bed3")


def answer(*sets: str, starts: int = 2, **options):
    """Result of the shipped case with changes; it must be what JSON can hold."""
    result = solve_case(read_case("ammonia-loop", list(sets)), starts=starts, **options)
    json.dumps(result, allow_nan=False)
    return result


@pytest.fixture(scope="module")
def plain():
    """The shipped case."""
    return answer()


def test_the_shipped_case_is_an_audited_optimum(plain) -> None:
    assert plain["status"] == "optimal"
    assert plain["grade"] == "audited optimum"
    assert plain["audit"]["passed"]
    assert all(line["passed"] for line in plain["audit"]["lines"])


def test_default_starts_agree_on_the_best() -> None:
    """Every default start ends with a grade, and the best optimum is reached by at least two."""
    result = answer(starts=8)
    assert len(result["starts"]) == 8
    assert all(start["status"] for start in result["starts"])
    best = result["objective"]["value"]
    converged = [s for s in result["starts"] if s["status"] == "converged"]
    same = [s for s in converged if s["objective"] == pytest.approx(best, rel=1e-6)]
    assert len(same) >= 2


def test_levelised_cost_is_the_same_question(plain) -> None:
    """With the product rate held, most product per cost is least cost per product."""
    other = answer("objective=levelised cost")
    assert other["status"] == "optimal"
    assert other["objective"]["value"] * plain["objective"]["value"] == pytest.approx(1000.0, rel=1e-6)
    for path, decision in plain["decisions"].items():
        assert other["decisions"][path]["value"] == pytest.approx(decision["value"], rel=1e-3), path


def test_profit_and_cost_agree_where_the_product_is_held(plain) -> None:
    other = answer("objective=annual profit", "prices.product=450 EUR/t")
    assert other["status"] == "optimal"
    total = plain["costs"]["total"]["value"]
    assert other["objective"]["value"] == pytest.approx(450.0 * 1000.0 * 8000.0 / 24.0 - total, rel=1e-6)


def test_yield_alone_spends_more_to_make_more(plain) -> None:
    other = answer("objective=yield")
    assert other["status"] == "optimal"
    assert other["objective"]["value"] > plain["product"]["yield"]["value"]
    assert other["costs"]["total"]["value"] > plain["costs"]["total"]["value"]


def test_marginal_cost_is_the_slope_of_the_total_cost(plain) -> None:
    totals = [answer(f"feed.product_rate={rate} t/d")["costs"]["total"]["value"] for rate in (998, 1002)]
    slope = (totals[1] - totals[0]) / (4.0 * 8000.0 / 24.0)
    assert plain["product"]["marginal_cost"]["value"] == pytest.approx(slope, rel=0.01)


def test_set_moves_just_the_limit_that_binding_names(plain) -> None:
    """`binding.path` is what --set takes, and the worth says what it brings."""
    row = next(r for r in plain["binding"] if r["path"] == "limits.reactor.catalyst_volume.high")
    moved = answer(f"{row['path']}={row['limit'] + 0.5} {row['unit']}")
    gain = moved["objective"]["value"] - plain["objective"]["value"]
    assert gain == pytest.approx(0.5 * row["worth"], rel=0.03)
    saved = (moved["objective"]["value"] / plain["objective"]["value"] - 1.0) * plain["costs"]["total"]["value"]
    assert saved == pytest.approx(0.5 * row["worth_per_year"], rel=0.03)


def test_fitted_beds_find_the_optimum_of_the_kinetic_ones(plain) -> None:
    """A Damkohler factor, fitted until it rests, agrees with the rate law within 0.3 % of the objective."""
    other = answer(*[f"reactor.{bed}.rate=damkohler" for bed in BEDS])
    assert other["status"] == "optimal", other["audit"]["worst"]
    assert other["objective"]["value"] == pytest.approx(plain["objective"]["value"], rel=3e-3)
    assert not any("constant approach" in warning for warning in other["warnings"])


def test_a_constant_approach_is_warned_of_with_the_decisions_that_rest_on_it() -> None:
    sets = [s for bed in BEDS for s in (f"reactor.{bed}.rate=approach", f"reactor.{bed}.approach_fraction=85 %")]
    result = answer(*sets)
    assert result["status"] == "optimal"
    warning = next(w for w in result["warnings"] if w.startswith("bed1 keeps a constant approach"))
    assert "reactor.bed1.inlet_temperature" in warning and "loop.pressure" in warning
    assert result["beds"]["bed2"]["approach_fraction"]["value"] == pytest.approx(85.0, abs=0.01)


def test_an_approach_in_kelvin_is_met() -> None:
    sets = [s for bed in BEDS for s in (f"reactor.{bed}.rate=approach", f"reactor.{bed}.approach_temperature=15 K")]
    result = answer(*sets)
    assert result["status"] == "optimal"
    assert result["beds"]["bed3"]["approach_temperature"]["value"] == pytest.approx(15.0, abs=0.01)


def test_an_approach_may_carry_a_limit() -> None:
    result = answer("limits.reactor.bed3.approach_temperature=>= 25 K")
    assert result["status"] == "optimal"
    assert result["quantities"]["reactor.bed3.approach_temperature"]["value"] == pytest.approx(25.0, abs=0.05)


@pytest.mark.parametrize("kind", ["pr", "ideal"])
def test_other_equations_of_state_are_audited_too(kind: str, plain) -> None:
    result = answer(f"equation_of_state={kind}")
    assert result["status"] == "optimal"
    assert result["objective"]["value"] == pytest.approx(plain["objective"]["value"], rel=0.03)


def test_the_recycle_ratio_may_be_held_and_the_purge_follows() -> None:
    result = answer("loop.recycle_ratio=3")
    assert result["status"] == "optimal"
    assert result["recycle_ratio"]["value"] == pytest.approx(3.0, rel=1e-6)
    assert result["decisions"]["loop.purge_fraction"]["at"] == "inside"


def test_nothing_free_is_calculated(plain) -> None:
    sets = [f"{p}={d['value']!r} {d['unit']}" for p, d in plain["decisions"].items() if d["at"] != "held"]
    result = answer(*sets)
    assert result["status"] == "calculated"
    assert result["objective"]["value"] == pytest.approx(plain["objective"]["value"], rel=1e-5)
    assert len(result["starts"]) == 1


def test_a_limit_outside_a_range_is_a_conflict() -> None:
    result = answer("limits.loop.pressure=>= 400 bar")
    assert result["status"] == "conflict"
    assert "limits.loop.pressure" in result["stopped"]
    assert check_case(read_case("ammonia-loop", ["limits.loop.pressure=>= 400 bar"]))["status"] == "conflict"


def test_too_little_catalyst_is_no_optimum() -> None:
    result = answer("limits.reactor.catalyst_volume=<= 8 m3")
    assert result["status"] in ("conflict", "failed")
    assert result["grade"] == "best point so far, no optimum"
    assert result["binding"] == []


def test_check_counts_the_freedom() -> None:
    checked = check_case(read_case("ammonia-loop"))
    assert checked["status"] == "ready"
    assert checked["freedom"] == len(checked["free"]) == 14
    assert checked["variables"] - checked["equations"] == 14


def test_fuel_dearer_than_feed_is_warned_of() -> None:
    warnings = check_case(read_case("ammonia-loop", ["prices.fuel=0.2 EUR/kWh"]))["warnings"]
    assert any("feed.streams.syngas" in w and "purging it pays" in w for w in warnings)


@pytest.mark.slow
def test_thorough_moves_every_decision() -> None:
    result = answer(thorough=True)
    moved = [line for line in result["audit"]["lines"] if line["what"].startswith("moving")]
    assert len(moved) == 14
    assert all(line["passed"] for line in moved)


def test_both_backends_find_the_same(plain) -> None:
    other = answer(backend="casadi")
    assert other["objective"]["value"] == pytest.approx(plain["objective"]["value"], rel=1e-6)
    assert other["provenance"]["backend"] == "casadi"


def test_one_process_and_two_give_the_same_digits(plain) -> None:
    other = answer(processes=1)
    assert other["objective"]["value"] == plain["objective"]["value"]
    assert other["decisions"] == plain["decisions"]


def test_a_quoted_cost_takes_the_place_of_its_correlation(plain) -> None:
    """Quoted at its own size and in the year of the case, an asset costs what was quoted."""
    power = plain["quantities"]["compression.power"]
    size = f"{power['value']} {power['unit']}"
    added = f"  quoted:\n    compressors: {{cost: 30 MEUR, size: {size}, exponent: 0.6, year: 2023}}\n"
    text = read_case("ammonia-loop").resolved_yaml()
    quoted = parse_case(text.replace("  quoted: {}\n", added))
    result = solve_case(quoted, starts=1)
    assert result["status"] == "optimal"
    share = (result["quantities"]["compression.power"]["value"] / power["value"]) ** 0.6
    assert result["costs"]["capital"]["compressors"]["value"] == pytest.approx(30e6 * share, rel=1e-6)


def test_a_carbon_price_is_paid_for_purge_and_electricity(plain) -> None:
    result = answer("prices.carbon=80 EUR/t", "prices.electricity_carbon=0.2 kg/kWh")
    assert result["status"] == "optimal"
    values = {p: q["value"] for p, q in result["quantities"].items()}
    power = values["compression.power"] + values["loop.circulator_power"] + values["condensation.chiller.power"]
    assert result["costs"]["items"]["carbon"]["value"] > 0.2 * 80.0 / 1000.0 * power * 8000.0 * 0.99


def test_two_coolers_that_may_condense_follow_each_other() -> None:
    """Boiler feed water behind the last bed, then the exchanger that closes the heating of the feed."""
    path = read_case("ammonia-loop").path
    assert path is not None
    lines = path.read_text(encoding="utf-8").splitlines()
    kept = [line for line in lines if "steam" not in line.split("#")[0] or "sink:" in line]
    text = "\n".join(kept).replace("sink: steam", "sink: boiler_feed_water").replace("265 .. 400", "200 .. 400")
    priced = text.replace("prices:\n", "prices:\n  boiler_feed_water_heat: 0.01 EUR/kWh\n")
    result = solve_case(parse_case(priced), starts=2)
    assert result["status"] == "optimal", result["audit"]["worst"]
    assert "water_heat_credit" in result["costs"]["items"]


def test_nothing_free_names_the_limits_that_it_breaks(plain) -> None:
    """A calculated section is calculated as it is, and told what it passes."""
    sets = [f"{p}={d['value']!r} {d['unit']}" for p, d in plain["decisions"].items() if d["at"] != "held"]
    result = answer(*sets, "limits.reactor.bed1.hottest=<= 450 degC")
    assert result["status"] == "calculated"
    hottest = plain["quantities"]["reactor.bed1.hottest"]["value"]
    assert result["quantities"]["reactor.bed1.hottest"]["value"] == pytest.approx(hottest, abs=0.05)
    assert any(w.startswith("limit broken: reactor.bed1.hottest is 515") for w in result["warnings"])
