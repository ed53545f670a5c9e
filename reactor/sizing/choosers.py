"""
Which lamp and which gap.

Electrical power for the same duty, each combination searched on the full model.
"""

import math

import numpy as np

from reactor import case as cases
from reactor.errors import ReactorError
from reactor.photons.lamps import kinds as lamp_kinds
from reactor.rating.hand import space
from reactor.rating.judge import thickness
from reactor.rating.plant import lamps as light_of
from reactor.sizing.light import needed, stretched
from reactor.sizing.side_by_side import remade

GAPS = (0.01, 0.02, 0.035, 0.05, 0.08, 0.12)  # m
OWN = (
    "driver",
    "hot_junction",
    "emission",
    "end_of_life",
    "spectrum",
)  # of the old lamp, taken out for another kind


def lamps(case, probe, result, options):
    """Return the electrical power that every kind of lamp in the data asks for, best first."""
    rows = [row for kind in lamp_kinds() if (row := _row(of_kind(case, kind), kind, probe)) is not None]
    rows.sort(key=lambda row: (row["electrical"] is None, row["electrical"] or 0.0))
    best = rows[0]
    said = [
        f"least mains power: {best['lamp']}; every kind with the factors of its own entry in the data, at its end of life"
    ]
    poor = [row["lamp"] for row in rows if row["electrical"] is None or row["electrical"] > 10 * best["electrical"]]
    if poor:
        said.append(f"of no use here: {', '.join(poor)}")
    return {"title": "which lamp", "slip": probe["chlorine_slip"], "rows": rows, "remarks": said}


def gaps(case, probe, result, options):
    """
    Return the electrical power by gap at the same gas volume.

    For the lamp of the case and two common kinds.
    """
    if case.vessel.geometry != "annulus":
        said = ["gaps are compared in plug flow, where one sleeve stands in one shell"]
        return {"title": "which gap", "slip": probe["chlorine_slip"], "rows": [], "remarks": said}
    own = case.lamp[0].kind if case.lamp else None
    wanted = dict.fromkeys(k for k in (own, "LED 365 nm", "medium-pressure mercury") if k)
    rows = []
    for kind in wanted:
        lit = case if kind == own else of_kind(case, kind)
        for gap in GAPS:
            row = _row(of_gap(lit, gap), kind, probe)
            rows += [] if row is None else [row]
    known = [row for row in rows if row["electrical"]]
    said = ["the gas volume is held: a narrower gap makes a longer vessel"]
    if known:
        best = min(known, key=lambda row: row["electrical"])
        said.append(
            f"least mains power: {best['lamp']} with a gap of {best['gap'] * 1e3:.0f} mm, optical depth "
            f"{best['depth']:.2g} at the richest station; thinner wastes light on the wall, thicker "
            f"leaves the far "
            "side dark and one temperature means less"
        )
    return {"title": "which gap", "slip": probe["chlorine_slip"], "rows": rows, "remarks": said}


def of_kind(case, kind):
    """Return the case with all lamps of another kind, at the same mains power."""

    def edit(tree):
        for entry in tree["lamp"]:
            for key in OWN:
                entry.pop(key, None)
            entry["kind"] = kind

    return remade(case, edit)


def of_gap(case, gap):
    """Return the case with another gas gap and the same gas volume; None when it cannot be built."""
    inside, outside = case.sleeve.outside / 2, case.vessel.shell_inside / 2
    new = inside + gap
    factor = (outside**2 - inside**2) / (new**2 - inside**2)
    try:
        return stretched(cases.changed(case, [f"vessel.shell_inside={2 * new:.10g} m"]), factor)
    except ReactorError:
        return None


def _row(case, kind, probe):
    """Return what one lamp in one gap needs for the slip of the probe."""
    if case is None:
        return None
    gap = space(case)[0]
    try:
        start = _strength(probe.case) / max(_strength(case), 1e-300)
        found = needed(case, probe["chlorine_slip"], max(start, 1e-4), most=9)[1] if start < 1e4 else None
    except ReactorError:
        found = None
    row = {
        "lamp": kind,
        "gap": gap,
        "electrical": None,
        "into_gas": None,
        "absorbed": None,
        "depth": None,
        "length": case.vessel.length,
        "hottest": None,
    }
    if found is None:
        return row
    return row | {
        "electrical": found["light_electrical"],
        "into_gas": found["light_into_gas"],
        "absorbed": found["light_absorbed"],
        "depth": thickness(found.plant, found.profile),
        "hottest": found["temperature_hottest"],
    }


def _strength(case):
    """
    Return the rate of photolysis that the lamps give in thin gas at 400 K, times the volume.

    Where a search begins.
    """
    light = light_of(case)
    if not len(light.wavelength):
        return 0.0
    sigma = light.sigma @ ((400.0 - 550.0) / 350.0) ** np.arange(light.sigma.shape[1])
    return math.fsum(light.entering * sigma) * light.path / light.area * case.vessel.vessels
