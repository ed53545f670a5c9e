"""Put a solved reactor before the hazards room: mixtures and their class, margins, dew point, cautions."""

from typing import NamedTuple

import numpy as np

from reactor.hazards import corners, dewpoint, exotherm, explosive, materials
from reactor.hazards.cautions import block
from reactor.models import assemble
from reactor.models.chain import dark_chain
from reactor.rating.figures import START_SHARE, adiabatic_rise
from reactor.result import quantity

RESPONSE = 10.0  # s; the plant's response for which the light-off temperature is given
DEW_STATIONS = 40
ARCS = "mercury"
LEAST_PHOSGENE = 1e-9  # mole fraction from which phosgene is spoken of


class Dangers(NamedTuple):
    """Results to print, the class at every station, cautions, what was relied on, light-off temperature."""

    results: dict
    classes: np.ndarray
    cautions: tuple
    cited: tuple
    light_off: float


def assess(case, plant, profile, feed):
    """Return everything that can be judged from the finished profile."""
    gas = plant.gas
    book = rulebook(case, gas)
    found = mixtures(case, gas, book)
    classes, worst = explosive.along(
        book, profile.moles, profile.temperature, profile.pressure, feed.temperature
    )
    station = explosive.classify(
        book,
        profile.moles[worst],
        profile.temperature[worst],
        profile.pressure[worst],
        premixed=False,
        preheat=feed.temperature,
    )
    found.append(record(f"worst station, {profile.z[worst]:.3g} m", station, None))
    completion = exotherm.complete(book, profile.moles, profile.temperature)
    light_off = light_off_temperature(profile, gas, feed)
    dew = dew_margin(profile, gas)
    results = {
        "class_inlet": inlet_class(found),
        "class_worst": max((m["class"] for m in found), key=_rank),
        "mixtures": found,
        "mtsr": quantity(completion.mtsr, "K"),
        "light_off_temperature": quantity(light_off, "K"),
        "dew_point_margin": quantity(dew, "K"),
        "exotherm_margin": quantity(
            None if case.limits.hottest is None else case.limits.hottest - profile.hottest[0], "K"
        ),
    }
    flags = case_flags(case, profile, gas, results, plant)
    return Dangers(results, classes, block(flags), (*station.cited, *dewpoint.cited()), light_off)


def rulebook(case, gas):
    """Return the explosion rules with the case's own windows, which take precedence."""
    own = [(fuel, w.lel, w.uel, w.source, "seen") for fuel, w in case.limits.window.items()]
    return explosive.rulebook(gas, own)


def citations(case, gas):
    """Return what the hazards of a case rely on, before it is solved."""
    feed = assemble.mixed_feed(case, gas)
    mixture = explosive.classify(rulebook(case, gas), feed.moles, feed.temperature, feed.pressure)
    return (*mixture.cited, *dewpoint.cited())


def mixtures(case, gas, book):
    """Return a record for each feed, for the inlet and for each injector at perfect mixing."""
    P, at_inlet = case.vessel.pressure, assemble.at_inlet(case, gas)
    found = [
        record(f"feed {stream.name}", explosive.classify(book, stream.moles, stream.temperature, P), None)
        for stream in at_inlet
    ]
    groups = [("inlet, mixed", at_inlet)]
    everything = list(at_inlet)
    for position, stream in assemble.injections(case, gas):
        everything = [*everything, stream]
        groups.append((f"injector, {position:.3g} m, unreacted", list(everything)))
    for where, streams in groups:
        mixed = assemble.mix(where, streams, gas, P)
        nominal = explosive.classify(book, mixed.moles, mixed.temperature, P)
        found.append(record(where, nominal, corner(case, gas, book, streams, P)))
    return found


def corner(case, gas, book, streams, P):
    """Return the worst corner of the stated meter errors, or None where they are not stated."""
    errors = {"alkane": case.meters.alkane, "chlorine": case.meters.chlorine}
    if None in errors.values():
        return None
    chlorine = gas.index["Cl2"]
    meters = {s.name: errors["chlorine" if s.moles[chlorine] > 0.5 * s.total else "alkane"] for s in streams}
    return corners.worst_corner(book, streams, meters, P)


