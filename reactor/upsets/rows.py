"""
The upset table: one row for each deviation of data/hazards/deviations.csv.

A row says what was changed, when the temperature limit is reached, how hot the gas gets, which class of
mixture is met, how much chlorine leaves unreacted before a direct trip has shut the valve and the reactor is
swept, how much heat stays stored in unreacted chlorine, and which trip acts in time. What the model cannot
say is NOT ASSESSED with its reason.
"""

from dataclasses import dataclass, field

import numpy as np

from reactor import library
from reactor.errors import ReactorError
from reactor.hazards import explosive
from reactor.hazards.explosive import ORDER, Class
from reactor.result import quantity
from reactor.upsets import changes, regimes
from reactor.upsets.changes import Changed, brings_chlorine
from reactor.upsets.other import OTHER, NotAssessedError

COMPUTED, NOT_ASSESSED = "computed", "NOT ASSESSED"
HOUR = 3600.0
SODA, CHLORINE = 0.039997, 0.070906  # kg/mol of NaOH and Cl2
PYROLYSIS = 700.0  # K; above it the mechanism lacks pyrolysis
HOTTEST = 1700.0  # K; end of the enthalpy tables of the classifier
SAME = 1e-3
NAOH_PER_CHLORINE = 2.0  # Cl2 + 2 NaOH -> NaCl + NaOCl + H2O


@dataclass(frozen=True)
class Row:
    """One line of the table, its numbers as quantities; `assessed` is computed or NOT ASSESSED with `why`."""

    id: str
    guideword: str
    parameter: str
    changed: str
    assessed: str
    why: str = ""
    results: dict = field(default_factory=dict)
    class_reached: str = ""
    safeguards: str = ""
    acts: str = ""
    cause: str = ""
    consequence: str = ""
    assumptions: tuple = ()


def table(setting, only=None):
    """
    Return the rows of the upset table.

    Parameters
    ----------
    setting : Setting
        The rated case. [-]
    only : collection of str
        Numbers of the rows wanted; all without it. [-]

    Returns
    -------
    rows : list of Row
    """
    listed = library.table("hazards/deviations.csv").rows
    return [row(setting, entry) for entry in listed if only is None or entry["id"] in only]


def row(setting, entry):
    """Return one row; what fails says why and does not stop the table."""
    size = float(entry["size"])
    try:
        if entry["change"] == "none":
            raise NotAssessedError(entry["note"])
        made = OTHER.get(entry["change"])
        found = made(setting, size) if made else _followed(setting, entry["change"], size)
    except NotAssessedError as reason:
        return _shell(entry, NOT_ASSESSED, changed="", why=str(reason))
    except ReactorError as reason:
        return _shell(entry, NOT_ASSESSED, changed="", why=f"the run did not succeed: {reason}")
    notes = tuple(text for text in (entry["note"], *found.pop("assumptions", ())) if text)
    acts = acting(setting, found.get("time_to_limit"), entry["trip"])
    return _shell(
        entry,
        COMPUTED,
        changed=found.pop("changed"),
        class_reached=found.pop("class", ""),
        results=_quantities(found),
        acts=acts,
        assumptions=notes,
    )


def _shell(entry, assessed, **more):
    return Row(
        entry["id"],
        entry["guideword"],
        entry["parameter"],
        assessed=assessed,
        safeguards=entry["safeguard"],
        cause=entry["cause"],
        consequence=entry["consequence"],
        **more,
    )


UNITS = {
    "time_to_limit": "s",
    "time_of_peak": "s",
    "peak": "K",
    "chlorine_released": "kg",
    "chlorine_flow": "kg/h",
    "naoh": "kg/h",
    "latent_heat": "J",
    "dew_margin": "K",
    "duty": "1",
    "pressure_ratio": "1",
    "light_off": "K",
    "tolerated": "1",
}


def _quantities(found):
    return {name: quantity(found.get(name), unit) for name, unit in UNITS.items() if name in found}


