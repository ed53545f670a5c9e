"""
Classify a composition or a profile with respect to the explosive range in chlorine.

The rules stand at the top of `reactor.hazards.rules`; SAFETY.md gives their reasons.
"""

from dataclasses import dataclass

import numpy as np

from reactor import library
from reactor.hazards.rules import (
    INSIDE,
    ORDER,
    OUTSIDE,
    UNKNOWN,
    Class,
    Rulebook,
    find,
    fractions,
    rulebook,
    widened,
)
from reactor.library import Cited

__all__ = ["ORDER", "Class", "Mixture", "Rulebook", "along", "classify", "find", "fractions", "rulebook"]


@dataclass(frozen=True)
class Mixture:
    """One classified composition; mole fractions, and `margin` in mole fraction of chlorine."""

    fuel: float
    chlorine: float
    inert: float
    ratio: float  # alkane to chlorine
    temperature: float
    pressure: float
    class_: Class
    reason: str
    margin: float
    adiabatic_temperature: float
    calculated_only: bool
    cited: tuple


def classify(book, composition, T, P, premixed=True, preheat=None):
    """
    Classify one composition.

    Parameters
    ----------
    book : Rulebook
        From `rulebook(gas)`. [-]
    composition : dict or array
        Amounts by species; any scale. [-]
    T, P : float
        Temperature and absolute pressure. [K, Pa]
    premixed : bool
        A feed or injector (True), or a station where the gas reacts (False). [-]
    preheat : float
        At a reacting station: temperature of the mixed feed; without it, T. [K]

    Returns
    -------
    mixture : Mixture
        Class, the rule that decided, and the margin in chlorine. [-]
    """
    x = fractions(book, composition)
    warm = T if preheat is None or premixed else preheat
    at_T, at_P, at_warm = (np.array([float(value)]) for value in (T, P, warm))
    found = find(book, x, at_T, at_P, at_warm, premixed)
    fuel, chlorine = float(x[0] @ book.rungs.fuel), float(x[0, book.rungs.chlorine])
    alkane = float(x[0] @ book.rungs.alkane)
    used = _windows_used(book, x[0])
    return Mixture(
        fuel=fuel,
        chlorine=chlorine,
        inert=float(x[0] @ ~book.rungs.fuel) - chlorine,
        ratio=alkane / chlorine if chlorine > 0 else np.inf,
        temperature=float(T),
        pressure=float(P),
        class_=ORDER[int(found.rank[0])],
        reason=reason(book, found, x[0], T, P),
        margin=margin_of(book, x[0], at_T, at_P, at_warm, premixed, int(found.rank[0])),
        adiabatic_temperature=float(found.T_ad[0]),
        calculated_only=any(window.calculated_only for window in used),
        cited=tuple(entry for window in used for entry in window.cited) + _rules_cited(),
    )


def _windows_used(book, x):
    """Return the ranges of the fuels that make up more than the counting share of the fuel."""
    fuel = x @ book.rungs.fuel
    least = book.rule["unlisted_share"] * fuel
    return [book.windows[book.rungs.species[k]] for k in book.listed if x[k] > least]


def _rules_cited():
    rules = library.sheet("hazards/rules.csv")
    return tuple(Cited(f"explosive range: {name}", rules[name].source, rules[name].status) for name in rules)


def margin_of(book, x, T, P, preheat, premixed, rank):
    """
    Return how far the chlorine fraction is from the nearest value that worsens the class [mole fraction].

    Chlorine is moved with all else in proportion, at the same temperature. Positive: it may rise by so much;
    negative: it may fall by so much. 0 if the class is INSIDE, nan if it is UNKNOWN or nothing can worsen it.
    """
    if rank in (INSIDE, UNKNOWN):
        return 0.0 if rank == INSIDE else np.nan
    now = x[book.rungs.chlorine]
    found = [_change(book, x, end, T, P, preheat, premixed, rank) for end in (1.0, 0.0)]
    found = [place - now for place in found if place is not None]
    return float(min(found, key=abs)) if found else np.nan


