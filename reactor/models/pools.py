"""
Local radical pools: radicals stay where the light makes them, molecules are mixed over the gap.

The kernel sees one pool fed by an effective J (`photons.even`), a function of the light order. The order comes out of
the chemistry: it is read from the solved reactor, section by section, and the reactor is solved again until it rests.
`explicit` is the reference: every cell of the gap has its own pool of all radicals.
"""

import numpy as np

from reactor.models.chain import NEWTON, light_order
from reactor.photons import even

ROUNDS, REST = 4, 0.01  # solves at most, and the change of the light order at which they end
WARM = 350.0  # K


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
    light = plant.light
    if case.chemistry.radicals != "local" or not np.any(light.into_gas) or case.chemistry.photolysis_rate is not None:
        return plant, profile, None
    orders = np.full(len(light.edges) - 1, np.nan)
    for _ in range(ROUNDS):
        new = section_orders(profile, plant)
        if np.all(np.abs(new - orders) < REST):
            break
        orders = new
        plant = plant._replace(even=curves(light, orders))
        profile = solver(case, plant)
    return plant, profile, mixed


def section_orders(profile, plant):
    """Return the light order of each section: mean over the HCl formed in it; 0.5 where none is."""
    order = light_order(profile, plant.gas, plant.wall_loss)
    edges = plant.light.edges
    if len(order) == 1:
        return np.clip(np.nan_to_num(order, nan=0.5), 0.5, 1.0)
    made = np.maximum(np.diff(profile.moles[:, plant.gas.index["HCl"]]), 0.0)
    middle, value = (profile.z[1:] + profile.z[:-1]) / 2, np.fmax(order[1:], order[:-1])
    found = []
    for start, stop in zip(edges, edges[1:], strict=False):
        here = (middle >= start) & (middle <= stop) & np.isfinite(value) & (made > 0)
        found.append(np.average(value[here], weights=made[here]) if here.any() else 0.5)
    return np.clip(found, 0.5, 1.0)


def curves(light, orders):
    """Return the kernel's curve of J_eff/J for each section."""
    t = (WARM - 550.0) / 350.0
    sigma = light.sigma @ t ** np.arange(light.sigma.shape[1])
    shared: dict = {}
    found = []
    for order, weight in zip(np.round(orders, 4), light.into_gas, strict=True):
        shape = weight / weight.max() if weight.any() else weight
        key = (float(order), tuple(np.round(shape, 6)))
        if key not in shared:
            shared[key] = even.curve(light.cells, weight, sigma, float(order))
        found.append(shared[key])
    return found


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
    radical : array
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
