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
VESSELS = ("tube", "tank")
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
    stand_in : dict
        {product: the product that stands for it}: without couplings by position, one isomer for each formula.
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
    stand_in: dict
    coupled: tuple
    chlorides: tuple
    alkenes: tuple
    dropped: tuple
    share: float


def prune(network, feed, ratio, temperatures, error, couplings=True, vessels=VESSELS):
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
        Whether products of two radicals are told apart by position and attacked by chlorine; else lumped by formula.
    vessels : sequence of str
        tube, tank or both.

    Returns
    -------
    Pruned
    """
    slates = [Slate(network, feed, T) for T in temperatures]
    shares, amounts = weights(slates, ratio, vessels)
    kept, share = _keep(network, shares, amounts, error)
    part = network.within(kept)
    dropped = tuple(code for code in network.molecules if code not in kept)
    found = [traces(Slate(part, feed, slate.T), _within_reach(part, feed, slate.T, ratio), PRESSURE, LIGHT)
             for slate in slates]  # fmt: skip
    joined, coupled, chlorides = _couplings(part, found, COARSER * error)
    alkenes = _alkenes(found, error)
    if not couplings:
        return Pruned(part, joined, _lumped(joined, found), (), (), alkenes, dropped, share)
    return Pruned(part, joined, {}, coupled, chlorides, alkenes, dropped, share)


def weights(slates, ratio, vessels=VESSELS):
    """Return each molecule's share of the organic chlorine and its amount, one row a state: temperature, way, vessel."""
    share, amount = [], []
    for slate in slates:
        for kind in vessels:
            for part in ON_THE_WAY:
                x, _ = slate.at_uptake(part * _reach(slate, ratio), kind)
                share.append(slate.chlorine * x / (slate.chlorine @ x))
                amount.append(x)
    return np.array(share), np.array(amount)


def _reach(slate, ratio):
    """Return the uptake to look at: all the chlorine, or nearly all that the products can take."""
    return min(USED / ratio, 0.9 * slate.most())


def _within_reach(network, feed, T, ratio):
    """Return the ratio at which the kept products can take all the chlorine."""
    slate = Slate(network, feed, T)
    return USED / _reach(slate, ratio)


def _keep(network, share, amount, error):
    """Return the kept molecules and the chlorine left out: least first, each with a way to it."""
    most, codes = share.max(axis=0), network.molecules
    order = sorted((i for i, code in enumerate(codes) if code not in network.feeds), key=lambda i: most[i])
    dropped, lost = set(), np.zeros(len(share))
    for i in order:
        if (lost + share[:, i]).max() > error:
            break
        lost += share[:, i]
        dropped.add(codes[i])
    kept = [code for code in codes if code not in dropped]
    largest = dict(zip(codes, amount.max(axis=0), strict=True))
    for code in reversed(kept):  # fewest chlorines last: a way back is made before its own is asked for
        parents = [step.parent for step in network.steps if step.product == code]
        if code not in network.feeds and parents and not set(parents) & set(kept):
            kept.append(max(parents, key=lambda parent: largest[parent]))
    return set(kept), float(lost.max())


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


def _lumped(joined, found):
    """Return {product: the most abundant product with its formula}."""
    amount = {product: sum(each.couplings.get(product, 0.0) for each in found) for *_, product in joined}
    best: dict = {}
    for code in sorted(amount, key=lambda code: (-amount[code], code)):
        best.setdefault(molecule(code).formula, code)
    return {code: best[molecule(code).formula] for code in amount}


def _alkenes(found, error):
    """Return the alkenes above a tenth of the error, a mole of feed, and all without chlorine."""
    most: dict = {}
    for each in found:
        for code, amount in each.alkenes.items():
            most[code] = max(most.get(code, 0.0), amount)
    return tuple(sorted(code for code, n in most.items() if n > error / COARSER or not sum(molecule(code).chlorine)))
