"""Rows of the upset table without a dynamic model: mixing, filling, dead legs, loss of power, hydrogen."""

import numpy as np

from reactor.hazards import explosive, paths
from reactor.rating import surroundings
from reactor.upsets import changes, regimes
from reactor.upsets.changes import Changed, brings_chlorine

CHLORINE, HOUR = 0.070906, 3600.0  # kg/mol, s
RUNAWAY = 600.0  # s; a dark chain that takes longer than this counts as standing still


class NotAssessedError(Exception):
    """Says why a row has no figures."""


def hydrogen(setting, size):
    """Return the class of the feed with hydrogen in the fuel."""
    mixed = setting.mixed(setting.case)
    moles = dict(zip(setting.gas.species, mixed.moles, strict=True))
    fuel = sum(n for s, n in moles.items() if s not in ("Cl2", "HCl", "N2", "Ar", "O2", "CO2"))
    moles["H2"] = size / (1 - size) * fuel * 1.001
    found = explosive.classify(setting.book, moles, mixed.temperature, mixed.pressure)
    return {"changed": f"{100 * size:g} % hydrogen in the fuel", "class": str(found.class_)}


def segregated(setting, size):
    """Return the hottest gas and the worst class of two parcels that differ in chlorine."""
    tops, classes, slips = [], [], []
    for factor in (1 + size, 1 - size):
        case = changes.scaled_feeds(setting.case, factor, brings_chlorine)
        _, profile = setting.steady(Changed(case))
        tops.append(profile.hottest[0])
        classes.append(setting.class_between(case))
        slips.append(float(profile.outlet.moles[setting.chlorine]))
    alkane, chlorine = surroundings.flows(setting.case, setting.gas)
    found = paths.segregation(setting.book, alkane, chlorine, setting.case.vessel.pressure)
    return {
        "changed": f"two parcels, chlorine {100 * (1 + size):.0f} and {100 * (1 - size):.0f} %",
        "peak": max(tops),
        "class": str(max(classes, key=lambda c: c.rank)),
        "chlorine_flow": sum(slips) / 2 * CHLORINE * HOUR,
        "tolerated": found.tolerated,
        "assumptions": (
            f"gases that do not mix at all meet {found.line.class_} between them",
            "parcels do not mix along the way",
        ),
    }


def filling(setting, size):
    """Return the worst class on the way from purge gas to feed and back; size 1 takes the chlorine first."""
    order = "chlorine first" if size else setting.times.filling
    lines = surroundings.filling(setting.case, setting.gas, setting.book, order)
    where, worst = max(lines, key=lambda item: (item[1].class_.rank, item[1].mixture.adiabatic_temperature))
    return {
        "changed": f"{order}, purge gas {setting.times.purge_gas}; worst: {where}",
        "class": str(worst.class_),
        "assumptions": ("compositions on straight lines between the gases",),
    }


def power(setting, size):
    """Return where the gas ends that stands still, dark and uncooled."""
    hot = setting.profile.hottest[0]
    chain = regimes.upper_bound(setting)
    wait = chain.time_to_maximum_rate(hot)
    runs = wait < RUNAWAY
    peak = float(regimes.completion(setting).mtsr) if runs else hot
    stored = float(regimes.inventory(setting)["moles"])
    return {
        "changed": "no flow, no light, no cooling",
        "time_to_limit": wait if runs and setting.limit is not None and peak > setting.limit else None,
        "peak": peak,
        "class": str(setting.class_between(setting.case)),
        "latent_heat": stored * setting.heat,
        "assumptions": (f"upper bound of the dark chain: the feed at the hottest gas runs away in {wait:.3g} s",),
    }


def dead_leg(setting, size):
    """Return the wall temperature at which stagnant feed ignites, and what it does then."""
    radius = setting.times.dead_leg
    critical = regimes.stagnant_wall(setting, radius, regimes.upper_bound(setting))
    severity = setting.severity(setting.feed)
    return {
        "changed": f"unreacted feed in a dead leg of radius {1000 * radius:.0f} mm",
        "light_off": None if np.isnan(critical) else critical,
        "peak": severity.hottest,
        "pressure_ratio": severity.ratio,
        "class": str(setting.class_between(setting.case)),
        "assumptions": (
            "ignites above the wall temperature given; peak and pressure if it does",
            f"worst product model: {severity.worst_model}",
        ),
    }


OTHER = {
    "hydrogen": hydrogen,
    "segregated": segregated,
    "filling": filling,
    "power": power,
    "dead_leg": dead_leg,
}
