"""Photolysis rate in an absorbing gas: every line with its own optical thickness, tabulated field."""

from typing import NamedTuple

import numpy as np

from reactor.kernel.thermo import AVOGADRO


class Beam(NamedTuple):
    """
    The light that enters one section, as arrays over lines.

    `entering` [mol/m/s] enters the gas per metre, `energy` [J/mol] is carried by a mole of photons, `sigma`
    (lines, degree + 1) is the cross-section [m^2] as a polynomial in (T - middle)/half, `path` [m] the gas gap,
    `area` [m^2] the gas cross-section, `absorbed` and `transmitted` curves against ln(optical thickness):
    absorbed share over thickness, and share that is not absorbed. A fixed rate [1/s] replaces it all. `even`, a curve
    against ln(mean thickness), is the rate that counts for the radicals over the mean rate (None: one mixed pool).
    `along`, a curve of position [m], multiplies `entering` (None: constant light).
    """

    entering: np.ndarray
    energy: np.ndarray
    sigma: np.ndarray
    middle: float
    half: float
    path: float
    area: float
    absorbed: object
    transmitted: object
    fixed: float | None = None
    even: object | None = None
    along: object | None = None


class Absorbed(NamedTuple):
    """Photolysis rate J [1/s] for the radicals, dJ/dc, dJ/dT; photons, watts (true mean) absorbed and passed, per metre."""

    J: float
    by_c: float
    by_T: float
    photons: float
    power: float
    power_by_c: float
    power_by_T: float
    outer_wall: float


THINNEST = 1e-300  # keeps ln(thickness) finite where there is no chlorine


def cross_sections(beam, T):
    """Return sigma and d sigma/dT of every line, T held inside the range of the polynomial."""
    x = np.clip((T - beam.middle) / beam.half, -1.0, 1.0)
    inside = 1.0 if abs(T - beam.middle) < beam.half else 0.0
    degree = beam.sigma.shape[1]
    powers = x ** np.arange(degree)
    slopes = np.arange(1, degree) * powers[:-1]
    return beam.sigma @ powers, inside * (beam.sigma[:, 1:] @ slopes) / beam.half


def absorb(beam, c, T, z=0.0):
    """Return what chlorine at `c` [mol/m^3] and `T` [K] makes of the light at position `z` [m], as `Absorbed`."""
    if beam.fixed is not None:
        photons, energy = beam.fixed * c * beam.area, float(beam.energy.mean())
        by_c = beam.fixed * beam.area * energy
        return Absorbed(beam.fixed, 0.0, 0.0, photons, photons * energy, by_c, 0.0, 0.0)
    if not beam.entering.any():
        return Absorbed(0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0)
    sigma, sigma_T = cross_sections(beam, T)
    kappa = sigma * AVOGADRO
    log_tau = np.log(np.maximum(kappa * c * beam.path, THINNEST))
    g, dg = beam.absorbed(log_tau)
    entering = beam.entering if beam.along is None else beam.entering * max(beam.along(float(z))[0], 0.0)
    rate = entering * kappa * beam.path / beam.area  # of each line in the thin limit g = 1
    by_T = rate * (g + dg) * sigma_T / sigma
    by_c = rate @ dg / max(c, THINNEST)
    photons = rate * g * c * beam.area
    J, J_T = rate @ g, by_T.sum()
    if beam.even is not None:
        J, by_c, J_T = _evened(beam, c, sigma, sigma_T, (J, by_c, J_T))
    return Absorbed(
        J=J,
        by_c=by_c,
        by_T=J_T,
        photons=photons.sum(),
        power=photons @ beam.energy,
        power_by_c=(rate * (g + dg) * beam.area) @ beam.energy,
        power_by_T=(by_T * c * beam.area) @ beam.energy,
        outer_wall=entering @ beam.transmitted(log_tau)[0],
    )


def _evened(beam, c, sigma, sigma_T, mean):
    """Return J and its slopes for radicals that stay where they arise, from those of the mean rate."""
    J, by_c, by_T = mean
    first, second = beam.entering @ sigma, beam.entering @ sigma**2
    depth = AVOGADRO * beam.path * second / first
    ratio, slope = beam.even(float(np.log(max(c * depth, THINNEST))))
    depth_T = 2 * (beam.entering @ (sigma * sigma_T)) / second - (beam.entering @ sigma_T) / first
    return J * ratio, by_c * ratio + J * slope / max(c, THINNEST), by_T * ratio + J * slope * depth_T


def photolysis_rates(beam, c, T, z):
    """Return J [1/s] for the radicals at many places: chlorine `c` [mol/m^3], `T` [K], position `z` [m], all (M,)."""
    if beam.fixed is not None:
        return np.full(len(c), beam.fixed)
    x = np.clip((T - beam.middle) / beam.half, -1.0, 1.0)
    sigma = x[:, None] ** np.arange(beam.sigma.shape[1]) @ beam.sigma.T
    kappa = AVOGADRO * sigma
    log_tau = np.log(np.maximum(kappa * c[:, None] * beam.path, THINNEST))
    J = (kappa * beam.absorbed(log_tau)[0]) @ beam.entering * (beam.path / beam.area)
    if beam.even is not None and beam.entering.any():
        depth = AVOGADRO * beam.path * (sigma**2 @ beam.entering) / (sigma @ beam.entering)
        J = J * beam.even(np.log(np.maximum(c * depth, THINNEST)))[0]
    return J if beam.along is None else J * np.maximum(beam.along(z)[0], 0.0)
