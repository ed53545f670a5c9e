"""
Couplings and alkenes before any reactor run: what radicals do when they do not meet Cl2, along the slate.

A radical stands at rho = [R]/[Cl] = sum k x/(k(R + Cl2) [Cl2]); the atoms at [Cl]^2 = J [Cl2]/(ends); a pair makes
k rho rho [Cl] a unit of exposure. At fixed uptake the couplings go with the square root of J.
"""

from dataclasses import dataclass
from itertools import combinations_with_replacement

import numpy as np

from reactor.chemistry.network import enumerate as made
from reactor.chemistry.network import rates
from reactor.chemistry.network.slate import SCALE
from reactor.chemistry.network.tree import coupled, molecule, without_chlorine

BOLTZMANN = 1.380649e-23  # J/K
STATIONS = 60
USED = 0.999  # share of the chlorine at the last station


@dataclass(frozen=True)
class Traces:
    """
    A priori amounts by canonical code, in mol a mole of feed.

    Parameters
    ----------
    couplings : dict of float
        Products of two radicals, less what chlorine makes of them. [mol]
    chlorides : dict of float
        What one attack of chlorine makes of the couplings. [mol]
    alkenes : dict of float
        By loss of a chlorine beside the free carbon. [mol]
    pairs : tuple
        (radical, radical, product) of every coupling.
    """

    couplings: dict
    chlorides: dict
    alkenes: dict
    pairs: tuple


def pairs(radicals):
    """Return (radical, radical, product) of all radicals that are coupled."""
    willing = [code for code in radicals if made.couple(code)]
    return tuple((a, b, coupled(a, b)) for a, b in combinations_with_replacement(willing, 2))


def traces(slate, ratio, pressure, photolysis):
    """
    Return the couplings and alkenes of a slate in plug flow.

    Parameters
    ----------
    slate : Slate
        Molecules, feed, temperature.
    ratio : float
        Feed molecules per Cl2. [-]
    pressure : float
        [Pa]
    photolysis : float
        Mean J of the lit gas. [1/s]

    Returns
    -------
    Traces
    """
    network, T = slate.network, slate.T
    _, last = slate.at_uptake(USED / ratio)
    xi = last * np.linspace(0.0, 1.0, STATIONS) ** 0.7
    x = np.array([slate.tube(value) for value in xi])
    density = 1e-6 * pressure / (BOLTZMANN * T) / (1.0 + 1.0 / ratio)  # feed molecules per cm3
    chlorine = np.maximum(1.0 / ratio - (x @ slate.chlorine - slate.fed_chlorine), 1e-12)
    rho = _radicals(network, slate, x, chlorine, T)
    joined = pairs(network.radicals)
    made_by = {pair: made.coupling(*pair) for pair in joined}
    ends = sum(rho[code] * _atom_end(code, T) for code in rho)
    for (a, b, _), (kc, moves) in made_by.items():
        ends = ends + (kc(T) + _sum(moves, T)) * rho[a] * rho[b]
    atoms = np.sqrt(photolysis * chlorine * density / ends)  # [Cl] in 1/cm3
    grown: dict = {}
    for (a, b, product), (kc, _) in made_by.items():
        speed = kc(T) * rho[a] * rho[b] * atoms / density / SCALE
        grown[product] = grown.get(product, 0.0) + _integral(speed, xi)
    couplings, chlorides = _attacked(grown, xi, T)
    return Traces(couplings, chlorides, _alkenes(rho, xi, density, T), joined)


def _sum(moves, T):
    return sum(rate(T) for rate in moves.values())


def _atom_end(code, T):
    joined, losing = made.with_atom(code)
    return joined(T) + _sum(losing, T)


def _radicals(network, slate, x, chlorine, T):
    """Return {radical: [R]/[Cl]} along the slate."""
    at = {code: i for i, code in enumerate(slate.codes)}
    found: dict = {}
    for step in network.steps:
        found[step.radical] = found.get(step.radical, 0.0) + step.rate(T) * x[:, at[step.parent]]
    return {code: gain / (made.chlorination(code)(T) * chlorine) for code, gain in found.items()}


def _integral(speed, xi):
    """Return the running integral over the exposure."""
    parts = (speed[1:] + speed[:-1]) / 2 * np.diff(xi)
    return np.concatenate([[0.0], np.cumsum(parts)])


def _attacked(grown, xi, T):
    """Return what is left of the couplings, and what one attack of chlorine makes of those without chlorine."""
    left = {code: float(amount[-1]) for code, amount in grown.items()}
    chlorides: dict = {}
    for code, amount in grown.items():
        if sum(molecule(code).chlorine):
            continue
        for step in made.substitutions(code):
            hit = float(_integral(step.rate(T) / SCALE * amount, xi)[-1])
            left[code] = max(left[code] - hit, 0.0)
            chlorides[step.product] = chlorides.get(step.product, 0.0) + hit
    return left, chlorides


def _alkenes(rho, xi, density, T):
    """Return the alkenes from loss of chlorine, balanced with its addition, at the last station."""
    gain: dict = {}
    for code in rho:
        for alkene, number in without_chlorine(code).items():
            gain[alkene] = gain.get(alkene, 0.0) + rates.loss(number)(T) * rho[code] / density / SCALE
    back = rates.addition(2)(T) / SCALE
    found = {}
    for alkene, speed in gain.items():
        level = 0.0
        for before, after, step in zip(speed[:-1], speed[1:], np.diff(xi), strict=True):
            fade = np.exp(-back * step)
            level = level * fade + (before + after) / 2 * (1 - fade) / back
        found[alkene] = float(level)
    return found
