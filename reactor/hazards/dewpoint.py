"""First liquid, or first C2Cl6 crystals, out of a gas mixture: Raoult's law on tabulated vapour pressures."""

from functools import cache
from typing import NamedTuple

import numpy as np

from reactor import library

COLDEST, HOTTEST = 173.15, 473.15  # K; how far the tables are followed


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
    T : float
        Temperature. [K]

    Returns
    -------
    P : float
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
    at = int(np.clip(np.searchsorted(inverse, 1 / T), 1, len(inverse) - 1))
    if not inverse[0] <= 1 / T <= inverse[-1]:
        slope = (logs[at] - logs[at - 1]) / (inverse[at] - inverse[at - 1])
        return float(np.exp(logs[at] + slope * (1 / T - inverse[at])))
    first = min(max(at - 2, 0), len(inverse) - 4)
    x, y = inverse[first : first + 4], logs[first : first + 4]
    weights = [np.prod([(1 / T - x[j]) / (x[i] - x[j]) for j in range(4) if j != i]) for i in range(4)]
    return float(np.exp(weights @ y))


def dew_point(fractions, P):
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
    vapours = {s: y * P for s, y in fractions.items() if y > 1e-12 and s in curves and not curves[s][2]}
    found = [_first(vapours, "liquid")] if vapours else []
    crystals = [s for s, y in fractions.items() if y > 1e-12 and s in curves and curves[s][2]]
    found += [_first({s: fractions[s] * P}, "solid") for s in crystals]
    found = [dew for dew in found if dew is not None]
    return max(found, key=lambda dew: dew.temperature) if found else None


def _first(partial, phase):
    """Return the `Dew` of the species with these partial pressures in one ideal phase, else None."""
    from scipy.optimize import brentq

    def excess(T):
        return np.log(sum(p / vapour_pressure(s, T) for s, p in partial.items()))

    if excess(COLDEST) < 0:
        return None
    T = HOTTEST if excess(HOTTEST) > 0 else float(brentq(excess, COLDEST, HOTTEST, xtol=1e-4))
    return Dew(T, max(partial, key=lambda s: partial[s] / vapour_pressure(s, T)), phase)


def cited():
    """Return the sources of the vapour pressures."""
    return library.table("hazards/vapour_pressure.csv").cited("vapour pressures")
