"""Steady states of a stirred tank followed round their turning points."""

import numpy as np
import pytest
from wide_cases import CL2, GAS, RATES, beam, moles

from reactor.curve import constant
from reactor.errors import ConvergenceError
from reactor.kernel import tank
from reactor.kernel.branch import branch
from reactor.kernel.plugflow import Budget

approx = pytest.approx
FEED = moles(CH4=0.05, Cl2=0.025)


def lit(decades):
    """Return an adiabatic tank of methane 2:1, lit by 10^decades watts per metre."""
    heat = float(FEED @ RATES.thermo.at(323.0)[2])
    return tank.Tank(RATES, GAS.molar_mass, 0.1, CL2, GAS.start, 0.019, 1.2, 1.5e5, FEED, heat, beam(10.0**decades), 0.0,
                     constant(0.0), constant(1.0), np.inf, 323.0)


def fed(T):
    """Return the same tank at a milliwatt, fed at `T`."""
    return lit(-5.0)._replace(feed_heat=float(FEED @ RATES.thermo.at(T)[2]))


@pytest.fixture(scope="module")
def over_light():
    return branch(lit, -6.0, 1.0, 322.0, 1300.0)


def test_the_branch_turns_where_light_no_longer_holds_the_cold_state(over_light):
    # Limit: along the arc the light first grows, then falls again, and stability is lost at the turn.
    light = np.array([point.parameter for point in over_light])
    turn = int(light.argmax())
    assert 0 < turn < len(light) - 1
    assert np.all(np.diff(light[: turn + 1]) > 0)
    assert np.all(np.diff(light[turn:]) < 0)
    stable = [point.state.stable for point in over_light]
    assert all(stable[: turn - 1])
    assert not any(stable[turn + 2:])
    assert np.all(np.diff([point.state.T for point in over_light]) > 0)


def test_every_point_of_the_branch_is_a_zero_of_both_balances(over_light):
    # Limit: the slope vanishes beside what flows through.
    for point in over_light:
        balance = tank.Balance(lit(point.parameter))
        dn, dT = balance.slope(point.state.n, point.state.T)
        assert np.abs(dn).max() < 1e-8
        assert abs(dT) < 1e-5


def test_the_ends_of_the_branch_are_the_steady_states_found_at_the_edge(over_light):
    # Limit: the scan over temperature at the first light finds both the cold state and the one in the middle.
    found = tank.steady_states(lit(-6.0), 322.0, 1300.0)
    assert approx(found[0].T, abs=1e-6) == over_light[0].state.T
    assert over_light[-1].parameter == approx(-6.0, abs=1e-9)
    assert approx(found[1].T, abs=1e-4) == over_light[-1].state.T


def test_a_branch_in_feed_temperature_passes_through_the_states_on_its_way():
    # Limit: the states that the scan finds at a feed temperature between lie on the branch.
    points = branch(fed, 300.0, 420.0, 299.0, 1300.0)
    T = np.array([point.state.T for point in points])
    feed = np.array([point.parameter for point in points])
    assert np.all(np.diff(feed) > 0)
    cold = tank.steady_states(fed(360.0), 299.0, 1300.0)[0].T
    assert np.interp(360.0, feed, T) == approx(cold, abs=0.5)


def test_a_spent_budget_is_an_error_with_a_cure():
    with pytest.raises(ConvergenceError, match=r"budget of 0 s .*solver\.seconds"):
        branch(lit, -6.0, 1.0, 322.0, 1300.0, Budget(seconds=0.0))
