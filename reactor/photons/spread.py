"""
How long the way of the photons through the gas is, as a spread over path lengths; absorption follows from it.

A photon that would leave the gas after the path p (at the wall, at an end, in the lamp) is absorbed with the
probability 1 - exp(-kappa p). All geometry is thus in one spread of path lengths, kept on an even grid of ln(p) by
cubic Lagrange weights: total, absorbed and lost light keep their sum exactly.
"""

import numpy as np

from reactor.curve import Curve

STEP, BELOW, ABOVE = 0.06, np.log(1e-5), np.log(1e4)  # grid of ln(path over the gap)
FIRST, LAST, POINTS = np.log(1e-8), np.log(1e5), 420  # grid of ln(optical thickness) of the curves
LENGTHS = np.concatenate(([0.0], np.exp(np.arange(BELOW, ABOVE + STEP / 2, STEP))))


def psi(x):
    """Return (1 - exp(-x))/x."""
    safe = np.maximum(x, 1e-30)
    return -np.expm1(-safe) / safe


def spread(path, weight, row, rows):
    """
    Return weights on `LENGTHS` of paths (over the gap), in `rows` lots of which each path belongs to one.

    Parameters
    ----------
    path : array, shape (n,)
        Path through the gas over the gap. [-]
    weight : array, shape (n,)
        Photons on it. [-]
    row : array, shape (n,)
        Lot of each. [-]
    rows : int
        Number of lots. [-]
    """
    last = len(LENGTHS) - 1
    place = (np.log(np.maximum(path, 1e-300)) - BELOW) / STEP
    left = np.clip(place.astype(int), 1, last - 3)
    u = np.minimum(place - left, 2.0)
    lagrange = (-u * (u - 1) * (u - 2) / 6, (u + 1) * (u - 1) * (u - 2) / 2, -(u + 1) * u * (u - 2) / 2,
                (u + 1) * u * (u - 1) / 6)  # fmt: skip
    short = path < LENGTHS[1]
    part = np.where(short, path / LENGTHS[1], 0.0)
    size = rows * (last + 1)
    found = np.bincount(row * (last + 1), weight * np.where(short, 1 - part, 0.0), size)
    for shift, share in enumerate(lagrange):
        share = np.where(short, part if shift == 1 else 0.0, share)
        where = np.where(short, 0 if shift == 1 else 1, left - 1 + shift)
        found += np.bincount(row * (last + 1) + where + 1, weight * share, size)
    return found.reshape(rows, last + 1)


def absorbed_per_depth(lots, tau):
    """Return, for each lot, absorbed photons over optical thickness; (lots, n)."""
    return (lots * LENGTHS) @ psi(LENGTHS[:, None] * np.asarray(tau))


def surviving(lots, tau):
    """Return, for each lot, the photons that leave unabsorbed; (lots, n)."""
    return lots @ np.exp(-LENGTHS[:, None] * np.asarray(tau))


def curves(lots, lost):
    """
    Return the kernel's curves against ln(tau) for each lot.

    Parameters
    ----------
    lots : array, shape (s, lengths)
        Spread of all photons entering, adding up to one in each lot. [-]
    lost : array, shape (s, lengths)
        Spread of those counted in the second curve. [-]

    Returns
    -------
    absorbed, passed : lists of Curve
        Absorbed share over tau, and the share of `lost` that survives; 1e-8 relative. [-]
    """
    grid = np.linspace(FIRST, LAST, POINTS)
    x = LENGTHS[:, None] * np.exp(grid)
    mean, gone = psi(x), np.exp(-x)
    step = float(grid[1] - grid[0])
    value, slope = (lots * LENGTHS) @ mean, (lots * LENGTHS) @ (gone - mean)
    left, left_slope = lost @ gone, -lost @ (x * gone)

    def some(values, slopes):
        return [Curve(FIRST, step, *pair) for pair in zip(values, slopes, strict=True)]

    return some(value, slope), some(left, left_slope)


def survival(lost):
    """Return curves of what survives of each lot against ln(tau)."""
    grid = np.linspace(FIRST, LAST, POINTS)
    x = LENGTHS[:, None] * np.exp(grid)
    gone = np.exp(-x)
    pairs = zip(lost @ gone, -lost @ (x * gone), strict=True)
    return [Curve(FIRST, float(grid[1] - grid[0]), value, slope) for value, slope in pairs]


def tilted(slope, weight):
    """Return the matrix that turns a spread of ways seen along the lamp into one of true ways, (lengths, lengths)."""
    path = (LENGTHS[1:, None] / np.cos(slope)).ravel()
    row = np.repeat(np.arange(1, len(LENGTHS)), len(slope))
    found = spread(path, np.tile(weight, len(LENGTHS) - 1), row, len(LENGTHS))
    found[0, 0] = weight.sum()
    return found
