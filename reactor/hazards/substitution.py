"""
Adiabatic temperature of a mixture when chlorine replaces hydrogen and nothing else happens.

The carbon skeletons stay whole, no soot and no hydrogen form: R-H + Cl2 = R-Cl + HCl until the chlorine or
the C-H bonds are used up. Two fillings are computed and the hotter one counts:

- added: every C-H bond of the mixture has the same chance of being replaced; chlorine already bound stays
  where it is;
- shared: the same, after the chlorine already bound in the alkanes has been shared out over all their bonds,
  which is what a hot equilibrium does (it matters when CCl4 is the diluent).

A chlorinated alkane is known by its skeleton (number of carbon atoms) and its rung (number of chlorine
atoms); a rung has the mean enthalpy of its isomers. Rungs that the mechanism lacks continue from the last one
by the mean step of the ethane skeleton: the step heats of the known skeletons differ by a few per cent.
"""

from dataclasses import dataclass
from math import comb

import numpy as np

from reactor import library
from reactor.errors import RangeError

GAS_CONSTANT = 8.31446261815324  # J/mol/K, exact
COLDEST, FITTED, HOTTEST, STEP = 200.0, 1700.0, 3500.0, 10.0  # K; above FITTED the heat capacity is held


@dataclass(frozen=True)
class Filling:
    """How bonds are filled: one entry for each parent and number of bonds replaced."""

    parent: np.ndarray  # which parent an entry belongs to
    taken: np.ndarray  # bonds replaced
    left: np.ndarray  # bonds left
    ways: np.ndarray  # number of ways to choose them
    enthalpy: np.ndarray  # of the product, entries x grid [J/mol]

    def product_enthalpy(self, parents, chance):
        """Return the enthalpy (points x grid) of parents whose bonds are each filled with `chance`."""
        most = int((self.taken + self.left).max())
        filled, empty = _powers(chance, most), _powers(1 - chance, most)
        share = parents[:, self.parent] * self.ways * filled[:, self.taken] * empty[:, self.left]
        return share @ self.enthalpy


def _powers(x, most):
    """Return x^0 to x^most of each x by multiplication, several times as fast as `**`."""
    found = np.ones((len(x), most + 1))
    found[:, 1:] = x[:, None]
    return np.multiply.accumulate(found, axis=1)


@dataclass(frozen=True)
class Ladder:
    """
    Enthalpies on a temperature grid, and what each species can become.

    `species` are those of the mechanism plus H2 (if it holds none) and `other`, the sum of all names without
    data.
    """

    species: tuple
    grid: np.ndarray  # [K]
    enthalpy: np.ndarray  # grid x species [J/mol]
    bonds: np.ndarray  # C-H bonds of each saturated molecule, else 0
    bound: np.ndarray  # chlorine atoms of each saturated molecule, else 0
    skeleton: np.ndarray  # species x skeletons: 1 where a species has that skeleton
    added: Filling
    shared: Filling
    counted: np.ndarray  # molecules: radicals and peroxy radicals do not count
    fuel: np.ndarray  # holds carbon and hydrogen, or is H2
    alkane: np.ndarray  # saturated, without chlorine
    hydrogen: int
    chlorine: int
    acid: int


