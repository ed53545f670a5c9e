"""Functions tabulated once on an even grid, so that the kernel reads them at the cost of a cubic."""

from typing import NamedTuple

import numpy as np


class Curve(NamedTuple):
    """
    A piecewise cubic (Hermite) on the even grid start, start + step, ...; flat beyond both ends.

    `value` and `slope` (dy/dx) are arrays of one length; calling the curve returns y and dy/dx.
    """

    start: float
    step: float
    value: np.ndarray
    slope: np.ndarray

    def __call__(self, x):
        """Return y and dy/dx at `x` (float or array)."""
        if isinstance(x, float):
            return self._at(x)
        last = len(self.value) - 1
        place = (np.asarray(x, float) - self.start) / self.step
        clipped = np.clip(place, 0.0, last)
        left = np.minimum(clipped.astype(int), last - 1)
        u = clipped - left
        y0, y1 = self.value[left], self.value[left + 1]
        d0, d1 = self.slope[left] * self.step, self.slope[left + 1] * self.step
        a, b = 3 * (y1 - y0) - 2 * d0 - d1, 2 * (y0 - y1) + d0 + d1
        dy = (d0 + u * (2 * a + u * 3 * b)) / self.step
        return y0 + u * (d0 + u * (a + u * b)), np.where(place == clipped, dy, 0.0)

    def _at(self, x):
        """Return y and dy/dx at one place: the same cubic without the cost of arrays."""
        last = len(self.value) - 1
        place = (x - self.start) / self.step
        clipped = min(max(place, 0.0), float(last))
        left = min(int(clipped), last - 1)
        u = clipped - left
        y0, y1 = float(self.value[left]), float(self.value[left + 1])
        d0, d1 = float(self.slope[left]) * self.step, float(self.slope[left + 1]) * self.step
        a, b = 3 * (y1 - y0) - 2 * d0 - d1, 2 * (y0 - y1) + d0 + d1
        dy = (d0 + u * (2 * a + u * 3 * b)) / self.step if place == clipped else 0.0
        return y0 + u * (d0 + u * (a + u * b)), dy


def tabulate(function, start, stop, points):
    """
    Return `function` as a `Curve` with slopes by a cubic spline through its values.

    Examples
    --------
    >>> import numpy as np
    >>> y, dy = tabulate(np.sin, 0.0, 3.0, 301)(1.0)
    >>> print(f"{y:.6f} {dy:.6f}")
    0.841471 0.540302
    """
    grid = np.linspace(start, stop, points)
    value = np.asarray(function(grid), float)
    step = float(grid[1] - grid[0])
    return Curve(float(start), step, value, spline_slopes(value, step))


def spline_slopes(value, step):
    """
    Return the slopes at the knots of the cubic spline through four or more even values, not-a-knot at both ends.

    Parameters
    ----------
    value : array (N,)
        Values at the knots. [-]
    step : float
        Distance of two knots. [-]

    Returns
    -------
    array (N,)

    Examples
    --------
    >>> import numpy as np
    >>> print(spline_slopes(np.arange(5.0) ** 3, 1.0).round(9))
    [ 0.  3. 12. 27. 48.]
    """
    y = np.asarray(value, float)
    if len(y) < 4:
        raise ValueError("a spline needs four values or more")
    right = 3 * (y[2:] - y[:-2])
    first, last = (y[2] + 4 * y[1] - 5 * y[0]) / 2, (5 * y[-1] - 4 * y[-2] - y[-3]) / 2
    left = [first, *right.tolist()]  # d0 + 2 d1 = first; d[i-1] + 4 d[i] + d[i+1] = right[i-1]; 2 d[-2] + d[-1] = last
    upper = [2.0]
    for i in range(1, len(left)):
        pivot = 1.0 / (4.0 - upper[-1])
        upper.append(pivot)
        left[i] = (left[i] - left[i - 1]) * pivot
    slope = [(last - 2 * left[-1]) / (1 - 2 * upper[-1])]
    for i in range(len(left) - 1, -1, -1):
        slope.append(left[i] - upper[i] * slope[-1])
    return np.array(slope[::-1]) / step


def constant(value):
    """Return a `Curve` that is `value` everywhere."""
    return Curve(0.0, 1.0, np.full(2, float(value)), np.zeros(2))
