"""An adiabatic bed of iron catalyst in numpy and scipy alone, against which both bed calculations are held.

Nothing of the package is imported. Constants come from the text of models/ammonia.yaml; formulas from Soave, Chem.
Eng. Sci. 27 (1972) 1197 (equation of state, in its printed A and B form), McBride, Gordon & Reno, NASA TM-4513 (1993)
(polynomials), Dyson & Simon, Ind. Eng. Chem. Fundam. 7 (1968) 605 (rate and effectiveness) and Ergun, Chem. Eng. Prog.
48 (1952) 89. State: ammonia made and pressure; the temperature is solved from the enthalpy at every call.
"""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np
from ruamel.yaml import YAML
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

MODEL = Path(__file__).parents[2] / "models" / "ammonia.yaml"
R, ATM, BAR = 8.31446261815324, 101325.0, 1e5
R_CALORIES = 1.987
"""With which an activation energy printed in cal/mol was fitted, cal/mol/K; 1.9872 moves the rate by 0.3 %."""

# Dyson & Simon table I: b0 .. b6 at 150, 225 and 300 atm.
TABLE_I = {
    150.0: (-17.539096, 0.07697849, 6.900548, -1.082790e-4, -26.42469, 4.927648e-8, 38.93727),
    225.0: (-8.2125534, 0.03774149, 6.190112, -5.354571e-5, -20.86963, 2.379142e-8, 27.88403),
    300.0: (-4.6757259, 0.02354872, 4.687353, -3.463308e-5, -11.28031, 1.540881e-8, 10.46627),
}


def _number(text) -> float:
    """The number in front of a unit."""
    return float(str(text).split()[0])


def soft_cap(eta: float) -> float:
    """Cap of the effectiveness factor between 0 and 1, rounded over 0.01 as the package documents it."""
    low = (eta + np.sqrt(eta**2 + 1e-4)) / 2.0
    return (low + 1.0 - np.sqrt((low - 1.0) ** 2 + 1e-4)) / 2.0


def hard_cap(eta: float) -> float:
    return min(max(eta, 0.0), 1.0)


@dataclass
class Track:
    """Ammonia made mol/s, temperature K and pressure Pa at the positions asked for; flows at the outlet."""

    made: np.ndarray
    temperature: np.ndarray
    pressure: np.ndarray
    outlet: np.ndarray


