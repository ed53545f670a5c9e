"""Claims about results, `chlorine_slip<2 %`, that make a study or a rating a check with an exit code."""

import operator
import re
from typing import NamedTuple

from reactor.errors import CaseError
from reactor.result import NAMES
from reactor.study.rated import BY_SPECIES, LISTS
from reactor.units import to_si, unit

SIGNS = {"<=": operator.le, ">=": operator.ge, "<": operator.lt, ">": operator.gt, "=": operator.eq}
WORSE = {"fail": ("FAIL",), "caution": ("FAIL", "CAUTION", "OUT OF DATA RANGE")}


class Claim(NamedTuple):
    """A result, its species or "", a comparison, the limit in the unit of the result, all as typed."""

    name: str
    species: str
    sign: str
    limit: float | str
    text: str

    def holds(self, value):
        """Tell whether a value keeps the claim; what was not found keeps none."""
        return value is not None and SIGNS[self.sign](value, self.limit)


def claim(text):
    """
    Return the `Claim` that a text makes.

    Raises
    ------
    CaseError
        For an unknown result, a unit that does not fit, or no comparison.

    Examples
    --------
    >>> claim("chlorine_slip<2 %").limit, claim("temperature_hottest < 150 degC").limit
    (0.02, 423.15)
    >>> claim("share_mol.CH2Cl2 <= 5 mol%").species
    'CH2Cl2'
    """
    match = re.fullmatch(r"\s*([a-z_]+)(?:\.(\S+?))?\s*(<=|>=|<|>|=)\s*(.+?)\s*", text)
    if not match:
        raise CaseError(f'--assert {text}: write it like "chlorine_slip<2 %" or "share_mol.CH2Cl2<5 %"')
    name, species, sign, limit = match.groups()
    if name not in NAMES or name in LISTS:
        from difflib import get_close_matches

        near = get_close_matches(name, NAMES, 2) or [known for known in NAMES if name in known]
        raise CaseError(
            f"--assert {text}: no result {name}" + (f"; did you mean {' or '.join(near)}?" if near else "")
        )
    if bool(species) != (name in BY_SPECIES):
        raise CaseError(
            f"--assert {text}: {name} "
            + ("has no species" if species else f"has species: write {name}.CH3Cl")
        )
    return Claim(name, species or "", sign, _limit(text, limit, NAMES[name][0]), text)


def _limit(text, limit, due):
    """Return what a result is compared with, in the unit of the result."""
    if due == "word":
        return limit
    match = re.fullmatch(r"([+-]?[\d.]+(?:[eE][+-]?\d+)?)\s*(.*)", limit)
    try:
        if match is None:
            raise ValueError
        number, typed = float(match[1]), match[2] or ("-" if due == "1" else "")
        if not typed or unit(typed).powers != unit(due).powers:
            raise ValueError
    except ValueError:
        example = {"K": "150 degC", "1": "2 %", "Pa": "30 mbar", "W": "2 kW"}.get(due, f"1 {due}")
        raise CaseError(f"--assert {text}: a value in {due} or alike is due, such as {example}") from None
    return float(to_si(number, typed)) / (1.0 if due == "K" else float(to_si(1.0, due)))


def broken(claims, results):
    """Return the claims that the `results` of a rating break."""

    def value(each):
        found = results.get(each.name)
        found = found.get(each.species) if each.species and found else found
        return found["value"] if isinstance(found, dict) else found

    return [each for each in claims if not each.holds(value(each))]


class Check(NamedTuple):
    """What claims and verdicts say: (claim, point) where one breaks, (point, word) of a bad verdict."""

    broken: list
    bad: list

    @property
    def kept(self):
        """Tell whether all holds."""
        return not (self.broken or self.bad)


def check(path, claims=(), fail_on=None, most=20):
    """
    Check every finished point of a study file; the first `most` of each kind are named.

    Parameters
    ----------
    path : str or Path
        The study file.
    claims : sequence of Claim
        What should hold at every point.
    fail_on : str
        "fail" or "caution": verdicts from this one on count too.
    most : int
        How many are named.
    """
    import json

    from reactor.study.tables import stream

    scalar = [each for each in claims if not each.species]
    names = ["number", "state", "worst", "more", *(each.name for each in scalar)]
    found: list = []
    bad: list = []
    for number, state, worst, more, *values in stream(path, names):
        if state != "done":
            continue
        if fail_on and worst in WORSE[fail_on] and len(bad) < most:
            bad.append((number, worst))
        pairs = list(zip(scalar, values, strict=True))
        if len(pairs) < len(claims):
            tables = json.loads(more)
            pairs += [(c, tables.get(c.name, {}).get(c.species, 0.0)) for c in claims if c.species]
        found += [(each, number) for each, value in pairs if len(found) < most and not each.holds(value)]
    return Check(found, bad)
