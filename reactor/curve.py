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
    from scipy.interpolate import CubicSpline

    grid = np.linspace(start, stop, points)
    value = np.asarray(function(grid), float)
    slope = CubicSpline(grid, value)(grid, 1)
    return Curve(float(start), float(grid[1] - grid[0]), value, slope)


def constant(value):
    """Return a `Curve` that is `value` everywhere."""
    return Curve(0.0, 1.0, np.full(2, float(value)), np.zeros(2))
