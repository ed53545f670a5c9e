"""
Targets in, inputs out.

The search over rated cases, and the plain record of what was found or what binds.
"""

import math
from typing import NamedTuple

from reactor.errors import CaseError, ConvergenceError, ReactorError
from reactor.sizing import goals, loop, search
from reactor.sizing.unknown import put, unknown


class Sized(NamedTuple):
    """The sized case, and the record `sizing.found` (names as in the README)."""

    case: object
    probe: object
    record: dict


def size(case, find, wanted, keeps=(), between=None):
    """
    Return the `Sized` case: its unknown inputs changed until the targets are met.

    Parameters
    ----------
    case : Case
        Where the search starts. [-]
    find : sequence of str
        Keys of the inputs that may be changed, as for `--set`. [-]
    wanted : sequence of Goal
        As many targets as unknowns. [-]
    keeps : sequence of Goal
        Constraints that the answer must keep. [-]
    between : tuple of str, optional
        Range of a single unknown. [-]

    Raises
    ------
    CaseError
        For unknowns and targets that do not match in number, or name no number.
    Contradiction
        When wishes exclude each other.
    """
    _count(find, wanted)
    goals.check(wanted, keeps)
    unknowns = [unknown(case, key, between if len(find) == 1 else None) for key in find]
    look = Looker(case, unknowns, wanted, keeps)
    if len(unknowns) > 1:
        root = search.several(
            look.gaps,
            [_to(u, u.start) for u in unknowns],
            [_to(u, u.low) for u in unknowns],
            [_to(u, u.high) for u in unknowns],
        )
    elif unknowns[0].whole:
        root = _whole(look, unknowns[0])
    else:
        u = unknowns[0]
        root = search.one(lambda x: look.gaps((x,))[0], _to(u, u.start), _to(u, u.low), _to(u, u.high))
    return _answer(case, look, root)


def _count(find, wanted):
    """Check that there are as many unknowns as targets, all of them equalities."""
    if not find:
        raise CaseError('nothing to find: name an input, like --find lamp.power, or write find = "lamp.power" in [targets]')
    if not wanted:
        raise CaseError('no target: add one, like --for "chlorine_slip=1 %", or write chlorine_slip = "1 %" in [targets]')
    for goal in wanted:
        if goal.relation != "=":
            raise CaseError(f'--for "{goal}": a target is met exactly, write =; a bound belongs to --keep "{goal}"')
    if len(find) != len(wanted):
        raise CaseError(
            f"{len(find)} unknown ({', '.join(find)}) for {len(wanted)} target "
            f"({', '.join(map(str, wanted))}): as many of one as of the other are due"
        )


class Looker:
    """Probes of a case at values of its unknowns, each made once and kept."""

    def __init__(self, case, unknowns, wanted, keeps):
        self.case, self.unknowns, self.wanted, self.keeps = case, unknowns, wanted, keeps
        self.probes = {}
        self.warm = loop.Warm()
        self.error = None

    def probe(self, x):
        """Return the probe at a place on the scale of the search."""
        if x not in self.probes:
            try:
                changed = put(self.case, self.unknowns, [_from(u, v) for u, v in zip(self.unknowns, x, strict=True)])
                self.probes[x] = loop.probe(changed, self.warm)
            except ReactorError as error:
                self.error = error
                raise search.Blocked(str(error).splitlines()[0].removeprefix("--set: ")) from None
        return self.probes[x]

    def gaps(self, x):
        """Return the gap of every target."""
        probe, found = self.probe(tuple(x)), []
        for goal in self.wanted:
            value = probe[goal.name]
            if value is None:
                raise search.Blocked(f"{goal.name} has no value there")
            found.append(goals.gap(goal, value))
        return found

    def broken(self, x):
        """Return the constraints that a place breaks."""
        return [keep for keep in self.keeps if not keep.holds(self.probe(x)[keep.name])]

    @property
    def ratings(self):
        """Return how many cases were solved."""
        return len(self.probes)


def _to(u, value):
    return math.log(value) if u.logarithmic else value / _scale(u)


def _from(u, x):
    return math.exp(x) if u.logarithmic else x * _scale(u)


def _scale(u):
    """Return the length by which a linear unknown is measured."""
    return max(abs(u.high - u.low) / 6.0, 1e-300)