def acting(setting, limit_time, trip):
    """Return which trip closes the chlorine valve before the limit is reached."""
    times = setting.times
    if trip == "none":
        return "no signal sees it"
    if setting.limit is None:
        return "NOT ASSESSED: limits.hottest is not stated"
    if limit_time is None:
        return "the limit is not reached"
    if limit_time <= 0:
        return "the limit is passed before the upset begins"
    words = []
    for name, seconds in (("direct", times.direct), ("temperature", times.temperature)):
        if name == "direct" and trip == "temperature":
            continue
        words.append(f"{name} trip ({seconds:.1f} s) {'acts in time' if seconds < limit_time else 'is too late'}")
    return "; ".join(words)


def _followed(setting, change, size):
    """Return what a change does that the dynamic model can follow."""
    changed, words, notes, full = CHANGES[change](setting, size)
    transient = setting.follow(changed, full)
    peak, when = transient.peak()
    response, place, share = setting.times.direct, setting.chlorine, changed.share
    steady = float(setting.profile.outlet.moles[place])
    out = share * transient.outflow()[place] + (1 - share) * steady
    released = share * (transient.released(response)[place] + transient.held(response)[place])
    released += (1 - share) * (steady * response + regimes.inventory(setting)["moles"])
    stored = max(_stored(setting, transient.held(t)) for t in np.linspace(0, transient.settled, 12))
    class_, more = _class(setting, changed, transient)
    found = {
        "changed": words,
        "time_to_limit": None if setting.limit is None else transient.first(setting.limit),
        "peak": peak,
        "time_of_peak": when,
        "class": class_,
        "chlorine_released": max(released, 0.0) * CHLORINE,
        "chlorine_flow": max(out, 0.0) * CHLORINE * HOUR,
        "naoh": max(out, 0.0) * NAOH_PER_CHLORINE * SODA * HOUR,
        "latent_heat": stored * setting.heat,
        "assumptions": (*notes, *more, *_hot(peak, setting)),
    }
    return found | _special(setting, change, changed, transient)


def _stored(setting, moles):
    """Return the chlorine that can still react [mol]: what is there, up to the C-H bonds beside it."""
    bonds = float(moles @ setting.book.rungs.bonds[: len(moles)])
    return max(min(float(moles[setting.chlorine]), bonds), 0.0)


def _hot(peak, setting):
    """Return the sentences that a hot row needs."""
    if peak > PYROLYSIS:
        yield f"peak beyond the data ({PYROLYSIS - 273.15:.0f} degC): no pyrolysis in the mechanism"
    if setting.light_off is not None and setting.profile.hottest[0] <= setting.light_off < peak:
        yield "hotter than the screening light-off of the dark chain: lamp-off alone may not stop it"


def _class(setting, changed, transient):
    """Return the worst class at the inlet, on the way to it and at the stations, and what is left out."""
    T, P, n = transient.gas()
    some = np.unique(np.linspace(0, len(T) - 1, 120).astype(int))
    some = some[(T[some] > 200.0) & (T[some] < HOTTEST)]
    words, _ = explosive.along(setting.book, n[some], T[some], P[some], preheat=setting.mixed(changed.case).temperature)
    ranks = [Class(word).rank for word in set(words)] + [setting.class_between(changed.case).rank]
    left = () if len(some) and T.max() < HOTTEST else ("stations above 1427 degC are not classified",)
    return str(ORDER[max(ranks)]), left


def _special(setting, change, changed, transient):
    """Return the figures that only one kind of row has."""
    if change == "coolant_step":
        return {"dew_margin": setting.dew_margin(transient, changed.case.cooling.inlet)}
    if change == "restrike":
        severity = setting.severity(setting.feed)
        return {"duty": _duty(setting, transient), "pressure_ratio": severity.ratio}
    return {}


