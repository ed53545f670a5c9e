"""
Closed forms of the radiation field of long lamps (and of a finite line): what the traced field is checked against.

The annulus between a sleeve and a shell, around a long lamp on the axis:

Symbols: S photons per metre of lamp entering the gas [mol/m/s]; r1, r2 inner and outer radius of the gas;
a radius of the lamp; kappa absorption coefficient, base e; tau = kappa (r2 - r1); t = kappa (r - r1).
G is the fluence rate: photons from all directions per area of a small sphere's cross-section. It is never the
irradiance of a wall. The four laws of emission and what they say about G and the absorbed share:

isotropic line        S/(2 pi r) Ki_1(t)         1 - Ki_2(tau)          arcs, thin plasma
sine-law line         2 S/(pi^2 r) Ki_2(t)       1 - (4/pi) Ki_3(tau)   surface emitter, radius -> 0
Lambertian cylinder   by quadrature              by quadrature          phosphor tubes, LED strips
radial                S/(2 pi r) exp(-t)         1 - exp(-tau)          lower bracket, by name only
"""

from dataclasses import dataclass

import numpy as np

from reactor.photons.bickley import bickley, bickley_deficit
from reactor.photons.laws import ISOTROPIC, LAMBERTIAN, RADIAL, SINE, gauss  # noqa: F401 - named by those who call


@dataclass(frozen=True)
class Field:
    """An emission law and its annulus: inner, outer and lamp radius [m]; lines have no lamp radius."""

    law: str
    inside: float
    outside: float
    lamp: float = 0.0


def _chords(field):
    """Return the paths across the annulus, seen along the axis, over r2 - r1, and their weights."""
    s, weight = gauss(24)
    u = np.sin(s * np.pi / 2)  # offset of the ray from the axis, over the lamp radius
    share = weight * np.pi / 2 * np.cos(s * np.pi / 2)
    offset = (field.lamp * u) ** 2
    chord = np.sqrt(field.outside**2 - offset) - np.sqrt(field.inside**2 - offset)
    return chord / (field.outside - field.inside), share


def absorbed_per_depth(field, tau):
    """
    Return the absorbed share of the light entering the gas, divided by the optical depth of the gap.

    Parameters
    ----------
    field : Field
        Emission law and radii. [-]
    tau : float or array
        Optical depth kappa (r2 - r1). [-]

    Returns
    -------
    g : same shape as `tau`
        f/tau, exact also where tau is tiny. [-]

    Examples
    --------
    >>> print(f"{absorbed_per_depth(Field(ISOTROPIC, 0.03, 0.055), 1.0):.6f}")
    0.726379
    """
    tau = np.asarray(tau, float)
    if field.law == ISOTROPIC:
        return bickley_deficit(2, tau)
    if field.law == SINE:
        return 4 / np.pi * bickley_deficit(3, tau)
    if field.law == RADIAL:
        depth = np.maximum(tau, 1e-30)
        return -np.expm1(-depth) / depth
    return 4 / np.pi * sum(w * m * bickley_deficit(3, tau * m) for m, w in zip(*_chords(field), strict=True))


def absorbed(field, tau):
    """
    Return the absorbed share f of the light entering the gas.

    Parameters
    ----------
    field : Field
        Emission law and radii. [-]
    tau : float or array
        Optical depth kappa (r2 - r1). [-]

    Returns
    -------
    f : same shape as `tau`
        Absorbed over entering photons. [-]
    """
    return tau * absorbed_per_depth(field, tau)


def transmitted(field, tau):
    """
    Return the share of the light entering the gas that reaches the outer wall, by its own integral.

    Parameters
    ----------
    field : Field
        Emission law and radii. [-]
    tau : float or array
        Optical depth kappa (r2 - r1). [-]

    Returns
    -------
    share : same shape as `tau`
        Photons at the outer wall over entering photons; not 1 - f in disguise. [-]

    Examples
    --------
    >>> print(f"{transmitted(Field(SINE, 0.03, 0.055), 1.0):.6f}")
    0.302834
    """
    tau = np.asarray(tau, float)
    if field.law == ISOTROPIC:
        return bickley(2, tau)
    if field.law == SINE:
        return 4 / np.pi * bickley(3, tau)
    if field.law == RADIAL:
        return np.exp(-tau)
    return 4 / np.pi * sum(w * bickley(3, tau * m) for m, w in zip(*_chords(field), strict=True))


def fluence_rate(field, r, kappa):
    """
    Return the fluence rate per photon flow that enters the gas from one metre of lamp.

    Parameters
    ----------
    field : Field
        Emission law and radii. [-]
    r : float or array
        Radius, from inside to outside radius of the gas. [m]
    kappa : float or array
        Absorption coefficient, base e; broadcast against `r`. [1/m]

    Returns
    -------
    G : array, broadcast of `r` and `kappa`
        Fluence rate over S; multiply by S in mol/m/s for mol/m2/s. [1/m]

    Examples
    --------
    >>> print(f"{fluence_rate(Field(LAMBERTIAN, 0.01, 0.05, 0.01), 0.02, 0.0):.4f}")
    10.6103
    """
    r = np.asarray(r, float)
    depth = np.asarray(kappa) * (r - field.inside)
    if field.law == ISOTROPIC:
        return bickley(1, depth) / (2 * np.pi * r)
    if field.law == SINE:
        return 2 * bickley(2, depth) / (np.pi**2 * r)
    if field.law == RADIAL:
        return np.exp(-depth) / (2 * np.pi * r)
    return _lambertian_fluence(field, r, np.asarray(kappa))


