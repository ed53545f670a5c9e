"""Plug flow in one tube or several in parallel, cooled at constant temperature, with or against the gas."""

import itertools

import numpy as np

from reactor.errors import ConvergenceError
from reactor.kernel.light import photolysis_rates
from reactor.kernel.plugflow import TOTALS, Budget, Job, Tube, integrate, integrate_many
from reactor.kernel.rates import Rates
from reactor.kernel.thermo import R
from reactor.models import assemble
from reactor.models.profile import Profile
from reactor.stream import Stream

SCAN, REACH = 6, 300.0  # steps, and kelvin above the gas, of the search for a second, hotter solution
SECANTS = 8  # steps of the secant rule before a bracket is sought
LOOSE = Budget(rtol=1e-5)
COOLANT = -2  # place of the coolant's temperature in the kernel's state


def solve(case, plant, look_further=True):
    """
    Return the solved tube as a `Profile`.

    Parameters
    ----------
    case : Case
        The checked case.
    plant : Plant
        Chemistry, light and heat exchange of one tube.
    look_further : bool
        Against the flow: also look for a hotter solution.

    Raises
    ------
    ConvergenceError
        When the kernel's budget is used up, or no coolant temperature fits.
    """
    gas, tube = plant.gas, tube_of(case, plant)
    inlet = assemble.mixed_inlet(case, gas)
    mass_flow = inlet.mass(gas) / case.vessel.parallel
    n = inlet.moles / inlet.mass(gas)

    def run(Tc, budget=assemble.budget(case)):
        return integrate(tube, n, inlet.temperature, Tc, case.vessel.pressure, mass_flow, budget)

    if case.cooling.mode == "counter-current":
        path, remarks = _against(run, case.cooling.inlet, inlet.temperature, look_further)
    else:
        path, remarks = run(case.cooling.inlet or inlet.temperature), ()
    return _profile(case, gas, tube, inlet, path, remarks)


def solve_many(cases, plants):
    """
    Return a `Profile` for every case, or the reason in words why it was dropped, from one batch of the kernel.

    Parameters
    ----------
    cases, plants : sequence
        As in `solve`, one of each; coolant against the gas needs a search and is refused here. [-]
    """
    made = []
    for case, plant in zip(cases, plants, strict=True):
        if case.cooling.mode == "counter-current":
            raise ValueError("coolant against the gas cannot be marched in one go; use solve")
        tube, inlet = tube_of(case, plant), assemble.mixed_inlet(case, plant.gas)
        flow, T = inlet.mass(plant.gas), inlet.temperature
        job = Job(
            tube,
            inlet.moles / flow,
            T,
            case.cooling.inlet or T,
            case.vessel.pressure,
            flow / case.vessel.parallel,
            assemble.budget(case),
        )
        made.append((tube, inlet, job))
    paths = integrate_many([job for _, _, job in made], between=1)
    return [
        path if isinstance(path, str) else _profile(case, plant.gas, tube, inlet, path, ())
        for case, plant, (tube, inlet, _), path in zip(cases, plants, made, paths, strict=True)
    ]


def tube_of(case, plant):
    """Return one tube as the kernel wants it."""
    gas, light, wall = plant.gas, plant.light, plant.wall
    sign = -1.0 if case.cooling.mode == "counter-current" else 1.0
    rates = Rates(gas.tables, gas.photolysis, gas.wall)
    return Tube(rates, gas.molar_mass, plant.wall_loss, gas.index["Cl2"], gas.start, light.area,
                wall.hydraulic_diameter, wall.friction, wall.conductance, wall.lamp_share, sign * plant.coolant,
                assemble.sections(case, gas, light, plant.even))


def _against(run, entering, hot, look_further):
    """Find where the coolant must leave so that it enters at `entering`: the solution reached from the cold side."""
    Tc = _cold_side(run, entering, hot)
    remarks = ["counter-current coolant: the solution reached from the cold side is reported"]
    if look_further:
        remarks.append(_hotter(run, entering, Tc, hot))
    return run(Tc), tuple(remarks)


def _cold_side(run, entering, hot):
    """Return the lowest leaving temperature that fits, by the secant rule from a coolant that does not warm."""
    cold, miss = entering, run(entering, LOOSE).state[-1, COOLANT] - entering
    warm = cold - miss
    for _ in range(SECANTS):
        new = run(warm).state[-1, COOLANT] - entering
        if abs(new) < 1e-6:
            return warm
        cold, warm, miss = warm, warm - new * (warm - cold) / (new - miss), new
        if not entering - 5.0 <= warm <= max(entering, hot) + REACH:
            break
    return _bracketed(run, entering, hot)


def _bracketed(run, entering, hot):
    """Return the lowest root between the coolant's inlet and `REACH` above the gas, by bracket and Brent's rule."""
    from scipy.optimize import brentq

    def miss(Tc):
        return run(Tc).state[-1, COOLANT] - entering

    grid = np.linspace(entering, max(hot, entering) + REACH, 4 * SCAN)
    last = miss(grid[0])
    for low, high in itertools.pairwise(grid):
        new = miss(high)
        if last * new <= 0:
            return brentq(miss, low, high, xtol=1e-7, rtol=1e-12)
        last = new
    raise ConvergenceError(f"no coolant temperature between {grid[0]:.0f} and {grid[-1]:.0f} K lets the coolant enter "
                           f"at {entering:.1f} K against the gas; raise cooling.flow")


def _hotter(run, entering, found, hot):
    """Say whether the coolant's balance closes once more at a higher leaving temperature."""
    grid = np.linspace(found + 1.0, max(hot, entering) + REACH, SCAN)
    misses = [run(Tc, LOOSE).state[-1, COOLANT] - entering for Tc in grid]
    for low, high, x, y in zip(grid, grid[1:], misses, misses[1:], strict=False):
        if x * y <= 0:
            return f"a hotter solution exists too, with the coolant leaving between {low:.0f} and {high:.0f} K"
    return f"no hotter solution was seen with the coolant leaving at up to {grid[-1]:.0f} K"


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
    starts = np.array([section.start for section in tube.sections])
    number = np.clip(np.searchsorted(starts, path.z, side="right") - 1, 0, None)
    n, T, P = path.state[:, :K], path.state[:, K], path.state[:, K + 2]
    c = n[:, tube.chlorine] * P / (R * T * n.sum(axis=1))
    J = np.zeros(len(path.z))
    for place, section in enumerate(tube.sections):
        here = number == place
        J[here] = photolysis_rates(section.beam, c[here], T[here], path.z[here])
    return J
