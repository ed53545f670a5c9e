"""The verdicts: each one a word, the figure it rests on, its limit, and why."""

import numpy as np

from reactor.hazards import materials
from reactor.hazards.explosive import Class
from reactor.rating.closures import flat
from reactor.rating.plant import plant as equipment_of
from reactor.result import Verdict

PASS, CAUTION, FAIL = "PASS", "CAUTION", "FAIL"
NOT_ASSESSED, OUT = "NOT ASSESSED", "OUT OF DATA RANGE"
ADIABATIC = 0.3  # transfer units below which a tube is close to adiabatic
PYROLYSIS = 700.0  # K; above it the mechanism lacks pyrolysis and loss of HCl
SIGMA_FITTED, SIGMA_LIMIT = 300.0, 600.0  # K; cross-sections: fitted range, declared extrapolation limit
THICK, STIRRED = 1.0, 1e4  # optical thickness and Reynolds number between which one temperature understates
TURNDOWN = 0.2
UNEVEN = 0.9


def verdicts(case, plant, profile, results, gaps, dangers):
    """Return all verdicts of a rated case."""
    seen = (case, plant, profile, results)
    return (
        closures(gaps), data_range(*seen), explosive_range(results), exotherm(*seen), light_off(results),
        heat_removal(*seen), slip(case, results), *shares(case, results), pressure(case, results), light(*seen),
        sleeve_skin(*seen), dew_point(results), shell(*seen),
    )


def closures(gaps):
    """Judge whether every balance closes."""
    rows = flat(gaps)
    name, gap, limit = max(rows, key=lambda row: row[1] / row[2])
    word = PASS if gap <= limit else FAIL
    return Verdict("closures", word, f"worst {name} {gap:.1e}", f"{limit:.0e}", "")


def data_range(case, plant, profile, results):
    """Judge whether rates, cross-sections and thermo are used where their sources hold."""
    T = profile.hottest[0]
    low, high = profile.temperature.min(), T
    rates = np.flatnonzero((plant.gas.valid[:, 0] > low + 0.5) | (plant.gas.valid[:, 1] < high - 0.5))
    why = f"{len(rates)} of {len(plant.gas.equations)} rate constants are used outside the range of their source" \
        if len(rates) else ""
    figure = f"{low - 273.15:.0f} to {high - 273.15:.0f} degC"
    if T > PYROLYSIS:
        return Verdict("data range", OUT, figure, "427 degC",
                       "pyrolysis and loss of HCl are not in the mechanism; " + why)
    if T > SIGMA_LIMIT and case.lamp:
        return Verdict("data range", OUT, figure, "327 degC", "cross-sections beyond their extrapolation limit; " + why)
    if T > SIGMA_FITTED and case.lamp:
        why = "; ".join(filter(None, ("cross-sections are extrapolated above 27 degC", why)))
    return Verdict("data range", CAUTION if why else PASS, figure, "", why)


def explosive_range(results):
    """Judge the worst class of feeds, inlet, injectors and stations, meter corners included."""
    mixtures = results["mixtures"]
    assessed = any(m["class_worst_corner"] for m in mixtures)
    words = [(m["class_worst_corner"] or m["class"], m["where"]) for m in mixtures]
    worst, where = max(words, key=lambda item: Class(item[0]).rank)
    if Class(worst).rank >= Class.UNKNOWN.rank:
        why = "UNKNOWN counts as INSIDE" if worst == Class.UNKNOWN else "inside the estimated explosive range"
        return Verdict("explosive range", FAIL, f"{worst} at {where}", "", why)
    if not assessed:
        return Verdict("explosive range", NOT_ASSESSED if worst != Class.MARGIN else CAUTION, f"{worst} at {where}", "",
                       "meter errors are not stated in [meters]: corners not assessed")
    if worst == Class.MARGIN or any(m["calculated_only"] for m in mixtures):
        why = "" if worst == Class.MARGIN else "the range of at least one fuel is calculated only"
        return Verdict("explosive range", CAUTION, f"{worst} at {where}", "", why)
    return Verdict("explosive range", PASS, worst, "", "an estimate, meter corners included")


