"""Parametric sensitivity: how far the hottest gas moves when one input of the case is varied."""

from dataclasses import replace

import numpy as np

from reactor.errors import ConvergenceError
from reactor.kernel.tank import Balance
from reactor.models import assemble
from reactor.models.stirred_tank import tank_of
from reactor.upsets.changes import (
    Changed,
    at_pressure,
    brings_chlorine,
    scaled_feeds,
    warmer_coolant,
    warmer_feeds,
)

ROUNDS = 20

INPUTS = (
    ("feed temperature", "1 K", 2.0, 1.0, lambda case, d: Changed(warmer_feeds(case, d))),
    ("coolant temperature", "1 K", 2.0, 1.0, lambda case, d: Changed(warmer_coolant(case, d))),
    ("chlorine flow", "1 %", 0.02, 0.01, lambda case, d: Changed(scaled_feeds(case, 1 + d, brings_chlorine))),
    ("total flow", "1 %", 0.02, 0.01, lambda case, d: Changed(scaled_feeds(case, 1 + d, lambda _: True))),
    ("light", "1 %", 0.02, 0.01, lambda case, d: Changed(case, light=1 + d)),
    ("heat exchange", "1 %", 0.02, 0.01, lambda case, d: Changed(case, heat=1 + d)),
    ("pressure", "1 %", 0.02, 0.01, lambda case, d: Changed(at_pressure(case, 1 + d))),
)


def sensitivity(setting, dark=False):
    """
    Return how far the hottest gas moves with each input, from a run with that input raised a little.

    Parameters
    ----------
    setting : Setting
        The rated case. [-]
    dark : bool
        With the lamp off. [-]

    Returns
    -------
    rows : list of (str, str, float)
        Input, its step, kelvin of the hottest gas. [-]
    """
    case, rows = setting.case, []
    base = _hottest(setting, Changed(case), dark)
    for name, unit, step, shown, change in INPUTS:
        if dark and name == "light":
            continue
        if case.cooling.mode == "none" and name in ("coolant temperature", "heat exchange"):
            continue
        rows.append((name, unit, (_hottest(setting, change(case, step), dark) - base) / step * shown))
    return rows


def _hottest(setting, changed, dark):
    if dark:
        changed = replace(changed, light=0.0)
    if setting.case.vessel.kind == "stirred tank":
        return _tank(setting, changed, dark)
    return setting.steady(changed)[1].hottest[0]


def _tank(setting, changed, dark):
    """Return the temperature of the steady state that goes on from the one of the case, by Newton's rule."""
    case = changed.fixed_light()
    tank = tank_of(case, changed.equipment(setting.gas, setting.light), assemble.mixed_feed(case, setting.gas))
    balance = Balance(tank)
    start = setting.feed if dark else setting.profile.outlet
    n, T = start.moles / start.mass(setting.gas), start.temperature
    for _ in range(ROUNDS):
        move = np.linalg.solve(balance.jacobian(n, T), -np.append(*balance.slope(n, T)))
        n, T = np.maximum(n + move[:-1], 0.1 * n), T + move[-1]
        if abs(move[-1]) < 1e-8:
            return float(T)
    raise ConvergenceError(
        "the tank's state was lost when one input was varied; look at its steady states: it may stand close "
        "to ignition or extinction"
    )
