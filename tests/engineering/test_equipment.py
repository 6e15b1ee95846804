"""The equipment file: what ships, and what is said about a file that is wrong."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from optimiser.engineering.correlations import LogQuadratic, PressureFactor
from optimiser.engineering.equipment import (
    USES,
    EquipmentError,
    UnknownCostYearError,
    cost_index,
    load_equipment,
)

GOOD = """\
equipment: 1
uses: {exchanger: a, water_cooled: a, chiller: a, compressor: a, drive: a, vessel: a}
correlations:
  a:
    title: Any
    size: area
    unit: m2
    range: [1, 10]
    curve: power
    coefficients: [1, 2, 0.5]
    bare_module: [1, 2]
    year: 2001
    index: 397
    currency: USD
    source: nowhere
    confidence: none
cost_index: {source: nowhere, years: {2001: {value: 394.3, confidence: none}}}
"""


def _problems(tmp_path: Path, text: str) -> list[str]:
    file = tmp_path / "equipment.yaml"
    file.write_text(text, encoding="utf-8")
    with pytest.raises(EquipmentError) as caught:
        load_equipment(file)
    assert all(f"{file}: {problem}" in str(caught.value) for problem in caught.value.problems)
    return caught.value.problems


def test_shipped_correlations_are_the_published_ones(figures: dict[str, Any]) -> None:
    correlations = load_equipment().correlations
    published = {name: row for name, row in figures["turton"].items() if isinstance(row, dict) and "k" in row}
    assert set(correlations) == {*published, "vessel_shell_mass"}
    for name, row in published.items():
        correlation = correlations[name]
        assert correlation.curve == LogQuadratic(*row["k"]), name
        assert [correlation.low, correlation.high] == row["range"], name
        assert [correlation.fixed, correlation.scaled] == row["b"], name
        assert correlation.index == 397.0
        expected = PressureFactor(*row["c"], 5.0, 140.0) if "c" in row else None
        assert correlation.pressure == expected, name


def test_every_use_has_a_correlation_with_source_and_confidence() -> None:
    equipment = load_equipment()
    for use in USES:
        correlation = equipment.for_use(use)
        assert correlation.source
        assert correlation.confidence
    assert equipment.for_use("exchanger").name == "exchanger_u_tube"


def test_cost_indices(figures: dict[str, Any]) -> None:
    # Chemical Engineering Plant Cost Index.
    table = figures["cost_index"]["seen"] | figures["cost_index"]["memory"]
    assert {str(year): index for year, index in load_equipment().indices.items()} == table
    assert cost_index(2019) == 607.5


def test_a_year_without_an_index_is_refused_by_name() -> None:
    with pytest.raises(UnknownCostYearError) as caught:
        cost_index(2012)
    assert str(caught.value) == (
        "no plant cost index for 2012; known are 2001, 2010, 2015, 2016, 2017, 2018, 2019, 2020, 2021, 2022, "
        "2023; state the index of any other year"
    )


def test_a_file_of_one_s_own(tmp_path: Path) -> None:
    file = tmp_path / "own.yaml"
    file.write_text(GOOD, encoding="utf-8")
    assert load_equipment(file).for_use("vessel").curve.purchased(4.0) == pytest.approx(5.0)


@pytest.mark.parametrize(
    ("old", "new", "problem"),
    [
        ("title: Any", "titel: Any", "correlations.a.titel: unknown key, did you mean title?"),
        ("title: Any", "title: 3", "correlations.a.title: text is wanted"),
        ("unit: m2", "unit: ft2", "correlations.a.unit: ft2 is none of m2, m3, kg, kW"),
        ("[1, 10]", "[10, 1]", "correlations.a.range: a range above 0, low end first, is wanted"),
        ("[1, 10]", "ten", "correlations.a.range: a list of 2 numbers is wanted"),
        ("[1, 2, 0.5]", "[1, 2]", "correlations.a.coefficients: a list of 3 numbers is wanted"),
        ("curve: power", "curve: cubic", "correlations.a.curve: cubic is none of log-quadratic, power"),
        ("index: 397", "index: -1", "correlations.a.index: a number above 0 is wanted"),
        ("currency: USD", "currency: EUR", "correlations.a.currency: EUR is none of USD"),
        ("drive: a", "drive: b", "uses.drive: b is none of a"),
        ("equipment: 1", "equipment: 2", "equipment: 1 is wanted, the version of this layout"),
        ("value: 394.3", "value: yes", "cost_index.years.2001.value: a number above 0 is wanted"),
        ("{2001: ", "{early: ", "cost_index.years.early: a year is wanted"),
        ("source: nowhere\n", "source: ''\n", "correlations.a.source: text is wanted"),
        (
            "year: 2001\n",
            "year: 2001\n    pressure_factor: 3\n",
            "correlations.a.pressure_factor: a mapping is wanted",
        ),
    ],
)
def test_what_is_wrong_is_named(tmp_path: Path, old: str, new: str, problem: str) -> None:
    assert old in GOOD
    assert problem in _problems(tmp_path, GOOD.replace(old, new, 1))


def test_all_faults_are_named_at_once(tmp_path: Path) -> None:
    text = (
        GOOD.replace("title: Any", "title: 3")
        .replace("unit: m2", "unit: ft2")
        .replace("drive: a", "drive: b")
    )
    assert len(_problems(tmp_path, text)) == 3


def test_a_curve_that_falls_is_refused(tmp_path: Path) -> None:
    text = GOOD.replace("curve: power", "curve: log-quadratic").replace("[1, 2, 0.5]", "[3, -0.5, -0.1]")
    assert _problems(tmp_path, text) == [
        "correlations.a.coefficients: the cost rises nowhere within the range"
    ]


@pytest.mark.parametrize("text", [GOOD + "equipment: 1\n", "a: [1", "just text"])
def test_broken_files_are_refused(tmp_path: Path, text: str) -> None:
    assert _problems(tmp_path, text)


def test_the_room_loads_without_algebra() -> None:
    code = (
        "import sys, optimiser.engineering.costs, optimiser.engineering.heat, optimiser.engineering.vessels;"
        "print(sorted({'pyomo', 'casadi', 'scipy', 'pint', 'ruamel'} & set(sys.modules)))"
    )
    root = Path(__file__).parents[2]
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True, cwd=root)
    assert done.stdout.strip() == "[]"
