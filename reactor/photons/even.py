"""
How unevenly the photolysis rate is spread over the gas, and what radicals make of it where they stay where they arise.

The molecules are mixed over the gap, radicals live too briefly to be: each cell has its own pool of them, fed by its
own J. A chain that ends in part at first order (walls, oxygen) and in part at second order (two radicals meet) goes as

    R(J) = sqrt(1 + a J/<J>) - 1,   d ln R/d ln J = (1 + 1/s)/2,   s = sqrt(1 + a J/<J>),

so the light order p that is found with the full chemistry gives a, and J_eff with R(J_eff) = <R(J)> is the J at which
one mixed pool runs as fast as the many local ones: p = 1/2: <sqrt J>^2; p = 1: <J>. (Own derivation; compared with
explicit pools, all radicals of the mechanism in every cell, in the tests.)
"""

from functools import cache
from typing import NamedTuple

import numpy as np

from reactor.curve import Curve, spline_slopes
from reactor.photons import spread
from reactor.photons.laws import slopes
from reactor.photons.shapes import rays_of

COARSE, FROM, TO = 90, np.log(1e-4), np.log(1e4)  # grid of ln(mean optical thickness)


class Cells(NamedTuple):
    """volume (c,): shares of the gas; lots (c, lengths): spread of the ways at which light is taken up in each cell."""

    volume: np.ndarray
    lots: np.ndarray

    def absorbed(self, tau):
        """Return, for each cell and each optical thickness, the absorbed share over tau; (c, n)."""
        return spread.absorbed_per_depth(self.lots, tau)


def cells(shape, law, lamp_radius, slant=None):
    """
    Return the light taken up in each cell of the gas around (or between) long lamps.

    Parameters
    ----------
    shape : Shape
        The geometry. [-]
    law : str
        Law of emission. [-]
    lamp_radius : float
        Radius of the emitter. [m]
    slant : array or None
        Light of each ray and slope behind the window, for rays averaged alike; None: no window. [-]
    """
    weight = None if slant is None else tuple(slant.sum(axis=0) / slant.sum())
    return _cells(shape, law, lamp_radius, weight)


@cache
def _cells(shape, law, lamp_radius, slope_share):
    rays = rays_of(shape, law, lamp_radius, fine=True)
    phi, weight = slopes(shape.slopes(law)) if slope_share is None else slopes(shape.slopes(law), len(slope_share))
    weight = weight if slope_share is None else np.array(slope_share)
    light = (rays.share / rays.share.sum())[rays.ray] * rays.weight
    flat = np.zeros((len(rays.volume), len(spread.LENGTHS)))
    for depth, sign in ((rays.after, 1.0), (rays.before, -1.0)):
        flat += sign * spread.spread(depth / shape.gap, light, rays.cell, len(rays.volume))
    lots = flat @ spread.tilted(phi, weight)
    return Cells(rays.volume, lots)


def local(cells, tau, share=1.0):
    """
    Return J over its mean in each cell.

    Parameters
    ----------
    cells : Cells
        From `cells`. [-]
    tau : array, shape (n,)
        Optical thickness of the gap in each line. [-]
    share : float or array, shape (n,)
        Weight of each line: photon flow times cross-section. [-]
    """
    tau = np.atleast_1d(np.asarray(tau, float))
    J = np.maximum(cells.absorbed(tau) @ np.broadcast_to(np.asarray(share, float), tau.shape), 0.0) / cells.volume
    return J / (cells.volume @ J)


def effective(J, volume, order):
    """
    Return the J that makes one mixed pool as fast as local ones.

    Parameters
    ----------
    J : array, shape (c,)
        Local over mean photolysis rate. [-]
    volume : array, shape (c,)
        Shares of the gas; add up to one. [-]
    order : float
        Light order of the chain at the effective J, 0.5 to 1. [-]

    Returns
    -------
    ratio : float
        J_eff/<J>. [-]

    Examples
    --------
    >>> J, volume = np.array([0.5, 1.5]), np.array([0.5, 0.5])
    >>> print([f"{effective(J, volume, p):.4f}" for p in (0.5, 0.75, 1.0)])
    ['0.9330', '0.9507', '1.0000']
    """
    p = min(max(order, 0.5), 1.0)
    if p > 0.9999:
        return 1.0
    if p < 0.5001:
        return float((volume @ np.sqrt(J)) ** 2)
    ratio, s = 1.0, 1 / (2 * p - 1)
    for _ in range(30):
        a = (s**2 - 1) / ratio
        mean = volume @ (np.sqrt(1 + a * J) - 1)
        new = float(((mean + 1) ** 2 - 1) / a)
        if abs(new - ratio) < 1e-10:
            break
        ratio = new
    return ratio


def unevenness(cells, tau, share=1.0):
    """Return <sqrt J>^2/<J>: how far one mixed pool overstates a chain that ends where two radicals meet."""
    if not np.size(tau):
        return 1.0
    return effective(local(cells, tau, share), cells.volume, 0.5)


def curve(cells, weight, sigma, order):
    """
    Return J_eff/<J> as the kernel's curve against ln of the mean optical thickness.

    The mean thickness is sum(weight sigma tau)/sum(weight sigma), as the kernel finds it at its own temperature.

    Parameters
    ----------
    cells : Cells
        From `cells`. [-]
    weight : array, shape (n,)
        Photons of each line. [mol/s]
    sigma : array, shape (n,)
        Cross-section of each line. [m2]
    order : float or callable
        Light order, or a function that returns it at ln of the mean thickness. [-]
    """
    if not np.any(weight):
        return Curve(0.0, 1.0, np.ones(2), np.zeros(2))
    share = weight * sigma
    relative = sigma / (share @ sigma / share.sum())
    grid = np.linspace(FROM, TO, COARSE)
    tau = np.exp(grid)[:, None] * relative
    each = cells.absorbed(tau.ravel()).reshape(len(cells.volume), *tau.shape)
    J = np.maximum(each @ share, 0.0) / cells.volume[:, None]
    J = J / (cells.volume @ J)
    orders = order(grid) if callable(order) else np.full(len(grid), order)
    value = np.array([effective(*pair) for pair in zip(J.T, [cells.volume] * len(grid), orders, strict=True)])
    step = float(grid[1] - grid[0])
    return Curve(float(FROM), step, value, spline_slopes(value, step))
