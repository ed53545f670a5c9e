"""The coolant: the table of media, its heat capacity flow, and what a tank's jacket can take up."""

import difflib
import math
from dataclasses import dataclass

from reactor import library
from reactor.errors import CaseError


@dataclass(frozen=True)
class Medium:
    """
    A cooling medium: film coefficient on its side with a range, heat capacity, limits and leak caution.

    `heat_capacity` is nan for a boiling medium, which stays at one temperature.
    """

    name: str
    duty: str
    film: float
    low: float
    high: float
    heat_capacity: float
    limit: str
    leak: str
    cited: library.Cited


@dataclass(frozen=True)
class Material:
    """A wall material: conductivity [W/m/K] and the hottest service met in chlorine or glass plant [K]."""

    name: str
    conductivity: float
    hottest: float
    note: str
    cited: library.Cited


def medium(name):
    """
    Return a cooling medium by name.

    Parameters
    ----------
    name : str
        As in data/heat/coolants.csv. [-]

    Returns
    -------
    medium : Medium
        Its row. [SI]

    Raises
    ------
    CaseError
        For an unknown name, with the nearest spelling.

    Examples
    --------
    >>> print(f"{medium('water').film:.0f}")
    300
    """
    row, table = _row("heat/coolants.csv", "medium", name, "cooling medium")
    film, low, high, heat = (float(table.si(key)[0]) for key in ("film", "low", "high", "heat_capacity"))
    cited = library.Cited(f"coolant {name}", row["source"], row["status"])
    return Medium(name, row["duty"], film, low, high, heat, row["limit"], row["leak"], cited)


def material(name):
    """
    Return a wall material by name.

    Parameters
    ----------
    name : str
        As in data/heat/walls.csv. [-]

    Returns
    -------
    material : Material
        Its row. [SI]

    Raises
    ------
    CaseError
        For an unknown name, with the nearest spelling.

    Examples
    --------
    >>> print(material("borosilicate").conductivity)
    1.2
    """
    row, table = _row("heat/walls.csv", "material", name, "wall material")
    cited = library.Cited(f"wall of {name}", row["source"], row["status"])
    conductivity, hottest = (float(table.si(key)[0]) for key in ("conductivity", "hottest"))
    return Material(name, conductivity, hottest, row["note"], cited)


def capacity(mass_flow, heat_capacity):
    """
    Return the heat capacity flow of a coolant.

    Parameters
    ----------
    mass_flow : float
        Flow. [kg/s]
    heat_capacity : float
        Heat capacity; nan stands for a boiling medium. [J/kg/K]

    Returns
    -------
    capacity : float
        m cp; infinite for a boiling medium. [W/K]

    Examples
    --------
    >>> print(f"{capacity(0.5, 4180.0):.0f}")
    2090
    """
    return math.inf if math.isnan(heat_capacity) else mass_flow * heat_capacity


def tank_uptake(conductance, capacity):
    """
    Return the heat a jacket takes from a stirred tank, per kelvin between tank and coolant inlet.

    Parameters
    ----------
    conductance : float
        UA between the tank and the coolant. [W/K]
    capacity : float
        Heat capacity flow of the coolant; inf for one that keeps its temperature. [W/K]

    Returns
    -------
    uptake : float
        m cp (1 - exp(-UA/(m cp))), at most UA. [W/K]

    Examples
    --------
    >>> print(f"{tank_uptake(50.0, 100.0):.2f} {tank_uptake(50.0, float('inf')):.0f}")
    39.35 50
    """
    if math.isinf(capacity):
        return conductance
    if capacity == 0:
        return 0.0
    return -capacity * math.expm1(-conductance / capacity)


def transfer_units(conductance, length, mass_flow, heat_capacity):
    """
    Return the transfer units of a tube; below 0.3 it is close to adiabatic.

    Parameters
    ----------
    conductance : float
        Gas to coolant, per metre. [W/m/K]
    length : float
        Cooled length. [m]
    mass_flow : float
        Gas per tube. [kg/s]
    heat_capacity : float
        Of the gas. [J/kg/K]

    Returns
    -------
    units : float
        NTU = U A/(m cp). [-]

    Examples
    --------
    >>> print(f"{transfer_units(5.82, 1.2, 0.02302, 1789.6):.2f}")
    0.17
    """
    return conductance * length / (mass_flow * heat_capacity)


def _row(file, column, name, what):
    """Return one row of a table, as a dict and as a table of its own."""
    table = library.table(file)
    names = table.text(column)
    if name not in names:
        near = difflib.get_close_matches(name, names, n=1, cutoff=0.4)
        hint = f"; did you mean {near[0]!r}?" if near else ""
        raise CaseError(f"{name!r} is not a known {what}{hint} (known: {', '.join(names)})")
    row = table.where(column, name)
    return row.rows[0], row
