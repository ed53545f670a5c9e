"""
How many tubes and why: the counts that heat, velocity or pressure drop, light and glass each ask for.

Each count is found from the equipment alone, at the finished design's flows and duty, without solving the
tube again; the binding one is the largest. Bores and series passes stand beside it.
"""

import math
from dataclasses import replace

from reactor.errors import ReactorError
from reactor.hazards import materials
from reactor.rating.plant import heat_exchange, lamps
from reactor.sizing.data import cited, practice

MOST = 10_000  # tubes looked at
BORES = (1.5, 2, 3, 4, 6, 8, 10, 12)  # nominal pipe sizes [inch] of the bore table
SCHEDULE = "40"
GAS_CONSTANT = 8.31446261815324


def tubes(case, probe, result, options):
    """Return the counts with the binding one named, and the tables of bores and of passes in series."""
    if case.vessel.geometry != "annulus":
        return {"counts": [], "binding": None, "remark": "counts of tubes belong to plug flow in an annulus"}
    counts = [
        by_volume(case, probe),
        by_heat(case, probe),
        by_flow(case, probe),
        by_light(case, probe),
        by_glass(case, probe),
    ]
    known = [c for c in counts if c["count"] is not None]
    endless = [c for c in counts if c["count"] is None and c["asked"]]
    binding = (endless or sorted(known, key=lambda c: -c["count"]))[0]
    return {
        "counts": counts,
        "binding": binding["by"],
        "binding_count": binding["count"],
        "has": case.vessel.parallel,
        "pipe": named_pipe(case.vessel.shell_inside),
        "bores": bores(case, probe),
        "series": series(case, probe),
        "rules": cited("gas_velocity", "glass_stress", "glass_buckling_factor"),
    }


def _count(by, count, why, asked=True):
    return {"by": by, "count": count, "why": why, "asked": asked}


def by_volume(case, probe):
    """Return the count that the case has: its gas volume holds the wanted slip."""
    return _count(
        "residence time",
        case.vessel.parallel,
        f"{probe.profile.volume * 1e3:.3g} L of gas hold the slip of {100 * probe['chlorine_slip']:.3g} %",
    )


def exchange(case, probe, parallel=None, **sizes):
    """Return (UA of all tubes [W/K], `Wall` of one) with other sizes or another number in parallel."""
    other = replace(case, vessel=replace(case.vessel, parallel=parallel or case.vessel.parallel, **sizes))
    wall, _ = heat_exchange(other, probe.gas, probe.plant.light, probe.feed)
    return wall.overall * wall.perimeter * other.vessel.length * other.vessel.parallel, wall


def heat_to_remove(case, probe):
    """
    Return the heat [W] that walls must take to hold limits.hottest at the outlet.

    And the mean driving difference [K].
    """
    limit, gas, feed = case.limits.hottest, probe.gas, probe.feed
    capacity = float(feed.moles @ gas.heat_capacity((feed.temperature + limit) / 2))
    released = probe.profile.total("heat_reaction") + probe.profile.total("photon_power") + probe.profile.total("lamp_heat")
    return released - capacity * (limit - feed.temperature), limit - (case.cooling.inlet or feed.temperature)


def by_heat(case, probe):
    """
    Return the count at which the wall area takes what the gas may not keep.

    U computed anew for every count.
    """
    if case.limits.hottest is None:
        return _count("heat", None, "limits.hottest is not stated", asked=False)
    surplus, drive = heat_to_remove(case, probe)
    if surplus <= 0:
        return _count("heat", 1, f"none: the gas itself takes the heat below {case.limits.hottest - 273.15:.0f} degC")
    if case.cooling.mode == "none" or drive <= 0:
        return _count("heat", None, f"{surplus / 1e3:.3g} kW would have to go and there is no cooling")
    need, last = surplus / drive, 0.0
    for n in _numbers():
        try:
            last, wall = exchange(case, probe, n)
        except ReactorError:
            continue
        if last >= need:
            return _count(
                "heat",
                n,
                f"UA {need:.3g} W/K for {surplus / 1e3:.3g} kW at {drive:.0f} K; U {wall.overall:.1f} "
                f"W/m2/K at Re {wall.reynolds:.0f}: more tubes hardly add UA, series passes and small "
                f"bore do",
            )
    return _count(
        "heat",
        None,
        f"UA {need:.3g} W/K is not reached with {MOST} tubes of this bore ({last:.3g} W/K): more "
        "alkane, smaller bore, passes in series or chlorine in stages",
    )


