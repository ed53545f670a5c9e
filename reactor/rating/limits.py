"""The verdicts that hold one figure against one limit."""

import numpy as np

from reactor.hazards import materials
from reactor.rating.plant import TURNDOWN
from reactor.rating.plant import plant as equipment_of
from reactor.result import CAUTION, FAIL, NOT_ASSESSED, PASS, Verdict

DEW_MARGIN = 10.0  # K; a surface closer to the dew point is near enough to be wet
SKIN_FUELS = ("CH4", "C2H6", "C3H8", "CH3Cl", "CH2Cl2", "C2H5Cl")  # that have an ignition temperature on record


def slip(case, results):
    """Judge the chlorine slip against its limit, with the band of U."""
    return _against("chlorine slip", results["chlorine_slip"], case.limits.chlorine_slip)


def shares(case, results):
    """Judge the poly shares against their limits, where there are any."""
    pairs = (("poly share by mol", "poly_share_mol"), ("poly share by mass", "poly_share_mass"))
    return [
        _against(name, results[key], getattr(case.limits, key))
        for name, key in pairs
        if getattr(case.limits, key) is not None
    ]


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
    figure = f"{drop / 100:.2g} mbar"
    if limit is None:
        return Verdict("pressure drop", NOT_ASSESSED, figure, "", "limits.pressure_drop is not stated")
    return Verdict("pressure drop", PASS if drop <= limit else FAIL, figure, f"{limit / 100:.3g} mbar", "")


def sleeve_skin(case, plant, profile, results):
    """Judge the sleeve's skin at full flow and at turn-down against the stated or the hot-surface limit."""
    skin = results["sleeve_skin_temperature"]["value"]
    if skin is None:
        return Verdict("sleeve skin", NOT_ASSESSED, "", "", "no lit sleeve")
    low = equipment_of(case, plant.gas, plant.light, flow=TURNDOWN).wall.skin(profile.hottest[0])[0]
    fuels = [
        s
        for s, n in zip(plant.gas.species, profile.fed, strict=True)
        if n > 1e-3 * profile.fed.sum() and s in SKIN_FUELS
    ]
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
    word = FAIL if margin < 0 else CAUTION if margin < DEW_MARGIN else PASS
    return Verdict(
        "dew point",
        word,
        f"coldest surface {margin:.0f} K above it"
        if margin >= 0
        else f"coldest surface {-margin:.0f} K below it",
        "10 K",
        "ideal mixture (Raoult); the coldest surface is as cold as the coolant or the gas",
    )


def shell(case, plant, profile, results):
    """Judge the shell's material in dry chlorine and HCl against the hottest gas that touches it."""
    stated = case.vessel.shell_material
    if stated == "not stated":
        return Verdict("shell material", NOT_ASSESSED, "", "", "vessel.shell_material is not stated")
    found = [
        m for m in materials.material_limits() if m.material == stated and not m.service.startswith("wet")
    ]
    found = [m for m in found if np.isfinite(m.temperature)]
    if not found:
        return Verdict(
            "shell material", NOT_ASSESSED, stated, "", "no temperature limit in chlorine on record"
        )
    limit, hottest = found[0].temperature, profile.hottest[0]
    word = PASS if hottest <= limit else CAUTION
    return Verdict(
        "shell material",
        word,
        f"{stated}, gas up to {hottest - 273.15:.0f} degC",
        f"{limit - 273.15:.0f} degC",
        f"the wall counts as hot as the gas; limit: {found[0].cited.status}",
    )
