"""The photon account of a case as plain records: what `reactor photons` prints and draws."""

from dataclasses import replace

import numpy as np

from reactor import photons
from reactor.errors import CaseError
from reactor.models import SOLVERS, pools
from reactor.models.assemble import mixed_feed
from reactor.photons import field, laws
from reactor.photons.account import by_band
from reactor.photons.energy import photon_energy, photons_per_joule
from reactor.photons.lamps import kinds
from reactor.rating import account, figures
from reactor.rating.plant import lamps, located, mechanism, plant, shape, sleeve_of

AVOGADRO = 6.02214076e23
GAPS = (0.005, 0.010, 0.025, 0.050, 0.100)  # m
SCAN = np.arange(260e-9, 461e-9, 2.5e-9)  # m, wavelengths of the overlay
DAY = 86400.0


def photonic(case):
    """
    Solve a case and return its light in all detail.

    Parameters
    ----------
    case : Case
        The checked case, with at least one lamp.

    Returns
    -------
    record : dict
        Plain numbers, text and lists, SI; see `report.photons`. [-]

    Raises
    ------
    CaseError
        For a case without a lamp.
    """
    if not case.lamp:
        raise CaseError(f"{case.name}: lamp: a photon report needs a [[lamp]] entry")
    gas = mechanism(case)
    light = lamps(case)
    equipment, profile, mixed = pools.settle(case, plant(case, gas, light), SOLVERS[case.vessel.kind])
    gas = equipment.gas
    feed = mixed_feed(case, gas)
    results = figures.headline(case, equipment, profile, feed)
    inlet = profile.concentrations[0], float(profile.temperature[0])
    c = float(inlet[0][gas.index["Cl2"]])
    tanks = case.vessel.tanks
    absorbed, wall, ends = (each / tanks for each in account.per_line(light, profile, case.vessel.parallel))
    return {
        "title": case.title,
        "geometry": geometry(light),
        "gas": {"chlorine": c, "temperature": inlet[1], "fraction": c / float(inlet[0].sum())},
        "lines": spectrum(light, c, inlet[1]),
        "overlay": overlay(light, c, inlet[1]),
        "laws": bracket(case, light, c, inlet[1]),
        "lamps": other_lamps(case, light, c, inlet[1]),
        "ledger": account.light_ledger(light, profile, case),
        "bands": by_band(light, absorbed, wall, ends, case.vessel.vessels),
        "merit": merit(case, profile, results, gas),
        "along": along(light, profile),
        "pools": pool_bracket(profile, mixed, gas),
        "sheet": sheet(case, light, results),
        "notes": list(light.notes),
        "memory": sorted({entry.what for entry in light.cited if entry.status == "memory"}),
    }


def geometry(light):
    """Return what the light sees of the vessel."""
    return {"name": light.shape.name, "gap": light.path, "law": light.law, "lamp_radius": light.lamp_radius,
            "capture": light.capture, "lines": len(light.spectrum.wavelength), "followed": len(light.photon_energy)}


def sigma(wavelength, T):
    """Return the cross-section of chlorine as the model takes it [m2]."""
    return photons.chlorine.sigma_fit(wavelength) @ ((np.clip(T, 200.0, 900.0) - 550.0) / 350.0) ** np.arange(
        photons.chlorine.FIT_TERMS)


def spectrum(light, c, T):
    """Return the lines of the lamps: photons at the window of one tube, and what the inlet gas makes of them."""
    s = light.spectrum
    tau = sigma(s.wavelength, T) * AVOGADRO * c * light.path
    share = light.absorbed[0](np.log(np.maximum(tau, 1e-300)))[0] * tau
    rows = zip(s.wavelength, s.at_window, s.passed, tau, share, strict=True)
    return [{"wavelength": float(w), "photons": float(n), "passed": float(p), "thickness": float(t), "absorbed": float(f)}
            for w, n, p, t, f in rows]


def overlay(light, c, T):
    """Return cross-section and absorbed share against wavelength for the gap of the case and for a row of gaps."""
    at = sigma(SCAN, T)
    kappa = at * AVOGADRO * c
    gaps = sorted({*GAPS, round(light.path, 6)})
    law = field.Field(light.law if light.law in (laws.ISOTROPIC, laws.RADIAL) else laws.SINE, 1.0, 2.0)
    shares = {gap: field.absorbed(law, kappa * gap) for gap in gaps}
    value = photons_per_joule(SCAN) * light.absorbed[0](np.log(kappa * light.path))[0] * kappa * light.path
    best = int(value.argmax())
    return {
        "wavelength": SCAN.tolist(), "cross_section": at.tolist(), "law": law.law,
        "absorbed": {gap: share.tolist() for gap, share in shares.items()},
        "per_joule": value.tolist(), "best": float(SCAN[best]), "best_per_joule": float(value[best]),
    }  # fmt: skip


def absorbed_at(light, c, T):
    """Return photons entering one tube, and absorbed if all the gas were that of the inlet [mol/s]."""
    tau = pools.sigma_at(light, T)[0] * AVOGADRO * c * light.path
    log_tau = np.log(np.maximum(tau, 1e-300))
    if light.along is not None or len(light.edges) == 2:
        return light.entering.sum(), float(light.entering @ (light.absorbed[0](log_tau)[0] * tau))
    rows = zip(light.into_gas, light.absorbed, np.diff(light.edges), strict=True)
    return light.entering.sum(), float(sum(d * (n @ (curve(log_tau)[0] * tau)) for n, curve, d in rows))


