"""
Random mechanisms, states and tubes: nothing may crash, hang or go unanswered; rates are those of plain numpy.

`python tests/fuzz_kernel.py SECONDS SEED` runs it alone, for instance under the sanitizers.
"""

import sys
import time
from types import SimpleNamespace

import numpy as np
import reference_kernel.rates

from reactor.curve import Curve, constant
from reactor.errors import ConvergenceError
from reactor.kernel import plugflow, tank
from reactor.kernel.light import Beam
from reactor.kernel.rates import Rates

LINDEMANN = (1.0, 1e-30, 1e30, 1e30)


def mechanism(rng):
    """Return random tables of up to thirty species; 0 is photolysis of species 0, 1 the loss of species 1."""
    species, count = int(rng.integers(3, 30)), int(rng.integers(2, 60))
    t = SimpleNamespace(reactants=np.zeros((count, species)), products=np.zeros((count, species)))
    for r in range(count):
        for side in (t.reactants, t.products):
            np.add.at(side[r], rng.integers(0, species, rng.integers(1, 4)), 1.0)
    t.reactants[:2], t.products[:2] = 0.0, 0.0
    t.reactants[0, 0] = t.reactants[1, 1] = 1.0
    t.products[0, 1], t.products[1, 2] = 2.0, 0.5
    own = np.arange(count) < 2
    t.reversible = (rng.random(count) < 0.4) & ~own
    t.falloff = (rng.random(count) < 0.15) & ~own
    t.third_body = ((rng.random(count) < 0.2) & ~own) | t.falloff
    t.efficiencies = np.where(t.third_body[:, None], rng.choice([1.0, 1.0, 1.0, 0.0, 2.5], (count, species)), 0.0)
    t.A, t.b = 10 ** rng.uniform(-2, 8, count), rng.choice([0.0, -1.3, 2.0], count)
    t.E = rng.choice([0.0, 1e3, 1e4], count)
    t.low_A, t.low_b, t.low_E = 10 ** rng.uniform(-2, 6, count), rng.uniform(-4, 0, count), rng.uniform(0, 2e3, count)
    t.troe = np.where(rng.random((count, 1)) < 0.5, LINDEMANN, (rng.uniform(0.1, 0.9), 100.0, 1500.0, 1e30))
    t.nasa_low, t.t_mid = np.zeros((species, 9)), rng.uniform(800, 1200, species)
    t.nasa_low[:, 0], t.nasa_low[:, 1] = rng.uniform(2, 8, species), rng.uniform(0, 5e-3, species)
    t.nasa_low[:, 5], t.nasa_low[:, 6] = rng.uniform(-2e4, 1e4, species), rng.uniform(0, 20, species)
    t.nasa_low[:, 7:] = (rng.random() < 0.5) * rng.normal(size=(species, 2)) * [2e3, 30.0]
    t.nasa_high, t.reference_pressure = t.nasa_low.copy(), 101325.0
    return t


def tube_of(rng, rates, species):
    """Return a random tube of one or two stretches with its inlet."""
    curve = Curve(-20.0, 0.5, np.linspace(1.0, 0.0, 80) ** 2, np.gradient(np.linspace(1.0, 0.0, 80) ** 2, 0.5))
    lines = int(rng.integers(1, 5))
    sigma = np.abs(rng.normal(1e-23, 5e-24, (lines, 3))) * np.array([1.0, 1e-2, 1e-3])
    lit = Beam(10 ** rng.uniform(-12, 0, lines), np.full(lines, 3.3e5), sigma, 550.0, 350.0, 0.02, 5e-3, curve, curve,
               rng.choice([None, 1e-2]))
    sections = [plugflow.Section(0.0, 1.0, lit, 10.0, np.zeros(species), 0.0)]
    if rng.random() < 0.5:
        sections.append(plugflow.Section(1.0, 1.5, lit, 0.0, rng.random(species) * 1e-3, rng.uniform(-50, 50)))
    n = rng.dirichlet(np.full(species, 0.3)) * 30.0 * (rng.random(species) < 0.8) + 1e-3
    starts = np.flatnonzero(rates.tables.reversible)[:2]
    tube = plugflow.Tube(rates, np.full(species, 0.03), rng.uniform(0, 10), 0, starts, 5e-3, 0.05, 0.03,
                         constant(rng.uniform(0, 5)), constant(0.5), rng.choice([np.inf, 10.0, -10.0]), tuple(sections))
    budget = plugflow.Budget(rtol=10 ** rng.uniform(-8, -2), steps=int(rng.integers(1, 3000)), seconds=0.5)
    P, mass_flow = 10 ** rng.uniform(4, 6), 10 ** rng.uniform(-5, -1)
    return plugflow.Job(tube, n, rng.uniform(200, 1500), 300.0, P, mass_flow, budget)


