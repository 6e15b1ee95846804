"""Staged ideal-gas compression against published and closed-form values."""

from __future__ import annotations

from math import log
from typing import Any

import fluids
import pytest

from optimiser.chemistry.maths import R
from optimiser.engineering.compression import stage_discharge_temperature, staged_work


def test_one_stage_of_the_package_fluids(figures: dict[str, Any]) -> None:
    case = figures["compressor"]["single"]
    ratio = case["outlet_pressure"] / case["inlet_pressure"]
    work = staged_work(case["inlet_temperature"], ratio, case["k"], case["efficiency"])
    theirs = fluids.isentropic_work_compression(
        T1=case["inlet_temperature"],
        k=case["k"],
        P1=case["inlet_pressure"],
        P2=case["outlet_pressure"],
        eta=case["efficiency"],
    )
    assert work == pytest.approx(theirs, rel=1e-7)
    assert work == pytest.approx(case["work"], rel=1e-7)


def test_stages_from_1_to_100_bar(figures: dict[str, Any]) -> None:
    # Computed from the closed form with one decimal.
    for stages, work in enumerate(figures["compressor"]["stages"], start=1):
        assert staged_work(300.0, 100.0, 1.4, stages=stages) == pytest.approx(work, abs=0.06)


def test_many_stages_approach_constant_temperature(figures: dict[str, Any]) -> None:
    limit = R * 300.0 * log(100.0)
    assert limit == pytest.approx(figures["compressor"]["isothermal"], abs=0.06)
    assert staged_work(300.0, 100.0, 1.4, stages=10_000) == pytest.approx(limit, rel=1e-4)


def test_the_ideal_gas_reads_low_by_as_much_as_stated(figures: dict[str, Any]) -> None:
    # CoolProp 8 for hydrogen and nitrogen: the docstring tells users 4 % and 10 %.
    makeup, circulator = (
        figures["compressor"]["real_gas_makeup"],
        figures["compressor"]["real_gas_circulator"],
    )
    for stages, real in zip(makeup["stages"], makeup["real_work"], strict=True):
        ideal = staged_work(makeup["inlet_temperature"], 8.0, 1.4, makeup["efficiency"], stages)
        assert 1.0 - ideal / real == pytest.approx(0.04, abs=0.015)
    ratio = circulator["outlet_pressure"] / circulator["inlet_pressure"]
    ideal = staged_work(circulator["inlet_temperature"], ratio, 1.4, circulator["efficiency"])
    assert 1.0 - ideal / circulator["real_work"] == pytest.approx(0.10, abs=0.015)


def test_discharge_temperature_worked_value() -> None:
    outlet = stage_discharge_temperature(300.0, 10.0, 1.4, 0.78)
    assert outlet == pytest.approx(657.96, abs=0.01)
    # The work heats the gas: cp (T2 - T1), with cp = R k/(k-1).
    assert R * 3.5 * (outlet - 300.0) == pytest.approx(staged_work(300.0, 10.0, 1.4, 0.78), rel=1e-12)
