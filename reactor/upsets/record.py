"""One case in, one plain record out: the upset table and the figures that stand above it."""

from dataclasses import asdict

import numpy as np

from reactor import library
from reactor.errors import CaseError
from reactor.hazards import dewpoint, equilibrium, explosive, materials
from reactor.hazards.cautions import block
from reactor.hazards.ternary import ternary
from reactor.models import assemble
from reactor.models.stirred_tank import tank_of
from reactor.rating import hazard, identity, surroundings
from reactor.result import quantity
from reactor.upsets import curves, regimes, rows, sensitivity
from reactor.upsets.setting import setting

HEADINGS = {
    "hottest": "K",
    "light_off_temperature": "K",
    "dark_feed_temperature": "K",
    "dark_unstable_temperature": "K",
    "mtsr": "K",
    "heating_rate": "K/s",
    "time_to_limit": "s",
    "direct_trip": "s",
    "temperature_trip": "s",
    "sweep": "s",
    "chlorine_inside": "kg",
    "latent_heat": "J",
    "worst_temperature": "K",
    "worst_pressure_ratio": "1",
    "soot_share": "1",
}


def upset(case, only=None, strict=False):
    """
    Put a checked case through its upsets.

    Parameters
    ----------
    case : Case
        From `reactor.load`.
    only : collection of str
        Numbers of the deviations wanted, such as `U09`; all without it.
    strict : bool
        Refuse the defaults of [upsets].

    Returns
    -------
    record : dict
        Plain values, ready for JSON: title, headline, regimes, sensitivity, curves, inventory, paths, rows,
        ternary, leaks, assumed, cautions, sources, identity.
    """
    at = setting(case)
    if strict and at.times.assumed:
        raise CaseError(
            [f"{a['key']}: missing; strict reading takes no default ({a['value']}: {a['why']})" for a in at.times.assumed]
        )
    known = {row["id"] for row in library.table("hazards/deviations.csv").rows}
    if only is not None and not set(only) <= known:
        raise CaseError(f"no deviation {', '.join(sorted(set(only) - known))}; known: {', '.join(sorted(known))}")
    table = rows.table(at, only)
    return {
        "title": case.title,
        "revision": case.about.revision,
        "date": str(case.about.date or ""),
        "headline": headline(at),
        "regimes": criteria(at),
        "dark_states": [{"temperature": quantity(s.T, "K"), "stable": bool(s.stable)} for s in regimes.dark_states(at)],
        "sensitivity": sensitivities(at),
        "curves": [_curve(c) for c in steady_curves(at)],
        "inventory": [
            {"section": name, "moles": quantity(n, "mol"), "mass": quantity(n * rows.CHLORINE, "kg")}
            for name, n in regimes.inventory(at)["sections"]
        ],
        "paths": surroundings.met(at.case, at.gas, at.book),
        "rows": [asdict(row) for row in table],
        "ternary": triangle(at),
        "leaks": leaks(at),
        "assumed": [*identity.assumed(case), *at.times.assumed],
        "cautions": list(block(flags(table, at))),
        "sources": [c._asdict() for c in cited(at)],
        "identity": identity.identity(case, at.gas),
    }


def headline(at):
    """Return the numbers that stand on top."""
    rate, margin = regimes.heating(at)
    severity = at.severity(at.feed)
    inside = regimes.inventory(at)["moles"]
    unstable = [state.T for state in regimes.dark_states(at) if not state.stable]
    values = {
        "light_off_temperature": at.light_off,
        "dark_feed_temperature": None
        if unstable or at.case.vessel.kind == "stirred tank"
        else regimes.no_stop_temperature(at),
        "dark_unstable_temperature": min(unstable, default=None),
        "hottest": at.profile.hottest[0],
        "mtsr": regimes.completion(at).mtsr,
        "heating_rate": rate,
        "time_to_limit": margin,
        "direct_trip": at.times.direct,
        "temperature_trip": at.times.temperature,
        "sweep": regimes.sweep(at),
        "chlorine_inside": inside * rows.CHLORINE,
        "latent_heat": inside * at.heat,
        "worst_temperature": severity.hottest,
        "worst_pressure_ratio": severity.ratio,
        "soot_share": severity.soot,
    }
    words = {"severity": regimes.completion(at).severity, "worst_model": severity.worst_model}
    return {name: quantity(values[name], unit) for name, unit in HEADINGS.items()} | words


UNITS = {
    "activation": "J/mol",
    "rate": "mol/m3/s",
    "hot_spot_limit": "K",
    "semenov_wall": "K",
    "stagnant_wall": "K",
    "time_to_maximum_rate": "s",
}


