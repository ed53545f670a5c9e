"""
Turndown, and the slow loss of light.

Slip against flow and against hours, with the dates to relamp and to clean.
"""

import math
from dataclasses import replace

import numpy as np

from reactor.sizing.data import cited, practice
from reactor.sizing.light import of_fresh
from reactor.sizing.probe import many

FLOWS = (0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0, 1.1)
SHARES = (1.0, 0.85, 0.7, 0.55, 0.4, 0.25, 0.12)  # of fresh light, where the slip is rated
WEEK, HOUR = 604800.0, 3600.0
POINTS = 13


def at_flow(case, factor):
    """Return the case with every feed multiplied; lamps and coolant stay."""
    feed = {name: replace(one, moles={s: n * factor for s, n in one.moles.items()}) for name, one in case.feed.items()}
    return replace(case, feed=feed)


def turndown(case, probe, result, options):
    """Return slip, temperatures and skin from 40 to 110 % flow."""
    rows = []
    for factor, found in zip(FLOWS, many([at_flow(case, factor) for factor in FLOWS]), strict=True):
        if found is None:
            continue
        rows.append(
            {
                "flow": factor,
                "slip": found["chlorine_slip"],
                "poly": found["poly_share_mol"],
                "hottest": found["temperature_hottest"],
                "outlet": found["temperature_outlet"],
                "skin": found["sleeve_skin_temperature"],
                "absorbed": found["light_absorbed"],
                "pressure_drop": found["pressure_drop"],
                "residence_time": found["residence_time"],
            }
        )
    return {"rows": rows}


def ageing(case, probe, result, options):
    """Return slip against hours while lamps fade and sleeves go blind, and when to relamp and to clean."""
    if not case.lamp:
        return {
            "rows": [],
            "relamp": None,
            "relamp_why": "no lamp",
            "clean": None,
            "clean_why": "no lamp",
            "remarks": [],
        }
    end = min(lamp.end_of_life for lamp in case.lamp)
    arc = any(lamp.kind and "mercury" in lamp.kind for lamp in case.lamp)
    life = options.life or practice("lamp_life_arc" if arc else "lamp_life_led")
    week = practice("deposit_week") if options.deposit is None else options.deposit
    slip = slip_of_light(case)
    limit = case.limits.chlorine_slip

    def lamp(t):
        return max(1 - (1 - end) * t / life, 0.0)

    def sleeve(t):
        return (1 - week) ** (t / WEEK)

    rows = [
        {
            "hours": t / HOUR,
            "lamp": lamp(t),
            "sleeve": sleeve(t),
            "light": lamp(t) * sleeve(t),
            "slip": slip(lamp(t) * sleeve(t)),
        }
        for t in np.linspace(0, life, POINTS)
    ]
    dark = _first(lambda t: slip(lamp(t) * sleeve(t)), limit, life)
    worn = _first(lambda t: slip(lamp(t)), limit, life)
    return {
        "rows": rows,
        "life": life,
        "deposit_week": week,
        "limit": limit,
        "relamp": (life if worn is None else worn) / HOUR,
        "relamp_why": f"the slip is above {100 * limit:.3g} % with new lamps already"
        if worn == 0.0
        else "the lamps reach their end of life"
        if worn is None
        else f"the slip of clean sleeves passes {100 * limit:.3g} %",
        "clean": None if dark is None else dark / HOUR,
        "clean_why": f"the slip is above {100 * limit:.3g} % with new lamps already"
        if dark == 0.0
        else "limits.chlorine_slip is not stated"
        if limit is None
        else "the slip stays below its limit for the life of the lamps"
        if dark is None
        else f"lamps and deposit together pass {100 * limit:.3g} %",
        "remarks": [
            f"light falls straight to {100 * end:.0f} % in {life / HOUR:.0f} h, and by {100 * week:.3g} "
            f"% a week in "
            "deposit: figures of the trade or stated by you, not computed"
        ],
        "rules": cited("lamp_life_led", "lamp_life_arc", "deposit_week"),
    }


def slip_of_light(case):
    """
    Return the slip as a function of the share of fresh light.

    Rated at `SHARES`, straight in logarithms between.
    """
    looks = many([of_fresh(case, share) for share in SHARES])
    known = [
        (math.log(share), math.log(max(one["chlorine_slip"], 1e-300)))
        for share, one in zip(SHARES, looks, strict=True)
        if one is not None
    ]
    x, y = (np.array(column) for column in zip(*sorted(known), strict=True))

    def slip(share):
        return float(np.exp(np.interp(math.log(max(share, 1e-3)), x, y)))

    return slip


def _first(slip, limit, life):
    """Return the first time [s] at which the slip passes its limit, None within the life."""
    if limit is None or slip(life) <= limit:
        return None
    low, high = 0.0, life
    if slip(0.0) > limit:
        return 0.0
    for _ in range(60):
        middle = (low + high) / 2
        low, high = (middle, high) if slip(middle) <= limit else (low, middle)
    return high
