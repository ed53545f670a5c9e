"""The verdicts: each one a word, the figure it rests on, its limit, and why."""

import numpy as np

from reactor.hazards.explosive import Class
from reactor.rating.closures import flat
from reactor.rating.figures import START_SHARE
from reactor.rating.limits import dew_point, pressure, shares, shell, sleeve_skin, slip
from reactor.result import CAUTION, FAIL, NOT_ASSESSED, OUT, PASS, Verdict

ADIABATIC = 0.3  # transfer units below which a tube is close to adiabatic
PYROLYSIS = 700.0  # K; above it the mechanism lacks pyrolysis and loss of HCl
SIGMA_FITTED, SIGMA_LIMIT = 300.0, 600.0  # K; cross-sections: fitted range, declared extrapolation limit
NARROW = 20.0  # K; a rate constant measured over less is known at one temperature
THICK, STIRRED = 1.0, 1e4  # optical thickness and Reynolds number between which one temperature understates
UNEVEN = 0.9


def verdicts(case, plant, profile, results, gaps, dangers):
    """Return all verdicts of a rated case."""
    seen = (case, plant, profile, results)
    return (
        closures(gaps),
        *reaction(results),
        data_range(*seen),
        explosive_range(results),
        exotherm(*seen),
        light_off(results),
        heat_removal(*seen),
        slip(case, results),
        *shares(case, results),
        pressure(case, results),
        light(*seen),
        sleeve_skin(*seen),
        dew_point(results),
        shell(*seen),
    )


def closures(gaps):
    """Judge whether every balance closes."""
    rows = flat(gaps)
    name, gap, limit = max(rows, key=lambda row: row[1] / row[2])
    word = PASS if gap <= limit else FAIL
    return Verdict("closures", word, f"worst {name} {gap:.1e}", f"{limit:.0e}", "")


def data_range(case, plant, profile, results):
    """Judge whether rates, cross-sections and thermo are used where their sources hold."""
    hottest, low = profile.hottest[0], min(profile.temperature.min(), profile.hottest[0])
    figure = f"{hottest - 273.15:.0f} degC"
    if profile.kind == "plug flow":
        figure = f"{low - 273.15:.0f} to {figure}"
    rates = rate_range(plant.gas, low, hottest)
    if hottest > PYROLYSIS:
        return Verdict(
            "data range",
            OUT,
            figure,
            f"{PYROLYSIS - 273.15:.0f} degC",
            _join("pyrolysis and loss of HCl are not in the mechanism", rates),
        )
    if hottest > SIGMA_LIMIT and case.lamp:
        return Verdict(
            "data range",
            OUT,
            figure,
            f"{SIGMA_LIMIT - 273.15:.0f} degC",
            _join("cross-sections are used beyond their extrapolation limit", rates),
        )
    warm = hottest > SIGMA_FITTED and case.lamp
    why = _join("cross-sections are extrapolated above 27 degC" if warm else "", rates)
    return Verdict("data range", CAUTION if why else PASS, figure, "", why)


def rate_range(gas, low, high):
    """Say how many rate constants are known at one temperature only, how many are used out of range."""
    coldest, hottest = gas.valid[:, 0], gas.valid[:, 1]
    beyond = (coldest > low + 0.5) | (hottest < high - 0.5)
    single = beyond & (hottest - coldest < NARROW)
    if not beyond.any():
        return ""
    return (
        f"of {len(gas.equations)} rate constants {single.sum()} are known near 298 K only and "
        f"{(beyond & ~single).sum()} more are used beyond the range of their source: see reactor sources"
    )


def _join(*parts):
    return "; ".join(part for part in parts if part)


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
        return Verdict(
            "explosive range",
            NOT_ASSESSED if worst != Class.MARGIN else CAUTION,
            f"{worst} at {where}",
            "",
            "meter errors are not stated in [meters]: corners not assessed",
        )
    if worst == Class.MARGIN or any(m["calculated_only"] for m in mixtures):
        why = "" if worst == Class.MARGIN else "the range of at least one fuel is calculated only"
        return Verdict("explosive range", CAUTION, f"{worst} at {where}", "", why)
    return Verdict("explosive range", PASS, worst, "", "an estimate, meter corners included")


