"""What keys must agree on with one another, and the defaults that follow from other sections."""

from reactor.case import feeds
from reactor.case.schema import GEOMETRIES, TANKS
from reactor.case.values import Listed

COOLANT = Listed("a cooling medium", "heat/coolants.csv", "medium")
SLEEVE = Listed("a sleeve material", "photons/windows.csv", "material")


def apply(draft, parts, feed):
    """Check a case across its sections and fill what depends on more than one of them."""
    vessel = parts.get("vessel", {})
    _vessel(draft, vessel)
    _geometry(draft, vessel)
    for number, lamp in enumerate(parts["lamp"], start=1):
        _lamp(draft, lamp, f"lamp.{number}", vessel.get("length"))
    _sleeve(draft, parts, vessel)
    _cooling(draft, parts["cooling"])
    _inject(draft, parts["inject"], feed, vessel)
    chemistry = parts["chemistry"]
    if chemistry.get("wall_loss") is not None and chemistry.get("wall_sticking") is not None:
        draft.fault("chemistry.wall_sticking", "wall_loss is given too; write one of the two")


def _vessel(draft, vessel):
    """Check the vessel against its kind."""
    if "kind" not in vessel:
        return
    if vessel["kind"] == "tanks in series" and "vessel.tanks" not in draft.typed:
        draft.fault("vessel.tanks", "missing; write how many, like tanks = 3; sizes are of each tank")
    if vessel["kind"] != "tanks in series" and vessel.get("tanks", 1) != 1:
        draft.fault("vessel.tanks", 'belongs to kind = "tanks in series"')
    if vessel["kind"] in TANKS:
        if "stirring" in vessel and vessel["stirring"] is None:
            draft.fault("vessel.stirring", 'missing; a stirred tank needs it; write it like "300 rpm"')
        if vessel.get("geometry"):
            draft.fault("vessel.geometry", "belongs to plug flow; take it out of a stirred tank")
        return
    if "geometry" in vessel and vessel["geometry"] is None:
        words = ", ".join(f'"{word}"' for word in GEOMETRIES)
        draft.fault("vessel.geometry", f"missing; write one of {words}")
    for name in ("stirring", "impeller", "start"):
        if f"vessel.{name}" in draft.typed:
            draft.fault(f"vessel.{name}", "belongs to a stirred tank; take it out of plug flow")


NEEDED = {
    None: ("shell_inside",),
    "annulus": ("shell_inside",),
    "tube beside lamp": ("shell_inside", "axis_distance"),
    "tubes around lamp": ("shell_inside", "axis_distance", "ring"),
    "lamps around tube": ("shell_inside", "axis_distance"),
    "channel": ("gap", "width"),
}
BELONGS = {
    "shell_inside": (None, *GEOMETRIES[:4]), "axis_distance": GEOMETRIES[1:4], "ring": ("tubes around lamp",),
    "reflector": GEOMETRIES[1:4], "reflector_size": GEOMETRIES[1:4], "reflectance": GEOMETRIES[1:4],
    "gap": ("channel",), "width": ("channel",), "lit_sides": ("channel",), "lamp_circle": (None,),
    "lamp_passes": ("annulus",), "wall_reflectance": (None, "annulus", "channel"),
}  # fmt: skip
REFLECTORS = {"flat": ("tube beside lamp",), "elliptical": ("tube beside lamp",), "circular": GEOMETRIES[2:4]}
LIKE = {"shell_inside": "154 mm", "axis_distance": "80 mm", "gap": "20 mm", "width": "200 mm", "ring": "6"}


def _geometry(draft, vessel):
    """Check that the geometry has what it needs and nothing of another one."""
    word = vessel.get("geometry")
    tank = vessel.get("kind") in TANKS
    if "kind" not in vessel or (word is None and not tank):
        return
    name = word or "stirred tank"
    for key in NEEDED[word]:
        if key in vessel and vessel[key] is None:
            mark = "" if key == "ring" else '"'
            draft.fault(f"vessel.{key}", f"missing; {name} needs it; write it like {mark}{LIKE[key]}{mark}")
    for key, words in BELONGS.items():
        if word not in words and f"vessel.{key}" in draft.typed:
            draft.fault(f"vessel.{key}", f"does not belong to {name}; take it out")
    _reflector(draft, vessel, word)


def _reflector(draft, vessel, word):
    """Check a reflector: kind, size and reflectance."""
    kind = vessel.get("reflector", "none")
    if kind == "none":
        return
    if word not in REFLECTORS[kind]:
        draft.fault("vessel.reflector", f'"{kind}" belongs to {", ".join(REFLECTORS[kind])}')
    size, distance, bore = vessel.get("reflector_size"), vessel.get("axis_distance"), vessel.get("shell_inside")
    if size is None:
        what = {"flat": "lamp axis to mirror", "elliptical": "half of the long axis", "circular": "radius"}[kind]
        draft.fault("vessel.reflector_size", f'missing; {what}; write it like "120 mm"')
    elif distance and bore and kind != "flat" and size <= distance * (0.5 if kind == "elliptical" else 1.0) + bore / 2:
        draft.fault("vessel.reflector_size", f"{size:g} m does not go round lamp and tube")
    if vessel.get("reflectance") is None:
        draft.fault("vessel.reflectance", 'missing; write the reflectance of the mirror, like "85 %"')


