"""Where a design may not be: each limit as a number that is negative in the forbidden zone."""

import math
from typing import NamedTuple

from reactor.rating.judge import PYROLYSIS, SIGMA_LIMIT
from reactor.rating.limits import SKIN_FUELS
from reactor.result import WORDS

SHARES = {
    "chlorine_slip": "chlorine slip",
    "poly_share_mol": "poly share by mol",
    "poly_share_mass": "poly share by mass",
}
MARGINS = {"exotherm": "exotherm_margin", "dew point": "dew_point_margin"}

NOTHING_CONDENSES = 100.0  # K; the margin drawn where there is no dew point to be near
NO_ANSWER = "no answer"  # where the points failed


class Rule(NamedTuple):
    """
    One boundary: `value(results, verdicts)` is above 0 on the allowed side, below on the other.

    `forbids` tells a limit from a mere line of a result; `smooth` whether the value can be interpolated.
    """

    name: str
    value: object
    forbids: bool = True
    smooth: bool = True


def rules(case, claims=(), lines=()):
    """
    Return the rules of a case: its limits, every verdict that can be FAIL, claims; then lines of results.

    Parameters
    ----------
    case : Case
        For its limits.
    claims : sequence of Claim
        What should hold, like a limit.
    lines : sequence of Claim
        `chlorine_slip=1 %`: where a result has this value.
    """
    found = []
    for name, verdict in SHARES.items():
        limit = getattr(case.limits, name)
        if limit is not None:
            found.append(Rule(verdict, _ratio(name, "", limit)))
    if case.limits.pressure_drop is not None:
        found.append(Rule("pressure drop", _ratio("pressure_drop", "", case.limits.pressure_drop)))
    if case.limits.hottest is not None:
        found.append(Rule("exotherm", _plain(MARGINS["exotherm"])))
    found.append(Rule("dew point", _plain(MARGINS["dew point"], NOTHING_CONDENSES)))
    found += [
        Rule(name, _verdict(name), smooth=False) for name in ("explosive range", "closures", "shell material")
    ]
    found.append(Rule("data range", _below("temperature_hottest", SIGMA_LIMIT if case.lamp else PYROLYSIS)))
    if case.sleeve is not None:
        found.append(Rule("sleeve skin", _below("sleeve_skin_temperature", _skin_limit(case))))
    found += [Rule(each.text, _claim(each)) for each in claims]
    found.append(Rule(NO_ANSWER, lambda values, more: 1.0, smooth=False))
    return found + [Rule(each.text, _claim(each), forbids=False) for each in lines]


def _skin_limit(case):
    """Return the limit of the sleeve's skin: stated, or that of the fuels fed [K]."""
    from reactor.hazards.materials import hot_surface_limit

    total = sum(sum(feed.moles.values()) for feed in case.feed.values())
    fuels = {s for feed in case.feed.values() for s, n in feed.moles.items() if n > 1e-3 * total}
    return case.limits.sleeve_skin or hot_surface_limit(sorted(fuels & set(SKIN_FUELS)))


def _below(name, limit):
    return lambda values, more: None if values.get(name) is None else limit - values[name]


def _get(values, more, name, species):
    return more.get(name, {}).get(species, 0.0) if species else values.get(name)


def _ratio(name, species, limit):
    """Return ln(limit/value): smooth over decades."""

    def value(values, more):
        found = _get(values, more, name, species)
        return None if found is None else math.log(limit / max(found, 1e-12)) if limit > 0 else -found

    return value


def _plain(name, missing=None):
    return lambda values, more: missing if values.get(name) is None else values[name]


def _verdict(name, word="FAIL"):
    worst = WORDS.index(word)

    def value(values, more):
        found = more.get("verdicts", {}).get(name)
        return None if found is None else 1.0 if WORDS.index(found) < worst else -1.0

    return value


def _claim(claim):
    """Return how far a claim holds; ratios for numbers above 0, as they may span decades."""
    sign = -1.0 if claim.sign.startswith(">") else 1.0

    def value(values, more):
        found = _get(values, more, claim.name, claim.species)
        if found is None or isinstance(claim.limit, str):
            return None if found is None else 1.0 if claim.holds(found) else -1.0
        if claim.limit > 0 and found > 0:
            return sign * math.log(claim.limit / found)
        return sign * (claim.limit - found)

    return value
