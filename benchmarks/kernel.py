"""
The compiled kernel: one tube against Cantera and against SciPy's LSODA, ten thousand tubes, three sizes of mechanism.

Every figure is timed turn by turn with its reference in one run, and printed only where the two agree.
"""

import os
import sys
import time
from concurrent.futures import ProcessPoolExecutor
from dataclasses import replace
from multiprocessing import get_context
from pathlib import Path

import cantera as ct
import numpy as np

from benchmarks.interleave import interleave
from reactor import chemistry
from reactor.curve import constant, tabulate
from reactor.kernel import plugflow
from reactor.kernel.light import Beam, absorb
from reactor.kernel.rates import Rates

sys.path.insert(0, str(Path(__file__).parent.parent / "tests"))  # the slow solver that the tests compare with

RTOL = 1e-5
GATES = (1e-4, 1e-4)  # agreement that a ratio needs: chlorine conversion, outlet temperature, relative
SWEEP, SAMPLE = 10_000, 24
PHOTON, AREA, PATH, LENGTH = 0.119626565582 / 365e-9, 1.5e-2, 0.047, 1.2
GAS = chemistry.mechanism()
RATES = Rates(GAS.tables, GAS.photolysis, GAS.wall)
CL2 = GAS.index["Cl2"]


def beam(watts):
    """Return light at 365 nm through a slab, `watts` [W/m] into the gas."""
    share = tabulate(lambda x: -np.expm1(-np.exp(x)) / np.exp(x), np.log(1e-9), np.log(1e5), 3001)
    passed = tabulate(lambda x: np.exp(-np.exp(x)), np.log(1e-9), np.log(1e5), 3001)
    sigma = np.array([[1.02e-23, 1.0e-24, -1.5e-25]])
    return Beam(np.array([watts / PHOTON]), np.array([PHOTON]), sigma, 550.0, 350.0, PATH, AREA, share, passed)


LIGHT = beam(1.0)


def job(parts, watts, T=323.0, P=1.5e5, mass_flow=0.023, wall_loss=0.1, rates=RATES, gas=GAS):
    """Return an adiabatic lit tube without friction, with its inlet."""
    flow = np.zeros(len(gas.species))
    for species, amount in parts.items():
        flow[gas.index[species]] = amount
    lit = LIGHT._replace(entering=np.array([watts / PHOTON]))
    section = plugflow.Section(0.0, LENGTH, lit, 0.0, np.zeros(len(flow)), 0.0)
    tube = plugflow.Tube(rates, gas.molar_mass, wall_loss, gas.index["Cl2"], gas.start, AREA, 0.09, 0.0, constant(0.0),
                         constant(1.0), np.inf, (section,))
    return plugflow.Job(tube, flow / (flow @ gas.molar_mass), T, 300.0, P, mass_flow, plugflow.Budget(rtol=RTOL))


def random_job(number):
    """Return one of the sweep's tubes: feed, light, temperature, pressure, flow and wall drawn at random."""
    rng = np.random.default_rng(number)
    parts = {"CH4": 1.0, "Cl2": 10 ** rng.uniform(-1.3, -0.4), "N2": rng.uniform(0, 0.1)}
    if rng.random() < 0.3:
        parts["C2H6"] = rng.uniform(0, 0.05)
    if rng.random() < 0.3:
        parts["O2"] = 10 ** rng.uniform(-6, -3)
    return job(parts, 10 ** rng.uniform(0, 3), rng.uniform(290, 380), 10 ** rng.uniform(4.9, 5.5),
               10 ** rng.uniform(-2.3, -1.3), 10 ** rng.uniform(-2, 1))


class Lit(ct.ExtensibleIdealGasConstPressureMoleReactor):
    """Cantera's slug of gas, lit: J and photon power from the gas as it is, in every evaluation."""

    def prepare(self, lit):
        """Take the light of the tube."""
        self.lit, self.chlorine = lit, self.phase.species_index("Cl2")

    def after_eval_walls(self, t):
        """Set J and the heat of the photons."""
        gas = self.phase
        light = absorb(self.lit, 1e3 * gas.concentrations[self.chlorine], gas.T)
        gas.set_multiplier(light.J, GAS.photolysis)
        self.heat_rate = light.power / self.lit.area * self.volume


