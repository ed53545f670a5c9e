"""
A stirred tank of a photolysed gas: all steady states with their stability, and the way from a start.

Unknowns: n [mol/kg] of every species and T [K] at constant pressure and volume. At a given T the
species balances have one solution (the chain ends in second order, nothing branches); it is
followed upward in T, and every T where the heat balance closes is a steady state. The balances are those of the
tube, evaluated by the same compiled functions.
"""

import time
from typing import NamedTuple

import numpy as np

from reactor.errors import ConvergenceError
from reactor.kernel import native
from reactor.kernel.pack import Packed
from reactor.kernel.plugflow import Budget
from reactor.kernel.points import Points
from reactor.kernel.thermo import R


class Tank(NamedTuple):
    """
    One stirred tank as plain numbers.

    `feed` [mol/s] with the enthalpy flow `feed_heat` [W]; `light` is a beam per metre of `length`, averaged
    over the vessel; `conductance` [W/m/K] and `lamp_share` are curves of T; `coolant` [W/K] is the heat
    capacity flow of the coolant (inf: constant temperature) that enters at `coolant_inlet` [K].
    """

    rates: object
    molar_mass: np.ndarray
    wall_loss: float
    chlorine: int
    starts: np.ndarray
    volume: float
    length: float
    pressure: float
    feed: np.ndarray
    feed_heat: float
    beam: object
    sleeve_heat: float
    conductance: object
    lamp_share: object
    coolant: float
    coolant_inlet: float


class State(NamedTuple):
    """One steady state: n [mol/kg], T [K], whether small disturbances die out, and the fastest growth [1/s]."""

    n: np.ndarray
    T: float
    stable: bool
    growth_rate: float


class Flows(NamedTuple):
    """What goes on in the tank, in W and mol/s, for the accounts."""

    photons: float
    photon_power: float
    outer_wall: float
    thermal_starts: float
    heat_reaction: float
    to_wall: float
    lamp_heat: float
    coolant: float
    time: float


class Balance:
    """Rates of change of n and T in the tank, their exact Jacobian, and the accounts."""

    def __init__(self, tank, budget=Budget()):
        self.tank = tank
        self.mass_flow = float(tank.feed @ tank.molar_mass)
        self.n_in = tank.feed / self.mass_flow
        self.species = len(self.n_in)
        packed = Packed(tank.rates.plan(tank.chlorine, tank.starts), tank=True)
        packed.tank_case(tank, self.n_in, 300.0, 1.0, budget)
        self.points = Points(packed)
        self.kept = np.arange(self.species + 1)  # n and T; coolant inlet and pressure do not move

    def density(self, n, T):
        """Return the gas density [kg/m^3]."""
        return self.tank.pressure / (R * T * n.sum())

    def _state(self, n, T):
        return np.concatenate((n, (T, self.tank.coolant_inlet, self.tank.pressure)))

    def flows(self, n, T):
        """Return the accounts of the tank at composition `n` and temperature `T`."""
        return Flows(*self.points.at(self._state(n, T))[1].tolist())

    def slope(self, n, T):
        """Return dn/dt [mol/kg/s] and dT/dt [K/s]."""
        f = self.points.at(self._state(n, T))[0]
        return f[:self.species], float(f[self.species])

    def jacobian(self, n, T):
        """Return the (K + 1, K + 1) Jacobian of `slope`."""
        return self.points.at(self._state(n, T), jacobian=True)[2][np.ix_(self.kept, self.kept)]

    def at_rest(self, temperatures, n, near=False):
        """
        Return the compositions (M, K) at rest at held `temperatures`, and dT/dt [K/s] there.

        The first is sought from `n` (`near`: known to be at rest close by), each further one from the one before.

        Raises
        ------
        ConvergenceError
            When the composition at one of the temperatures is not found.
        """
        try:
            return self.points.at_rest(temperatures, self._state(n, 300.0), near)
        except ConvergenceError:
            if not near:
                raise
            return self.points.at_rest(temperatures, self._state(self.n_in, 300.0))


