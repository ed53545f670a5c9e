"""
A stirred tank of a photolysed gas: all steady states with their stability, and the way from a start.

Unknowns: n [mol/kg] of every species and T [K] at constant pressure and volume. At a given T the
species balances have one solution (the chain ends in second order, nothing branches); it is
followed upward in T, and every T where the heat balance closes is a steady state.
"""

import itertools
import time
import warnings
from typing import NamedTuple

import numpy as np

from reactor.errors import ConvergenceError
from reactor.kernel.plugflow import Budget
from reference_kernel.light import absorb
from reference_kernel.thermo import R


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

    def __init__(self, tank):
        self.tank = tank
        self.mass_flow = float(tank.feed @ tank.molar_mass)
        self.n_in = tank.feed / self.mass_flow
        self.species = len(self.n_in)

    def density(self, n, T):
        """Return the gas density [kg/m^3]."""
        return self.tank.pressure / (R * T * n.sum())

    def _cooling(self, T):
        """Return the heat lost to the wall [W] and its slope; the coolant warms along the wall."""
        tank = self.tank
        ua, slope = (value * tank.length for value in tank.conductance(T))
        if np.isinf(tank.coolant):
            effective, factor = ua, 1.0
        else:
            factor = np.exp(-ua / tank.coolant)
            effective = tank.coolant * (1 - factor)
        reach = T - tank.coolant_inlet
        return effective * reach, effective + factor * slope * reach

    def flows(self, n, T):
        """Return the accounts of the tank at composition `n` and temperature `T`."""
        tank, density = self.tank, self.density(n, T)
        c = density * n
        light = absorb(tank.beam, c[tank.chlorine], T)
        q_f, q_r = tank.rates.both(c, T, light.J, tank.wall_loss)
        heat = -tank.volume * (tank.rates.thermo.at(T)[2] @ ((q_f - q_r) @ tank.rates.net))
        wall = self._cooling(T)[0]
        arriving = tank.sleeve_heat * tank.length
        lamp = tank.lamp_share(T)[0] * arriving
        per_metre = (light.photons, light.power, light.outer_wall)
        return Flows(*(x * tank.length for x in per_metre), 2 * tank.volume * q_r[tank.starts].sum(), heat, wall,
                     lamp, wall + arriving - lamp, tank.volume * density / self.mass_flow)

    def slope(self, n, T):
        """Return dn/dt [mol/kg/s] and dT/dt [K/s]."""
        tank, density = self.tank, self.density(n, T)
        c = density * n
        light = absorb(tank.beam, c[tank.chlorine], T)
        w = tank.rates.production(c, T, light.J, tank.wall_loss)
        cp, _, h, _ = tank.rates.thermo.at(T)
        mass = density * tank.volume
        heat = (tank.feed_heat - tank.feed @ h - tank.volume * (h @ w) + light.power * tank.length
                + tank.lamp_share(T)[0] * tank.sleeve_heat * tank.length - self._cooling(T)[0])
        return self.mass_flow / mass * (self.n_in - n) + w / density, heat / (mass * (n @ cp))

    def jacobian(self, n, T):
        """Return the (K + 1, K + 1) Jacobian of `slope`."""
        tank, density, K, total = self.tank, self.density(n, T), self.species, n.sum()
        c = density * n
        chlorine = c[tank.chlorine]
        light = absorb(tank.beam, chlorine, T)
        w, by_c, by_T, by_J, _ = tank.rates.derivatives(c, T, light.J, tank.wall_loss)
        by_c[:, tank.chlorine] += by_J * light.by_c
        by_T = by_T + by_J * light.by_T
        carried = by_c @ c
        w_n, w_T = density * by_c - carried[:, None] / total, by_T - carried / T
        renewal, gain = self.mass_flow / (density * tank.volume), self.n_in - n
        jac = np.zeros((K + 1, K + 1))
        jac[:K, :K] = w_n / density + (w / density + renewal * gain)[:, None] / total - renewal * np.eye(K)
        jac[:K, K] = w_T / density + (w / density + renewal * gain) / T
        cp, cp_slope, h, _ = tank.rates.thermo.at(T)
        c_n = np.full(K, -chlorine / total)
        c_n[tank.chlorine] += density
        wall, wall_T = self._cooling(T)
        share, share_T = (x * tank.sleeve_heat * tank.length for x in tank.lamp_share(T))
        heat = (tank.feed_heat - tank.feed @ h - tank.volume * (h @ w) + light.power * tank.length + share - wall)
        power_T = light.power_by_T - light.power_by_c * chlorine / T
        heat_n = -tank.volume * (h @ w_n) + light.power_by_c * tank.length * c_n
        heat_T = (-tank.feed @ cp - tank.volume * (cp @ w + h @ w_T) + power_T * tank.length + share_T - wall_T)
        capacity, rise = density * tank.volume * (n @ cp), heat / (density * tank.volume * (n @ cp))
        jac[K, :K] = heat_n / capacity - rise * (cp / (n @ cp) - 1 / total)
        jac[K, K] = heat_T / capacity - rise * ((n @ cp_slope) / (n @ cp) - 1 / T)
        return jac


