"""
A tube in an upset, gas element by gas element.

In plug flow an element of gas meets no other: it enters with the feed of that moment and then only sees the
light, the wall and the pressure of the places it passes. A step at time zero makes two kinds of gas:

- new gas, which enters later: all of it follows the steady profile of the changed tube, so that an element
  that entered at t0 is, at time t, where that profile says after t - t0 seconds;
- old gas, which was inside: each element goes on from its own state under the new conditions.

Both are computed with the plug-flow kernel, which follows an element in place; its running time gives the
clock. What it takes for granted: no mixing along the tube, no heat capacity of the wall (errs to the fast
side), pressure as in the steady tube. Old gas is pushed by all gas behind it: its place follows from the
volume of that gas. Light edges and injectors inside the tube are met by old gas at the place it would have at
constant mass flow, which is exact while its density does not jump.
"""

from typing import NamedTuple

import numpy as np

from reactor.kernel.plugflow import Budget, integrate
from reactor.models.plug_flow import tube_of

R = 8.31446261815324
ELEMENTS = 12
LOOSE = Budget(rtol=1e-5)
BEYOND = 0.8  # of the length, by which old gas is followed further: it may be pushed out later than it thinks


class Track(NamedTuple):
    """
    One element of gas: its clock [s], moles per kilogram (M, K), temperature [K], pressure [Pa], mass [kg].

    The clock starts when the upset does (old gas) or when the element enters (new gas). `leaves` is its
    reading at the outlet; `growth` its mass over that at the start, since injectors add to it.
    """

    clock: np.ndarray
    n: np.ndarray
    T: np.ndarray
    P: np.ndarray
    mass: float
    leaves: float
    growth: np.ndarray

    def volume(self, t):
        """Return the volume of the element at readings of the clock [m^3]."""
        return self.mass * np.interp(t, self.clock, self.specific())

    def specific(self):
        """Return the volume along the clock by mass at its start [m^3/kg]."""
        return self.growth * R * self.T * self.n.sum(axis=1) / self.P

    def moles(self, t):
        """Return moles by mass at the start of the clock, at one of its readings [mol/kg]."""
        return np.interp(t, self.clock, self.growth) * self.at(t)

    def at(self, t):
        """Return moles per kilogram at a reading of the clock."""
        place = np.interp(t, self.clock, np.arange(len(self.clock)))
        low = int(min(place, len(self.clock) - 2)) if len(self.clock) > 1 else 0
        if len(self.clock) == 1:
            return self.n[0]
        return self.n[low] + (place - low) * (self.n[low + 1] - self.n[low])

    def inside(self):
        """Tell which points of the clock lie before the outlet."""
        return self.clock <= self.leaves + 1e-9


class Transient(NamedTuple):
    """
    One tube after a step at time zero.

    `old` elements from the inlet on, the `new` gas, the flow [kg/s] into one tube, the number of tubes.
    """

    old: tuple
    new: Track
    flow: float
    tubes: int

    def first(self, limit):
        """Return when some gas first reaches a temperature [s], None if none does."""
        found = [first_above(track.clock, track.T, limit, track.inside()) for track in (*self.old, self.new)]
        return min((t for t in found if t is not None), default=None)

    def gas(self):
        """Return temperatures, pressures and moles per kilogram of all gas on its way."""
        tracks = [(track, track.inside()) for track in (*self.old, self.new)]
        return tuple(np.concatenate([getattr(t, part)[inside] for t, inside in tracks]) for part in ("T", "P", "n"))

    def outflow(self):
        """Return the flow of every species out of all tubes once the old gas has gone [mol/s]."""
        return self.tubes * self.flow * self.new.moles(self.new.leaves)

    @property
    def settled(self):
        """Return the time after which nothing changes any more [s]."""
        return max(self.new.leaves, max((e.leaves for e in self.old), default=0.0))

    def peak(self):
        """Return the hottest gas and when it occurs (K, s)."""
        tops = [
            (float(t.T[t.inside()].max()), float(t.clock[t.inside()][t.T[t.inside()].argmax()]))
            for t in (*self.old, self.new)
        ]
        return max(tops)

    def held(self, t):
        """Return the moles of every species inside all tubes at a time [mol]."""
        total = sum((e.mass * e.moles(t) for e in self.old if e.leaves > t), np.zeros(self.new.n.shape[1]))
        age = np.append(self.new.clock[self.new.clock < t], min(t, self.new.leaves))
        inside = len(age) - 1
        grown = self.new.growth[:inside, None] * self.new.n[:inside]
        states = np.vstack([grown, self.new.moles(age[-1])])
        return self.tubes * (total + self.flow * np.trapezoid(states, age, axis=0))

    def released(self, t):
        """Return the moles of every species that have left all tubes by a time [mol]."""
        total = sum((e.mass * e.moles(e.leaves) for e in self.old if e.leaves <= t), np.zeros(self.new.n.shape[1]))
        more = max(0.0, t - self.new.leaves) * self.flow * self.new.moles(self.new.leaves)
        return self.tubes * (total + more)


