"""Flash of the forward calculation: what equilibrium means is checked from its definition, for every equation of state.

Fugacities are taken from the phases, balances and stability from the flows; scipy looks for the dew point on its own.
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import brentq

from optimiser.chemistry.reactions import Chemistry
from optimiser.findings.run import _present
from optimiser.forward.streams import (
    StateProblem,
    _rachford_rice,
    flash,
    flash_at_enthalpy,
    gas,
    gas_temperature,
    incipient_liquid,
)
from optimiser.inputs import read_case
from optimiser.inputs.model import read_model

KINDS = ("srk", "pr", "ideal")
# Converter outlet of a loop near 200 bar: H2, N2, NH3, Ar, CH4; common practice, from memory.
GAS = {"H2": 520.0, "N2": 175.0, "NH3": 180.0, "Ar": 35.0, "CH4": 90.0}
PRESSURE = 200e5


@pytest.fixture(scope="module", params=KINDS)
def mixture(request):
    case = read_case("ammonia-loop", [])
    model = read_model("ammonia")
    return Chemistry.build(model, request.param, species=_present(case, model)).mixture


@pytest.fixture
def flows(mixture):
    return np.array([GAS[name] for name in mixture.names])


def fugacities(mixture, stream):
    """Of both phases, bar."""
    at = (stream.temperature, stream.pressure)
    phases = ((mixture.condensing, stream.vapour), (mixture.liquid, stream.liquid))
    return [np.exp(phase(*at, n.tolist()).ln_fugacity) for phase, n in phases]


@pytest.mark.parametrize("temperature", [248.15, 268.15, 283.15, 303.15])
def test_both_phases_have_equal_fugacities_and_lose_nothing(mixture, flows, temperature):
    stream = flash(mixture, "out", flows, temperature, PRESSURE)
    assert stream.liquid.sum() > 0.02 * flows.sum()
    vapour, liquid = fugacities(mixture, stream)
    assert vapour == pytest.approx(liquid, rel=1e-8)
    assert stream.flows == pytest.approx(flows, rel=1e-14)
    assert (stream.liquid > 0).all() and (stream.vapour > 0).all()
    k = mixture.names.index("NH3")
    assert stream.liquid[k] / stream.liquid.sum() > 0.9 > stream.vapour[k] / stream.vapour.sum()


@pytest.mark.parametrize("temperature", [350.0, 420.0, 500.0, 700.0])
def test_a_hot_gas_stays_one_phase(mixture, flows, temperature):
    stream = flash(mixture, "out", flows, temperature, PRESSURE)
    assert stream.liquid.sum() == 0.0
    assert stream.vapour == pytest.approx(flows, rel=1e-15)


def test_a_gas_without_ammonia_to_speak_of_stays_one_phase(mixture, flows):
    k = mixture.names.index("NH3")
    flows[k] = 1e-3
    assert flash(mixture, "out", flows, 283.15, PRESSURE).liquid.sum() == 0.0


def dew_point(mixture, flows):
    """Where the liquid nearest to forming begins to form, K."""
    z = flows / flows.sum()
    return brentq(lambda t: incipient_liquid(mixture, z, t, PRESSURE)[1], 270.0, 335.0, xtol=1e-9)


def test_liquid_appears_without_a_jump_at_the_dew_point(mixture, flows):
    dew = dew_point(mixture, flows)
    assert flash(mixture, "out", flows, dew + 0.01, PRESSURE).liquid.sum() == 0.0
    shares = [flash(mixture, "out", flows, dew - d, PRESSURE).liquid.sum() / flows.sum() for d in (0.01, 0.02, 0.04)]
    assert 0.0 < shares[0] < 1e-3
    # It grows in proportion to the distance from the dew point.
    assert shares[1] / shares[0] == pytest.approx(2.0, rel=0.02)
    assert shares[2] / shares[0] == pytest.approx(4.0, rel=0.04)
    above, below = (flash(mixture, "out", flows, dew + d, PRESSURE).enthalpy(mixture) for d in (1e-6, -1e-6))
    heat = 4000.0 * flows.sum()
    assert abs(above - below) < 1e-6 * heat


def test_first_drop_at_the_dew_point_has_the_fugacities_of_the_gas(mixture, flows):
    """From the definition, without the flash: the incipient liquid is in equilibrium with the whole gas."""
    dew, z = dew_point(mixture, flows), flows / flows.sum()
    drop, _ = incipient_liquid(mixture, z, dew, PRESSURE)
    there, here = mixture.liquid(dew, PRESSURE, drop.tolist()), mixture.condensing(dew, PRESSURE, z.tolist())
    # The trial stops when fractions move by less than a millionth.
    assert there.ln_fugacity == pytest.approx(here.ln_fugacity, abs=1e-3)


def test_fine_steps_of_temperature_find_fine_steps_of_liquid(mixture, flows):
    """No temperature falls out: the liquid grows smoothly over 300 of them."""
    temperatures = np.linspace(250.0, 290.0, 301)
    amounts = [flash(mixture, "out", flows, t, PRESSURE).liquid.sum() for t in temperatures]
    assert (np.diff(amounts) < 0).all()
    assert np.abs(np.diff(amounts, 2)).max() < 1e-4 * flows.sum()


def test_share_of_liquid_stays_when_it_is_already_found():
    """Rachford-Rice started at its own solution, where Newton's step is less than a rounding error."""
    z = np.array([0.5, 0.17, 0.33])
    for heavy in np.linspace(0.05, 0.3, 400):
        k = np.array([90.0, 70.0, heavy])
        share = 0.1
        for _ in range(4):
            share = _rachford_rice(z, k, share)
            weight = 1.0 + (1.0 - share) * (k - 1.0)
            assert abs(np.sum(z * (1.0 - k) / weight)) < 1e-10


