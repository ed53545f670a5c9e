"""
Classical criteria of thermal runaway, for any chain that gives its rate and activation energy.

A chain has `rate(T)` [mol chlorine/m^3/s], `activation(T)` [J/mol], `heat` [J/mol chlorine], `heat_capacity`
[J/mol/K], `chlorine` (mole fraction) and `pressure` [Pa]: `exotherm.DarkChain`, or the lit chain of a model.
Each criterion is asked in both regimes. With light the activation energy is about 10 kJ/mol and these
criteria hardly ever strike; what strikes then is the rise itself.

Screening values: one reaction, its order in chlorine taken as one, the gas otherwise as fed.
"""

import math

import numpy as np

from reactor.hazards.exotherm import GAS_CONSTANT as R

SEMENOV = 1 / math.e
STAGNANT = {"slab": 0.878, "cylinder": 2.0, "sphere": 3.32}


def semenov(chain, T, conductance):
    """
    Return Semenov's number of a well mixed gas at the wall temperature; above 1/e it runs away.

    Parameters
    ----------
    chain : object
        The chain. [-]
    T : float
        Wall temperature. [K]
    conductance : float
        Heat transfer coefficient times surface over volume. [W/m^3/K]

    Returns
    -------
    psi : float
        Heat released over heat removed, by a rise of R T^2/E. [-]

    References
    ----------
    .. [1] semenov1928 (memory): critical 1/e.
    """
    return chain.heat * chain.rate(T) * chain.activation(T) / (conductance * R * T**2)


def frank_kamenetskii(chain, T, radius, conductivity):
    """
    Return Frank-Kamenetskii's number of stagnant gas; critical 0.878 slab, 2.00 cylinder, 3.32 sphere.

    Parameters
    ----------
    chain : object
        The chain. [-]
    T : float
        Wall temperature. [K]
    radius : float
        Radius, or half the width of a slab. [m]
    conductivity : float
        Thermal conductivity of the gas. [W/m/K]

    Returns
    -------
    delta : float
        Dimensionless heat release. [-]

    References
    ----------
    .. [1] frankkamenetskii1969 (memory). Convection is left out, which errs to the cautious side.
    """
    return chain.heat * chain.rate(T) * chain.activation(T) * radius**2 / (conductivity * R * T**2)


def critical_wall(number, critical, low=300.0, high=1000.0):
    """
    Return the wall temperature at which a rising number reaches its critical value.

    Parameters
    ----------
    number : callable
        Semenov's or Frank-Kamenetskii's number of the wall temperature. [-]
    critical : float
        Its critical value. [-]
    low, high : float
        Temperatures to look between. [K]

    Returns
    -------
    T : float
        Critical wall temperature; nan where `high` is still below, `low` where that is already beyond. [K]
    """
    from scipy.optimize import brentq

    def beyond(T):
        return np.log(max(number(T), 1e-300) / critical)

    if beyond(low) >= 0:
        return low
    return float(brentq(beyond, low, high, xtol=1e-3)) if beyond(high) > 0 else float("nan")


def tube_numbers(chain, T, rise, conductance):
    """
    Return S and N of a tube whose wall stands at a temperature.

    Parameters
    ----------
    chain : object
        The chain. [-]
    T : float
        Wall temperature. [K]
    rise : float
        Adiabatic rise of the feed. [K]
    conductance : float
        Heat transfer coefficient times surface over volume. [W/m^3/K]

    Returns
    -------
    S, N : float
        Rise times E/(R T^2); cooling over the heating by a first-order reaction. [-]
    """
    total = chain.pressure / (R * T)
    constant = chain.rate(T) / (total * chain.chlorine)
    return rise * chain.activation(T) / (R * T**2), conductance / (total * chain.heat_capacity * constant)


