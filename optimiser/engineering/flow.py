"""Pressure drop of gas through a packed bed.

Sources:
    [1] Ergun, S., Fluid flow through packed columns, Chemical Engineering Progress 48 (1952) 89-94.
"""

from __future__ import annotations

from typing import Any

LAMINAR, TURBULENT = 150.0, 1.75


def ergun_gradient(mass_flux: Any, density: Any, viscosity: Any, pellet_diameter: Any, void: Any) -> Any:
    """Fall of pressure per length of bed, Pa/m [1].

    -dP/dL = 150 mu v (1-e)^2/(e^3 d^2) + 1.75 rho v^2 (1-e)/(e^3 d), with v = G/rho. In G the density divides
    the whole, so that P dP/dL hardly depends on pressure.

    Range: 1 < G d/(mu (1-e)) < 2500 in [1] (see `packed_bed_reynolds`); above it the formula reads high.
    Spheres of one size; for other pellets the diameter of the sphere of equal surface per volume.
    Worked value: G = 1 kg/m2/s, 1000 kg/m3, 1e-3 Pa s, 8e-4 m, void 0.4: 1338.8671875 Pa/m.

    Args:
        mass_flux: G, mass flow over the empty cross-section, kg/m2/s.
        density: rho, kg/m3.
        viscosity: mu, Pa s.
        pellet_diameter: d, m.
        void: e, share of the bed between pellets, -.
    """
    solid = 1.0 - void
    open_cube = void * void * void
    laminar = (
        LAMINAR * viscosity * mass_flux * solid * solid / (open_cube * pellet_diameter * pellet_diameter)
    )
    turbulent = TURBULENT * mass_flux * mass_flux * solid / (open_cube * pellet_diameter)
    return (laminar + turbulent) / density


def packed_bed_reynolds(mass_flux: Any, viscosity: Any, pellet_diameter: Any, void: Any) -> Any:
    """Modified Reynolds number of a packed bed, - [1]: G d/(mu (1-e)).

    Worked value: G = 1 kg/m2/s, 1e-3 Pa s, 8e-4 m, void 0.4: 1.3333. Arguments as for `ergun_gradient`.
    """
    return mass_flux * pellet_diameter / (viscosity * (1.0 - void))