def _change(book, x, end, T, P, preheat, premixed, rank):
    """Return the chlorine fraction between here and `end` where the class first worsens, else None."""
    place, now = book.rungs.chlorine, x[book.rungs.chlorine]
    if now >= 1 or now == end:
        return None
    start, stop = now, end
    for points in (51, 41, 21):
        ys = np.linspace(start, stop, points)
        moved = x * ((1 - ys) / (1 - now))[:, None]
        moved[:, place] = ys
        same_T, same_P, same_warm = (np.repeat(value, points) for value in (T, P, preheat))
        worse = find(book, moved, same_T, same_P, same_warm, premixed).rank > rank
        if not worse.any():
            return None
        first = int(np.argmax(worse))
        start, stop = ys[max(first - 1, 0)], ys[first]
    return stop


def along(book, compositions, T, P, preheat=None):
    """
    Classify a profile of reacting stations.

    Parameters
    ----------
    book : Rulebook
        From `rulebook(gas)`. [-]
    compositions : array, stations x species
        Amounts in the mechanism's order; any scale. [-]
    T, P : array, stations
        Temperature and absolute pressure. [K, Pa]
    preheat : float or array
        Temperature of the mixed feed; without it, that of the first station. [K]

    Returns
    -------
    classes : array of str, stations
        The class at each station. [-]
    worst : int
        The station with the worst class; among equals, the one with the highest adiabatic temperature. [-]
    """
    x = fractions(book, compositions)
    T = np.broadcast_to(np.asarray(T, dtype=float), len(x))
    P = np.broadcast_to(np.asarray(P, dtype=float), len(x))
    warm = np.broadcast_to(T[0] if preheat is None else np.asarray(preheat, dtype=float), len(x))
    found = find(book, x, T, P, warm, premixed=False)
    rank = found.rank
    words = np.array([str(word) for word in ORDER])[rank]
    return words, int(np.lexsort((found.T_ad, rank))[-1])


def reason(book, found, x, T, P):
    """Return, in words and numbers, which rule gave the first point of `found` its class."""
    rule, names = book.rule, book.rungs.species
    if found.pure[0]:
        return "no chlorine in it" if x[book.rungs.chlorine] < rule["trace"] else "no fuel in it"
    T_ad, (inside, near), r = found.T_ad[0], found.thresholds[0], 100 * found.ratio[0]
    low, high, rank = 100 * found.low[0], 100 * found.high[0], int(found.rank[0])
    heat = f"adiabatic temperature {T_ad:.0f} K (thresholds {inside:.0f} and {near:.0f} K)"
    span = (
        f"fuel is {r:.1f} % of fuel and chlorine (range {low:.1f} to {high:.1f} %, {_band(rule, low, high)})"
    )
    if rank == OUTSIDE:
        return f"{heat}; {span}{_credit(rule, found, x[book.rungs.chlorine], T)}"
    without = [k for k in np.flatnonzero(book.rungs.fuel & (x > 0)) if k not in book.listed]
    worst = names[max(without, key=lambda k: x[k])] if without else ""
    words = (
        heat,
        span,
        f"hydrogen is more than {100 * rule['gate_hydrogen']:.0f} % of the fuel",
        f"premixed at {T - 273.15:.0f} degC, no data above {rule['gate_temperature'] - 273.15:.0f} degC",
        f"{P / 1e5:.2f} bar absolute, no data above {rule['gate_pressure'] / 1e5:.0f} bar",
        f"{100 * x[book.oxygen].sum():.2f} mol% O2, no data above {100 * rule['gate_oxygen']:.1f} mol%",
        f"{worst} has no explosion range in chlorine and is more than "
        f"{100 * rule['unlisted_share']:.0f} % of the fuel",
        "a species without any data is in the mixture",
    )
    return "; ".join(text for text, each in zip(words, found.ranks[0], strict=True) if each == rank)


def _band(rule, low, high):
    top = min(100.0, high + 100 * rule["upper_limit_widening"])
    return f"widened {rule['lower_limit_factor'] * low:.1f} to {top:.1f} %"


def _credit(rule, found, chlorine, T):
    """Return the words for a dilution credit that was needed, else nothing."""
    if not widened(rule, found.ratio, found.low, found.high)[0] and found.T_ad[0] < found.thresholds[0, 1]:
        return ""
    if found.T_ad[0] - T < rule["negligible_rise"]:
        return f"; but it can warm itself by no more than {found.T_ad[0] - T:.0f} K"
    return f"; but chlorine is {100 * chlorine:.1f} mol%, below {100 * rule['chlorine_ceiling']:.0f} %"
