"""First liquid, or first C2Cl6 crystals, out of a gas mixture: Raoult's law on tabulated vapour pressures."""

from functools import cache
from typing import NamedTuple

import numpy as np

from reactor import library

COLDEST, HOTTEST = 173.15, 473.15  # K; how far the tables are followed
POINTS = 1501  # of the grid between them, 0.2 K apart


class Dew(NamedTuple):
    """Where condensation begins: temperature [K], the species that leads, and `liquid` or `solid`."""

    temperature: float
    species: str
    phase: str


@cache
def _curves():
    """Return {species: (1/T, ln P, solid)} in rising 1/T."""
    table = library.table("hazards/vapour_pressure.csv")
    curves = {}
    for species in dict.fromkeys(table.text("species")):
        rows = table.where("species", species)
        order = np.argsort(1 / rows.si("temperature"))
        solid = rows.text("note")[0].startswith("solid")
        curves[species] = (1 / rows.si("temperature")[order], np.log(rows.si("pressure"))[order], solid)
    return curves


def vapour_pressure(species, T):
    """
    Return the vapour pressure of a species: ln P as a cubic in 1/T, going on straight beyond the points.

    Parameters
    ----------
    species : str
        Key of data/hazards/vapour_pressure.csv. [-]
    T : float or array
        Temperature. [K]

    Returns
    -------
    P : same shape as `T`
        Vapour pressure, over the solid for C2Cl6. [Pa]

    References
    ----------
    .. [1] thermo061; C2Cl6: chemicals152, sublimation.

    Examples
    --------
    >>> print(f"{vapour_pressure('CCl4', 298.15):.0f}")
    15220
    """
    inverse, logs, _ = _curves()[species]
    x = 1 / np.asarray(T, float)
    at = np.clip(np.searchsorted(inverse, x), 1, len(inverse) - 1)
    slope = (logs[at] - logs[at - 1]) / (inverse[at] - inverse[at - 1])
    straight = logs[at] + slope * (x - inverse[at])
    four = np.clip(at - 2, 0, len(inverse) - 4)[..., None] + np.arange(4)
    inside = (inverse[0] <= x) & (x <= inverse[-1])
    P = np.exp(np.where(inside, _cubic(x, inverse[four], logs[four]), straight))
    return float(P) if P.ndim == 0 else P


def _cubic(x, nodes, values):
    """Return Lagrange's cubic through four (nodes, values), last axis, at `x`."""
    found = 0.0
    for i in range(4):
        weight = values[..., i]
        for j in range(4):
            if j != i:
                weight = weight * (x - nodes[..., j]) / (nodes[..., i] - nodes[..., j])
        found = found + weight
    return found


def dew_point(fractions, P, condensing=None):
    """
    Return where the first liquid or solid forms when a gas is cooled at constant pressure.

    All condensable species share one ideal liquid; C2Cl6 makes its own crystals. Species without a vapour
    pressure (N2, Ar, O2, radicals) take no part. Real mixtures of these species dew 1 to 5 K below Raoult's
    law, so the figure errs to the warm side.

    Parameters
    ----------
    fractions : dict of float
        Mole fractions by species. [-]
    P : float
        Absolute pressure. [Pa]
    condensing : dict or None
        Boiling point [K], critical temperature [K] and pressure [Pa] of species that the table does not hold; their
        vapour pressure is that of corresponding states. [-]

    Returns
    -------
    dew : Dew or None
        None if nothing condenses above -100 degC. [-]

    Examples
    --------
    >>> dew = dew_point({"CCl4": 0.05, "N2": 0.95}, 1.2e5)
    >>> print(f"{dew.temperature - 273.15:.1f} degC, {dew.species}")
    5.6 degC, CCl4
    """
    curves = _curves()
    more = {s: constants for s, constants in (condensing or {}).items() if s not in curves}
    present = {s: y * P for s, y in fractions.items() if y > 1e-12 and (s in more or s in curves)}
    vapours = {s: p for s, p in present.items() if s in more or not curves[s][2]}
    found = [_first(vapours, "liquid", more)] if vapours else []
    crystals = [s for s, y in fractions.items() if y > 1e-12 and s in curves and curves[s][2]]
    found += [_first({s: fractions[s] * P}, "solid", {}) for s in crystals]
    found = [dew for dew in found if dew is not None]
    return max(found, key=lambda dew: dew.temperature) if found else None


@cache
def _grid():
    """Return temperatures [K] and {species: 1/vapour pressure [1/Pa] at them}, close enough to interpolate in."""
    T = np.linspace(COLDEST, HOTTEST, POINTS)
    return T, {species: 1 / vapour_pressure(species, T) for species in _curves()}


@cache
def _estimated(constants):
    """Return 1/vapour pressure [1/Pa] on the grid by corresponding states."""
    from reactor.chemistry.network.volatility import corresponding_states

    boiling, hottest, highest = constants
    return 1 / corresponding_states(boiling, hottest, highest, _grid()[0])


def _first(partial, phase, more):
    """Return the `Dew` of the species with these partial pressures in one ideal phase, else None."""
    T, inverse = _grid()
    inverse = inverse | {s: _estimated(constants) for s, constants in more.items() if s in partial}
    excess = np.log(sum(p * inverse[s] for s, p in partial.items()))  # falls with T
    if excess[0] < 0:
        return None
    at = min(int(np.searchsorted(-excess, 0.0)), POINTS - 1)
    share = np.clip(excess[at - 1] / (excess[at - 1] - excess[at]), 0.0, 1.0) if at else 0.0
    dew = float(T[at - 1] + share * (T[at] - T[at - 1])) if at else float(T[0])
    return Dew(dew, max(partial, key=lambda s: partial[s] * inverse[s][at]), phase)


def cited():
    """Return the sources of the vapour pressures."""
    return library.table("hazards/vapour_pressure.csv").cited("vapour pressures")