def tank_of(rng, one):
    """Return a random stirred tank on the light and cooling of a tube."""
    t = one.tube
    feed = one.n * one.mass_flow
    return tank.Tank(t.rates, t.molar_mass, t.wall_loss, 0, t.starts, 10 ** rng.uniform(-4, -1), 0.5, one.P, feed,
                     float(feed @ t.rates.thermo.at(one.T)[2]), t.sections[0].beam, 5.0, t.conductance, t.lamp_share,
                     abs(t.coolant), 300.0)


def check_rates(rng, tables, rates, species):
    """Compare rates and derivatives at one state with plain numpy."""
    other = reference_kernel.rates.Rates(tables, 0, 1)
    T, c = rng.uniform(250, 1800), rng.dirichlet(np.full(species, 0.3)) * 50.0 * (rng.random(species) < 0.9)
    ours, theirs = rates.derivatives(c, T, 1e-3, 0.3), other.derivatives(c, T, 1e-3, 0.3)
    forward, reverse = other.both(c, T, 1e-3, 0.3)
    gross = max(float((forward + reverse) @ np.abs(rates.net).max(axis=1)), 1e-300)
    if not np.isfinite(gross):
        return
    assert np.abs(ours[0] - theirs[0]).max() <= 1e-10 * gross
    for a, b, tolerance in zip(ours[1:4], theirs[1:4], (1e-9, 1e-6, 1e-10), strict=True):
        assert np.abs(a - b).max() <= tolerance * max(np.abs(b).max(), gross / max(c.max(), 1.0), gross / T)


def check_tank(still, one):
    """Follow a tank and bring it to rest: finite numbers, or a reason."""
    balance, temperatures = tank.Balance(still, one.budget), np.linspace(300, 900, 5)
    for solve, arguments in ((tank.follow, (still, one.n, one.T, 1.0, one.budget)),
                             (balance.at_rest, (temperatures, one.n))):
        try:
            found = solve(*arguments)
        except ConvergenceError:
            continue
        assert all(np.all(np.isfinite(part)) for part in found)


def fuzz(seed, seconds):
    """Try random mechanisms and cases for a time; return how many."""
    rng, began, tried = np.random.default_rng(seed), time.monotonic(), 0
    while time.monotonic() - began < seconds:
        tables = mechanism(rng)
        species = tables.reactants.shape[1]
        rates = Rates(tables, 0, 1)
        check_rates(rng, tables, rates, species)
        jobs = [tube_of(rng, rates, species) for _ in range(9)]
        for found in plugflow.integrate_many(jobs, between=int(rng.integers(0, 4)), threads=2):
            assert isinstance(found, str) or np.all(np.isfinite(found.state))
            assert not isinstance(found, str) or len(found) > 20
        check_tank(tank_of(rng, jobs[0]), jobs[0])
        tried += 1
    return tried


if __name__ == "__main__":
    sys.stdout.write(f"{fuzz(int(sys.argv[2]), float(sys.argv[1]))} mechanisms tried\n")