def species_at(balance, T, n, budget):
    """
    Return the steady composition at a held temperature, starting from `n`.

    Newton's rule damped by a time step that grows as the balance closes (pseudo-transient), kept positive. It
    ends when nothing moves by 1e-9, or when traces move by less than 1e-6 and no less than before: rounding.
    """
    K, step, last = balance.species, 1e-3, np.inf
    change, _ = balance.slope(n, T)
    for _ in range(budget.steps):
        matrix = np.eye(K) / step - balance.jacobian(n, T)[:K, :K]
        new = n + np.linalg.solve(matrix, change)
        if new.min() < -1e-3 * np.abs(n).max():
            step *= 0.2
            continue
        new = np.maximum(new, 0.0)
        size = float((np.abs(new - n) / (np.abs(new) + 1e-14)).max())
        n, (change, _) = new, balance.slope(new, T)
        if step > 1e6 and (size < 1e-9 or 0.5 * last < size < 1e-6):
            return n
        last = size
        step = min(step * 4.0, 1e12)
    raise ConvergenceError(f"the tank's composition at {T:.1f} K was not found; try another lamp power or pressure")


def steady_states(tank, low, high, budget=Budget(), points=90):
    """
    Return every steady state between the temperatures `low` and `high` [K], coldest first.

    Raises
    ------
    ConvergenceError
        When the composition at some temperature is not found within the budget, or no state exists.
    """
    balance, began = Balance(tank), time.monotonic()
    curve = _Curve(balance, budget, began)
    grid = list(np.linspace(low, high, points))
    values = [curve(T) for T in grid]
    brackets = [(a, b) for (a, x), (b, y) in _pairs(grid, values) if x * y <= 0]
    brackets += _near_misses(curve, grid, values)
    if not brackets:
        raise ConvergenceError(f"no steady state between {low:.0f} and {high:.0f} K; check cooling and lamp heat")
    return [_polish(balance, curve, a, b) for a, b in sorted(brackets)]


def _pairs(grid, values):
    both = list(zip(grid, values, strict=True))
    return itertools.pairwise(both)


def _near_misses(curve, grid, values):
    """Return brackets of two roots that hide between grid points, where the heat balance bends towards zero."""
    found = []
    for i in range(1, len(grid) - 1):
        a, b, c = values[i - 1 : i + 2]
        if a * b > 0 and b * c > 0 and abs(b) < abs(a) and abs(b) < abs(c):
            fine = np.linspace(grid[i - 1], grid[i + 1], 41)
            inner = [curve(T) for T in fine]
            found += [(p, q) for (p, x), (q, y) in _pairs(fine, inner) if x * y <= 0]
    return found


class _Curve:
    """Heat balance against temperature, warm-started from the nearest composition already known."""

    def __init__(self, balance, budget, began):
        self.balance, self.budget, self.began, self.known = balance, budget, began, {}

    def composition(self, T):
        """Return the steady composition at `T`."""
        if time.monotonic() - self.began > self.budget.seconds:
            raise ConvergenceError(f"the budget of {self.budget.seconds:g} s was used up at {T:.1f} K; "
                                   "raise solver.seconds")
        if T not in self.known:
            near = min(self.known, key=lambda t: abs(t - T), default=None)
            guess = self.balance.n_in if near is None else self.known[near]
            self.known[T] = species_at(self.balance, T, guess, self.budget)
        return self.known[T]

    def __call__(self, T):
        return self.balance.slope(self.composition(T), T)[1]


def _polish(balance, curve, low, high):
    """Return the steady state in a bracket: root of the heat balance, then Newton on everything."""
    from scipy.optimize import brentq

    T = low if low == high else brentq(curve, low, high, xtol=1e-9, rtol=1e-14)
    n = curve.composition(T)
    for _ in range(4):
        change = np.append(*balance.slope(n, T))
        move = np.linalg.solve(balance.jacobian(n, T), -change)
        n, T = np.maximum(n + move[:-1], 0.0), T + move[-1]
    growth = float(np.linalg.eigvals(balance.jacobian(n, T)).real.max())
    return State(n, float(T), growth < 0, growth)


def follow(tank, n, T, duration, budget=Budget()):
    """
    Return times [s], n (M, K) and T (M,) of the tank from a start until `duration` [s].

    Raises
    ------
    ConvergenceError
        When the budget of steps or seconds is used up; says at which time.
    """
    from scipy.integrate import LSODA

    balance, began = Balance(tank), time.monotonic()
    tolerance = np.append(np.full(len(n), 1e-14), 1e-7)
    solver = LSODA(lambda t, y: np.append(*balance.slope(y[:-1], y[-1])), 0.0, np.append(n, T), duration,
                   rtol=1e-7, atol=tolerance, jac=lambda t, y: balance.jacobian(y[:-1], y[-1]))
    times, states = [0.0], [solver.y.copy()]
    while solver.status == "running":
        with warnings.catch_warnings():  # a step that fails says so in its status
            warnings.simplefilter("ignore")
            message = solver.step()
        if solver.status == "failed" or time.monotonic() - began > budget.seconds or len(times) > budget.steps:
            raise ConvergenceError(f"the tank could not be followed beyond {solver.t:.4g} s ({message or 'budget'}); "
                                   "raise solver.seconds")
        times.append(solver.t)
        states.append(solver.y.copy())
    states = np.array(states)
    return np.array(times), states[:, :-1], states[:, -1]
