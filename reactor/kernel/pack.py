"""Packs tubes and tanks as the flat arrays of the kernel; what many cases share is stored once."""

import weakref
from typing import NamedTuple

import numpy as np

from reactor.kernel.native import Batch, address

_tables: dict = {}  # packed curves by the arrays they came from, as long as those live


def table(curve):
    """Return a `Curve` as the kernel reads it: start, step, points, then value and step * slope in turn."""
    key = id(curve.value), id(curve.slope), curve.start, curve.step
    value, slope, packed = _tables.get(key, (None, None, None))
    if packed is None or value() is not curve.value or slope() is not curve.slope:
        size = len(curve.value)
        packed = np.empty(2 * size + 3)
        packed[:3] = curve.start, curve.step, size
        packed[3::2], packed[4::2] = curve.value, np.asarray(curve.slope) * curve.step
        _tables[key] = weakref.ref(curve.value), weakref.ref(curve.slope), packed
        weakref.finalize(curve.value, _tables.pop, key, None)
    return packed


class _Whole(NamedTuple):
    """A tank's time as one section, in the words of a tube's."""

    start: float
    stop: float
    beam: object
    sleeve_heat: float
    injected: object = None
    heat: float = 0.0


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
        self.parts, self.size, self.known, self.alive, self.tables = [], 0, {}, [], []
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

    def as_is(self, array):
        """Return where the numbers of an array start."""
        return self.once(array, lambda: array)

    def curve(self, curve):
        """Return the number of a `Curve` among the tables."""
        packed = table(curve)
        key = -id(packed)
        if key not in self.known:
            self.known[key] = len(self.tables)
            self.tables.append(packed.ctypes.data)
            self.alive.append((packed, curve))
        return self.known[key]

    def section(self, section, molar_mass):
        """Add one stretch of constant light."""
        beam, injected = section.beam, section.injected
        lit, fixed, injects = bool(np.any(beam.entering)), beam.fixed is not None, bool(np.any(injected))
        lines, degree = len(beam.entering) if lit else 0, beam.sigma.shape[1] - 1
        self.lines, self.degree = max(self.lines, lines), max(self.degree, degree)
        self.sections.append((
            section.start, section.stop, section.sleeve_heat, section.heat,
            float(injected @ molar_mass) if injects else 0.0, beam.path, beam.area, beam.middle, beam.half,
            beam.fixed if fixed else 0.0, float(np.mean(beam.energy))))
        self.section_links.append((
            lines, degree, *map(self.as_is, (beam.entering, beam.energy, beam.sigma)),
            self.curve(beam.absorbed), self.curve(beam.transmitted), self.curve(beam.even or ONE),
            self.curve(beam.along or ONE), int(beam.along is not None), int(fixed),
            self.put(injected[self.plan.species]) if injects else -1))

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
        self.section(_Whole(0.0, duration, tank.beam, tank.sleeve_heat), tank.molar_mass)
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
            self.arrays = (np.array(self.cases, float), np.array(self.sections, float), np.concatenate(self.parts),
                           np.array(self.tables, np.uint64), np.array(self.links, np.int64),
                           np.array(self.section_links, np.int64))
        return Batch(self.count, int(self.tank), self.lines, self.degree, stations,
                     *map(address, (*self.arrays, results, counts, paths)))
