"""
An input as an unknown.

Where it stands, in which unit it is typed, how far it may go, and a case with it changed.
"""

import re
from dataclasses import dataclass, fields

from reactor import case as cases
from reactor import units
from reactor.case import schema
from reactor.case.reader import MANY, SINGLE
from reactor.case.values import Count, nearest
from reactor.errors import CaseError
from reactor.units import kinds

REACH = 1000.0  # how many times smaller or larger than today an input may become when no range is given
DIGITS = 10  # figures in which a trial value is written; the case then says exactly what was solved
EXAMPLES = "lamp.power, vessel.length, vessel.parallel, vessel.pressure, feed.chlorine.ratio"


@dataclass(frozen=True)
class Unknown:
    """
    One input that may be changed.

    `key` as in `--set`; `unit` as typed in the case; `start`, `low`, `high` in SI; `logarithmic` where it
    is searched on a logarithmic scale; `whole` for a count; `along` are lit lengths that go with the length
    of the vessel.
    """

    key: str
    unit: str
    start: float
    low: float
    high: float
    logarithmic: bool = True
    whole: bool = False
    along: tuple = ()

    def text(self, value):
        """Return a value in SI as the case would have it typed."""
        if self.whole:
            return str(round(value))
        number = f"{units.from_si(value, self.unit):.{DIGITS}g}"
        return number if self.unit == "-" else f"{number} {self.unit}"

    def overrides(self, value):
        """Return the `--set` texts that put a value into a case."""
        return [f"{key}={self.text(value)}" for key in (self.key, *self.along)]


def put(case, unknowns, values):
    """Return the case with every unknown at its value [SI]."""
    return cases.changed(case, [text for u, v in zip(unknowns, values, strict=True) for text in u.overrides(v)])


def unknown(case, key, between=None):
    """
    Return the `Unknown` of a key such as `lamp.power`.

    Parameters
    ----------
    case : Case
        Gives today's value, where the search begins, and the unit. [-]
    key : str
        As for `--set`. [-]
    between : tuple of str, optional
        Lowest and highest value with their units. [-]

    Raises
    ------
    CaseError
        When the key is no numeric input of the case.
    """
    kind = _kind(case, key)
    typed = _typed(case, key)
    whole = isinstance(kind, Count)
    start = _today(case, key) if typed is None else float(typed.si)
    if whole:
        low, high = float(kind.least), float(kind.most)
        low, high = _range(kind, between, low, min(high, max(start or 1, 1) * 50))
        return Unknown(key, "-", start or low, low, high, True, True)
    unit = _unit(typed, kind)
    low, high = kind.least, kind.most
    positive = low >= 0 and kind.si != "K" and (start is None or start > 0)
    if positive:
        low, high = max(low, (start or high / REACH) / REACH), min(high, (start or high) * REACH)
    low, high = _range(kind, between, low, high)
    positive = positive and low > 0
    if start is None or not low <= start <= high:
        start = (low * high) ** 0.5 if positive else (low + high) / 2
    return Unknown(key, unit, start, low, high, positive, False, _along(case, key))


def _range(kind, between, low, high):
    """Return the range as stated, else as it is."""
    if between is None:
        return low, high
    try:
        found = [
            float(kind.read(int(text) if isinstance(kind, Count) and text.strip().isdigit() else text).si)
            for text in between
        ]
    except ValueError as error:
        raise CaseError(f"--between: {error}") from None
    if not found[0] < found[1]:
        raise CaseError(f"--between: {between[0]} is not below {between[1]}")
    return found[0], found[1]


def _kind(case, key):
    """Return what sort of input a key is."""
    section, *rest = key.split(".")
    name = rest[-1] if rest else ""
    if section == "feed" and len(rest) >= 2:
        if rest[0] not in case.feed:
            raise CaseError(f"--find {key}: {nearest(rest[0], tuple(case.feed))}")
        if len(rest) == 3 and rest[1] == "composition":
            return kinds.PORTION
        known = {item.name: item for item in fields(schema.FeedForm)}
    elif section == "recycle":
        known = {item.name: item for item in fields(schema.RecycleForm)}
    else:
        cls = SINGLE.get(section) or MANY.get(section)
        if cls is None:
            raise CaseError(f"--find {key}: {nearest(section, (*SINGLE, *MANY, 'feed'))}; write it like {EXAMPLES}")
        known = {item.name: item for item in fields(cls) if "kind" in item.metadata}
    if name not in known:
        raise CaseError(f"--find {key}: {nearest(name, known)}")
    kind = known[name].metadata["kind"]
    if not isinstance(kind, kinds.Kind | Count):
        raise CaseError(f"--find {key}: holds words, not a number; choose an input like {EXAMPLES}")
    entries = len(getattr(case, section)) if section in MANY else 1
    if not entries or (section in MANY and rest[0].isdigit() and not 1 <= int(rest[0]) <= entries):
        raise CaseError(f"--find {key}: the case has {entries} entries [[{section}]]")
    return kind


def _typed(case, key):
    """Return what the case says of a key; of several lamps the first."""
    section, *rest = key.split(".")
    if section in MANY and rest and not rest[0].isdigit():
        found = [case.typed.get(f"{section}.{i}.{rest[-1]}") for i in range(1, 1 + len(getattr(case, section)))]
        values = {typed.si for typed in found if typed is not None}
        if len(values) > 1:
            raise CaseError(f"--find {key}: the entries differ; name one of them, like {section}.1.{rest[-1]}")
        return found[0]
    return case.typed.get(key)


def _today(case, key):
    """Return the value that an input has without being typed, else None."""
    section, *rest = key.split(".")
    if section == "feed":
        return None
    holder = getattr(case, section)
    if section in MANY:
        holder = holder[int(rest[0]) - 1 if rest[0].isdigit() else 0]
    value = getattr(holder, rest[-1], None)
    return float(value) if isinstance(value, int | float) else None


def _unit(typed, kind):
    """Return the unit in which an input is typed, else the first that the trade writes."""
    if typed is not None:
        match = re.match(r"\s*[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?\s*(.*)", typed.text)
        if match and match[1]:
            return match[1].strip()
        if match:
            return "-"
    return kind.accepted[0] if "-" not in kind.accepted else "-"


def _along(case, key):
    """Return the lit ends that lie at the outlet and go with it when the vessel's length is changed."""
    if key != "vessel.length":
        return ()
    return tuple(
        f"lamp.{i}.lit_to"
        for i, lamp in enumerate(case.lamp, start=1)
        if f"lamp.{i}.lit_to" in case.typed and lamp.lit_to == case.vessel.length
    )
