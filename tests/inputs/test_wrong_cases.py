"""One wrong input of each kind: where it is told, what was read, what is wanted, which name is nearest."""

import tomllib
from pathlib import Path

import pytest
from strategies.plain_case import MODEL, PLAIN

from optimiser.inputs import InputError, parse_case

MARK = "§"
KINDS = tomllib.loads(Path(__file__).with_name("wrong_cases.toml").read_text(encoding="utf-8"))


def problems_of(text, *sets):
    """All problems of a case."""
    with pytest.raises(InputError) as caught:
        parse_case(text, sets, MODEL, file="case.yaml")
    return caught.value.errors


def spoilt(kind):
    """The plain case with one piece replaced, and the place that is marked, counted from 1."""
    assert kind["old"] in PLAIN
    text = PLAIN.replace(kind["old"], kind["new"], 1)
    before = text.partition(MARK)[0]
    return text.replace(MARK, ""), (before.count("\n") + 1, len(before.rpartition("\n")[2]) + 1)


@pytest.mark.parametrize("kind", KINDS)
def test_each_kind_is_told_with_its_place(kind):
    told = KINDS[kind]
    text, place = spoilt(told)
    (problem,) = [p for p in problems_of(text) if p.path == told["path"]]
    assert (problem.file, problem.read, problem.nearest) == ("case.yaml", told["read"], told.get("nearest"))
    assert told["wanted"] in problem.wanted
    if MARK in told["new"]:
        assert (problem.line, problem.column) == place


@pytest.mark.parametrize("kind", [name for name, told in KINDS.items() if not told.get("more")])
def test_one_mistake_is_one_problem(kind):
    text, _ = spoilt(KINDS[kind])
    assert [p.path for p in problems_of(text)] == [KINDS[kind]["path"]]


@pytest.mark.parametrize(
    ("key", "line", "path", "wanted"),
    [
        ("  pressure: 80 .. 250 bar\n", 18, "loop.pressure", "such as `150 bar`"),
        ("title: Plain\n", 1, "title", "`title:` (for people)"),
        ("    volume: 20 m3\n", 27, "reactor.bed2.volume", "such as `20 m3`"),
        ("  electricity: 0.07 EUR/kWh\n", 45, "prices.electricity", "`electricity:` (of all drives)"),
        ("    sink: steam\n", 31, "reactor.boiler.sink", "`sink:`"),
        ("  cooling_water: 0.03 EUR/m3\n", 45, "prices.cooling_water", "`cooling_water:`"),
    ],
)
def test_a_missing_key_is_told_where_it_should_stand(key, line, path, wanted):
    assert key in PLAIN
    (problem,) = problems_of(PLAIN.replace(key, ""))
    assert (problem.path, problem.read) == (path, "")
    assert wanted in problem.wanted
    assert problem.line == line


def test_all_mistakes_of_a_file_are_told_in_one_go_and_in_order():
    text = PLAIN
    for old, new in [
        ("25 bar", "25 kW"),
        ("Ar: 0.01", "Argon: 0.01"),
        ("80 .. 250 bar", "250 .. 80 bar"),
        ("bed: bed2", "bed: bed1"),
        ("reactor.bed1.hottest", "reactor.bed9.hottest"),
        ("0.07 EUR/kWh", "-0.07 EUR/kWh"),
        ("  exchange_rate: 0.92 EUR/USD\n", ""),
    ]:
        text = text.replace(old, new, 1)
    problems = problems_of(text)
    assert [p.path for p in problems] == [
        "feed.streams.syngas.composition.Argon",
        "feed.streams.syngas.pressure",
        "loop.pressure",
        "reactor.bed1.bed",
        "limits.reactor.bed9.hottest",
        "prices.electricity",
        "economics.exchange_rate",
    ]
    assert [p.line for p in problems] == sorted(p.line for p in problems)


@pytest.mark.parametrize("text", ["", "- 1\n", "words\n", "# only a remark\n"])
def test_a_file_that_is_no_case(text):
    (problem,) = problems_of(text)
    assert "keys and values" in problem.wanted
