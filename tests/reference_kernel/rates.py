"""Rates of a table-driven mechanism and their exact derivatives."""

import numpy as np

from reference_kernel.thermo import R, Thermo


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
        self.thermo = Thermo(tables)
        self.net = tables.products - tables.reactants
        self.change = self.net.sum(axis=1)
        self.reversible = np.flatnonzero(tables.reversible)
        self.pressure = np.flatnonzero(tables.falloff)
        self.collider = np.flatnonzero(tables.third_body & ~tables.falloff)
        self.bodies = np.flatnonzero(tables.third_body | tables.falloff)
        self.forward = _slots(tables.reactants)
        self.backward = _slots(tables.products * tables.reversible[:, None])

    def constants(self, T, M, J, wall_loss):
        """Return the forward rate constant of every reaction, and the order in M of the fall-off reactions."""
        t, f = self.tables, self.pressure
        k = t.A * T**t.b * np.exp(-t.E / T)
        blend, order = self._falloff(T, M[f], k[f])
        k[f] *= blend
        k[self.photolysis], k[self.wall] = J, wall_loss
        return k, order

    def slopes(self, T, M):
        """Return d ln k/dT of every reaction at constant composition; the blend of fall-off by central differences."""
        t, f, step = self.tables, self.pressure, 1e-4 * T
        slope = t.b / T + t.E / T**2
        hot, cold = (self._falloff(T + d, M[f], self._high(f, T + d))[0] for d in (step, -step))
        slope[f] += (np.log(hot) - np.log(cold)) / (2 * step)
        slope[self.photolysis] = slope[self.wall] = 0.0
        return slope

    def _high(self, f, T):
        t = self.tables
        return t.A[f] * T ** t.b[f] * np.exp(-t.E[f] / T)

    def _falloff(self, T, M, high):
        """Return k/k_high by Troe's form and its order in M, for the fall-off reactions."""
        t, f = self.tables, self.pressure
        a, T3, T1, T2 = t.troe[f].T
        reduced = np.maximum(t.low_A[f] * T ** t.low_b[f] * np.exp(-t.low_E[f] / T) * M / high, 1e-300)
        center = np.maximum((1 - a) * np.exp(-T / T3) + a * np.exp(-T / T1) + np.exp(-T2 / T), 1e-300)
        log_center = np.where(a >= 1.0, 0.0, np.log10(center))
        c, n = -0.4 - 0.67 * log_center, 0.75 - 1.27 * log_center
        x = np.log10(reduced) + c
        u = x / (n - 0.14 * x)
        log_F = log_center / (1 + u**2)
        du = n / (n - 0.14 * x) ** 2
        order = 1 / (1 + reduced) - log_center * 2 * u * du / (1 + u**2) ** 2
        return reduced / (1 + reduced) * 10**log_F, order

    def equilibrium(self, T, h, g):
        """Return K_c of every reversible reaction and d ln K_c/dT."""
        net, change = self.net[self.reversible], self.change[self.reversible]
        log_K = -net @ g + change * np.log(self.thermo.p_ref / (R * T))
        return np.exp(log_K), net @ h / (R * T**2) - change / T

    def both(self, c, T, J, wall_loss):
        """Return the forward and reverse rate [mol/m3/s] of every reaction."""
        M = self.tables.efficiencies @ c
        k, _ = self.constants(T, M, J, wall_loss)
        _, _, h, g = self.thermo.at(T)
        K, _ = self.equilibrium(T, h, g)
        q_f, q_r = k * _product(c, self.forward), np.zeros_like(k)
        r = self.reversible
        q_r[r] = k[r] / K * _product(c, self.backward)[r]
        q_f[self.collider] *= M[self.collider]
        q_r[self.collider] *= M[self.collider]
        return q_f, q_r

    def production(self, c, T, J, wall_loss):
        """Return the production of every species [mol/m3/s]."""
        q_f, q_r = self.both(c, T, J, wall_loss)
        return (q_f - q_r) @ self.net

    def derivatives(self, c, T, J, wall_loss):
        """Return production w, dw/dc (K, K), dw/dT at fixed c, dw/dJ, and the reverse rates."""
        M = self.tables.efficiencies @ c
        k, falling = self.constants(T, M, J, wall_loss)
        slope, order = self.slopes(T, M), np.zeros_like(k)
        order[self.pressure] = falling
        _, _, h, g = self.thermo.at(T)
        K, K_slope = self.equilibrium(T, h, g)
        r, body = self.reversible, self.collider
        k_r, slope_r = np.zeros_like(k), slope.copy()
        k_r[r], slope_r[r] = k[r] / K, slope[r] - K_slope
        k[body] *= M[body]
        k_r[body] *= M[body]
        order[body] = 1.0
        q_f, q_r = k * _product(c, self.forward), k_r * _product(c, self.backward)
        q = q_f - q_r
        by_c = _gradient(c, self.forward, k) - _gradient(c, self.backward, k_r)
        b = self.bodies
        by_c[b] += (order[b] * q[b] / np.maximum(M[b], 1e-300))[:, None] * self.tables.efficiencies[b]
        light = self.net[self.photolysis] * _product(c, self.forward)[self.photolysis]
        return q @ self.net, self.net.T @ by_c, (slope * q_f - slope_r * q_r) @ self.net, light, q_r


def _slots(coefficients):
    """Return, for each reaction, up to three species numbers whose product is taken; K stands for one."""
    reactions, species = coefficients.shape
    slots = np.full((3, reactions), species)
    for number, row in enumerate(coefficients):
        taken = np.repeat(np.arange(species), np.rint(row).astype(int))
        slots[: len(taken), number] = taken
    return slots


def _product(c, slots):
    one = np.append(c, 1.0)
    return one[slots[0]] * one[slots[1]] * one[slots[2]]


def _gradient(c, slots, k):
    """Return d(k c c c)/dc as a dense (reactions, species) array."""
    one, number = np.append(c, 1.0), np.arange(slots.shape[1])
    full = np.zeros((slots.shape[1], len(c) + 1))
    for this, other, third in ((0, 1, 2), (1, 0, 2), (2, 0, 1)):
        full[number, slots[this]] += k * one[slots[other]] * one[slots[third]]
    return full[:, :-1]
