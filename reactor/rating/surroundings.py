"""What surrounds a rated reactor: bad mixing, the open chlorine valve, filling paths, wet service, leaks."""

import numpy as np

from reactor.hazards import explosive, materials, paths
from reactor.hazards.explosive import Class
from reactor.models import assemble
from reactor.rating import hazard
from reactor.result import Verdict, quantity
from reactor.stream import Stream

PASS, CAUTION, FAIL, NOT_ASSESSED = "PASS", "CAUTION", "FAIL", "NOT ASSESSED"
PURGE, ORDER = "N2", "alkane first"
POORLY = 0.3  # intensity of segregation that a plain tee may leave at the injector


def flows(case, gas):
    """Return (all without chlorine, all with chlorine) as two mixed streams; either may be None."""
    groups: tuple[list, list] = ([], [])
    for stream in assemble.streams(case, gas):
        groups[int(stream.moles[gas.index["Cl2"]] > 0)].append(stream)
    return tuple(
        assemble.mix(name, group, gas, case.vessel.pressure) if sum(s.total for s in group) > 0 else None
        for name, group in zip(("alkane", "chlorine"), groups, strict=True)
    )


def purge(case, gas):
    """Return the purge gas as a stream at the temperature of the coldest feed."""
    moles = np.zeros(len(gas.species))
    moles[gas.index[case.upsets.purge_gas or PURGE]] = 1.0
    cold = min(feed.temperature for feed in case.feed.values())
    return Stream(case.upsets.purge_gas or PURGE, moles, cold, case.vessel.pressure)


def filling(case, gas, book, order=None, recycle=None):
    """
    Return the filling, emptying and purging lines of a case, as (what is done, Line).

    `recycle` is a further stream that may be met by the chlorine, None where a case has none.
    """
    alkane, chlorine = flows(case, gas)
    mixed, P = assemble.mixed_inlet(case, gas), case.vessel.pressure
    order = order or case.upsets.filling or ORDER
    lines = paths.filling(book, purge(case, gas), alkane, mixed, chlorine, P, order)
    if recycle is not None:
        lines.append(("recycle meets chlorine", paths.line(book, recycle, chlorine, P)))
    return lines


def wide_open(case, gas, book, factor):
    """Return the class of the mixed inlet with the chlorine flow multiplied."""
    alkane, chlorine = flows(case, gas)
    more = Stream("chlorine", chlorine.moles * factor, chlorine.temperature, chlorine.pressure)
    mixed = assemble.mix("open valve", [alkane, more], gas, case.vessel.pressure)
    return explosive.classify(book, mixed.moles, mixed.temperature, case.vessel.pressure).class_


def met(case, gas, book):
    """Return records of what is met between the streams: bad mixing, the open valve, the filling paths."""
    alkane, chlorine = flows(case, gas)
    if alkane is None or chlorine is None:  # one premixed stream: nothing meets at the inlet
        return []
    found = paths.segregation(book, alkane, chlorine, case.vessel.pressure)
    records = [
        {
            "where": "inlet, not mixed at all",
            "class": str(found.line.class_),
            "at": quantity(found.line.at, "1"),
            "tolerated": quantity(found.tolerated, "1"),
            "mean": str(found.mean),
        }
    ]
    factor = case.upsets.chlorine_wide_open
    if factor is not None:
        class_ = wide_open(case, gas, book, factor)
        records.append({"where": f"inlet, chlorine valve wide open (x {factor:g})", "class": str(class_)})
    return records + [
        {"where": words, "class": str(line.class_), "at": quantity(line.at, "1")} for words, line in filling(case, gas, book)
    ]


def verdicts(case, gas, profile, records):
    """Return the verdicts on mixing, open valve, filling, wet service and leaks."""
    if not records:
        names = ("mixing at the inlet", "chlorine valve wide open", "filling and purging")
        premixed = [Verdict(name, NOT_ASSESSED, "", "", "the feed comes premixed") for name in names]
        return (*premixed, wet(case), leak(gas, profile))
    return mixing(records), valve(case, records), path(records), wet(case), leak(gas, profile)


def mixing(records):
    """Judge how badly the streams may be mixed before a parcel worsens its class."""
    first = records[0]
    share = first["tolerated"]["value"]
    if share is None:
        return Verdict("mixing at the inlet", PASS, f"{first['mean']} however badly mixed", "", "")
    figure = f"parcels stay {first['mean']} up to {100 * share:.0f} % segregation"
    why = f"not mixed at all, the streams pass through {first['class']}"
    return Verdict(
        "mixing at the inlet", CAUTION if share < POORLY else PASS, figure, f"{100 * POORLY:.0f} %", why
    )


def valve(case, records):
    """Judge the mixture with the chlorine valve wide open."""
    name = "chlorine valve wide open"
    if case.upsets.chlorine_wide_open is None:
        return Verdict(name, NOT_ASSESSED, "", "", "upsets.chlorine_wide_open is not stated")
    class_ = next(r["class"] for r in records if "wide open" in r["where"])
    return Verdict(name, _word(class_), class_, "", "")


def path(records):
    """Judge the worst class along filling, emptying and purging."""
    lines = [r for r in records if "at" in r and "tolerated" not in r]
    worst = max(lines, key=lambda r: Class(r["class"]).rank)
    return Verdict(
        "filling and purging", _word(worst["class"]), f"{worst['class']} at: {worst['where']}", "", ""
    )


def _word(class_):
    rank = Class(class_).rank
    return FAIL if rank >= Class.UNKNOWN.rank else CAUTION if rank == Class.MARGIN.rank else PASS


def wet(case):
    """Say what the stated shell material does once it is wet."""
    stated = case.vessel.shell_material
    found = [m for m in materials.material_limits() if m.material == stated and "wet" in m.service]
    if not found:
        why = "no entry for wet chlorine" if stated != "not stated" else "vessel.shell_material is not stated"
        return Verdict("wet service", NOT_ASSESSED, "", "", why)
    use = found[0].use
    return Verdict("wet service", CAUTION, f"{stated}: {use}", "", f"keep it dry; {found[0].cited.status}")


def leak(gas, profile):
    """Say how far a leak of feed or outlet gas has to be diluted to the figure for escape (IDLH)."""
    most = np.maximum(profile.outlet.fractions, profile.fed / profile.fed.sum())
    factors = [
        (float(most[gas.index[e.substance]]) / e.fraction, e)
        for e in materials.exposures()
        if e.figure == "IDLH" and e.substance in gas.index and e.fraction > 0
    ]
    factor, entry = max(factors, key=lambda pair: pair[0])
    figure = f"{entry.substance} {factor:.0f} times its IDLH of {1e6 * entry.fraction:.0f} ppm"
    return Verdict(
        "leak", CAUTION if factor > 1 else PASS, figure, "1", f"{entry.cited.status}; no dispersion here"
    )


def assess(case, gas, profile):
    """Return the verdicts of a rated case on what surrounds it."""
    return verdicts(case, gas, profile, met(case, gas, hazard.rulebook(case, gas)))
