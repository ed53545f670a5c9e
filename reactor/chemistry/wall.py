"""Loss of chlorine atoms at a wall: kinetic resistance and diffusion in series."""

import math

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

    The profile J0(a r) Y0(a r1) - Y0(a r) J0(a r1) vanishes at r2; times the gap width, the smallest such a
    lies between 2.40 (a wire in the axis) and pi (flat gap).

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
    from scipy.optimize import brentq
    from scipy.special import j0, y0

    gap = r2 - r1
    if not 0.0 < gap < math.inf or r1 <= 0.0:
        raise ValueError(f"radii {r1} and {r2} m make no ring gap")

    def profile(x):
        return j0(x * r2 / gap) * y0(x * r1 / gap) - y0(x * r2 / gap) * j0(x * r1 / gap)

    return (brentq(profile, 2.4, 3.15, xtol=1e-13, rtol=1e-13) / gap) ** 2
