"""Heat exchange: mean temperature difference, coefficient at pressure, steam saturation, cooling water.

Sources:
    [1] Revised release on the IAPWS industrial formulation 1997 for the thermodynamic properties of water and
        steam, IAPWS R7-97(2012), equation 31 and table 34 (saturation temperature, region 4). Coefficients
        from memory, checked against an independent library in the tests.
    [2] Dittus-Boelter form Nu ~ Re^0.8, as in every text on heat transfer; the step to pressure is derived
        below.
"""

from __future__ import annotations

from typing import Any

from optimiser.chemistry.maths import log, power, sqrt

REFERENCE_PRESSURE = 150e5
PRESSURE_EXPONENT = 0.4
WATER_VOLUME_HEAT = 4.18e6
"""Heat capacity of cooling water, J/m3/K: 4180 J/kg/K by 1000 kg/m3, within 1 % at 5 to 50 degC."""

_SERIES = tuple(1.0 / factor for factor in (210.0, 156.0, 110.0, 72.0, 42.0, 20.0, 6.0))
_REGION_4 = (
    0.11670521452767e4,
    -0.72421316703206e6,
    -0.17073846940092e2,
    0.12020824702470e5,
    -0.32325550322333e7,
    0.14915108613530e2,
    -0.48232657361591e4,
    0.40511340542057e6,
    -0.23855557567849,
    0.65017534844798e3,
)


def log_mean(d1: Any, d2: Any) -> Any:
    """Logarithmic mean of two positive values, in their unit: (d1 - d2)/ln(d1/d2), and d1 where they are
    equal.

    The quotient is 0/0 at d1 = d2, so it is never formed. L(d1, d2) = (sqrt(d1) + sqrt(d2))/2 L(sqrt(d1),
    sqrt(d2)) holds exactly; after two such steps the ratio left is the fourth root, and the series L = sqrt(a
    b) sinh(x)/x = sqrt(a b) (1 + q/6 (1 + q/20 (1 + q/42 ...))) with q = x^2 = (ln(a/b)/2)^2 ends early.

    Range: d1, d2 > 0. Relative error below 1e-14 up to a ratio of 1e3 and below 1e-8 up to 1e6.
    Worked values: log_mean(40, 20) = 28.8539 K, log_mean(10, 10) = 10 K.

    Args:
        d1: difference at one end, K.
        d2: difference at the other end, K.
    """
    half1, half2 = sqrt(d1), sqrt(d2)
    a, b = sqrt(half1), sqrt(half2)
    x = 0.5 * log(a / b)
    q = x * x
    series: Any = 1.0
    for factor in _SERIES:
        series = 1.0 + factor * q * series
    return 0.25 * (half1 + half2) * (a + b) * sqrt(a * b) * series


def coefficient_at(reference: Any, pressure: Any) -> Any:
    """Overall heat transfer coefficient of a gas exchanger at another pressure, W/m2/K: U (P/150 bar)^0.4.

    A turbulent film coefficient grows as G^0.8 [2]. At the same pressure drop over the same passage G^2/rho
    is held, so G grows as sqrt(rho), and rho as P: 0.8/2 = 0.4. Density is taken as proportional to pressure
    and both films as gas, so where the other side is water or boiling this reads a little high above 150 bar
    and low below it.

    Range: 20 to 400 bar. Worked value: 400 W/m2/K and 300 bar: 527.80 W/m2/K.

    Args:
        reference: U at 150 bar, W/m2/K.
        pressure: of the hot gas, Pa.
    """
    return reference * power(pressure / REFERENCE_PRESSURE, PRESSURE_EXPONENT)


def steam_saturation_temperature(pressure: Any) -> Any:
    """Temperature at which water boils, K [1].

    T = (n10 + D - sqrt((n10 + D)^2 - 4 (n9 + n10 D)))/2 with D = 2 G/(-F - sqrt(F^2 - 4 E G)),
    E = b^2 + n3 b + n6, F = n1 b^2 + n4 b + n7, G = n2 b^2 + n5 b + n8 and b = (P/1 MPa)^(1/4).

    Range: 611.213 Pa to 22.064 MPa. Worked value: 1 MPa: 453.035632 K (table 36 of [1]).

    Args:
        pressure: Pa.
    """
    n1, n2, n3, n4, n5, n6, n7, n8, n9, n10 = _REGION_4
    b = power(pressure / 1e6, 0.25)
    e = b * b + n3 * b + n6
    f = n1 * b * b + n4 * b + n7
    g = n2 * b * b + n5 * b + n8
    d = 2.0 * g / (-f - sqrt(f * f - 4.0 * e * g))
    total = n10 + d
    return 0.5 * (total - sqrt(total * total - 4.0 * (n9 + n10 * d)))


def cooling_water_flow(duty: Any, rise: Any) -> Any:
    """Flow of cooling water that takes up a duty, m3/s: Q/(4.18e6 J/m3/K dT).

    Worked value: 41.8 MW at a rise of 10 K: 1 m3/s.

    Args:
        duty: W.
        rise: return less supply temperature, K.
    """
    return duty / (WATER_VOLUME_HEAT * rise)
