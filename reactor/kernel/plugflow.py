"""
Non-isothermal plug flow of a photolysed gas in one tube, coolant and pressure included.

Unknowns along the tube: n [mol/kg] of every species, T [K], coolant temperature [K], P [Pa]; beside
them running totals (`TOTALS`) that close the accounts of photons, heat and time. The compiled kernel solves them;
one case or ten thousand at a time give the same digits.
"""

import math
import os
from collections import deque
from concurrent.futures import ThreadPoolExecutor
from itertools import islice
from typing import NamedTuple

import numpy as np

from reactor.errors import ConvergenceError
from reactor.kernel import native
from reactor.kernel.pack import Packed
from reactor.kernel.points import Points

TOTALS = ("photons", "photon_power", "outer_wall", "thermal_starts", "heat_reaction", "to_wall", "lamp_heat",
          "coolant", "time")
ABSOLUTE = 1e-13  # mol/kg; absolute tolerance of the kernel (native/march.h), small and fixed
CHUNK = 256  # cases packed and solved in one call: enough to keep the lanes full, little enough to stream


class Section(NamedTuple):
    """A stretch of tube under one beam; `injected` [mol/s] at `heat` [W] enters at its start."""

    start: float
    stop: float
    beam: object
    sleeve_heat: float
    injected: np.ndarray
    heat: float


class Tube(NamedTuple):
    """
    One tube as plain numbers.

    `conductance` [W/m/K] and `lamp_share` are curves of gas temperature; `coolant` [W/K] is the signed heat
    capacity flow of the coolant (negative: against the gas; inf: constant temperature); `starts` are the
    reactions whose reverse frees two chlorine atoms; `chlorine` the number of the species that absorbs.
    """

    rates: object
    molar_mass: np.ndarray
    wall_loss: float
    chlorine: int
    starts: np.ndarray
    area: float
    diameter: float
    friction: float
    conductance: object
    lamp_share: object
    coolant: float
    sections: tuple


class Budget(NamedTuple):
    """Tolerance and limits of one solve."""

    rtol: float = 1e-7
    steps: int = 20000
    seconds: float = 60.0


class Job(NamedTuple):
    """One tube with the state at its inlet; the arguments of `integrate`."""

    tube: Tube
    n: np.ndarray
    T: float
    Tc: float
    P: float
    mass_flow: float
    budget: Budget = Budget()


class Path(NamedTuple):
    """
    The solution at the stations: z (M,), state (M, K + 3), totals (M, len(TOTALS)), and what it cost.

    `hottest` is (T [K], z [m]) from the dense output; `exhausted` the z [m] where one part in a million of the
    chlorine is left (nan where more leaves the tube).
    """

    z: np.ndarray
    state: np.ndarray
    totals: np.ndarray
    mass_flow: np.ndarray
    steps: int
    evaluations: int
    hottest: tuple
    exhausted: float = math.nan


class Balance:
    """Right-hand side and exact Jacobian of the tube's equations in one section, at y = (n, T, Tc, P)."""

    def __init__(self, tube, section, mass_flow):
        packed = Packed(tube.rates.plan(tube.chlorine, tube.starts))
        still = section._replace(injected=np.zeros(len(tube.molar_mass)), heat=0.0)
        inlet = np.full(len(tube.molar_mass), 1.0)
        packed.tube(tube._replace(sections=(still,)), inlet, 300.0, 300.0, 1e5, mass_flow, Budget())
        self.points = Points(packed)

    def slope(self, y):
        """Return dy/dz, and the totals' slopes behind it."""
        f, totals, _ = self.points.at(y)
        return np.concatenate((f, totals))

    def jacobian(self, y):
        """Return d(dy/dz)/dy."""
        return self.points.at(y, jacobian=True)[2]


def integrate(tube, n, T, Tc, P, mass_flow, budget=Budget(), between=1):
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
    between : int
        Stations read from the dense output within each step.

    Returns
    -------
    Path

    Raises
    ------
    ConvergenceError
        When the budget of steps or seconds is used up, or the step fails; says where.
    """
    path = _solve([Job(tube, n, T, Tc, P, mass_flow, budget)], between + 1, wide=1)[0]
    if isinstance(path, str):
        raise ConvergenceError(path)
    return path


def integrate_many(jobs, between=None, threads=None):
    """
    Return a `Path` for every job, or the reason in words why it was dropped; in the order of the jobs.

    Parameters
    ----------
    jobs : iterable of Job
        Tubes with their inlets.
    between : int, optional
        As in `integrate`; by default only the outlet is kept.
    threads : int, optional
        How many at once; by default one for each processor. [-]
    """
    return list(stream(jobs, between, threads))


def stream(jobs, between=None, threads=None):
    """
    Yield what `integrate_many` returns while the jobs come in, holding only a few chunks of them.

    Parameters
    ----------
    jobs, between, threads
        As in `integrate_many`.
    """
    stations, wide, jobs = 0 if between is None else between + 1, native.lanes(), iter(jobs)
    threads = threads or len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else threads or os.cpu_count()
    with ThreadPoolExecutor(threads) as pool:
        waiting: deque = deque()
        while True:
            while len(waiting) <= threads and (chunk := list(islice(jobs, CHUNK))):
                waiting.append(pool.submit(_solve, chunk, stations, wide))
            if not waiting:
                return
            yield from waiting.popleft().result()


def _solve(jobs, stations, wide):
    """Return the paths of jobs, or reasons; those on one mechanism go to the kernel together."""
    groups: dict = {}
    for number, job in enumerate(jobs):
        plan = job.tube.rates.plan(job.tube.chlorine, job.tube.starts)
        groups.setdefault(id(plan), (plan, []))[1].append(number)
    found = [None] * len(jobs)
    for plan, numbers in groups.values():
        packed = Packed(plan)
        for number in numbers:
            packed.tube(*jobs[number])
        results, counts, rows = native.march(plan, packed, stations, wide)
        for number, result, count, kept in zip(numbers, results.tolist(), counts.tolist(), rows, strict=True):
            status = count[0]
            found[number] = (native.reason(status, result, jobs[number].budget) if status
                             else path_of(plan, result, count, kept))
    return found


def path_of(plan, result, count, rows):
    """Return the `Path` in what the kernel brought back."""
    K = len(plan.species)
    state = np.empty((len(rows), K + 3))
    state[:, plan.species] = np.maximum(rows[:, 2:K + 2], 0.0)
    state[:, K:] = rows[:, K + 4:K + 1:-1]  # the kernel keeps P, Tc, T
    top, place, gone = result[3:6]
    return Path(rows[:, 0].copy(), state, rows[:, K + 5:].copy(), rows[:, 1].copy(), count[1], count[2], (top, place),
                gone if gone >= 0 else math.nan)
