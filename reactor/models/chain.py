"""The radical chain along a solved reactor: its order in light, at the stations."""

import numpy as np

from reactor.kernel.rates import Rates

NEWTON = 40  # steps that bring the radicals to rest before their answer to light is read
SETTLED = 1e-6  # relative step of the radicals after which their answer is read: as good as the order then is
RECOMBINATION = 1e6  # m^3/mol/s; a low termination constant, so that the search starts from too many radicals


def light_order(profile, gas, wall_loss, stations=None):
    """
    Return d ln(HCl rate)/d ln J at every station (nan where it is dark).

    The molecules are held, the radicals are stationary: R(r, J) = 0 gives dr/dlnJ = -(dR/dr)^-1 J dR/dJ.

    Parameters
    ----------
    profile : Profile
        The solved reactor.
    gas : Mechanism
        Chemistry.
    wall_loss : float
        Loss of chlorine atoms at the wall. [1/s]
    stations : sequence of int
        Stations looked at; the others are nan. None: all.

    Returns
    -------
    array (M,)
    """
    rates = Rates(gas.tables, gas.photolysis, gas.wall)
    acid, radical = gas.index["HCl"], np.flatnonzero(gas.radical)
    order = np.full(len(profile.z), np.nan)
    wanted = None if stations is None else set(stations)
    for i, (c, T, J) in enumerate(zip(profile.concentrations, profile.temperature, profile.photolysis, strict=True)):
        chlorine = c[gas.index["Cl2"]]
        if (wanted is None or i in wanted) and J > 0 and chlorine > 0:
            plenty = np.sqrt(J * chlorine / RECOMBINATION)
            if c[radical].sum() < 1e-3 * plenty:  # none yet, as at an inlet: no end to the chain
                c[radical] = plenty
            order[i] = _order(rates, c.copy(), T, J, wall_loss, acid, radical)
    return order


def _order(rates, c, T, J, wall_loss, acid, radical):
    block = radical[:, None], radical
    for _ in range(NEWTON):
        w, by_c, _, by_J, _ = rates.derivatives(c, T, J, wall_loss)
        inner = by_c[block]
        step = np.linalg.solve(inner, -w[radical])
        c[radical] = np.maximum(c[radical] + step, 0.1 * c[radical])
        if np.all(np.abs(step) <= SETTLED * c[radical] + 1e-30):
            break
    response = np.linalg.solve(inner, -J * by_J[radical])
    return float((by_c[acid, radical] @ response + J * by_J[acid]) / w[acid])


def dark_chain(stream, gas):
    """
    Return what the dark chain of an unreacted gas needs: two functions of T and the fuel's mole fraction.

    Parameters
    ----------
    stream : Stream
        The gas.
    gas : Mechanism
        Chemistry.

    Returns
    -------
    propagation, equilibrium : callable
        Mean rate constant of Cl + RH [m^3/mol/s] and Kc of Cl2 = 2 Cl [mol/m^3], of T in K.
    fuel : float
        Mole fraction of all RH. [-]
    """
    rates, t = Rates(gas.tables, gas.photolysis, gas.wall), gas.tables
    atom, acid = gas.index["Cl"], gas.index["HCl"]
    taking = np.flatnonzero((t.reactants[:, atom] == 1) & (t.products[:, acid] == 1) & ~t.third_body)
    partner = t.reactants[taking].copy()
    partner[:, atom] = 0.0
    share = partner @ stream.fractions
    present = partner.T @ (share > 0) > 0
    fuel = float(stream.fractions[present].sum())
    recombination = int(gas.start[0])

    def propagation(T):
        return float(rates.constants(T)[0][taking] @ share) / fuel

    def equilibrium(T):
        return 1.0 / float(rates.constants(T)[1][recombination])

    return propagation, equilibrium, fuel
