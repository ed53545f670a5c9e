"""
Boiling point, critical constants and vapour pressure of chloroalkanes and chloroalkenes, measured first.

References
----------
.. [1] joback: critical constants from groups and the boiling point.
.. [2] leekesler: vapour pressure from boiling point and critical constants.
"""

from dataclasses import replace
from functools import cache
from typing import NamedTuple

import numpy as np

from reactor import library
from reactor.chemistry.network.tree import molecule, with_hydrogen

ATMOSPHERE = 101325.0  # Pa
# Tc, Pc and Vc of Joback and Reid, without double bond and with, by carbon neighbours and chlorine; joback.
JOBACK = {3: (0.0141, -0.0012, 65.0), 2: (0.0189, 0.0, 56.0), 1: (0.0164, 0.0020, 41.0), 0: (0.0067, 0.0043, 27.0)}
UNSATURATED = {2: (0.0113, -0.0028, 56.0), 1: (0.0129, -0.0006, 46.0), 0: (0.0117, 0.0011, 38.0)}
CHLORINE = (0.0105, -0.0049, 58.0)
UNSATURATION = -3.0  # K; an alkene boils a little below its alkane, estimate


class Volatility(NamedTuple):
    """
    What condensation and transport need.

    Parameters
    ----------
    boiling : float
        Normal boiling point. [K]
    critical_temperature : float
        [K]
    critical_pressure : float
        [Pa]
    critical_volume : float
        [m^3/mol]
    source, status : str
        Of the boiling point, the least certain of the four where it is estimated.
    """

    boiling: float
    critical_temperature: float
    critical_pressure: float
    critical_volume: float
    source: str
    status: str


@cache
def _table(name, *columns):
    rows = library.table(f"networks/{name}.csv")
    values = zip(*(rows.si(column) for column in columns), strict=True)
    codes = (molecule(structure).code for structure in rows.text("structure"))
    return {
        code: (*map(float, numbers), row["source"], row["status"])
        for code, numbers, row in zip(codes, values, rows.rows, strict=True)
    }


@cache
def _groups():
    rows = library.table("networks/groups.csv")
    return {
        (int(d), int(c)): float(boiling)
        for d, c, boiling in zip(rows.text("neighbours"), rows.text("chlorine"), rows.si("boiling"), strict=True)
    }


def boiling_by_groups(code):
    """Return the boiling point of a chloroalkane by groups [K]."""
    mol = molecule(code)
    base = library.sheet("networks/constants.csv")["boiling_base"].value
    return base + sum(_groups()[len(mol.neighbours(i)), min(mol.chlorine[i], 3)] for i in range(mol.carbons))


def _boiling(code):
    """Return boiling point, source and status: measured, else by groups; an alkene as its alkane, less a little."""
    mol = molecule(code)
    if mol.double is not None:
        return _boiling(replace(mol, double=None).code)[0] + UNSATURATION, "own_networks", "estimate"
    known = _table("boiling", "temperature").get(code)
    return known or (boiling_by_groups(code), "own_networks", "computed")


@cache
def volatility(code):
    """
    Return the `Volatility` of a molecule; of a radical: that of its hydride.

    Parameters
    ----------
    code : str
        Canonical code.

    Examples
    --------
    >>> found = volatility("C(CCl)CCl")
    >>> print(f"{found.boiling:.0f} K, {found.critical_temperature:.0f} K, {found.status}")
    394 K, 614 K, seen
    """
    mol = molecule(code)
    if mol.free is not None:
        return volatility(with_hydrogen(code))
    boiling, source, status = _boiling(code)
    sums = [sum(parts) for parts in zip(*(part for i in range(mol.carbons) for part in _parts(mol, i)), strict=True)]
    Tc = boiling / (0.584 + 0.965 * sums[0] - sums[0] ** 2)
    atoms = sum(mol.atoms.values())
    Pc = (0.113 + 0.0032 * atoms - sums[1]) ** -2 * 1e5
    Vc = (17.5 + sums[2]) * 1e-6
    known = _table("critical", "temperature", "pressure").get(code)
    if known:
        Tc, Pc = known[:2]
    return Volatility(boiling, Tc, Pc, Vc, source, status)


def _parts(mol, i):
    """Return the contributions of one carbon and its chlorine."""
    table = UNSATURATED if mol.double is not None and i in mol.double else JOBACK
    return [table[min(mol.hydrogen(i), max(table))]] + [CHLORINE] * mol.chlorine[i]


def vapour_pressure(code, T):
    """
    Return the vapour pressure over the liquid by corresponding states; some 3 % where boiling was measured.

    Parameters
    ----------
    code : str
        Canonical code.
    T : float
        Temperature, to the critical one. [K]

    Returns
    -------
    P : float
        [Pa]

    References
    ----------
    .. [1] leekesler.

    Examples
    --------
    >>> print(f"{vapour_pressure('C(CCl)CCl', 298.15):.0f}")
    2270
    """
    found = volatility(code)
    return corresponding_states(
        found.boiling, found.critical_temperature, found.critical_pressure, T
    )


def corresponding_states(boiling, critical_temperature, critical_pressure, T):
    """
    Return the vapour pressure over a liquid from three constants.

    Parameters
    ----------
    boiling, critical_temperature : float
        Normal boiling point and critical temperature. [K]
    critical_pressure : float
        [Pa]
    T : float or array
        Temperature; above the critical one it is extrapolated. [K]

    References
    ----------
    .. [1] leekesler.
    """
    f0, f1 = _shape(boiling / critical_temperature)
    acentric = (np.log(ATMOSPHERE / critical_pressure) - f0) / f1
    f0, f1 = _shape(T / critical_temperature)
    return critical_pressure * np.exp(f0 + acentric * f1)


def _shape(Tr):
    logs, sixth = np.log(Tr), Tr**6
    return (
        5.92714 - 6.09648 / Tr - 1.28862 * logs + 0.169347 * sixth,
        15.2518 - 15.6875 / Tr - 13.4721 * logs + 0.43577 * sixth,
    )


def lennard_jones(code):
    """
    Return diameter [angstrom] and well depth [K] from the critical constants, as the small mechanism has them.

    References
    ----------
    .. [1] chung.
    """
    found = volatility(code)
    return 0.809 * (found.critical_volume * 1e6) ** (1 / 3), found.critical_temperature / 1.2593
