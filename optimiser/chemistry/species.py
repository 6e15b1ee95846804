"""A species: formula, ideal-gas polynomials and critical constants."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from optimiser.chemistry.maths import R

# Enthalpies of formation at 298.15 K that a heat of combustion ends in, J/mol (CODATA, ideal gas for water).
_FORMATION = {"C": -393510.0, "H": -241826.0 / 2.0, "N": 0.0, "Ar": 0.0, "He": 0.0, "O": 0.0}


@dataclass(frozen=True)
class Species:
    """Constants of one species.

    Attributes:
        elements: atoms of each element in one molecule.
        molar_mass: kg/mol.
        nasa: (lowest temperature, highest temperature, seven coefficients) of each range, ascending, K.
        critical_temperature, critical_pressure, acentric: K, Pa, -.
        enthalpy_shift: added to the polynomials' enthalpy (and so to the Gibbs energy), J/mol.
    """

    name: str
    elements: Mapping[str, float]
    molar_mass: float
    nasa: tuple[tuple[float, float, tuple[float, ...]], ...]
    critical_temperature: float
    critical_pressure: float
    acentric: float
    enthalpy_shift: float = 0.0

    def formation_enthalpy(self) -> float:
        """Standard enthalpy of formation at 298.15 K with the shift, J/mol."""
        a, t = self.nasa[0][2], 298.15
        series = a[0] + t * (a[1] / 2 + t * (a[2] / 3 + t * (a[3] / 4 + t * a[4] / 5))) + a[5] / t
        return R * t * series + self.enthalpy_shift

    @property
    def lhv(self) -> float:
        """Lower heating value, J/mol: burnt to CO2, water vapour and N2 at 298.15 K; 0 for what does not burn."""
        if not self.elements.keys() <= _FORMATION.keys():
            return 0.0
        burnt = sum(_FORMATION[element] * count for element, count in self.elements.items())
        return max(self.formation_enthalpy() - burnt, 0.0) if self.elements.keys() & {"C", "H"} else 0.0