def van_welsenaere_froment(S):
    """
    Return the least N/S that keeps a first-order tube from runaway.

    The criterion of the hot spot is S = 1 + sqrt(N/e) + N/e.

    Parameters
    ----------
    S : float
        Dimensionless adiabatic rise, more than 1. [-]

    Returns
    -------
    ratio : float
        Critical N/S; 0 where S does not exceed 1. [-]

    References
    ----------
    .. [1] welsenaere1970 (formula memory).

    Examples
    --------
    >>> print(f"{van_welsenaere_froment(20.0):.2f}")
    2.05
    """
    if S <= 1:
        return 0.0
    root = (-1 + np.sqrt(1 + 4 * (S - 1))) / 2  # sqrt(N/e)
    return float(math.e * root**2 / S)


def barkelew(S):
    """
    Return the critical N/S of a first-order tube by a fit of Barkelew's kind, e - 3.37/sqrt(S).

    Parameters
    ----------
    S : float
        Dimensionless adiabatic rise. [-]

    References
    ----------
    .. [1] barkelew1959 (form and constant memory).

    Examples
    --------
    >>> print(f"{barkelew(50.0):.2f}")
    2.24
    """
    return float(math.e - 3.37 / np.sqrt(S))


def hot_spot_limit(T, activation):
    """
    Return the hottest spot that a cooled tube may have before it runs away.

    Parameters
    ----------
    T : float
        Wall temperature. [K]
    activation : float
        Activation energy. [J/mol]

    Returns
    -------
    hottest : float
        inf where E < 4 R T: no hot spot of this kind exists. [K]

    References
    ----------
    .. [1] welsenaere1970 (formula memory).
    """
    reach = 4 * R * T / activation
    if reach >= 1:
        return float("inf")
    return float(activation / (2 * R) * (1 - np.sqrt(1 - reach)))


def hot_spot(S, N):
    """
    Return the highest theta = (T - Tw) E/(R Tw^2) in a first-order tube fed at wall temperature.

    The exponential is exp(theta), which is the limit of a high activation energy.

    Parameters
    ----------
    S, N : float
        As from `tube_numbers`. [-]

    Returns
    -------
    theta : float
        Highest dimensionless temperature. [-]
    """
    from scipy.integrate import solve_ivp

    def slope(conversion, theta):  # d theta/dX, which has no stiffness in the hot spot
        rate = (1 - conversion) * np.exp(np.minimum(theta, 300.0))
        return S - N * np.asarray(theta) / np.maximum(rate, 1e-300)

    def over(conversion, theta):
        return slope(conversion, theta)[0]

    over.terminal, over.direction = True, -1  # type: ignore[attr-defined]
    found = solve_ivp(slope, (0, 1 - 1e-9), [0.0], rtol=1e-8, atol=1e-10, method="LSODA", events=over)
    return float(found.y[0].max())


def sensitive_ratio(S, low=0.5, high=3.5):
    """
    Return the N/S at which the hot spot is most sensitive: d ln theta/d ln S at its largest.

    Parameters
    ----------
    S : float
        Dimensionless adiabatic rise. [-]
    low, high : float
        N/S to look between. [-]

    References
    ----------
    .. [1] morbidelli1982 (memory): the boundary of runaway is the peak of the normalised sensitivity.
    """
    from scipy.optimize import minimize_scalar

    def sensitivity(ratio, step=1e-4):
        up, down = (np.log(hot_spot(S * (1 + d), ratio * S)) for d in (step, -step))
        return (up - down) / (2 * step)

    grid = np.linspace(low, high, 61)
    best = grid[int(np.argmax([sensitivity(r) for r in grid]))]
    step = grid[1] - grid[0]
    found = minimize_scalar(lambda r: -sensitivity(r), bounds=(best - step, best + step), method="bounded")
    return float(found.x)


def several_states(rise, T, activation):
    """
    Tell whether an adiabatic first-order tank may have several steady states: beta gamma > 4 (1 + beta).

    Parameters
    ----------
    rise : float
        Adiabatic rise. [K]
    T : float
        Feed temperature. [K]
    activation : float
        Activation energy. [J/mol]

    References
    ----------
    .. [1] vanheerden1953 (memory).

    Examples
    --------
    >>> several_states(364.0, 333.15, 10.3e3), several_states(364.0, 333.15, 130.5e3)
    (False, True)
    """
    beta, gamma = rise / T, activation / (R * T)
    return bool(beta * gamma > 4 * (1 + beta))
