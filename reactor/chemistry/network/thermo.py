"""
Thermochemistry of generated species: measured, else by groups; polynomials from 200 to 2500 K, bounded above 1500 K.

Radicals: the bond strength by the kind of carbon. Alkenes without data: from the rates of loss and addition of a
chlorine atom, so that the two stay in balance.
"""

import math
from functools import cache
from typing import NamedTuple

import numpy as np

from reactor import library
from reactor.chemistry.network import rates
from reactor.chemistry.network.small import species as small
from reactor.chemistry.network.tree import molecule, with_hydrogen, without_chlorine
from reactor.units import GAS_CONSTANT as R

GRID = np.array([200.0, 300.0, 400.0, 500.0, 600.0, 800.0, 1000.0, 1200.0, 1500.0])  # K
T0, MIDDLE, TOP = 298.15, 1000.0, 2500.0  # K
BALANCE = 450.0  # K; where loss and addition of a chlorine atom define an alkene
BOLTZMANN, STANDARD = 1.380649e-23, 1e5  # J/K, Pa
HYDROGEN = 217.998e3  # J/mol, enthalpy of a hydrogen atom at 298.15 K (atct)


class Thermo(NamedTuple):
    """
    Thermochemistry of a species, ideal gas, 1 bar.

    Parameters
    ----------
    H, S : float
        Enthalpy of formation [J/mol] and entropy [J/mol/K] at 298.15 K.
    cp : array
        Heat capacities on `GRID`. [J/mol/K]
    source, status, note : str
        Of the enthalpy, and what goes with it.
    """

    H: float
    S: float
    cp: np.ndarray
    source: str
    status: str
    note: str


def polynomial(a, T):
    """Return cp, H and S of one NASA7 range [J/mol/K, J/mol, J/mol/K]."""
    T = np.asarray(T, dtype=float)
    powers = [T**n for n in range(5)]
    cp = sum(c * p for c, p in zip(a, powers, strict=False))
    H = sum(c * p / n for n, (c, p) in enumerate(zip(a, powers, strict=False), start=1)) * T + a[5]
    S = a[0] * np.log(T) + sum(a[n] * T**n / n for n in range(1, 5)) + a[6]
    return R * cp, R * H, R * S


def of_entry(entry):
    """Return the `Thermo` of a species of a mechanism file."""
    data, limits = entry["thermo"]["data"], entry["thermo"]["temperature-ranges"]
    cp, _, _ = polynomial(data[0], GRID)
    if len(data) > 1:
        cp = np.where(limits[1] >= GRID, cp, polynomial(data[1], GRID)[0])
    _, H, S = polynomial(data[0], T0)
    return Thermo(float(H), float(S), cp, entry["source"], entry["status"], entry.get("note", ""))


@cache
def thermo(code):
    """
    Return the `Thermo` of a molecule, radical or alkene.

    Parameters
    ----------
    code : str
        Canonical code.

    Examples
    --------
    >>> found = thermo(molecule("CCCCCl").code)
    >>> print(f"{found.H / 1e3:.1f} kJ/mol, {found.S:.1f} J/mol/K, {found.source}")
    -154.4 kJ/mol, 358.7 J/mol/K, crc
    """
    if entry := small(code):
        return of_entry(entry)
    mol = molecule(code)
    if mol.double is not None:
        return _alkene(code)
    return _saturated(code) if mol.free is None else _radical(code)


@cache
def _groups():
    rows, heat = library.table("networks/groups.csv"), library.table("networks/group_heat_capacity.csv")
    cp = np.array([heat.si(f"cp_{T:.0f}") for T in GRID]).T
    keys = zip(map(int, rows.text("neighbours")), map(int, rows.text("chlorine")), strict=True)
    return dict(zip(keys, zip(rows.si("enthalpy"), rows.si("entropy"), cp, strict=True), strict=True))


@cache
def _measured(name, column):
    rows = library.table(f"networks/{name}.csv")
    codes = (molecule(structure).code for structure in rows.text("structure"))
    return {code: (float(v), row) for code, v, row in zip(codes, rows.si(column), rows.rows, strict=True)}


@cache
def _heat_capacities():
    rows = library.table("networks/heat_capacity.csv")
    cp = np.array([rows.si(f"cp_{T:.0f}") for T in GRID]).T
    return dict(zip((molecule(s).code for s in rows.text("structure")), cp, strict=True))


def by_groups(code):
    """Return enthalpy, entropy and heat capacities of a chloroalkane C2 or larger by groups alone."""
    mol = molecule(code)
    parts = [_groups()[len(mol.neighbours(i)), mol.chlorine[i]] for i in range(mol.carbons)]
    beside = sum(mol.chlorine[a] * mol.chlorine[b] for a, b in mol.bonds)
    H = sum(part[0] for part in parts) + beside * library.sheet("networks/constants.csv")["vicinal"].value
    S = sum(part[1] for part in parts) + R * (mol.asymmetric() * math.log(2) - math.log(mol.symmetry()))
    return float(H), float(S), sum(part[2] for part in parts)


def _saturated(code):
    H, S, cp = by_groups(code)
    source, status, words = "own_networks", "computed", ["groups: H (2.5 kJ/mol)"]
    if found := _measured("enthalpy", "enthalpy").get(code):
        H, row = found
        source, status, words = row["source"], row["status"], [f"H {row['place']}"]
    if found := _measured("entropy", "entropy").get(code):
        S = found[0]
        words.append(f"S {found[1]['source']}")
    else:
        words.append("S groups (2.8 J/mol/K)")
    if (found := _heat_capacities().get(code)) is not None:
        gap = np.where(np.isnan(found), 0.0, found - cp)
        cp = np.where(np.isnan(found), cp + gap[1], found)
        words.append("cp trcig")
    else:
        words.append("cp groups")
    return Thermo(H, S, cp, source, "computed" if status == "seen" else status, "; ".join(words))


