"""A result written by hand for tests of what shows and keeps results; its numbers are invented."""

from __future__ import annotations

import copy
from typing import Any


def amount(value: float, unit: str) -> dict[str, Any]:
    return {"value": value, "unit": unit}


def decision(value: float, unit: str, low: float | None, high: float | None, at: str) -> dict[str, Any]:
    return {"value": value, "unit": unit, "low": low, "high": high, "at": at}


def limit(path: str, value: float, unit: str, side: str, worth: float, per_year: float) -> dict[str, Any]:
    step = {"degC": "K"}.get(unit, unit)
    return {
        "path": path,
        "name": path.removeprefix("limits."),
        "value": value,
        "limit": value,
        "unit": unit,
        "side": side,
        "worth": worth,
        "worth_unit": f"kg/EUR per {step}",
        "worth_per_year": per_year,
        "worth_per_year_unit": f"EUR/year per {step}",
    }


def bed(inlet: float, outlet: float, product_in: float, product_out: float, volume: float) -> dict[str, Any]:
    return {
        "inlet_temperature": amount(inlet, "degC"),
        "outlet_temperature": amount(outlet, "degC"),
        "hottest": amount(outlet, "degC"),
        "pressure_drop": amount(0.6132, "bar"),
        "volume": amount(volume, "m3"),
        "length": amount(volume / 4.909, "m"),
        "inlet_product": amount(product_in, "%"),
        "outlet_product": amount(product_out, "%"),
        "approach_fraction": amount(86.31, "%"),
        "approach_temperature": amount(24.07, "K"),
    }


def stream(
    temperature: float, pressure: float, flow: float, vapour: float, parts: list[float]
) -> dict[str, Any]:
    return {
        "temperature": amount(temperature, "degC"),
        "pressure": amount(pressure, "bar"),
        "flow": amount(flow, "kmol/h"),
        "vapour_fraction": vapour,
        "composition": dict(zip(("H2", "N2", "NH3", "Ar", "CH4"), parts, strict=True)),
    }


def cost(value: float, share: float) -> dict[str, Any]:
    return {"value": value, "unit": "EUR/year", "share": share}


_DECISIONS = {
    "loop.pressure": decision(152.31, "bar", 80.0, 250.0, "inside"),
    "loop.purge_fraction": decision(2.184, "%", 0.5, 10.0, "inside"),
    "compression.low.discharge_pressure": decision(61.4, "bar", 30.0, 120.0, "inside"),
    "reactor.bed1.inlet_temperature": decision(371.6, "degC", 340.0, 430.0, "inside"),
    "reactor.bed2.inlet_temperature": decision(392.2, "degC", 340.0, 430.0, "inside"),
    "reactor.bed1.volume": decision(25.0, "m3", 5.0, 25.0, "high"),
    "condensation.water_cooler.outlet_temperature": decision(30.0, "degC", 30.0, 45.0, "low"),
    "condensation.cold_exchanger.recycle_temperature": decision(21.84, "degC", 0.0, 30.0, "inside"),
    "condensation.chiller.outlet_temperature": decision(-8.127, "degC", -30.0, 15.0, "inside"),
    "feed.product_rate": decision(1000.0, "t/d", None, None, "held"),
    "reactor.bed1.diameter": decision(2.5, "m", None, None, "held"),
    "reactor.bed2.diameter": decision(2.5, "m", None, None, "held"),
    "reactor.bed2.volume": decision(40.0, "m3", None, None, "held"),
}

_BINDING = [
    limit("reactor.bed1.volume.high", 25.0, "m3", "high", 0.000142, 17310.4),
    limit("limits.reactor.bed1.hottest", 520.0, "degC", "high", 0.00231, 281602.9),
    limit("condensation.water_cooler.outlet_temperature.low", 30.0, "degC", "low", 0.00097, 118250.0),
]

_STREAMS = {
    "make_up": stream(40.0, 152.3, 5503.2, 1.0, [0.7425, 0.2445, 0.0, 0.003, 0.01]),
    "converter_feed": stream(36.2, 152.3, 27514.0, 1.0, [0.6371, 0.2101, 0.0402, 0.0302, 0.0824]),
    "converter_outlet": stream(451.9, 148.1, 24962.0, 1.0, [0.5491, 0.1811, 0.1461, 0.0331, 0.0906]),
    "product": stream(-8.1, 144.9, 2481.6, 0.0, [0.0009, 0.0003, 0.9971, 0.00002, 0.00168]),
    "purge": stream(-8.1, 144.9, 490.3, 1.0, [0.6117, 0.2021, 0.0497, 0.0363, 0.1002]),
}