def _numbers():
    """Yield counts, each about 3 % above the last."""
    n = 1
    while n <= MOST:
        yield n
        n = max(n + 1, int(n * 1.03))


def by_flow(case, probe):
    """Return the count that keeps velocity below the rule and friction below limits.pressure_drop."""
    v = velocity(case, probe)
    cap, drop = practice("gas_velocity"), case.limits.pressure_drop
    count, why = (
        max(1, math.ceil(case.vessel.parallel * v / cap - 1e-9)),
        f"{v:.3g} m/s now, {cap:.0f} m/s at most",
    )
    if drop is not None:
        now = probe["pressure_drop"]
        by_drop = max(1, math.ceil(case.vessel.parallel * (now / drop) ** (1 / 1.8) - 1e-9))
        if by_drop > count:
            return _count("pressure drop", by_drop, f"{now / 100:.3g} mbar now, {drop / 100:.3g} mbar at most")
        why += f"; {now / 100:.3g} mbar of {drop / 100:.3g} mbar"
    return _count("velocity", count, why)


def velocity(case, probe):
    """Return the highest gas velocity along the tube [m/s]."""
    profile = probe.profile
    volume = profile.moles.sum(axis=1) * GAS_CONSTANT * profile.temperature / profile.pressure
    return float(volume.max() / (probe.plant.light.area * case.vessel.parallel))


def by_light(case, probe):
    """
    Return the count at which the lamp heat leaves every sleeve's skin below its limit.

    Total power held.
    """
    if not case.lamp or probe.plant.wall.skin is None:
        return _count("light", None, "no lamp", asked=False)
    limit = skin_limit(case, probe)
    total = probe["light_electrical"]
    hottest = float(probe.profile.temperature[probe.profile.photolysis > 0].max(initial=probe.feed.temperature))

    def skin(n):
        share = case.vessel.parallel / n
        dim = replace(
            case,
            lamp=tuple(replace(lamp, power=lamp.power * share) for lamp in case.lamp),
            vessel=replace(case.vessel, parallel=n),
        )
        wall, _ = heat_exchange(dim, probe.gas, lamps(dim), probe.feed)
        return float(wall.skin(hottest)[0])

    if hottest >= limit:
        return _count(
            "light",
            None,
            f"the gas itself ({hottest - 273.15:.0f} degC) is above the skin limit of {limit - 273.15:.0f} degC",
        )
    for n in _numbers():
        try:
            T = skin(n)
        except ReactorError:
            continue
        if limit >= T:
            metres = n * sum(lamp.lit_to - lamp.lit_from for lamp in case.lamp) / max(len(case.lamp), 1)
            return _count(
                "light",
                n,
                f"{total / 1e3:.3g} kW of lamps, {total / metres / 100:.3g} W per cm of sleeve: skin "
                f"{T - 273.15:.0f} degC, limit {limit - 273.15:.0f} degC",
            )
        if n > 1000:
            break
    return _count("light", None, f"the skin stays above {limit - 273.15:.0f} degC with 1000 tubes")


def skin_limit(case, probe):
    """Return the limit of the sleeve's skin [K], stated or that of a hot surface in this fuel."""
    if case.limits.sleeve_skin is not None:
        return case.limits.sleeve_skin
    fed = probe.profile.fed
    fuels = [
        s
        for s, n in zip(probe.gas.species, fed, strict=True)
        if n > 1e-3 * fed.sum() and s in ("CH4", "C2H6", "C3H8", "CH3Cl", "CH2Cl2", "C2H5Cl")
    ]
    return materials.hot_surface_limit(fuels)


def by_glass(case, probe):
    """Return the count of sleeves thin enough for the gas pressure outside them, at the same gas volume."""
    over = case.vessel.pressure - 101325.0
    sleeve = case.sleeve
    allowed = sleeve_pressure(sleeve.outside, sleeve.thickness)
    if over <= allowed:
        return _count(
            "glass pressure",
            1,
            f"sleeve {sleeve.outside * 1e3:.0f} x {sleeve.thickness * 1e3:.1f} mm bears "
            f"{allowed / 1e5:.2g} bar outside, {max(over, 0) / 1e5:.2g} bar gauge is asked; inner "
            f"pressure by "
            f"tension {tube_pressure(sleeve.outside, sleeve.thickness) / 1e5:.2g} bar",
        )
    share = (over / allowed) ** (1 / 3)
    return _count(
        "glass pressure",
        math.ceil(case.vessel.parallel * share**2),
        f"sleeve bears {allowed / 1e5:.2g} bar, "
        f"{over / 1e5:.2g} bar gauge is asked: {1 / share:.2g} times the diameter at this thickness, or "
        f"thicker glass",
    )