def ladder(gas):
    """
    Tabulate, once for a mechanism, what the adiabatic temperature needs.

    Parameters
    ----------
    gas : Mechanism
        With `species`, `elements`, `atoms` (species x elements), `kinds`, `enthalpy(T)`, `heat_capacity(T)`.
        [-]

    Returns
    -------
    rungs : Ladder
        The tables. [-]
    """
    grid = np.append(np.arange(COLDEST, FITTED + 1, STEP), HOTTEST)
    own = np.array([np.asarray(gas.enthalpy(float(T)), dtype=float) for T in grid[:-1]])
    own = np.vstack([own, own[-1] + np.asarray(gas.heat_capacity(FITTED)) * (HOTTEST - FITTED)])
    names, atoms = tuple(gas.species), _atoms(gas)
    molecule = np.array([kind == "molecule" for kind in gas.kinds])
    capacity = library.sheet("hazards/rules.csv")["hydrogen_heat_capacity"].value
    extra = {"H2": capacity * (grid - 298.15), "other": own[:, names.index("N2")]}
    for name in [name for name in extra if name not in names]:
        names, own = (*names, name), np.column_stack([own, extra[name]])
        atoms = np.vstack([atoms, [0, 2 if name == "H2" else 0, 0, 0]])
        molecule = np.append(molecule, True)
    return _assemble(names, grid, own, atoms, molecule)


def _atoms(gas):
    """Return the C, H, Cl and all other atoms of each species."""
    atoms = np.asarray(gas.atoms, dtype=float)
    named = [list(gas.elements).index(element) for element in ("C", "H", "Cl")]
    return np.column_stack([atoms[:, named], atoms.sum(axis=1) - atoms[:, named].sum(axis=1)])


def _assemble(names, grid, own, atoms, molecule):
    C, H, Cl, rest = atoms.T
    saturated = molecule & (C > 0) & (rest == 0) & (H + Cl == 2 * C + 2)
    sizes = np.array(sorted(set(C[saturated])))
    step = _mean_step(own, atoms, saturated)
    rungs = [_rungs(size, own, atoms, saturated, step) for size in sizes]
    place = {size: rungs[s] for s, size in enumerate(sizes)}
    entries = [(k, place[C[k]], int(Cl[k]), int(H[k]), own[:, k]) for k in np.flatnonzero(saturated)]
    bare = [(s, rungs[s], 0, int(2 * size + 2), rungs[s][0]) for s, size in enumerate(sizes)]
    return Ladder(
        names, grid, own,
        bonds=np.where(saturated, H, 0.0), bound=np.where(saturated, Cl, 0.0),
        skeleton=(saturated[:, None] & (C[:, None] == sizes)).astype(float),
        added=_filling(entries), shared=_filling(bare),
        counted=molecule, fuel=molecule & (H > 0) & ((C > 0) | (np.array(names) == "H2")),
        alkane=saturated & (Cl == 0),
        hydrogen=names.index("H2"), chlorine=names.index("Cl2"), acid=names.index("HCl"),
    )  # fmt: skip


def _filling(parents):
    """Return the entries of parents given as (index, rungs, rung it stands on, bonds, own enthalpy)."""
    rows = [
        (index, taken, bonds - taken, comb(bonds, taken), rungs[rung + taken] if taken else own)
        for index, rungs, rung, bonds, own in parents
        for taken in range(bonds + 1)
    ]
    parent, taken, left, ways, enthalpy = zip(*rows, strict=True)
    return Filling(*(np.array(column) for column in (parent, taken, left, ways, enthalpy)))


def _mean_step(own, atoms, saturated):
    """Return the mean enthalpy of one substitution on the ethane, else methane skeleton [J/mol]."""
    C, H, Cl, _ = atoms.T
    for size in (2, 1):
        bare = np.flatnonzero(saturated & (size == C) & (Cl == 0))
        full = np.flatnonzero(saturated & (size == C) & (H == 0))
        if len(bare) and len(full):
            return (own[:, full[0]] - own[:, bare[0]]) / (2 * size + 2)
    raise ValueError("the mechanism holds neither C2H6 with C2Cl6 nor CH4 with CCl4")


def _rungs(size, own, atoms, saturated, step):
    """Return the enthalpy of each rung of a skeleton; a missing one continues by `step`."""
    C, _, Cl, _ = atoms.T
    rungs: list = []
    for chlorine in range(int(2 * size + 3)):
        isomers = np.flatnonzero(saturated & (size == C) & (Cl == chlorine))
        rungs.append(own[:, isomers].mean(axis=1) if len(isomers) else rungs[-1] + step)
    return rungs


