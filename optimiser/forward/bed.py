"""Adiabatic beds with a rate law, integrated in catalyst volume by a stiff integrator of variable order.

States are the extents per mole of inlet, the temperature and the square of the pressure over that of the
inlet, in which Ergun's equation is nearly a straight line. The slope of the temperature is the exact
derivative of the enthalpy balance; afterwards each temperature is brought onto the balance itself, so that
energy closes to round-off.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np

from optimiser.chemistry.eos import IdealMix
from optimiser.chemistry.mixture import Mixture, Phase
from optimiser.chemistry.reactions import Chemistry
from optimiser.engineering.flow import ergun_gradient
from optimiser.forward.properties import Properties
from optimiser.forward.stream import BedFailure, BedProfile, Floats, SetpointFailure, Stream, gas_stream
from optimiser.inputs.case import BedStep

AUDIT_TOLERANCE, START_TOLERANCE = 1e-8, 1e-5
HOT = 1000.0
"""Size of one unit of the temperature state, K."""
LEAST_SQUARE = 1e-4
"""Floor of the squared pressure ratio inside the integration."""
LOST_SQUARE = 1e-2
"""Squared pressure ratio below which a bed has lost its pressure."""
MOST_STEPS = 4000
"""Of the integrator; an audit of a steep bed takes about 300."""
DENSE = tuple(float(x) ** 2 for x in np.linspace(0.0, 1.0, 31)[1:])
"""Positions of a profile that nobody asked for: closer where a bed is steepest."""


@dataclass(frozen=True)
class BedSize:
    """Catalyst volume m3, inside diameter m and length m of a bed."""

    volume: float
    diameter: float
    length: float

    @property
    def section(self) -> float:
        """Empty cross-section, m2."""
        return self.volume / self.length


def bed_size(step: BedStep, setpoints: dict[str, float]) -> BedSize:
    """Size of a bed from its volume and its diameter or slenderness."""
    path = f"reactor.{step.name}"
    volume = needed(setpoints, f"{path}.volume")
    if step.diameter is not None:
        diameter = needed(setpoints, f"{path}.diameter")
    else:
        slender = needed(setpoints, f"{path}.length_over_diameter")
        diameter = float((4.0 * volume / (np.pi * slender)) ** (1.0 / 3.0))
    return BedSize(volume, diameter, 4.0 * volume / (np.pi * diameter**2))


def needed(setpoints: dict[str, float], path: str) -> float:
    """A setpoint that must be there."""
    if path not in setpoints:
        raise SetpointFailure(f"{path} is not set")
    return float(setpoints[path])


def reacted(chemistry: Chemistry, inlet: Floats, extents: Floats) -> Floats:
    """Flows after the reactions have gone by their extents, mol/s; extents may have leading axes."""
    nu = np.array([reaction.nu for reaction in chemistry.reactions])
    return np.asarray(inlet + np.asarray(extents) @ nu)


def vapour_phase(mixture: Mixture, temperature: Any, pressure: Any, flows: Sequence[Any]) -> Phase:
    """The gas as one expression: the largest root of the cubic by Newton's method from above.

    No root of a cubic lies above 1 + B, and from there the method runs down to a gas's root without passing
    it; five steps leave less than round-off where B is below 0.3, as in any hot bed.
    """
    import casadi

    mix = mixture.phase(temperature, pressure, flows, casadi.SX(1.0)).mix
    if isinstance(mix, IdealMix):
        return mixture.phase(temperature, pressure, flows, casadi.SX(1.0))
    c2, c1, c0 = mix.coefficients()
    z = 1.0 + mix.big_b
    for _ in range(5):
        z = z - (((z + c2) * z + c1) * z + c0) / ((3.0 * z + 2.0 * c2) * z + c1)
    return mixture.phase(temperature, pressure, flows, z)


class KineticBeds:
    """Integrators of one chemistry's beds; each is built when first asked for and kept."""

    def __init__(self, chemistry: Chemistry, properties: Properties) -> None:
        self.chemistry, self.properties = chemistry, properties
        self._integrators: dict[tuple[tuple[float, ...], float], Any] = {}

    @cached_property
    def _problem(self) -> dict[str, Any]:
        """States, parameters and slopes as symbols.

        Parameters: flows of the inlet mol/s, its pressure Pa, volume m3, length m, mass flux kg/m2/s,
            activity.
        """
        import casadi

        chemistry, mixture = self.chemistry, self.chemistry.mixture
        species, count = len(mixture.names), len(chemistry.reactions)
        x, p = casadi.SX.sym("x", count + 2), casadi.SX.sym("p", species + 5)
        temperature, square = HOT * x[count], x[count + 1]
        start, volume, length, flux, activity = (p[species + k] for k in range(5))
        total = casadi.sum1(p[:species])
        pressure = start * casadi.sqrt(casadi.fmax(square, LEAST_SQUARE))
        flows = [
            p[k] + total * sum(r.nu[k] * x[i] for i, r in enumerate(chemistry.reactions) if r.nu[k])
            for k in range(species)
        ]
        phase = vapour_phase(mixture, temperature, pressure, flows)
        rates = casadi.vertcat(*chemistry.rates(phase, temperature, pressure, activity))
        catalyst = chemistry.catalyst
        viscosity = catalyst.viscosity(temperature)
        gradient = ergun_gradient(flux, phase.density, viscosity, catalyst.pellet_diameter, catalyst.void)
        made = rates * volume / total
        fall = -2.0 * pressure * gradient * length / (start * start)
        slope = casadi.jacobian(phase.enthalpy, x)
        warming = -(slope[:count] @ made + slope[count + 1] * fall) / slope[count]
        return {"x": x, "p": p, "ode": casadi.vertcat(made, warming, fall), "rates": rates}

    @cached_property
    def _rates(self) -> Any:
        import casadi

        problem = self._problem
        return casadi.Function("rates", [problem["x"], problem["p"]], [problem["rates"]])

    def integrator(self, positions: tuple[float, ...], tolerance: float) -> Any:
        """The integrator from the inlet to each of `positions`, by backward differences."""
        import casadi

        key = (positions, tolerance)
        if key not in self._integrators:
            problem = {k: self._problem[k] for k in ("x", "p", "ode")}
            options = {
                "reltol": tolerance,
                "abstol": 1e-2 * tolerance,
                "max_num_steps": MOST_STEPS,
                "disable_internal_warnings": True,
                "show_eval_warnings": False,
            }
            self._integrators[key] = casadi.integrator("bed", "cvodes", problem, 0.0, list(positions), options)
        return self._integrators[key]

    def integrate(
        self,
        name: str,
        inlet: Stream,
        size: BedSize,
        activity: float,
        positions: Sequence[float] | None = None,
        tolerance: float = AUDIT_TOLERANCE,
        drag: float = 1.0,
    ) -> BedProfile:
        """One bed.

        Args:
            name: of the bed, for messages and streams.
            inlet: gas.
            size: of the catalyst as packed.
            activity: of the catalyst, -.
            positions: parts of the volume, ascending; the outlet is added where it is missing.
            tolerance: relative, of the states.
            drag: part of the pressure drop that counts; less than 1 in starts alone.

        Raises:
            BedFailure: the integration ended early, or the pressure fell to nothing.
        """
        asked = tuple(positions) if positions is not None else DENSE
        if asked[-1] < 1.0:
            asked = (*asked, 1.0)
        flux = self.properties.mass(inlet.vapour) / size.section
        parameters = np.array([*inlet.vapour, inlet.pressure, size.volume, drag * size.length, flux, activity])
        first = np.array([*np.zeros(len(self.chemistry.reactions)), inlet.temperature / HOT, 1.0])
        try:
            states = np.array(self.integrator(asked, tolerance)(x0=first, p=parameters)["xf"])
        except RuntimeError as problem:
            raise BedFailure(name, "the integration ended before the outlet") from problem
        if not np.all(np.isfinite(states)) or states[-1].min() < LOST_SQUARE:
            raise BedFailure(name, "the pressure falls to nothing before the outlet: too long, or too slender")
        rates = np.array(self._rates(states, np.tile(parameters[:, None], states.shape[1])))
        given = name, inlet, np.array(asked), states, rates, size.length
        return self._profile(*given, everywhere=tolerance <= AUDIT_TOLERANCE)

    def _profile(
        self,
        name: str,
        inlet: Stream,
        positions: Floats,
        states: Floats,
        rates: Floats,
        length: float,
        *,
        everywhere: bool,
    ) -> BedProfile:
        """States in SI, with the outlet's temperature, or every one, on the enthalpy balance."""
        count = len(self.chemistry.reactions)
        extents = states[:count].T * inlet.total
        pressures = inlet.pressure * np.sqrt(states[count + 1])
        flows = reacted(self.chemistry, inlet.vapour, extents)
        heat = self.properties.gas(inlet.temperature, inlet.pressure, inlet.vapour).enthalpy
        temperatures = HOT * states[count]
        for k in range(len(positions)) if everywhere else (-1,):
            balanced = self.properties.gas_at_enthalpy(flows[k], float(pressures[k]), heat, float(temperatures[k]))
            temperatures[k] = balanced.temperature
        outlet = gas_stream(f"reactor.{name}.out", flows[-1], float(temperatures[-1]), float(pressures[-1]))
        hottest = max(inlet.temperature, float(temperatures.max()))
        return BedProfile(positions, extents, temperatures, pressures, rates.T, hottest, inlet, outlet, length)
