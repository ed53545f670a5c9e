"""Ideal-gas heat capacity, enthalpy and entropy from polynomials of seven or nine coefficients in two ranges."""

import numpy as np

R = 8.31446261815324  # J/mol/K, exact in the SI of 2019
AVOGADRO = 6.02214076e23  # 1/mol, exact


class Thermo:
    """The polynomials of all species, read at one temperature at a time."""

    def __init__(self, tables):
        self.low, self.high, self.t_mid = tables.nasa_low, tables.nasa_high, tables.t_mid
        self.p_ref = tables.reference_pressure

    def coefficients(self, T):
        """Return the (K, 7 or 9) coefficients that hold at `T`."""
        return np.where((self.t_mid < T)[:, None], self.high, self.low)

    def at(self, T):
        """Return heat capacity [J/mol/K], its slope, enthalpy [J/mol] and g/RT of every species."""
        a = self.coefficients(T)
        powers = np.array([1.0, T, T**2, T**3, T**4])
        cp = a[:, :5] @ powers
        slope = a[:, 1:5] @ (np.array([1.0, 2.0, 3.0, 4.0]) * powers[:4])
        h = a[:, :5] @ (powers / np.array([1.0, 2.0, 3.0, 4.0, 5.0])) + a[:, 5] / T
        s = a[:, 0] * np.log(T) + a[:, 1:5] @ (powers[1:] / np.array([1.0, 2.0, 3.0, 4.0])) + a[:, 6]
        if a.shape[1] == 9:
            two, one = a[:, 7], a[:, 8]
            cp = cp + two / T**2 + one / T
            slope = slope - 2 * two / T**3 - one / T**2
            h = h - two / T**2 + one * np.log(T) / T
            s = s - two / (2 * T**2) - one / T
        return R * cp, R * slope, R * T * h, h - s
