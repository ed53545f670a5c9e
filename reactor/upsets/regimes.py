"""Lit and dark: criteria of runaway in both, where lamp-off is no stop, trip times, chlorine inside."""

from dataclasses import replace

import numpy as np

from reactor.hazards import exotherm, explosive, runaway, substitution
from reactor.kernel.light import absorb
from reactor.kernel.rates import Rates
from reactor.kernel.thermo import R
from reactor.models import SOLVERS, assemble
from reactor.models.assemble import sections
from reactor.models.chain import dark_chain
from reactor.rating.figures import adiabatic_rise
from reactor.upsets.changes import Changed, warmer_feeds

HALF = 0.5  # of the chlorine: a dark reactor that uses more of it has lit off
BISECTIONS = 7
ROUNDS = 80


class Chain:
    """
    The chain of the mechanism in unreacted feed, radicals at rest: with the light of the inlet, or dark.

    Serves the criteria of `reactor.hazards.runaway`; the dark one counts every termination, so that it is
    slower than the upper bound of `exotherm.DarkChain`.
    """

    def __init__(self, gas, feed, heat, beam, wall_loss):
        self.rates = Rates(gas.tables, gas.photolysis, gas.wall)
        self.gas, self.fractions, self.beam, self.wall_loss = gas, feed.fractions, beam, wall_loss
        self.pressure, self.heat = feed.pressure, heat
        self.chlorine = float(feed.fractions[gas.index["Cl2"]])
        self.heat_capacity = float(feed.fractions @ gas.heat_capacity(feed.temperature))
        self.radicals = np.flatnonzero([kind != "molecule" for kind in gas.kinds])
        self.known: dict = {}

    def rate(self, T, at=None):
        """Return the chlorine used at `T` [mol/m^3/s], concentrations as at temperature `at` (itself)."""
        key = (round(T, 6), at)
        if key not in self.known:
            c = self.fractions * self.pressure / (R * (at or T))
            self.known[key] = self._used(c.copy(), T)
        return self.known[key]

    def _used(self, c, T):
        place, free = self.gas.index["Cl2"], self.radicals
        J = 0.0 if self.beam is None else float(absorb(self.beam, c[place], T).J)
        c[free], step = 1e-12 * c.sum(), 1e-9
        for _ in range(ROUNDS):
            w, by_c, *_ = self.rates.derivatives(c, T, J, self.wall_loss)
            move = np.linalg.solve(np.eye(len(free)) / step - by_c[np.ix_(free, free)], w[free])
            c[free] = np.maximum(c[free] + move, 0.0)
            if step > 1e9 and np.all(np.abs(move) <= 1e-7 * c[free] + 1e-30):
                break
            step = min(step * 10.0, 1e12)
        return max(-float(self.rates.production(c, T, J, self.wall_loss)[place]), 1e-300)

    def activation(self, T, step=1.0):
        """Return the local activation energy at constant concentrations [J/mol]."""
        low, high = (np.log(self.rate(t, T)) for t in (T - step, T + step))
        return R * (high - low) / (1 / (T - step) - 1 / (T + step))

    def time_to_maximum_rate(self, T):
        """Return the time to runaway of adiabatic gas [s]."""
        warming = self.heat * self.rate(T) / (self.pressure / (R * T) * self.heat_capacity)
        energy = max(self.activation(T), 1.0)
        return R * T**2 / (warming * energy)


def upper_bound(setting):
    """Return the dark chain as fast as it can be: chlorine atoms in equilibrium, no termination."""
    feed, gas = setting.feed, setting.gas
    propagation, equilibrium, fuel = dark_chain(feed, gas)
    capacity = float(feed.fractions @ gas.heat_capacity(feed.temperature))
    return exotherm.DarkChain(
        propagation,
        equilibrium,
        fuel,
        float(feed.fractions[setting.chlorine]),
        feed.pressure,
        setting.heat,
        capacity,
    )


def chain_of(setting, light):
    """Return the chain of the mechanism in a setting's unreacted feed, lit or dark."""
    beam = next(
        (
            s.beam
            for s in sections(setting.case, setting.gas, setting.light)
            if s.beam.fixed is not None or s.beam.entering.any()
        ),
        None,
    )
    return Chain(setting.gas, setting.feed, setting.heat, beam if light else None, setting.plant.wall_loss)


def completion(setting):
    """Return what happens if all chlorine present reacts where it is."""
    return exotherm.complete(setting.book, setting.profile.moles, setting.profile.temperature)


def surface_conductance(setting):
    """Return heat transfer coefficient times wall over gas volume [W/m^3/K]."""
    wall, profile, case = setting.plant.wall, setting.profile, setting.case
    per_metre = float(wall.conductance(setting.feed.temperature)[0])
    return per_metre * case.vessel.length * case.vessel.parallel / profile.volume


def stagnant_wall(setting, radius, chain):
    """Return the wall temperature at which stagnant feed in a cylinder ignites [K]; nan if it does not."""
    feed, gas = setting.feed, setting.gas
    conductivity = gas.transport(feed.temperature, feed.pressure, feed.moles).conductivity

    def delta(T):
        return runaway.frank_kamenetskii(chain, T, radius, conductivity * (T / feed.temperature))

    return runaway.critical_wall(delta, runaway.STAGNANT["cylinder"], 250.0)