class StiffBed:
    """One bed; `names` fixes the order of the flows."""

    def __init__(self, names, cap=soft_cap) -> None:
        data = YAML(typ="safe").load(MODEL.read_text(encoding="utf-8"))
        species = [data["species"][n] for n in names]
        self.names, self.cap = list(names), cap
        self.a = np.array([s["nasa"][0]["coefficients"] for s in species])
        self.shift = np.array([_number(s.get("enthalpy_shift", {"value": "0 J/mol"})["value"]) for s in species])
        self.mass = np.array([_number(s["molar_mass"]) for s in species]) / 1000.0
        tc = np.array([_number(s["critical"]["temperature"]) for s in species])
        pc = np.array([_number(s["critical"]["pressure"]) for s in species]) * BAR
        w = np.array([s["critical"]["acentric"] for s in species])
        self.tc, self.m = tc, 0.480 + 1.574 * w - 0.176 * w**2
        self.ac, self.b = 0.42748023 * (R * tc) ** 2 / pc, 0.08664035 * R * tc / pc
        self.k = np.zeros((len(names), len(names)))
        for pair in data["binary"]["srk"]:
            if set(pair["pair"]) <= set(names):
                i, j = (self.names.index(n) for n in pair["pair"])
                self.k[i, j] = self.k[j, i] = pair["k"]
        catalyst, law = data["catalyst"], data["rate_laws"]["synthesis"]["constant"]
        self.void, self.grain = catalyst["void"]["value"], _number(catalyst["pellet_diameter"]["value"]) / 1000.0
        mu = catalyst["viscosity"]
        self.mu = (_number(mu["value"]), _number(mu["temperature"]), mu["exponent"])
        self.factor, self.activation = float(law["factor"]), _number(law["activation"]) / R_CALORIES
        self.nu = np.array([{"N2": -0.5, "H2": -1.5, "NH3": 1.0}.get(n, 0.0) for n in names])

    def ideal(self, T):
        """Molar enthalpies J/mol and standard entropies J/mol/K."""
        a = self.a.T
        h = R * T * (a[0] + a[1] * T / 2 + a[2] * T**2 / 3 + a[3] * T**3 / 4 + a[4] * T**4 / 5 + a[5] / T)
        s = R * (a[0] * np.log(T) + a[1] * T + a[2] * T**2 / 2 + a[3] * T**3 / 3 + a[4] * T**4 / 4 + a[6])
        return h + self.shift, s

    def soave(self, T, P, n):
        """Compressibility, enthalpy departure J/mol and fugacity coefficients of the gas."""
        y = n / n.sum()
        root = 1.0 + self.m * (1.0 - np.sqrt(T / self.tc))
        a_i = self.ac * root**2
        slope_i = -self.ac * root * self.m / np.sqrt(T * self.tc)
        pair = np.sqrt(np.outer(a_i, a_i)) * (1.0 - self.k)
        d_pair = 0.5 * pair * (slope_i / a_i)[:, None] + 0.5 * pair * (slope_i / a_i)[None, :]
        a, da, b = y @ pair @ y, y @ d_pair @ y, y @ self.b
        A, B = a * P / (R * T) ** 2, b * P / (R * T)
        roots = np.roots([1.0, -1.0, A - B - B**2, -A * B])
        Z = max(roots[abs(roots.imag) < 1e-9].real)
        departure = R * T * (Z - 1.0) + (T * da - a) / b * np.log(1.0 + B / Z)
        ln_phi = self.b / b * (Z - 1) - np.log(Z - B) - A / B * (2 * (pair @ y) / a - self.b / b) * np.log(1 + B / Z)
        return Z, departure, np.exp(ln_phi)

    def enthalpy(self, T, P, n):
        return n @ self.ideal(T)[0] + n.sum() * self.soave(T, P, n)[1]

    def temperature(self, H, P, n, guess):
        return brentq(lambda T: self.enthalpy(T, P, n) - H, guess - 200.0, guess + 200.0, xtol=1e-10, rtol=1e-14)

    def eta(self, T, P, n):
        """Effectiveness factor, linear between the published pressures."""
        half = 0.5 * n[self.names.index("NH3")]
        z = half / (n[self.names.index("N2")] + half)
        terms = np.array([1.0, T, z, T**2, z**2, T**3, z**3])
        sets = [np.dot(b, terms) for b in TABLE_I.values()]
        return self.cap(np.interp(P / ATM, list(TABLE_I), sets))

    def rate(self, T, P, n):
        """Ammonia made, mol/(m3 s): k (Ka^2 aN2 (aH2^3/aNH3^2)^0.5 - (aNH3^2/aH2^3)^0.5), activities in atm."""
        h, s = self.ideal(T)
        k_atm = np.exp(-(self.nu @ (h - T * s)) / (R * T)) * ATM / BAR
        activity = dict(zip(self.names, n / n.sum() * P / ATM * self.soave(T, P, n)[2], strict=True))
        lean = np.sqrt(activity["H2"] ** 3 / activity["NH3"] ** 2)
        forward = k_atm**2 * activity["N2"] * lean - 1.0 / lean
        return self.factor * np.exp(-self.activation / T) * forward * self.eta(T, P, n) * 1000.0 / 3600.0

    def fall(self, T, P, n, flux):
        """Ergun's pressure gradient, Pa/m."""
        mu0, t0, e = self.mu
        mu = mu0 * (1.0 - e + e * T / t0)
        rho = n @ self.mass / n.sum() * P / (self.soave(T, P, n)[0] * R * T)
        v, solid = flux / rho, 1.0 - self.void
        laminar = 150.0 * mu * v * solid**2 / (self.void**3 * self.grain**2)
        return laminar + 1.75 * rho * v**2 * solid / (self.void**3 * self.grain)

    def integrate(self, inlet, T, P, volume, diameter, activity, positions=(1.0,)) -> Track:
        """Along the volume by LSODA, rtol 1e-9."""
        inlet = np.asarray(inlet, dtype=float)
        section = np.pi / 4 * diameter**2
        H, flux, last = self.enthalpy(T, P, inlet), inlet @ self.mass / section, [T]

        def state(made, pressure):
            n = inlet + self.nu * made
            last[0] = self.temperature(H, pressure, n, last[0])
            return last[0], pressure, n

        def slope(_, y):
            at = state(y[0] * inlet.sum(), y[1] * P)
            return [activity * self.rate(*at) * volume / inlet.sum(), -self.fall(*at, flux) * volume / section / P]

        out = solve_ivp(slope, (0.0, 1.0), [0.0, 1.0], "LSODA", t_eval=positions, rtol=1e-9, atol=1e-11)
        assert out.success, out.message
        made, pressure = out.y[0] * inlet.sum(), out.y[1] * P
        hot = [state(x, p)[0] for x, p in zip(made, pressure, strict=True)]
        return Track(made, np.array(hot), pressure, inlet + self.nu * made[-1])
