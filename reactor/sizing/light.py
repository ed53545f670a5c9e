"""Lamp power against chlorine slip, and lamp watts against gas volume at the same slip."""

import math
from itertools import pairwise

from reactor import case as cases
from reactor.errors import ReactorError
from reactor.sizing import loop, search
from reactor.sizing.probe import many

LOWEST, HIGHEST = 5e-5, 0.5  # slip: the curve spans these four decades, or as far as light reaches
MOST = 1e6  # W a lamp; more is no lamp
REACH = 12  # thirds of a decade of lamp power looked at on either side of the design
VOLUMES = (0.5, 0.7, 1.4, 2.0, 4.0)  # of the design volume, for the trade


def dimmed(case, factor):
    """Return the case with the mains power of every lamp multiplied."""
    return cases.changed(case, [f"lamp.{i}.power={lamp.power * factor:.10g} W" for i, lamp in enumerate(case.lamp, 1)])


def of_fresh(case, share):
    """Return the case with every lamp at a share of its fresh light."""
    return cases.changed(case, [f"lamp.end_of_life={share:.10g}"])


def lamp_curve(case, probe, result, options):
    """
    Return lamp power against chlorine slip over four decades, with fresh, end-of-life and 70 % lamps marked.

    The mains power of all lamps is changed together; everything else stands. `law` is minus d ln(power)/d
    ln(slip): 1 where a decade less slip costs a decade more light.
    """
    if not case.lamp:
        return {"curve": [], "points": [], "remark": "the case has no lamp"}
    most = MOST / max(lamp.power for lamp in case.lamp)
    factors = [f for k in range(-REACH, REACH + 1) if k and (f := 10 ** (k / 3)) < most]
    aged = [("fresh lamp", 1.0), ("lamp at 70 % of fresh", 0.7)]
    looks = many([dimmed(case, f) for f in factors] + [of_fresh(case, share) for _, share in aged])
    rows = _spanned(
        sorted(
            [_row(one) for one in [*looks[: len(factors)], probe] if one is not None],
            key=lambda row: row["electrical"],
        )
    )
    for row, other in pairwise(rows):
        if other["slip"] < row["slip"]:
            more = math.log(other["electrical"] / row["electrical"])
            row["law"] = -more / math.log(other["slip"] / row["slip"])
    points = [_point("end of life (design)", case, probe)]
    points += [
        _point(name, of_fresh(case, share), one)
        for (name, share), one in zip(aged, looks[len(factors) :], strict=True)
        if one is not None
    ]
    return {"curve": rows, "points": points}


def _spanned(rows):
    """Return the rows between the ends of the wanted slips, and one beyond on either side."""
    first = max((i for i, row in enumerate(rows) if row["slip"] >= HIGHEST), default=0)
    last = min((i for i, row in enumerate(rows) if row["slip"] <= LOWEST), default=len(rows) - 1)
    return rows[first : last + 1]


def _row(probe):
    return {
        "electrical": probe["light_electrical"],
        "into_gas": probe["light_into_gas"],
        "slip": probe["chlorine_slip"],
        "absorbed": probe["light_absorbed"],
        "law": None,
    }


def _point(name, case, probe):
    return {
        "name": name,
        "light": min(lamp.end_of_life for lamp in case.lamp),
        "electrical": probe["light_electrical"],
        "into_gas": probe["light_into_gas"],
        "slip": probe["chlorine_slip"],
        "hottest": probe["temperature_hottest"],
    }


def needed(case, slip, start=1.0, most=8):
    """
    Return the factor on the lamp power at which a case has the wanted slip, and its probe.

    Nan and None when there is none.

    Parameters
    ----------
    case : Case
        With lamps. [-]
    slip : float
        Wanted chlorine slip. [-]
    start : float
        Factor where the search begins. [-]
    most : int
        Ratings at most; the answer holds to a few parts in ten thousand. [-]
    """
    probes, warm = {}, loop.Warm()

    def trial(x):
        try:
            probes[x] = loop.probe(dimmed(case, math.exp(x)), warm)
        except ReactorError as error:
            raise search.Blocked(str(error)) from None
        miss = math.log(max(probes[x]["chlorine_slip"], 1e-300) / slip)
        return 0.0 if abs(miss) < 3e-4 else miss

    root = search.one(trial, math.log(start), math.log(start) - 12, math.log(start) + 12, most)
    if not root.found and not abs(root.gap) < 0.02:
        return math.nan, None
    return math.exp(root.x), probes[root.x]


def trade(case, probe, result, options):
    """Return the watts that hold the slip at other gas volumes; watts times litres is about constant."""
    slip, rows = probe["chlorine_slip"], [_litres(probe)]
    for factor in VOLUMES:
        longer = stretched(case, factor)
        found = needed(longer, slip, 1 / factor)[1]
        if found is not None:
            rows.append(_litres(found))
    rows.sort(key=lambda row: row["volume"])
    return {"slip": slip, "rows": rows}


def stretched(case, factor):
    """
    Return the case with all its lengths multiplied: vessel, lit lengths and injectors.

    The lamps keep their power.
    """
    texts = [f"vessel.length={case.vessel.length * factor:.10g} m"]
    for i, lamp in enumerate(case.lamp, 1):
        stop = case.vessel.length if lamp.lit_to is None else lamp.lit_to
        texts += [
            f"lamp.{i}.lit_from={lamp.lit_from * factor:.10g} m",
            f"lamp.{i}.lit_to={stop * factor:.10g} m",
        ]
    texts += [f"inject.{i}.position={inject.position * factor:.10g} m" for i, inject in enumerate(case.inject, 1)]
    return cases.changed(case, texts)


def _litres(probe):
    volume, watts = probe.profile.volume, probe["light_into_gas"]
    return {
        "volume": volume,
        "length": probe.case.vessel.length,
        "electrical": probe["light_electrical"],
        "into_gas": watts,
        "watts_times_volume": watts * volume,
        "slip": probe["chlorine_slip"],
        "residence_time": probe["residence_time"],
    }
