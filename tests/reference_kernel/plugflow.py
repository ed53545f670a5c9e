"""
Non-isothermal plug flow of a photolysed gas in one tube, coolant and pressure included.

Unknowns along the tube: n [mol/kg] of every species, T [K], coolant temperature [K], P [Pa]; beside
them running totals (`TOTALS`) that close the accounts of photons, heat and time.
"""

import time
import warnings
from typing import NamedTuple

import numpy as np

from reactor.errors import ConvergenceError
from reactor.kernel.plugflow import Budget
from reference_kernel.light import absorb
from reference_kernel.thermo import R

TOTALS = ("photons", "photon_power", "outer_wall", "thermal_starts", "heat_reaction", "to_wall", "lamp_heat",
          "coolant", "time")
ABSOLUTE = 1e-15  # mol/kg; small and fixed: it must not grow with the relative tolerance


class Path(NamedTuple):
    """The solution at the stations: z (M,), state (M, K + 3), totals (M, len(TOTALS)), and what it cost."""

    z: np.ndarray
    state: np.ndarray
    totals: np.ndarray
    mass_flow: np.ndarray
    steps: int
    evaluations: int
    hottest: tuple


class Balance:
    """Right-hand side and exact Jacobian of the tube's equations in one section."""

    def __init__(self, tube, section, mass_flow):
        self.tube, self.section, self.mass_flow = tube, section, mass_flow
        self.species = tube.rates.net.shape[1]

    def gas(self, y):
        """Return n, T, coolant temperature, P, density [kg/m^3] and concentrations [mol/m^3]."""
        n, (T, Tc, P) = y[: self.species], y[self.species : self.species + 3].tolist()
        density = P / (R * T * n.sum())
        return n, T, Tc, P, density, density * n

    def slope(self, z, y):
        """Return dy/dz."""
        tube, section = self.tube, self.section
        n, T, Tc, _P, density, c = self.gas(y)
        light = absorb(section.beam, c[tube.chlorine], T)
        q_f, q_r = tube.rates.both(c, T, light.J, tube.wall_loss)
        production = (q_f - q_r) @ tube.rates.net
        cp, _, h, _ = tube.rates.thermo.at(T)
        heat, wall, lamp = self._heats(T, Tc, h @ production)
        rise = (heat + light.power + lamp - wall) / (self.mass_flow * (n @ cp))
        coolant = wall + section.sleeve_heat - lamp
        drag = -tube.friction * self.mass_flow**2 / (2 * tube.diameter * density * tube.area**2)
        starts = 2 * tube.area * q_r[tube.starts].sum()
        totals = (light.photons, light.power, light.outer_wall, starts, heat, wall, lamp, coolant,
                  tube.area * density / self.mass_flow)
        return np.concatenate((production * (tube.area / self.mass_flow), (rise, coolant / tube.coolant, drag), totals))

    def _heats(self, T, Tc, h_production):
        """Return heat of reaction, heat lost to the wall and lamp heat gained, each per metre [W/m]."""
        tube, section = self.tube, self.section
        wall = tube.conductance(T)[0] * (T - Tc)
        return -tube.area * h_production, wall, tube.lamp_share(T)[0] * section.sleeve_heat

    def jacobian(self, z, y):
        """Return d(dy/dz)/dy; the running totals feed nothing back, their own columns are zero."""
        tube, section, K = self.tube, self.section, self.species
        n, T, Tc, P, density, c = self.gas(y)
        light = absorb(section.beam, c[tube.chlorine], T)
        w, by_c, by_T, by_J, _ = tube.rates.derivatives(c, T, light.J, tube.wall_loss)
        by_c[:, tube.chlorine] += by_J * light.by_c
        by_T = by_T + by_J * light.by_T
        carried = by_c @ c
        total = n.sum()
        w_n = density * by_c - carried[:, None] / total
        w_T, w_P = by_T - carried / T, carried / P
        cp, cp_slope, h, _ = tube.rates.thermo.at(T)
        chlorine = c[tube.chlorine]
        c_n = np.full(K, -chlorine / total)
        c_n[tube.chlorine] += density
        jac = np.zeros((len(y), len(y)))
        scale = tube.area / self.mass_flow
        jac[:K, :K], jac[:K, K], jac[:K, K + 2] = scale * w_n, scale * w_T, scale * w_P
        ua, ua_slope = tube.conductance(T)
        _, share_slope = tube.lamp_share(T)
        heat, wall, lamp = self._heats(T, Tc, h @ w)
        capacity = self.mass_flow * (n @ cp)
        rise = (heat + light.power + lamp - wall) / capacity
        power_T = light.power_by_T - light.power_by_c * chlorine / T
        wall_T = ua + ua_slope * (T - Tc)
        lamp_T = share_slope * section.sleeve_heat
        heat_n, heat_T = -tube.area * (h @ w_n), -tube.area * (cp @ w + h @ w_T)
        heat_P = -tube.area * (h @ w_P)
        jac[K, :K] = (heat_n + light.power_by_c * c_n - rise * self.mass_flow * cp) / capacity
        jac[K, K] = (heat_T + power_T + lamp_T - wall_T - rise * self.mass_flow * (n @ cp_slope)) / capacity
        jac[K, K + 1] = ua / capacity
        jac[K, K + 2] = (heat_P + light.power_by_c * chlorine / P) / capacity
        jac[K + 1, K], jac[K + 1, K + 1] = (wall_T - lamp_T) / tube.coolant, -ua / tube.coolant
        drag = -tube.friction * self.mass_flow**2 / (2 * tube.diameter * density * tube.area**2)
        jac[K + 2, :K], jac[K + 2, K], jac[K + 2, K + 2] = drag / total, drag / T, -drag / P
        row = K + 3 + TOTALS.index("heat_reaction")
        jac[row, :K], jac[row, K], jac[row, K + 2] = heat_n, heat_T, heat_P
        row = K + 3 + TOTALS.index("to_wall")
        jac[row, K], jac[row, K + 1] = wall_T, -ua
        return jac