@cache
def _corrections():
    rows = library.table("networks/radicals.csv")
    return {
        kind: (strength, entropy)
        for kind, strength, entropy in zip(rows.text("kind"), rows.si("strength"), rows.si("entropy"), strict=True)
    }


def _radical(code):
    parent, mol, kind = with_hydrogen(code), molecule(code), rates.kind(code)
    whole = thermo(parent)
    if kind == "primary" and any(mol.chlorine[other] for other in mol.neighbours(mol.free)):
        kind = "primary beta"
    strength, more = _corrections()[kind]
    turned = R * math.log(molecule(parent).symmetry() / mol.symmetry())
    with_, without = ("C[CH2]", "CC") if kind.startswith("primary") else ("C[CH]C", "CCC")
    change = thermo(molecule(with_).code).cp - thermo(molecule(without).code).cp
    note = f"parent and bond strength {strength / 1e3:.1f} kJ/mol by kind (4 kJ/mol); parent: {whole.note}"
    return Thermo(
        whole.H + strength - HYDROGEN, whole.S + more + turned, whole.cp + change,
        "rmg_radicals", rates.worst(whole.status, "computed"), note,
    )  # fmt: skip


def _alkene(code):
    """Return the `Thermo` that balances loss and addition of chlorine, mean over the radicals that lose one."""
    mol = molecule(code)
    found = []
    atom = of_entry(small("Cl"))
    saturated = mol.__class__(mol.chlorine, mol.bonds).code
    propene, propane = thermo(molecule("C=CC").code), thermo("C(C)C")
    cp = thermo(saturated).cp + propene.cp - propane.cp
    for at, other in (mol.double, mol.double[::-1]):
        more = tuple(n + (i == at) for i, n in enumerate(mol.chlorine))
        radical = mol.__class__(more, mol.bonds, free=other).code
        number, there = without_chlorine(radical).get(code, 1), thermo(radical)
        loss, addition = rates.loss(number), rates.addition()
        dH = R * (loss.E - addition.E + BALANCE)
        dS = R * (math.log(loss.A / addition.A * 1e6 * BOLTZMANN * BALANCE / STANDARD) + 1.0)
        found.append((there.H + dH - atom.H, there.S + dS - atom.S))
        shift = _rise(there.cp - cp - atom.cp, BALANCE)
        found[-1] = (found[-1][0] + shift[0], found[-1][1] + shift[1])
    H, S = np.mean(found, axis=0)
    note = "from the balance of loss and addition of a chlorine atom; cp: alkane + (C3H6 - C3H8); 10 kJ/mol"
    return Thermo(float(H), float(S), cp, "own_networks", "estimate", note)


def peroxy(code):
    """Return the `Thermo` of the peroxy radical of a radical: an end of a chain, rough."""
    found = thermo(code)
    cp = found.cp + np.interp(GRID, [200.0, 1500.0], [30.0, 46.0])
    note = "lump of all isomers; sink that ends a chain, formed irreversibly: radical - 140 kJ/mol, rough"
    return Thermo(found.H - 140e3, found.S + 55.0, cp, "own_networks", "estimate", note)


def _rise(cp, T):
    """Return enthalpy and entropy that a difference of heat capacities gathers from 298.15 K to T."""
    fine = np.linspace(T0, T, 31)
    y = np.interp(fine, GRID, cp)
    return float(np.trapezoid(y, fine)), float(np.trapezoid(y / fine, fine))


def nasa7(found, atoms):
    """
    Return the two NASA7 rows of a species.

    Below 1000 K: least squares on the grid; above: the grid to 1500 K, then an approach to the classical limit.

    Parameters
    ----------
    found : Thermo
        Enthalpy, entropy, heat capacities.
    atoms : int
        Atoms of the molecule. [-]
    """
    limit = (3 * atoms - 2) * R
    cp = np.minimum(np.maximum.accumulate(found.cp), limit * np.linspace(0.95, 0.985, len(GRID)))
    gap = limit - cp
    power = min(max(math.log(gap[-2] / gap[-1]) / math.log(GRID[-1] / GRID[-2]), 0.3), 3.0)
    far = np.arange(1600.0, TOP + 1, 150.0)
    high_T = np.concatenate([GRID[6:], far])
    high_cp = np.concatenate([cp[6:], limit - gap[-1] * (far / GRID[-1]) ** -power])
    low = _fit(GRID[:7], cp[:7])
    high = _fit(high_T, high_cp, at=polynomial([*low, 0.0, 0.0], MIDDLE)[0])
    low, H1, S1 = _anchored(low, T0, found.H, found.S)
    high, _, _ = _anchored(high, MIDDLE, H1, S1)
    return low, high


def _fit(T, cp, at=None):
    """Return five coefficients of cp/R, through the value `at` at 1000 K (else through cp there)."""
    x = T / MIDDLE
    through = (cp[np.argmin(np.abs(T - MIDDLE))] if at is None else float(at)) / R
    basis = np.array([x**n - 1.0 for n in range(1, 5)]).T
    c, *_ = np.linalg.lstsq(basis, cp / R - through, rcond=None)
    return [through - c.sum(), *(c / MIDDLE ** np.arange(1, 5))]


def _anchored(a, T, H, S):
    """Return the row with its two last numbers set, and H and S at 1000 K."""
    _, h, s = polynomial([*a, 0.0, 0.0], T)
    row = [float(v) for v in (*a, (H - h) / R, (S - s) / R)]
    _, H1, S1 = polynomial(row, MIDDLE)
    return row, float(H1), float(S1)
