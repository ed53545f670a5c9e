"""Friction of the gas along tubes and annuli; the pressure drop of lamp tubes is 0.1 to 130 Pa."""

import numpy as np

LAMINAR, TURBULENT = 2300.0, 4000.0  # borders of the blend in the Reynolds number


def tube_friction(reynolds, roughness=0.0):
    """
    Return the Darcy friction factor of a tube, without the jump of the usual switch at Re 2040.

    Parameters
    ----------
    reynolds : float
        Reynolds number. [-]
    roughness : float
        Wall roughness over diameter. [-]

    Returns
    -------
    friction : float
        Darcy friction factor: 64/Re below 2300, `fluids.friction_factor` above 4000. [-]

    Examples
    --------
    >>> print(f"{tube_friction(1000.0):.4f} {tube_friction(1e5):.4f}")
    0.0640 0.0180
    """
    from fluids import friction_factor

    turbulent = friction_factor(Re=max(reynolds, TURBULENT), eD=roughness)
    return _blend(reynolds, 64 / min(reynolds, LAMINAR), turbulent)


def annulus_friction(reynolds, a):
    """
    Return the Darcy friction factor of a smooth concentric annulus.

    Parameters
    ----------
    reynolds : float
        Reynolds number on the hydraulic diameter. [-]
    a : float
        Ratio of inner to outer diameter. [-]

    Returns
    -------
    friction : float
        Darcy friction factor: exact when laminar, on Re* when turbulent. [-]

    References
    ----------
    .. [1] shah1978, laminar; gnielinski2009, turbulent.

    Examples
    --------
    >>> print(f"{annulus_friction(27364.0, 0.38941):.5f}")
    0.02617
    """
    exact = 64 * reynolds / annulus_reynolds(reynolds, a)
    turbulent = smooth_friction(annulus_reynolds(max(reynolds, TURBULENT), a))
    return _blend(reynolds, exact / min(reynolds, LAMINAR), turbulent)


def friction_gradient(friction, density, velocity, hydraulic_diameter):
    """
    Return the fall of pressure per metre by wall friction.

    Parameters
    ----------
    friction : float
        Darcy friction factor. [-]
    density : float or array
        Density of the gas. [kg/m^3]
    velocity : float or array
        Mean velocity. [m/s]
    hydraulic_diameter : float
        Four times the cross-section over the wetted perimeter. [m]

    Returns
    -------
    gradient : float or array
        Pressure lost per length, positive. [Pa/m]

    Examples
    --------
    >>> print(f"{1.2 * friction_gradient(0.026174, 0.88336, 4.287, 0.09408):.2f}")
    2.71
    """
    return friction * density * velocity**2 / (2 * hydraulic_diameter)


def smooth_friction(reynolds):
    """
    Return the Darcy friction factor of a smooth wall in turbulent flow (Konakov).

    Parameters
    ----------
    reynolds : float or array
        Reynolds number. [-]

    Returns
    -------
    friction : float or array
        Darcy friction factor. [-]

    References
    ----------
    .. [1] gnielinski2009.
    """
    return (1.8 * np.log10(reynolds) - 1.5) ** -2


def annulus_reynolds(reynolds, a):
    """
    Return the Reynolds number that gives an annulus the friction of a tube.

    Parameters
    ----------
    reynolds : float or array
        Reynolds number on the hydraulic diameter. [-]
    a : float
        Ratio of inner to outer diameter. [-]

    Returns
    -------
    reduced : float or array
        Re* = Re ((1 + a^2) ln a + 1 - a^2) / ((1 - a)^2 ln a). [-]

    References
    ----------
    .. [1] gnielinski2009.
    """
    log = np.log(a)
    return reynolds * ((1 + a * a) * log + 1 - a * a) / ((1 - a) ** 2 * log)


def _blend(reynolds, laminar, turbulent):
    weight = min(max((reynolds - LAMINAR) / (TURBULENT - LAMINAR), 0.0), 1.0)
    return (1 - weight) * laminar + weight * turbulent
