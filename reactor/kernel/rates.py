"""Rates of a table-driven mechanism and their exact derivatives, from the compiled kernel."""

import functools

import numpy as np

from reactor.kernel import native
from reactor.kernel.plan import plan


class Rates:
    """
    Forward and reverse rates of every reaction, and the production of every species.

    Parameters
    ----------
    tables : record of arrays in mol, m3, s, K
        Stoichiometry, Arrhenius numbers, third bodies, fall-off and thermo polynomials.
    photolysis, wall : int
        The two first-order steps whose rate constants [1/s] come from the case.
    """

    def __init__(self, tables, photolysis, wall):
        self.tables, self.photolysis, self.wall = tables, photolysis, wall
        self.net = tables.products - tables.reactants
        self._plans = {}

    def plan(self, chlorine, starts):
        """Return the kernel's plan for an absorbing species and the steps that count as thermal starts."""
        key = (int(chlorine), tuple(int(s) for s in starts))
        if key not in self._plans:
            self._plans[key] = plan(self.tables, self.photolysis, self.wall, *key)
        return self._plans[key]

    @functools.cached_property
    def _own(self):
        """Return the plan for rates at a point, with A and the low-pressure A in its order, and the way back."""
        absorber = int(np.argmax(self.tables.reactants[self.photolysis]))
        own = self.plan(absorber, ())
        back = np.argsort(own.species)
        A, low_A = self.tables.A[own.reactions].astype(float), self.tables.low_A[own.falloffs].astype(float)
        return own, A, low_A, (back, back[:, None])

    def _at(self, c, T, J, wall_loss, slopes=False):
        own, A, low_A, _ = self._own
        K, R = len(own.species), len(own.reactions)
        c = np.ascontiguousarray(np.asarray(c, float)[own.species])
        out = np.empty(5 * K + 2 * R)
        more = np.zeros(K * K + 2 * K) if slopes else None
        part = [out.ctypes.data + 8 * n for n in (0, K, 2 * K, 3 * K, 4 * K, 4 * K + R, 4 * K + 2 * R)]
        base = None if more is None else more.ctypes.data
        tail = (None, None, None) if base is None else (base, base + 8 * K * K, base + 8 * (K * K + K))
        record = native.RatesAt(*map(native.address, (A, low_A, c)), T, J, wall_loss, *part, *tail)
        if not native.library().reactor_kernel_rates(native.address(own.ints), native.address(own.reals), record):
            native.memory()
        return own, out, more

    def both(self, c, T, J, wall_loss):
        """Return the forward and reverse rate [mol/m3/s] of every reaction."""
        own, out, _ = self._at(c, T, J, wall_loss)
        return self._steps(own, out)

    def _steps(self, own, out):
        K, R = len(own.species), len(own.reactions)
        q = np.empty((2, R))
        q[:, own.reactions] = out[4 * K:4 * K + 2 * R].reshape(2, R)
        return q[0], q[1]

    def production(self, c, T, J, wall_loss):
        """Return the production of every species [mol/m3/s]."""
        own, out, _ = self._at(c, T, J, wall_loss)
        return self._species(own, out[-len(own.species):])

    def constants(self, T):
        """Return the forward rate constant of every reaction at [M] = 1, and Kc (inf where there is no reverse)."""
        c = np.zeros(self.net.shape[1])
        c[:] = 1.0 / len(c)
        forward, reverse = self.both(c, T, 0.0, 0.0)
        scale = len(c) ** self.tables.reactants.sum(axis=1)
        with np.errstate(divide="ignore", invalid="ignore"):
            return forward * scale, forward / reverse * len(c) ** -self.net.sum(axis=1)

    @property
    def thermo(self):
        """Return the thermo of the species, read by `at`."""
        return Thermo(self)

    def derivatives(self, c, T, J, wall_loss):
        """Return production w, dw/dc (K, K), dw/dT at fixed c, dw/dJ, and the reverse rates."""
        own, out, more = self._at(c, T, J, wall_loss, slopes=True)
        K = len(own.species)
        columns, rows = self._own[3]
        by_c = more[:K * K].reshape(K, K)[rows, columns]
        by_T, by_J = (self._species(own, more[K * K + i * K:K * K + (i + 1) * K]) for i in range(2))
        return self._species(own, out[-K:]), by_c, by_T, by_J, self._steps(own, out)[1]

    @staticmethod
    def _species(own, values):
        sorted_back = np.empty(len(values))
        sorted_back[own.species] = values
        return sorted_back


class Thermo:
    """Heat capacity and enthalpy of the species of `rates`."""

    def __init__(self, rates):
        self.rates = rates

    def at(self, T):
        """Return heat capacity [J/mol/K], its slope, enthalpy [J/mol] and g/RT of every species at `T` [K]."""
        own, out, _ = self.rates._at(np.ones(self.rates.net.shape[1]), T, 0.0, 0.0)
        K = len(own.species)
        return tuple(self.rates._species(own, out[i * K:(i + 1) * K]) for i in range(4))