@pytest.mark.parametrize("temperature", [255.0, 283.15, 310.0, 380.0])
def test_temperature_is_found_again_from_enthalpy(mixture, flows, temperature):
    """On both sides of the dew point and from guesses on the wrong side of it."""
    stream = flash(mixture, "out", flows, temperature, PRESSURE)
    for guess in (temperature + 0.5, 400.0, 260.0):
        found = flash_at_enthalpy(mixture, "out", flows, PRESSURE, stream.enthalpy(mixture), guess)
        assert found.temperature == pytest.approx(temperature, abs=1e-6)
        assert found.liquid == pytest.approx(stream.liquid, rel=1e-7, abs=1e-9 * flows.sum())


def test_condensing_takes_more_heat_than_cooling_the_gas(mixture, flows):
    """About 20 kJ per mole of ammonia condensed at these temperatures (vaporisation at 10 degC: 20.9, from memory).

    The ideal gas pays the departure of the compressed gas on top of it.
    """
    hot, cold = flash(mixture, "a", flows, 303.15, PRESSURE), flash(mixture, "b", flows, 283.15, PRESSURE)
    k = mixture.names.index("NH3")
    condensed = cold.liquid[k] - hot.liquid[k]
    dry = gas("c", flows, 303.15, PRESSURE).enthalpy(mixture) - gas("c", flows, 283.15, PRESSURE).enthalpy(mixture)
    latent = (hot.enthalpy(mixture) - cold.enthalpy(mixture) - dry) / condensed
    assert 14e3 < latent < 26e3


@pytest.mark.parametrize("temperature", [220.0, 300.0, 750.0, 1400.0])
def test_gas_temperature_inverts_enthalpy(mixture, flows, temperature):
    enthalpy = gas("in", flows, temperature, PRESSURE).enthalpy(mixture)
    for guess in (200.0, 600.0):
        assert gas_temperature(mixture, flows, PRESSURE, enthalpy, guess) == pytest.approx(temperature, abs=1e-7)


def test_an_enthalpy_that_no_gas_has_is_refused(mixture, flows):
    with pytest.raises(StateProblem, match="200 bar"):
        gas_temperature(mixture, flows, PRESSURE, 1e9 * flows.sum(), 400.0)
