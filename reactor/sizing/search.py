"""
Find a root with few costly trials: one unknown by bracket, several by a damped secant rule.

Everything runs on plain numbers: `trial(x)` gives the gap between a result and its target, or raises
`Blocked` where nothing can be solved. Near misses are kept, so that "no solution" comes with the curve that
was seen.
"""

import math
from typing import NamedTuple

import numpy as np

EXACT = 2e-7  # of the target; a found input gives the target back within this
NARROW = 1e-9  # relative width of a bracket that cannot be narrowed further
NO_WAY = "the result turns away from the target on both sides"
STEPS = (
    0.4,
    1.2,
    2.3,
    2.3,
    2.3,
    2.3,
    2.3,
)  # first move and the longest moves after it, on the scale of the search


class Blocked(Exception):  # noqa: N818
    """A trial point where the case cannot be built or solved; says why."""


class Root(NamedTuple):
    """Where the search ended: x, its gap, whether it is a solution, what limits it, trials [(x, gap)]."""

    x: object
    gap: object
    found: bool
    limit: str
    trials: list


class _Memory:
    """Trials by place, each made once."""

    def __init__(self, trial):
        self.trial, self.seen, self.blocked = trial, {}, {}

    def __call__(self, x):
        if x not in self.seen:
            try:
                self.seen[x] = self.trial(x)
            except Blocked as error:
                self.blocked[x] = str(error)
                raise
        return self.seen[x]

    @property
    def trials(self):
        return sorted(self.seen.items())

    def best(self):
        return min(self.seen.items(), key=lambda item: abs(item[1]))


def one(trial, start, low, high, most=14):
    """
    Return the `Root` of a function of one unknown between `low` and `high`, walking from `start`.

    Parameters
    ----------
    trial : callable
        Gap from the target at x; relative to the target, positive above it. [-]
    start, low, high : float
        On the scale of the search (the logarithm where the input is positive). [-]
    most : int
        Trials at most. [-]
    """
    f = _Memory(trial)
    try:
        f(start)
    except Blocked as error:
        return Root(start, math.nan, False, str(error), f.trials)
    if abs(f(start)) <= EXACT:
        return Root(start, f(start), True, "", f.trials)
    pair, limit = _walk(f, start, low, high, most)
    if pair is None:
        x, gap = f.best()
        return Root(x, gap, abs(gap) <= EXACT, "" if abs(gap) <= EXACT else limit, f.trials)
    return _narrow(f, pair[0], pair[1], most)


def _walk(f, start, low, high, most):
    """Return two neighbouring trials of opposite sign, or what stopped the walk."""
    limits = {}
    direction = 1.0 if high - start >= start - low else -1.0
    ahead = None
    for _turn in range(2):
        x, step = start, STEPS[0]
        slope = ahead
        for reach in STEPS[1:]:
            if len(f.seen) >= most - 2:
                return None, "the trials allowed are used up; narrow the range with --between"
            new = min(max(x + direction * step, low), high)
            if new == x:
                limits[direction] = f"the end of the range, {'highest' if direction > 0 else 'lowest'} value allowed"
                break
            new, why = _open(f, x, new)
            if new is None:
                limits[direction] = why
                break
            if f(x) * f(new) <= 0:
                return (x, new), ""
            slope = (f(new) - f(x)) / (new - x)
            if abs(f(new)) >= abs(f(x)) * (1 - 1e-9):  # away from the target: turn round, or give up there
                limits[direction] = "the result turns away from the target"
                break
            step = min(max(1.2 * abs(f(new) / slope), 0.05 if x == start else 1.6 * step), reach)
            x = new
        else:
            limits[direction] = "the trials allowed are used up; narrow the range with --between"
        if abs(f.best()[1]) < abs(f(start)) and f.best()[0] != start:
            break  # it did come nearer that way: the other way leads off
        direction, ahead = -direction, slope
    best = f.best()[0]
    if best == start:  # no way leads nearer
        values = list(f.seen.values())
        if len(values) > 1 and max(values) - min(values) <= 1e-7:
            return None, "the target, which does not depend on this input"
        return None, next((why for why in limits.values() if "end of the range" in why), NO_WAY)
    side = 1.0 if best > start else -1.0 if best < start else direction
    return None, limits.get(side) or next(iter(limits.values()), "the range is empty")


def _open(f, x, new):
    """Return the furthest solvable place towards `new`, or None with the reason."""
    why = ""
    for _ in range(4):
        try:
            f(new)
        except Blocked as error:
            why, new = str(error), x + 0.35 * (new - x)
            if abs(new - x) < 1e-4:
                break
        else:
            return new, ""
    return None, why


