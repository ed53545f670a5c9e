"""
Film coefficients: Nusselt numbers of tubes, stirred vessels and quiet gaps (annuli: `annulus`).

Every film is continuous in the Reynolds number: between laminar and turbulent flow the two laws are mixed
in proportion to Re (Gnielinski 2013). All functions take floats or numpy arrays, except `gap_nusselt`.
The numbers are good to 10 % (turbulent), 30 to 40 % (transition) and worse where heat is made inside a
laminar gas; `band` gives the multipliers.
"""

import numpy as np

from reactor import library
from reactor.errors import RangeError
from reactor.heat.friction import smooth_friction

LAMINAR = 2300.0  # end of laminar flow
TUBE_TURBULENT = 4000.0  # end of the blend in a tube
ANNULUS_TURBULENT = 1e4  # end of the blend in an annulus; also the border of the word "turbulent"


def regime(reynolds):
    """
    Return the word for the flow: laminar, transition or turbulent.

    Parameters
    ----------
    reynolds : float
        Reynolds number on the hydraulic diameter. [-]

    Returns
    -------
    word : str
        Name of the regime, a key of `band`. [-]

    Examples
    --------
    >>> regime(2000), regime(5000), regime(2e4)
    ('laminar', 'transition', 'turbulent')
    """
    if reynolds < LAMINAR:
        return "laminar"
    return "transition" if reynolds < ANNULUS_TURBULENT else "turbulent"


def band(word):
    """
    Return the low and high multipliers (about 5 to 95 %) of an overall coefficient.

    Parameters
    ----------
    word : str
        laminar, transition, turbulent, stirred or quiet. [-]

    Returns
    -------
    low, high : tuple of float
        Multipliers. [-]

    Examples
    --------
    >>> band("turbulent")
    (0.8, 1.3)
    """
    datum = library.sheet("heat/constants.csv")[f"band_{word}"]
    return datum.low, datum.high


def tube_nusselt(reynolds, prandtl, diameter, length):
    """
    Return the mean Nusselt number of a tube with an isothermal wall.

    Parameters
    ----------
    reynolds : float or array
        Reynolds number, up to 5e6. [-]
    prandtl : float or array
        Prandtl number; 0.5 to 2000 once the flow is not laminar. [-]
    diameter : float
        Inside diameter. [m]
    length : float
        Length from the inlet. [m]

    Returns
    -------
    nusselt : float or array
        Nusselt number on the diameter. [-]

    References
    ----------
    .. [1] vdi, tubes: laminar mean with hydraulic and thermal entry.
    .. [2] gnielinski1976, entry factor 1 + (D/L)^(2/3).
    .. [3] gnielinski2013: linear blend, here from 2300 to 4000.

    Examples
    --------
    >>> print(f"{tube_nusselt(7981.0, 0.6757, 0.045, 2.0):.2f}")
    25.66
    """
    check("tube", reynolds, prandtl, 5e6, (0.5, 2000.0), TUBE_TURBULENT, "gnielinski1976")
    low, high = np.minimum(reynolds, LAMINAR), np.maximum(reynolds, TUBE_TURBULENT)
    graetz = low * prandtl * diameter / length
    laminar = np.cbrt(3.66**3 + 0.7**3 + (1.615 * np.cbrt(graetz) - 0.7) ** 3 + starting(graetz, prandtl))
    turbulent = gnielinski(high, prandtl, smooth_friction(high))
    return blend(reynolds, laminar, turbulent * entry(diameter, length), TUBE_TURBULENT)


def gnielinski(reynolds, prandtl, friction):
    """
    Return the Nusselt number of turbulent flow in a long tube.

    Parameters
    ----------
    reynolds, prandtl : float or array
        Reynolds and Prandtl number. [-]
    friction : float or array
        Darcy friction factor. [-]

    Returns
    -------
    nusselt : float or array
        Nusselt number on the diameter. [-]

    References
    ----------
    .. [1] gnielinski1976; `ht.turbulent_Gnielinski` is the same formula.

    Examples
    --------
    >>> print(f"{gnielinski(1e5, 1.2, 0.0185):.1f}")
    254.6
    """
    eighth = friction / 8.0
    return eighth * (reynolds - 1000.0) * prandtl / (1.0 + 12.7 * np.sqrt(eighth) * (prandtl ** (2 / 3) - 1.0))


