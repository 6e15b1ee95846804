"""Result paths of a case, the table of keys, and where shipped files are found."""

from dataclasses import asdict

import pytest
from strategies.plain_case import MODEL, PLAIN

from optimiser.inputs import InputError, describe_schema, lookup, money_checks, parse_case
from optimiser.inputs.money import ASSET_SIZES, COST_YEAR
from optimiser.inputs.paths import result_paths
from optimiser.quantities import CURRENCIES, DIMENSIONS, parse_setting


@pytest.fixture(scope="module")
def case():
    return parse_case(PLAIN, model=MODEL)


def test_every_decision_is_a_result_but_the_rate_of_the_feed(case):
    assert set(case.settings()) - set(result_paths(case)) == {"feed.product_rate"}


def test_dimensions_of_decisions_are_those_of_their_settings(case):
    paths = result_paths(case)
    settings = {path: s for path, s in case.settings().items() if path in paths}
    assert {path: paths[path] for path in settings} == {path: s.dimension for path, s in settings.items()}


def test_paths_follow_what_the_case_has(case):
    paths = result_paths(case)
    assert {paths[p] for p in paths} <= set(DIMENSIONS)
    assert "costs.steam_credit" in paths
    assert "costs.water_heat_credit" not in paths
    assert "condensation.chiller.power" in paths
    assert "condensation.cold_exchanger.duty" not in paths
    assert "compression.high.discharge_pressure" not in paths
    assert "compression.high.discharge_temperature" in paths
    assert {f"capital.{asset}" for asset in ASSET_SIZES} <= set(paths)


def test_inerts_are_a_result_only_where_there_are_some(case):
    reacting = {"H2", "N2", "NH3"}
    assert "loop.inerts" in result_paths(case, reacting)
    text = PLAIN.replace("{H2: 0.74, N2: 0.25, Ar: 0.01}", "{H2: 0.75, N2: 0.25}")
    pure = parse_case(text, model=MODEL)
    assert "loop.inerts" not in result_paths(pure, reacting)
    with pytest.raises(InputError, match="inerts"):
        parse_case(text, ["limits.loop.inerts=<= 5 %"], MODEL)


def test_the_table_has_every_key_once_with_its_meaning():
    rows = describe_schema()
    paths = [row.path for row in rows]
    assert len(paths) == len(set(paths))
    assert all(row.meaning for row in rows)
    assert not [row.path for row in rows if row.default and not row.reason], "a default without a reason"
    assert not [row.path for row in rows if row.required and row.default]
    assert {"path", "sha256"}.isdisjoint(paths)


@pytest.mark.parametrize("currency", CURRENCIES)
def test_defaults_in_the_table_can_be_read(currency):
    for row in describe_schema():
        if row.dimension and row.default:
            parse_setting(row.default.replace("{money}", currency), row.dimension, currency)


@pytest.mark.parametrize(
    ("path", "dimension", "default", "required"),
    [
        ("feed.streams.STREAM.price", "mass_price or molar_price or energy_price", "", True),
        ("feed.streams.STREAM.composition.SPECIES", "", "", True),
        ("compression.STAGE.discharge_pressure", "pressure", "", False),
        ("compression.intercooler_temperature", "temperature", "40 degC", False),
        ("reactor.BED.volume", "volume", "", True),
        ("reactor.BED.elements", "", "6", False),
        ("reactor.COOLER.minimum_approach", "temperature_difference", "15 K", False),
        ("condensation.chiller.second_law_efficiency", "fraction", "50 %", False),
        ("limits.RESULT", "", "", False),
        ("economics.quoted.ITEM.exponent", "ratio", "0.65", False),
        ("objective", "", "yield per unit cost", False),
    ],
)
def test_rows_of_the_table(path, dimension, default, required):
    (row,) = [asdict(row) for row in describe_schema() if row.path == path]
    assert (row["dimension"], row["default"], row["required"]) == (dimension, default, required)


def test_the_year_of_the_defaults_has_an_index():
    assert COST_YEAR in money_checks.indexed_years()


def test_shipped_files_are_found_by_name():
    assert lookup.find_case("ammonia-loop").name == "ammonia-loop.yaml"
    assert lookup.find_case("ammonia-loop.yaml").name == "ammonia-loop.yaml"
    assert lookup.find_model("ammonia").name == "ammonia.yaml"
    assert "equipment" not in lookup.shipped_names("models")


@pytest.mark.parametrize("name", ["amonia-loop", "amonia-loop.yaml"])
def test_an_unknown_case_is_told_with_the_nearest(name):
    with pytest.raises(InputError) as caught:
        lookup.find_case(name)
    (problem,) = caught.value.errors
    assert (problem.read, problem.nearest) == (name, "ammonia-loop")
    assert "a shipped case: ammonia-loop" in problem.wanted


@pytest.mark.parametrize("name", ["no/where.yaml", "x" * 5000, "a\0b", ""])
def test_names_that_are_no_file(name):
    with pytest.raises(InputError):
        lookup.find_case(name)


def test_files_in_a_wheel_come_first(tmp_path, monkeypatch):
    package = tmp_path / "optimiser"
    (package / "_shipped" / "cases").mkdir(parents=True)
    (package / "_shipped" / "cases" / "mine.yaml").write_text(PLAIN)
    (tmp_path / "cases").mkdir()
    monkeypatch.setattr(lookup, "__file__", str(package / "inputs" / "lookup.py"))
    assert lookup.find_case("mine") == package / "_shipped" / "cases" / "mine.yaml"
    assert lookup.shipped("models") == tmp_path / "models"


def test_a_case_on_disk_and_its_model_beside_it(tmp_path, monkeypatch):
    (tmp_path / "my").mkdir()
    path = tmp_path / "my" / "case.yaml"
    path.write_text(PLAIN)
    monkeypatch.chdir(tmp_path)
    assert lookup.find_case("my/case.yaml").samefile(path)
    (tmp_path / "my" / "own.yaml").write_text("")
    assert lookup.find_model("own.yaml", relative_to=path).samefile(tmp_path / "my" / "own.yaml")


def test_a_model_that_is_not_there_is_told_at_its_line():
    with pytest.raises(InputError) as caught:
        parse_case(PLAIN.replace("model: ammonia", "model: amonia"))
    (problem,) = caught.value.errors
    assert (problem.line, problem.column, problem.path) == (3, 8, "model")
    assert (problem.read, problem.nearest) == ("amonia", "ammonia")
