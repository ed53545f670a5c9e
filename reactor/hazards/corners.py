"""
The worst class that the meter errors allow.

A feed is known only as well as its meters. Every meter may be off by its relative error, each on its own: a
box. The class is looked up at the corners of the box, along its edges and along its diagonals, since a range
can lie between two corners.
"""

from dataclasses import dataclass
from itertools import combinations, product

import numpy as np

from reactor.hazards.explosive import ORDER, Class, Mixture, classify, find, fractions
from reactor.hazards.substitution import mixture_enthalpy, temperature_of

STEP = 2e-3  # relative flow between two points looked at
PART = 50  # meter errors looked at in one go, from the small ones on
WIDEST = 0.5  # largest meter error looked at


@dataclass(frozen=True)
class Corner:
    """The worst point of the box of meter errors."""

    class_: Class
    corner: str  # "chlorine +3 %, alkane -3 %", or "as metered"
    mixture: Mixture
    meter_error_at_change: float  # the common error at which the class first worsens; nan: not up to 50 %


def worst_corner(book, streams, meters, P, premixed=True):
    """
    Classify every mixture that the meter errors allow and name the worst.

    Parameters
    ----------
    book : Rulebook
        From `explosive.rulebook(gas)`. [-]
    streams : list of Stream
        With `name`, `moles` (by species of the mechanism) and `temperature`; mixed at constant enthalpy. [-]
    meters : dict of float
        Relative error by stream name; a stream without one is taken as exact. [-]
    P : float
        Absolute pressure of the mixture. [Pa]
    premixed : bool
        A feed or injector, where the temperature gate holds. [-]

    Returns
    -------
    worst : Corner
        Class, corner, its mixture, and the common meter error at which the class changes. [-]
    """
    named = [stream for stream in streams if meters.get(stream.name, 0) > 0]
    errors = np.array([meters[stream.name] for stream in named])
    offsets = _box(errors)
    ranks, T_ad, x, T = _look(book, streams, named, offsets, P, premixed)
    if ranks.max() > ranks[0]:
        at = int(np.lexsort((np.abs(offsets).sum(axis=1), T_ad, ranks))[-1])
    else:
        at = _hottest_corner(offsets, errors, ranks, T_ad)
    return Corner(
        class_=ORDER[int(ranks[at])],
        corner=_words(named, offsets[at]),
        mixture=classify(book, x[at, : len(streams[0].moles)], float(T[at]), P, premixed),
        meter_error_at_change=_error_at_change(book, streams, named, P, premixed, int(ranks[0])),
    )


def _hottest_corner(offsets, errors, ranks, T_ad):
    """Return the true corner closest to the threshold, among those as bad as the worst class."""
    corner = np.all(np.isclose(np.abs(offsets), errors), axis=1) & (ranks == ranks.max())
    return int(np.argmax(np.where(corner, T_ad, -1.0)))


def _box(errors):
    """Return relative offsets (points x meters): the centre, then edges and diagonals between corners."""
    corners = [errors * np.array(signs) for signs in product((1.0, -1.0), repeat=len(errors))]
    points = [np.zeros((1, len(errors)))]
    for one, two in combinations(corners, 2):
        moved = np.flatnonzero(one != two)
        if len(moved) in (1, len(errors)):
            points.append(_line(one, two))
    return np.vstack(points)


def _line(one, two):
    """Return the points from `one` to `two` on multiples of STEP about the middle, and both ends."""
    half = np.abs(two - one).max() / 2
    steps = np.arange(-int(half / STEP), int(half / STEP) + 1) * STEP / half
    along = np.concatenate([[-1.0], steps, [1.0]])
    return (one + two) / 2 + along[:, None] * (two - one) / 2


def _look(book, streams, named, offsets, P, premixed):
    """Return rank, adiabatic temperature, mole fractions and temperature at each offset."""
    factor = np.ones((len(offsets), len(streams)))
    for column, stream in enumerate(streams):
        where = [k for k, other in enumerate(named) if other is stream]
        if where:
            factor[:, column] += offsets[:, where[0]]
    x = fractions(book, factor @ np.array([stream.moles for stream in streams]))
    T = _mixed_temperature(book, streams, factor, x)
    found = find(book, x, T, np.full(len(T), float(P)), T, premixed)
    return found.rank, found.T_ad, x, T


def _mixed_temperature(book, streams, factor, x):
    """Return the temperature of the streams mixed at constant enthalpy [K]."""
    parts = [fractions(book, stream.moles) for stream in streams]
    heat = np.array([mixture_enthalpy(book.rungs, part, np.array([float(stream.temperature)]))[0]
                     for part, stream in zip(parts, streams, strict=True)])  # fmt: skip
    moles = factor * np.array([np.sum(stream.moles) for stream in streams])
    share = moles / moles.sum(axis=1, keepdims=True)
    return temperature_of(book.rungs.grid, x @ book.rungs.enthalpy.T, share @ heat)


def _error_at_change(book, streams, named, P, premixed, rank):
    """Return the smallest common meter error at which some corner is worse than `rank` [-], else nan."""
    if not named:
        return np.nan
    sizes = np.arange(1, round(WIDEST / STEP) + 1) * STEP
    for _ in range(2):
        parts = np.split(sizes, range(PART, len(sizes), PART))
        found = (_first_worse(book, streams, named, part, P, premixed, rank) for part in parts)
        first = float(next((size for size in found if size is not None), np.nan))
        if np.isnan(first):
            return np.nan
        sizes = np.linspace(first - STEP, first, 51)[1:]
    return first


def _first_worse(book, streams, named, sizes, P, premixed, rank):
    """Return the first of the common errors at which some corner is worse than `rank`, else None."""
    signs = np.array(list(product((1.0, -1.0), repeat=len(named))))
    offsets = (sizes[:, None, None] * signs).reshape(-1, len(named))
    found = _look(book, streams, named, offsets, P, premixed)[0]
    worse = found.reshape(len(sizes), -1).max(axis=1) > rank
    return sizes[int(np.argmax(worse))] if worse.any() else None


def _words(named, offset):
    """Return a corner in words, the largest rise first."""
    if not len(offset) or not np.any(offset):
        return "as metered"
    order = np.argsort(-offset, kind="stable")
    return ", ".join(f"{named[k].name} {100 * offset[k]:+.3g} %" for k in order)
