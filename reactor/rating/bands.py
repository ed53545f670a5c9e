"""Carry the band of the heat transfer coefficient into the results by solving at its two ends."""

from dataclasses import replace

from reactor.errors import ConvergenceError
from reactor.models import SOLVERS
from reactor.models.assemble import mixed_feed
from reactor.rating import figures
from reactor.rating.plant import scaled
from reactor.result import quantity

BANDED = (
    "conversion_chlorine",
    "chlorine_slip",
    "poly_share_mol",
    "temperature_outlet",
    "temperature_hottest",
    "heat_removed",
)


def bands(case, plant, results):
    """
    Return the results with {low, mid, high} beside those that the heat exchange moves.

    The ends are solved with U at both ends of its band (about 5 to 95 %); nothing else is varied.
    """
    low, high = plant.wall.band
    U = results["heat_transfer_coefficient"]
    if case.cooling.mode == "none" or low == high:
        return results
    ends = [_solved(case, plant._replace(wall=scaled(plant.wall, factor))) for factor in (low, high)]
    if None in ends:
        return results
    found = dict(results)
    found["heat_transfer_coefficient"] = quantity(
        U["value"], U["unit"], (low * U["value"], U["value"], high * U["value"])
    )
    for name in BANDED:
        values = [end[name]["value"] for end in ends]
        mid = results[name]["value"]
        if mid is not None and None not in values:
            found[name] = quantity(mid, results[name]["unit"], (min(*values, mid), mid, max(*values, mid)))
    return found


def _solved(case, plant):
    """Return the headline results of a case at one end of the band; None where it cannot be solved there."""
    quick = replace(case, solver=replace(case.solver, rtol=max(case.solver.rtol, 1e-6)))
    try:
        profile = SOLVERS[case.vessel.kind](quick, plant, look_further=False)
    except ConvergenceError:
        return None
    feed = mixed_feed(case, plant.gas)
    return (
        figures.conversion(profile, plant.gas)
        | figures.products(profile, plant.gas)
        | figures.heat(profile, plant.gas, feed)
    )