def by_cantera(one, residence, gas=None):
    """Return chlorine conversion and outlet temperature after a residence time [s]."""
    gas = gas or ct.Solution(str(GAS.path), "gas-lit", transport_model=None)
    gas.set_multiplier(one.tube.wall_loss, GAS.wall)
    gas.TPX = one.T, one.P, dict(zip(GAS.species, one.n, strict=True))
    before = gas["Cl2"].Y[0]
    slug = Lit(gas, clone=False)
    slug.prepare(one.tube.sections[0].beam)
    net = ct.ReactorNet([slug])
    net.rtol, net.atol = RTOL, 1e-15
    net.advance(residence)
    return 1 - gas["Cl2"].Y[0] / before, gas.T


def read(one, path):
    """Return the same two figures of a path of ours, and its residence time."""
    K = len(one.n)
    residence = float(path.totals[-1, plugflow.TOTALS.index("time")])
    return (1 - path.state[-1, CL2] / one.n[CL2], path.state[-1, K]), residence


def gaps(ours, theirs):
    """Return relative gaps in conversion and temperature, and whether they pass the gates."""
    found = [abs(a / b - 1) for a, b in zip(ours, theirs, strict=True)]
    return found, all(gap <= gate for gap, gate in zip(found, GATES, strict=True))


def _lines(name, times, found, good):
    ours, theirs = times
    yield f"# {name}: ours {1e3 * ours:.3f} ms, reference {1e3 * theirs:.1f} ms, gaps {found[0]:.1e} {found[1]:.1e}"
    yield f"ratio {name} {theirs / ours:.2f}" if good else f"# {name}: the two disagree: no ratio"


def single():
    """Yield the lines of one warm tube against Cantera."""
    one = job({"CH4": 8.0, "Cl2": 1.0}, 180.0)
    _, residence = read(one, plugflow.integrate(*one))
    gas = ct.Solution(str(GAS.path), "gas-lit", transport_model=None)
    times, (path, theirs) = interleave(lambda: plugflow.integrate(*one), lambda: by_cantera(one, residence, gas))
    yield from _lines("single", times, *gaps(read(one, path)[0], theirs))


def single_lsoda():
    """Yield the lines of one warm tube against LSODA with numpy rates and the exact Jacobian."""
    from reference_kernel import plugflow as slow
    from reference_kernel.rates import Rates as SlowRates

    one = job({"CH4": 8.0, "Cl2": 1.0}, 180.0)
    tube = one.tube._replace(rates=SlowRates(GAS.tables, GAS.photolysis, GAS.wall))
    times, (path, other) = interleave(lambda: plugflow.integrate(*one), lambda: slow.integrate(tube, *one[1:]))
    yield from _lines("single_lsoda", times, *gaps(read(one, path)[0], read(one, other)[0]))


def _sampled(number_and_residence):
    number, residence = number_and_residence
    return by_cantera(random_job(number), residence)


