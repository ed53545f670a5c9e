"""The lamp sleeve: radiation to the shell, skin temperature, and who gets the heat of the lamp."""

from typing import NamedTuple

import numpy as np

STEFAN_BOLTZMANN = 5.670374419e-8  # W/m2/K4, CODATA 2018 (exact)


class Network(NamedTuple):
    """What the gas feels, as arrays over its temperature; `skin` and `link` are None without a sleeve."""

    conductance: np.ndarray  # gas to coolant, W/m/K
    share: np.ndarray  # of the lamp heat at the sleeve that ends in the gas
    skin: np.ndarray | None  # temperature of the sleeve, K
    link: np.ndarray | None  # radiation sleeve to shell as a conductance, W/m/K


def grey_exchange(emissivity, shell_emissivity, a):
    """
    Return the factor of radiation between two long concentric grey cylinders.

    Parameters
    ----------
    emissivity, shell_emissivity : float
        Emissivity of the inner and of the outer cylinder. [-]
    a : float
        Ratio of inner to outer diameter. [-]

    Returns
    -------
    factor : float
        Heat per area of the inner one over sigma (T1^4 - T2^4). [-]

    Examples
    --------
    >>> print(f"{grey_exchange(0.8, 0.8, 0.3894):.3f}")
    0.742
    """
    return 1 / (1 / emissivity + a * (1 / shell_emissivity - 1))


def radiation_film(T_1, T_2, exchange):
    """
    Return the radiation between two surfaces as a film coefficient.

    Parameters
    ----------
    T_1, T_2 : float or array
        Temperatures of the surfaces. [K]
    exchange : float
        Factor from `grey_exchange`. [-]

    Returns
    -------
    film : float or array
        Heat per area and kelvin of difference. [W/m^2/K]

    Examples
    --------
    >>> print(f"{radiation_film(420.0, 320.0, 0.742):.1f}")
    8.7
    """
    return exchange * STEFAN_BOLTZMANN * (T_1 + T_2) * (T_1**2 + T_2**2)


def sleeve_skin(T_gas, T_shell, film, exchange, flux):
    """
    Return the temperature of a sleeve's outer skin above a shell of known temperature.

    The skin is hottest at turn-down, not at full flow: ask for both.

    Parameters
    ----------
    T_gas, T_shell : float or array
        Temperatures of the gas and of the shell's inner face. [K]
    film : float or array
        Film coefficient of the gas at the sleeve. [W/m^2/K]
    exchange : float
        Factor from `grey_exchange`; 0 leaves radiation out. [-]
    flux : float or array
        Lamp heat arriving at the sleeve, per area of skin. [W/m^2]

    Returns
    -------
    skin : float or array
        Solution of flux = film (Ts - Tg) + exchange sigma (Ts^4 - Tw^4). [K]

    Examples
    --------
    >>> print(f"{sleeve_skin(350.0, 323.15, 11.954, 0.7424, 618.9) - 273.15:.1f}")
    99.3
    """
    return surfaces(T_gas, T_shell, 0.0, film, exchange * STEFAN_BOLTZMANN, np.inf, flux)[0]


def surfaces(T_gas, T_coolant, shell, sleeve, radiant, outward, lamp):
    """
    Return the temperatures of sleeve skin and shell between gas and coolant.

    All conductances are per metre of tube, or all per area of skin.

    Parameters
    ----------
    T_gas, T_coolant : float or array
        Temperatures. [K]
    shell, sleeve : float or array
        Conductance gas to shell and gas to sleeve. [W/m/K]
    radiant : float
        Area x exchange x Stefan-Boltzmann constant between the two. [W/m/K^4]
    outward : float
        Conductance from the shell's inner face to the coolant; 0 is adiabatic, inf keeps the shell at
        coolant temperature. [W/m/K]
    lamp : float or array
        Lamp heat arriving at the sleeve. [W/m]

    Returns
    -------
    skin, wall : arrays
        Temperatures of the sleeve's skin and of the shell's inner face. [K]

    Notes
    -----
    The heat balance of both together makes the shell linear in the skin, so one unknown is left. It is found
    by Newton's method from the skin without radiation.
    """
    T_gas, sleeve = np.asarray(T_gas, float), np.asarray(sleeve, float)
    inert = 1 / (shell + outward)
    lean = sleeve * inert
    part = 1.0 if np.isinf(outward) else outward * inert
    skin = T_gas + lamp / sleeve
    for _ in range(60):
        wall = part * T_coolant + shell * inert * T_gas + inert * (lamp - sleeve * (skin - T_gas))
        excess = sleeve * (skin - T_gas) + radiant * (skin**4 - wall**4) - lamp
        step = excess / (sleeve + 4 * radiant * (skin**3 + lean * wall**3))
        skin = skin - step
        if np.all(np.abs(step) < 1e-9 * skin):
            break
    wall = part * T_coolant + shell * inert * T_gas + inert * (lamp - sleeve * (skin - T_gas))
    return skin, wall


def network(T_gas, T_coolant, shell, sleeve, radiant, outward, lamp):
    """
    Return what the gas feels of sleeve, shell and coolant together.

    Two paths lead from the gas to the shell's inner face: its own film, and the sleeve, which takes heat by
    its film and radiates it on. From the face one path leads to the coolant.

    Parameters
    ----------
    T_gas, T_coolant : float or array
        Temperatures. [K]
    shell : float or array
        Conductance gas to shell. [W/m/K]
    sleeve : float, array or None
        Conductance gas to sleeve; None for an empty tube. [W/m/K]
    radiant : float
        Area x exchange x Stefan-Boltzmann constant. [W/m/K^4]
    outward : float
        Conductance from the shell's inner face to the coolant. [W/m/K]
    lamp : float or array
        Lamp heat arriving at the sleeve. [W/m]

    Returns
    -------
    network : Network
        The arrays above. [SI]

    Notes
    -----
    The radiation is written as conductance x (Ts - Tw) with both temperatures solved, so
    heat to the gas = share x lamp - conductance x (T_gas - T_coolant) is the exact balance.
    """
    if sleeve is None:
        return Network(shell * outward / (shell + outward), np.ones_like(shell), None, None)
    skin, wall = surfaces(T_gas, T_coolant, shell, sleeve, radiant, outward, lamp)
    link = radiant * (skin + wall) * (skin**2 + wall**2)
    first = sleeve / (sleeve + link)
    inward = shell + first * link
    share = first + (1 - first) * inward / (inward + outward)
    return Network(inward * outward / (inward + outward), share, skin, link)
