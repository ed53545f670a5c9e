"""
Local radical pools: radicals stay where the light makes them, molecules are mixed over the gap.

The kernel sees one pool fed by an effective J (`photons.even`), a function of the light order. The order comes out of
the chemistry: it is read from the solved reactor, as a function of the optical thickness that the gas has on its way,
and the reactor is solved again until it rests. `explicit` is the reference: every cell of the gap has its own pool of
all radicals.
"""

from dataclasses import replace
from itertools import pairwise

import numpy as np

from reactor.models.chain import NEWTON, light_order
from reactor.photons import even

ROUNDS, REST = 3, 0.003  # solves at most, and the change of J_eff/J at which they end
WARM = 350.0  # K
STATIONS = 20  # of each section where the light order is found
AVOGADRO = 6.02214076e23


def settle(case, plant, solver):
    """
    Return the plant with its local pools, the solved profile, and the profile of one mixed pool.

    Parameters
    ----------
    case : Case
        The checked case.
    plant : Plant
        Chemistry, light and heat exchange, one mixed pool so far.
    solver : callable
        Case and plant -> Profile.
    """
    mixed = profile = solver(case, plant)
    lit = np.any(plant.light.into_gas) and case.chemistry.photolysis_rate is None
    if case.chemistry.radicals != "local" or not lit:
        return plant, profile, None
    plant = plant._replace(light=cut(plant.light, [inject.position for inject in case.inject]))
    for _ in range(ROUNDS):
        before, plant = plant.even, plant._replace(even=curves(plant, profile))
        if before and change(plant, before, profile) < REST:
            break
        profile = solver(case, plant)
    return plant, profile, mixed


def cut(light, places):
    """Return the light with further borders of its sections."""
    edges = np.array(sorted({*light.edges.tolist(), *(z for z in places if 0.0 < z < light.edges[-1])}))
    number = np.clip(np.searchsorted(light.edges, edges[:-1], side="right") - 1, 0, len(light.edges) - 2)
    changed = {name: tuple(getattr(light, name)[i] for i in number) for name in ("absorbed", "transmitted", "ends")}
    changed |= {name: getattr(light, name)[number] for name in ("into_gas", "lit", "sleeve_heat")}
    spectrum = light.spectrum._replace(into_gas=light.spectrum.into_gas[number])
    return replace(light, edges=edges, spectrum=spectrum, **changed)


def sigma_at(light, T):
    """Return the cross-sections of the lines at temperatures, (temperatures, lines) [m2]."""
    t = np.clip((np.atleast_1d(T) - 550.0) / 350.0, -1.0, 1.0)
    return np.vander(t, light.sigma.shape[1], increasing=True) @ light.sigma.T


def depths(light, profile):
    """Return ln of the mean optical thickness at every station, as the kernel sees it."""
    sigma, weight = sigma_at(light, profile.temperature), light.entering
    c = np.maximum(profile.concentrations[:, profile.species.index("Cl2")], 1e-30)
    return np.log(c * AVOGADRO * light.path * (sigma**2 @ weight) / (sigma @ weight))


def curves(plant, profile):
    """Return the kernel's curve of J_eff/J for each section, with the light order found along the profile."""
    light = plant.light
    depth = depths(light, profile)
    order = light_order(profile, plant.gas, plant.wall_loss, spaced(depth, profile, light.edges))
    sigma = sigma_at(light, WARM)[0]
    found = []
    for weight, start, stop in zip(light.into_gas, light.edges, light.edges[1:], strict=False):
        here = np.isfinite(order) & beside(profile, start, stop)
        if not here.any():
            found.append(even.curve(light.cells, weight, sigma, 0.5))
            continue
        found_at = dict(zip(depth[here][::-1].tolist(), order[here][::-1].tolist(), strict=True))  # the first of equals
        x = np.array(sorted(found_at))
        known = np.array([found_at[place] for place in x.tolist()])
        found.append(even.curve(light.cells, weight, sigma, lambda at, x=x, known=known: np.interp(at, x, known)))
    return found


def beside(profile, start, stop):
    """Return which stations lie in a section; those of tanks all do."""
    return np.full(len(profile.z), profile.kind != "plug flow") | ((profile.z >= start) & (profile.z <= stop))


def spaced(depth, profile, edges):
    """Return the numbers of few stations of each section, evenly spaced in ln of the optical thickness."""
    found = set()
    for start, stop in pairwise(edges):
        here = np.flatnonzero(beside(profile, start, stop))
        if len(here):
            rank = here[np.argsort(depth[here])]
            wanted = np.linspace(depth[rank[0]], depth[rank[-1]], STATIONS)
            found |= set(rank[np.minimum(np.searchsorted(depth[rank], wanted), len(rank) - 1)].tolist())
    return found


def change(plant, before, profile):
    """Return the largest change of J_eff/J at the stations of a profile from one set of curves to the next."""
    depth = depths(plant.light, profile)
    pairs = zip(before, plant.even, plant.light.edges, plant.light.edges[1:], strict=False)
    gaps = [0.0]
    for old, new, start, stop in pairs:
        here = beside(profile, start, stop)
        gaps.append(float(np.abs(old(depth[here])[0] - new(depth[here])[0]).max(initial=0.0)))
    return max(gaps)


def explicit(rates, c, T, J, volume, wall_loss, radical):
    """
    Return the production of every molecule with explicit pools, and the radicals of each pool.

    Parameters
    ----------
    rates : Rates
        Kernel rates of the mechanism.
    c : array (K,)
        Concentrations; those of the molecules are shared, those of the radicals are the first guess. [mol/m3]
    T : float
        Temperature, shared. [K]
    J : array (cells,)
        Photolysis rate in each cell. [1/s]
    volume : array (cells,)
        Share of each cell in the gas. [-]
    wall_loss : float
        Loss of chlorine atoms. [1/s]
    radical : sequence of int
        Numbers of the radicals.
    """
    production = np.zeros(len(c))
    pools = []
    for rate, share in zip(J, volume, strict=True):
        local = at_rest(rates, c, T, rate, wall_loss, radical)
        production += share * rates.production(local, T, rate, wall_loss)
        pools.append(local[radical])
    return production, np.array(pools)


def at_rest(rates, c, T, J, wall_loss, radical):
    """Return concentrations with the radicals stationary at fixed molecules [mol/m3]."""
    c = c.copy()
    for _ in range(10 * NEWTON):
        w, by_c, _, _, _ = rates.derivatives(c, T, J, wall_loss)
        step = np.linalg.solve(by_c[np.ix_(radical, radical)], -w[radical])
        c[radical] = np.maximum(c[radical] + step, 0.1 * c[radical])
        if np.all(np.abs(step) <= 1e-9 * c[radical] + 1e-30):
            break
    return c
