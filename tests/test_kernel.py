"""Rates, balances and steady states on plain arrays: derivatives, closures, ends, stability, budgets."""

import cantera
import numpy as np
import pytest

from reactor import chemistry
from reactor.curve import constant, tabulate
from reactor.errors import ConvergenceError
from reactor.kernel import plugflow, tank
from reactor.kernel.light import Beam, absorb
from reactor.kernel.rates import Rates

approx = pytest.approx
GAS = chemistry.mechanism()
RATES = Rates(GAS.tables, GAS.photolysis, GAS.wall)
K, CL2 = len(GAS.species), GAS.index["Cl2"]
PHOTON = 0.119626565582 / 365e-9  # J/mol: N_A h c over the wavelength
AREA, PATH = 5e-3, 0.02
SHARE = tabulate(lambda x: -np.expm1(-np.exp(x)) / np.exp(x), np.log(1e-9), np.log(1e5), 3001)
PASSED = tabulate(lambda x: np.exp(-np.exp(x)), np.log(1e-9), np.log(1e5), 3001)


def beam(entering, J=None):
    """Return parallel light of two lines through a slab; `entering` [mol/m/s] in all."""
    sigma = np.array([[1.0e-23, 1e-24, 2e-25], [2.0e-24, -3e-25, 1e-25]])
    return Beam(
        entering * np.array([0.7, 0.3]),
        PHOTON * np.array([1.0, 0.9]),
        sigma,
        550.0,
        350.0,
        PATH,
        AREA,
        SHARE,
        PASSED,
        J,
    )


def moles(**parts):
    """Return flows [mol/s] on the species of the mechanism."""
    flow = np.zeros(K)
    for species, amount in parts.items():
        flow[GAS.index[species]] = amount
    return flow


def section(start, stop, light, sleeve_heat=0.0, injected=None, T=300.0):
    injected = np.zeros(K) if injected is None else injected
    return plugflow.Section(
        start, stop, light, sleeve_heat, injected, float(injected @ RATES.thermo.at(T)[2])
    )


def tube(*sections, wall_loss=0.1, UA=2.0, coolant=np.inf, friction=0.03):
    conductance = tabulate(lambda T: UA * (T / 300.0) ** 0.5, 250.0, 1250.0, 41) if UA else constant(0.0)
    return plugflow.Tube(
        RATES,
        GAS.molar_mass,
        wall_loss,
        CL2,
        GAS.start,
        AREA,
        0.04,
        friction,
        conductance,
        constant(0.4),
        coolant,
        sections,
    )


def march(pipe, flow, T=320.0, Tc=300.0, P=1.5e5, **budget):
    mass = float(flow @ GAS.molar_mass)
    return plugflow.integrate(pipe, flow / mass, T, Tc, P, mass, plugflow.Budget(**budget))


def total(path, name):
    return float(path.totals[-1, plugflow.TOTALS.index(name)])


def vessel(flow, light, UA=0.0, T=330.0, coolant=np.inf, volume=0.02, wall_loss=0.1):
    return tank.Tank(
        RATES,
        GAS.molar_mass,
        wall_loss,
        CL2,
        GAS.start,
        volume,
        volume / AREA,
        1.5e5,
        flow,
        float(flow @ RATES.thermo.at(T)[2]),
        light,
        0.0,
        constant(UA),
        constant(1.0),
        coolant,
        300.0,
    )


# --- rates and derivatives ---


def states(number, seed=1):
    """Yield random T [K], P [Pa] and mole fractions, some of them nought."""
    rng = np.random.default_rng(seed)
    for _ in range(number):
        X = rng.dirichlet(np.full(K, 0.3)) * (rng.random(K) < 0.8)
        yield rng.uniform(260, 900), rng.uniform(0.5e5, 3e5), X / X.sum()


