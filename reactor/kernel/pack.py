"""Packs tubes and tanks as the flat arrays of the kernel; what many cases share is stored once."""

from typing import NamedTuple

import numpy as np

from reactor.kernel.native import Batch, address

class Flat(NamedTuple):
    """A curve that is one number everywhere."""

    start: float
    step: float
    value: np.ndarray
    slope: np.ndarray


ONE = Flat(0.0, 1.0, np.ones(2), np.zeros(2))  # light that is even along the section, radicals in one mixed pool


class Packed:
    """
    A batch of cases on one mechanism; the order of every tuple is that of native/batch.h.

    Parameters
    ----------
    plan : Plan
        The mechanism they share.
    tank : bool
        Whether the cases are stirred tanks.
    """

    def __init__(self, plan, tank=False):
        self.plan, self.tank = plan, tank
        self.cases, self.links, self.sections, self.section_links = [], [], [], []
        self.parts, self.size, self.known, self.alive = [], 0, {}, []
        self.lines = self.degree = 1
        self.arrays = None

    @property
    def count(self):
        """Return the number of cases."""
        return len(self.cases)

    def put(self, array):
        """Append numbers to the pool and return where they start."""
        array = np.asarray(array, float).ravel()
        place, self.size = self.size, self.size + array.size
        self.parts.append(array)
        return place

    def once(self, owner, make):
        """Return where the numbers of `owner` start, which are made when it is met first."""
        key = id(owner)
        if key not in self.known:
            self.known[key] = self.put(make())
            self.alive.append(owner)
        return self.known[key]

    def curve(self, curve):
        """Return where a `Curve` starts: start, step, points, then value and step * slope in turn."""
        return self.once(curve.value, lambda: np.concatenate((
            (curve.start, curve.step, len(curve.value)),
            np.column_stack((curve.value, np.asarray(curve.slope) * curve.step)).ravel())))

    def section(self, stretch, molar_mass):
        """Add one stretch of tube under one beam."""
        start, stop, beam, sleeve_heat, injected, heat = stretch
        entering = np.asarray(beam.entering, float)
        lines, degree = len(entering) if entering.any() else 0, beam.sigma.shape[1] - 1
        fixed = beam.fixed is not None
        injects = bool(injected is not None and injected.any())
        self.lines, self.degree = max(self.lines, lines), max(self.degree, degree)
        self.sections.append((start, stop, sleeve_heat, heat, float(injected @ molar_mass) if injects else 0.0, beam.path,
                              beam.area, beam.middle, beam.half, beam.fixed if fixed else 0.0, float(beam.energy.mean())))
        self.section_links.append((
            lines, degree, self.once(beam.entering, lambda: beam.entering), self.once(beam.energy, lambda: beam.energy),
            self.once(beam.sigma, lambda: beam.sigma), self.curve(beam.absorbed), self.curve(beam.transmitted),
            self.curve(beam.even or ONE), self.curve(beam.along or ONE), int(beam.along is not None), int(fixed), self.put(injected[self.plan.species]) if injects else -1))

    def _rates(self, rates):
        return (self.once(rates, lambda: rates.tables.A[self.plan.reactions]),
                self.once(rates.tables, lambda: rates.tables.low_A[self.plan.falloffs]))

    def tube(self, tube, n, T, Tc, P, mass_flow, budget):
        """Add a tube with the state at its inlet."""
        first = len(self.sections)
        for section in tube.sections:
            self.section(section, tube.molar_mass)
        drag = tube.friction / (2 * tube.diameter * tube.area**2)
        self.cases.append((tube.wall_loss, tube.area, drag, 1.0 / tube.coolant, mass_flow, T, Tc, P, budget.rtol,
                           budget.seconds, 0.0, 0.0, 0.0, 0.0))
        inlet = self.put(np.asarray(n, float)[self.plan.species])
        self.links.append((first, len(tube.sections), inlet, inlet, *self._rates(tube.rates),
                           self.curve(tube.conductance), self.curve(tube.lamp_share), budget.steps))

    def tank_case(self, tank, n, T, duration, budget):
        """Add a stirred tank with its state at the start."""
        first = len(self.sections)
        self.section((0.0, duration, tank.beam, tank.sleeve_heat, None, 0.0), tank.molar_mass)
        flow, finite = float(tank.feed @ tank.molar_mass), bool(np.isfinite(tank.coolant))
        self.cases.append((tank.wall_loss, tank.volume, 0.0, 1.0 / tank.coolant, flow, T, tank.coolant_inlet,
                           tank.pressure, budget.rtol, budget.seconds, tank.length, tank.feed_heat,
                           tank.coolant if finite else 0.0, float(finite)))
        start = self.put(np.asarray(n, float)[self.plan.species])
        feed = self.put((tank.feed / flow)[self.plan.species])
        self.links.append((first, 1, start, feed, *self._rates(tank.rates), self.curve(tank.conductance),
                           self.curve(tank.lamp_share), budget.steps))

    def batch(self, stations, results, counts, paths):
        """Return the record for the kernel; the arrays it points to live as long as this object."""
        if self.arrays is None:
            self.arrays = (np.array(self.cases, float), np.array(self.sections, float),
                           np.concatenate(self.parts), np.array(self.links, np.int64),
                           np.array(self.section_links, np.int64))
        cases, sections, pool, links, section_links = self.arrays
        return Batch(self.count, int(self.tank), self.lines, self.degree, stations, address(cases), address(sections),
                     address(pool), address(links), address(section_links), address(results), address(counts),
                     address(paths))
