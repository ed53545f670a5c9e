"""A mechanism with its rate constants moved within their uncertainty."""

from dataclasses import replace

import numpy as np


def varied(gas, deviations):
    """
    Return a mechanism whose rate constants are k f(T)^x, f(T) = f298 exp|g (1/T - 1/298 K)|.

    At 298 K and above this is an Arrhenius form again: A and E move. Both limits of a fall-off move
    together, and a reverse rate moves with its forward rate: the equilibrium stays.

    Parameters
    ----------
    gas : Mechanism
        The mechanism.
    deviations : array, shape (R,)
        x of each reaction, in standard deviations; without an f298 the rate stays. [-]

    Examples
    --------
    >>> from reactor import chemistry
    >>> gas = chemistry.mechanism()
    >>> up = varied(gas, np.ones(len(gas.f298)))
    >>> bool(np.allclose(up.tables.A / gas.tables.A, np.nan_to_num(gas.f298, nan=1.0)))
    True
    """
    x = np.asarray(deviations, dtype=float)
    spread = np.log(np.where(np.isfinite(gas.f298), gas.f298, 1.0))
    slope = np.abs(np.where(np.isfinite(gas.g) & np.isfinite(gas.f298), gas.g, 0.0))
    factor = np.exp(x * (spread + slope / 298.0))
    tables = gas.tables
    moved = replace(
        tables,
        A=tables.A * factor,
        E=tables.E + x * slope,
        low_A=tables.low_A * factor,
        low_E=tables.low_E + np.where(tables.falloff, x * slope, 0.0),
    )
    return replace(gas, tables=moved)
