"""
The rules that give a composition its class with respect to the explosive range in chlorine.

Four classes, from best to worst: OUTSIDE (estimate), MARGIN, UNKNOWN, INSIDE. UNKNOWN is handled as INSIDE.
The class of a point is the worst that any of these rules gives it:

1. Heat. T_ad is the adiabatic temperature by substitution. T_ad >= 870 K is INSIDE, T_ad >= 750 K is MARGIN;
   both thresholds fall by 2 K for each kelvin of preheat above 298 K. The preheat is what the gas had before
   it began to react: at a premixed point its own temperature, at a reacting station that of the mixed feed
   (the heat of its own reaction already stands in T_ad).
2. Range. r = fuel/(fuel + chlorine), without the inert gas, against the range of the mixed fuel in pure
   chlorine. Within it: INSIDE. Within the widened range (half the lower limit, upper limit + 10 vol%):
   MARGIN.
3. Credit for dilution, given from 5 mol% of inert gas on. It can weaken rule 2, never rule 1:
   - r within the range but T_ad below the margin threshold: MARGIN, no better;
   - chlorine up to 7 vol%, preheat up to 60 degC and T_ad below the margin threshold: OUTSIDE;
   With or without inert gas, a mixture that cannot warm itself by 50 K (T_ad - T) is OUTSIDE by rules 1
   and 2: hot gas with a trace of chlorine would otherwise lie above the falling threshold.
4. Hydrogen above 5 % of the fuel: MARGIN at least (the mixing rule errs to the wrong side).
5. Gates. UNKNOWN at least: a premixed point above 200 degC; more than 3 bar; more than 0.1 mol% O2; a fuel
   without a range above 1 % of the fuel; a species without any data above 1 ppm.
6. A stream with less than 10 ppm of chlorine, or of fuel, is OUTSIDE, unless O2 or a species without data is
   in it.

Radicals and peroxy radicals are left out of the composition. Fully chlorinated carbon (CCl4, C2Cl6), HCl, N2,
Ar, CO2 and O2 count as inert. Every number is a row of data/hazards/rules.csv or explosion_limits.csv.
"""

from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from reactor import library
from reactor.hazards import substitution, windows


class Class(StrEnum):
    """The four classes, from best to worst."""

    OUTSIDE = "OUTSIDE (estimate)"
    MARGIN = "MARGIN"
    UNKNOWN = "UNKNOWN"
    INSIDE = "INSIDE"

    @property
    def rank(self):
        """Return the place in the order from best (0) to worst (3)."""
        return ORDER.index(self)


ORDER = (Class.OUTSIDE, Class.MARGIN, Class.UNKNOWN, Class.INSIDE)
OUTSIDE, MARGIN, UNKNOWN, INSIDE = range(4)


@dataclass(frozen=True)
class Rulebook:
    """What a classification needs of one mechanism: tables, explosion ranges, thresholds."""

    rungs: substitution.Ladder
    windows: dict
    listed: np.ndarray  # columns of the fuels with a range
    lower: np.ndarray
    upper: np.ndarray
    rule: dict  # name -> SI value
    oxygen: np.ndarray  # columns of O2


def rulebook(gas, own=()):
    """
    Prepare the classification for a mechanism (once; about 20 ms).

    Parameters
    ----------
    gas : Mechanism
        With `species`, `elements`, `atoms`, `kinds`, `enthalpy(T)`, `heat_capacity(T)`. [-]
    own : iterable of (fuel, lower, upper, source, status)
        Explosion ranges that replace the listed ones. [-]

    Returns
    -------
    book : Rulebook
        To hand to the functions below. [-]
    """
    rungs = substitution.ladder(gas)
    found = windows.windows(own)
    fuels = [fuel for fuel in found if fuel in rungs.species]
    return Rulebook(
        rungs,
        found,
        listed=np.array([rungs.species.index(fuel) for fuel in fuels]),
        lower=np.array([found[fuel].lower for fuel in fuels]),
        upper=np.array([found[fuel].upper for fuel in fuels]),
        rule={name: datum.value for name, datum in library.sheet("hazards/rules.csv").items()},
        oxygen=np.array([k for k, name in enumerate(rungs.species) if name == "O2"], dtype=int),
    )


def fractions(book, composition):
    """
    Return mole fractions in the order of the rulebook, radicals left out, unknown names under `other`.

    Parameters
    ----------
    book : Rulebook
        The prepared rules. [-]
    composition : dict or array
        Amounts by species, or an array (points x species) in the mechanism's order; any scale. [-]

    Returns
    -------
    x : array, points x species
        Mole fractions; small negative amounts count as none. [-]
    """
    names = book.rungs.species
    if isinstance(composition, dict):
        x = np.zeros((1, len(names)))
        for name, amount in composition.items():
            x[0, names.index(name if name in names else "other")] += amount
    else:
        given = np.atleast_2d(np.asarray(composition, dtype=float))
        x = np.zeros((len(given), len(names)))
        x[:, : given.shape[1]] = given
    x = np.maximum(x, 0.0) * book.rungs.counted
    return x / np.maximum(x.sum(axis=1, keepdims=True), 1e-300)


