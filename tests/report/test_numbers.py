import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimiser.report.numbers import aligned, amount, column, mole_percent, number, share, unit_name, written

FINITE = st.floats(-1e300, 1e300, allow_nan=False)


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (152.31, "152.3"),
        (-8.127, "-8.127"),
        (0.061234, "0.06123"),
        (999.96, "1,000"),
        (999.94, "999.9"),
        (1234.56, "1,235"),
        (98123456.0, "98,123,000"),
        (0.0, "0"),
        (-0.0, "0"),
        (1.5e-7, "1.500e-07"),
        (3.0e13, "3.000e+13"),
        (None, "-"),
        (math.nan, "-"),
        (math.inf, "-"),
    ],
)
def test_number(value, text):
    assert number(value) == text


@given(FINITE)
def test_number_keeps_four_digits_whatever_comes(value):
    assert float(number(value).replace(",", "")) == pytest.approx(value, rel=5.1e-4)


@pytest.mark.parametrize(
    ("value", "text"),
    [(80.0, "80"), (249.99999999997, "250"), (0.05, "0.05"), (12345678.0, "12,345,700"), (-30.0, "-30")],
)
def test_written_is_as_short_as_a_user_writes(value, text):
    assert written(value) == text


@given(FINITE)
def test_written_keeps_six_digits_whatever_comes(value):
    assert float(written(value).replace(",", "")) == pytest.approx(value, rel=5.1e-6)


def test_column_has_one_decimal_place():
    assert column([451.93, 40.0, -8.127, 0.0, None]) == ["451.9", "40.0", "-8.1", "0", "-"]
    assert column([27514.2, 490.3]) == ["27,514", "490"]
    assert column([98123456.0, 5503703.0, 1912345.0]) == ["98,123,000", "5,504,000", "1,912,000"]


def test_column_never_rounds_a_number_away():
    assert column([98123456.0, 0.4])[1] == "0.40"


def test_aligned_sets_numbers_and_units_below_each_other():
    assert aligned([("152.3", "bar"), ("2", "%")]) == ["152.3 bar", "    2 %  "]
    assert aligned([("1", ""), ("20", "")]) == [" 1", "20"]


def test_amount_leaves_out_what_is_not_there():
    assert amount({"value": 4.0213, "unit": "-"}) == "4.021"
    assert amount({"value": None, "unit": "bar"}) == "- bar"
    assert amount(None) == "-"


def test_shares_and_fractions():
    assert share(0.6231) == "62.3 %"
    assert share(None) == "-"
    assert mole_percent(0.14613) == "14.61"
    assert mole_percent(0.00002) == "<0.01"
    assert mole_percent(0.0) == "0"
    assert unit_name("-") == ""
