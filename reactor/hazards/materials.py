"""What materials, ignition and people stand: figures to print beside a design, each with its source."""

from typing import NamedTuple

import numpy as np

from reactor import library
from reactor.errors import CaseError
from reactor.library import Cited


class Limit(NamedTuple):
    """How hot a material may be planned; `temperature` is nan where the words of `use` are the limit."""

    material: str
    service: str
    temperature: float
    use: str
    note: str
    cited: Cited


class Exposure(NamedTuple):
    """One exposure figure of a substance: mole fraction in air, or density where it is a vapour or dust."""

    substance: str
    figure: str
    fraction: float
    density: float
    basis: str
    note: str
    cited: Cited


def material_limit(name, service=None):
    """
    Return the planning limit of a material.

    Parameters
    ----------
    name : str
        Key of data/hazards/materials.csv, such as `carbon steel`. [-]
    service : str
        Words of the table, such as `dry chlorine`; without it the first entry. [-]

    Returns
    -------
    limit : Limit
        Temperature, words, source. [-]

    Examples
    --------
    >>> limit = material_limit("carbon steel")
    >>> print(f"{limit.temperature - 273.15:.0f} degC, {limit.service}, {limit.cited.status}")
    120 degC, dry chlorine, memory
    """
    found = [limit for limit in material_limits() if limit.material == name]
    found = [limit for limit in found if service in (None, limit.service)]
    if not found:
        known = sorted({limit.material for limit in material_limits()})
        raise CaseError(
            f"no limit for {name!r} in {service or 'any service'}; known materials: {', '.join(known)}"
        )
    return found[0]


def material_limits():
    """Return every entry of data/hazards/materials.csv."""
    table = library.table("hazards/materials.csv")
    columns = [table.text(c) for c in ("material", "service", "use", "note", "source", "status")]
    return [
        Limit(material, service, float(T), use, note, Cited(f"{material} in {service}", source, status))
        for material, service, use, note, source, status, T in zip(
            *columns, table.si("temperature"), strict=True
        )
    ]


def ignition_temperatures(oxidant="Cl2"):
    """
    Return the recorded ignition temperature of each fuel.

    Parameters
    ----------
    oxidant : str
        `Cl2` (recalled figures, low confidence) or `air`. [-]

    Returns
    -------
    found : dict of (float, Cited)
        Temperature in kelvin and source, by fuel. [-]

    Examples
    --------
    >>> T, cited = ignition_temperatures()["CH4"]
    >>> print(f"{T - 273.15:.0f} degC, {cited.status}")
    318 degC, memory
    """
    table = library.table("hazards/autoignition.csv").where("oxidant", oxidant)
    columns = [table.text(c) for c in ("fuel", "source", "status")]
    return {
        fuel: (float(T), Cited(f"ignition temperature of {fuel} in {oxidant}", source, status))
        for fuel, source, status, T in zip(*columns, table.si("temperature"), strict=True)
    }


def air_limits():
    """
    Return the explosion limits of each fuel in air, {fuel: (lower, upper, Cited)} as mole fractions.

    Examples
    --------
    >>> low, high, cited = air_limits()["CH4"]
    >>> print(f"{low:.3f} {high:.2f} {cited.status}")
    0.044 0.17 seen
    """
    table = library.table("hazards/air_limits.csv")
    words = [table.text(c) for c in ("fuel", "source", "status")]
    numbers = [table.si(c) for c in ("lower", "upper")]
    return {
        fuel: (float(low), float(high), Cited(f"limits of {fuel} in air", source, status))
        for fuel, source, status, low, high in zip(*words, *numbers, strict=True)
    }


def leak_limit(fractions):
    """
    Return the lower limit in air of the fuels in a gas by Le Chatelier's rule, and their share of the gas.

    Parameters
    ----------
    fractions : dict of float
        Mole fractions by species. [-]

    Returns
    -------
    lower, share : float
        Mole fraction of fuel in air at the limit (nan without a listed fuel); of fuel in the gas. [-]

    Examples
    --------
    >>> lower, share = leak_limit({"CH4": 0.4, "C3H8": 0.4, "N2": 0.2})
    >>> print(f"{lower:.4f} {share:.1f}")
    0.0245 0.8
    """
    limits = air_limits()
    fuels = {name: y for name, y in fractions.items() if name in limits and y > 0}
    share = sum(fuels.values())
    if share <= 0:
        return float("nan"), 0.0
    return share / sum(y / limits[name][0] for name, y in fuels.items()), share


def hot_surface_limit(fuels):
    """
    Return how hot a surface touched by fuel and chlorine may be planned.

    Parameters
    ----------
    fuels : iterable of str
        Fuels in the gas. [-]

    Returns
    -------
    T : float
        The lower of 80 % of the lowest recalled ignition temperature (in degC) and 50 K below it; never above
        the limit for unknown ignition temperatures if a fuel has none. [K]

    References
    ----------
    .. [1] own_rules (estimate); the ignition temperatures are usbm5610 and handbook_limits (memory).

    Examples
    --------
    >>> print(f"{hot_surface_limit(['CH4']) - 273.15:.0f}")
    254
    """
    recorded = ignition_temperatures()
    unknown = material_limit("hot surface of unknown ignition temperature").temperature
    limits = [unknown if fuel not in recorded else _surface(recorded[fuel][0]) for fuel in fuels]
    return min(limits, default=np.inf)


def _surface(ignition):
    return min(273.15 + 0.8 * (ignition - 273.15), ignition - 50.0)


def exposures(substances=None):
    """Return the exposure figures of the named substances (all without a list)."""
    table = library.table("hazards/exposure.csv")
    words = [table.text(c) for c in ("substance", "figure", "basis", "note", "source", "status")]
    numbers = [table.si(c) for c in ("fraction", "density")]
    found = [
        Exposure(s, figure, float(x), float(density), basis, note, Cited(f"{s} {figure}", source, status))
        for s, figure, basis, note, source, status, x, density in zip(*words, *numbers, strict=True)
    ]
    return [entry for entry in found if substances is None or entry.substance in substances]
