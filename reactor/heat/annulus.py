"""Film coefficients at the two walls of a concentric annulus (gas between sleeve and shell)."""

import numpy as np

from reactor import library
from reactor.errors import RangeError
from reactor.heat.films import ANNULUS_TURBULENT, LAMINAR, blend, check, entry, starting
from reactor.heat.friction import annulus_reynolds, smooth_friction


def annulus_nusselt(reynolds, prandtl, inner, outer, length, wall, heating=1.0):
    """
    Return the mean Nusselt number at one wall of an annulus, the other wall passing no heat.

    Parameters
    ----------
    reynolds : float or array
        Reynolds number on the hydraulic diameter, up to 1e6. [-]
    prandtl : float or array
        Prandtl number; 0.1 to 1000 once the flow is not laminar. [-]
    inner : float
        Outside diameter of the core; 0.05 to 1 of `outer`. [m]
    outer : float
        Inside diameter of the shell. [m]
    length : float
        Length from the inlet. [m]
    wall : str
        "inner" or "outer": the wall that passes heat. [-]
    heating : float or array
        Factor of the turbulent part for gas heated by a hotter wall, see `heating_factor`. [-]

    Returns
    -------
    nusselt : float or array
        Nusselt number on the hydraulic diameter. [-]

    References
    ----------
    .. [1] vdi, concentric annuli, laminar; within 3.6 % of the exact values at 0.05, 2 % above 0.25.
    .. [2] gnielinski2009, turbulent; linear blend from 2300 to 1e4.

    Examples
    --------
    >>> print(f"{annulus_nusselt(27364.0, 0.70546, 0.060, 0.15408, 1.2, 'outer'):.2f}")
    69.67
    """
    check("annulus", reynolds, prandtl, 1e6, (0.1, 1000.0), ANNULUS_TURBULENT, "gnielinski2009")
    a = ratio(inner, outer)
    gap = outer - inner
    low, high = np.minimum(reynolds, LAMINAR), np.maximum(reynolds, ANNULUS_TURBULENT)
    laminar = _annulus_laminar(low, prandtl, a, gap / length, wall)
    turbulent = annulus_turbulent(high, prandtl, a, wall) * entry(gap, length) * heating
    return blend(reynolds, laminar, turbulent, ANNULUS_TURBULENT)


def annulus_turbulent(reynolds, prandtl, a, wall):
    """
    Return the turbulent Nusselt number at one wall of a long annulus.

    Parameters
    ----------
    reynolds, prandtl : float or array
        Numbers on the hydraulic diameter. [-]
    a : float
        Ratio of inner to outer diameter. [-]
    wall : str
        "inner" or "outer". [-]

    Returns
    -------
    nusselt : float or array
        Nusselt number on the hydraulic diameter. [-]

    References
    ----------
    .. [1] gnielinski2009.
    """
    eighth = smooth_friction(annulus_reynolds(reynolds, a)) / 8
    k1 = 1.07 + 900 / reynolds - 0.63 / (1 + 10 * prandtl)
    shape = 0.75 * a**-0.17 if _inner(wall) else 0.9 - 0.15 * a**0.6
    return shape * eighth * reynolds * prandtl / (k1 + 12.7 * np.sqrt(eighth) * (prandtl ** (2 / 3) - 1))


def heating_factor(T_gas, T_wall):
    """
    Return the factor (T/Tw)^0.45 of a turbulent film on a hotter wall; 1 where the gas is cooled.

    Parameters
    ----------
    T_gas, T_wall : float or array
        Temperatures; below T/Tw = 0.5 the factor stays at its value there. [K]

    Returns
    -------
    factor : float or array
        Factor on the turbulent Nusselt number. [-]

    References
    ----------
    .. [1] vdi, tubes: gas heated, fitted for 0.5 < T/Tw < 1.
    """
    exponent = library.sheet("heat/constants.csv")["heating_exponent"].value
    return np.clip(np.asarray(T_gas) / T_wall, 0.5, 1.0) ** exponent


def ratio(inner, outer):
    """
    Return inner/outer after checking that the annulus laws cover it.

    Parameters
    ----------
    inner, outer : float
        Diameters. [m]

    Returns
    -------
    a : float
        Their ratio, 0.05 to below 1. [-]
    """
    a = inner / outer
    if not 0.05 <= a < 1:
        raise RangeError(f"the films of an annulus hold for a sleeve of 0.05 to 1 shell (vdi); got {a:.3g}")
    return a


def _annulus_laminar(reynolds, prandtl, a, slenderness, wall):
    """Return the laminar mean Nusselt number with hydraulic and thermal entry (vdi)."""
    inner = _inner(wall)
    developed = 3.66 + 1.2 * (a**-0.8 if inner else a**0.5)
    shape = 1 + 0.14 * (a**-0.5 if inner else a ** (1 / 3))
    graetz = reynolds * prandtl * slenderness
    return np.cbrt(developed**3 + (1.615 * shape) ** 3 * graetz + starting(graetz, prandtl))


def _inner(wall):
    if wall not in ("inner", "outer"):
        raise ValueError(f"wall is 'inner' or 'outer', not {wall!r}")
    return wall == "inner"
