"""Published effectiveness factors of catalyst grains, as named functions beside the structured rate laws."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

from optimiser.chemistry.maths import sqrt

ATMOSPHERE = 101325.0
# Dyson & Simon, Ind. Eng. Chem. Fundam. 7 (1968) 605, eq. 39 and table I: b0 .. b6 at 150, 225 and 300 atm.
DYSON_SIMON_SETS: tuple[tuple[float, tuple[float, ...]], ...] = (
    (150.0, (-17.539096, 0.07697849, 6.900548, -1.082790e-4, -26.42469, 4.927648e-8, 38.93727)),
    (225.0, (-8.2125534, 0.03774149, 6.190112, -5.354571e-5, -20.86963, 2.379142e-8, 27.88403)),
    (300.0, (-4.6757259, 0.02354872, 4.687353, -3.463308e-5, -11.28031, 1.540881e-8, 10.46627)),
)
# Width over which the corners in pressure are rounded, atm, and the caps of the factor, -.
PRESSURE_CORNER, CAP_CORNER = 1.0, 0.01


def dyson_simon_set(b: Sequence[float], temperature: Any, conversion: Any) -> Any:
    """One of the published polynomials: b0 + b1 T + b2 Z + b3 T^2 + b4 Z^2 + b5 T^3 + b6 Z^3, T in K."""
    in_t = b[0] + temperature * (b[1] + temperature * (b[3] + temperature * b[5]))
    return in_t + conversion * (b[2] + conversion * (b[4] + conversion * b[6]))


def _rounded_max(x: Any, low: float, width: float) -> Any:
    return (x + low + sqrt((x - low) * (x - low) + width * width)) / 2.0


def _rounded_min(x: Any, high: float, width: float) -> Any:
    return (x + high - sqrt((x - high) * (x - high) + width * width)) / 2.0


def dyson_simon(temperature: Any, pressure: Any, conversion: Any) -> Any:
    """Effectiveness factor of 6 to 10 mm grains of iron catalyst, - (Dyson & Simon 1968).

    Linear in pressure between 150, 225 and 300 atm and the nearest set outside, corners rounded over about 1 atm; the
    polynomials leave 0 to 1 (at 225 atm and no conversion they are negative by 800 K), so the factor is capped
    smoothly there, which moves it by at most 0.005.

    Args:
        temperature: K; the sets were fitted from about 600 to 770 K.
        pressure: Pa.
        conversion: Z, of nitrogen, counted from ammonia-free gas: 0.5 NH3/(N2 + 0.5 NH3).
    """
    (low, first), (middle, second), (high, third) = DYSON_SIMON_SETS
    width = PRESSURE_CORNER
    p = _rounded_min(_rounded_max(pressure / ATMOSPHERE, low, width), high, width)
    # Hat functions on the three pressures; |p - middle| is rounded, so they join smoothly and add to one.
    knee = sqrt((p - middle) * (p - middle) + width * width)
    below = (middle - p + knee) / (2.0 * (middle - low))
    above = (p - middle + knee) / (2.0 * (high - middle))
    factor = dyson_simon_set(second, temperature, conversion) * (1.0 - below - above)
    factor = factor + dyson_simon_set(first, temperature, conversion) * below
    factor = factor + dyson_simon_set(third, temperature, conversion) * above
    return _rounded_min(_rounded_max(factor, 0.0, CAP_CORNER), 1.0, CAP_CORNER)


def ammonia_free_conversion(fractions: Mapping[str, Any]) -> Any:
    """Conversion of nitrogen counted from ammonia-free gas, -."""
    half = 0.5 * fractions["NH3"]
    return half / (fractions["N2"] + half)


def dyson_simon_factor(temperature: Any, pressure: Any, fractions: Mapping[str, Any]) -> Any:
    """`dyson_simon` from the mole fractions of a gas."""
    return dyson_simon(temperature, pressure, ammonia_free_conversion(fractions))


# Functions that a model file may name: (function, lowest and highest temperature K, lowest and highest pressure Pa).
EFFECTIVENESS: dict[
    str, tuple[Callable[[Any, Any, Mapping[str, Any]], Any], tuple[float, float], tuple[float, float]]
] = {
    "dyson_simon": (dyson_simon_factor, (600.0, 770.0), (150.0 * ATMOSPHERE, 300.0 * ATMOSPHERE)),
}
