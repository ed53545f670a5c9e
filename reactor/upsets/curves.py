"""
Steady states of a tank against light and against feed temperature, traced through ignition and extinction.

At a held temperature the composition has one solution; what is followed by arc length is the heat balance as
a function of temperature and parameter, with the composition solved inside.
"""

from typing import NamedTuple

import numpy as np

from reactor.kernel.continuation import trace
from reactor.kernel.tank import Balance

SCALE = 100.0  # K that count as one in the arc length
DECADES = 2.0  # powers of ten in light that count as one


class Steady(NamedTuple):
    """
    A curve of steady states against `parameter` (light: factor on the case's own; feed temperature: K).

    `value`, `temperature` [K], `slip` (chlorine left of that fed) and `stable` run along it; `turns` are
    (parameter, temperature, "ignition" | "extinction").
    """

    parameter: str
    value: np.ndarray
    temperature: np.ndarray
    slip: np.ndarray
    stable: np.ndarray
    turns: tuple


def against_light(tank, state, darkest=1e-8, brightest=1e2):
    """
    Trace the steady states of a tank against a factor on its light.

    Parameters
    ----------
    tank : Tank
        The tank as the case has it. [-]
    state : State
        One of its steady states. [-]
    darkest, brightest : float
        Range of the factor. [-]
    """

    def changed(p):
        factor = 10 ** (DECADES * p)
        beam = tank.beam
        fixed = None if beam.fixed is None else beam.fixed * factor
        return tank._replace(beam=beam._replace(entering=beam.entering * factor, fixed=fixed))

    ends = tuple(np.log10(f) / DECADES for f in (darkest, brightest))
    return _curve("light", changed, state, 0.0, ends, lambda p: 10 ** (DECADES * p))


def against_feed_temperature(tank, state, feed_temperature, coldest, hottest):
    """
    Trace the steady states of a tank against the temperature of its feed.

    Parameters
    ----------
    tank : Tank
        The tank as the case has it. [-]
    state : State
        One of its steady states. [-]
    feed_temperature : float
        That of the case. [K]
    coldest, hottest : float
        Range to trace. [K]
    """

    def changed(p):
        return tank._replace(feed_heat=float(tank.feed @ tank.rates.thermo.at(p * SCALE)[2]))

    ends = (coldest / SCALE, hottest / SCALE)
    return _curve("feed temperature", changed, state, feed_temperature / SCALE, ends, lambda p: p * SCALE)


def _curve(name, changed, state, p, ends, shown):
    """Trace from a state of the case in both directions and join the two parts."""
    heat = _Heat(changed, state.n)
    parts = []
    for sign in (-1.0, 1.0):
        heat.n = state.n
        parts.append(trace(heat, [state.T / SCALE], p, np.ones(1), sign, ends))
    back, ahead = parts
    T = np.concatenate([back.y[::-1, 0], ahead.y[1:, 0]]) * SCALE
    value = np.concatenate([back.p[::-1], ahead.p[1:]])
    slips, stable = heat.judge(T / SCALE, value)
    turns = [(shown(q), float(y[0] * SCALE)) for q, y in (*back.turns, *ahead.turns)]
    return Steady(name, np.array([shown(q) for q in value]), T, slips, stable, _named(turns))


def _named(turns):
    """Name the turning points: the colder of a pair is the ignition, the hotter the extinction."""
    turns = sorted(turns, key=lambda turn: turn[1])
    return tuple((*turn, "ignition" if number % 2 == 0 else "extinction") for number, turn in enumerate(turns))


class _Heat:
    """The heat balance of a tank at (temperature, parameter) with its two derivatives, composition inside."""

    def __init__(self, changed, n):
        self.changed, self.n = changed, n

    def __call__(self, y, p):
        """Return the heat balance in residence times and hundreds of kelvin, and its derivatives."""
        T = float(np.clip(y[0] * SCALE, 200.0, 1800.0))
        tank = self.changed(p)
        balance = Balance(tank)
        self.n = n = balance.at_rest(T, self.n, near=True)[0][0]
        K, time = len(n), tank.volume * balance.density(n, T) / balance.mass_flow
        jac = balance.jacobian(n, T)
        change, heat = balance.slope(n, T)
        step = 1e-6
        up, hot = Balance(self.changed(p + step)).slope(n, T)
        by_p, heat_p = (up - change) / step, (hot - heat) / step
        inner = np.linalg.solve(jac[:K, :K], np.column_stack([jac[:K, K], by_p]))
        total_T, total_p = jac[K, K] - jac[K, :K] @ inner[:, 0], heat_p - jac[K, :K] @ inner[:, 1]
        return (
            np.array([heat * time / SCALE]),
            np.array([[total_T * time]]),
            np.array([total_p * time / SCALE]),
        )

    def judge(self, T, p):
        """Return the slip and the stability of every state."""
        slips, stable = [], []
        for t, q in zip(T, p, strict=True):
            balance = Balance(self.changed(q))
            self.n = balance.at_rest(t * SCALE, self.n, near=True)[0][0]
            slips.append(self.n[balance.tank.chlorine] / balance.n_in[balance.tank.chlorine])
            stable.append(np.linalg.eigvals(balance.jacobian(self.n, t * SCALE)).real.max() < 0)
        return np.array(slips), np.array(stable)
