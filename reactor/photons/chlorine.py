"""The absorption cross-section of Cl2 (base e): the formula, how far to trust it, and its polynomial."""

from functools import cache

import numpy as np
from numpy.polynomial import chebyshev

from reactor import library
from reactor.errors import RangeError

SHEET = "photons/constants.csv"
FIT_CENTRE, FIT_HALF = 550.0, 350.0  # K: the polynomial runs over 200 to 900 K
FIT_TERMS = 14  # measured: relative error below 5e-7 at 260 to 550 nm (12 terms: 2.6e-6)


def cross_section(wavelength, T):
    r"""
    Return the absorption cross-section of Cl2, base e.

    Parameters
    ----------
    wavelength : float or array
        250 to 550 nm. [m]
    T : float or array
        Gas temperature, 195 to 600 K; above 300 K the formula is extrapolated. [K]

    Returns
    -------
    sigma : array, broadcast of `wavelength` and `T`
        Cross-section per molecule. [m^2]

    Raises
    ------
    RangeError
        Outside 250 to 550 nm, or outside 195 to 600 K.

    References
    ----------
    .. [1] maric1993, as jpl2006 eq. 12: two log-normal bands.

    Examples
    --------
    >>> print(f"{cross_section(330e-9, T=298):.3e}")
    2.555e-23
    """
    sheet = library.sheet(SHEET)
    nm = sheet["fitted wavelength"]
    coldest, hottest = sheet["fitted temperature"].low, sheet["extrapolation limit"].value
    if not (_within(wavelength, nm.low, nm.high) and _within(T, coldest, hottest)):
        raise RangeError(
            f"Cl2 cross-sections are fitted for 250-550 nm and 195-300 K (maric1993) and extrapolated to "
            f"{hottest:.0f} K; got {np.ravel(wavelength) * 1e9} nm, {np.ravel(T)} K"
        )
    return _formula(wavelength, T)


def _within(values, low, high):
    """Return whether all values lie between two limits, rounding forgiven."""
    values = np.asarray(values)
    return bool(np.all((values >= low * (1 - 1e-9)) & (values <= high * (1 + 1e-9))))


def _formula(wavelength, T):
    """Return the two-band formula at any temperature; the caller answers for the range."""
    value = {name: datum.value for name, datum in library.sheet(SHEET).items()}
    A1, B1, A2, B2 = (value[name] for name in ("A1", "B1", "A2", "B2"))
    wavelength = np.asarray(wavelength)
    a = np.tanh(value["vibration"] / np.asarray(T))
    strong = A1 * np.exp(-B1 * a * np.log(value["lambda1"] / wavelength) ** 2)
    weak = A2 * np.exp(-B2 * a * np.log(value["lambda2"] / wavelength) ** 2)
    return np.sqrt(a) * (strong + weak)


def cross_section_grade(T):
    """
    Return how far the cross-section can be trusted at a gas temperature.

    Parameters
    ----------
    T : float
        Gas temperature. [K]

    Returns
    -------
    grade : str
        "fitted" (195 to 300 K), "extrapolated" (300 to 600 K) or "beyond". [-]

    Examples
    --------
    >>> print(cross_section_grade(298), cross_section_grade(450), cross_section_grade(700))
    fitted extrapolated beyond
    """
    sheet = library.sheet(SHEET)
    fit = sheet["fitted temperature"]
    if fit.low <= T <= fit.high:
        return "fitted"
    return "extrapolated" if fit.high < T <= sheet["extrapolation limit"].value else "beyond"


def sigma_fit(wavelength):
    """
    Return the cross-section as polynomials in t = (T - 550 K) / 350 K for 200 to 900 K.

    Parameters
    ----------
    wavelength : array, shape (n,)
        Lines of the lamp, 250 to 550 nm. [m]

    Returns
    -------
    coefficients : array, shape (n, 14)
        Ascending powers of t; the relative error is below 1e-6. [m^2]

    Examples
    --------
    >>> row = sigma_fit([365e-9])[0]
    >>> print(f"{np.polynomial.polynomial.polyval((298 - 550) / 350, row):.4e}")
    1.0658e-23
    """
    wavelength = np.atleast_1d(np.asarray(wavelength, float))
    if not wavelength.size:
        return np.zeros((0, FIT_TERMS))
    nodes = np.cos(np.pi * (np.arange(4 * FIT_TERMS) + 0.5) / (4 * FIT_TERMS))
    sigma = _formula(wavelength[:, None], FIT_CENTRE + FIT_HALF * nodes)
    return chebyshev.chebfit(nodes, sigma.T, FIT_TERMS - 1).T @ _powers()


@cache
def _powers():
    """Return the powers of t in each Chebyshev polynomial, (FIT_TERMS, FIT_TERMS)."""
    rows = [chebyshev.cheb2poly(row) for row in np.eye(FIT_TERMS)]
    return np.array([np.pad(row, (0, FIT_TERMS - len(row))) for row in rows])


def quantum_yield(wavelength):
    """
    Return the share of absorbed photons that split a Cl2 molecule into two atoms.

    Parameters
    ----------
    wavelength : float or array
        Lines of the lamp. [m]

    Returns
    -------
    phi : same shape as `wavelength`
        Molecules split per photon absorbed: 1 in the continuum, 0.5 above 499 nm. [-]

    References
    ----------
    .. [1] calvert1966
    """
    sheet = library.sheet(SHEET)
    continuum, beyond = sheet["quantum yield"].value, sheet["quantum yield above 499 nm"].value
    return np.where(np.asarray(wavelength) <= 499e-9, continuum, beyond)
