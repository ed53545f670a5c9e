"""
Steady states of a stirred tank followed round their turning points while one input moves (light, feed, cooling).

At a held temperature the composition at rest is unique, so all steady states lie on the curve where the heat
balance g(parameter, T) of the resting composition closes. That curve is followed by its arc length.
"""

import time
from typing import NamedTuple

import numpy as np

from reactor.errors import ConvergenceError
from reactor.kernel.plugflow import Budget
from reactor.kernel.tank import Balance, State, polish, steady_states

SMALLEST, LARGEST = 1e-4, 0.25  # arc length of a step, in units of the parameter's range and of SPAN
SPAN = 200.0  # K counted as long as the whole range of the parameter
SECANTS = 12  # tries to come back to the curve before the step is shortened


class Point(NamedTuple):
    """One point of a branch: the parameter and the steady state there."""

    parameter: float
    state: State


class _Plane:
    """The heat balance at rest over the plane (x, y) = (share of the parameter's range, T over SPAN)."""

    def __init__(self, tank_at, start, stop, budget):
        self.tank_at, self.start, self.stop, self.budget = tank_at, start, stop, budget
        self.began, self.n = time.monotonic(), None

    def balance(self, x):
        return Balance(self.tank_at(self.start + x * (self.stop - self.start)), self.budget)

    def __call__(self, place):
        if time.monotonic() - self.began > self.budget.seconds:
            raise ConvergenceError(f"the budget of {self.budget.seconds:g} s was used up at {place[1] * SPAN:.1f} K; "
                                   "raise solver.seconds")
        n, slope = self.balance(place[0]).at_rest(place[1] * SPAN, self.n, near=True)
        self.n = n[0]
        return float(slope[0])

    def point(self, place):
        parameter = self.start + place[0] * (self.stop - self.start)
        return Point(parameter, polish(self.balance(place[0]), self.n, place[1] * SPAN))


def branch(tank_at, start, stop, low, high, budget=Budget(), most=400):
    """
    Return the steady states met on the way of a parameter from `start` to `stop`, turning points included.

    Parameters
    ----------
    tank_at : callable
        Gives the `Tank` for a value of the parameter; for light over decades let it be the logarithm.
    start, stop : float
        Range of the parameter; the branch begins at the coldest steady state at `start`. [-]
    low, high : float
        Range of temperatures. [K]
    budget : Budget
        Limits of time and of steps per composition.
    most : int
        Most points. [-]

    Returns
    -------
    list of Point
        In the order of the arc; it ends where the parameter or the temperature leaves its range.

    Raises
    ------
    ConvergenceError
        When no steady state is found at `start`, or the curve cannot be followed.
    """
    first = steady_states(tank_at(start), low, high, budget)[0]
    plane = _Plane(tank_at, start, stop, budget)
    plane.n = first.n
    here, found = np.array([0.0, first.T / SPAN]), [Point(start, first)]
    ahead, step = _tangent(plane, here, np.array([1.0, 0.0])), 0.02
    while len(found) < most:
        there, tries = _corrected(plane, here, ahead, step)
        if there is None:
            ahead, step = _tangent(plane, here, ahead), 0.3 * step
            if step < SMALLEST:
                raise ConvergenceError(f"the steady states could not be followed beyond {found[-1].parameter:.6g} at "
                                       f"{found[-1].state.T:.1f} K; try a narrower range")
            continue
        if not (-1e-9 <= there[0] <= 1.0 + 1e-9 and low <= there[1] * SPAN <= high):
            found += _at_the_edge(plane, here, there)
            return found
        ahead, here = (there - here) / np.linalg.norm(there - here), there
        found.append(plane.point(here))
        step = min(step * (1.5 if tries <= 4 else 0.8), LARGEST)
    return found


def _tangent(plane, here, towards):
    """Return the direction of the curve, from two differences of the heat balance."""
    small = 1e-4
    by = np.array([plane(here + small * axis) - plane(here - small * axis) for axis in np.eye(2)])
    along = np.array([by[1], -by[0]]) / np.linalg.norm(by)
    return along if along @ towards >= 0 else -along


def _corrected(plane, here, ahead, step):
    """Return the point of the curve on the line across the predictor, and the tries it took; None where too far."""
    across, guess = np.array([-ahead[1], ahead[0]]), here + step * ahead
    try:
        a, b = 0.0, 0.02 * step
        value_a, value_b = plane(guess), plane(guess + b * across)
        for tries in range(SECANTS):
            if value_b == value_a:
                return None, tries
            a, b, value_a = b, b - value_b * (b - a) / (value_b - value_a), value_b
            if abs(b) > 0.5 * step:  # the curve bends away: too long a step
                return None, tries
            if abs(b - a) < 1e-7:
                return guess + b * across, tries
            value_b = plane(guess + b * across)
    except ConvergenceError:
        if time.monotonic() - plane.began > plane.budget.seconds:
            raise
    return None, SECANTS


def _at_the_edge(plane, here, there):
    """Return the point where the branch leaves the range of its parameter, found at the held edge."""
    edge = 1.0 if there[0] > 1.0 else 0.0
    if not (there[0] > 1.0 or there[0] < 0.0) or here[0] == edge:
        return []
    share = (edge - here[0]) / (there[0] - here[0])
    T = here[1] + share * (there[1] - here[1])
    for _ in range(20):
        value, small = plane(np.array([edge, T])), 1e-5
        move = -value * small / (plane(np.array([edge, T + small])) - value)
        T += float(np.clip(move, -0.1, 0.1))
        if abs(move) < 1e-9:
            plane(np.array([edge, T]))
            return [plane.point(np.array([edge, T]))]
    return []
