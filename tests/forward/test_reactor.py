"""The reactor's steps: heat goes where the case says, and the feed is heated by what is left."""

from __future__ import annotations

import numpy as np
import pytest
from forward.plant import closed, middle

from optimiser.engineering.costs import load_equipment
from optimiser.engineering.heat import coefficient_at, steam_saturation_temperature
from optimiser.forward.exchange import LEAST_DIFFERENCE, exchange
from optimiser.forward.stream import SetpointFailure
from optimiser.forward.walk import Section
from optimiser.inputs import parse_case
from optimiser.inputs.lookup import find_case

TEXT = find_case("ammonia-loop").read_text(encoding="utf-8")
BOILER = TEXT[TEXT.index("  - cool: boiler") : TEXT.index("  - cool: preheat")]
PREHEAT = TEXT[TEXT.index("  - cool: preheat") : TEXT.index("condensation:")]


def _section(text: str, chemistry) -> Section:
    return Section(parse_case(text), chemistry, load_equipment())


def _walk(text: str, chemistry):
    section = _section(text, chemistry)
    return section, closed(section, middle(section.case))


def test_every_cooler_gives_the_heat_that_its_gas_loses(plant, chemistry) -> None:
    walk, mixture = plant.walk, chemistry.mixture
    before = {"between1": "bed1", "between2": "bed2", "boiler": "bed3"}
    for name, bed in before.items():
        hot, cold = walk.streams[f"reactor.{bed}.out"], walk.streams[f"reactor.{name}.out"]
        lost = hot.enthalpy(mixture) - cold.enthalpy(mixture)
        assert walk.quantities[f"reactor.{name}.duty"] == pytest.approx(lost, rel=1e-9)
        assert hot.pressure - cold.pressure == pytest.approx(0.3e5)


def test_the_feed_reaches_the_first_bed(plant, chemistry) -> None:
    walk, mixture = plant.walk, chemistry.mixture
    duties = sum(walk.quantities[f"reactor.{n}.duty"] for n in ("between1", "between2", "preheat"))
    fed, heated = (
        walk.streams["converter_feed"].enthalpy(mixture),
        walk.streams["reactor.bed1.in"].enthalpy(mixture),
    )
    assert fed + duties == pytest.approx(heated, abs=1e-9 * duties)
    # It meets the exchangers in the reverse order of the list, so the first of them sees it last.
    warm = [walk.streams[f"feed.after.{n}"].temperature for n in ("preheat", "between2", "between1")]
    assert warm == sorted(warm)
    assert warm[-1] == pytest.approx(walk.streams["reactor.bed1.in"].temperature, abs=1e-5)
    assert abs(walk.feed_gap) < 1e-9 * duties


def test_areas_are_duty_over_coefficient_and_mean_difference(plant) -> None:
    walk = plant.walk
    hot_in, hot_out = (walk.streams[f"reactor.{n}.out"] for n in ("bed3", "boiler"))
    boiling = steam_saturation_temperature(40e5)
    d1, d2 = hot_in.temperature - boiling, hot_out.temperature - boiling
    mean = (d1 - d2) / np.log(d1 / d2)
    coefficient = 300.0 * (hot_in.pressure / 150e5) ** 0.4
    duty = walk.quantities["reactor.boiler.duty"]
    assert walk.quantities["reactor.boiler.area"] == pytest.approx(duty / (coefficient * mean), rel=1e-9)
    assert walk.quantities["reactor.boiler.approach"] == pytest.approx(min(d1, d2))


def test_the_closing_exchanger_may_stand_before_another_cooler(chemistry) -> None:
    """What it leaves to the boiler moves with its own duty; the section's balances are the same ones."""
    section = _section(TEXT.replace(BOILER + PREHEAT, PREHEAT + BOILER), chemistry)
    # Colder than its steam, but the balances are what is looked at.
    walk = closed(section, middle(section.case) | {"reactor.boiler.outlet_temperature": 400.0})
    mixture = section.chemistry.mixture
    hot, middle_, cold = (walk.streams[f"reactor.{n}.out"] for n in ("bed3", "preheat", "boiler"))
    assert hot.temperature > middle_.temperature > cold.temperature
    lost = hot.enthalpy(mixture) - cold.enthalpy(mixture)
    duties = walk.quantities["reactor.preheat.duty"] + walk.quantities["reactor.boiler.duty"]
    assert duties == pytest.approx(lost, rel=1e-9)
    assert abs(walk.feed_gap) < 1e-9 * duties


def test_feed_exchangers_in_a_row_leave_the_split_open(chemistry) -> None:
    """The last one has an outlet, the one before closes; only their sum is known."""
    twice = PREHEAT + PREHEAT.replace("preheat", "second").replace(
        "    sink: feed", "    sink: feed\n    outlet_temperature: 150 degC"
    )
    section = _section(TEXT.replace(PREHEAT, twice), chemistry)
    with pytest.raises(SetpointFailure, match="preheat: what it leaves to the next feed exchanger"):
        section.converge(middle(section.case))


def test_water_takes_heat_after_the_boiler(chemistry) -> None:
    economiser = "  - cool: economiser\n    sink: boiler_feed_water\n    outlet_temperature: 220 degC\n"
    trim = "  - cool: trim\n    sink: cooling_water\n    outlet_temperature: 60 degC\n"
    changed = TEXT.replace(PREHEAT, economiser + PREHEAT + trim)
    changed = changed.replace(
        "  steam: 0.012 EUR/kWh", "  boiler_feed_water_heat: 0.01 EUR/kWh\n  steam: 0.012 EUR/kWh"
    )
    _, walk = _walk(changed, chemistry)
    q = walk.quantities
    assert q["costs.water_heat_credit"] == pytest.approx(q["reactor.economiser.duty"] * 0.01 / 3.6e6 * 8000 * 3600)
    ends = (
        walk.streams["reactor.boiler.out"].temperature - (180 + 273.15),
        walk.streams["reactor.economiser.out"].temperature - (105 + 273.15),
    )
    assert q["reactor.economiser.approach"] == pytest.approx(min(ends))
    # At 60 degC some of the ammonia is liquid already, and the section goes on with both phases.
    assert walk.streams["reactor.trim.out"].temperature == pytest.approx(333.15)
    assert walk.streams["condensation.in"].flows == pytest.approx(walk.streams["reactor.trim.out"].flows)


def test_ends_that_cross_still_have_an_area_and_tell_the_truth() -> None:
    found = exchange("reactor.x", "exchanger", 1e6, (400.0, 350.0), (360.0, 420.0), 1.5e7, 300.0)
    assert found.approach == pytest.approx(-20.0)
    assert found.area == pytest.approx(1e6 / (coefficient_at(300.0, 1.5e7) * LEAST_DIFFERENCE), rel=1e-9)
