"""Texts to values, and what is said of texts that are none."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimiser.quantities import (
    DIMENSIONS,
    Money,
    UnitProblem,
    dimension_of,
    parse_limit,
    parse_quantity,
    parse_setting,
    to_shown,
)


@pytest.mark.parametrize(
    ("text", "dimension", "si"),
    [
        ("150 bar", "pressure", 1.5e7),
        ("150bar", "pressure", 1.5e7),
        ("1.5e1 MPa", "pressure", 1.5e7),
        (" 15. MPa ", "pressure", 1.5e7),
        ("412.4 degC", "temperature", 685.55),
        ("212 degF", "temperature", 373.15),
        ("15 K", "temperature_difference", 15.0),
        ("5 %", "fraction", 0.05),
        ("5%", "fraction", 0.05),
        ("0.05", "fraction", 0.05),
        ("500 ppm", "fraction", 5e-4),
        ("3 mol%", "fraction", 0.03),
        ("4", "ratio", 4.0),
        ("4 -", "ratio", 4.0),
        ("1e3 kmol/h", "molar_flow", 1e6 / 3600),
        ("36 Nm3/h", "molar_flow", 0.4461503),
        ("1000 t/d", "mass_flow", 1e6 / 86400),
        ("0.07 EUR/kWh", "energy_price", 0.07 / 3.6e6),
        ("5 EUR/GJ", "energy_price", 5e-9),
        ("20 year", "years", 20 * 365.25 * 86400),
        ("8000 h", "hours", 8000 * 3600),
        ("2 MEUR/year", "money_per_year", 2e6),
        ("0.2 kg/kWh", "mass_intensity", 0.2 / 3.6e6),
    ],
)
def test_values_are_read_in_si(text, dimension, si):
    assert parse_quantity(text, dimension).si == pytest.approx(si, rel=1e-7)


@pytest.mark.parametrize(
    ("text", "low", "high", "shown"),
    [
        ("80 .. 250 bar", 8e6, 2.5e7, "80 .. 250 bar"),
        ("80..250 bar", 8e6, 2.5e7, "80 .. 250 bar"),
        ("80 bar .. 250 bar", 8e6, 2.5e7, "80 .. 250 bar"),
        ("80 bar .. 250", 8e6, 2.5e7, "80 .. 250 bar"),
        ("80 bar .. 25 MPa", 8e6, 2.5e7, "80 .. 250 bar"),
        ("150 bar", 1.5e7, 1.5e7, "150 bar"),
        ("150 .. 150 bar", 1.5e7, 1.5e7, "150 bar"),
    ],
)
def test_settings(text, low, high, shown):
    setting = parse_setting(text, "pressure")
    assert (setting.low, setting.high, setting.text) == (low, high, shown)
    assert setting.held == (low == high)


def test_a_range_has_no_value():
    with pytest.raises(ValueError, match=r"80 \.\. 250 bar is a range"):
        _ = parse_setting("80 .. 250 bar", "pressure").value


def test_a_range_below_zero():
    setting = parse_setting("-25 .. 10 degC", "temperature")
    assert (setting.low, setting.high) == (pytest.approx(248.15), pytest.approx(283.15))


@pytest.mark.parametrize(
    ("text", "low", "high"),
    [
        ("<= 520 degC", None, 793.15),
        ("<=520 degC", None, 793.15),
        ("≤ 520 degC", None, 793.15),
        (">= 400 degC", 673.15, None),
        ("400 .. 520 degC", 673.15, 793.15),
    ],
)
def test_limits(text, low, high):
    limit = parse_limit(text, "temperature")
    assert (limit.low, limit.high) == (low, high)


WRONG = [
    ("150", "pressure", "with its unit", None),
    ("bar", "pressure", "a number and its unit", None),
    ("", "pressure", "a number and its unit", None),
    ("150 kW", "pressure", "an absolute pressure, such as `150 bar`", None),
    ("150 baar", "pressure", "in a known unit", "bar"),
    ("150 barg", "pressure", "add 1.013 bar to a gauge pressure", "bar"),
    ("1,000 bar", "pressure", "without commas", None),
    ("0,5 bar", "pressure", "without commas", None),
    ("1e999 bar", "pressure", "a computer can hold", None),
    ("nan bar", "pressure", "a number and its unit", None),
    ("0 bar", "pressure", "above 0", None),
    ("-300 degC", "temperature", "above absolute zero", None),
    ("0 K", "temperature", "above absolute zero", None),
    ("10 degC", "temperature_difference", "in K", None),
    ("10", "temperature_difference", "with its unit", None),
    ("-1 EUR/t", "mass_price", "of at least 0", None),
    ("120 %", "fraction", "at most 1", None),
    ("5 wt%", "fraction", "a fraction", None),
    ("5 mol%", "mass_fraction", "a mass fraction", None),
    ("4 bar", "ratio", "has no unit", None),
    ("250 .. 80 bar", "pressure", "turn the two round", None),
    ("80 ..", "pressure", "two ends", None),
    ("80 .. 100 .. 250 bar", "pressure", "two ends", None),
    ("80 .. 250", "pressure", "with its unit", None),
    ("80 bar .. 250 kW", "pressure", "an absolute pressure", None),
    ("5 USD/t", "mass_price", "economics.exchange_rate in EUR/USD", None),
    ("5 GBP/t", "mass_price", "only USD can be converted", None),
]


@pytest.mark.parametrize(("text", "dimension", "wanted", "nearest"), WRONG)
def test_what_is_wrong_is_said(text, dimension, wanted, nearest):
    with pytest.raises(UnitProblem) as caught:
        parse_setting(text, dimension)
    assert wanted in caught.value.wanted
    assert caught.value.nearest == nearest
    assert caught.value.read == text


@pytest.mark.parametrize("text", ["520 degC", "< 520 degC", "= 520 degC", "<= 520", "520 .. 400 degC"])
def test_what_is_no_limit(text):
    with pytest.raises(UnitProblem):
        parse_limit(text, "temperature")


def test_dollars_are_converted_where_the_rate_is_known():
    price = parse_quantity("100 kUSD/t", "mass_price", Money("EUR", 0.92))
    assert price.si == pytest.approx(92.0)
    assert price.unit == "kEUR/t"
    assert parse_quantity(price.text, "mass_price") == price


@pytest.mark.parametrize(
    ("text", "dimension"),
    [
        ("5 EUR/t", "mass_price"),
        ("5 USD/kmol", "molar_price"),
        ("5 EUR/Nm3", "molar_price"),
        ("5 EUR/GJ", "energy_price"),
        ("5 bananas", "mass_price"),
    ],
)
def test_which_of_several_dimensions(text, dimension):
    assert dimension_of(text, ("mass_price", "molar_price", "energy_price")) == dimension


def said(parse, text, dimension):
    """What is wanted in place of a text, None where it is a value."""
    try:
        parse(text, dimension)
    except UnitProblem as problem:
        return problem.wanted
    return None


@given(st.text(max_size=40), st.sampled_from(sorted(DIMENSIONS)))
def test_any_text_is_a_value_or_a_problem_with_words(text, dimension):
    for parse in (parse_quantity, parse_setting, parse_limit):
        assert said(parse, text, dimension) != ""


@pytest.mark.parametrize("name", sorted(DIMENSIONS))
@pytest.mark.parametrize("currency", ["EUR", "JPY"])
def test_the_example_of_each_dimension_can_be_read(name, currency):
    sample = DIMENSIONS[name].sample(currency)
    quantity = parse_quantity(sample, name, currency)
    assert to_shown(quantity.si, quantity.unit, name, currency) == pytest.approx(
        float(DIMENSIONS[name].example)
    )
