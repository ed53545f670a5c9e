"""
Sleeves: the share of lamp light that passes a tube wall, over all slopes at which the lamp sends it.

A ray at elevation phi above the plane across, tilted by alpha in that plane, meets the wall at the angle whose cosine
is cos(phi) cos(alpha). Both faces reflect (Fresnel), rays bounce inside the wall without interference, and the slanted
path absorbs more than a straight one. What passes is steeper than what was sent: slope by slope, the window weakens
just those rays that would have the longest way in the gas.
"""

import numpy as np

from reactor import library
from reactor.errors import CaseError
from reactor.photons.lamps import nearest, numbers_from_csv, wavelength_faults
from reactor.photons.laws import LAWS, slopes

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
        One of the laws of `laws`; a Lambertian cylinder counts as a line here. [-]

    Returns
    -------
    T : array, shape (n,)
        Share of the lamp light that passes. [-]

    Examples
    --------
    >>> print(f"{transmission('fused silica', 2.5e-3, 365e-9, 'isotropic line')[0]:.4f}")
    0.8898
    """
    phi, weight = slopes(nearest(emission, LAWS, "emission law"))
    return at_angles(material, thickness, wavelengths, np.cos(phi)) @ weight


def at_angles(material, thickness, wavelengths, cosine):
    """
    Return the transmission of a wall for rays of given angles.

    Parameters
    ----------
    material : str
        One of `materials()`. [-]
    thickness : float
        Wall thickness. [m]
    wavelengths : array, shape (n,)
        Lines of the lamp; outside the data of the material it counts as opaque. [m]
    cosine : array, shape (m,)
        Cosines of the angles of incidence. [-]

    Returns
    -------
    T : array, shape (n, m)
        Share that passes. [-]
    """
    rows = _rows(material)
    wavelengths = np.atleast_1d(np.asarray(wavelengths, float))
    known = rows.si("wavelength")
    columns = ("refractive_index", "absorption", "surface_pass")
    index, absorption, surface = (np.interp(wavelengths, known, rows.si(column))[:, None] for column in columns)
    T = surface * wall_transmission(index, absorption, thickness, np.arccos(np.clip(cosine, 1e-9, 1.0)))
    return np.where(has_data(known, wavelengths)[:, None], T, 0.0)


def deposits():
    """Return the kinds of film that the data hold."""
    return tuple(dict.fromkeys(library.table("photons/deposits.csv").text("material")))


def film(material, thickness, wavelengths, cosine):
    """
    Return what a film on the window passes.

    Parameters
    ----------
    material : str
        One of `deposits()`; outside its data the end values hold (carbon is smooth there). [-]
    thickness : float
        Film thickness. [m]
    wavelengths : array, shape (n,)
        Lines of the lamp. [m]
    cosine : array, shape (m,)
        Cosines of the angles of incidence; within the film the ray is taken as straight on. [-]

    Returns
    -------
    T : array, shape (n, m)
        Share that passes. [-]

    Examples
    --------
    >>> print(f"{film('arc-evaporated carbon', 20e-9, 365e-9, 1.0)[0, 0]:.2f}")
    0.53
    """
    rows = library.table("photons/deposits.csv").where("material", nearest(material, deposits(), "film"))
    wavelengths = np.atleast_1d(np.asarray(wavelengths, float))[:, None]
    k = np.interp(wavelengths, rows.si("wavelength"), rows.si("extinction"))
    return np.exp(-4 * np.pi * k * thickness / wavelengths) * np.ones_like(np.atleast_1d(cosine))


COSINES = np.linspace(0, 1, 161) ** 2  # crowded at grazing incidence, where a wall turns into a mirror


def passed(sleeve, wavelengths, cosine, share):
    """
    Return what the window of a case passes of each line, and the slant of what has passed.

    Parameters
    ----------
    sleeve : object
        material, thickness [m], transmission (a path or None), deposit, film, film_thickness [m]. [-]
    wavelengths : array, shape (n,)
        Lines of the lamp. [m]
    cosine : array, any shape
        Cosine of the angle at which each ray meets the window. [-]
    share : array, same shape
        Share of the light in each ray; adds up to one. [-]

    Returns
    -------
    mean : callable
        Weights of the lines -> shares of the rays behind the window (adding up to one). [-]
    T : array, shape (n,)
        Share of each line that passes. [-]
    """
    if sleeve.transmission is None:
        at = at_angles(sleeve.material, sleeve.thickness, wavelengths, COSINES)
    else:
        known, T = transmission_from_csv(sleeve.transmission)
        at = np.where(has_data(known, wavelengths), np.interp(wavelengths, known, T), 0.0)[:, None] + 0 * COSINES
    if getattr(sleeve, "film", None):
        at = at * film(sleeve.film, sleeve.film_thickness, wavelengths, COSINES)
    at = at * (1 - (sleeve.deposit or 0.0))
    place = np.sqrt(np.clip(cosine, 0.0, 1.0)) * (len(COSINES) - 1)
    left = np.minimum(place.astype(int), len(COSINES) - 2)
    u = (cosine - COSINES[left]) / (COSINES[left + 1] - COSINES[left])
    count = len(COSINES)
    hat = np.bincount(left.ravel(), (share * (1 - u)).ravel(), count)
    hat += np.bincount(left.ravel() + 1, (share * u).ravel(), count)

    def behind(weight):
        mixed = weight @ at if weight.sum() > 0 else np.ones(count)
        if not mixed.any():
            mixed = np.ones(count)
        found = share * (mixed[left] * (1 - u) + mixed[left + 1] * u)
        return found / found.sum()

    return behind, at @ hat


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
