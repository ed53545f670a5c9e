"""
Leave out species until the chlorine in what was left out reaches a stated share of the organic chlorine.

Judged before any reactor run: the slate in plug flow and in a stirred tank (any real mixing lies between), at each
temperature asked for, at the full uptake and on the way to it.
"""

from dataclasses import dataclass

import numpy as np

from reactor.chemistry.network.enumerate import Network
from reactor.chemistry.network.slate import Slate
from reactor.chemistry.network.traces import USED, pairs, traces
from reactor.chemistry.network.tree import molecule

ON_THE_WAY = (0.25, 0.5, 0.75, 1.0)  # shares of the uptake at which species are weighed
LIGHT, PRESSURE = 1e-3, 1.2e5  # 1/s, Pa; the ranking of couplings hardly depends on either
COARSER = 10.0  # couplings are traces: left out up to so many times the error, of the couplings themselves


@dataclass(frozen=True)
class Pruned:
    """
    What is kept of a network, and what was left out.

    Parameters
    ----------
    network : Network
        Feeds and substitution products that are kept.
    pairs : tuple
        (radical, radical, product) of the couplings that are kept.
    coupled : tuple of str
        Coupling products that chlorine attacks once more, and their kept chlorides stand in `chlorides`.
    chlorides : tuple of str
        Chlorides of couplings that are kept.
    alkenes : tuple of str
        Alkenes that are kept.
    dropped : tuple of str
        Substitution products left out.
    share : float
        Organic chlorine in all that was left out, of all. [-]
    """

    network: Network
    pairs: tuple
    coupled: tuple
    chlorides: tuple
    alkenes: tuple
    dropped: tuple
    share: float


def prune(network, feed, ratio, temperatures, error, couplings=True):
    """
    Return the part of a network that carries all but a stated share of the organic chlorine.

    Parameters
    ----------
    network : Network
        The whole.
    feed : dict of float
        Amounts by canonical code; any scale. [-]
    ratio : float
        Feed molecules per Cl2. [-]
    temperatures : sequence of float
        Coldest and hottest gas. [K]
    error : float
        Share of the organic chlorine that may be left out. [-]
    couplings : bool
        Whether products of two radicals are wanted.

    Returns
    -------
    Pruned
    """
    slates = [Slate(network, feed, T) for T in temperatures]
    weight, largest = weights(slates, ratio)
    kept, share = _keep(network, weight, largest, error)
    part = network.within(kept)
    dropped = tuple(code for code in network.molecules if code not in kept)
    if not couplings:
        return Pruned(part, (), (), (), (), dropped, share)
    found = [traces(Slate(part, feed, slate.T), _within_reach(part, feed, slate.T, ratio), PRESSURE, LIGHT)
             for slate in slates]  # fmt: skip
    joined, coupled, chlorides = _couplings(part, found, COARSER * error)
    return Pruned(part, joined, coupled, chlorides, _alkenes(found, error), dropped, share)


def weights(slates, ratio):
    """Return each molecule's share of the organic chlorine and its amount, the largest over tube, tank and the way."""
    share = np.zeros(len(slates[0].codes))
    amount = share.copy()
    for slate in slates:
        for kind in ("tube", "tank"):
            for part in ON_THE_WAY:
                x, _ = slate.at_uptake(part * _reach(slate, ratio), kind)
                share = np.maximum(share, slate.chlorine * x / (slate.chlorine @ x))
                amount = np.maximum(amount, x)
    return dict(zip(slates[0].codes, share, strict=True)), dict(zip(slates[0].codes, amount, strict=True))


def _reach(slate, ratio):
    """Return the uptake to look at: all the chlorine, or nearly all that the products can take."""
    return min(USED / ratio, 0.9 * slate.most())


def _within_reach(network, feed, T, ratio):
    """Return the ratio at which the kept products can take all the chlorine."""
    slate = Slate(network, feed, T)
    return USED / _reach(slate, ratio)


def _keep(network, weight, amount, error):
    """Return the kept molecules and the share of the chlorine left out: least first, each with a way to it."""
    order = sorted((code for code in network.molecules if code not in network.feeds), key=lambda code: weight[code])
    dropped, share = set(), 0.0
    for code in order:
        if share + weight[code] > error:
            break
        share += weight[code]
        dropped.add(code)
    kept = [code for code in network.molecules if code not in dropped]
    for code in reversed(kept):  # fewest chlorines last: a way back is made before its own is asked for
        parents = [step.parent for step in network.steps if step.product == code]
        if code not in network.feeds and parents and not set(parents) & set(kept):
            kept.append(max(parents, key=lambda parent: amount[parent]))
    return set(kept), share


def _couplings(network, found, error):
    """Return the pairs, attacked couplings and chlorides that carry all but a share of the coupling products."""
    most: dict = {}
    for each in found:
        total = sum(each.couplings.values()) + sum(each.chlorides.values())
        both = {
            code: each.couplings.get(code, 0.0) + each.chlorides.get(code, 0.0)
            for code in {*each.couplings, *each.chlorides}
        }
        for code, amount in both.items():
            most[code] = max(most.get(code, 0.0), amount / max(total, 1e-300))
    out, share = set(), 0.0
    for code in sorted(most, key=lambda code: (most[code], code)):
        share += most[code]
        if share > error:
            break
        out.add(code)
    joined = tuple(pair for pair in pairs(network.radicals) if pair[2] not in out)
    chlorides = tuple(sorted({c for each in found for c in each.chlorides} - out))
    attacked = {a for *_, a in joined if not sum(molecule(a).chlorine)} if chlorides else set()
    return joined, tuple(sorted(attacked - set(network.molecules))), chlorides


def _alkenes(found, error):
    """Return the alkenes above a tenth of the error, a mole of feed, and all without chlorine."""
    most: dict = {}
    for each in found:
        for code, amount in each.alkenes.items():
            most[code] = max(most.get(code, 0.0), amount)
    return tuple(sorted(code for code, n in most.items() if n > error / COARSER or not sum(molecule(code).chlorine)))
