"""Beds integrated along their volume by a stiff method of variable order and step, in plain numbers.

State: extents of reaction (scaled by the feed), temperature and squared pressure. Temperature follows the derivative of
the energy balance, exact by automatic differentiation, so that enthalpy stays that of the inlet.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import casadi as ca
import numpy as np
from numpy.typing import NDArray

from optimiser.chemistry.equilibrium import equilibrium_extents
from optimiser.chemistry.reactions import Chemistry
from optimiser.engineering.flow import ergun_gradient
from optimiser.forward.streams import StateProblem, gas_temperature
from optimiser.inputs.case import BedStep

Floats = NDArray[np.float64]
UNIT = 1e7
"""Pa in one unit of the pressure state."""


@dataclass
class BedProfile:
    """A bed along its volume.

    Attributes:
        positions: parts of the volume, the last is 1.
        extents: mol/s, shape (points, reactions).
        temperature, pressure: K and Pa, shape (points,).
        flows: at the outlet, mol/s.
        length: m.
    """

    positions: Floats
    extents: Floats
    temperature: Floats
    pressure: Floats
    flows: Floats
    length: float


def _vapour_root(phase_mix: Any) -> Any:
    """Largest root of the cubic by Newton's method from above: monotone for a gas."""
    c2, c1, c0 = phase_mix.coefficients()
    root: Any = 1.5 + phase_mix.big_b
    for _ in range(9):
        value = ((root + c2) * root + c1) * root + c0
        root = root - value / ((3.0 * root + 2.0 * c2) * root + c1)
    return root


class BedIntegrator:
    """Integrates the beds of one chemistry; the integrator is built once for each set of output positions."""

    def __init__(self, chemistry: Chemistry) -> None:
        self.chemistry = chemistry
        self._built: dict[tuple[Any, ...], Any] = {}
        self._problem: dict[str, Any] | None = None

    def _equations(self) -> dict[str, Any]:
        """d(state)/d(position) as casadi expressions of state and parameters."""
        chemistry = self.chemistry
        count, reactions = len(chemistry.mixture.names), len(chemistry.reactions)
        extents, temperature, square = ca.SX.sym("x", reactions), ca.SX.sym("T"), ca.SX.sym("p2")
        p = ca.SX.sym("p", count + 5)
        inlet = ca.vertsplit(p[:count])
        scale, volume, length, flux, activity = ca.vertsplit(p[count:])
        # The integrator may try states that no gas has; it must get numbers there, to turn back by itself.
        pressure = ca.sqrt(ca.fmax(square, 1e-6)) * UNIT
        flows = []
        for k, n in enumerate(inlet):
            for r, reaction in enumerate(chemistry.reactions):
                if reaction.nu[k]:
                    n = n + reaction.nu[k] * extents[r] * scale
            flows.append(ca.fmax(n, 1e-12 * scale))
        phase = chemistry.mixture.phase(temperature, pressure, flows, 1.0)
        phase.compressibility = _vapour_root(phase.mix) if hasattr(phase.mix, "coefficients") else 1.0
        rates = ca.vertcat(*chemistry.rates(phase, temperature, pressure, activity)) * volume / scale
        catalyst = chemistry.catalyst
        gradient = ergun_gradient(
            flux, phase.density, catalyst.viscosity(temperature), catalyst.pellet_diameter, catalyst.void
        )
        fall = -2.0 * pressure / UNIT * gradient / UNIT * length
        by_extent, by_pressure = ca.gradient(phase.enthalpy, extents), ca.gradient(phase.enthalpy, square)
        capacity = ca.gradient(phase.enthalpy, temperature)
        warming = -(ca.dot(by_extent, rates) + by_pressure * fall) / capacity
        return {
            "x": ca.vertcat(extents, temperature, square),
            "p": p,
            "ode": ca.vertcat(rates, warming, fall),
        }

    def _integrator(self, positions: tuple[float, ...], tolerance: float) -> Any:
        key = (positions, tolerance)
        if key not in self._built:
            if self._problem is None:
                self._problem = self._equations()
            options = {"abstol": tolerance, "reltol": tolerance, "max_num_steps": 20000, "expand": True}
            self._built[key] = ca.integrator("bed", "cvodes", self._problem, 0.0, list(positions), options)
        return self._built[key]

    def integrate(
        self,
        step: BedStep,
        inlet: Floats,
        temperature: float,
        pressure: float,
        sizes: tuple[float, float],
        positions: Sequence[float] = (1.0,),
        tolerance: float = 1e-9,
    ) -> BedProfile:
        """One bed.

        Args:
            inlet: mol/s.
            temperature, pressure: of the inlet, K and Pa.
            sizes: volume m3 and diameter m.
            positions: where the profile is wanted; the last must be 1.

        Raises:
            StateProblem: the pressure reaches zero, or the integrator gives up.
        """
        volume, diameter = sizes
        area = np.pi / 4.0 * diameter**2
        mass = float(np.dot(inlet, self.chemistry.mixture.molar_mass))
        scale = float(inlet.sum())
        parameters = [*inlet, scale, volume, volume / area, mass / area, step.activity.si]
        start = [*([0.0] * len(self.chemistry.reactions)), temperature, (pressure / UNIT) ** 2]
        solver = self._integrator(tuple(float(p) for p in positions), tolerance)
        try:
            out = np.array(solver(x0=start, p=parameters)["xf"])
        except RuntimeError as problem:
            raise StateProblem(f"bed {step.name} cannot be integrated from {temperature:.1f} K") from problem
        if not np.all(np.isfinite(out)) or np.any(out[-1] <= 0):
            raise StateProblem(f"the pressure in bed {step.name} falls to nothing")
        extents = out[:-2].T * scale
        nu = np.array([r.nu for r in self.chemistry.reactions])
        return BedProfile(
            np.array(positions),
            extents,
            out[-2],
            np.sqrt(out[-1]) * UNIT,
            inlet + extents[-1] @ nu,
            volume / area,
        )