def record(where, mixture, worst):
    """Return one mixture as the record of the printed list."""
    return {
        "where": where,
        "fuel": quantity(mixture.fuel, "1"),
        "chlorine": quantity(mixture.chlorine, "1"),
        "inert": quantity(mixture.inert, "1"),
        "ratio": quantity(mixture.ratio if np.isfinite(mixture.ratio) else None, "1"),
        "temperature": quantity(mixture.temperature, "K"),
        "class": str(mixture.class_),
        "class_worst_corner": None if worst is None else str(worst.class_),
        "corner": "" if worst is None else worst.corner,
        "meter_error_at_change": quantity(None if worst is None else worst.meter_error_at_change, "1"),
        "margin": quantity(None if min(mixture.fuel, mixture.chlorine) < 1e-4 else mixture.margin, "1"),
        "adiabatic_temperature": quantity(mixture.adiabatic_temperature, "K"),
        "calculated_only": bool(mixture.calculated_only),
        "why": mixture.reason,
    }


def _rank(word):
    return explosive.Class(word).rank


def inlet_class(found):
    """Return the class of the mixed inlet."""
    return next(m["class"] for m in found if m["where"] == "inlet, mixed")


def light_off_temperature(profile, gas, feed):
    """
    Return the gas temperature [K] above which the dark chain runs away within the plant's response time.

    Taken for the unreacted feed, which holds the most chlorine.
    """
    rise = adiabatic_rise(profile, gas, feed)
    if not rise or rise < 1.0:
        return None
    chlorine = feed.fractions[gas.index["Cl2"]]
    capacity = float(feed.fractions @ gas.heat_capacity(feed.temperature))
    propagation, equilibrium, fuel = dark_chain(feed, gas)
    chain = exotherm.DarkChain(
        propagation, equilibrium, fuel, float(chlorine), feed.pressure, rise * capacity / chlorine, capacity
    )
    found = exotherm.dark_ignition(chain, RESPONSE)
    return None if np.isnan(found) else found


def dew_margin(profile, gas):
    """Return the smallest distance of the coldest surface from the dew point [K], None if dry."""
    margins = []
    for i in sorted(set(np.linspace(0, len(profile.z) - 1, DEW_STATIONS).round().astype(int).tolist())):
        share = profile.moles[i] / profile.moles[i].sum()
        mixture = dict(zip(gas.species, share, strict=True))
        dew = dewpoint.dew_point(mixture, profile.pressure[i], gas.condensing)
        coldest = min(profile.temperature[i], profile.coolant[i])
        if dew is not None:
            margins.append(coldest - dew.temperature)
    return min(margins, default=None)


def phosgene(profile, gas):
    """Return a remark with the exposure figures of phosgene where the outlet holds it, else nothing."""
    if "COCl2" not in gas.index:
        return ()
    share = profile.outlet.moles[gas.index["COCl2"]] / profile.outlet.moles.sum()
    if share < LEAST_PHOSGENE:
        return ()
    figures = ", ".join(
        f"{entry.figure} {1e6 * entry.fraction:.3g} ppm ({entry.basis or 'no time stated'}; {entry.cited.status})"
        for entry in materials.exposures(["COCl2"])
    )
    return (f"phosgene in the gas that leaves: {1e6 * share:.3g} ppm by mol, {figures}",)


def case_flags(case, profile, gas, results, plant):
    """Return the names of the cautions that this case adds."""
    fed = dict(zip(gas.species, profile.fed, strict=True))
    classes = [word for m in results["mixtures"] for word in (m["class"], m["class_worst_corner"]) if word]
    started = 2 * profile.total("photons") + profile.total("thermal_starts")
    arcs = any(lamp.kind and ARCS in lamp.kind for lamp in case.lamp)
    share = profile.fed[gas.index["O2"]] / profile.fed.sum() if "O2" in gas.index else 0.0
    flags = {
        "unknown_class": "UNKNOWN" in classes,
        "inside": "INSIDE" in classes,
        "calculated_only": any(m["calculated_only"] for m in results["mixtures"]),
        "thermal_start": started > 0 and profile.total("thermal_starts") > START_SHARE * started,
        "oxygen": share > 1e-6,
        "higher_alkanes": any(fed.get(s, 0.0) > 1e-3 * profile.fed.sum() for s in ("C2H6", "C3H8")),
        "hot_envelope": any(lamp.kind and "medium-pressure" in lamp.kind for lamp in case.lamp),
        "mercury": arcs,
        "glass": bool(case.lamp),
        "restrike": bool(case.lamp),
        "condensing": results["dew_point_margin"]["value"] is not None
        and results["dew_point_margin"]["value"] < 10.0,
        "steel": "steel" in case.vessel.shell_material,
        "adiabatic": case.cooling.mode == "none" or plant.wall.overall == 0.0,
        "soot": profile.hottest[0] > 873.15,
    }
    return [name for name, present in flags.items() if present]