def first_above(clock, T, limit, inside=True):
    """Return the reading of the clock at which a temperature is reached, None if it is not."""
    hot = (limit <= T) & inside
    if not hot.any():
        return None
    i = int(np.argmax(hot))
    if i == 0:
        return float(clock[0])
    share = (limit - T[i - 1]) / (T[i] - T[i - 1])
    return float(clock[i - 1] + share * (clock[i] - clock[i - 1]))


def new_gas(profile, gas):
    """Return the track of the gas that enters a steady tube."""
    mass = profile.moles @ gas.molar_mass
    clock, n = profile.totals["time"], profile.moles / mass[:, None]
    return Track(clock, n, profile.temperature, profile.pressure, 0.0, float(clock[-1]), mass / mass[0])


def old_gas(profile, gas, tubes, number=ELEMENTS):
    """Return (station, mass) of elements that make up the gas in one tube, the first nearest the inlet."""
    clock = profile.totals["time"]
    flow = profile.moles @ gas.molar_mass / tubes
    edges = np.linspace(0.0, clock[-1], number + 1)
    middle = (edges[1:] + edges[:-1]) / 2
    return [(float(m), float(np.interp(m, clock, flow)) * (edges[1] - edges[0])) for m in middle]


def undisturbed(profile, gas, tubes):
    """Return old gas that goes on as if nothing had happened: the step changed only what enters."""
    whole, found = new_gas(profile, gas), []
    for age, mass in old_gas(profile, gas, tubes):
        later = np.append(age, whole.clock[whole.clock > age]) - age
        n = np.array([whole.at(age + t) for t in later])
        columns = (whole.T, whole.P, whole.growth)
        T, P, growth = (np.interp(later + age, whole.clock, column) for column in columns)
        found.append(Track(later, n, T, P, mass, float(whole.clock[-1] - age), growth / growth[0]))
    return found


def disturbed(case, plant, before, gas):
    """
    Return old gas under new light, wall or pressure, followed from where it is.

    Parameters
    ----------
    case, plant : Case, Plant
        The changed tube. [-]
    before : Profile
        The steady tube before; its dark profile where a lamp comes back on. [-]
    gas : Mechanism
        Chemistry. [-]
    """
    tube, tubes, K = tube_of(case, plant), case.vessel.parallel, len(gas.species)
    clock, mass = before.totals["time"], before.moles @ gas.molar_mass
    found = []
    for age, amount in old_gas(before, gas, tubes):
        z, T, Tc = (float(np.interp(age, clock, c)) for c in (before.z, before.temperature, before.coolant))
        n = np.array([np.interp(age, clock, before.moles[:, k] / mass) for k in range(K)])
        local = float(np.interp(age, clock, mass)) / tubes
        if case.cooling.inlet is not None and np.isinf(tube.coolant):
            Tc = case.cooling.inlet
        path = integrate(_from(tube, z, case.vessel.length), n, T, Tc, case.vessel.pressure, local, LOOSE)
        time = path.totals[:, 8]
        found.append(
            Track(
                time,
                np.maximum(path.state[:, :K], 0.0),
                path.state[:, K],
                path.state[:, K + 2],
                amount,
                float(np.interp(case.vessel.length, path.z, time)),
                path.mass_flow / path.mass_flow[0],
            )
        )
    return found


def _from(tube, z, length):
    """Return the tube from a place on, and some way beyond its end."""
    sections = [s for s in tube.sections if s.stop > z + 1e-9]
    none = np.zeros_like(sections[0].injected)
    if sections[0].start < z:
        sections[0] = sections[0]._replace(start=z, injected=none, heat=0.0)
    sections[-1] = sections[-1]._replace(stop=length * (1 + BEYOND))
    return tube._replace(sections=tuple(sections))


def transient(case, plant, old, after, gas):
    """Return the `Transient` of old elements (inlet first) and the steady profile after the step."""
    tubes = case.vessel.parallel
    new = new_gas(after, gas)
    flow = float(after.moles[0] @ gas.molar_mass) / tubes
    return Transient(tuple(_pushed(old, new, flow, after.volume / tubes)), new, flow, tubes)


def _pushed(old, new, flow, volume):
    """Return old elements with the time at which their middle has been pushed to the outlet."""
    times = np.linspace(0.0, 3.0 * max(new.leaves, max(e.leaves for e in old)), 1500)
    behind = flow * _entered(new.specific(), new.clock, times)
    for element in old:
        own = element.volume(times)
        place = behind + own / 2
        behind = behind + own
        late = place >= volume
        leaves = float(np.interp(volume, place, times)) if late.any() else float(times[-1])
        yield element._replace(leaves=leaves)


def _entered(specific, clock, times):
    """Return the integral of a specific volume over the age of gas, held at its last value beyond the outlet."""
    total = np.append(0.0, np.cumsum((specific[1:] + specific[:-1]) / 2 * np.diff(clock)))
    return np.interp(times, clock, total) + np.maximum(times - clock[-1], 0.0) * specific[-1]