def mixture_enthalpy(rungs, x, T):
    """
    Return the enthalpy of each composition at its temperature.

    Parameters
    ----------
    rungs : Ladder
        Tables of the mechanism. [-]
    x : array, points x species
        Mole fractions in the order of `rungs.species`. [-]
    T : array, points
        Temperature, 200 to 1700 K. [K]

    Returns
    -------
    H : array, points
        Enthalpy of one mole of mixture. [J/mol]
    """
    if np.any((T < COLDEST) | (T > FITTED)):
        raise RangeError(
            f"hazards: enthalpies are tabulated from {COLDEST:.0f} to {FITTED:.0f} K, the mixture has "
            f"{np.min(T):.0f} to {np.max(T):.0f} K"
        )
    low = ((T - COLDEST) / STEP).astype(int)
    above = (T - rungs.grid[low]) / STEP
    step = rungs.enthalpy[low + (above > 0)] - rungs.enthalpy[low]
    return ((rungs.enthalpy[low] + above[:, None] * step) * x).sum(axis=1)


def temperature_of(grid, table, H):
    """Return the temperature at which each row of `table` (points x grid) holds the enthalpy `H` [K]."""
    here = np.arange(len(H))
    low = np.clip((table <= H[:, None]).sum(axis=1) - 1, 0, len(grid) - 2)
    slope = (table[here, low + 1] - table[here, low]) / (grid[low + 1] - grid[low])
    return grid[low] + (H - table[here, low]) / slope


def adiabatic_temperature(rungs, x, T, shared=True, volume=False):
    """
    Return the temperature after complete substitution, the hotter of the two fillings.

    Hydrogen takes its chlorine first. Up to 1700 K the enthalpies are those of the mechanism; above, the heat
    capacity of 1700 K is held (the figure then only says "very hot").

    Parameters
    ----------
    rungs : Ladder
        Tables of the mechanism. [-]
    x : array, points x species
        Mole fractions in the order of `rungs.species`. [-]
    T : array, points
        Temperature before the reaction. [K]
    shared : bool
        Try the filling `shared` too; without it the chlorine already bound stays where it is. [-]
    volume : bool
        At constant volume instead of constant pressure; the number of molecules stays. [-]

    Returns
    -------
    T_ad : array, points
        Adiabatic temperature. [K]

    References
    ----------
    .. [1] own_threshold: model "substitution only". The chloromethane limits come out within 0.5 vol% of
       those of a Gibbs equilibrium with the skeletons kept.
    """
    x, T = np.atleast_2d(x), np.atleast_1d(np.asarray(T, dtype=float))
    H = mixture_enthalpy(rungs, x, T)
    chlorine, sites = x[:, rungs.chlorine], x @ rungs.bonds
    to_hydrogen = np.minimum(chlorine, x[:, rungs.hydrogen])
    used = np.minimum(chlorine - to_hydrogen, sites)
    rest = x * (rungs.skeleton.sum(axis=1) == 0)
    rest[:, rungs.hydrogen] -= to_hydrogen
    rest[:, rungs.chlorine] -= to_hydrogen + used
    rest[:, rungs.acid] += 2 * to_hydrogen + used
    rest = rest @ rungs.enthalpy.T
    if volume:
        rest, H = rest - GAS_CONSTANT * rungs.grid, H - GAS_CONSTANT * T
    added = rungs.added.product_enthalpy(x, used / np.maximum(sites, 1e-300))
    T_ad = temperature_of(rungs.grid, rest + added, H)
    if not shared:
        return T_ad
    bound = x @ rungs.bound
    chance = (bound + used) / np.maximum(sites + bound, 1e-300)
    spread = rungs.shared.product_enthalpy(x @ rungs.skeleton, chance)
    return np.maximum(T_ad, temperature_of(rungs.grid, rest + spread, H))