def test_production_is_what_cantera_finds_on_the_same_file():
    # Source: Cantera 3.2 on the same mechanism file, computed. Limit: to rounding, beside the gross rates.
    gas = cantera.Solution(str(GAS.path), "gas-lit", transport_model=None)
    gas.set_multiplier(5e-3, GAS.photolysis)
    gas.set_multiplier(0.7, GAS.wall)
    for T, P, X in states(20):
        gas.TPX = T, P, X
        ours = RATES.production(gas.concentrations * 1e3, T, 5e-3, 0.7)
        gross = 1e3 * (gas.creation_rates + gas.destruction_rates).max()
        assert ours == approx(gas.net_production_rates * 1e3, rel=1e-9, abs=1e-11 * gross)


def test_thermo_is_that_of_cantera():
    # Source: Cantera 3.2, computed.
    gas, thermo = cantera.Solution(str(GAS.path), "gas-lit", transport_model=None), RATES.thermo
    for T in (250.0, 420.0, 999.0, 1001.0, 1600.0):
        gas.TP = T, 1e5
        cp, slope, h, g = thermo.at(T)
        assert cp == approx(gas.partial_molar_cp / 1e3, rel=1e-10)
        assert h == approx(gas.partial_molar_enthalpies / 1e3, rel=1e-9, abs=1e-3)
        assert g == approx(gas.standard_gibbs_RT, rel=1e-9, abs=1e-8)
        assert slope == approx((thermo.at(T + 0.01)[0] - thermo.at(T - 0.01)[0]) / 0.02, rel=1e-5, abs=1e-8)


def test_derivatives_of_production_are_those_by_differences():
    # Limit: central differences; rates are of third order in c at most, but for fall-off, so a long step is
    # exact.
    rng = np.random.default_rng(2)
    for T, P, X in states(8, seed=2):
        c = X * P / (8.31446261815324 * T)
        w, by_c, by_T, by_J, _ = RATES.derivatives(c, T, 5e-3, 0.7)
        assert w == approx(RATES.production(c, T, 5e-3, 0.7), rel=1e-12, abs=1e-12 * np.abs(w).max())
        step = 1e-3 * c.sum()
        for k in rng.integers(0, K, 6):
            along = step * np.eye(K)[k]
            change = RATES.production(c + along, T, 5e-3, 0.7) - RATES.production(c - along, T, 5e-3, 0.7)
            assert change / (2 * step) == approx(by_c[:, k], abs=1e-5 * np.abs(by_c[:, k]).max())
        warm = RATES.production(c, T + 0.01, 5e-3, 0.7) - RATES.production(c, T - 0.01, 5e-3, 0.7)
        assert warm / 0.02 == approx(by_T, abs=1e-5 * np.abs(by_T).max())
        lit = RATES.production(c, T, 6e-3, 0.7) - RATES.production(c, T, 4e-3, 0.7)
        assert lit / 2e-3 == approx(by_J, abs=1e-6 * np.abs(lit).max() / 2e-3 + 1e-9 * np.abs(w).max() / 2e-3)


def test_light_in_a_gas_knows_its_own_slopes():
    # Limit: central differences; photons are J c A, and what is not absorbed reaches the outer wall.
    lit = beam(1e-5)
    for c, T in ((5.0, 350.0), (0.3, 500.0), (1e-4, 700.0)):
        found = absorb(lit, c, T)
        up, down = absorb(lit, c * 1.001, T), absorb(lit, c * 0.999, T)
        hot, cold = absorb(lit, c, T + 0.1), absorb(lit, c, T - 0.1)
        assert (up.J - down.J) / (0.002 * c) == approx(found.by_c, rel=1e-4)
        assert abs(hot.J - cold.J - 0.2 * found.by_T) < 1e-4 * abs(hot.J - cold.J)
        assert (up.power - down.power) / (0.002 * c) == approx(found.power_by_c, rel=1e-4)
        assert (hot.power - cold.power) / 0.2 == approx(found.power_by_T, rel=1e-4)
        assert found.photons == approx(found.J * c * AREA, rel=1e-12)
        assert found.photons + found.outer_wall == approx(1e-5, rel=1e-8)


