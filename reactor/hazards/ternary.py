"""
The triangle of fuel, chlorine and inert gas as plain arrays: window, margin band, feed, corners, path.

The fuel keeps the proportions of its kinds and the inert gas those of its own; every point is classified as a
premixed gas at the temperature and pressure of the feed. What is drawn is the class, so that the figure and
the verdict cannot differ.
"""

import numpy as np

from reactor.hazards import windows
from reactor.hazards.explosive import ORDER, find, fractions

SIDE = 100  # divisions of each side


def ternary(book, feed, T, P, corners=(), path=None, lines=()):
    """
    Return all that a triangle shows, as one dictionary of plain lists.

    Parameters
    ----------
    book : Rulebook
        From `explosive.rulebook(gas)`. [-]
    feed : array, species
        The mixed feed; its fuel and its inert gas span the triangle. [mol]
    T, P : float
        Temperature and absolute pressure of every point. [K, Pa]
    corners : sequence of arrays
        Compositions at the corners of the meter errors. [mol]
    path : array, stations x species
        Operating path along the reactor. [mol]
    lines : sequence of (str, Line)
        Filling paths. [-]

    Returns
    -------
    found : dict
        `grid`: fuel, chlorine, inert [mole fractions] and class of each point; `window`, `widened`: lower and
        upper share of fuel in fuel and chlorine; `feed`, `corners`, `path`, `lines`: points. [-]
    """
    x = fractions(book, feed)[0]
    grid = _grid()
    rank = _ranks(book, x, grid, T, P)
    low, high = _window(book, x)
    rule = book.rule
    return {
        "temperature": float(T), "pressure": float(P),
        "grid": {**_columns(grid), "class": [str(ORDER[r]) for r in rank]},
        "window": [low, high],
        "widened": [rule["lower_limit_factor"] * low, min(high + rule["upper_limit_widening"], 1.0)],
        "feed": _columns(_points(book, feed)),
        "corners": _columns(np.vstack([_points(book, c) for c in corners])) if len(corners) else None,
        "path": _columns(_points(book, path)) if path is not None else None,
        "lines": [{"name": name, "fuel": one.fuel.tolist(), "chlorine": one.chlorine.tolist(),
                   "inert": one.inert.tolist()} for name, one in lines],
    }  # fmt: skip


def _columns(points):
    return {name: [float(v) for v in points[:, k]] for k, name in enumerate(("fuel", "chlorine", "inert"))}


def _grid():
    """Return fuel, chlorine and inert shares over the whole triangle."""
    steps = np.arange(SIDE + 1) / SIDE
    return np.array([(f, c, 1 - f - c) for f in steps for c in steps if f + c <= 1 + 1e-9]).clip(0.0)


def _points(book, compositions):
    """Return fuel, chlorine and inert share of compositions."""
    x = fractions(book, compositions)
    fuel, chlorine = x @ book.rungs.fuel, x[:, book.rungs.chlorine]
    return np.column_stack([fuel, chlorine, np.maximum(1 - fuel - chlorine, 0.0)])


def _parts(book, x):
    """Return the fuel and the inert gas of a composition, each summing to one; N2 where there is none."""
    fuel = x * book.rungs.fuel
    inert = x * ~book.rungs.fuel
    inert[book.rungs.chlorine] = 0.0
    if inert.sum() < 1e-12:
        inert[book.rungs.species.index("N2")] = 1.0
    return fuel / fuel.sum(), inert / inert.sum()


def _ranks(book, x, grid, T, P):
    fuel, inert = _parts(book, x)
    points = grid[:, :1] * fuel + grid[:, 2:] * inert
    points[:, book.rungs.chlorine] += grid[:, 1]
    at_T, at_P = np.full(len(grid), float(T)), np.full(len(grid), float(P))
    return find(book, points, at_T, at_P, at_T, premixed=True).rank


def _window(book, x):
    """Return the explosion range of the mixed fuel in chlorine, as a share of fuel."""
    shares = x[book.listed] / max(x[book.listed].sum(), 1e-300)
    low, high = windows.mixed(book.lower, book.upper, shares[None, :], book.rule["mixing_rule_extra"])
    return float(low[0]), float(high[0])
