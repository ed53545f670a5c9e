"""
Sleeves: the share of lamp light that passes a tube wall, over all slopes at which the lamp sends it.

A ray at elevation phi above the plane across the axis meets the sleeve at the angle phi. Both faces
reflect (Fresnel), rays bounce inside the wall without interference, and the slanted path absorbs more than a
straight one.
"""

import numpy as np

from reactor import library
from reactor.errors import CaseError
from reactor.photons.field import ISOTROPIC, LAMBERTIAN, LAWS, RADIAL, SINE
from reactor.photons.lamps import nearest, numbers_from_csv, wavelength_faults

ACCEPTED = (
    "accepted: a CSV file with the columns `wavelength [nm]` (rising) and `transmission [%]` "
    "(light out of the whole wall per light onto it, reflection included)"
)


def materials():
    """Return the sleeve materials that the data hold."""
    return tuple(dict.fromkeys(library.table("photons/windows.csv").text("material")))


def _rows(material):
    """Return the rows of one material."""
    name = nearest(material, materials(), "sleeve material")
    return library.table("photons/windows.csv").where("material", name)


def wall_transmission(index, absorption, thickness, angle):
    """
    Return the transmission of a wall with gas on both sides, multiple reflections included.

    Parameters
    ----------
    index : float or array
        Refractive index of the wall. [-]
    absorption : float or array
        Absorption coefficient of the wall, base e. [1/m]
    thickness : float
        Wall thickness. [m]
    angle : float or array
        Angle of incidence from the normal, below pi/2. [rad]

    Returns
    -------
    T : array
        Transmitted over incident light, mean of both polarisations. [-]

    Examples
    --------
    >>> print(f"{wall_transmission(1.47454, 0.0, 2.5e-3, 0.0):.4f}")
    0.9291
    """
    outside = np.cos(angle)
    within = np.sqrt(1 - (np.sin(angle) / index) ** 2)
    once = np.exp(-absorption * thickness / within)
    across = ((outside - index * within) / (outside + index * within)) ** 2
    along = ((index * outside - within) / (index * outside + within)) ** 2
    passed = [(1 - R) ** 2 * once / (1 - (R * once) ** 2) for R in (across, along)]
    return (passed[0] + passed[1]) / 2


def angles(emission):
    """Return the elevations of rays [rad] and their weights [-] for an emission law."""
    nodes, weights = np.polynomial.legendre.leggauss(64)
    phi = (nodes + 1) * np.pi / 4
    if emission == RADIAL:
        return np.zeros(1), np.ones(1)
    law = {ISOTROPIC: np.cos(phi), SINE: np.cos(phi) ** 2, LAMBERTIAN: np.cos(phi) ** 2}[emission]
    return phi, weights * law / (weights @ law)


def transmission(material, thickness, wavelengths, emission):
    """
    Return the transmission of a sleeve, averaged over the slopes of an emission law.

    Parameters
    ----------
    material : str
        One of `materials()`. [-]
    thickness : float
        Wall thickness. [m]
    wavelengths : array, shape (n,)
        Lines of the lamp; outside the data of the material it counts as opaque. [m]
    emission : str
        One of the laws of `field`; a Lambertian cylinder takes the sine law. [-]

    Returns
    -------
    T : array, shape (n,)
        Share of the lamp light that passes. [-]

    Examples
    --------
    >>> print(f"{transmission('fused silica', 2.5e-3, 365e-9, 'isotropic line')[0]:.4f}")
    0.8898
    """
    rows = _rows(material)
    wavelengths = np.atleast_1d(np.asarray(wavelengths, float))
    known = rows.si("wavelength")
    columns = ("refractive_index", "absorption", "surface_pass")
    index, absorption, surface = (np.interp(wavelengths, known, rows.si(column)) for column in columns)
    phi, weight = angles(nearest(emission, LAWS, "emission law"))
    T = surface * (wall_transmission(index[:, None], absorption[:, None], thickness, phi) @ weight)
    return np.where(has_data(known, wavelengths), T, 0.0)


def has_data(known, wavelengths):
    """Return where `wavelengths` lie within the table `known` (both in m)."""
    return (wavelengths >= known[0] * (1 - 1e-9)) & (wavelengths <= known[-1] * (1 + 1e-9))


def range_of(material):
    """Return the first and the last wavelength [m] for which a material has data, and what to cite."""
    rows = _rows(material)
    known = rows.si("wavelength")
    return known[0], known[-1], rows.cited(f"transmission of {rows.text('material')[0]}")


def transmission_from_csv(path):
    """
    Read the user's own sleeve transmission, taken as it is for the whole lamp (no angle average is added).

    Parameters
    ----------
    path : str or path
        CSV file with wavelength and transmission. [-]

    Returns
    -------
    wavelength, T : arrays, shape (n,)
        Wavelength [m] and share of light that passes [-].
    """
    nm, percent = numbers_from_csv(path, ("wavelength [nm]", "transmission [%]"), ACCEPTED)
    faults = wavelength_faults(path, nm)
    if np.any((percent < 0) | (percent > 100)):
        faults.append(f"{path}: transmission must lie within 0 to 100 %; {ACCEPTED}")
    if faults:
        raise CaseError(faults)
    return nm * 1e-9, percent / 100