def steady_states(tank, low, high, budget=Budget(), points=90):
    """
    Return every steady state between the temperatures `low` and `high` [K], coldest first.

    Raises
    ------
    ConvergenceError
        When the composition at some temperature is not found within the budget, or no state exists.
    """
    balance, began = Balance(tank, budget), time.monotonic()
    grid = np.linspace(low, high, points)
    curve = _Curve(balance, budget, began)
    values = curve.scan(grid, balance.n_in)
    brackets = _crossings(grid, values) + _near_misses(curve, grid, values)
    if not brackets:
        raise ConvergenceError(f"no steady state between {low:.0f} and {high:.0f} K; check cooling and lamp heat")
    return [polish(balance, *curve.root(a, b)) for a, b in sorted(brackets)]


def _crossings(grid, values):
    return [(float(grid[i]), float(grid[i + 1])) for i in np.flatnonzero(values[:-1] * values[1:] <= 0)]


def _near_misses(curve, grid, values):
    """Return brackets of two roots that hide between grid points, where the heat balance bends towards zero."""
    found = []
    for i in range(1, len(grid) - 1):
        a, b, c = values[i - 1:i + 2]
        if a * b > 0 and b * c > 0 and abs(b) < abs(a) and abs(b) < abs(c):
            fine = np.linspace(grid[i - 1], grid[i + 1], 41)
            found += _crossings(fine, curve.scan(fine, curve.known[float(grid[i - 1])]))
    return found


class _Curve:
    """Heat balance against temperature, warm-started from the nearest composition already known."""

    def __init__(self, balance, budget, began):
        self.balance, self.budget, self.began, self.known = balance, budget, began, {}

    def scan(self, temperatures, n):
        """Return dT/dt at rest at each of the temperatures, in one go from `n`."""
        if time.monotonic() - self.began > self.budget.seconds:
            raise ConvergenceError(f"the budget of {self.budget.seconds:g} s was used up at {temperatures[0]:.1f} K; "
                                   "raise solver.seconds")
        compositions, slopes = self.balance.at_rest(temperatures, n, near=bool(self.known))
        self.known.update(zip(map(float, temperatures), compositions, strict=True))
        return slopes

    def __call__(self, T):
        near = min(self.known, key=lambda t: abs(t - T))
        return float(self.scan(np.array([T]), self.known[near])[0])

    def root(self, low, high):
        """Return the composition and temperature where the heat balance closes in a bracket, close to rounding."""
        from scipy.optimize import brentq

        T = low if low == high else brentq(self, low, high, xtol=1e-6, rtol=1e-12)
        self(T)
        return self.known[T], T


def polish(balance, n, T):
    """Return the `State` that Newton's rule on all unknowns reaches from a point close by."""
    for _ in range(4):
        change = np.append(*balance.slope(n, T))
        move = np.linalg.solve(balance.jacobian(n, T), -change)
        n, T = np.maximum(n + move[:-1], 0.0), T + move[-1]
    growth = float(np.linalg.eigvals(balance.jacobian(n, T)).real.max())
    return State(n, float(T), growth < 0, growth)


def follow(tank, n, T, duration, budget=Budget(rtol=1e-7)):
    """
    Return times [s], n (M, K) and T (M,) of the tank from a start until `duration` [s].

    Raises
    ------
    ConvergenceError
        When the budget of steps or seconds is used up; says at which time.
    """
    plan, K = tank.rates.plan(tank.chlorine, tank.starts), len(tank.molar_mass)
    packed = Packed(plan, tank=True)
    packed.tank_case(tank, n, T, duration, budget)
    results, counts, rows = native.march(plan, packed, 1, 1)
    if counts[0, 0]:
        why = native.reason(counts[0, 0], results[0], budget, "t = {z:.4g} s, T = {T:.1f} K")
        raise ConvergenceError(f"the tank could not be followed beyond {results[0, 0]:.4g} s: {why}")
    kept = rows[0]
    states = np.empty((len(kept), K))
    states[:, plan.species] = np.maximum(kept[:, 2:K + 2], 0.0)
    return kept[:, 0].copy(), states, kept[:, K + 4].copy()
