"""
Close the recycle: what goes back to the inlet is what the separation returns of what leaves, less the purge.

The alkane that enters the reactor is held at the flow of the case; how much of it is fresh gas is part of
the answer. For every species that is fed the unknown is what one pass makes of it: a share used up, or an
amount formed. Given these the loop is linear and is solved exactly, however long inerts take to build up.
What is not fed is substituted directly. Both are converged together by Anderson's rule.
"""

from dataclasses import replace

import numpy as np

from reactor.case import loops
from reactor.case.schema import Feed
from reactor.case.species import is_alkane
from reactor.errors import CaseError, ConvergenceError
from reactor.rating.plant import mechanism
from reactor.sizing.probe import Probe, with_gas

TOLERANCE = 5e-9  # of the total flow: how well the torn stream returns to itself; the last of it goes to the products
MOST = 40  # passes
TRACE = 1e-30  # mol/s; less of a species is left out of the recycled stream
MEMORY = 5  # passes that Anderson's rule looks back on
NORMAL = 101325.0 / (8.31446261815324 * 273.15) / 3600  # mol/s of 1 Nm3/h


class Warm:
    """The unknowns of the last closed loop, where the next one begins."""

    x = None


def probe(case, warm=None):
    """
    Return a `Probe` of a case, its loop closed first where it has a recycle.

    `probe.loop` holds the accounts.
    """
    return Probe(case) if case.recycle is None else close(case, warm)


def closed(case):
    """
    Return the case with its loop closed.

    The recycle stands among its feeds, the alkane stream is the fresh gas.
    """
    return case if case.recycle is None else close(case).case


def close(case, warm=None):
    """
    Return the `Probe` of the case with its loop closed.

    Parameters
    ----------
    case : Case
        With [recycle]. [-]
    warm : Warm, optional
        Carries the answer from one call to the next. [-]

    Raises
    ------
    CaseError
        When inerts have no way out, or more alkane returns than the reactor takes.
    ConvergenceError
        When the loop does not settle.
    """
    tear = _Tear(case)
    warm = warm or Warm()
    x = warm.x if warm.x is not None else np.zeros(len(tear.gas.species))
    points: list = []
    misses: list = []
    for number in range(1, MOST + 1):
        found = tear.run(x)
        miss = tear.unknowns(found) - x
        if found.gap <= TOLERANCE:
            warm.x = x
            found.probe.loop, found.passes = found, number
            return found.probe
        points, misses = [*points[-MEMORY:], x], [*misses[-MEMORY:], miss]
        x = _anderson(points, misses)
    raise ConvergenceError(
        f"the recycle did not settle in {MOST} passes, gap {np.abs(miss).max():.1e} mol/s; "
        "raise recycle.purge or tighten solver.rtol"
    )


def _anderson(points, misses):
    """Return the next place of Anderson's accelerated fixed point."""
    x, miss = points[-1], misses[-1]
    if len(points) == 1:
        return x + miss
    steps = np.diff(np.array(points), axis=0).T
    turns = np.diff(np.array(misses), axis=0).T
    weight = np.linalg.lstsq(turns, miss, rcond=1e-12)[0]
    return x + miss - (steps + turns) @ weight


class _Pass:
    """One pass: what entered, what the reactor changed, what the separation returned (mol/s by species)."""

    def __init__(self, tear, recycle, fresh, probe):
        gas = tear.gas
        self.probe, self.fresh, self.recycle = probe, fresh, recycle
        self.chlorine = tear.others
        self.inlet = fresh + recycle + tear.others
        self.outlet = probe.profile.outlet.moles
        self.returned = tear.back * self.outlet
        self.purged = tear.purge / max(1 - tear.purge, 1e-12) * recycle if tear.purge < 1 else tear.share * self.outlet
        self.product = self.outlet - recycle - self.purged
        self.gap = float(np.abs(self.returned - recycle).max() / self.inlet.sum())
        self.gas = gas