def by_differences(slope, y, rows):
    """Return the Jacobian of `slope` at `y` by central differences."""
    found = np.zeros((rows, len(y)))
    for k in range(len(y)):
        step = np.zeros(len(y))
        step[k] = max(1e-5 * abs(y[k]), 1e-9)
        found[:, k] = (slope(y + step) - slope(y - step))[:rows] / (2 * step[k])
    return found


def test_jacobians_of_tube_and_tank_are_those_by_differences():
    # Limit: central differences, 1e-4 of the largest entry of each row.
    flow = moles(C2H6=0.05, CH4=0.02, Cl2=0.008, O2=1e-5)
    pipe = tube(section(0.0, 1.0, beam(1e-5), 30.0), coolant=40.0)
    path = march(pipe, flow)
    mass = float(flow @ GAS.molar_mass)
    balance = plugflow.Balance(pipe, pipe.sections[0], mass)
    for i in (1, len(path.z) // 4, len(path.z) // 2):
        y = path.state[i]
        expected, found = by_differences(balance.slope, y, K + 3), balance.jacobian(y)
        assert np.all(np.abs(found - expected) <= 1e-4 * np.abs(expected).max(axis=1, keepdims=True) + 1e-10)
    still = tank.Balance(vessel(flow, beam(1e-5), UA=3.0, coolant=40.0))
    y = path.state[len(path.z) // 2][: K + 1]
    expected = by_differences(lambda y: np.append(*still.slope(y[:-1], y[-1])), y, K + 1)
    found = still.jacobian(y[:-1], y[-1])
    assert np.all(np.abs(found - expected) <= 1e-4 * np.abs(expected).max(axis=1, keepdims=True) + 1e-10)


# --- the tube ---

CASES = {
    "methane": (moles(CH4=0.1, Cl2=0.01), 3e-5),
    "methane, hot feed and inert": (moles(CH4=0.08, Cl2=0.01, N2=0.05, HCl=0.01), 1e-4),
    "ethane, chlorine used up": (moles(C2H6=0.06, Cl2=0.01), 5e-5),
    "propane, chlorine used up": (moles(C3H8=0.08, Cl2=0.01, CO2=0.01), 5e-5),
    "all three with oxygen": (moles(CH4=0.08, C2H6=0.002, C3H8=0.001, Cl2=0.01, O2=2e-6), 3e-5),
    "dark": (moles(CH4=0.1, Cl2=0.01), 0.0),
    "light through pure chlorine": (moles(Cl2=0.05), 1e-4),
}


@pytest.mark.parametrize("name", CASES)
def test_atoms_enthalpy_and_photons_close_along_a_cooled_tube(name):
    # Limit: conservation; atoms to 1e-9, enthalpy to 1e-6, photons to 1e-6 of what enters.
    flow, entering = CASES[name]
    pipe = tube(section(0.0, 0.6, beam(entering), 20.0), section(0.6, 1.0, beam(0.0)), coolant=60.0)
    path = march(pipe, flow)
    mass = float(flow @ GAS.molar_mass)
    n, T = path.state[:, :K], path.state[:, K]
    atoms = mass * n @ GAS.atoms
    fed = flow @ GAS.atoms
    assert np.all(np.abs(atoms - fed) <= 1e-9 * fed + 1e-15)
    gained = mass * (n[-1] @ RATES.thermo.at(T[-1])[2]) - flow @ RATES.thermo.at(320.0)[2]
    heat = total(path, "photon_power") + total(path, "lamp_heat") - total(path, "to_wall")
    scale = abs(total(path, "heat_reaction")) + total(path, "photon_power") + abs(total(path, "to_wall"))
    assert abs(gained - heat) <= 1e-6 * scale
    assert total(path, "photons") + total(path, "outer_wall") == approx(0.6 * entering, rel=1e-6)
    # the coolant, with the gas: it gains what the wall gives and the lamp heat that the gas did not take
    assert 60.0 * (path.state[-1, K + 1] - 300.0) == approx(total(path, "coolant"), rel=1e-6)
    assert total(path, "coolant") == approx(
        total(path, "to_wall") + 0.6 * 20.0 - total(path, "lamp_heat"), rel=1e-6
    )


@pytest.mark.parametrize("name", CASES)
def test_no_species_goes_below_nought(name):
    # Limit: an undershoot stays below the absolute tolerance of the march, also where chlorine is used up.
    flow, entering = CASES[name]
    path = march(tube(section(0.0, 0.6, beam(entering), 20.0), section(0.6, 3.0, beam(0.0))), flow)
    assert path.state[:, :K].min() > -1e3 * plugflow.ABSOLUTE
    assert np.all(path.state[:, K] > 250)
    if "used up" in name:
        assert path.state[-1, CL2] < 1e-4 * path.state[0, CL2]


def test_lamp_edges_and_injectors_are_stations_of_their_own():
    # Limit: the march stops and starts at each of them, so none falls inside a step.
    flow, more = moles(CH4=0.1, Cl2=0.005), moles(Cl2=0.005)
    pipe = tube(
        section(0.0, 0.2, beam(0.0)),
        section(0.2, 0.5, beam(5e-5)),
        section(0.5, 0.7, beam(5e-5), injected=more),
        section(0.7, 1.0, beam(0.0)),
    )
    path = march(pipe, flow)
    for edge in (0.2, 0.5, 0.7):
        assert (path.z == edge).sum() == 2
    before, after = np.flatnonzero(path.z == 0.5)
    n, flows = path.state[:, :K], path.mass_flow
    assert flows[after] * n[after] == approx(flows[before] * n[before] + more, rel=1e-12, abs=1e-18)
    h = [flows[i] * (n[i] @ RATES.thermo.at(path.state[i, K])[2]) for i in (before, after)]
    assert h[1] == approx(h[0] + more @ RATES.thermo.at(300.0)[2], rel=1e-9)
    atoms = flows[-1] * n[-1] @ GAS.atoms
    assert atoms == approx((flow + more) @ GAS.atoms, rel=1e-9, abs=1e-15)
    dark = total(path, "photons") - path.totals[np.flatnonzero(path.z == 0.7)[0], 0]
    assert dark == 0.0
    assert path.totals[np.flatnonzero(path.z == 0.2)[0], 0] == 0.0


def test_a_tube_cut_at_any_place_gives_the_answer_of_the_whole():
    # Limit: two halves in series are one tube.
    flow = moles(C2H6=0.06, Cl2=0.01)
    whole = march(tube(section(0.0, 1.0, beam(5e-6))), flow, rtol=1e-9)
    cut = march(tube(section(0.0, 0.37, beam(5e-6)), section(0.37, 1.0, beam(5e-6))), flow, rtol=1e-9)
    assert cut.state[-1, K] == approx(whole.state[-1, K], abs=1e-4)
    assert cut.state[-1, CL2] == approx(whole.state[-1, CL2], rel=1e-5)


def test_a_tighter_tolerance_moves_little():
    # Limit: at rtol 1e-7 slip and outlet temperature stand to 1e-5 and 1 mK.
    flow = moles(CH4=0.1, Cl2=0.01)
    usual, tight = (march(tube(section(0.0, 1.0, beam(3e-5))), flow, rtol=rtol) for rtol in (1e-7, 1e-10))
    assert usual.state[-1, CL2] == approx(tight.state[-1, CL2], rel=1e-5)
    assert usual.state[-1, K] == approx(tight.state[-1, K], abs=1e-3)
    assert usual.hottest[0] == approx(tight.hottest[0], abs=5e-3)


def test_the_hottest_point_is_found_inside_the_tube():
    # Limit: no station is hotter, and it lies where a fine march has its highest station.
    path = march(tube(section(0.0, 1.0, beam(5e-5)), UA=6.0), moles(C2H6=0.03, Cl2=0.005))
    fine = march(tube(section(0.0, 1.0, beam(5e-5)), UA=6.0), moles(C2H6=0.03, Cl2=0.005), rtol=1e-11)
    top = fine.state[:, K].argmax()
    assert 0.0 < path.hottest[1] < 1.0
    assert path.hottest[0] >= path.state[:, K].max()
    assert path.hottest[0] == approx(fine.state[top, K], abs=0.05)
    assert path.hottest[1] == approx(fine.z[top], abs=0.02)


def test_coolant_against_the_gas_closes_at_its_inlet():
    # Limit: marched against the gas, the coolant loses along z what the wall gives it; a loop on its outlet
    # closes it.
    from scipy.optimize import brentq

    flow = moles(CH4=0.1, Cl2=0.01)
    pipe = tube(section(0.0, 1.0, beam(3e-5), 10.0), coolant=-20.0)
    out = brentq(
        lambda Tc: march(pipe, flow, Tc=Tc, rtol=1e-6).state[-1, K + 1] - 295.0, 295.0, 340.0, xtol=1e-7
    )
    path = march(pipe, flow, Tc=out, rtol=1e-6)
    assert path.state[-1, K + 1] == approx(295.0, abs=1e-5)
    assert 20.0 * (out - 295.0) == approx(total(path, "coolant"), rel=1e-5)
    assert out > 296.0


def test_a_spent_budget_says_where_and_what_to_try():
    flow = moles(CH4=0.1, Cl2=0.01)
    pipe = tube(section(0.0, 1.0, beam(3e-5)))
    with pytest.raises(
        ConvergenceError, match=r"budget of 30 steps was used up at z = .* m, T = .* K.*solver\.rtol"
    ):
        march(pipe, flow, steps=30)
    with pytest.raises(
        ConvergenceError, match=r"budget of 0 s was used up at z = .* m, T = .* K.*solver\.seconds"
    ):
        march(pipe, flow, seconds=0.0)
    with pytest.raises(ConvergenceError, match=r"budget of 0 s was used up at .* K.*solver\.seconds"):
        tank.steady_states(vessel(flow, beam(3e-5)), 300.0, 600.0, plugflow.Budget(seconds=0.0))
    still = vessel(flow, beam(3e-5))
    with pytest.raises(ConvergenceError, match=r"could not be followed beyond .* s .*solver\.seconds"):
        tank.follow(still, flow / (flow @ GAS.molar_mass), 330.0, 100.0, plugflow.Budget(seconds=0.0))


def test_a_tube_too_narrow_for_its_gas_says_that_the_pressure_is_used_up():
    flow = moles(CH4=0.1, Cl2=0.01)
    narrow = tube(section(0.0, 1.0, beam(3e-5)))._replace(friction=1e6)
    with pytest.raises(ConvergenceError, match=r"friction uses up the pressure at z = .* m.*wider tube"):
        march(narrow, flow, seconds=5.0)


def test_a_mixed_stream_without_a_temperature_is_refused():
    flow, more = moles(CH4=0.1, Cl2=0.01), moles(Cl2=0.01)
    hot = section(0.0, 1.0, beam(3e-5), injected=more)._replace(heat=float("nan"))
    with pytest.raises(ConvergenceError, match=r"no temperature was found for the mixed gas at z = 0 m"):
        march(tube(hot), flow)


# --- the tank ---


def three(light=1e-11):
    """Return an adiabatic tank of methane 3:1 that has three steady states at little light."""
    return vessel(moles(CH4=0.03, Cl2=0.01), beam(light), T=333.0, volume=0.05)


@pytest.fixture(scope="module")
def states_of_three():
    return tank.steady_states(three(), 332.0, 1000.0, points=40)


def test_every_steady_state_is_a_zero_of_both_balances(states_of_three):
    # Limit: the slope vanishes beside the rates that make it up; atoms and heat close.
    still = three()
    balance = tank.Balance(still)
    found = states_of_three
    assert len(found) == 3
    for state in found:
        dn, dT = balance.slope(state.n, state.T)
        assert np.abs(dn).max() < 1e-9
        assert abs(dT) < 1e-6
        assert state.n @ GAS.atoms == approx(balance.n_in @ GAS.atoms, rel=1e-9, abs=1e-12)
        accounts = balance.flows(state.n, state.T)
        gained = balance.mass_flow * (state.n @ RATES.thermo.at(state.T)[2]) - still.feed_heat
        scale = abs(accounts.heat_reaction) + accounts.photon_power
        assert abs(gained - accounts.photon_power + accounts.to_wall) < 1e-6 * scale + 1e-9
        assert state.n.min() >= 0.0


def test_the_middle_of_three_states_is_unstable_and_the_outer_two_are_stable(states_of_three):
    # Limit: van Heerden's slope condition (Ind. Eng. Chem. 45 (1953) 1242, memory): heat gained rises faster
    # than heat removed at the middle one.
    cold, middle, hot = states_of_three
    assert (cold.stable, middle.stable, hot.stable) == (True, False, True)
    assert cold.growth_rate < 0 < middle.growth_rate
    assert hot.growth_rate < 0
    assert cold.T < middle.T < hot.T


@pytest.mark.parametrize(("offset", "which"), [(-8.0, 0), (8.0, 2)])
def test_from_beside_the_unstable_state_the_tank_goes_to_the_stable_one_on_that_side(
    states_of_three, offset, which
):
    # Limit: what the transient ends on is a steady state, the one that the sign of the disturbance points to.
    still = three()
    found = states_of_three
    _, n, T = tank.follow(still, found[1].n, found[1].T + offset, 3000.0)
    assert T[-1] == approx(found[which].T, abs=0.05)
    assert n[-1, CL2] == approx(found[which].n[CL2], rel=1e-3, abs=1e-9)
    assert n.min() > -1e-9


def test_a_dark_cold_tank_stays_at_its_feed():
    # Limit: nothing starts without light in the cold; the other two states stay where they are, lamp or no
    # lamp.
    cold, middle, hot = tank.steady_states(three(light=0.0), 332.0, 1000.0, points=40)
    lit = tank.steady_states(three(), 332.0, 1000.0, points=40)
    assert abs(cold.T - 333.0) < 1e-3
    assert lit[0].T > 360.0
    assert abs(middle.T - lit[1].T) < 1.0
    assert abs(hot.T - lit[2].T) < 0.1


def test_a_lit_tank_filled_with_feed_goes_to_its_one_steady_state():
    # Limit: the transient ends on the steady state; a jacket with a finite coolant flow included.
    flow = moles(C2H6=0.06, Cl2=0.01)
    still = vessel(flow, beam(1e-6), UA=4.0, coolant=30.0)
    found = tank.steady_states(still, 295.0, 800.0)
    assert len(found) == 1
    assert found[0].stable
    _, n, T = tank.follow(still, flow / (flow @ GAS.molar_mass), 330.0, 600.0)
    assert T[-1] == approx(found[0].T, abs=1e-3)
    assert n[-1] == approx(found[0].n, rel=1e-4, abs=1e-10)


def test_at_a_held_temperature_the_composition_does_not_depend_on_where_it_was_sought_from():
    # Limit: found from the feed and from the burnt gas, it is the same.
    balance = tank.Balance(three())
    n = balance.at_rest(600.0, balance.n_in)[0][0]
    burnt = balance.at_rest(900.0, balance.n_in)[0][0]
    assert balance.at_rest(600.0, burnt)[0][0] == approx(n, rel=1e-6, abs=1e-12)
    assert balance.at_rest(600.0, burnt, near=True)[0][0] == approx(n, rel=1e-6, abs=1e-12)


def test_no_steady_state_between_wrong_bounds_is_an_error_with_a_cure():
    with pytest.raises(ConvergenceError, match="no steady state between 340 and 350 K; check cooling"):
        tank.steady_states(three(), 340.0, 350.0, points=5)
