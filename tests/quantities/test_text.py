"""Values to text and back: nothing is lost."""

import pytest
from hypothesis import given
from strategies.values import limits, quantities, settings

from optimiser.quantities import Quantity, parse_limit, parse_quantity, parse_setting


@given(quantities)
def test_quantities_come_back(quantity):
    assert parse_quantity(quantity.text, quantity.dimension) == quantity


@given(settings)
def test_settings_come_back(setting):
    assert parse_setting(setting.text, setting.dimension) == setting


@given(limits)
def test_limits_come_back(limit):
    assert parse_limit(limit.text, limit.dimension) == limit


@pytest.mark.parametrize(
    ("text", "dimension"),
    [
        ("412.4 degC", "temperature"),
        ("0.07 EUR/kWh", "energy_price"),
        ("8000000 EUR/year", "money_per_year"),
        ("0.003", "fraction"),
        ("0 EUR/t", "mass_price"),
        ("1e-07 Pa", "pressure"),
    ],
)
def test_text_is_as_people_write_it(text, dimension):
    assert parse_quantity(text, dimension).text == text


def test_shown_is_the_number_of_the_user():
    assert parse_quantity("412.4 degC", "temperature").shown() == pytest.approx(412.4)
    assert Quantity(365.25 * 86400 * 20, "year", "years").years == 20.0