def criteria(at):
    """Return the classical criteria in each regime as quantities."""
    return {
        regime: {
            name: value if isinstance(value, bool) else quantity(_finite(value), UNITS.get(name, "1"))
            for name, value in found.items()
        }
        for regime, found in regimes.criteria(at).items()
    }


def _finite(value):
    return None if value is None or not np.isfinite(value) else value


def sensitivities(at):
    """Return how far the hottest gas moves with each input, lit and dark."""
    lit, dark = (sensitivity.sensitivity(at, dark) for dark in (False, True))
    off = {name: value for name, _, value in dark}
    return [
        {"input": name, "step": step, "lit": quantity(value, "K"), "dark": quantity(off.get(name), "K")}
        for name, step, value in lit
    ]


def steady_curves(at):
    """Return the curves of steady states of a tank against light and feed temperature; none for a tube."""
    if at.case.vessel.kind != "stirred tank":
        return ()
    tank = tank_of(at.case, at.plant, at.feed)
    state = min(at.profile.states, key=lambda s: abs(s.T - at.profile.outlet.temperature))
    warm = at.feed.temperature
    found = [curves.against_feed_temperature(tank, state, warm, 230.0, 900.0)]
    if at.case.lamp or at.case.chemistry.photolysis_rate:
        found.insert(0, curves.against_light(tank, state))
    return tuple(found)


def _curve(curve):
    return {
        "parameter": curve.parameter,
        "value": curve.value.tolist(),
        "temperature": curve.temperature.tolist(),
        "slip": curve.slip.tolist(),
        "stable": [bool(s) for s in curve.stable],
        "turns": [list(turn) for turn in curve.turns],
    }


def triangle(at):
    """Return the data of the triangle of fuel, chlorine and inert gas."""
    case, gas = at.case, at.gas
    corner = hazard.corner(case, gas, at.book, assemble.at_inlet(case, gas), case.vessel.pressure)
    found = ternary(
        at.book,
        at.mixed(case).moles,
        at.feed.temperature,
        case.vessel.pressure,
        corners_of(at) if corner is not None else (),
        at.profile.moles,
        surroundings.filling(case, gas, at.book),
    )
    return found


def corners_of(at):
    """Return the compositions at the corners of the two meter errors."""
    meters = at.case.meters
    alkane, chlorine = surroundings.flows(at.case, at.gas)
    return [
        (1 + a * meters.alkane) * alkane.moles + (1 + c * meters.chlorine) * chlorine.moles for a in (-1, 1) for c in (-1, 1)
    ]


def leaks(at):
    """Return the exposure figures of what could leak, and how far the gas has to be diluted to each."""
    share = at.profile.outlet.fractions
    feeds = at.feed.fractions
    found = []
    for entry in materials.exposures():
        if entry.substance not in at.gas.index or not entry.fraction > 0:
            continue
        most = float(max(share[at.gas.index[entry.substance]], feeds[at.gas.index[entry.substance]]))
        if most > entry.fraction:
            found.append(
                {
                    "substance": entry.substance,
                    "figure": entry.figure,
                    "fraction": quantity(entry.fraction, "1"),
                    "basis": entry.basis,
                    "times": quantity(most / entry.fraction, "1"),
                    "status": entry.cited.status,
                }
            )
    gas = dict(zip(at.gas.species, share, strict=True))
    lower, fuel = materials.leak_limit(gas)
    if fuel > lower:
        found.append(
            {
                "substance": "fuel",
                "figure": "lower limit in air",
                "fraction": quantity(lower, "1"),
                "basis": "1 atm",
                "times": quantity(fuel / lower, "1"),
                "status": "seen",
            }
        )
    return found


def flags(table, at):
    """Return the cautions that the table calls for."""
    classes = {row.class_reached for row in table}
    found = {
        "unknown_class": "UNKNOWN" in classes,
        "inside": "INSIDE" in classes,
        "restrike": bool(at.case.lamp),
        "glass": bool(at.case.lamp),
        "steel": "steel" in at.case.vessel.shell_material,
    }
    return [name for name, present in found.items() if present]


def cited(at):
    """Return what the upsets rely on."""
    more = library.table("hazards/deviations.csv").cited("sizes of the deviations")
    mixture = explosive.classify(at.book, at.feed.moles, at.feed.temperature, at.feed.pressure)
    found = (
        *at.plant.gas.cited,
        *at.plant.light.cited,
        *at.plant.wall.cited,
        *mixture.cited,
        *dewpoint.cited(),
        *equilibrium.CITED,
        *at.times.cited,
        *more,
    )
    return tuple(dict.fromkeys(found))
