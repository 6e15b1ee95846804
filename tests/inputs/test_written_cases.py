"""Any case that can be read can be written and read again, equal in every value."""

import re

from hypothesis import HealthCheck, given
from hypothesis import settings as hypothesis_settings
from hypothesis import strategies as st
from strategies.plain_case import MODEL, PLAIN
from strategies.values import limits_of, settings_of, written

from optimiser.inputs import parse_case
from optimiser.inputs.writing import as_yaml
from optimiser.inputs.yaml_reader import parse_document, plain_value

# Places of the plain case that take any value of a dimension.
SETTINGS = {
    "80 .. 250 bar": "pressure",
    "340 .. 460 degC": "temperature",
    "-25 .. 10 degC": "temperature",
}
QUANTITIES = {
    "0.07 EUR/kWh": "energy_price",
    "0.03 EUR/m3": "volume_price",
    "2 EUR/kmol": "molar_price",
    "35 degC": "temperature",
    "25 bar": "pressure",
}
texts = st.text(st.characters(exclude_categories=("Cs",)), max_size=30)
numbers = st.integers(-(10**17), 10**17) | st.floats(allow_nan=False, allow_infinity=False)
plain = st.booleans() | numbers | texts


@st.composite
def cases(draw):
    """The plain case with other values, as text."""
    text = PLAIN
    for old, dimension in SETTINGS.items():
        text = text.replace(old, draw(settings_of(dimension)).text)
    for old, dimension in QUANTITIES.items():
        text = text.replace(old, draw(written(dimension)).text)
    text = text.replace("<= 525 degC", f"'{draw(limits_of('temperature')).text}'")
    title = as_yaml({"title": draw(texts)}).strip("\n")
    return re.sub("title: Plain", lambda _: title, text)


@hypothesis_settings(suppress_health_check=[HealthCheck.too_slow], max_examples=60)
@given(cases())
def test_cases_come_back_equal(text):
    case = parse_case(text, model=MODEL)
    again = parse_case(case.resolved_yaml(), model=MODEL)
    assert again == case


@hypothesis_settings(max_examples=50)
@given(st.dictionaries(texts, plain | st.dictionaries(texts, plain, max_size=3), min_size=1, max_size=3))
def test_plain_data_come_back_from_yaml(data):
    assert parse_document(as_yaml(data), "here").data == data


@given(texts)
def test_a_text_in_quotes_stays_text(text):
    assert parse_document(as_yaml({"a": text}), "here").data == {"a": text}


def test_every_default_is_visible():
    case = parse_case(PLAIN, model=MODEL)
    assert "circulator_efficiency: 75 %" in case.resolved_yaml()
    assert "steam_pressure: 40 bar" in case.resolved_yaml()
    assert "water_inlet" not in case.resolved_yaml(), "it means nothing without boiler feed water"
    assert case.resolved()["compression"]["intercooler_temperature"] == "40 degC"


def test_plain_words_mean_what_yaml_says():
    assert [plain_value(t) for t in ("1", "1.5", "1e3", "true", "~", "", "yes", "0x10", "1e999")] == [
        1,
        1.5,
        1000.0,
        True,
        None,
        None,
        "yes",
        "0x10",
        "1e999",
    ]