def integrate(tube, n, T, Tc, P, mass_flow, budget=Budget()):
    """
    March from the inlet state to the end of the last section.

    Parameters
    ----------
    tube : Tube
        Geometry, chemistry, light and cooling of one tube.
    n : array (K,)
        Composition at the inlet before any injection. [mol/kg]
    T, Tc, P, mass_flow : float
        Gas and coolant temperature [K], pressure [Pa], gas flow [kg/s] at the inlet.

    Returns
    -------
    Path

    Raises
    ------
    ConvergenceError
        When the budget of steps or seconds is used up, or the step fails; says where.
    """
    march = _March(tube, budget)
    y = np.concatenate((n, (T, Tc, P), np.zeros(len(TOTALS))))
    for section in tube.sections:
        y, mass_flow = _inject(tube, section, y, mass_flow)
        y = march.through(section, y, mass_flow)
    return march.path()


def _inject(tube, section, y, mass_flow):
    """Mix what is injected at the start of a section into the gas at constant enthalpy."""
    if not section.injected.any():
        return y, mass_flow
    K = len(section.injected)
    n, T = y[:K], y[K]
    moles = mass_flow * n + section.injected
    enthalpy = mass_flow * (n @ tube.rates.thermo.at(T)[2]) + section.heat
    added = section.injected @ tube.molar_mass
    y = y.copy()
    y[:K] = moles / (mass_flow + added)
    y[K] = temperature_at(tube.rates.thermo, moles, enthalpy, T)
    return y, mass_flow + added


def temperature_at(thermo, moles, enthalpy, guess):
    """Return the temperature [K] at which `moles` carry `enthalpy`, by Newton's rule."""
    T = guess
    for _ in range(50):
        cp, _, h, _ = thermo.at(T)
        step = (enthalpy - moles @ h) / (moles @ cp)
        T = min(max(T + step, 0.5 * T), 2.0 * T)
        if abs(step) < 1e-10 * T:
            return T
    raise ConvergenceError(f"the temperature of a mixed stream was not found near {T:.1f} K; check its composition")


class _March:
    """Steps through the sections with LSODA and keeps stations, cost and the hottest point."""

    def __init__(self, tube, budget):
        self.tube, self.budget, self.began = tube, budget, time.monotonic()
        self.z, self.y, self.flow = [], [], []
        self.steps = self.evaluations = 0
        self.hottest = (-np.inf, 0.0)

    def through(self, section, y, mass_flow):
        """Return the state at the end of `section`."""
        from scipy.integrate import LSODA

        balance = Balance(self.tube, section, mass_flow)
        K = balance.species
        tolerance = np.concatenate((np.full(K, ABSOLUTE), (1e-8, 1e-8, 1e-5), self._total_tolerance(y)))
        self._keep(section.start, y, mass_flow)
        solver = LSODA(balance.slope, section.start, y, section.stop, rtol=self.budget.rtol, atol=tolerance,
                       jac=balance.jacobian)
        while solver.status == "running":
            with warnings.catch_warnings():  # a step that fails says so in its status
                warnings.simplefilter("ignore")
                message = solver.step()
            self._check(solver, K, message)
            self._keep(solver.t, solver.y, mass_flow)
            if solver.y[K] > self.hottest[0] - 2.0:
                self._peak(solver, K)
        self.evaluations += solver.nfev
        return solver.y.copy()

    def _total_tolerance(self, y):
        return np.array([1e-14, 1e-9, 1e-14, 1e-18, 1e-6, 1e-6, 1e-6, 1e-6, 1e-9])

    def _keep(self, z, y, mass_flow):
        self.z.append(z)
        self.y.append(y.copy())
        self.flow.append(mass_flow)

    def _peak(self, solver, K):
        """Look for the hottest point inside the last step, where the dense output bends over."""
        dense = solver.dense_output()
        places = np.linspace(solver.t_old, solver.t, 9)
        temperatures = dense(places)[K]
        top = int(temperatures.argmax())
        self.hottest = max(self.hottest, (float(temperatures[top]), float(places[top])))

    def _check(self, solver, K, message):
        self.steps += 1
        (T, P), first = self.y[-1][[K, K + 2]], self.y[0][K + 2]  # of the last good station
        where = f"at z = {self.z[-1]:.6g} m, T = {T:.1f} K"
        if solver.status == "failed" or not np.all(np.isfinite(solver.y)):
            if 0.5 * first > P:
                raise ConvergenceError(f"friction uses up the pressure {where}, P = {P / 1e5:.3g} bar; take a wider "
                                       "tube or more of them in parallel")
            raise ConvergenceError(f"the tube could not be followed further {where}: {message or 'not finite'}; "
                                   "try a looser solver.rtol or less light")
        if self.steps > self.budget.steps:
            raise ConvergenceError(f"the budget of {self.budget.steps} steps was used up {where}; "
                                   "try a looser solver.rtol")
        if time.monotonic() - self.began > self.budget.seconds:
            raise ConvergenceError(f"the budget of {self.budget.seconds:g} s was used up {where}; raise solver.seconds")

    def path(self):
        """Return all stations as arrays."""
        y, K = np.array(self.y), len(self.y[0]) - 3 - len(TOTALS)
        peak = max(self.hottest, max((row[K], z) for z, row in zip(self.z, self.y, strict=True)))
        return Path(np.array(self.z), y[:, : K + 3], y[:, K + 3 :], np.array(self.flow), self.steps,
                    self.evaluations, peak)
