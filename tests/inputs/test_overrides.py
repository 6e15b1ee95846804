"""`--set PATH=VALUE` changes one value, and its mistakes are told as its own."""

import pytest
from hypothesis import given
from strategies.plain_case import MODEL, PLAIN
from strategies.values import settings_of

from optimiser.inputs import InputError, parse_case


def with_sets(*sets, text=PLAIN):
    return parse_case(text, sets, MODEL)


@pytest.mark.parametrize(
    ("option", "path", "text"),
    [
        ("loop.pressure=150 bar", "loop.pressure", "150 bar"),
        (" loop.pressure = 100 .. 200 bar ", "loop.pressure", "100 .. 200 bar"),
        ("loop.pressure.low=100 bar", "loop.pressure", "100 .. 250 bar"),
        ("loop.pressure.high=200 bar", "loop.pressure", "80 .. 200 bar"),
        ("loop.pressure.high=20 MPa", "loop.pressure", "80 .. 200 bar"),
        ("loop.pressure.high=200", "loop.pressure", "80 .. 200 bar"),
        ("loop.purge_fraction.high=5", "loop.purge_fraction", "0.3 .. 5 %"),
        ("reactor.bed1.volume.high=50 m3", "reactor.bed1.volume", "3 .. 50 m3"),
        ("reactor.bed2.volume.high=50 m3", "reactor.bed2.volume", "20 .. 50 m3"),
        ("reactor.bed2.volume.low=5 m3", "reactor.bed2.volume", "5 .. 20 m3"),
        ("compression.low.discharge_pressure=60 bar", "compression.low.discharge_pressure", "60 bar"),
        ("loop.recycle_ratio=2 .. 6", "loop.recycle_ratio", "2 .. 6"),
        ("feed.product_rate=1200 t/d", "feed.product_rate", "1200 t/d"),
        (
            "condensation.chiller.outlet_temperature=-10 degC",
            "condensation.chiller.outlet_temperature",
            "-10 degC",
        ),
    ],
)
def test_settings(option, path, text):
    assert with_sets(option).settings()[path].text == text


@pytest.mark.parametrize(
    ("option", "text"),
    [
        ("limits.reactor.bed1.hottest=<= 530 degC", "<= 530 degC"),
        ("limits.reactor.bed1.hottest=530 degC", "<= 530 degC"),
        ("limits.reactor.bed1.hottest.high=530 degC", "<= 530 degC"),
        ("limits.reactor.bed1.hottest.high=<= 530 degC", "<= 530 degC"),
        ("limits.reactor.bed1.hottest.low=400 degC", "400 .. 525 degC"),
        ("limits.reactor.bed1.hottest='>= 400 degC'", ">= 400 degC"),
        ("limits.reactor.bed1.hottest=400 .. 500 degC", "400 .. 500 degC"),
    ],
)
def test_limits(option, text):
    assert with_sets(option).limits["reactor.bed1.hottest"].text == text


def test_limits_that_were_not_there():
    case = with_sets("limits.loop.inerts=<= 12 %", "limits.loop.recycle_ratio.high=6")
    assert case.limits["loop.inerts"].text == "<= 12 %"
    assert case.limits["loop.recycle_ratio"].text == "<= 6"


def test_limits_where_there_were_none():
    text = PLAIN[: PLAIN.index("limits:")] + PLAIN[PLAIN.index("prices:") :]
    assert with_sets("limits.loop.inerts=<= 12 %", text=text).limits["loop.inerts"].text == "<= 12 %"


def test_one_end_of_a_two_sided_limit():
    case = with_sets(
        "limits.reactor.bed1.hottest=400 .. 525 degC", "limits.reactor.bed1.hottest.high=500 degC"
    )
    assert case.limits["reactor.bed1.hottest"].text == "400 .. 500 degC"


def test_later_options_build_on_earlier_ones():
    case = with_sets("loop.pressure=100 .. 200 bar", "loop.pressure.low=120 bar")
    assert case.loop.pressure.text == "120 .. 200 bar"


def test_an_end_in_per_cent_of_a_range_without_unit():
    case = with_sets("loop.purge_fraction=0.003 .. 0.1", "loop.purge_fraction.high=20 %")
    assert case.loop.purge_fraction.text == "0.003 .. 0.2"


def test_sections_that_the_file_leaves_out():
    case = with_sets("utilities.cooling_water_supply=20 degC", "economics.interest=5 %", "objective=yield")
    assert case.utilities.cooling_water_supply.text == "20 degC"
    assert case.economics.interest.text == "5 %"
    assert case.objective == "yield"


SYNGAS = "feed.streams.syngas.composition"
# Option, where its mistake is told after `--set`, path, what was read, what is wanted, nearest name.
MISTAKES = [
    ("loop.pressure", "", "loop.pressure", "loop.pressure", "PATH=VALUE", None),
    ("=3", "", "", "=3", "PATH=VALUE", None),
    ("loop.pressure=", "", "loop.pressure", "loop.pressure=", "PATH=VALUE", None),
    ("loop.pressure=1 kW", "loop.pressure", "loop.pressure", "1 kW", "an absolute pressure", None),
    ("loop.presure=1 bar", "loop.presure", "loop.presure", "presure", "one of the keys", "pressure"),
    ("lop.pressure=1 bar", "lop.pressure", "lop", "lop", "one of the keys", "loop"),
    ("reactor.bd1.volume=3 m3", "reactor.bd1.volume", "reactor.bd1.volume", "bd1", "one of bed1,", "bed1"),
    ("reactor.bed1=3 m3", "reactor.bed1", "reactor.bed1", "reactor.bed1", "a single value", None),
    ("loop.pressure.mid=3 bar", "loop.pressure.mid", "loop.pressure.mid", "mid", "in the case", None),
    ("loop..pressure=3 bar", "loop..pressure", "loop..pressure", "loop..pressure", "single dots", None),
    ("loop.recycle_ratio.low=3", "loop.recycle_ratio.low", "loop.recycle_ratio.low", "", "both ends", None),
    ("limits.loop.inert=<= 5 %", "limits.loop.inert", "limits.loop.inert", "loop.inert", "", "loop.inerts"),
    ("limits.loop.inerts=5 %", "limits.loop.inerts", "limits.loop.inerts", "5 %", "`<= 5 %`", None),
    ("loop.pressure.low=300 bar", "loop.pressure.low", "loop.pressure", "300 bar", "turn the two", None),
    (
        "feed.streams.syngas.composition.Xe=1 %",
        *["feed.streams.syngas.composition.Xe"] * 2,
        "Xe",
        "a species",
        None,
    ),
]


@pytest.mark.parametrize(("option", "source", "path", "read", "wanted", "nearest"), MISTAKES)
def test_mistakes_are_those_of_the_option(option, source, path, read, wanted, nearest):
    with pytest.raises(InputError) as caught:
        with_sets(option)
    problem = caught.value.errors[0]
    assert (problem.file, problem.line, problem.column) == (f"--set {source}".rstrip(), None, None)
    assert problem.path == path
    assert read in problem.read
    assert wanted in problem.wanted
    assert problem.nearest == nearest


def test_all_options_that_lead_nowhere_are_told():
    with pytest.raises(InputError) as caught:
        with_sets("nothing", "reactor.bed9.volume=3 m3")
    assert len(caught.value.errors) == 2


@given(settings_of("pressure"))
def test_any_setting_can_be_set(setting):
    assert with_sets(f"loop.pressure={setting.text}").loop.pressure == setting
