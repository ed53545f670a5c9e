"""The compiled kernel's rates and thermo against Cantera."""

import cantera
import numpy as np
import pytest
from wide_cases import GAS, RATES, K

approx = pytest.approx


def states(number, seed=7):
    """Yield random T [K], P [Pa] and mole fractions, some of them nought; both ranges of the polynomials."""
    rng = np.random.default_rng(seed)
    for _ in range(number):
        X = rng.dirichlet(np.full(K, 0.3)) * (rng.random(K) < 0.8)
        yield rng.uniform(220, 1700), 10 ** rng.uniform(4.5, 6), X / X.sum()


@pytest.fixture(scope="module")
def gas():
    """Return Cantera's gas of the same file, lit and with a wall."""
    gas = cantera.Solution(str(GAS.path), "gas-lit", transport_model=None)
    gas.set_multiplier(5e-3, GAS.photolysis)
    gas.set_multiplier(0.7, GAS.wall)
    return gas


def test_production_is_that_of_cantera_at_a_thousand_states(gas):
    # Source: Cantera on the same mechanism file, computed. Limit: 1e-10 of the summed gross rates.
    for T, P, X in states(1000):
        gas.TPX = T, P, X
        ours = RATES.production(gas.concentrations * 1e3, T, 5e-3, 0.7)
        gross = 1e3 * (gas.forward_rates_of_progress + gas.reverse_rates_of_progress).sum()
        assert np.abs(ours - 1e3 * gas.net_production_rates).max() <= 1e-10 * gross


def test_thermo_is_that_of_cantera_at_a_thousand_states(gas):
    # Source: Cantera on the same mechanism file, computed.
    for T, P, X in states(1000):
        gas.TPX = T, P, X
        cp, _, h, g = RATES.thermo.at(T)
        assert cp == approx(gas.partial_molar_cp / 1e3, rel=1e-10)
        assert h == approx(gas.partial_molar_enthalpies / 1e3, rel=1e-10, abs=1e-6)
        at_own_pressure = g + np.log(P / GAS.tables.reference_pressure)
        assert at_own_pressure == approx(gas.standard_gibbs_RT, rel=1e-10, abs=1e-10)