def criteria(setting):
    """
    Return every classical criterion at the wall temperature of the case, in three regimes.

    `lit` and `dark` are the chain of the mechanism; `dark, upper bound` counts no termination, which is what
    a screening should look at.
    """
    case, profile = setting.case, setting.profile
    wall = case.cooling.inlet or setting.feed.temperature
    rise = adiabatic_rise(profile, setting.gas, setting.feed) or 0.0
    cooling = surface_conductance(setting)
    found = {}
    chains = {
        "lit": chain_of(setting, True),
        "dark, upper bound": upper_bound(setting),
        "dark": chain_of(setting, False),
    }
    for name, chain in chains.items():
        E = chain.activation(wall)
        S, N = runaway.tube_numbers(chain, wall, rise, cooling)
        semenov = runaway.critical_wall(lambda T, c=chain: runaway.semenov(c, T, max(cooling, 1e-9)), runaway.SEMENOV, 250.0)
        found[name] = {
            "activation": E,
            "rate": chain.rate(wall),
            "S": S,
            "N_over_S": N / S if S > 0 else None,
            "critical_N_over_S": runaway.van_welsenaere_froment(S) if S > 0 else None,
            "barkelew_N_over_S": runaway.barkelew(S) if S > 10 else None,
            "hot_spot_limit": runaway.hot_spot_limit(wall, E) if E > 0 else None,
            "semenov": runaway.semenov(chain, wall, max(cooling, 1e-9)),
            "semenov_wall": semenov,
            "stagnant_wall": stagnant_wall(setting, setting.times.dead_leg, chain),
            "time_to_maximum_rate": chain.time_to_maximum_rate(profile.hottest[0]),
            "several_states": runaway.several_states(rise, setting.feed.temperature, E),
        }
    return found


def no_stop_temperature(setting, hottest=900.0):
    """
    Return the feed temperature at which the dark reactor uses half its chlorine [K].

    Above it lamp-off is no stop. The wall is as in the case; None if even `hottest` does not light off.
    """
    case = replace(setting.case, solver=replace(setting.case.solver, rtol=1e-5))
    low, high = setting.feed.temperature, hottest

    def lit_off(T):
        changed = Changed(warmer_feeds(case, T - setting.feed.temperature), light=0.0)
        _, profile = setting.steady(changed)
        slip = profile.outlet.moles[setting.chlorine] / profile.fed[setting.chlorine]
        return slip < HALF

    if lit_off(low):
        return low
    if not lit_off(high):
        return None
    for _ in range(BISECTIONS):
        middle = (low + high) / 2
        low, high = (low, middle) if lit_off(middle) else (middle, high)
    return high


def heating(setting):
    """
    Return the fastest warming of the gas without cooling [K/s], and the shortest time to the limit [s].

    The time counts where the chlorine left can warm the gas to the limit at all; None where it nowhere can.
    """
    profile, gas = setting.profile, setting.gas
    capacity = np.einsum("mk,mk->m", profile.moles, gas.heat_capacity(profile.temperature))
    if profile.kind == "stirred tank":
        held = profile.pressure * profile.volume / (R * profile.temperature) * capacity / profile.moles.sum(axis=1)
        rate = profile.total("heat_reaction") / held
    else:
        time = profile.totals["time"]
        step = np.maximum(np.diff(time), 1e-12)
        power = np.diff(profile.totals["heat_reaction"]) / step
        rate = np.append(power, power[-1]) / capacity
    margin = None
    if setting.limit is not None:
        x = explosive.fractions(setting.book, profile.moles)
        done = substitution.adiabatic_temperature(setting.book.rungs, x, profile.temperature, shared=False)
        left = np.maximum(setting.limit - profile.temperature, 0.0) / np.maximum(rate, 1e-9)
        margin = float(left[done > setting.limit].min()) if (done > setting.limit).any() else None
    return float(rate.max()), margin


def inventory(setting):
    """Return the chlorine in the reactor by section: lit, unlit, the line from the valve; moles in all."""
    profile, case = setting.profile, setting.case
    rows = []
    if profile.kind == "stirred tank":
        share = profile.moles[0] / profile.moles[0].sum()
        held = profile.pressure[0] / (R * profile.temperature[0]) * profile.volume * share[setting.chlorine]
        rows.append(("vessel", float(held)))
    else:
        c = profile.concentrations[:, setting.chlorine]
        area = profile.volume / case.vessel.length
        lit = profile.photolysis > 0
        for name, where in (("lit length", lit), ("unlit length", ~lit)):
            rows.append((name, float(area * np.trapezoid(np.where(where, c, 0.0), profile.z))))
    if setting.times.chlorine_line is not None:
        alone = next(s for s in assemble.streams(case, setting.gas) if s.moles[setting.chlorine] > 0)
        held = alone.pressure / (R * alone.temperature) * setting.times.chlorine_line
        rows.append(("line from the chlorine valve", float(held * alone.fractions[setting.chlorine])))
    return {"sections": rows, "moles": sum(n for _, n in rows)}


def sweep(setting):
    """Return how long it takes to push reactor and chlorine line empty after the valve is shut [s]."""
    line = 0.0
    if setting.times.chlorine_line is not None:
        alone = next(s for s in assemble.streams(setting.case, setting.gas) if s.moles[setting.chlorine] > 0)
        line = setting.times.chlorine_line / alone.volume_flow()
    factor = 3.0 if setting.profile.kind == "stirred tank" else 1.0
    return factor * setting.profile.total("time") + line


def dark_states(setting):
    """Return the steady states of the dark tank, coldest first; nothing for a tube."""
    if setting.case.vessel.kind != "stirred tank":
        return ()
    changed = Changed(setting.case, light=0.0)
    return SOLVERS["stirred tank"](changed.fixed_light(), changed.equipment(setting.gas, setting.light)).states
