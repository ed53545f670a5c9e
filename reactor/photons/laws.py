"""
How a lamp sends its light: four laws of emission and two named brackets, as slopes and offsets of rays.

A ray has a slope to the plane across the lamp (elevation phi) and, seen along the lamp, an offset from its axis.
Both are independent of each other in every law:

isotropic line        cos(phi)      no offset                  arcs, thin plasma
volumetric cylinder   cos(phi)      like a chord of a disc     a thick, transparent plasma
sine-law line         cos^2(phi)    no offset                  surface emitter, radius -> 0
Lambertian cylinder   cos^2(phi)    evenly over the width      phosphor tubes, LED strips and panels
radial                phi = 0       no offset                  lower bracket, by name only; a collimated panel

References: harris1965, jacob1970 (line source, spherical emission), akehata1972 (diffuse line), irazoqui1973
(extended source, volumetric emission).
"""

from functools import cache

import numpy as np

ISOTROPIC, SINE, LAMBERTIAN, RADIAL = "isotropic line", "sine-law line", "Lambertian cylinder", "radial"
VOLUMETRIC = "volumetric cylinder"
LAWS = (ISOTROPIC, LAMBERTIAN, SINE, VOLUMETRIC, RADIAL)
EXTENDED = (LAMBERTIAN, VOLUMETRIC)
SLOPES, OFFSETS = 96, 8  # nodes; measured: absorbed shares of long lamps hold to 2e-6


@cache
def gauss(count):
    """Return Gauss-Legendre nodes and weights on 0..1."""
    nodes, weights = np.polynomial.legendre.leggauss(count)
    return (nodes + 1) / 2, weights / 2


@cache
def slopes(law, count=SLOPES):
    """
    Return the elevations of rays [rad], 0 to pi/2, and their weights, which add up to one.

    Examples
    --------
    >>> phi, weight = slopes(ISOTROPIC)
    >>> print(f"{weight @ np.cos(phi):.6f}")
    0.785398
    """
    if law == RADIAL:
        return np.zeros(1), np.ones(1)
    s, weight = gauss(count)
    phi = s * np.pi / 2
    law_of = np.cos(phi) if law in (ISOTROPIC, VOLUMETRIC) else np.cos(phi) ** 2
    return phi, weight * law_of / (weight @ law_of)


@cache
def offsets(law, count=OFFSETS):
    """Return the offsets of rays from the lamp's axis over its radius, 0 to 1, and their weights."""
    if law not in EXTENDED:
        return np.zeros(1), np.ones(1)
    s, weight = gauss(count)
    u = np.sin(s * np.pi / 2)
    density = np.cos(s * np.pi / 2) if law == LAMBERTIAN else np.cos(s * np.pi / 2) ** 2
    return u, weight * density / (weight @ density)