def bracket(case, light, c, T):
    """Return, for each law of emission, photons into the gas and absorbed by gas of the inlet's composition."""
    known = any(lamp.emission for lamp in case.lamp)
    if light.shape.panel:
        return {"known": True, "rows": []}
    rows = []
    for law in (laws.ISOTROPIC, laws.VOLUMETRIC, laws.LAMBERTIAN, laws.SINE):
        some = [replace(lamp, emission=law) for lamp in located(case)]
        other = photons.light(some, sleeve_of(case), shape(case), case.vessel.length)
        into, taken = absorbed_at(other, c, T)
        rows.append({"law": law, "into_gas": float(into), "absorbed": taken, "used": law == light.law})
    return {"known": bool(known), "rows": rows}


def other_lamps(case, light, c, T):
    """Return what every kind of lamp in the data would give at the same mains power: absorbed photons per joule."""
    first, rows = located(case)[0], []
    for kind in kinds():
        lamp = replace(first, kind=kind, spectrum=None, driver=None, hot_junction=None, emission=None)
        other = photons.light([lamp], sleeve_of(case), shape(case), case.vessel.length)
        mains = next(a.watts for a in other.accounts if a.name == "mains")
        into, taken = absorbed_at(other, c, T)
        rows.append({"kind": kind, "into_gas": float(into / mains), "absorbed": taken / mains})
    return sorted(rows, key=lambda row: -row["absorbed"])


def merit(case, profile, results, gas):
    """Return the figures of merit of the trade; definitions stand beside them in the report."""
    made = np.maximum(profile.outlet.moles - profile.fed, 0.0)
    chloride = figures.chlorinated(gas)
    moles, mass = float(made[chloride].sum()), float((made * gas.molar_mass)[chloride].sum())
    mains = results["light_electrical"]["value"]
    absorbed = profile.total("photons")
    entering = profile.total("photons") + profile.total("outer_wall")

    def over(x, y):
        return x / y if y > 0 else None

    return {
        "photons_per_mole": over(absorbed, moles), "photonic_efficiency": over(moles, entering),
        "quantum_yield": results["quantum_yield"]["value"], "chain_length": results["chain_length"]["value"],
        "energy_per_mass": over(mains, mass), "space_time_yield": over(moles, profile.volume),
        "photochemical_yield": over(moles, mains), "absorbed_per_joule": over(absorbed, mains),
        "utilisation": over(absorbed, entering),
    }  # fmt: skip


def along(light, profile):
    """Return where along one tube the light enters and how fast chlorine is split."""
    if profile.kind != "plug flow":
        return {"z": [], "entering": [], "J": []}
    z = profile.z
    mean = light.entering.sum() / light.edges[-1]
    if light.along is not None:
        entering = mean * light.along(z)[0]
    else:
        number = np.clip(np.searchsorted(light.edges, z, side="right") - 1, 0, len(light.into_gas) - 1)
        entering = light.into_gas.sum(axis=1)[number]
    return {"z": z.tolist(), "entering": np.asarray(entering).tolist(), "J": profile.photolysis.tolist()}


def pool_bracket(profile, mixed, gas):
    """Return slip and hottest gas with local pools and with one mixed pool; None where only one was asked for."""
    if mixed is None:
        return None
    found = {}
    for name, one in (("local", profile), ("mixed", mixed)):
        chlorine = gas.index["Cl2"]
        found[name] = {"chlorine_slip": float(one.outlet.moles[chlorine] / one.fed[chlorine]),
                       "temperature_hottest": float(one.hottest[0]), "photons_absorbed": one.total("photons")}
    return found


def sheet(case, light, results):
    """Return what a maker of lamps is asked for, each vessel."""
    low, high = light.spectrum.wavelength.min(), light.spectrum.wavelength.max()
    watts = {a.name: a.watts for a in light.accounts}
    heat = float(np.diff(light.edges) @ light.sleeve_heat)
    flow = float(light.entering.sum())
    return {
        "lamps": [
            {"kind": lamp.kind or f"own spectrum ({lamp.spectrum})", "number": lamp.number, "power": lamp.power,
             "arc": lamp.lit_to - lamp.lit_from, "from": lamp.lit_from, "to": lamp.lit_to,
             "end_of_life": lamp.end_of_life} for lamp in located(case)
        ],
        "band": (float(low), float(high)), "vessels": case.vessel.vessels, "tubes": light.shape.tubes,
        "photons": flow, "power_into_gas": watts["into gas"], "radiant": watts["radiant"],
        "mean_energy": watts["into gas"] / flow if flow > 0 else None,
        "wavelength": float(photon_energy(1.0) / (watts["into gas"] / flow)) if flow > 0 else None,
        "heat_to_sleeve": heat, "skin": results["sleeve_skin_temperature"]["value"],
        "bore": light.shape.bore, "inner": light.shape.immersed,
    }  # fmt: skip