def stirred_nusselt(reynolds, prandtl, impeller="turbine"):
    """
    Return the Nusselt number at the wall of a stirred vessel, on the vessel diameter.

    Parameters
    ----------
    reynolds : float or array
        density x speed x impeller diameter^2 / viscosity, above 400. [-]
    prandtl : float or array
        Prandtl number. [-]
    impeller : str
        turbine, paddle or baffled turbine. [-]

    Returns
    -------
    nusselt : float or array
        Nusselt number on the vessel diameter; for gas +-40 %. [-]

    References
    ----------
    .. [1] vdi, stirred vessels: Nu = C Re^(2/3) Pr^(1/3).

    Examples
    --------
    >>> print(f"{stirred_nusselt(16525.0, 0.69563):.1f}")
    310.4
    """
    if np.any(np.asarray(reynolds) < 400):
        raise RangeError(f"the film of a stirred vessel is fitted for Re above 400 (vdi); got {reynolds}")
    name = "stirred_" + impeller.replace(" ", "_")
    constant = library.sheet("heat/constants.csv")[name].value
    return constant * np.asarray(reynolds) ** (2 / 3) * np.cbrt(prandtl)


def gap_nusselt(prandtl, grashof, height, gap):
    """
    Return the Nusselt number of free convection across a vertical gap of quiet gas.

    Parameters
    ----------
    prandtl : float
        Prandtl number. [-]
    grashof : float
        Grashof number on the gap width; Ra = Gr Pr up to 1e9. [-]
    height : float
        Height of the gap, less than 80 widths. [m]
    gap : float
        Width of the gap. [m]

    Returns
    -------
    nusselt : float
        Nusselt number on the gap width, never below pure conduction (1). [-]

    References
    ----------
    .. [1] thess as in `ht.Nu_Nusselt_vertical_Thess`, fitted for 1e4 < Ra < 1e9; it steps by 4 % at 1e7.

    Examples
    --------
    >>> print(f"{gap_nusselt(0.67689, 9.7e5 / 0.67689, 1.2, 0.04704):.2f}")
    5.84
    """
    from ht import Nu_Nusselt_vertical_Thess

    if grashof * prandtl > 1e9 or height / gap >= 80:
        raise RangeError(
            "free convection in a gap is fitted for Ra up to 1e9 and height/gap below 80 (thess); "
            f"got Ra {grashof * prandtl:.3g}, height/gap {height / gap:.3g}"
        )
    return max(1.0, float(Nu_Nusselt_vertical_Thess(Pr=prandtl, Gr=grashof, H=height, L=gap)))


def starting(graetz, prandtl):
    """Return the cube of the part due to a velocity profile that still forms (vdi)."""
    return np.sqrt(2 / (1 + 22 * prandtl)) * graetz**1.5


def entry(diameter, length):
    """Return the factor of a turbulent film for the entry of a tube (gnielinski1976)."""
    return 1 + (diameter / length) ** (2 / 3)


def blend(reynolds, laminar, turbulent, end):
    """Mix two laws in proportion to Re between 2300 and `end`."""
    weight = np.clip((reynolds - LAMINAR) / (end - LAMINAR), 0.0, 1.0)
    return (1 - weight) * laminar + weight * turbulent


def check(what, reynolds, prandtl, most, prandtls, border, source):
    """Raise RangeError outside the Reynolds and Prandtl numbers of a turbulent law."""
    reynolds, prandtl = np.broadcast_arrays(reynolds, prandtl)
    moving = reynolds > LAMINAR
    outside = (prandtl < prandtls[0]) | (prandtl > prandtls[1])
    if np.any(reynolds > most) or np.any(moving & outside) or np.any(reynolds < 0):
        raise RangeError(
            f"the film of a {what} is fitted for Re up to {most:g} and, above 2300, Pr {prandtls[0]} to "
            f"{prandtls[1]} ({source}; turbulent from {border:g}); got Re {np.max(reynolds):.4g}, "
            f"Pr {np.min(prandtl):.3g} to {np.max(prandtl):.3g}"
        )
