"""
How hot the gas can get, and when the dark chain takes over from the light.

Two regimes, both judged: with light the rate hardly depends on temperature (activation energy about 10
kJ/mol); in the dark the chain starts from chlorine that falls apart by heat (about 130 kJ/mol) and speeds up
thousandfold within 100 K. Above the light-off temperature, switching the lamp off stops nothing.
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from reactor import library
from reactor.errors import RangeError
from reactor.hazards.rules import fractions
from reactor.hazards.substitution import adiabatic_temperature as substituted

GAS_CONSTANT = 8.31446261815324  # J/mol/K, exact
HOTTEST = 1700.0  # K; the enthalpies of the mechanism hold up to here


def simple_rise(chlorine, heat, heat_capacity):
    """
    Return the adiabatic rise with a constant heat capacity: higher than the full one by a fifth or more.

    Parameters
    ----------
    chlorine : float
        Mole fraction of the chlorine that reacts. [-]
    heat : float
        Heat released for each mole of chlorine. [J/mol]
    heat_capacity : float
        Of the mixture at its inlet. [J/mol/K]

    Returns
    -------
    rise : float
        Adiabatic rise. [K]

    Examples
    --------
    >>> print(f"{simple_rise(1 / 6, 99660.0, 36.7):.0f}")
    453
    """
    return chlorine * heat / heat_capacity


def adiabatic_temperature(gas, before, T, after):
    """
    Return the temperature after a reaction at constant enthalpy, heat capacities varying with temperature.

    Parameters
    ----------
    gas : Mechanism
        With `enthalpy(T)`. [-]
    before, after : array, species
        Moles before and after; the atoms must agree. [mol]
    T : float
        Temperature before. [K]

    Returns
    -------
    T_ad : float
        Temperature after, up to 1700 K. [K]
    """
    H = before @ gas.enthalpy(T)

    def excess(hot):
        return after @ gas.enthalpy(hot) - H

    low, high = min(T, 200.0), HOTTEST
    if not excess(low) <= 0 <= excess(high):
        raise RangeError(
            f"adiabatic temperature: no solution between {low:.0f} and {high:.0f} K, starting from {T:.0f} K"
        )
    return crossing(excess, low, high, 1e-6)


def crossing(function, low, high, within):
    """
    Return where a function changes its sign between two places: false position, every third step a bisection.

    Parameters
    ----------
    function : callable
        Of one float; its signs at `low` and `high` differ. [-]
    low, high : float
        The two places. [-]
    within : float
        The answer is this close. [-]

    Returns
    -------
    place : float
        [-]

    Examples
    --------
    >>> print(f"{crossing(lambda x: x * x - 2.0, 0.0, 2.0, 1e-12):.12f}")
    1.414213562373
    """
    a, b, f_a, f_b, steps = low, high, function(low), function(high), 0
    while f_b != 0.0 and abs(b - a) > within:
        steps += 1
        x = b - f_b * (b - a) / (f_b - f_a) if steps % 3 else (a + b) / 2
        x = min(max(x, min(a, b) + within / 3), max(a, b) - within / 3)  # else one end would never move
        f_x = function(x)
        if f_x * f_b < 0:
            a, f_a = b, f_b
        else:
            f_a /= 2
        b, f_b = x, f_x
    return float(b)


@dataclass(frozen=True)
class Completion:
    """What happens if all the chlorine present reacts where it is, without cooling."""

    mtsr: float  # hottest temperature reached from any station [K]
    station: int
    rise: float  # from the gas temperature at that station [K]
    severity: str  # of the largest rise at any station


def complete(book, compositions, T):
    """
    Return the maximum temperature of the synthesis reaction along a profile (MTSR).

    At each station the chlorine that is left replaces hydrogen, adiabatically; the hottest outcome counts.
    The chlorine already bound stays where it is.

    Parameters
    ----------
    book : Rulebook
        From `explosive.rulebook(gas)`. [-]
    compositions : array, stations x species
        Amounts in the mechanism's order; any scale. [-]
    T : array, stations
        Gas temperature. [K]

    Returns
    -------
    completion : Completion
        MTSR, where it starts from, and the severity. [-]
    """
    x = fractions(book, compositions)
    T = np.broadcast_to(np.asarray(T, dtype=float), len(x))
    hot = substituted(book.rungs, x, T, shared=False)
    at = int(np.argmax(hot))
    return Completion(float(hot[at]), at, float(hot[at] - T[at]), severity(float(np.max(hot - T))))


def severity(rise):
    """
    Return the word for an adiabatic rise.

    Parameters
    ----------
    rise : float
        Adiabatic temperature rise. [K]

    Returns
    -------
    word : str
        small, moderate, high or very high. [-]

    References
    ----------
    .. [1] stoessel2008: thresholds 50, 200 and 400 K (memory).

    Examples
    --------
    >>> severity(364.0)
    'high'
    """
    table = library.table("hazards/severity.csv")
    return table.text("word")[max(int(np.searchsorted(table.si("rise"), rise, side="right")) - 1, 0)]


@dataclass(frozen=True)
class DarkChain:
    """
    The chain that heat alone starts, as fast as it can be: chlorine atoms in equilibrium with Cl2.

    Parameters
    ----------
    propagation : callable
        Rate constant of Cl + alkane at a temperature. [m^3/mol/s]
    equilibrium : callable
        Kc of Cl2 = 2 Cl at a temperature. [mol/m^3]
    alkane, chlorine : float
        Mole fractions. [-]
    pressure : float
        Absolute pressure. [Pa]
    heat : float
        Heat released for each mole of chlorine used. [J/mol]
    heat_capacity : float
        Of the mixture. [J/mol/K]

    Examples
    --------
    >>> chain = DarkChain(lambda T: 3.97e6 * np.exp(-1240 / T), lambda T: 4.5e8 * np.exp(-29230 / T),
    ...                   5 / 6, 1 / 6, 1.2e5, 99660.0, 36.7)
    >>> print(f"{chain.activation(573.15) / 1000:.0f} kJ/mol")
    132 kJ/mol
    """

    propagation: Callable[[float], float]
    equilibrium: Callable[[float], float]
    alkane: float
    chlorine: float
    pressure: float
    heat: float
    heat_capacity: float

    def rate(self, T):
        """Return the chlorine used at `T` [mol/m^3/s]; an upper bound, since no termination is counted."""
        total = self.pressure / (GAS_CONSTANT * T)
        atoms = np.sqrt(self.equilibrium(T) * total * self.chlorine)
        return self.propagation(T) * total * self.alkane * atoms

    def activation(self, T, step=0.5):
        """Return the local activation energy at constant concentrations, -R d ln r/d(1/T) [J/mol]."""
        low, high = (np.log(self.propagation(t) * np.sqrt(self.equilibrium(t))) for t in (T - step, T + step))
        return GAS_CONSTANT * (high - low) / (1 / (T - step) - 1 / (T + step))

    def time_to_maximum_rate(self, T):
        """Return the time to runaway of adiabatic gas, rho cp R T^2/(q E) [s]; townsend1980 (memory)."""
        rise = self.heat * self.rate(T) / (self.pressure / (GAS_CONSTANT * T) * self.heat_capacity)
        return GAS_CONSTANT * T**2 / (rise * self.activation(T))


def dark_ignition(chain, response, low=300.0, high=1000.0):
    """
    Return the thermal light-off temperature: there the dark chain runs away within the response time.

    Parameters
    ----------
    chain : DarkChain
        Rate and heat of the dark chain. [-]
    response : float
        Time in which the plant would act. [s]
    low, high : float
        Temperatures to look between. [K]

    Returns
    -------
    T : float
        Light-off temperature; nan if the chain is too slow at `high`, `low` if fast enough there. [K]
    """
    def lag(T):
        return np.log(chain.time_to_maximum_rate(T) / response)

    if lag(low) <= 0:
        return low
    return crossing(lag, low, high, 1e-3) if lag(high) < 0 else float("nan")


def heating_rate(power, heat_capacity):
    """
    Return how fast the gas warms once the cooling is lost.

    Parameters
    ----------
    power : float
        Heat released by volume. [W/m^3]
    heat_capacity : float
        Of the gas, by volume. [J/m^3/K]

    Returns
    -------
    rate : float
        Rise with time. [K/s]

    Examples
    --------
    >>> print(f"{heating_rate(129.5e3, 43.322 * 36.7):.0f}")
    81
    """
    return power / heat_capacity