@dataclass(frozen=True)
class Findings:
    """What the rules found: the class by each rule (points x rules) and the numbers behind it."""

    ranks: np.ndarray
    T_ad: np.ndarray
    ratio: np.ndarray  # fuel/(fuel + chlorine)
    low: np.ndarray
    high: np.ndarray
    thresholds: np.ndarray  # inside, margin
    pure: np.ndarray

    @property
    def rank(self):
        """Return the worst rank at each point."""
        return np.where(self.pure, OUTSIDE, self.ranks.max(axis=1))


def find(book, x, T, P, preheat, premixed):
    """
    Apply the rules at the top of this module to many points at once.

    Parameters
    ----------
    book : Rulebook
        The prepared rules. [-]
    x : array, points x species
        Mole fractions from `fractions`. [-]
    T, P, preheat : array, points
        Temperature, absolute pressure, temperature before the reaction began. [K, Pa, K]
    premixed : bool
        A feed or injector (True), or a station where the gas reacts (False). [-]

    Returns
    -------
    found : Findings
        Ranks by rule: heat, range, hydrogen, heat gate, pressure, oxygen, fuel without range, no data. [-]
    """
    rungs, rule = book.rungs, book.rule
    fuel, chlorine = x @ rungs.fuel, x[:, rungs.chlorine]
    listed = x[:, book.listed]
    total = listed.sum(axis=1)
    T_ad = substitution.adiabatic_temperature(rungs, x, T)
    warm = rule["preheat_slope"] * np.maximum(preheat - rule["preheat_from"], 0)
    inside, near = rule["inside_temperature"] - warm, rule["margin_temperature"] - warm
    shares = np.where(total[:, None] > 0, listed / np.maximum(total, 1e-300)[:, None], 1 / len(book.listed))
    low, high = windows.mixed(book.lower, book.upper, shares, rule["mixing_rule_extra"])
    r = fuel / np.maximum(fuel + chlorine, 1e-300)
    by_heat = np.select([T_ad >= inside, T_ad >= near], [INSIDE, MARGIN], OUTSIDE)
    by_range = np.select([(r >= low) & (r <= high), widened(rule, r, low, high)], [INSIDE, MARGIN], OUTSIDE)
    by_heat, by_range = _dilution(rule, by_heat, by_range, T, T_ad, near, fuel, chlorine, preheat)
    other, oxygen = x[:, rungs.species.index("other")], x[:, book.oxygen].sum(axis=1)
    strange = (other > rule["unknown_share"]) | (oxygen > rule["gate_oxygen"])
    gates = [
        np.where(x[:, rungs.hydrogen] > rule["gate_hydrogen"] * fuel, MARGIN, OUTSIDE),
        np.where(premixed & (rule["gate_temperature"] < T), UNKNOWN, OUTSIDE),
        np.where(rule["gate_pressure"] < P, UNKNOWN, OUTSIDE),
        np.where(oxygen > rule["gate_oxygen"], UNKNOWN, OUTSIDE),
        np.where(fuel - total > rule["unlisted_share"] * fuel, UNKNOWN, OUTSIDE),
        np.where(other > rule["unknown_share"], UNKNOWN, OUTSIDE),
    ]
    pure = (np.minimum(fuel, chlorine) < rule["trace"]) & ~strange
    ranks = np.column_stack([by_heat, by_range, *gates])
    return Findings(ranks, T_ad, r, low, high, np.column_stack([inside, near]), pure)


def widened(rule, r, low, high):
    """Tell where `r` lies within the widened range."""
    return (r >= rule["lower_limit_factor"] * low) & (r <= high + rule["upper_limit_widening"])


def _dilution(rule, by_heat, by_range, T, T_ad, near, fuel, chlorine, preheat):
    """Apply rule 3."""
    cool = (T_ad < near) & (1 - fuel - chlorine >= rule["dilution_share"])
    by_range = np.where(cool, np.minimum(by_range, MARGIN), by_range)
    thin = (chlorine <= rule["chlorine_ceiling"]) & (preheat <= rule["ceiling_temperature"]) & cool
    faint = T_ad - T < rule["negligible_rise"]
    return np.where(faint, OUTSIDE, by_heat), np.where(thin | faint, OUTSIDE, by_range)
