"""The compiled kernel's rates and thermo against Cantera."""

import cantera
import numpy as np
import pytest
import ruamel.yaml
from wide_cases import GAS, RATES, K

from reactor import chemistry
from reactor.case import loads
from reactor.kernel.rates import Rates
from reactor.library import folder
from reactor.models import SOLVERS
from reactor.rating import closures
from reactor.rating.plant import lamps, plant

CASES = folder("cases")

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


@pytest.fixture(scope="module")
def nine(tmp_path_factory):
    """Return the mechanism with every other species in NASA9, terms in 1/T^2 and 1/T made up, and Cantera's gas of it."""
    yaml, rng = ruamel.yaml.YAML(typ="safe"), np.random.default_rng(3)
    data = yaml.load(GAS.path)
    for species in data["species"][::2]:
        thermo = species["thermo"]
        thermo["model"] = "NASA9"
        thermo["data"] = [[*(rng.normal(size=2) * [2e3, 30.0]).tolist(), *row] for row in thermo["data"]]
        if rng.random() < 0.5 and len(thermo["data"]) == 2:  # as in the tables of NASA: a third range for plasmas
            thermo["temperature-ranges"] = [*thermo["temperature-ranges"][:2], 6000.0, 20000.0]
            thermo["data"].append([0.0] * 9)
    path = tmp_path_factory.mktemp("nine") / "nine.yaml"
    yaml.dump(data, path)
    gas = chemistry.mechanism(path)
    solution = cantera.Solution(str(path), "gas-lit", transport_model=None)
    solution.set_multiplier(5e-3, gas.photolysis)
    solution.set_multiplier(0.7, gas.wall)
    return gas, Rates(gas.tables, gas.photolysis, gas.wall), solution


def test_rates_and_thermo_of_nine_coefficients_are_those_of_cantera(nine):
    # Source: Cantera on the same mechanism file, computed. Limit: 1e-10 of the summed gross rates.
    gas, rates, solution = nine
    assert gas.tables.inverse_powers
    for T, P, X in states(300):
        solution.TPX = T, P, X
        c = solution.concentrations * 1e3
        ours = rates.production(c, T, 5e-3, 0.7)
        gross = 1e3 * (solution.forward_rates_of_progress + solution.reverse_rates_of_progress).sum()
        assert np.abs(ours - 1e3 * solution.net_production_rates).max() <= 1e-10 * gross
        cp, _, h, g = rates.thermo.at(T)
        assert cp == approx(solution.partial_molar_cp / 1e3, rel=1e-10)
        assert h == approx(solution.partial_molar_enthalpies / 1e3, rel=1e-10, abs=1e-6)
        assert g + np.log(P / gas.tables.reference_pressure) == approx(solution.standard_gibbs_RT, rel=1e-10, abs=1e-10)
        assert gas.heat_capacity(T) == approx(solution.standard_cp_R * 8.31446261815324, rel=1e-12)
        assert gas.enthalpy(T) == approx(solution.partial_molar_enthalpies / 1e3, rel=1e-12, abs=1e-6)
        at_pressure = gas.entropy(T) / 8.31446261815324 - np.log(P / gas.tables.reference_pressure)
        assert at_pressure == approx(solution.standard_entropies_R, rel=1e-12, abs=1e-12)


def test_derivatives_of_nine_coefficients_are_those_of_the_rates(nine):
    # Kind: limit (differences of the fourth order of the kernel's own numbers).
    gas, rates, _ = nine
    for T, P, X in states(20, seed=8):
        c, step = X * P / (8.31446261815324 * T), 1e-3 * T
        _, _, by_T, _, _ = rates.derivatives(c, T, 5e-3, 0.7)
        w = [rates.production(c, T + n * step, 5e-3, 0.7) for n in (-2, -1, 1, 2)]
        assert by_T == approx((w[0] - 8 * w[1] + 8 * w[2] - w[3]) / (12 * step), rel=1e-6, abs=1e-6 * np.abs(by_T).max())
        cp = [rates.thermo.at(T + n * step)[0] for n in (-2, -1, 1, 2)]
        slope = (cp[0] - 8 * cp[1] + 8 * cp[2] - cp[3]) / (12 * step)
        away = np.abs(T - gas.tables.t_mid) > 2 * step
        assert rates.thermo.at(T)[1][away] == approx(slope[away], rel=1e-6, abs=1e-8)


STAGED = "".join(f'[[inject]]\nshare = "25 %"\nposition = "{z} m"\n' for z in (0.4, 0.8))


@pytest.mark.parametrize(("name", "more"), [("lapwing_ten", ""), ("lapwing_ten", STAGED), ("dunnock_tank", "")],
                         ids=["tube", "staged", "tank"])
def test_a_case_on_nine_coefficients_keeps_its_heat(nine, name, more):
    # Kind: limit. Where chlorine is injected, gases are mixed at constant enthalpy.
    case = loads((CASES / f"{name}.toml").read_text() + more, CASES)
    profile = SOLVERS[case.vessel.kind](case, plant(case, nine[0], lamps(case)))
    assert closures.enthalpy(profile, nine[0]) < 1e-9