def _whole(look, u):
    """Return the first whole number beyond which the target is passed: doubling, then halving."""

    def f(n):
        return look.gaps((math.log(n),))[0]

    try:
        n, gap = round(u.start), f(round(u.start))
    except search.Blocked as error:
        return search.Root(math.log(round(u.start)), math.nan, False, str(error), [])
    low, high, limit = round(u.low), round(u.high), "the end of the range"
    for up in (True, False):
        a, fa = n, gap
        while len(look.probes) < 14:
            b = min(2 * a, high) if up else max(a // 2, low)
            if b == a:
                break
            try:
                fb = f(b)
            except search.Blocked as error:
                limit = str(error)
                break
            if fa * fb <= 0:
                return _between(f, look, *sorted((a, b)))
            if abs(fb) > abs(fa):
                limit = "the result turns away from the target" if a != n else limit
                break
            a, fa = b, fb
    x = min(look.probes, key=lambda place: abs(look.gaps(place)[0]))
    return search.Root(x[0], look.gaps(x)[0], False, limit, _trials(look))


def _between(f, look, a, b):
    """Return the larger of the two neighbours between which the target is passed."""
    while b - a > 1:
        middle = (a + b) // 2
        a, b = (middle, b) if f(a) * f(middle) > 0 else (a, middle)
    chosen = a if f(a) == 0 else b
    return search.Root(math.log(chosen), f(chosen), True, "", _trials(look))


def _trials(look):
    return sorted((place[0], look.gaps(place)[0]) for place in look.probes)


def _answer(case, look, root):
    """Return the `Sized` case and its record, constraints applied."""
    x = root.x if isinstance(root.x, tuple) else (root.x,)
    found, limit = root.found, root.limit
    for number, u in enumerate(look.unknowns, 1):
        limit = limit.replace(f"unknown {number}", u.key)
    if not look.probes:
        raise look.error or ConvergenceError(f"the case cannot be solved where the search begins: {limit}")
    if x not in look.probes:
        x = min(look.probes, key=lambda place: max(map(abs, look.gaps(place))))
    broken = look.broken(x)
    met_at = None
    if broken and found:
        met_at, found = x, False
        x, limit = _nearest_kept(look, x, broken)
    elif broken:
        limit = f"{limit}; {broken[0]} is broken there too"
    sized = put(case, look.unknowns, [_from(u, v) for u, v in zip(look.unknowns, x, strict=True)])
    return Sized(sized, look.probe(x), _record(look, x, found, limit, met_at))


def _nearest_kept(look, x, broken):
    """Return the place nearest to the target that breaks nothing, and the words for what limits it."""
    words = "; ".join(
        f"{keep}: it is {goals.shown(keep.name, look.probe(x)[keep.name])} where the target is met" for keep in broken
    )
    kept = [place for place in look.probes if not look.broken(place)]
    for u in look.unknowns[:1] if not kept and len(look.unknowns) == 1 and not look.unknowns[0].whole else ():
        kept = [end for end in ((_to(u, u.low),), (_to(u, u.high),)) if _tried(look, end) and not look.broken(end)]
    if not kept:
        return x, f"{words}; no case that was tried keeps it"
    best = min(kept, key=lambda place: max(map(abs, look.gaps(place))))
    if len(look.unknowns) > 1 or look.unknowns[0].whole:
        return best, words
    a, b = best[0], x[0]
    for _ in range(6):  # close in on the place where the constraint begins to bind
        if abs(b - a) < 1e-3:
            break
        middle = (a + b) / 2
        try:
            a, b = (a, middle) if look.broken((middle,)) else (middle, b)
        except search.Blocked:
            b = middle
    return (a,), words


def _tried(look, place):
    """Tell whether a place can be solved."""
    try:
        look.probe(place)
    except search.Blocked:
        return False
    return True


def _record(look, x, found, limit, met_at):
    """Return the search as plain records."""

    def at(place):
        return {u.key: u.text(_from(u, v)) for u, v in zip(look.unknowns, place, strict=True)}

    def goal(g, place):
        value = look.probe(place)[g.name]
        return {
            "name": g.name,
            "relation": g.relation,
            "wanted": g.text,
            "got": goals.shown(g.name, value),
            "value": value,
            "holds": bool(found) if g.relation == "=" else bool(g.holds(value)),
        }

    curve = [
        {"inputs": at(place)} | {g.name: look.probe(place)[g.name] for g in (*look.wanted, *look.keeps)}
        for place in sorted(look.probes)
    ]
    return {
        "solved": bool(found),
        "inputs": at(x),
        "before": {u.key: u.text(u.start) for u in look.unknowns},
        "along": sorted({key for u in look.unknowns for key in u.along}),
        "targets": [goal(g, x) for g in look.wanted],
        "constraints": [goal(g, x) for g in look.keeps],
        "limited_by": limit,
        "target_met_at": None if met_at is None else at(met_at),
        "whole": [u.key for u in look.unknowns if u.whole],
        "ratings": look.ratings,
        "curve": curve,
    }