_COSTS = {
    "currency": "EUR",
    "items": {
        "feed": cost(98123456.0, 0.6231),
        "electricity": cost(31234567.0, 0.1984),
        "capital_recovery": cost(18345678.0, 0.1165),
        "maintenance": cost(5503703.0, 0.0349),
        "cooling_water": cost(2345678.0, 0.0149),
        "catalyst": cost(1912345.0, 0.0121),
        "fixed": cost(0.0, 0.0),
        "fuel_credit": cost(-4123456.0, -0.0262),
    },
    "total": amount(153341971.0, "EUR/year"),
    "capital": {
        "compressors": amount(83210000.0, "EUR"),
        "exchangers": amount(31230000.0, "EUR"),
        "converter": amount(28450000.0, "EUR"),
        "refrigeration": amount(21070000.0, "EUR"),
        "circulator": amount(11230000.0, "EUR"),
        "separator": amount(4930000.0, "EUR"),
        "total": amount(180120000.0, "EUR"),
    },
}

_LINES = [
    {
        "what": "product rate",
        "model": 1000.0,
        "audit": 1000.12,
        "difference": 0.012,
        "allowed": 0.1,
        "unit": "%",
        "passed": True,
    },
    {
        "what": "hottest point of bed1",
        "model": 520.0,
        "audit": 520.04,
        "difference": 0.04,
        "allowed": 0.2,
        "unit": "K",
        "passed": True,
    },
]

RESULT: dict[str, Any] = {
    "status": "optimal",
    "stopped": "the solver met its tolerance",
    "grade": "audited optimum",
    "objective": amount(2.17383, "kg/EUR") | {"name": "yield per unit cost", "direction": "maximise"},
    "decisions": _DECISIONS,
    "binding": _BINDING,
    "streams": _STREAMS,
    "beds": {"bed1": bed(371.6, 520.0, 4.02, 11.47, 25.0), "bed2": bed(392.2, 451.9, 11.47, 14.61, 40.0)},
    "costs": _COSTS,
    "recycle_ratio": amount(4.0213, "-"),
    "product": {
        "rate": amount(1000.0, "t/d"),
        "purity": amount(99.71, "%"),
        "cost": amount(460.02, "EUR/t"),
        "yield": amount(0.8812, "-"),
        "marginal_cost": amount(412.7, "EUR/t"),
    },
    "quantities": {"loop.pressure_drop": amount(7.4, "bar"), "compression.power": amount(21834.0, "kW")},
    "audit": {
        "passed": True,
        "worst": {"what": "hottest point of bed1", "difference": 0.04, "allowed": 0.2, "unit": "K"},
        "lines": _LINES,
    },
    "starts": [
        {"objective": 2.17383, "status": "converged", "iterations": 41, "seconds": 0.31},
        {"objective": 2.17383, "status": "converged", "iterations": 63, "seconds": 0.44},
        {"objective": 2.15201, "status": "converged", "iterations": 88, "seconds": 0.6},
        {"objective": None, "status": "iterations", "iterations": 150, "seconds": 1.1},
    ],
    "warnings": ["The floating-head correlation is used below its smallest area (10 m2) for cooler2."],
    "timing": {"build": 0.41, "derivatives": 0.2, "starts": 1.52, "audit": 0.38},
    "provenance": {
        "setpoise": "0.1.0",
        "python": "3.11.7",
        "packages": {"pyomo": "6.10.1", "casadi": "3.8.2"},
        "case": {"file": "sample.yaml", "sha256": "ab" * 32},
        "model": {"file": "ammonia.yaml", "sha256": "cd" * 32},
        "seed": 0,
        "starts": 4,
        "backend": "cyipopt",
    },
}

FAILED: dict[str, Any] = {
    "status": "failed",
    "stopped": "the solver reached its largest number of iterations",
    "grade": "best point so far",
    "warnings": [],
    "starts": [{"objective": None, "status": "iterations", "iterations": 3000}],
    "timing": {"build": 0.4},
    "provenance": RESULT["provenance"],
}


def result(**changes: Any) -> dict[str, Any]:
    """A copy of the sample that a test may change."""
    return copy.deepcopy(RESULT) | changes
