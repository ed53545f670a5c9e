"""A packed case at single points: slopes, exact Jacobian, totals, compositions at rest, from the compiled kernel."""

import numpy as np

from reactor.errors import ConvergenceError
from reactor.kernel import native


class Points:
    """
    One case, asked at states of our own choice.

    Parameters
    ----------
    packed : Packed
        The case; only the first section of a tube is looked at.
    """

    def __init__(self, packed):
        self.packed, self.plan = packed, packed.plan
        self.species = len(self.plan.species)
        self.batch = packed.batch(0, None, None, None)
        self.order = np.concatenate((self.plan.species, self.species + np.array([2, 1, 0])))  # the kernel's P, Tc, T

    def _call(self, task, count, y, f, totals=None, jacobian=None):
        point = native.Point(task, count, *map(native.address, (y, f, totals, jacobian)))
        done = native.library().reactor_kernel_point(native.address(self.plan.ints), native.address(self.plan.reals),
                                                     self.batch, point)
        if done < 0:
            native.memory()
        return done

    def at(self, y, jacobian=False):
        """Return the slopes at `y` = (n, T, Tc, P), the totals' slopes, and the Jacobian where asked for."""
        size = self.species + 3
        y, f, totals = np.asarray(y, float)[self.order], np.empty(size), np.empty(native.TOTALS)
        matrix = np.zeros((size, size)) if jacobian else None
        self._call(native.SLOPE, 1, y, f, totals, matrix)
        slopes, found = np.empty(size), None
        slopes[self.order] = f
        if matrix is not None:
            found = np.empty((size, size))
            found[np.ix_(self.order, self.order)] = matrix
        return slopes, totals, found

    def at_rest(self, temperatures, y, near=False):
        """
        Return compositions (M, K) at rest at held `temperatures`, and dT/dt [K/s] there, each from the one before.

        Parameters
        ----------
        temperatures : array (M,)
            Temperatures held. [K]
        y : array (K + 3,)
            State that the first one is sought from: n [mol/kg], T, Tc [K], P [Pa].
        near : bool
            Whether `y` is known to be at rest close by.
        """
        temperatures = np.atleast_1d(np.asarray(temperatures, float))
        states, f = np.empty((2, len(temperatures), self.species + 3))
        states[0], states[:, -1] = np.asarray(y, float)[self.order], temperatures
        done = self._call(native.NEAR if near else native.HELD, len(temperatures), states, f)
        if done < len(temperatures):
            raise ConvergenceError(f"the tank's composition at {temperatures[done]:.1f} K was not found; try another "
                                   "lamp power or pressure")
        compositions = np.empty((len(temperatures), self.species))
        compositions[:, self.plan.species] = states[:, :self.species]
        return compositions, f[:, -1].copy()