def exotherm(case, plant, profile, results):
    """Judge the hottest gas against the stated limit, with the band of U and the cap for thick, slow gas."""
    hottest = results["temperature_hottest"]
    figure = f"hottest gas {hottest['value'] - 273.15:.1f} degC, MTSR {results['mtsr']['value'] - 273.15:.0f} degC"
    if case.limits.hottest is None:
        return Verdict("exotherm", NOT_ASSESSED, figure, "", "limits.hottest is not stated")
    limit = f"{case.limits.hottest - 273.15:.1f} degC"
    high = hottest.get("band", {"high": hottest["value"]})["high"]
    if hottest["value"] > case.limits.hottest:
        return Verdict("exotherm", FAIL, figure, limit, "")
    reasons = []
    if high > case.limits.hottest:
        reasons.append(f"{high - 273.15:.1f} degC at the low end of U")
    if results["mtsr"]["value"] > case.limits.hottest:
        reasons.append("leftover chlorine, reacting without cooling, would pass the limit")
    tau = thickness(plant, profile)
    if tau > THICK and plant.wall.reynolds < STIRRED and profile.kind == "plug flow":
        reasons.append(f"optical thickness {tau:.1f} at Re {plant.wall.reynolds:.0f}: the gas at the sleeve is hotter "
                       "than the mean that is printed")
    return Verdict("exotherm", CAUTION if reasons else PASS, figure, limit, "; ".join(reasons))


def thickness(plant, profile):
    """Return the optical thickness of the gap in the strongest line at the station with most chlorine."""
    light = plant.light
    if not len(light.wavelength):
        return 0.0
    c = profile.concentrations[:, profile.species.index("Cl2")]
    i = int(c.argmax())
    t = np.clip((profile.temperature[i] - 550.0) / 350.0, -1.0, 1.0)
    sigma = light.sigma @ t ** np.arange(light.sigma.shape[1])
    weight = light.entering / max(light.entering.sum(), 1e-300)
    return float(weight @ sigma * 6.02214076e23 * c[i] * light.path)


def light_off(results):
    """Judge whether the hottest gas lies below the temperature where the dark chain needs no lamp."""
    T, hottest = results["light_off_temperature"]["value"], results["temperature_hottest"]["value"]
    if T is None:
        return Verdict("thermal light-off", NOT_ASSESSED, "", "", "no light-off temperature was found up to 1000 K")
    figure, limit = f"hottest gas {hottest - 273.15:.0f} degC", f"{T - 273.15:.0f} degC"
    share = results["thermal_start_share"]["value"] or 0.0
    if hottest > T or share > 0.1:
        return Verdict("thermal light-off", CAUTION, figure, limit,
                       f"{100 * share:.0f} % of the chains start by heat: switching the lamp off is no stop")
    return Verdict("thermal light-off", PASS, figure, limit, "screening value, dark chain of the unreacted feed, 10 s")


def heat_removal(case, plant, profile, results):
    """Say how far the wall counts."""
    units = results["transfer_units"]["value"]
    U = results["heat_transfer_coefficient"]["value"]
    figure = f"{units:.2f} transfer units, U {U:.1f} W/m2/K, {plant.wall.regime}"
    if profile.kind == "stirred tank":
        return Verdict("heat removal", CAUTION if plant.wall.band[0] < 0.6 else PASS, figure, "",
                       "film of a stirred gas: known within a factor 2")
    if units < ADIABATIC:
        return Verdict("heat removal", CAUTION, figure, f"{ADIABATIC}", "adiabatic: the wall takes little of the heat")
    return Verdict("heat removal", PASS, figure, f"{ADIABATIC}", "")


def slip(case, results):
    """Judge the chlorine slip against its limit, with the band of U."""
    return _against("chlorine slip", results["chlorine_slip"], case.limits.chlorine_slip)


def shares(case, results):
    """Judge the poly shares against their limits, where there are any."""
    pairs = (("poly share by mol", "poly_share_mol"), ("poly share by mass", "poly_share_mass"))
    return [_against(name, results[key], getattr(case.limits, key)) for name, key in pairs
            if getattr(case.limits, key) is not None]


def _against(name, record, limit):
    value = record["value"]
    figure = "none" if value is None else f"{100 * value:.3g} %"
    if limit is None:
        return Verdict(name, NOT_ASSESSED, figure, "", f"no limit is stated for the {name}")
    if value is None or value > limit:
        return Verdict(name, FAIL, figure, f"{100 * limit:.3g} %", "")
    high = record.get("band", {"high": value})["high"]
    why = f"{100 * high:.3g} % within the band of U" if high > limit else ""
    return Verdict(name, CAUTION if why else PASS, figure, f"{100 * limit:.3g} %", why)