def sweep():
    """Yield the lines of ten thousand random tubes on all processors against Cantera on as many processes."""
    processors = len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count()
    jobs = [random_job(number) for number in range(SWEEP)]
    plugflow.integrate_many(jobs[:200])
    began = time.perf_counter()
    paths = plugflow.integrate_many(jobs)
    ours = time.perf_counter() - began
    lost = sum(isinstance(path, str) for path in paths)
    sample = [(number, read(jobs[number], paths[number])[1]) for number in range(0, SWEEP, SWEEP // SAMPLE)]
    with ProcessPoolExecutor(processors, mp_context=get_context("spawn")) as pool:
        list(pool.map(_sampled, sample[:processors]))
        began = time.perf_counter()
        theirs = list(pool.map(_sampled, sample))
        one_of_theirs = (time.perf_counter() - began) / len(sample)
    began = time.perf_counter()
    plugflow.integrate_many(jobs[:SWEEP // 2])  # again, on the other side of the reference
    ours = 0.5 * ours + (time.perf_counter() - began)
    worst = [max(pair) for pair in zip(*(gaps(read(jobs[number], paths[number])[0], other)[0]
                                         for (number, _), other in zip(sample, theirs, strict=True)), strict=True)]
    yield f"# sweep: {SWEEP} tubes in {ours:.1f} s on {processors} processors, {lost} dropped"
    good = lost == 0 and all(gap <= gate for gap, gate in zip(worst, GATES, strict=True))
    yield from _lines("sweep", (ours / SWEEP, one_of_theirs), worst, good)


def _sized(count):
    """Return a mechanism of about `count` species: a part of the project's, or it with its hydrocarbons doubled."""
    small = {"CH4", "CH3", "CH3Cl", "CH2Cl", "CH2Cl2", "CHCl2", "CHCl3", "CCl3", "CCl4", "C2H6", "C2Cl6", "Cl", "Cl2",
             "HCl", "1,2-C2H4Cl2", "1,1,2,2-C2H2Cl4", "N2", "Ar", "CO2", "O2"}
    shared = [GAS.index[s] for s in ("Cl", "Cl2", "HCl", "O2", "N2", "Ar", "CO2", "ClOO") if s in GAS.index]
    t, K = GAS.tables, len(GAS.species)
    if count < K:
        keep = [i for i, s in enumerate(GAS.species) if s in small] if count < 25 else list(range(K))
        twins = None
    else:
        keep, twins = list(range(K)), [i for i in range(K) if i not in shared]
    outside = np.ones(K, bool)
    outside[keep] = False
    inside = ~((t.reactants + t.products)[:, outside].any(axis=1))
    columns = keep + (twins or [])
    rows = np.flatnonzero(inside)
    first = {"reactants": t.reactants[rows][:, columns].copy(), "products": t.products[rows][:, columns].copy()}
    double = np.zeros(0, int)
    if twins:
        for side in first.values():
            side[:, K:] = 0.0
        double = np.flatnonzero((t.reactants + t.products)[:, twins].any(axis=1))
        for name, side in first.items():
            more = getattr(t, name)[double][:, columns].copy()
            more[:, twins] = 0.0
            first[name] = np.vstack((side, more))
    both = np.concatenate((rows, double))
    names = ("A", "b", "E", "reversible", "third_body", "falloff", "low_A", "low_b", "low_E", "troe")
    per_reaction = {name: getattr(t, name)[both] for name in names}
    per_species = {name: getattr(t, name)[columns] for name in ("nasa_low", "nasa_high", "t_mid", "t_low", "t_high")}
    tables = replace(t, **first, **per_reaction, **per_species, efficiencies=t.efficiencies[both][:, columns])
    names = [GAS.species[i] for i in keep] + [GAS.species[i] + "'" for i in twins or []]
    found = {old: new for new, old in enumerate(rows)}
    gas = replace(GAS, species=tuple(names), index={s: i for i, s in enumerate(names)},
                  molar_mass=GAS.molar_mass[columns], tables=tables,
                  start=np.array([found[r] for r in GAS.start if r in found]))
    return gas, Rates(tables, found[GAS.photolysis], found[GAS.wall])


def size_scaling():
    """Yield the exponent of time in the number of species, from the least of several turns at each size."""
    sizes, runs = [_sized(count) for count in (20, 50, 100)], []
    for gas, rates in sizes:
        twin = {"CH4'": 8.0} if "CH4'" in gas.index else {}
        parts = [{"CH4": 8.0, "Cl2": x} | twin for x in np.linspace(0.5, 1.5, 64)]
        runs.append([job(part, 180.0, rates=rates, gas=gas) for part in parts])
    best, steps = [np.inf] * 3, [0.0] * 3
    for _ in range(7):
        for number, jobs in enumerate(runs):
            began = time.perf_counter()
            paths = plugflow.integrate_many(jobs, threads=1)
            best[number] = min(best[number], (time.perf_counter() - began) / len(jobs))
            steps[number] = float(np.mean([path.steps for path in paths]))
    counts = [len(gas.species) for gas, _ in sizes]
    exponent = np.polyfit(np.log(counts), np.log(best), 1)[0]
    for count, seconds, taken in zip(counts, best, steps, strict=True):
        yield f"# size_scaling: {count} species, {1e3 * seconds:.3f} ms a tube, {taken:.0f} steps"
    yield f"ratio size_scaling {exponent:.2f}"