def _lambertian_fluence(field, r, kappa):
    """Return G/S = 2/(pi^2 a) int_0^asin(a/r) Ki_2(kappa s(eta)) d eta, sin(eta) = (a/r) sin(theta)."""
    a, total = field.lamp, 0.0
    for s, weight in zip(*gauss(24), strict=True):
        theta = s * np.pi / 2
        cos_eta = np.sqrt(1 - (a / r * np.sin(theta)) ** 2)
        path = r * cos_eta - np.sqrt(field.inside**2 - (a * np.sin(theta)) ** 2)
        total = total + weight * np.cos(theta) / cos_eta * bickley(2, kappa * path)
    return total / (np.pi * r)


def finite_fluence(r, z, arc, kappa=0.0, inside=0.0):
    """
    Return the fluence rate of a finite isotropic line on the axis, per photon flow of one metre of it.

    Parameters
    ----------
    r : float
        Radius. [m]
    z : float
        Height above the middle of the arc. [m]
    arc : float
        Length of the arc. [m]
    kappa : float
        Absorption coefficient of the gas, base e. [1/m]
    inside : float
        Radius at which the gas begins. [m]

    Returns
    -------
    G : float
        Fluence rate over S. [1/m]

    References
    ----------
    .. [1] jacob1970: line source with spherical emission.

    Examples
    --------
    >>> print(f"{finite_fluence(0.05, 0.15, 0.5):.5f} {finite_fluence(0.04, 0.0, 0.5, 52.5, 0.03):.5f}")
    4.06416 2.46668
    """
    angles = np.arctan([(z - arc / 2) / r, (z + arc / 2) / r])
    s, weight = gauss(200)
    slope = angles[0] + (angles[1] - angles[0]) * s
    path = max(r - inside, 0.0) / np.cos(slope)
    return float((angles[1] - angles[0]) * (weight @ np.exp(-kappa * path)) / (4 * np.pi * r))


def finite_flux(r, z, arc):
    """
    Return the net radial flux of the same line in clear gas, per photon flow of one metre.

    Parameters
    ----------
    r, z, arc : float
        As for `finite_fluence`. [m]

    Returns
    -------
    q : float
        Net radial flux over S. [1/m]

    Examples
    --------
    >>> print(f"{finite_flux(0.05, 0.15, 0.5):.5f}")
    3.00278
    """
    up, down = z + arc / 2, z - arc / 2
    return float((up / np.hypot(r, up) - down / np.hypot(r, down)) / (4 * np.pi * r))


def volumetric_fluence(radius, r):
    """
    Return the fluence rate outside a long, transparent cylinder that emits evenly, in clear gas.

    Parameters
    ----------
    radius : float
        Radius of the emitter. [m]
    r : float
        Distance from its axis. [m]

    Returns
    -------
    G : float
        Fluence rate over S. [1/m]

    References
    ----------
    .. [1] irazoqui1973

    Examples
    --------
    >>> print(f"{volumetric_fluence(0.01, 0.0125):.4f}")
    22.2037
    """
    s, weight = gauss(200)
    widest = np.arcsin(min(1.0, radius / r))
    theta = s * np.pi / 2  # sin(u) = (radius/r) sin(theta) takes the root at the edge away
    u = np.arcsin(radius / r * np.sin(theta))
    chord = 2 * radius * np.cos(theta)
    by = radius / r * np.cos(theta) / np.cos(u) * np.pi / 2
    total = 2 * weight @ (chord * by) if widest < np.pi / 2 else 2 * weight @ (chord * np.pi / 2)
    return float(total / (4 * np.pi * radius**2))


def captured(distance, bore, lamp=0.0):
    """
    Return the share of a long lamp's photons that meet a parallel tube: a line, or a Lambertian cylinder.

    Parameters
    ----------
    distance : float
        Between the axes. [m]
    bore, lamp : float
        Radius of the tube and of the lamp. [m]

    Returns
    -------
    share : float
        Photons that meet the tube over photons sent. [-]

    References
    ----------
    .. [1] strings: crossed strings.

    Examples
    --------
    >>> print(f"{captured(0.06, 0.02):.6f} {captured(0.06, 0.02, 0.01):.5f}")
    0.108173 0.10877
    """
    if lamp == 0.0:
        return float(np.arcsin(bore / distance) / np.pi)

    def string(reach):
        return np.sqrt(distance**2 - reach**2) + reach * np.arcsin(reach / distance)

    return float((string(lamp + bore) - string(lamp - bore)) / (2 * np.pi * lamp))