def _lamp(draft, lamp, key, length):
    """Check one lamp entry and fill the end of its lit length."""
    if "kind" in lamp and "spectrum" in lamp:
        if lamp["kind"] and lamp["spectrum"]:
            draft.fault(f"{key}.spectrum", "kind is given too; write one of the two")
        if not lamp["kind"] and not lamp["spectrum"]:
            draft.fault(f"{key}.kind", 'missing; write a kind, like "LED 365 nm", or spectrum = "mine.csv"')
    if "lit_to" in lamp and lamp["lit_to"] is None and length is not None:
        lamp["lit_to"] = draft.assume(f"{key}.lit_to", length, "lit to the outlet", "m")
    start, stop = lamp.get("lit_from"), lamp.get("lit_to")
    if length is not None and stop is not None and stop > length:
        draft.fault(f"{key}.lit_to", f"{stop:g} m lies beyond the vessel, which ends at {length:g} m")
    elif start is not None and stop is not None and start >= stop:
        draft.fault(f"{key}.lit_from", f"{start:g} m is not before lit_to, {stop:g} m")


def _sleeve(draft, parts, vessel):
    """Check that there is a sleeve where one is needed and that it fits into the shell."""
    sleeve, lamps = parts["sleeve"], parts["lamp"]
    if sleeve is None:
        if (lamps or vessel.get("kind") == "plug flow") and "sleeve" not in parts["faulty"]:
            draft.fault("sleeve", "this section is missing; write [sleeve] and its keys")
        return
    tank = vessel.get("kind") in TANKS
    outer = vessel.get("geometry") not in (None, "annulus")
    if "outside" in sleeve and sleeve["outside"] is None and not outer:
        draft.fault("sleeve.outside", 'missing; write a length, like "60 mm"')
    if outer and "sleeve.outside" in draft.typed:
        draft.fault("sleeve.outside", "the window is the wall of the gas space here; give its thickness only")
    if (sleeve.get("film") is None) != (sleeve.get("film_thickness") is None):
        draft.fault("sleeve.film", 'film and film_thickness belong together, like "evaporated carbon" and "0.02 um"')
    if "number" in sleeve and sleeve["number"] is None:
        total = sum(lamp.get("number") or 1 for lamp in lamps) or 1
        sleeve["number"] = draft.assume("sleeve.number", total, "one sleeve a lamp") if tank else 1
    elif sleeve.get("number", 1) != 1 and vessel.get("kind") == "plug flow":
        draft.fault("sleeve.number", "has one sleeve or window; more of them belong to a stirred tank")
    outside, thickness, inside = sleeve.get("outside"), sleeve.get("thickness"), vessel.get("shell_inside")
    if outside and thickness and 2 * thickness >= outside:
        draft.fault("sleeve.thickness", f"{thickness:g} m on each side fills the {outside:g} m outside")
    if outside and inside and outside >= inside:
        draft.fault("sleeve.outside", f"{outside:g} m does not fit into vessel.shell_inside, {inside:g} m")
    if sleeve.get("material") and sleeve.get("transmission", "") is None:
        _known(draft, "sleeve.material", SLEEVE, sleeve["material"])


def _known(draft, key, listed, name):
    """Note a name that the data do not know."""
    try:
        listed.read(name)
    except ValueError as error:
        draft.fault(key, str(error))


def _cooling(draft, cooling):
    """Check that a coolant has what its mode needs."""
    mode = cooling.get("mode", "none")
    if mode == "none":
        return
    if "inlet" in cooling and cooling["inlet"] is None:
        draft.fault("cooling.inlet", f'missing; {mode} cooling needs it; write a temperature, like "30 degC"')
    if mode != "constant" and "flow" in cooling and cooling["flow"] is None:
        draft.fault("cooling.flow", f'missing; {mode} cooling needs it; write a mass flow, like "1200 kg/h"')
    own_film = mode == "constant" and (cooling.get("film") or cooling.get("overall"))
    if "medium" in cooling and cooling["medium"] is None and not own_film:
        draft.fault("cooling.medium", 'missing; write a cooling medium, like "water"')
    elif cooling.get("medium") and not own_film:
        _known(draft, "cooling.medium", COOLANT, cooling["medium"])


def _inject(draft, injects, feed, vessel):
    """Check the injectors and give them the temperature of the chlorine they share."""
    if not injects:
        return
    if vessel.get("kind") in TANKS:
        draft.fault("inject", "belongs to plug flow; a stirred tank takes all its feed at once")
    carriers = feeds.carriers(feed)
    if len(carriers) > 1:
        draft.fault("inject", f"shares need one stream that brings chlorine; here are {', '.join(carriers)}")
    total = sum(inject.get("share", 0.0) for inject in injects)
    if total > 1 + 1e-9:
        draft.fault("inject", f"shares sum to {100 * total:.6g} %; they are of all chlorine, at most 100 %")
    for number, inject in enumerate(injects, start=1):
        key = f"inject.{number}"
        if inject.get("position", 0.0) >= vessel.get("length", float("inf")):
            where = f"{inject['position']:g} m lies beyond the vessel"
            draft.fault(f"{key}.position", f"{where}, which ends at {vessel['length']:g} m")
        if len(carriers) == 1 and "temperature" in inject and inject["temperature"] is None:
            same = feed[carriers[0]].temperature
            inject["temperature"] = draft.assume(f"{key}.temperature", same, f"as feed.{carriers[0]}", "K")
