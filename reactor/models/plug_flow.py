"""Plug flow in one tube or several in parallel, cooled at constant temperature, with or against the gas."""

import numpy as np

from reactor.errors import ConvergenceError
from reactor.kernel.plugflow import TOTALS, Budget, Tube, integrate
from reactor.kernel.rates import Rates
from reactor.models import assemble
from reactor.models.profile import Profile
from reactor.stream import Stream

SCAN = 8  # coarse steps in the search for a second, hotter solution against the flow


def solve(case, plant):
    """
    Return the solved tube as a `Profile`.

    Parameters
    ----------
    case : Case
        The checked case.
    plant : Plant
        Chemistry, light and heat exchange of one tube.

    Raises
    ------
    ConvergenceError
        When the kernel's budget is used up, or no coolant temperature fits.
    """
    gas, tube = plant.gas, _tube(case, plant)
    inlet = assemble.mixed_inlet(case, gas)
    mass_flow = inlet.mass(gas) / case.vessel.parallel
    n = inlet.moles / inlet.mass(gas)

    def run(Tc, budget=assemble.budget(case)):
        return integrate(tube, n, inlet.temperature, Tc, case.vessel.pressure, mass_flow, budget)

    if case.cooling.mode == "counter-current":
        path, remarks = _against(run, case.cooling.inlet, inlet.temperature)
    else:
        path, remarks = run(case.cooling.inlet or inlet.temperature), ()
    return _profile(case, gas, tube, inlet, path, remarks)


def _tube(case, plant):
    gas, light, wall = plant.gas, plant.light, plant.wall
    sign = -1.0 if case.cooling.mode == "counter-current" else 1.0
    rates = Rates(gas.tables, gas.photolysis, gas.wall)
    return Tube(rates, gas.molar_mass, plant.wall_loss, gas.index["Cl2"], gas.start, light.area,
                wall.hydraulic_diameter, wall.friction, wall.conductance, wall.lamp_share, sign * plant.coolant,
                assemble.sections(case, gas, light))


def _against(run, entering, hot):
    """Find where the coolant must leave so that it enters at `entering`; report the cold solution, seek others."""
    loose = Budget(rtol=1e-5)
    K = -1  # the coolant temperature stands before the pressure in the state

    def miss(Tc, budget=loose):
        return run(Tc, budget).state[-1, K - 1] - entering

    top = max(hot, entering) + 400.0
    grid = np.linspace(entering, top, SCAN)
    values = [miss(Tc) for Tc in grid]
    crossings = [i for i in range(SCAN - 1) if values[i] * values[i + 1] <= 0]
    if not crossings:
        raise ConvergenceError(f"no coolant temperature between {entering:.0f} and {top:.0f} K lets the coolant enter "
                               f"at {entering:.1f} K against the gas; raise cooling.flow")
    first = crossings[0]
    Tc = _root(miss, grid[first], grid[first + 1])
    remarks = ["counter-current coolant: the solution reached from the cold side is reported"]
    if len(crossings) > 1:
        remarks.append(f"a hotter solution exists too, with the coolant leaving between {grid[crossings[-1]]:.0f} and "
                       f"{grid[crossings[-1] + 1]:.0f} K")
    else:
        remarks.append(f"no hotter solution was seen with the coolant leaving at up to {top:.0f} K")
    return run(Tc), tuple(remarks)


def _root(miss, low, high):
    from scipy.optimize import brentq

    return brentq(lambda Tc: miss(Tc, Budget()), low, high, xtol=1e-7, rtol=1e-12)


def _profile(case, gas, tube, inlet, path, remarks):
    tubes, K = case.vessel.parallel, len(gas.species)
    moles = np.maximum(path.state[:, :K], 0.0) * path.mass_flow[:, None] * tubes
    T, coolant, P = path.state[:, K], path.state[:, K + 1], path.state[:, K + 2]
    totals = {name: path.totals[:, i] * (1 if name == "time" else tubes) for i, name in enumerate(TOTALS)}
    feeds = (*assemble.at_inlet(case, gas), *(stream for _, stream in assemble.injections(case, gas)))
    outlet = Stream("outlet", moles[-1], float(T[-1]), float(P[-1]))
    cost = {"steps": path.steps, "evaluations": path.evaluations, "rtol": case.solver.rtol}
    return Profile("plug flow", gas.species, path.z, moles, T, coolant, P, _photolysis(tube, path, K), totals,
                   path.hottest, feeds, inlet, outlet, tube.area * case.vessel.length * tubes, (), remarks, cost)


def _photolysis(tube, path, K):
    """Return J [1/s] at the stations."""
    from reactor.kernel.light import absorb
    from reactor.kernel.thermo import R

    starts = np.array([section.start for section in tube.sections])
    number = np.clip(np.searchsorted(starts, path.z, side="right") - 1, 0, None)
    found = []
    for place, y in zip(number, path.state, strict=True):
        n, T, P = y[:K], y[K], y[K + 2]
        c = n[tube.chlorine] * P / (R * T * n.sum())
        found.append(absorb(tube.sections[place].beam, c, T).J)
    return np.array(found)
