"""Random tubes over a wide range: fuels, chlorine to exhaustion, oxygen, light over six decades, edges, injections."""

from functools import cache

import numpy as np
import reference_kernel.rates

from reactor import chemistry
from reactor.curve import constant, tabulate
from reactor.kernel import plugflow
from reactor.kernel.light import Beam
from reactor.kernel.rates import Rates

GAS = chemistry.mechanism()
RATES = Rates(GAS.tables, GAS.photolysis, GAS.wall)
REFERENCE = reference_kernel.rates.Rates(GAS.tables, GAS.photolysis, GAS.wall)
K, CL2 = len(GAS.species), GAS.index["Cl2"]
SHARE = tabulate(lambda x: -np.expm1(-np.exp(x)) / np.exp(x), np.log(1e-9), np.log(1e5), 3001)
PASSED = tabulate(lambda x: np.exp(-np.exp(x)), np.log(1e-9), np.log(1e5), 3001)
FUELS = ({"CH4": 1.0}, {"C2H6": 1.0}, {"C3H8": 1.0}, {"CH4": 1.0, "C2H6": 0.05, "C3H8": 0.02},
         {"CH4": 1.0, "CH3Cl": 0.5, "CH2Cl2": 0.1})


@cache
def lines(number):
    """Return photon energies [J/mol] and cross-section polynomials of `number` lines between 300 and 440 nm."""
    nm = np.linspace(300.0, 440.0, number) if number > 1 else np.array([365.0])
    T = 550.0 + 350.0 * np.cos(np.pi * (np.arange(40) + 0.5) / 40)
    tanh = np.tanh(402.7 / T)[:, None]
    sigma = np.sqrt(tanh) * (2.73e-23 * np.exp(-99.0 * tanh * np.log(329.5 / nm) ** 2)
                             + 9.32e-25 * np.exp(-91.5 * tanh * np.log(406.5 / nm) ** 2))
    fit = np.polynomial.polynomial.polyfit((T - 550.0) / 350.0, sigma, 9).T
    return 0.119626565582 / (nm * 1e-9), np.ascontiguousarray(fit)


def beam(watts, number=1, path=0.03, area=4e-3, fixed=None, rng=None):
    """Return light of `watts` per metre spread over `number` lines."""
    energy, sigma = lines(number)
    share = np.full(number, 1.0 / number) if rng is None else rng.dirichlet(np.ones(number))
    return Beam(watts * share / energy, energy, sigma, 550.0, 350.0, path, area, SHARE, PASSED, fixed)


def moles(**parts):
    """Return flows [mol/s] on the species of the mechanism."""
    flow = np.zeros(K)
    for species, amount in parts.items():
        flow[GAS.index[species]] = amount
    return flow


def job(seed, rtol=1e-5, rates=RATES):
    """Return one random tube with its inlet as the arguments of `integrate`."""
    rng = np.random.default_rng(seed)
    parts = dict(FUELS[rng.integers(len(FUELS))], Cl2=10 ** rng.uniform(-1.7, 0.0))
    if rng.random() < 0.4:
        parts["O2"] = 10 ** rng.uniform(-6.5, -1.5)
    if rng.random() < 0.3:
        parts["N2"] = 10 ** rng.uniform(-3, 1)
    flow = moles(**parts)
    mass = 0.02 * 10 ** rng.uniform(-3, 0.5)
    n, area, length = flow / (flow @ GAS.molar_mass), rng.choice([4e-3, 2e-2]), 10 ** rng.uniform(-0.5, 1)
    lit = beam(10 ** rng.uniform(-4, 3.3), rng.choice([1, 6]), 0.03, area, rng=rng)
    conductance, coolant = constant(rng.choice([0.0, 1.0, 10.0])), rng.choice([np.inf, 50.0, -200.0])
    T = rng.uniform(290, 480) if rng.random() < 0.8 else rng.uniform(480, 750)
    sections = _sections(rng, lit, mass, length)
    tube = plugflow.Tube(rates, GAS.molar_mass, 10 ** rng.uniform(-3, 2), CL2, GAS.start, area, 0.05, 0.03,
                         conductance, constant(0.7), coolant, sections)
    return plugflow.Job(tube, n, T, rng.uniform(285, 340), 10 ** rng.uniform(4.8, 5.7), mass,
                        plugflow.Budget(rtol=rtol))


def _sections(rng, lit, mass, length):
    none, dark = np.zeros(K), lit._replace(entering=np.zeros(len(lit.entering)))
    heat = rng.choice([0.0, 50.0])
    kind = rng.integers(4)
    if kind == 0:
        return (plugflow.Section(0.0, length, lit, heat, none, 0.0),)
    if kind == 1:
        edges = (0.0, 0.3 * length, 0.7 * length, length)
        return tuple(plugflow.Section(a, b, light, h, none, 0.0)
                     for a, b, light, h in zip(edges, edges[1:], (dark, lit, dark), (0.0, heat, 0.0), strict=False))
    if kind == 2:
        slug = moles(O2=1.0) * mass * 10 ** rng.uniform(-4, -1) if rng.random() < 0.4 else moles(Cl2=2.0 * mass)
        with_it = float(slug @ RATES.thermo.at(300.0)[2])
        return (plugflow.Section(0.0, 0.4 * length, lit, heat, none, 0.0),
                plugflow.Section(0.4 * length, length, lit, heat, slug, with_it))
    return (plugflow.Section(0.0, length, dark._replace(fixed=10 ** rng.uniform(-6, -1.5)), 0.0, none, 0.0),)
