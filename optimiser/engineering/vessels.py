"""Walls and masses of pressure vessels and the size of a gas-liquid separator.

Sources:
    [1] ASME Boiler and Pressure Vessel Code, Section VIII Division 1, UG-27(c)(1).
    [2] The same, mandatory appendix 1-2 (thick cylinders); form from memory.
    [3] Souders, M., Brown, G. G., Design of fractionating columns, Industrial and Engineering Chemistry 26
        (1934) 98-103.
"""

from __future__ import annotations

from numbers import Real
from typing import Any

from optimiser.chemistry.maths import sqrt

PI = 3.141592653589793
THIN_LIMIT = 0.385
"""Largest P/(S E) of the thin-wall form in [1]."""


def thin_wall(pressure: Any, radius: Any, allowable_stress: Any, joint_efficiency: Any = 1.0) -> Any:
    """Wall of a thin cylinder under internal pressure, m [1]: t = P R/(S E - 0.6 P).

    Range: P <= 0.385 S E, which is t <= R/2. Worked value: 10 MPa, 1 m, 138 MPa, 1: 75.75758 mm.

    Args:
        pressure: P, design gauge pressure, Pa.
        radius: R, inside, corroded, m.
        allowable_stress: S at design temperature, Pa.
        joint_efficiency: E, -.
    """
    return pressure * radius / (allowable_stress * joint_efficiency - 0.6 * pressure)


def thick_wall(pressure: Any, radius: Any, allowable_stress: Any, joint_efficiency: Any = 1.0) -> Any:
    """Wall of a thick cylinder under internal pressure, m [2]: t = R (sqrt((S E + P)/(S E - P)) - 1).

    Range: P < S E. Worked value: 30 MPa, 0.5 m, 100 MPa, 1: 181.385 mm. Arguments as for `thin_wall`.
    """
    strength = allowable_stress * joint_efficiency
    return radius * (sqrt((strength + pressure) / (strength - pressure)) - 1.0)


def wall_thickness(
    pressure: Any, radius: Any, allowable_stress: Any, joint_efficiency: Any = 1.0, corrosion: Any = 0.0
) -> Any:
    """Wall of a cylinder with corrosion allowance c, m: t(P, R + c) + c, R + c being the corroded radius.

    The thin form serves in its range, where it is up to 1.13 % above the thick form; the thick form serves
    above it. With a symbol as pressure the thin form is used throughout, because an expression cannot choose.
    In range both calls agree exactly; the forms meet within 0.003 % of the radius at the limit; above it the
    thin form reads low, by 2.4 % at P = S E/2, and `wall_out_of_range` says so.

    Worked value: 10 MPa, 1 m, 138 MPa, 1, 3 mm: 78.98485 mm.

    Args:
        pressure: design gauge pressure, Pa.
        radius: inside, new, m.
        allowable_stress: Pa.
        joint_efficiency: -.
        corrosion: allowance, m.
    """
    thick = isinstance(pressure, Real) and pressure > THIN_LIMIT * allowable_stress * joint_efficiency
    form = thick_wall if thick else thin_wall
    return form(pressure, radius + corrosion, allowable_stress, joint_efficiency) + corrosion


def wall_out_of_range(pressure: float, allowable_stress: float, joint_efficiency: float = 1.0) -> str | None:
    """What is wrong with a wall at this pressure, or None; plain numbers, Pa."""
    limit = THIN_LIMIT * allowable_stress * joint_efficiency
    if pressure <= limit:
        return None
    stated = f"design pressure {pressure / 1e5:.4g} bar"
    return f"{stated} is above {limit / 1e5:.4g} bar, where the thin-wall formula ends"


def shell_mass(diameter: Any, length: Any, thickness: Any, density: Any) -> Any:
    """Mass of a cylinder closed by two hemispheres, all of one wall thickness, kg.

    m = density pi t (L (D + t) + D^2 + 2 D t + 4 t^2/3): exact geometry. A hemisphere needs half the wall;
    the rest stands for nozzles, flanges and skirt, which are not counted otherwise.

    Worked value: 2 m inside, 10 m straight, 0.1 m wall, 7850 kg/m3: 62673.1 kg.

    Args:
        diameter: D, inside, m.
        length: L, of the cylinder, m.
        thickness: t, m.
        density: kg/m3.
    """
    cylinder = length * (diameter + thickness)
    heads = diameter * diameter + 2.0 * diameter * thickness + 4.0 / 3.0 * thickness * thickness
    return density * PI * thickness * (cylinder + heads)


def gas_velocity_limit(vapour_density: Any, liquid_density: Any, constant: Any) -> Any:
    """Gas velocity above which drops are carried along, m/s [3]: K sqrt((rho_l - rho_v)/rho_v).

    Worked value: 50 and 600 kg/m3, K = 0.05 m/s: 0.165831 m/s.

    Args:
        vapour_density: kg/m3.
        liquid_density: kg/m3.
        constant: K, m/s; 0.03 to 0.11, the lower end at high pressure.
    """
    return constant * sqrt((liquid_density - vapour_density) / vapour_density)


def separator_diameter(volume_flow: Any, vapour_density: Any, liquid_density: Any, constant: Any) -> Any:
    """Inside diameter of an upright separator whose gas just does not carry drops, m [3]: sqrt(4 V/(pi v)).

    Worked value: 0.5 m3/s, 50 and 600 kg/m3, K = 0.05 m/s: 1.95933 m.

    Args:
        volume_flow: V, of the gas, m3/s.
        vapour_density: kg/m3.
        liquid_density: kg/m3.
        constant: K of `gas_velocity_limit`, m/s.
    """
    velocity = gas_velocity_limit(vapour_density, liquid_density, constant)
    return sqrt(4.0 * volume_flow / (PI * velocity))


def separator_volume(diameter: Any, length_over_diameter: Any) -> Any:
    """Volume of the cylinder of a separator, m3: pi/4 D^3 (L/D).

    Worked value: 2 m and 3: 18.8496 m3.

    Args:
        diameter: m.
        length_over_diameter: -.
    """
    return 0.25 * PI * diameter * diameter * diameter * length_over_diameter
