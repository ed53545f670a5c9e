"""A stirred tank in an upset: followed in time from its old steady state under the changed conditions."""

from typing import NamedTuple

import numpy as np

from reactor.kernel.tank import Balance, follow
from reactor.models import assemble
from reactor.models.stirred_tank import tank_of
from reactor.upsets.elements import first_above

RESIDENCES = 15
FINE = 1e-8  # relative tolerance: what leaves is summed over the steps


class Transient(NamedTuple):
    """
    A tank after a step at time zero.

    Times [s], moles per kilogram (M, K), temperature [K], mass of gas [kg] and outflow [kg/s] of one tank;
    `feed` [mol/s] of all.
    """

    clock: np.ndarray
    n: np.ndarray
    T: np.ndarray
    mass: np.ndarray
    out: np.ndarray
    pressure: float
    tanks: int
    feed: np.ndarray

    @property
    def settled(self):
        """Return the time that was followed [s]."""
        return float(self.clock[-1])

    def first(self, limit):
        """Return when the gas first reaches a temperature [s], None if it does not."""
        return first_above(self.clock, self.T, limit)

    def peak(self):
        """Return the hottest gas and when it occurs (K, s)."""
        i = int(self.T.argmax())
        return float(self.T[i]), float(self.clock[i])

    def gas(self):
        """Return temperatures, pressures and moles per kilogram on the way."""
        return self.T, np.full(len(self.T), self.pressure), self.n

    def held(self, t):
        """Return the moles of every species inside all tanks at a time [mol]."""
        inside = self.mass[:, None] * self.n
        return self.tanks * np.array([np.interp(t, self.clock, column) for column in inside.T])

    def released(self, t):
        """Return the moles of every species that have left all tanks by a time [mol]."""
        from scipy.integrate import cumulative_simpson

        flow = self.out[:, None] * self.n
        gone = cumulative_simpson(flow, x=self.clock, axis=0, initial=0)
        more = max(0.0, t - self.clock[-1]) * flow[-1]
        return self.tanks * (np.array([np.interp(t, self.clock, column) for column in gone.T]) + more)

    def outflow(self):
        """Return the flow of every species out of all tanks at the end [mol/s]."""
        return self.tanks * self.out[-1] * self.n[-1]


def transient(case, plant, before, gas, full=None, residences=RESIDENCES):
    """
    Return the `Transient` of a tank.

    Parameters
    ----------
    case, plant : Case, Plant
        The changed tank. [-]
    before : Profile
        The steady tank before. [-]
    gas : Mechanism
        Chemistry. [-]
    full : Stream
        Unreacted gas that fills the tank instead (a lamp was out for long). [-]
    residences : float
        How long to follow it, in residence times of the feed. [-]
    """
    feed = assemble.mixed_feed(case, gas)
    tank = tank_of(case, plant, feed)
    balance = Balance(tank)
    start = before.outlet if full is None else full
    duration = residences * tank.volume * balance.density(balance.n_in, feed.temperature) / balance.mass_flow
    n, T = start.moles / start.mass(gas), start.temperature
    fine = assemble.budget(case)._replace(rtol=FINE)
    clock, n, T = follow(tank, n, T, duration, fine)
    mass = tank.volume * np.array([balance.density(*state) for state in zip(n, T, strict=True)])
    slopes = [balance.slope(*state) for state in zip(n, T, strict=True)]
    shrink = np.array([dT / t + dn.sum() / m.sum() for (dn, dT), m, t in zip(slopes, n, T, strict=True)])
    return Transient(clock, n, T, mass, balance.mass_flow + mass * shrink, tank.pressure, case.vessel.parallel, feed.moles)