def pressure(case, results):
    """Judge the pressure drop."""
    drop, limit = results["pressure_drop"]["value"], case.limits.pressure_drop
    figure = f"{drop / 100:.3g} mbar"
    if limit is None:
        return Verdict("pressure drop", NOT_ASSESSED, figure, "", "limits.pressure_drop is not stated")
    return Verdict("pressure drop", PASS if drop <= limit else FAIL, figure, f"{limit / 100:.3g} mbar", "")


def light(case, plant, profile, results):
    """Say how much of the light works, how far one radical pool flatters, and how weak the lamp data are."""
    into, absorbed = results["light_into_gas"]["value"], results["light_absorbed"]["value"]
    if not case.lamp:
        return Verdict("light", CAUTION, "no lamp", "", "the rate of photolysis is typed or nought")
    share = absorbed / into if into > 0 else 0.0
    reasons = []
    even = evenness(plant, profile)
    if even < UNEVEN:
        reasons.append(f"one mixed radical pool overstates a square-root chain by up to {1 / np.sqrt(even):.2f} at the "
                       "inlet")
    if any(c.status in ("memory", "estimate") and c.what.startswith(("spectrum", "factors")) for c in plant.light.cited):
        reasons.append("lamp data are generic, from memory: replace them by the maker's spectrum")
    if share < 0.2:
        reasons.append("most of the light passes the gas: volume or a reflecting wall saves lamps")
    return Verdict("light", CAUTION if reasons else PASS, f"{100 * share:.0f} % of the light in the gas is absorbed", "",
                   "; ".join(reasons))


def evenness(plant, profile):
    """Return <sqrt J>^2/<J> across the gap where most chlorine is."""
    light = plant.light
    if not len(light.wavelength):
        return 1.0
    c = profile.concentrations[:, profile.species.index("Cl2")]
    i = int(c.argmax())
    t = np.clip((profile.temperature[i] - 550.0) / 350.0, -1.0, 1.0)
    sigma = light.sigma @ t ** np.arange(light.sigma.shape[1])
    tau = sigma * 6.02214076e23 * c[i] * light.path
    return light.unevenness(tau, light.entering * sigma)


def sleeve_skin(case, plant, profile, results):
    """Judge the sleeve's skin at full flow and at turn-down against the stated or the hot-surface limit."""
    skin = results["sleeve_skin_temperature"]["value"]
    if skin is None:
        return Verdict("sleeve skin", NOT_ASSESSED, "", "", "no lit sleeve")
    low = equipment_of(case, plant.gas, plant.light, flow=TURNDOWN).wall.skin(profile.hottest[0])[0]
    fuels = [s for s, n in zip(plant.gas.species, profile.fed, strict=True)
             if n > 1e-3 * profile.fed.sum() and s in ("CH4", "C2H6", "C3H8", "CH3Cl", "CH2Cl2", "C2H5Cl")]
    limit = case.limits.sleeve_skin or materials.hot_surface_limit(fuels)
    figure = f"{skin - 273.15:.0f} degC, {low - 273.15:.0f} degC at 20 % flow"
    why = "" if case.limits.sleeve_skin else "limit from recalled ignition temperatures (memory)"
    word = FAIL if skin > limit else CAUTION if low > limit else PASS
    return Verdict("sleeve skin", word, figure, f"{limit - 273.15:.0f} degC", why)


def dew_point(results):
    """Judge the distance of the coldest surface from the dew point."""
    margin = results["dew_point_margin"]["value"]
    if margin is None:
        return Verdict("dew point", PASS, "nothing condenses above -100 degC", "", "")
    word = FAIL if margin < 0 else CAUTION if margin < 10 else PASS
    return Verdict("dew point", word, f"{margin:.0f} K above it", "10 K", "ideal mixture (Raoult), coldest wall = coolant")


def shell(case, plant, profile, results):
    """Judge the shell's material in dry chlorine against the hottest gas that touches it."""
    stated = case.vessel.shell_material
    if stated == "not stated":
        return Verdict("shell material", NOT_ASSESSED, "", "", "vessel.shell_material is not stated")
    found = [m for m in materials.material_limits() if m.material == stated and "dry" in m.service]
    found = [m for m in found if np.isfinite(m.temperature)]
    if not found:
        return Verdict("shell material", NOT_ASSESSED, stated, "", "no temperature limit in dry chlorine on record")
    limit, hottest = found[0].temperature, profile.hottest[0]
    wall = "gas temperature taken for the wall's"
    word = PASS if hottest <= limit else CAUTION
    return Verdict("shell material", word, f"{stated}, gas up to {hottest - 273.15:.0f} degC",
                   f"{limit - 273.15:.0f} degC", f"{wall}; limit: {found[0].cited.status}")
