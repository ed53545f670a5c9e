"""Streams: from flow, ratio and composition as typed to moles per second of each species."""

import re

from reactor.case import species
from reactor.case.schema import Feed, FeedForm
from reactor.units import Typed, kinds

ROUNDING = 1e-4  # a composition may miss 100 % by this much


def read(draft, raw):
    """Return {name: Feed} of all streams; streams with a fault are left out."""
    forms = {name: form for name, table in raw.items() if (form := _stream(draft, name, table))}
    moles = {name: _moles(form) for name, form in forms.items() if form["flow"] is not None}
    _by_ratio(draft, forms, moles, complete=len(forms) == len(raw))
    feed = {
        name: Feed(name=name, moles=moles[name], temperature=form["temperature"])
        for name, form in forms.items()
        if name in moles and "temperature" in form
    }
    if raw and len(feed) == len(raw):
        _check(draft, feed)
    return feed


def carriers(feed):
    """Return the names of the streams that bring chlorine."""
    return [name for name, stream in feed.items() if stream.moles.get("Cl2", 0.0) > 0]


def _stream(draft, name, table):
    """Return the typed values of one stream with mole fractions `x`, or None."""
    key = f"feed.{name}"
    if not draft.is_table(table, key):
        return None
    if not re.fullmatch(r"[A-Za-z0-9_-]+", name):
        draft.fault(key, "a stream is named with letters, digits, - and _")
    values = draft.table(FeedForm, table, key, beside=("composition",))
    values["mass"] = "flow" in values and values["flow"] and draft.typed[f"{key}.flow"].unit == "kg/s"
    if "composition" in table:
        values["x"] = _composition(draft, table["composition"], f"{key}.composition")
    elif name == "chlorine":
        draft.assume(f"{key}.composition", "Cl2 100 mol%", "the stream is named chlorine")
        values["x"] = {"Cl2": 1.0}
    else:
        draft.fault(f"{key}.composition", 'missing; write it like { CH4 = "99 mol%", N2 = "1 mol%" }')
        values["x"] = None
    if "flow" in table and "ratio" in table:
        draft.fault(f"{key}.ratio", "flow is given too; write one of the two")
        return None
    if "flow" not in table and "ratio" not in table:
        draft.fault(f"{key}.flow", f"missing; write {kinds.FLOW.due}, or ratio = 8 for chlorine")
        return None
    return values if values["x"] and "flow" in values and "ratio" in values else None


def _composition(draft, raw, key):
    """Return mole fractions {species: x}, or None after noting the faults."""
    if not isinstance(raw, dict) or not raw:
        draft.fault(key, 'a table is due, like { CH4 = "99 mol%", N2 = "1 mol%" }')
        return None
    parts: dict[str, float] = {}
    bases: dict[str, str] = {}
    rest, good = None, True
    for name, value in raw.items():
        try:
            known = species.find(name)
        except ValueError as error:
            draft.fault(f"{key}.{name}", str(error))
            good = False
            continue
        if known in parts or known == rest:
            draft.fault(f"{key}.{name}", f"{known} stands here twice")
            good = False
        if value == "balance":
            good = good and rest is None
            if rest is not None:
                draft.fault(f"{key}.{name}", "only one species may be the balance")
            rest = known
            draft.typed[f"{key}.{name}"] = Typed("balance", "balance", "")
            continue
        share = draft.take(f"{key}.{name}", kinds.PORTION, value)
        if share is None:
            good = False
            continue
        parts[known] = share
        bases.setdefault("mass" if "wt" in value else "mol", f"{key}.{name}")
    return _fractions(draft, key, parts, bases, rest) if good else None


def _fractions(draft, key, parts, bases, rest):
    """Check base and sum of a composition and return mole fractions, or None."""
    if len(bases) > 1:
        draft.fault(bases["mass"], "by mass, where others are by mol; write all of them on one base")
        return None
    total = sum(parts.values())
    if rest is not None and total <= 1:
        parts, total = parts | {rest: 1 - total}, 1.0
    if abs(total - 1) > ROUNDING:
        draft.fault(key, f'sums to {100 * total:.6g} %; it must be 100 %, or one species must be "balance"')
        return None
    if "mass" in bases:
        parts = {name: share / species.molar_mass(name) for name, share in parts.items()}
    total = sum(parts.values())
    return {name: share / total for name, share in parts.items()}


def _moles(form):
    """Return the flow of each species [mol/s] of a stream with a typed flow."""
    flow = form["flow"]
    if form["mass"]:
        flow /= sum(x * species.molar_mass(name) for name, x in form["x"].items())
    return {name: flow * x for name, x in form["x"].items()}


def _by_ratio(draft, forms, moles, complete):
    """Find the flow of the stream that is given as alkane to chlorine, mol/mol."""
    by_ratio = [name for name, form in forms.items() if form["ratio"] is not None]
    for name in by_ratio[1:]:
        draft.fault(f"feed.{name}.ratio", f"feed.{by_ratio[0]} is given by ratio already; only one may be")
    for name in by_ratio[:1]:
        x, key = forms[name]["x"], f"feed.{name}.ratio"
        if not x.get("Cl2") or any(species.is_alkane(part) for part in x):
            draft.fault(key, "only a stream that brings chlorine and no alkane may be given by ratio")
            continue
        alkane = sum(n for flows in moles.values() for part, n in flows.items() if species.is_alkane(part))
        if alkane > 0:
            total = alkane / forms[name]["ratio"] / x["Cl2"]
            moles[name] = {part: total * share for part, share in x.items()}
        elif complete:
            draft.fault(key, "no other stream brings an alkane that the ratio could refer to")


def _check(draft, feed):
    """Note what the streams lack together."""
    if not carriers(feed):
        draft.fault("feed", 'no stream brings chlorine; add [feed.chlorine] with flow = "100 kg/h"')
    present = [part for stream in feed.values() for part, n in stream.moles.items() if n > 0]
    if not any(species.is_organic(part) for part in present):
        draft.fault("feed", 'no stream brings an alkane; add one with composition = { CH4 = "100 mol%" }')