def sleeve_pressure(outside, thickness):
    """
    Return the outer pressure that a long glass cylinder bears.

    Elastic buckling over the factor of the data [Pa].

    Examples
    --------
    >>> print(f"{sleeve_pressure(0.060, 0.0025) / 1e5:.0f} bar")
    27 bar
    """
    E, nu, factor = (practice(f"glass_{name}") for name in ("modulus", "poisson", "buckling_factor"))
    return 2 * E / (1 - nu**2) * (thickness / outside) ** 3 / factor


def tube_pressure(outside, thickness):
    """Return the inner pressure that a glass tube bears in tension at the stress of the data [Pa]."""
    return 2 * practice("glass_stress") * thickness / (outside - thickness)


def named_pipe(inside, tolerance=0.02):
    """
    Return the pipe whose bore is nearest.

    {dn, nps, schedule, inside, outside, wall} in SI, None when none is near.

    Examples
    --------
    >>> found = named_pipe(0.154)
    >>> found["dn"], found["nps"], found["schedule"]
    (150, 6, '40')
    """
    from fluids.piping import nearest_pipe

    found = []
    for schedule in ("40", "10", "80", "STD"):
        try:
            nps, bore, outside, wall = nearest_pipe(Di=inside, schedule=schedule)
        except ValueError:
            continue
        found.append((abs(bore - inside), nps, schedule, bore, outside, wall))
    miss, nps, schedule, bore, outside, wall = min(found, key=lambda row: (round(row[0], 4), row[2] != "40"))
    if miss > tolerance * inside:
        return None
    return _pipe(nps, schedule, bore, outside, wall)


DN = {0.5: 15, 0.75: 20, 1: 25, 1.25: 32, 1.5: 40, 2: 50, 2.5: 65, 3: 80, 3.5: 90, 4: 100, 5: 125}


def _pipe(nps, schedule, bore, outside, wall):
    size = float(nps)
    return {
        "dn": DN.get(size, round(25 * size)),
        "nps": int(size) if size == int(size) else size,
        "schedule": schedule,
        "inside": bore,
        "outside": outside,
        "wall": wall,
    }


def pipe(nps, schedule=SCHEDULE):
    """Return a pipe by nominal size [inch] and schedule, as `named_pipe` does."""
    from fluids.piping import nearest_pipe

    found, bore, outside, wall = nearest_pipe(NPS=nps, schedule=schedule)
    return _pipe(found, schedule, bore, outside, wall)


def bores(case, probe):
    """Return for each pipe size the count of the same gas volume and what it makes of U, velocity and UA."""
    rows, area = [], probe.plant.light.area
    volume = area * case.vessel.length * case.vessel.parallel
    for nps in BORES:
        one = pipe(nps)
        gap = math.pi / 4 * (one["inside"] ** 2 - case.sleeve.outside**2)
        if one["inside"] <= case.sleeve.outside * 1.1:
            continue
        count = max(1, round(volume / (gap * case.vessel.length)))
        try:
            UA, wall = exchange(case, probe, count, shell_inside=one["inside"])
        except ReactorError:
            continue
        rows.append(
            {
                "pipe": one,
                "count": count,
                "gap": (one["inside"] - case.sleeve.outside) / 2,
                "velocity": velocity(case, probe) * area * case.vessel.parallel / (gap * count),
                "reynolds": float(wall.reynolds),
                "overall": float(wall.overall),
                "conductance": float(UA),
            }
        )
    return rows


def series(case, probe):
    """Return the same tubes in 1, 2 ... passes in series: UA, velocity and the friction of all passes."""
    rows, total = [], case.vessel.parallel
    for passes in (n for n in range(1, total + 1) if total % n == 0):
        try:
            UA, wall = exchange(case, probe, total // passes)
        except ReactorError:
            continue
        rows.append(
            {
                "passes": passes,
                "parallel": total // passes,
                "conductance": float(UA * passes),
                "velocity": velocity(case, probe) * passes,
                "reynolds": float(wall.reynolds),
                "pressure_drop": float(probe["pressure_drop"] * passes**2.8),
            }
        )
    return rows
