"""Equal stirred tanks in series: each is fed with what leaves the last, with its own lamps and jacket."""

from dataclasses import replace

import numpy as np

from reactor.kernel.plugflow import TOTALS
from reactor.kernel.tank import Balance, steady_states
from reactor.models import assemble
from reactor.models.profile import Profile
from reactor.models.stirred_tank import profile_of, reach, reached, tank_of
from reactor.stream import Stream


def solve(case, plant, look_further=True):
    """
    Return the solved chain as a `Profile` with one station a tank.

    Parameters
    ----------
    case : Case
        The checked case; sizes and lamps are those of each tank.
    plant : Plant
        Chemistry, light and heat exchange of one tank.
    look_further : bool
        Without meaning here: all steady states of each tank are always found.

    Raises
    ------
    ConvergenceError
        When a composition or the way from the start is not found within the budget.
    """
    feed = inlet = assemble.mixed_feed(case, plant.gas)
    cells = []
    for number in range(1, case.vessel.tanks + 1):
        cells.append(_cell(case, plant, feed, number))
        feed = cells[-1].outlet
    return _chain(case, plant.gas, inlet, cells)


def _cell(case, plant, feed, number):
    """Return the profile of one tank of the chain."""
    gas, budget = plant.gas, assemble.budget(case)
    tank = tank_of(case, plant, feed)
    low, high = reach(tank, feed, gas)
    low = min(low, _coolest(case, feed) - 1.0)
    states = steady_states(tank, low, high, budget)
    chosen, remark = reached(case, tank, states, feed, gas, budget)
    one = profile_of(case, gas, tank, feed, states, chosen, f"tank {number}: {remark}")
    flows = Balance(tank).flows(states[chosen].n, states[chosen].T)
    totals = {
        name: np.array([getattr(flows, name) * (1 if name == "time" else case.vessel.parallel)])
        for name in TOTALS
    }
    return replace(one, totals=totals)


def _coolest(case, feed):
    """Return the lowest temperature that a tank without reaction can take [K]."""
    return min(feed.temperature, case.cooling.inlet or feed.temperature)


def _chain(case, gas, inlet, cells):
    """Join the tanks to one profile."""
    totals = {name: np.cumsum([cell.total(name) for cell in cells]) for name in TOTALS}
    T = np.array([cell.temperature[0] for cell in cells])
    z = case.vessel.length * np.arange(1, len(cells) + 1)
    column = {
        name: np.array([getattr(cell, name)[0] for cell in cells])
        for name in ("coolant", "pressure", "photolysis")
    }
    last = cells[-1].outlet
    hottest = int(T.argmax())
    return Profile(
        "tanks in series",
        gas.species,
        z,
        np.array([cell.moles[0] for cell in cells]),
        T,
        column["coolant"],
        column["pressure"],
        column["photolysis"],
        totals,
        (float(T[hottest]), float(z[hottest])),
        cells[0].feeds,
        inlet,
        Stream("outlet", last.moles, last.temperature, last.pressure),
        sum(cell.volume for cell in cells),
        max((cell.states for cell in cells), key=len),
        tuple(remark for cell in cells for remark in cell.remarks),
        {"rtol": case.solver.rtol},
    )
