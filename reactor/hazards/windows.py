"""Explosion ranges in pure chlorine, fuel by fuel, and the mixing rule."""

from typing import NamedTuple

import numpy as np

from reactor import library
from reactor.errors import CaseError
from reactor.library import Cited


class Window(NamedTuple):
    """The explosion range of one fuel: share of fuel in (fuel + chlorine) at 25 degC and 1 atm [-]."""

    fuel: str
    lower: float
    upper: float
    calculated_only: bool
    cited: tuple


def windows(own=()):
    """
    Return the explosion range of each fuel that has one; a range of the user's own replaces the listed one.

    Parameters
    ----------
    own : iterable of (fuel, lower, upper, source, status)
        Ranges to use instead, as fractions. [-]

    Returns
    -------
    found : dict of Window
        By fuel. [-]

    Examples
    --------
    >>> methane = windows()["CH4"]
    >>> print(f"{methane.lower:.3f} {methane.upper:.2f} {methane.calculated_only}")
    0.056 0.73 False
    """
    table = library.table("hazards/explosion_limits.csv")
    found = {fuel: _listed(table.where("fuel", fuel), fuel) for fuel in dict.fromkeys(table.text("fuel"))}
    for fuel, lower, upper, source, status in own:
        if not 0 < lower < upper < 1:
            raise CaseError(
                f"explosion range of {fuel}: 0 < lower < upper < 1 is needed, got {lower} and {upper}"
            )
        cited = (Cited(f"explosion range of {fuel}", source, status),)
        found[fuel] = Window(fuel, lower, upper, False, cited)
    return found


def _listed(rows, fuel):
    used = rows.where("used", "yes")
    limits = dict(zip(used.text("limit"), used.si("fraction"), strict=True))
    only = "recalled" not in rows.text("basis")
    cited = used.cited(f"explosion range of {fuel}")
    return Window(fuel, float(limits["LEL"]), float(limits["UEL"]), only, cited)


def mixed(lower, upper, shares, extra, share_that_counts=0.01):
    """
    Return the explosion range of a mixed fuel.

    Parameters
    ----------
    lower, upper : array, fuels
        Ranges of the fuels. [-]
    shares : array, points x fuels
        Share of each fuel in the fuel, sums to 1. [-]
    extra : float
        Added to the upper limit as soon as a second fuel counts. [-]
    share_that_counts : float
        Share from which a second fuel counts. [-]

    Returns
    -------
    low, high : array, points
        Range of the mixture. [-]

    References
    ----------
    .. [1] own_threshold: Le Chatelier's rule, tested on the calculated limits; lower limits within 0.02 %,
       upper limits +0.1 to -1.6 %.

    Examples
    --------
    >>> low, high = mixed(np.array([0.056, 0.034]), np.array([0.73, 0.66]), np.array([[0.5, 0.5]]), 0.02)
    >>> print(f"{low[0]:.4f} {high[0]:.4f}")
    0.0423 0.7132
    """
    low, high = 1 / (shares @ (1 / lower)), 1 / (shares @ (1 / upper))
    several = (shares > share_that_counts).sum(axis=1) > 1
    return low, np.where(several, np.minimum(high + extra, 1.0), high)
