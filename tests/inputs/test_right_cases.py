"""What a case states arrives as values, with every default, and can be written back without loss."""

from types import SimpleNamespace

import pytest
from pydantic import ValidationError
from strategies.plain_case import MODEL, PLAIN

from optimiser.inputs import InputError, parse_case, read_case
from optimiser.inputs.case import BedStep, CoolStep
from optimiser.inputs.lookup import shipped_names

SPECIES = [
    SimpleNamespace(name="H2", molar_mass=0.002, lhv=241800.0),
    SimpleNamespace(name="N2", molar_mass=0.028, lhv=0.0),
]


@pytest.fixture(scope="module")
def case():
    return parse_case(PLAIN, model=MODEL)


def priced(price, rate="0.92 EUR/USD"):
    """What a mole of a 3:1 feed costs at a price."""
    text = PLAIN.replace("2 EUR/kmol", price).replace("0.92 EUR/USD", rate)
    return parse_case(text, model=MODEL).feed.streams["syngas"].price_per_mole(SPECIES, [0.75, 0.25])


def test_values_arrive_in_si(case):
    assert case.feed.streams["syngas"].temperature.si == pytest.approx(308.15)
    assert case.feed.streams["syngas"].composition == {"H2": 0.74, "N2": 0.25, "Ar": 0.01}
    assert (case.loop.pressure.low, case.loop.pressure.high) == (8e6, 25e6)
    assert case.economics.hours_per_year.si == 8000 * 3600
    assert case.economics.life.years == 20
    assert case.limits["reactor.bed1.hottest"].high == pytest.approx(798.15)
    assert case.limits["product.purity"].low == pytest.approx(0.95)


def test_steps_come_in_order_with_their_kind(case):
    assert [(s.name, s.kind) for s in case.reactor] == [
        ("bed1", "bed"),
        ("between", "cool"),
        ("bed2", "bed"),
        ("boiler", "cool"),
        ("preheat", "cool"),
    ]
    assert isinstance(case.reactor[0], BedStep)
    assert isinstance(case.reactor[1], CoolStep)


def test_settings_are_all_that_may_be_decided(case):
    assert list(case.settings()) == [
        "feed.product_rate",
        "compression.low.discharge_pressure",
        "loop.pressure",
        "loop.purge_fraction",
        "reactor.bed1.inlet_temperature",
        "reactor.bed1.volume",
        "reactor.bed1.diameter",
        "reactor.bed2.inlet_temperature",
        "reactor.bed2.volume",
        "reactor.bed2.length_over_diameter",
        "reactor.boiler.outlet_temperature",
        "condensation.water_cooler.outlet_temperature",
        "condensation.chiller.outlet_temperature",
    ]


def test_nothing_can_be_changed_after_reading(case):
    with pytest.raises(ValidationError):
        case.title = "Another"


@pytest.mark.parametrize(
    ("price", "worth"),
    [
        ("2 EUR/kmol", 0.002),
        ("44.615 EUR/Nm3", 44.615 / 44.6150334),
        ("1000 EUR/t", 0.0085),
        ("3600 EUR/MWh", 0.75 * 241800.0 * 1e-6),
        ("1000 USD/t", 0.0085 * 0.92),
    ],
)
def test_feed_is_priced_by_amount_mass_or_heat(price, worth):
    assert priced(price) == pytest.approx(worth, rel=1e-6)


def test_rounded_fractions_are_made_to_add_up():
    text = PLAIN.replace("Ar: 0.01", "Ar: 0.01005")
    composition = parse_case(text, model=MODEL).feed.streams["syngas"].composition
    assert sum(composition.values()) == pytest.approx(1.0, abs=1e-15)
    assert composition["Ar"] == pytest.approx(0.01005 / 1.00005)


def test_a_case_in_dollars_needs_no_rate():
    text = PLAIN.replace("  exchange_rate: 0.92 EUR/USD\n", "").replace("EUR", "USD")
    case = parse_case(text.replace("prices:", "prices:\n  catalyst: 15 USD/kg"), model=MODEL)
    assert case.economics.exchange_rate is None
    assert case.prices.fuel.text == "0 USD/kWh"


def test_a_case_in_another_currency_states_its_catalyst():
    with pytest.raises(InputError, match=r"prices\.catalyst"):
        parse_case(PLAIN.replace("EUR", "JPY"), model=MODEL)


def test_flows_in_place_of_a_product_rate():
    text = PLAIN.replace("  product_rate: 1000 t/d\n", "")
    case = parse_case(
        text.replace("price: 2 EUR", "flow: 5000 .. 6000 kmol/h\n      price: 2 EUR"), model=MODEL
    )
    assert "feed.streams.syngas.flow" in case.settings()


def test_shares_of_two_streams():
    more = "    nitrogen: {composition: {N2: 1}, temperature: 25 degC, pressure: 10 bar, price: 1 EUR/kmol}\n"
    text = PLAIN.replace("compression:\n", f"{more}compression:\n", 1)
    case = parse_case(text.replace("price: 2 EUR", "share: 70 .. 80 %\n      price: 2 EUR"), model=MODEL)
    assert case.settings()["feed.streams.syngas.share"].low == pytest.approx(0.7)


def test_beds_by_approach_need_no_rate_law():
    bare = SimpleNamespace(**{**vars(MODEL), "law_of": lambda name: None})
    with pytest.raises(InputError, match="no rate law for synthesis"):
        parse_case(PLAIN, model=bare)
    text = PLAIN.replace("- bed: bed1", "- bed: bed1\n    rate: approach\n    approach_temperature: 15 K")
    text = text.replace("- bed: bed2", "- bed: bed2\n    rate: approach\n    approach_fraction: 80 .. 95 %")
    assert len(parse_case(text, model=bare).settings()) == 15


@pytest.mark.parametrize("sign", [">= 95 %", "'>= 95 %'", '">= 95 %"', "≥ 95 %"])
def test_a_limit_may_begin_with_the_sign_of_a_folded_text(sign):
    case = parse_case(PLAIN.replace("'>= 95 %'", sign), model=MODEL)
    assert case.limits["product.purity"].text == ">= 95 %"


@pytest.mark.parametrize("name", shipped_names("cases"))
def test_shipped_cases_are_right_and_can_be_written_back(name):
    case = read_case(name)
    assert case.path is not None
    assert len(case.sha256) == 64
    again = parse_case(case.resolved_yaml())
    assert again == case
    assert again.resolved_yaml() == case.resolved_yaml()
