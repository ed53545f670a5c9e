"""
Cantera's own reactors on the mechanism file of the project: the reference from outside it.

Cantera marches the balances with its own rates, thermodynamics and integrator (CVODES, Jacobian by
differences). What it does not know is added here: the rate constants of photolysis and wall loss as
multipliers of their reactions, and as heat the power of the photons absorbed and what the wall takes.
"""

from typing import NamedTuple

import cantera as ct


class Chemistry(NamedTuple):
    """
    The mechanism with its lamp and wall.

    `photolysis` returns J [1/s] at a time [s]; `photon_energy` is in J/mol; `wall_loss` in 1/s.
    """

    path: str
    wall_loss: float
    photolysis: object
    photon_energy: float

    def gas(self, composition, T, P):
        """Return the lit gas, and the number of its photolysis."""
        gas = ct.Solution(str(self.path), "gas-lit", transport_model=None)
        roles = [reaction.input_data.get("role") for reaction in gas.reactions()]
        gas.set_multiplier(self.wall_loss, roles.index("wall"))
        gas.TPX = T, P, composition
        return gas, roles.index("photolysis")


class Found(NamedTuple):
    """Mole fractions by species, temperature [K], pressure [Pa], and the time it took to get there [s]."""

    fractions: dict
    T: float
    P: float
    time: float
    evaluations: int


def _heated(base):
    """Return a Cantera reactor class that sets J and adds photon power and wall heat at each evaluation."""

    class Heated(base):
        evaluations = 0

        def light(self, gas, photolysis, chemistry, heat):
            """Hand over what the hook needs; `heat` returns W/m^3 of gas at T [K]."""
            self.solution, self.number, self.chemistry, self.heat = gas, photolysis, chemistry, heat
            self.chlorine = gas.species_index("Cl2")

        def after_eval_walls(self, t):
            self.evaluations += 1
            J = float(self.chemistry.photolysis(t))
            self.solution.set_multiplier(J, self.number)
            c = 1e3 * self.solution.concentrations[self.chlorine]
            power = J * c * self.chemistry.photon_energy + self.heat(self.solution.T)
            self.heat_rate = power * self.volume

    return Heated


Slug = _heated(ct.ExtensibleIdealGasConstPressureReactor)
Vessel = _heated(ct.ExtensibleIdealGasReactor)


def plug_flow(chemistry, composition, T, P, time, heat, rtol=1e-9, atol=1e-18):
    """
    Return the outlet of a tube at constant pressure: a slug of gas followed for its residence time.

    Parameters
    ----------
    chemistry : Chemistry
        Mechanism, lamp and wall; J as a function of the slug's age.
    composition : dict
        Mole fractions at the inlet.
    T, P, time : float
        Inlet temperature [K], pressure [Pa], residence time [s].
    heat : callable
        Heat to the gas [W/m^3] at T [K], photons not counted.
    """
    gas, number = chemistry.gas(composition, T, P)
    slug = Slug(gas, clone=False)
    slug.light(gas, number, chemistry, heat)
    net = ct.ReactorNet([slug])
    net.rtol, net.atol, net.max_steps = rtol, atol, 100000
    net.advance(time)
    return Found(dict(zip(gas.species_names, gas.X, strict=True)), gas.T, gas.P, time, slug.evaluations)


def stirred_tank(
    chemistry, composition, T, P, flow, volume, heat, start=None, residences=60, rtol=1e-9, atol=1e-16
):
    """
    Return what a stirred tank of constant volume settles at: fed, throttled, followed for long.

    Parameters
    ----------
    chemistry : Chemistry
        Mechanism, lamp and wall.
    composition : dict
        Mole fractions of the feed.
    T, P, flow, volume : float
        Feed temperature [K], pressure [Pa], feed [kg/s], gas volume [m^3].
    heat : callable
        Heat to the gas [W/m^3] at T [K], photons not counted.
    start : tuple
        Temperature [K] and mole fractions of the gas the tank is filled with; None: the feed.
    residences : float
        How long it is followed, in times volume over inlet volume flow.
    """
    feed, _ = chemistry.gas(composition, T, P)
    residence = volume * feed.density / flow
    gas, number = chemistry.gas(composition, T, P)
    if start is not None:
        gas.TPX = start[0], P, start[1]
    tank = Vessel(gas, clone=False)
    tank.volume = volume
    tank.light(gas, number, chemistry, heat)
    outside = ct.Reservoir(chemistry.gas(composition, T, P)[0], clone=False)
    inflow = ct.MassFlowController(ct.Reservoir(feed, clone=False), tank, mdot=flow)
    ct.PressureController(tank, outside, primary=inflow, K=flow / 10.0)
    net = ct.ReactorNet([tank])
    net.rtol, net.atol, net.max_steps = rtol, atol, 200000
    net.advance(residences * residence)
    return Found(dict(zip(gas.species_names, gas.X, strict=True)), gas.T, gas.P, net.time, tank.evaluations)