def factor_bed(
    chemistry: Chemistry,
    step: BedStep,
    inlet: Floats,
    temperature: float,
    pressure: float,
    sizes: tuple[float, float],
    stated: tuple[str, float],
) -> BedProfile:
    """A bed that goes a stated part of the way to equilibrium, or ends a stated number of kelvin short of it.

    Args:
        stated: ("fraction", part) or ("temperature", K).
    """
    volume, diameter = sizes
    area = np.pi / 4.0 * diameter**2
    mixture, catalyst = chemistry.mixture, chemistry.catalyst
    flux = float(np.dot(inlet, mixture.molar_mass)) / area
    heat = float(mixture.gas(temperature, pressure, inlet.tolist()).enthalpy)
    nu = np.array([r.nu for r in chemistry.reactions])
    out_t, out_p, extents = temperature + 50.0, pressure, np.zeros(len(nu))
    for _ in range(200):
        if stated[0] == "fraction":
            fresh = stated[1] * equilibrium_extents(chemistry, inlet.tolist(), out_t, out_p)
        else:
            sign = 1.0 if chemistry.reactions[0].enthalpy(out_t) < 0 else -1.0
            fresh = _short_of(chemistry, inlet, out_t, out_p, sign * stated[1])
        extents = fresh if not extents.any() else 0.5 * (extents + fresh)
        flows = inlet + extents @ nu
        found = gas_temperature(mixture, flows, out_p, heat, out_t)
        phase = mixture.gas(found, out_p, flows.tolist())
        gradient = ergun_gradient(
            flux,
            float(phase.density),
            float(catalyst.viscosity(found)),
            catalyst.pellet_diameter,
            catalyst.void,
        )
        square = pressure**2 - 2.0 * out_p * gradient * volume / area
        if square <= 0:
            raise StateProblem(f"the pressure in bed {step.name} falls to nothing")
        moved = abs(found - out_t)
        out_t, out_p = found, float(np.sqrt(square))
        if moved < 1e-10:
            break
    return BedProfile(
        np.array([1.0]), extents[None, :], np.array([out_t]), np.array([out_p]), flows, volume / area
    )


def _short_of(
    chemistry: Chemistry, inlet: Floats, temperature: float, pressure: float, shift: float
) -> Floats:
    """Extents at which Q equals K at a shifted temperature, fugacities at the real one."""
    return equilibrium_extents(chemistry, inlet.tolist(), temperature, pressure, shift=shift)
