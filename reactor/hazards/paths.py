"""
Judge the mixtures between two streams: bad mixing at an injector, and filling or emptying the plant.

When two gases meet, every proportion of them exists somewhere, and the compositions lie on the straight line
between the two (equal diffusivities). A filling path is a chain of such lines.
"""

from dataclasses import dataclass

import numpy as np

from reactor.hazards.explosive import ORDER, Class, Mixture, classify, find, fractions
from reactor.hazards.substitution import mixture_enthalpy, temperature_of

POINTS = 201


@dataclass(frozen=True)
class Line:
    """
    The line from one stream to another.

    `class_` is the worst on it, `at` the share of the second stream there [mol/mol], `mixture` the mixture;
    `inside` is the range of that share that is INSIDE, or None; `fuel`, `chlorine`, `inert` and `rank` run
    along the line, `share` beside them.
    """

    start: str
    stop: str
    class_: Class
    at: float
    mixture: Mixture
    inside: tuple | None
    share: np.ndarray
    fuel: np.ndarray
    chlorine: np.ndarray
    inert: np.ndarray
    rank: np.ndarray


def line(book, start, stop, P):
    """
    Classify everything between two streams, mixed at constant enthalpy and unreacted.

    Parameters
    ----------
    book : Rulebook
        From `explosive.rulebook(gas)`. [-]
    start, stop : Stream
        The two gases; only their composition and temperature count. [-]
    P : float
        Absolute pressure. [Pa]

    Returns
    -------
    found : Line
        The worst class between them, both ends included. [-]
    """
    share = np.linspace(0.0, 1.0, POINTS)
    x, T, found = _found(book, start, stop, P, share)
    rank = found.rank
    worst = int(np.lexsort((found.T_ad, rank))[-1])
    inside = share[rank == Class.INSIDE.rank]
    fuel, chlorine = x @ book.rungs.fuel, x[:, book.rungs.chlorine]
    named = dict(zip(book.rungs.species, x[worst], strict=True))
    return Line(
        start.name,
        stop.name,
        ORDER[int(rank[worst])],
        float(share[worst]),
        classify(book, named, float(T[worst]), P),
        (float(inside.min()), float(inside.max())) if len(inside) else None,
        share, fuel, chlorine, 1 - fuel - chlorine, rank,
    )  # fmt: skip


def _found(book, start, stop, P, share):
    """Return mole fractions, temperatures and findings at shares of the second stream."""
    ends = np.vstack([fractions(book, stream.moles) for stream in (start, stop)])
    x = (1 - share)[:, None] * ends[0] + share[:, None] * ends[1]
    heat = mixture_enthalpy(book.rungs, ends, np.array([start.temperature, stop.temperature]))
    T = temperature_of(book.rungs.grid, x @ book.rungs.enthalpy.T, (1 - share) * heat[0] + share * heat[1])
    return x, T, find(book, x, T, np.full(len(share), float(P)), T, premixed=True)


@dataclass(frozen=True)
class Segregation:
    """
    Bad mixing of two streams.

    `line` holds what complete segregation meets; `tolerated` is the largest intensity of segregation (0
    mixed, 1 not mixed at all) up to which both parcels keep the class of the mean; nan: nothing worsens it.
    """

    line: Line
    mean: Class
    tolerated: float


def segregation(book, fuel, chlorine, P):
    """
    Return how badly two streams may be mixed before the class of some parcel worsens.

    A parcel of intensity s lies the share s of the way from the mean to one of the two streams.

    Parameters
    ----------
    book : Rulebook
        From `explosive.rulebook(gas)`. [-]
    fuel, chlorine : Stream
        The two gases that meet, in their proportion. [-]
    P : float
        Absolute pressure. [Pa]

    Returns
    -------
    found : Segregation
        The line between the two, the class of the mean, and the intensity tolerated. [-]
    """
    mean = mean_share(fuel, chlorine)
    rank = int(_found(book, fuel, chlorine, P, np.array([mean]))[2].rank[0])
    sides = [_worsens(book, fuel, chlorine, P, mean, stop, rank) for stop in (0.0, 1.0)]
    tolerated = min((s for s in sides if s is not None), default=float("nan"))
    return Segregation(line(book, fuel, chlorine, P), ORDER[rank], tolerated)


def _worsens(book, fuel, chlorine, P, mean, stop, rank):
    """Return the intensity at which a parcel on its way to one of the streams first worsens, else None."""
    low, high = 0.0, 1.0
    for points in (POINTS, 41, 41):
        intensity = np.linspace(low, high, points)
        ranks = _found(book, fuel, chlorine, P, mean + intensity * (stop - mean))[2].rank
        if not (ranks > rank).any():
            return None
        first = int(np.argmax(ranks > rank))
        low, high = float(intensity[max(first - 1, 0)]), float(intensity[first])
    return high


def mean_share(one, two):
    """Return the share of the second of two streams in both together [mol/mol]."""
    return float(np.sum(two.moles) / (np.sum(one.moles) + np.sum(two.moles)))


def filling(book, purge, alkane, mixed, chlorine, P, order="alkane first"):
    """
    Return the lines along which the plant is filled, emptied, and swept after a trip.

    Parameters
    ----------
    book : Rulebook
        From `explosive.rulebook(gas)`. [-]
    purge, alkane, mixed, chlorine : Stream
        Purge gas, feed without chlorine, the mixed feed, the chlorine alone. [-]
    P : float
        Absolute pressure. [Pa]
    order : str
        `alkane first` or `chlorine first`. [-]

    Returns
    -------
    lines : list of (str, Line)
        What is done, and what it meets. [-]
    """
    first = alkane if order == "alkane first" else chlorine
    steps = [("start-up: fill", purge, first), ("start-up: second gas on", first, mixed),
             ("shutdown: chlorine off", mixed, alkane), ("shutdown: purge", alkane, purge),
             ("trip: purge with both feeds off", mixed, purge)]  # fmt: skip
    return [(words, line(book, one, two, P)) for words, one, two in steps]
