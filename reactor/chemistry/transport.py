"""
Viscosity, conductivity and diffusivity of a gas mixture from Cantera's own fits of the pure gases.

With p = (1, ln T, ..., ln^4 T) and the fits v, c, d of each species:

    sqrt(mu_k) = T^1/4 v_k.p      lambda_k = T^1/2 c_k.p      P D_k = T^3/2 d_k.p  (with Cl)

Mixtures: Wilke's rule for the viscosity, the mean of arithmetic and harmonic mean for the conductivity.
"""

from typing import NamedTuple

import numpy as np

from reactor.errors import CaseError

LEAST = 1e-20  # mole fraction of a species that is absent, so that no quotient is 0/0


class Fits(NamedTuple):
    """Coefficients (K, 5) of the pure gases, and of each species with the Cl atom. SI."""

    viscosity: np.ndarray
    conductivity: np.ndarray
    diffusion: np.ndarray


def fits(gas, atom):
    """
    Return the `Fits` of a gas that Cantera has read with its transport data.

    Parameters
    ----------
    gas : cantera.Solution
        The gas.
    atom : int
        Number of the Cl atom.

    Raises
    ------
    CaseError
        When the file holds no transport data.
    """
    if gas.transport_model != "mixture-averaged":
        raise CaseError(
            f"{gas.source}: no transport data, which films and walls need; add `transport: mixture-averaged` to the "
            "phase and a block `transport: {model: gas, ...}` to every species"
        )
    each = range(gas.n_species)
    return Fits(
        np.array([gas.get_viscosity_polynomial(k) for k in each]),
        np.array([gas.get_thermal_conductivity_polynomial(k) for k in each]),
        np.array([gas.get_binary_diff_coeffs_polynomial(atom, k) for k in each]),
    )


def viscosity(fits, molar_mass, T, x):
    """
    Return the dynamic viscosity [Pa*s].

    Parameters
    ----------
    fits : Fits
        Of the pure gases. [SI]
    molar_mass : array (K,)
        Molar masses; any unit. [-]
    T : float
        Temperature. [K]
    x : array (K,)
        Mole fractions. [-]
    """
    root = T**0.25 * (fits.viscosity @ _powers(T))
    ratio = molar_mass / molar_mass[:, None]  # [k, j]: of j over k
    phi = (1 + root[:, None] / root * ratio**0.25) ** 2 / np.sqrt(8 * (1 + 1 / ratio))
    x = np.maximum(x, LEAST)
    return float(np.sum(x * root**2 / (phi @ x)))


def conductivity(fits, T, x):
    """
    Return the thermal conductivity [W/m/K]; arguments as in `viscosity`.

    Parameters
    ----------
    fits : Fits
        Of the pure gases. [SI]
    T : float
        Temperature. [K]
    x : array (K,)
        Mole fractions. [-]
    """
    own, x = np.sqrt(T) * (fits.conductivity @ _powers(T)), np.maximum(x, LEAST)
    return float(0.5 * (x @ own + 1 / (x @ (1 / own))))


def diffusivity(fits, molar_mass, atom, state, x):
    """
    Return the mixture-averaged diffusivity of the Cl atom [m^2/s].

    Parameters
    ----------
    fits : Fits
        Of the pure gases. [SI]
    molar_mass : array (K,)
        Molar masses; any unit. [-]
    atom : int
        Number of the Cl atom. [-]
    state : tuple of float
        Temperature and pressure. [K, Pa]
    x : array (K,)
        Mole fractions. [-]
    """
    T, P = state
    pair, x = T**1.5 * (fits.diffusion @ _powers(T)), np.maximum(x, LEAST)
    others = np.arange(len(x)) != atom
    mean = x @ molar_mass
    return float((mean - x[atom] * molar_mass[atom]) / (P * mean * np.sum(x[others] / pair[others])))


def _powers(T):
    return np.log(T) ** np.arange(5)
