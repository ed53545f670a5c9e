"""
Trace a curve of steady states through its turning points by arc length.

A steady state solves F(y, p) = 0. Followed in p alone, the curve is lost where it turns back (ignition,
extinction); followed in arc length s, with the step condition w.(y - y0) + (p - p0) dp/ds = ds, it is not.
"""

from typing import NamedTuple

import numpy as np

from reactor.errors import ConvergenceError


class Curve(NamedTuple):
    """Points along a curve: unknowns y (M, N), parameter p (M,), and where p turns back: rows of (p, y)."""

    y: np.ndarray
    p: np.ndarray
    turns: tuple


def trace(system, y, p, weight, direction, within, longest=0.1, points=600):
    """
    Follow a curve from one of its points until the parameter leaves its range.

    Parameters
    ----------
    system : callable
        (y, p) -> F, dF/dy, dF/dp; scaled so that Newton's rule works. [-]
    y : array (N,)
        A steady state. [-]
    p : float
        Its parameter. [-]
    weight : array (N,)
        How much each unknown counts in the arc length. [-]
    direction : float
        Sign of the first move of p. [-]
    within : tuple of float
        Range of the parameter. [-]
    longest : float
        Longest step in arc length. [-]
    points : int
        Most points to find. [-]

    Returns
    -------
    Curve

    Raises
    ------
    ConvergenceError
        When the step shrinks to nothing.
    """
    y, p = np.array(y, dtype=float), float(p)
    tangent = _tangent(system, y, p, weight, np.append(np.zeros(len(y)), np.sign(direction)))
    ys, ps, tangents, step = [y], [p], [tangent], 0.2 * longest
    while len(ps) < points:
        new = _corrected(system, y, p, weight, tangent, step)
        if new is None:
            step *= 0.35
            if step < 1e-7 * longest:
                raise ConvergenceError(
                    f"the curve of steady states could not be followed beyond p = {p:.5g}; "
                    "try another range of the parameter"
                )
            continue
        y, p, rounds = new
        before, tangent = tangent, _tangent(system, y, p, weight, tangent)
        ys.append(y)
        ps.append(p)
        tangents.append(tangent)
        bend = _product(before, tangent, weight)
        step = min(longest, step * (1.6 if rounds <= 4 and bend > 0.98 else 0.5 if bend < 0.9 else 1.0))
        if not within[0] <= p <= within[1]:
            break
    return Curve(np.array(ys), np.array(ps), tuple(_turns(system, ys, ps, tangents, weight)))


def _product(a, b, weight):
    return float((weight * a[:-1]) @ (weight * b[:-1]) + a[-1] * b[-1])


def _bordered(by_y, by_p, tangent, weight):
    """Return the matrix of F and the arc length condition."""
    size = len(by_p) + 1
    matrix = np.empty((size, size))
    matrix[:-1, :-1], matrix[:-1, -1] = by_y, by_p
    matrix[-1, :-1], matrix[-1, -1] = weight**2 * tangent[:-1], tangent[-1]
    return matrix


def _solve(matrix, right):
    """Solve with rows and columns scaled to one: radicals and temperatures differ by many powers of ten."""
    rows = 1 / np.maximum(np.abs(matrix).max(axis=1), 1e-300)
    scaled = matrix * rows[:, None]
    columns = 1 / np.maximum(np.abs(scaled).max(axis=0), 1e-300)
    return np.linalg.solve(scaled * columns, right * rows) * columns


def _tangent(system, y, p, weight, before):
    """Return the unit tangent that goes on in the direction of the one before."""
    _, by_y, by_p = system(y, p)
    right = np.zeros(len(y) + 1)
    right[-1] = 1.0
    found = _solve(_bordered(by_y, by_p, before, weight), right)
    found /= np.sqrt(_product(found, found, weight))
    return found if _product(found, before, weight) > 0 else -found


def _corrected(system, y, p, weight, tangent, step, rounds=12):
    """Return the next point by Newton's rule, and how many rounds it took; None where it fails."""
    new, q = y + step * tangent[:-1], p + step * tangent[-1]
    for number in range(1, rounds + 1):
        F, by_y, by_p = system(new, q)
        gap = (weight**2 * tangent[:-1]) @ (new - y) + tangent[-1] * (q - p) - step
        try:
            move = _solve(_bordered(by_y, by_p, tangent, weight), -np.append(F, gap))
        except np.linalg.LinAlgError:
            return None
        if not np.all(np.isfinite(move)):
            return None
        new, q = new + move[:-1], q + move[-1]
        if np.sqrt(_product(move, move, weight)) < 1e-8 and np.all(
            np.abs(move[:-1]) < 1e-6 * np.abs(new) + 1e-14
        ):
            return new, q, number
    return None


def _turns(system, ys, ps, tangents, weight):
    """Yield (p, y) of every turning point: there dp/ds passes zero; found by bisection in the step."""
    for i in range(len(ps) - 1):
        if tangents[i][-1] * tangents[i + 1][-1] >= 0:
            continue
        y, p, tangent = ys[i], ps[i], tangents[i]
        low, high = 0.0, np.sqrt(_product(*(2 * (np.append(ys[i + 1] - y, ps[i + 1] - p),)), weight))
        best = (p, y)
        for _ in range(24):
            middle = (low + high) / 2
            found = _corrected(system, y, p, weight, tangent, middle)
            if found is None:
                break
            best = (found[1], found[0])
            ahead = _tangent(system, found[0], found[1], weight, tangent)
            low, high = (middle, high) if ahead[-1] * tangent[-1] > 0 else (low, middle)
        yield best