def _duty(setting, transient):
    """Return the highest rate of chlorine use over the steady one, in twentieths of the residence."""
    times = np.linspace(0.0, setting.profile.total("time"), 21)
    fed = setting.feed.moles[setting.chlorine]
    left = [float((transient.held(t) + transient.released(t))[setting.chlorine]) - fed * t for t in times]
    steady = fed - setting.profile.outlet.moles[setting.chlorine]
    return float(-np.diff(left).min() / (times[1] * steady)) if steady > 0 else None


def _chlorine_flow(setting, size, words=None):
    case = changes.scaled_feeds(setting.case, size, brings_chlorine)
    if size == 0:
        words = "chlorine feed shut"
    return Changed(case, new_feed=True), words or f"chlorine feed x {size:g}", (), None


def _chlorine_open(setting, size):
    factor = setting.times.chlorine_wide_open
    if factor is None:
        raise NotAssessedError("upsets.chlorine_wide_open is not stated: flow through the open valve over the normal flow")
    return _chlorine_flow(setting, factor, f"chlorine valve wide open: feed x {factor:g}")


def _alkane_flow(setting, size):
    case = changes.scaled_feeds(setting.case, size, lambda feed: not brings_chlorine(feed))
    words = f"feeds without chlorine x {size:g}" if size else "feeds without chlorine shut"
    notes = () if size else ("the old gas is pushed out by chlorine; what lies between them is classified",)
    return Changed(case, new_feed=True), words, notes, None


def _all_flow(setting, size):
    case = changes.scaled_feeds(setting.case, size, lambda feed: True)
    return Changed(case, new_feed=True), f"all feeds x {size:g}", ("films at the lower flow",), None


def _lamp(setting, size):
    words = f"light x {size:g}" if size else "lamps off"
    return Changed(setting.case, light=size, keep_lamp_heat=0 < size < 1), words, (), None


def _lamp_lost(setting, size):
    number, vessels = changes.number_of_lamps(setting.case), setting.case.vessel.parallel
    if number > 1:
        notes = ("the loss is spread over the lit length",)
        return Changed(setting.case, light=1 - 1 / number), f"1 of {number} lamps of every vessel off", notes, None
    if number == 1 and vessels > 1:
        notes = ("the others run on as before",)
        return Changed(setting.case, light=0.0, share=1 / vessels), f"1 of {vessels} vessels dark", notes, None
    raise NotAssessedError("there is one lamp, or none: see the row for no light")


def _restrike(setting, size):
    return (
        Changed(setting.case),
        "lamp back on, reactor full of unreacted gas",
        ("no soft start",),
        setting.feed,
    )


def _heat(setting, size):
    if setting.case.cooling.mode == "none":
        raise NotAssessedError("the case has no coolant")
    words = "heat exchange lost" if size == 0 else f"heat exchange x {size:g}"
    return Changed(setting.case, heat=size), words, (), None


def _coolant_step(setting, size):
    if setting.case.cooling.mode == "none":
        raise NotAssessedError("the case has no coolant")
    return Changed(changes.warmer_coolant(setting.case, size)), f"coolant {size:+g} K", (), None


def _inlet_step(setting, size):
    return Changed(changes.warmer_feeds(setting.case, size), new_feed=True), f"feeds {size:+g} K", (), None


def _pressure(setting, size):
    notes = ("absolute pressure, risen at once; heat of compression left out",)
    return Changed(changes.at_pressure(setting.case, size)), f"pressure x {size:g}", notes, None


def _oxygen(setting, size):
    case = changes.with_species(setting.case, "O2", size)
    return Changed(case, new_feed=True), f"{100 * size:g} mol% O2 in the alkane", (), None


CHANGES = {
    "chlorine_flow": _chlorine_flow,
    "chlorine_open": _chlorine_open,
    "alkane_flow": _alkane_flow,
    "all_flow": _all_flow,
    "lamp": _lamp,
    "lamp_lost": _lamp_lost,
    "restrike": _restrike,
    "heat": _heat,
    "coolant_step": _coolant_step,
    "inlet_step": _inlet_step,
    "pressure": _pressure,
    "oxygen": _oxygen,
}
