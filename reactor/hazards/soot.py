"""
Gibbs equilibrium of an ideal gas with or without graphite, at given temperature and pressure.

The solvers of Cantera for several phases stop on one mixture in fourteen of a random set; this is the
classical iteration on element potentials (unknowns: one potential an element, the moles of gas, the moles of
graphite), with the step control of chemical-equilibrium practice. Thermochemistry comes as numbers.
"""

import numpy as np

from reactor.errors import ConvergenceError

STEPS, SMALLEST = 400, 1e-40


def equilibrium(atoms, g, g_graphite, carbon, amounts, near=None):
    """
    Return the moles of every gas species and of graphite at the lowest Gibbs energy.

    Parameters
    ----------
    atoms : array, species x elements
        Atoms in each species. [-]
    g : array, species
        Gibbs energy over RT of each gas at the temperature and the total pressure. [-]
    g_graphite : float
        The same of graphite; inf leaves it out. [-]
    carbon : int
        Column of carbon in `atoms`. [-]
    amounts : array, elements
        Moles of each element. [mol]
    near : array, species
        Moles at a neighbouring state, to start from. [mol]

    Returns
    -------
    moles, graphite : array of float, float
        At equilibrium. [mol]

    Raises
    ------
    ConvergenceError
        When the iteration does not settle.
    """
    elements = np.flatnonzero(amounts > 1e-14 * amounts.sum())
    species = np.flatnonzero(atoms[:, amounts <= 1e-14 * amounts.sum()].sum(axis=1) == 0)
    column = int(np.flatnonzero(elements == carbon)[0]) if carbon in elements else None
    a, b = atoms[np.ix_(species, elements)], amounts[elements]
    if near is None:
        state = _State(np.full(len(species), 0.1 * b.sum() / len(species)), 0.1 * b.sum(), None)
    else:
        state = _State(near[species], near.sum(), None)
    for solid in (False, True, False):
        state = _settle(a, g[species], b, state, (column, g_graphite) if solid else None)
        if column is None or np.isinf(g_graphite) or (not solid and state.potential[column] <= g_graphite):
            break
        if solid and state.graphite >= 0:
            break
    moles = np.zeros(len(g))
    moles[species] = state.moles
    return moles, max(state.graphite or 0.0, 0.0)


class _State:
    """Moles of gas by species and in all, moles of graphite, element potentials."""

    def __init__(self, moles, total, potential, graphite=0.0):
        self.moles, self.total, self.potential, self.graphite = moles, total, potential, graphite


def _settle(a, g, b, state, solid):
    """Return the state after Newton steps on potentials, ln(total) and graphite."""
    n, total, graphite = np.maximum(state.moles, 1e-15 * state.total), state.total, 0.0
    E, size = a.shape[1], a.shape[1] + 1 + (solid is not None)
    for _ in range(STEPS):
        mu = g + np.log(n / total)
        matrix, right = np.zeros((size, size)), np.zeros(size)
        weighted = a.T * n
        matrix[:E, :E] = weighted @ a
        matrix[:E, E] = matrix[E, :E] = weighted.sum(axis=1)
        matrix[E, E] = n.sum() - total
        right[:E] = b - weighted.sum(axis=1) + weighted @ mu
        right[E] = total - n.sum() + n @ mu
        if solid is not None:
            matrix[solid[0], -1] = matrix[-1, solid[0]] = 1.0
            right[-1] = solid[1]
            right[solid[0]] -= graphite
        found = _solve(matrix, right)
        potential, growth = found[:E], found[E]
        change = a @ potential + growth - mu
        step = _step(change, growth, n, total)
        n = np.maximum(n * np.exp(step * change), SMALLEST)
        total *= np.exp(step * growth)
        graphite += step * (found[-1] if solid is not None else 0.0)
        done = (n * np.abs(change)).sum() < 1e-10 * n.sum() and abs(growth) < 1e-10
        if done and (solid is None or abs(found[-1]) < 1e-10 * b.sum()):
            return _State(n, total, potential, graphite)
    raise ConvergenceError("equilibrium products: the iteration did not settle; check the composition")


def _solve(matrix, right):
    """Return the solution of a symmetric system, scaled; a singular one by least squares."""
    scale = 1 / np.sqrt(np.maximum(np.abs(matrix).max(axis=1), 1e-300))
    scaled = matrix * scale[:, None] * scale
    try:
        return np.linalg.solve(scaled, right * scale) * scale
    except np.linalg.LinAlgError:
        return np.linalg.lstsq(scaled, right * scale, rcond=None)[0] * scale


def _step(change, growth, n, total):
    """Return the share of the step that keeps amounts from growing too fast."""
    major = np.log(n / total) > -18.42
    largest = max(abs(5 * growth), np.abs(change[major]).max(initial=0.0), 1e-300)
    step = min(1.0, 2.0 / largest)
    minor = ~major & (change >= 0)
    if minor.any():
        limit = np.abs(
            (-np.log(n[minor] / total) - 9.2103404)
            / np.where(change[minor] == growth, 1e-300, change[minor] - growth)
        )
        step = min(step, limit.min())
    return step
