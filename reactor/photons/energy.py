"""
Photon arithmetic: radiant watts into moles of photons, and cross-sections into absorption coefficients.

Absorption coefficients are Napierian (base e) unless the name says decadic. Photons are counted in mol.
"""

import numpy as np

PLANCK = 6.62607015e-34  # J s, codata2018 (exact)
LIGHT_SPEED = 299792458.0  # m/s, codata2018 (exact)
AVOGADRO = 6.02214076e23  # 1/mol, codata2018 (exact)
MOLAR_QUANTUM = AVOGADRO * PLANCK * LIGHT_SPEED  # J m/mol


def photon_energy(wavelength):
    """
    Return the energy of one mole of photons.

    Parameters
    ----------
    wavelength : float or array
        Vacuum wavelength. [m]

    Returns
    -------
    energy : same shape as `wavelength`
        Energy per mole of photons. [J/mol]

    References
    ----------
    .. [1] codata2018

    Examples
    --------
    >>> print(f"{photon_energy(365e-9):.0f}")
    327744
    """
    return MOLAR_QUANTUM / np.asarray(wavelength)


def photons_per_joule(wavelength):
    """
    Return the photons in one radiant (not electrical) joule.

    Parameters
    ----------
    wavelength : float or array
        Vacuum wavelength. [m]

    Returns
    -------
    photons : same shape as `wavelength`
        Amount of photons per radiant joule. [mol/J]

    References
    ----------
    .. [1] codata2018

    Examples
    --------
    >>> print(f"{photons_per_joule(365e-9) * 1e6:.4f}")
    3.0512
    """
    return np.asarray(wavelength) / MOLAR_QUANTUM


def molar_absorption(sigma):
    """
    Return the Napierian molar absorption coefficient of a cross-section.

    Parameters
    ----------
    sigma : float or array
        Cross-section per molecule, base e. [m^2]

    Returns
    -------
    coefficient : same shape as `sigma`
        Multiply by mol/m3 of chlorine for the coefficient kappa in 1/m. [m^2/mol]

    Examples
    --------
    >>> print(f"{molar_absorption(1.066e-23):.3f}")
    6.420
    """
    return AVOGADRO * np.asarray(sigma)


def decadic_molar_absorption(sigma):
    """
    Return the decadic molar absorption coefficient of a cross-section, for comparison with absorbance data.

    Parameters
    ----------
    sigma : float or array
        Cross-section per molecule, base e. [m^2]

    Returns
    -------
    coefficient : same shape as `sigma`
        To be used with powers of ten only, never in exp(). [m^2/mol]

    Examples
    --------
    >>> print(f"{decadic_molar_absorption(1.066e-23) * 10:.2f}")
    27.88
    """
    return molar_absorption(sigma) / np.log(10.0)
