"""Loss of chlorine atoms at a wall: kinetic resistance and diffusion in series."""

import math
from functools import cache

import numpy as np

from reactor import library
from reactor.units import GAS_CONSTANT

FIRST_ZERO_SQUARED = 5.783185962946784  # square of the first zero of the Bessel function J0


def default_sticking(surface="glass"):
    """
    Return the probability that an atom which hits a wall is lost, with band and source.

    Parameters
    ----------
    surface : str
        glass (the default of the program), fused silica or metal.

    Returns
    -------
    library.Datum

    Examples
    --------
    >>> default_sticking().value
    6.81e-05
    """
    return library.sheet("mechanism/wall.csv")[f"sticking_{surface.replace(' ', '_')}"]


def mean_speed(T, molar_mass):
    """
    Return the mean thermal speed of a molecule.

    Parameters
    ----------
    T : float
        Temperature. [K]
    molar_mass : float
        Molar mass. [kg/mol]

    Returns
    -------
    speed : float
        Mean speed, sqrt(8 R T/(pi M)). [m/s]

    Examples
    --------
    >>> print(f"{mean_speed(300.0, 0.03545):.1f}")
    423.3
    """
    return math.sqrt(8.0 * GAS_CONSTANT * T / (math.pi * molar_mass))


def wall_loss(sticking, speed, diffusivity, area_to_volume, eigenvalue):
    """
    Return the rate at which a wall takes atoms out of the gas.

    Parameters
    ----------
    sticking : float
        Probability of loss per hit. [-]
    speed : float
        Mean speed of the atom. [m/s]
    diffusivity : float
        Diffusivity of the atom in the gas. [m^2/s]
    area_to_volume : float
        Wetted wall per gas volume. [1/m]
    eigenvalue : float
        Smallest eigenvalue of diffusion to the wall. [1/m^2]

    Returns
    -------
    rate : float
        First-order loss: wall and diffusion resistances add. [1/s]

    References
    ----------
    .. [1] bader: loss probability on glass.

    Examples
    --------
    >>> k = wall_loss(6.81e-5, mean_speed(313.0, 0.03545), 1.7e-5, 160.0, tube_eigenvalue(0.0125))
    >>> print(f"{k:.2f}")
    0.41
    """
    if sticking == 0.0:
        return 0.0
    kinetic = sticking * speed * area_to_volume / 4.0
    return 1.0 / (1.0 / kinetic + 1.0 / (eigenvalue * diffusivity))


def tube_eigenvalue(radius):
    """
    Return the smallest eigenvalue of radial diffusion to the wall of a tube.

    Parameters
    ----------
    radius : float
        Inner radius. [m]

    Returns
    -------
    eigenvalue : float
        [1/m^2]
    """
    return FIRST_ZERO_SQUARED / radius**2


def annulus_eigenvalue(r1, r2):
    """
    Return the smallest eigenvalue of radial diffusion in a ring gap, both walls absorbing.

    Its root a is that for which J0(a r) Y0(a r1) - Y0(a r) J0(a r1) vanishes at r2; times the gap width it lies
    between 2.40 (a wire in the axis) and pi (flat gap). Found by collocation at Chebyshev places in ln r.

    Parameters
    ----------
    r1, r2 : float
        Inner and outer radius. [m]

    Returns
    -------
    eigenvalue : float
        [1/m^2]

    Examples
    --------
    >>> print(f"{annulus_eigenvalue(1.0, 2.0):.4f}")
    9.7533
    """
    gap = r2 - r1
    if not 0.0 < gap < math.inf or r1 <= 0.0:
        raise ValueError(f"radii {r1} and {r2} m make no ring gap")
    length = math.log1p(gap / r1)  # of x = ln(r/r1), in which u'' = -a^2 r^2 u
    place, second = _collocation(min(24 + int(6 * length), 128))
    r = r2 * np.exp(length * (place[1:-1] - 1) / 2)
    inverse = np.linalg.solve(-second * (2 / length) ** 2, np.diag((r / gap) ** 2))
    return 1.0 / float(np.linalg.eigvals(inverse).real.max()) / gap**2


@cache
def _collocation(n):
    """Return n + 1 Chebyshev places on -1..1 and the second derivative at the inner ones, zero at both ends."""
    x = -np.cos(np.pi * np.arange(n + 1) / n)
    weight = np.where(np.arange(n + 1) % n == 0, 2.0, 1.0) * (-1.0) ** np.arange(n + 1)
    first = weight[:, None] / weight / (x[:, None] - x + np.eye(n + 1))
    first -= np.diag(first.sum(axis=1))
    return x, (first @ first)[1:-1, 1:-1]
