"""
Stirred tank, tanks in series and plug flow side by side.

The same gas volume, the same lamps, the same feed.
"""

import copy

from reactor.case.reader import build
from reactor.case.schema import TANKS
from reactor.errors import CaseError, ReactorError
from reactor.rating.plant import radii, sleeves
from reactor.sizing import loop
from reactor.sizing.data import practice
from reactor.sizing.light import needed

NUMBERS = (1, 3, 10)  # tanks that share the volume


def remade(case, edit):
    """Return the case that its own text stands for after `edit(tree)` has changed it."""
    tree = copy.deepcopy(case.tree)
    edit(tree)
    return build(tree, case.folder, (), False, case.name, {})


def as_tanks(case, number):
    """Return a case as `number` equal stirred tanks in series, volume and lamps shared out evenly."""

    def edit(tree):
        vessel = tree["vessel"]
        vessel.pop("geometry", None)
        vessel["kind"] = "tanks in series" if number > 1 else "stirred tank"
        total = case.vessel.tanks * case.vessel.length
        vessel["length"] = f"{total / number:.12g} m"
        vessel.pop("tanks", None)
        if number > 1:
            vessel["tanks"] = number
        vessel.setdefault("stirring", f"{practice('stirring'):g} 1/s")
        tree.pop("inject", None)
        _lamps(tree, case, case.vessel.tanks / number, total / number)

    return remade(case, edit)


def as_tube(case):
    """Return a case of tanks as plug flow: one annulus round every sleeve, as long as the tanks together."""
    if case.vessel.kind not in TANKS:
        return case
    outside = radii(case)[1]
    count, length = sleeves(case), case.vessel.tanks * case.vessel.length

    def edit(tree):
        vessel = tree["vessel"]
        for key in ("stirring", "impeller", "start", "tanks"):
            vessel.pop(key, None)
        vessel |= {
            "kind": "plug flow",
            "geometry": "annulus",
            "shell_inside": f"{2 * outside:.12g} m",
            "length": f"{length:.12g} m",
            "parallel": case.vessel.parallel * count,
        }
        tree["sleeve"].pop("number", None)
        for entry, lamp in zip(tree.get("lamp", []), case.lamp, strict=True):
            entry["number"] = 1
            entry["power"] = f"{lamp.power * lamp.number * case.vessel.tanks / count:.12g} W"
            entry["lit_from"], entry["lit_to"] = "0 m", f"{length:.12g} m"

    return remade(case, edit)


def _lamps(tree, case, share, length):
    for entry, lamp in zip(tree.get("lamp", []), case.lamp, strict=True):
        entry["power"] = f"{lamp.power * share:.12g} W"
        entry["lit_from"], entry["lit_to"] = "0 m", f"{length:.12g} m"


def kinds(case, probe, result, options):
    """Return for every kind of vessel its slip and poly share, and the lamp power for the same slip."""
    if case.vessel.geometry not in (None, "annulus"):
        raise CaseError(f"--show kinds: compares an annulus with tanks; this case is a {case.vessel.geometry}")
    slip = probe["chlorine_slip"]
    rows: list[dict] = []
    for number in (*NUMBERS, None):
        name = "plug flow" if number is None else f"{number} stirred tank{'s' if number > 1 else ''}"
        other = as_tube(case) if number is None else as_tanks(case, number)
        try:
            found = loop.probe(other)
        except ReactorError as error:
            rows.append(
                {
                    "kind": name,
                    "slip": None,
                    "poly": None,
                    "hottest": None,
                    "electrical": None,
                    "electrical_same_slip": None,
                    "searched": False,
                    "why": str(error),
                }
            )
            continue
        there = needed(other, slip)[1] if case.lamp else None
        rows.append(
            {
                "kind": name,
                "slip": found["chlorine_slip"],
                "poly": found["poly_share_mol"],
                "hottest": found["temperature_hottest"],
                "electrical": found["light_electrical"],
                "electrical_same_slip": None if there is None else there["light_electrical"],
                "searched": bool(case.lamp),
                "poly_same_slip": None if there is None else there["poly_share_mol"],
                "worst_chlorine": float(found.profile.concentrations[:, found.gas.index["Cl2"]].max()),
                "why": "",
            }
        )
    return {"slip": slip, "volume": probe.profile.volume, "rows": rows, "remarks": words(rows, slip)}


def words(rows, slip):
    """Say what the table means."""
    tank, tube = rows[0], rows[-1]
    said = []
    if tank["poly"] and tube["poly"]:
        said.append(
            f"one stirred tank makes {tank['poly'] / tube['poly']:.2g} times the poly share of plug "
            f"flow: all gas sees "
            "the products"
        )
    if tube["electrical_same_slip"]:
        if tank["electrical_same_slip"]:
            times = tank["electrical_same_slip"] / tube["electrical_same_slip"]
            said.append(
                f"for a slip of {100 * slip:.3g} % it asks for {times:.3g} times the lamp power: all "
                f"gas is at the "
                "chlorine of the outlet, where light works worst"
            )
        else:
            said.append(f"a slip of {100 * slip:.3g} % is out of its reach with any lamp")
    said.append(
        "what the tank gives: one temperature, no hot spot, and feed diluted at once by back-mixing, "
        "far from the "
        "explosive range inside the vessel; the feed pipe and its injector keep theirs"
    )
    return said
