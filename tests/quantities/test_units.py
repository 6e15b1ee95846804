"""Units against the definitions of a unit library, which the program itself does without."""

import math

import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimiser.quantities import CURRENCIES, DIMENSIONS, UnknownUnit, parse_unit, shown_unit, unit_scale
from optimiser.quantities.units import _TABLE

# pint's names for ours, where they differ.
PINT = {
    "-": "dimensionless",
    "%": "percent",
    "mol%": "percent",
    "wt%": "percent",
    "L": "litre",
    "t": "tonne",
    "kt": "kilotonne",
    "Mt": "megatonne",
    "d": "day",
    "h": "hour",
    "min": "minute",
    "N": "newton",
    "Wh": "watt_hour",
    "kWh": "kilowatt_hour",
    "MWh": "megawatt_hour",
    "GWh": "gigawatt_hour",
    "cP": "centipoise",
    "lb": "pound",
}


@pytest.fixture(scope="module")
def registry():
    return pint.UnitRegistry()


@pytest.mark.parametrize("name", [n for n in _TABLE if n[1:] not in CURRENCIES and n != "Nm3"])
def test_every_unit_agrees_with_pint(name, registry):
    theirs = registry.Quantity(1.0, PINT.get(name, name)).to_base_units()
    grams = theirs.dimensionality.get("[mass]", 0)
    ours = parse_unit(name)
    assert ours.factor == pytest.approx(theirs.magnitude, rel=1e-12), "pint counts kilograms as we do"
    assert dict(ours.powers).get("kg", 0) == grams
    assert dict(ours.powers).get("m", 0) == theirs.dimensionality.get("[length]", 0)
    assert dict(ours.powers).get("s", 0) == theirs.dimensionality.get("[time]", 0)


@pytest.mark.parametrize("degrees", [-40.0, 0.0, 37.5, 412.4])
@pytest.mark.parametrize("name", ["degC", "degF"])
def test_scales_of_temperature_agree_with_pint(name, degrees, registry):
    unit = parse_unit(name)
    assert degrees * unit.factor + unit.offset == pytest.approx(
        registry.Quantity(degrees, name).to("K").magnitude
    )


def test_a_normal_cubic_metre_is_an_ideal_gas_at_0_degc_and_1_atm(registry):
    gas = registry.Quantity(101325, "Pa") / (registry.molar_gas_constant * registry.Quantity(273.15, "K"))
    assert parse_unit("Nm3").factor == pytest.approx(gas.to("mol/m**3").magnitude, rel=1e-9)


@pytest.mark.parametrize(
    ("text", "pints"),
    [
        ("W/m2/K", "W/m**2/K"),
        ("W/(m2*K)", "W/m**2/K"),
        ("W/(m^2 K)", "W/m**2/K"),
        ("kg/m**3", "kg/m**3"),
        ("Pa*s", "Pa*s"),
        ("kmol/h", "kmol/h"),
        ("t/d", "tonne/day"),
        ("kWh/t", "kWh/tonne"),
        ("m s^-2", "m/s**2"),
        ("1/h", "1/hour"),
    ],
)
def test_compound_units_agree_with_pint(text, pints, registry):
    assert parse_unit(text).factor == pytest.approx(registry.Quantity(1.0, pints).to_base_units().magnitude)


def test_currencies_do_not_mix():
    powers = {parse_unit(c).powers for c in CURRENCIES}
    assert len(powers) == len(CURRENCIES)
    assert parse_unit("kEUR/t").factor == 1.0
    assert parse_unit("MUSD").factor == 1e6


@pytest.mark.parametrize(
    "text",
    ["baar", "5", "bar/", "/bar", "(bar", "bar)", "bar^9", "m^x", "W/m2/degC", "b@r", "bar bar^", "x" * 200],
)
def test_what_is_no_unit_is_refused(text):
    with pytest.raises(UnknownUnit):
        parse_unit(text)


@given(st.text(max_size=80))
def test_any_text_is_a_unit_or_refused(text):
    try:
        unit = parse_unit(text)
    except UnknownUnit:
        return
    assert math.isfinite(unit.factor)


@pytest.mark.parametrize("name", sorted(DIMENSIONS))
@pytest.mark.parametrize("currency", CURRENCIES)
def test_the_shown_unit_of_each_dimension_fits_it(name, currency):
    shown = parse_unit(shown_unit(name, currency))
    assert shown.powers == DIMENSIONS[name].unit(currency).powers
    assert unit_scale(shown_unit(name, currency), name, currency) > 0


def test_annual_money_counts_in_money_a_year():
    assert unit_scale("EUR/year", "money_per_year") == 1.0
    assert unit_scale("MEUR/year", "money_per_year") == pytest.approx(1e6)


def test_a_difference_of_one_degree_is_one_kelvin():
    assert unit_scale("degC", "temperature") == 1.0
    assert unit_scale("degF", "temperature") == pytest.approx(5 / 9)