def _narrow(f, a, b, most):
    """Return the root inside a bracket: inverse quadratic steps, halving where they do not pay."""
    last = b
    while len(f.seen) < most:
        if abs(f(a)) < abs(f(b)):
            a, b = b, a
        if abs(f(b)) <= EXACT:
            return Root(b, f(b), True, "", f.trials)
        if abs(b - a) <= NARROW * (1 + abs(b)):
            break
        new = _guess(f, a, b, last)
        last = b
        try:
            gap = f(new)
        except Blocked as error:
            return Root(b, f(b), False, str(error), f.trials)
        a, b = (b, new) if gap * f(b) < 0 else (a, new)
    x, gap = f.best()
    jump = (
        "the result jumps across the target there" if abs(b - a) <= 1e-6 * (1 + abs(b)) else "the trials allowed are used up"
    )
    return Root(x, gap, abs(gap) <= EXACT, jump, f.trials)


def _guess(f, a, b, last):
    """Return the next place in a bracket (b the better end)."""
    fa, fb = f(a), f(b)
    x = b - fb * (b - a) / (fb - fa)
    near = sorted(f.seen, key=lambda place: abs(f.seen[place]))[:3]
    values = [f.seen[place] for place in near]
    if len(near) == 3 and len({round(v, 15) for v in values}) == 3:
        quadratic = sum(
            p * math.prod(-values[j] / (values[i] - values[j]) for j in range(3) if j != i) for i, p in enumerate(near)
        )
        if min(a, b) < quadratic < max(a, b):
            x = quadratic
    inner = 1e-3 if abs(fb) > 1e-3 else 0.0  # keep off the ends while far from done
    low, high = sorted((a, b))
    edge = inner * (high - low)
    x = min(max(x, low + edge), high - edge)
    if abs(fb) > 0.5 * abs(fa) and abs(x - b) > 0.9 * abs(b - a):
        x = (a + b) / 2
    return x if x not in f.seen else (a + b) / 2


def several(trial, start, low, high, most=30):
    """
    Return the `Root` of as many gaps as unknowns.

    Newton's rule on differences, then Broyden's update, damped.

    Parameters
    ----------
    trial : callable
        Array of gaps at an array of unknowns. [-]
    start, low, high : array
        On the scale of the search. [-]
    most : int
        Trials at most. [-]
    """
    trials = []

    def f(x):
        gaps = np.asarray(trial(tuple(x)))
        trials.append((tuple(x), gaps))
        return gaps

    try:
        x, gap = np.array(start, float), f(start)
        slope = _differences(f, x, gap, low, high)
        fresh = True
        while len(trials) < most:
            if np.abs(gap).max() <= EXACT:
                return Root(tuple(x), gap, True, "", trials)
            step = np.linalg.lstsq(slope, -gap, rcond=1e-10)[0]
            step *= min(1.0, 1.5 / max(np.abs(step).max(), 1e-12))
            new, new_gap = _downhill(f, x, gap, step, low, high)
            if new is None:
                if fresh or len(trials) + len(x) >= most:
                    break
                slope, fresh = _differences(f, x, gap, low, high), True
                continue
            change = new - x
            slope = slope + np.outer(new_gap - gap - slope @ change, change) / max(change @ change, 1e-300)
            x, gap, fresh = new, new_gap, False
    except Blocked as error:
        best = min(trials, key=lambda item: np.abs(item[1]).max(), default=(tuple(start), np.array([math.nan])))
        return Root(best[0], best[1], False, str(error), trials)
    best, gap = min(trials, key=lambda item: np.abs(item[1]).max())
    at = [i for i in range(len(best)) if best[i] <= low[i] + 1e-9 or best[i] >= high[i] - 1e-9]
    limit = f"the end of the range of unknown {at[0] + 1}" if at else "the targets pull against one another there"
    return Root(best, gap, False, limit, trials)


def _differences(f, x, gap, low, high):
    """Return the matrix of slopes by small forward (or backward) steps."""
    slope = np.empty((len(gap), len(x)))
    for i in range(len(x)):
        step = 0.02 if x[i] + 0.02 <= high[i] else -0.02
        moved = x.copy()
        moved[i] += step
        slope[:, i] = (f(moved) - gap) / step
    return slope


def _downhill(f, x, gap, step, low, high):
    """
    Return the first place along a step that is nearer to the targets, and its gaps.

    None when there is none.
    """
    for share in (1.0, 0.4, 0.1):
        new = np.clip(x + share * step, low, high)
        if np.abs(new - x).max() < 1e-12:
            return None, None
        try:
            found = f(new)
        except Blocked:
            continue
        if np.abs(found).max() < np.abs(gap).max():
            return new, found
    return None, None
