"""
The slate is linear: x = expm(K xi) x0, whatever the light; xi is the exposure, the integral of [Cl] dt.

Every radical gives one product, so a molecule passes on at its rate with Cl and nothing else counts: no light, no
radical levels, no stiffness. In a stirred tank (1 - K xi) x = x0. Holds while no chlorine is lost beside a free
carbon (below some 420 K) and no chlorine-free end of a radical counts.
"""

from functools import cached_property

import numpy as np

from reactor.chemistry.network import names
from reactor.chemistry.network.tree import molecule
from reactor.errors import RangeError

MANY = 300.0  # hits; beyond, the series is long and exp(-hits) small
SCALE = 1e-12  # cm3/molecule/s; exposures are counted in 1/SCALE
LOSS_COUNTS = 420.0  # K; above it loss of a chlorine beside the free carbon competes with Cl2


class Slate:
    """
    The substitution products of a feed at one temperature.

    Parameters
    ----------
    network : Network
        Molecules and steps.
    feed : dict of float
        Amounts by canonical code; any scale. [-]
    T : float
        Temperature. [K]
    """

    def __init__(self, network, feed, T):
        self.network, self.T = network, T
        self.codes = network.molecules
        self.keys = tuple(names.key(code) for code in self.codes)
        at = {code: i for i, code in enumerate(self.codes)}
        self.chlorine = np.array([sum(molecule(code).chlorine) for code in self.codes], dtype=float)
        self.start = np.zeros(len(self.codes))
        for code, amount in feed.items():
            self.start[at[code]] += amount
        self.start /= self.start.sum()
        self.K = np.zeros((len(self.codes),) * 2)
        for step in network.steps:
            k = step.rate(T) / SCALE
            self.K[at[step.parent], at[step.parent]] -= k
            self.K[at[step.product], at[step.parent]] += k

    @cached_property
    def fed_chlorine(self):
        """Return the chlorine atoms in a mole of feed."""
        return float(self.chlorine @ self.start)

    def tube(self, exposure):
        """Return the amounts after plug flow, a mole fed [mol], for an exposure in 1e12 s molecule/cm3."""
        events = -self.K.diagonal().min() * exposure  # mean number of hits of the most reactive molecule
        if events > MANY:
            from scipy.linalg import expm

            return expm(self.K * exposure) @ self.start
        term = self.start * np.exp(-events)  # hits fall as a Poisson series: all terms are positive, none cancels
        total, hop = term.copy(), np.eye(len(self.start)) + self.K * (exposure / max(events, 1e-300))
        for number in range(1, int(events + 9.0 * events**0.5 + 25.0)):
            term = hop @ term * (events / number)
            total += term
        return total

    def tank(self, exposure):
        """Return the amounts that leave a stirred tank, a mole fed [mol]."""
        return np.linalg.solve(np.eye(len(self.codes)) - self.K * exposure, self.start)

    def uptake(self, amounts):
        """Return the chlorine molecules taken up, a mole fed [mol]."""
        return float(amounts @ self.chlorine) - self.fed_chlorine

    def at_uptake(self, chlorine, kind="tube"):
        """
        Return the amounts when a given amount of chlorine has been taken up, and the exposure.

        Parameters
        ----------
        chlorine : float
            Molecules of chlorine taken up by a molecule of feed. [-]
        kind : str
            tube or tank.

        Raises
        ------
        RangeError
            When the products of this network cannot take up so much.
        """
        make, most = getattr(self, kind), self.most()
        if not 0.0 < chlorine < most:
            raise RangeError(
                f"a mole of this feed takes up between 0 and {most:.3g} mol of chlorine in products with up to "
                f"{self.network.chlorines} chlorine atoms; got {chlorine:.3g}: raise the ratio or --chlorines"
            )
        return self._solve(make, lambda x: self.uptake(x) - chlorine)

    def at_conversion(self, conversion, kind="tube"):
        """
        Return the amounts when a share of what was fed is converted, and the exposure.

        Parameters
        ----------
        conversion : float
            Share of the feed molecules that have reacted. [-]
        kind : str
            tube or tank.
        """
        fed = self.start > 0
        return self._solve(getattr(self, kind), lambda x: 1.0 - x[fed].sum() - conversion)

    def most(self):
        """Return the uptake when nothing more can react, after an exposure without end."""
        slowest = float(np.min(-self.K.diagonal()[self.K.diagonal() < 0], initial=np.inf))
        return self.uptake(self.tank(1e9 / slowest))

    def _solve(self, make, excess):
        """Return amounts and exposure where a rising function of the amounts passes zero."""
        from scipy.optimize import brentq

        high = 1.0 / max(float(-np.diag(self.K) @ self.start), 1e-30)
        while excess(make(high)) < 0.0:
            high *= 2.0
            if high > 1e12:
                raise RangeError("this network cannot reach so far: raise --chlorines or ask for less")
        exposure = float(brentq(lambda xi: excess(make(xi)), 0.0, high, xtol=1e-14 * high, rtol=1e-10))
        return make(exposure), exposure

    def curve(self, conversions, kind="tube"):
        """Return the amounts at several conversions of the feed, one row each [mol a mole fed]."""
        return np.array([self.at_conversion(float(c), kind)[0] for c in conversions])