def exotherm(case, plant, profile, results):
    """Judge the hottest gas against the stated limit, with the band of U and the cap for thick, slow gas."""
    hottest = results["temperature_hottest"]
    figure, mtsr = f"hottest gas {hottest['value'] - 273.15:.1f} degC", results["mtsr"]["value"]
    reasons = [f"MTSR {mtsr - 273.15:.0f} degC"]
    if case.limits.hottest is None:
        return Verdict("exotherm", NOT_ASSESSED, figure, "", f"limits.hottest is not stated; {reasons[0]}")
    limit = f"{case.limits.hottest - 273.15:.1f} degC"
    high = hottest.get("band", {"high": hottest["value"]})["high"]
    if hottest["value"] > case.limits.hottest:
        return Verdict("exotherm", FAIL, figure, limit, reasons[0])
    if high > case.limits.hottest:
        reasons.append(f"{high - 273.15:.1f} degC at the low end of U")
    if mtsr > case.limits.hottest:
        reasons[0] += ": leftover chlorine, reacting without cooling, would pass the limit"
    tau = thickness(plant, profile)
    if tau > THICK and plant.wall.reynolds < STIRRED and profile.kind == "plug flow":
        reasons.append(
            f"optical thickness {tau:.1f} at Re {plant.wall.reynolds:.0f}: the gas at the sleeve is hotter "
            "than the mean that is printed"
        )
    word = CAUTION if len(reasons) > 1 or mtsr > case.limits.hottest else PASS
    return Verdict("exotherm", word, figure, limit, "; ".join(reasons))


def thickness(plant, profile):
    """Return the optical thickness of the gap, mean over the photons, at the station with most chlorine."""
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
    share = results["thermal_start_share"]["value"] or 0.0
    figure = f"hottest gas {hottest - 273.15:.0f} degC"
    limit = "" if T is None else f"{T - 273.15:.0f} degC"
    if share > START_SHARE:
        return Verdict(
            "thermal light-off",
            CAUTION,
            figure,
            limit,
            f"{100 * share:.0f} % of the chains start by heat: switching the lamp off is no stop, and a "
            "count per photon means nothing (no quantum yield is given)",
        )
    if T is None:
        return Verdict(
            "thermal light-off", NOT_ASSESSED, figure, "", "no light-off temperature was found up to 1000 K"
        )
    if hottest > T:
        return Verdict(
            "thermal light-off",
            CAUTION,
            figure,
            limit,
            "gas this hot with the feed's chlorine still in it runs away in the dark within 10 s: switching "
            "the lamp off may be no stop",
        )
    return Verdict(
        "thermal light-off", PASS, figure, limit, "screening value, dark chain of the unreacted feed, 10 s"
    )


def heat_removal(case, plant, profile, results):
    """Say how far the wall counts."""
    units = results["transfer_units"]["value"]
    U = results["heat_transfer_coefficient"]["value"]
    if case.cooling.mode == "none":
        return Verdict(
            "heat removal",
            CAUTION,
            "none: adiabatic by choice of the case",
            "",
            "all heat stays in the gas; the exotherm verdict judges it",
        )
    figure = f"{units:.2f} transfer units, U {U:.1f} W/m2/K, {plant.wall.regime} gas"
    if profile.kind != "plug flow":
        return Verdict(
            "heat removal",
            CAUTION if plant.wall.band[0] < 0.6 else PASS,
            figure,
            "",
            "film of a stirred gas: known within a factor 2",
        )
    if units < ADIABATIC:
        return Verdict(
            "heat removal", CAUTION, figure, f"{ADIABATIC}", "adiabatic: the wall takes little of the heat"
        )
    return Verdict("heat removal", PASS, figure, f"{ADIABATIC}", "")


def reaction(results):
    """Warn where nothing reacts, and say what can then not be given."""
    if results["adiabatic_rise"]["value"] is not None and results["poly_share_mol"]["value"] is not None:
        return []
    return [
        Verdict(
            "reaction",
            CAUTION,
            "no chlorine reacts",
            "",
            "without reaction there are no shares, no adiabatic rise and no light order",
        )
    ]


def light(case, plant, profile, results):
    """Say how much of the light works, how far one radical pool flatters, and how weak the lamp data are."""
    into, absorbed = results["light_into_gas"]["value"], results["light_absorbed"]["value"]
    if case.chemistry.photolysis_rate is not None:
        figure = f"rate of photolysis typed: {case.chemistry.photolysis_rate:.3g} 1/s"
        return Verdict("light", CAUTION, figure, "", "no light account: what the lamps give does not count")
    if not case.lamp:
        return Verdict("light", CAUTION, "no lamp", "", "what reacts starts by heat")
    share = absorbed / into if into > 0 else 0.0
    reasons = []
    even = evenness(plant, profile)
    if even < UNEVEN and case.chemistry.radicals != "local":
        reasons.append(
            "radicals mixed over the gap make a square-root chain look faster, at the inlet by a factor "
            f"{1 / np.sqrt(even):.2f}"
        )
    if any(
        c.status in ("memory", "estimate") and c.what.startswith(("spectrum", "factors"))
        for c in plant.light.cited
    ):
        reasons.append("lamp data are generic, from memory: put the maker's spectrum in their place")
    if share < 0.2:
        reasons.append("most of the light passes the gas: more volume or a reflecting wall saves lamps")
    return Verdict(
        "light",
        CAUTION if reasons else PASS,
        f"{100 * share:.0f} % of the light in the gas is absorbed",
        "",
        "; ".join(reasons),
    )


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