class _Tear:
    """The loop of a case as plain arrays over the species."""

    def __init__(self, case):
        self.case, self.purge = case, case.recycle.purge
        self.gas = mechanism(case)
        index, K = self.gas.index, len(self.gas.species)
        self.share = np.array(
            [
                case.recycle.of(s) if kind == "molecule" else 0.0
                for s, kind in zip(self.gas.species, self.gas.kinds, strict=True)
            ]
        )
        stream = case.feed[case.recycle.stream]
        self.fresh = np.zeros(K)
        for species, n in stream.moles.items():
            self.fresh[index[species]] = n
        self.others = np.zeros(K)
        for name, feed in case.feed.items():
            for species, n in feed.moles.items() if name != stream.name else ():
                self.others[index[species]] += n
        known = [index[s] for s in index if self.fresh[index[s]] > 0 and _alkane(s)]
        self.alkane = np.array(known)
        self.wanted = self.fresh[self.alkane].sum()
        self.fraction = self.fresh / self.fresh.sum()
        self.fed = self.fresh + self.others > 0
        self.scale = np.where(self.fed, self.fresh + self.others, 1.0)
        back = (1 - self.purge) * self.share
        stuck = [
            s
            for s, b, n in zip(self.gas.species, back, self.fresh + self.others, strict=True)
            if b > 1 - 1e-9 and n > 0 and index[s] not in known
        ]
        if stuck:
            raise CaseError(
                f"recycle.purge: {', '.join(stuck)} comes in with the feed and has no way out; purge "
                f"more than 0 "
                "or send less of it back"
            )
        self.back = back

    def unknowns(self, found):
        """
        Return what a pass made of the species.

        Used share times the feed, amount formed, or what returns unfed.
        """
        change = found.outlet - found.inlet
        used = self.scale * change / np.maximum(found.inlet, 1e-300)
        return np.where(self.fed, np.where(change < 0, used, change), found.returned)

    def run(self, x):
        """
        Return the `_Pass` in which the reactor is taken to behave like `x`.

        The reactor itself is solved.
        """
        fresh, recycle = self._flows(x)
        probe = Probe(self._closed(fresh, recycle))
        return _Pass(self, recycle, fresh, probe)

    def _flows(self, x):
        """
        Return fresh gas and recycle.

        What enters is f y + o + r, and r = b (entering (1 - used) + formed).
        """
        used = np.where(self.fed & (x < 0), np.maximum(x / self.scale, -1.0), 0.0)
        formed = np.where(self.fed & (x > 0), x, 0.0)
        kept = self.back * (1 + used)
        open_end = np.maximum(1 - kept, 1e-12)
        fixed, slope = (kept * self.others + self.back * formed) / open_end, kept * self.fraction / open_end
        fixed = np.where(self.fed, fixed, np.maximum(x, 0.0))
        total = self.wanted - fixed[self.alkane].sum()
        fresh = total / (self.fraction[self.alkane].sum() + slope[self.alkane].sum())
        if fresh <= 0:
            raise CaseError(
                f"feed.{self.case.recycle.stream}.flow: more alkane returns than the reactor takes; raise the flow"
            )
        recycle = np.maximum(fixed + slope * fresh, 0.0)
        recycle[recycle < TRACE] = 0.0
        return fresh * self.fraction, recycle

    def _closed(self, fresh, recycle):
        """Return the case with its alkane stream cut to the fresh gas and the recycle beside it."""
        case, species = self.case, self.gas.species
        feed = dict(case.feed)
        name = case.recycle.stream
        feed[name] = replace(feed[name], moles={s: float(n) for s, n in zip(species, fresh, strict=True) if n > 0})
        back = {s: float(n) for s, n in zip(species, recycle, strict=True) if n > 0}
        if back:
            feed[loops.NAME] = Feed(name=loops.NAME, moles=back, temperature=case.recycle.temperature)
        return with_gas(replace(case, feed=feed), self.gas)


def _alkane(key):
    """Tell whether a species of the mechanism is an alkane; species of own mechanisms may be unknown here."""
    try:
        return is_alkane(key)
    except ValueError:
        return False


def record(probe):
    """
    Return the closed loop as plain records.

    Streams in mol/s and kg/h, build-up of inerts, closure by element.
    """
    one = probe.loop
    gas = one.gas
    streams = {
        "fresh gas": one.fresh,
        "chlorine": one.chlorine,
        "recycle": one.recycle,
        "reactor inlet": one.inlet,
        "reactor outlet": one.outlet,
        "products, HCl, slip": one.product,
        "purge": one.purged,
    }
    inert = [i for i, s in enumerate(gas.species) if s in ("N2", "Ar", "CO2", "O2") and one.inlet[i] > 0]
    fed, out = (one.fresh + one.chlorine) @ gas.atoms, (one.product + one.purged) @ gas.atoms
    alkane = [i for i in range(len(gas.species)) if one.fresh[i] > 0 and _alkane(gas.species[i])]
    return {
        "streams": [_stream(name, moles, gas) for name, moles in streams.items()],
        "closure": {e: float(abs(out[i] - fed[i]) / fed[i]) for i, e in enumerate(gas.elements) if fed[i] > 0},
        "build_up": {
            gas.species[i]: {
                "fresh": float((one.fresh + one.chlorine)[i] / (one.fresh + one.chlorine).sum()),
                "loop": float(one.recycle[i] / max(one.recycle.sum(), 1e-300)),
            }
            for i in inert
        },
        "gap": one.gap,
        "passes": one.passes,
        "recycle_ratio": float(one.recycle.sum() / one.fresh.sum()),
        "alkane_lost_in_purge": float(one.purged[alkane].sum() / one.fresh[alkane].sum()),
    }


def _stream(name, moles, gas):
    total = float(moles.sum())
    kept = {s: float(n) for s, n in zip(gas.species, moles, strict=True) if n > 1e-12 * max(total, 1e-300)}
    return {
        "name": name,
        "moles": total,
        "mass": float(moles @ gas.molar_mass) * 3600,
        "normal_volume": total / NORMAL,
        "composition": kept,
    }
