"""Thermodynamic identities of both phases, with exact derivatives: the formulas run on casadi symbols.

The compressibility is differentiated along the equation of state by the implicit function theorem, so nothing here
depends on a step width. Textbook identities; no figure from outside.
"""

from __future__ import annotations

from functools import cache

import casadi
import numpy as np
import pytest
from hypothesis import given, seed, settings
from hypothesis import strategies as st

from optimiser.chemistry.maths import R
from optimiser.chemistry.reactions import Chemistry
from optimiser.chemistry.thermo import gibbs_sum
from optimiser.inputs.model import read_model

COUNT = 5
FLOWS = st.lists(st.floats(0.02, 1.0), min_size=COUNT, max_size=COUNT)
GASES = st.tuples(st.floats(280.0, 900.0), st.floats(1.0, 400.0), FLOWS)
LIQUIDS = st.tuples(st.floats(235.0, 310.0), st.floats(30.0, 400.0), FLOWS)
KINDS = st.sampled_from(["srk", "pr"])


@cache
def _chemistry(kind: str) -> Chemistry:
    return Chemistry.build(read_model("ammonia"), kind)


@cache
def _derivatives(kind: str, liquid: bool) -> casadi.Function:
    """Properties of a phase and their total derivatives at fixed flows, as one function of state and root."""
    t, p, z, n = (casadi.SX.sym(name, size) for name, size in (("T", 1), ("P", 1), ("Z", 1), ("n", COUNT)))
    phase = _chemistry(kind).mixture.phase(t, p, casadi.vertsplit(n), z, liquid=liquid)
    g = phase.enthalpy - t * phase.entropy

    def total(y: casadi.SX, x: casadi.SX) -> casadi.SX:
        along = -casadi.jacobian(phase.residual, x) / casadi.jacobian(phase.residual, z)
        return casadi.jacobian(y, x) + casadi.jacobian(y, z) @ along

    fugacities = casadi.vertcat(*phase.ln_fugacity)
    out = {
        "G": g,
        "H": phase.enthalpy,
        "S": phase.entropy,
        "V": phase.volume,
        "ln_f": fugacities,
        "dG_dT": total(g, t),
        "dG_dP": total(g, p),
        "dG_dn": total(g, n),
        "dGT_dT": total(g / t, t),
        "dV_dT": total(phase.volume, t),
        "dS_dP": total(phase.entropy, p),
        "dH_dT": total(phase.enthalpy, t),
        "dS_dT": total(phase.entropy, t),
        "dlnf_dP": total(fugacities, p),
        "dlnf_dn": total(fugacities, n),
        "dV_dn": total(phase.volume, n),
    }
    return casadi.Function("phase", [t, p, z, n], list(out.values()), ["T", "P", "Z", "n"], list(out))


def _ammonia_rich(flows: list[float]) -> list[float]:
    return [n if name == "NH3" else 0.03 * n for name, n in zip(_chemistry("srk").mixture.names, flows, strict=True)]


def _at(kind: str, state: tuple[float, float, list[float]], liquid: bool) -> dict[str, np.ndarray]:
    temperature, bar, flows = state
    mixture = _chemistry(kind).mixture
    phase = (mixture.liquid if liquid else mixture.gas)(temperature, bar * 1e5, flows)
    found = _derivatives(kind, liquid)(T=temperature, P=bar * 1e5, Z=phase.compressibility, n=flows)
    return {name: np.array(value) for name, value in found.items()}


def _identities(kind: str, state: tuple[float, float, list[float]], liquid: bool) -> None:
    """Gibbs energy, its three derivatives, Maxwell's relations and the symmetry of the chemical potentials."""
    d, temperature, flows = _at(kind, state, liquid), state[0], np.array(state[2])
    species = _chemistry(kind).mixture.species
    standard = [float(gibbs_sum([s], [1.0], temperature)) for s in species]
    mu = np.array(standard) + R * temperature * d["ln_f"].ravel()
    size = float(np.abs(mu) @ flows)
    assert d["G"] == pytest.approx(flows @ mu, abs=1e-9 * size)
    assert d["dG_dP"] == pytest.approx(d["V"], rel=1e-7)
    assert d["dG_dT"] == pytest.approx(-d["S"], rel=1e-7)
    assert d["dGT_dT"] == pytest.approx(-d["H"] / temperature**2, abs=1e-7 * size / temperature**2)
    assert d["dG_dn"].ravel() == pytest.approx(mu, abs=1e-7 * float(np.abs(mu).max()))
    assert d["dS_dP"] == pytest.approx(-d["dV_dT"], rel=1e-6, abs=1e-6 * float(d["V"].item()) / temperature)
    assert d["dH_dT"] == pytest.approx(temperature * d["dS_dT"], rel=1e-6)
    assert R * temperature * d["dlnf_dP"].ravel() == pytest.approx(d["dV_dn"].ravel(), rel=1e-6, abs=1e-12)
    curvature = d["dlnf_dn"]
    assert np.allclose(curvature, curvature.T, rtol=0, atol=1e-7 * np.abs(curvature).max())
    # Gibbs and Duhem: potentials do not know how much there is.
    assert np.allclose(curvature @ flows, 0.0, atol=1e-7 * float(np.abs(curvature) @ flows @ np.ones(COUNT)))


@seed(11)
@settings(max_examples=60)
@given(GASES, KINDS)
def test_identities_of_the_gas(state: tuple[float, float, list[float]], kind: str) -> None:
    _identities(kind, state, liquid=False)


@seed(12)
@settings(max_examples=60)
@given(LIQUIDS, KINDS)
def test_identities_of_the_liquid(state: tuple[float, float, list[float]], kind: str) -> None:
    rich = (state[0], state[1], _ammonia_rich([max(n, 0.3) for n in state[2]]))
    phase = _chemistry(kind).mixture.liquid(rich[0], rich[1] * 1e5, rich[2])
    assert float(phase.density) > 400.0, "this root is no liquid"
    _identities(kind, rich, liquid=True)


def test_the_identities_catch_a_wrong_enthalpy() -> None:
    """An enthalpy departure of 0.1 % too much breaks dG/dT = -S by far more than the tolerance."""
    d = _at("srk", (700.0, 200.0, [3.0, 1.0, 0.5, 0.1, 0.1]), liquid=False)
    mixture = _chemistry("srk").mixture
    phase = mixture.gas(700.0, 200e5, [3.0, 1.0, 0.5, 0.1, 0.1])
    wrong = float(d["H"].item()) + 1e-3 * phase.total * float(phase.mix.enthalpy_departure(phase.compressibility))
    assert d["dGT_dT"] == pytest.approx(-d["H"] / 700.0**2, rel=1e-7)
    assert d["dGT_dT"] != pytest.approx(-wrong / 700.0**2, rel=1e-7)


@seed(13)
@settings(max_examples=40)
@given(GASES, st.sampled_from(["srk", "pr", "ideal"]))
def test_equilibrium_constant_obeys_van_t_hoff(state: tuple[float, float, list[float]], kind: str) -> None:
    """d ln K/dT = dH/(R T^2)."""
    reaction = _chemistry(kind).reactions[0]
    t = casadi.SX.sym("T")
    slope = float(casadi.Function("k", [t], [casadi.jacobian(reaction.ln_k(t), t)])(state[0]))
    assert slope == pytest.approx(float(reaction.enthalpy(state[0])) / (R * state[0] ** 2), rel=1e-9)
