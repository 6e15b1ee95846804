"""A small valid case as text, and a stand-in for its model."""

from types import SimpleNamespace

MODEL = SimpleNamespace(
    species=tuple(SimpleNamespace(name=name) for name in ("H2", "N2", "NH3", "Ar", "CH4")),
    reactions=(SimpleNamespace(name="synthesis", species={"N2": -0.5, "H2": -1.5, "NH3": 1.0}),),
    law_of=lambda name: name,
    catalyst=SimpleNamespace(price=14.0, currency="EUR"),
    products=("NH3",),
    key_reactant="N2",
)

PLAIN = """\
setpoise: 1
title: Plain
model: ammonia
feed:
  product_rate: 1000 t/d
  streams:
    syngas:
      composition: {H2: 0.74, N2: 0.25, Ar: 0.01}
      temperature: 35 degC
      pressure: 25 bar
      price: 2 EUR/kmol
compression:
  stages:
    - stage: low
      discharge_pressure: 40 .. 90 bar
    - stage: high
loop:
  pressure: 80 .. 250 bar
  purge_fraction: 0.3 .. 10 %
reactor:
  - bed: bed1
    inlet_temperature: 340 .. 460 degC
    volume: 3 .. 40 m3
    diameter: 2.2 m
  - cool: between
    sink: feed
  - bed: bed2
    inlet_temperature: 340 .. 460 degC
    volume: 20 m3
    length_over_diameter: 2 .. 4
  - cool: boiler
    sink: steam
    outlet_temperature: 265 .. 400 degC
  - cool: preheat
    sink: feed
condensation:
  water_cooler:
    outlet_temperature: 30 .. 45 degC
  chiller:
    outlet_temperature: -25 .. 10 degC
limits:
  reactor.bed1.hottest: <= 525 degC
  product.purity: '>= 95 %'
prices:
  electricity: 0.07 EUR/kWh
  cooling_water: 0.03 EUR/m3
economics:
  currency: EUR
  exchange_rate: 0.92 EUR/USD
"""
