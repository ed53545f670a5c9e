"""Photolysis rate in an absorbing gas: every line with its own optical thickness, tabulated field."""

from typing import NamedTuple

import numpy as np

from reference_kernel.thermo import AVOGADRO


class Absorbed(NamedTuple):
    """Photolysis rate J [1/s], dJ/dc, dJ/dT; photons and watts absorbed and passed on, per metre."""

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


def absorb(beam, c, T):
    """Return what chlorine at `c` [mol/m^3] and `T` [K] makes of the light, as `Absorbed`."""
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
    rate = beam.entering * kappa * beam.path / beam.area  # of each line in the thin limit g = 1
    by_T = rate * (g + dg) * sigma_T / sigma
    by_c = rate @ dg / max(c, THINNEST)
    photons = rate * g * c * beam.area
    return Absorbed(
        J=rate @ g,
        by_c=by_c,
        by_T=by_T.sum(),
        photons=photons.sum(),
        power=photons @ beam.energy,
        power_by_c=(rate * (g + dg) * beam.area) @ beam.energy,
        power_by_T=(by_T * c * beam.area) @ beam.energy,
        outer_wall=beam.entering @ beam.transmitted(log_tau)[0],
    )
