"""One stirred tank: every steady state with its stability, and the one that the case's start leads to."""

import numpy as np

from reactor.kernel.light import absorb
from reactor.kernel.plugflow import TOTALS
from reactor.kernel.rates import Rates
from reactor.kernel.tank import Balance, Tank, follow, steady_states
from reactor.models import assemble
from reactor.models.profile import Profile
from reactor.stream import Stream

RESIDENCES = 50  # residence times followed from the start before the nearest steady state is named


def solve(case, plant, look_further=True):
    """
    Return the solved tank as a `Profile` of one station.

    Parameters
    ----------
    case : Case
        The checked case.
    plant : Plant
        Chemistry, light and heat exchange of one tank.
    look_further : bool
        Without meaning here: all steady states are always found.

    Raises
    ------
    ConvergenceError
        When a composition or the way from the start is not found within the budget.
    """
    gas = plant.gas
    feed = assemble.mixed_feed(case, gas)
    tank = tank_of(case, plant, feed)
    budget = assemble.budget(case)
    low, high = reach(tank, feed, gas)
    states = steady_states(tank, low, high, budget)
    number, remark = reached(case, tank, states, feed, gas, budget)
    return profile_of(case, gas, tank, feed, states, number, remark)


def tank_of(case, plant, feed):
    """Return the tank as the kernel wants it."""
    gas, light, wall, share = plant.gas, plant.light, plant.wall, 1.0 / case.vessel.parallel
    rates = Rates(gas.tables, gas.photolysis, gas.wall)
    beam = assemble.beams(light, case.chemistry.photolysis_rate, plant.even)[0]
    beam = beam._replace(fixed=case.chemistry.photolysis_rate)
    return Tank(rates, gas.molar_mass, plant.wall_loss, gas.index["Cl2"], gas.start, light.area * case.vessel.length,
                case.vessel.length, case.vessel.pressure, feed.moles * share, feed.enthalpy(gas) * share, beam,
                float(light.sleeve_heat[0]), wall.conductance, wall.lamp_share, plant.coolant,
                case.cooling.inlet or feed.temperature)


def reach(tank, feed, gas):
    """Return temperatures below and above which no steady state can lie [K]."""
    low = min(feed.temperature, tank.coolant_inlet)
    chlorine = feed.moles[gas.index["Cl2"]]
    capacity = feed.moles @ gas.heat_capacity(feed.temperature)
    warm = tank.sleeve_heat * tank.length + 4e5 * 1e-3 * chlorine
    rise = (1.5e5 * chlorine + warm) / capacity  # no step of the chain frees more than 1.4e5 J per mol of chlorine
    return low - 1.0, max(feed.temperature, tank.coolant_inlet) + rise + 20.0


def reached(case, tank, states, feed, gas, budget):
    """Return the number of the steady state that the start leads to, and the sentence that says so."""
    stable = [i for i, state in enumerate(states) if state.stable]
    if len(states) == 1:
        return 0, "the tank has one steady state"
    if case.vessel.start == "hot":
        return stable[-1], f"{len(states)} steady states; the start is hot, so the hottest stable one is reported"
    mass = feed.mass(gas) / case.vessel.parallel
    duration = RESIDENCES * Balance(tank).flows(feed.moles / feed.mass(gas), feed.temperature).time
    _, _, T = follow(tank, tank.feed / mass, feed.temperature, duration, budget)
    nearest = min(stable, key=lambda i: abs(states[i].T - T[-1]))
    return nearest, (f"{len(states)} steady states; filled with unreacted feed and lit, the tank goes to the one at "
                     f"{states[nearest].T:.1f} K")


def profile_of(case, gas, tank, feed, states, number, remark):
    """Return the tank in one of its steady states as a profile of one station."""
    tanks, state = case.vessel.parallel, states[number]
    flows = Balance(tank).flows(state.n, state.T)
    totals = {name: np.array([getattr(flows, name) * (1 if name == "time" else tanks)]) for name in TOTALS}
    moles = state.n * feed.mass(gas)
    outlet = Stream("outlet", moles, state.T, tank.pressure)
    feeds = (*assemble.at_inlet(case, gas), *(stream for _, stream in assemble.injections(case, gas)))
    c = Balance(tank).density(state.n, state.T) * state.n[tank.chlorine]
    J = absorb(tank.beam, c, state.T).J
    coolant = tank.coolant_inlet + (0.0 if np.isinf(tank.coolant) else flows.coolant / tank.coolant)
    return Profile("stirred tank", gas.species, np.array([case.vessel.length]), moles[None, :], np.array([state.T]),
                   np.array([coolant]), np.array([tank.pressure]), np.array([J]), totals,
                   (state.T, case.vessel.length), feeds, feed, outlet, tank.volume * tanks, tuple(states), (remark,),
                   {"rtol": case.solver.rtol})
