"""
What a study varies: `lamp.power=0.5..5 kW, 10 log` becomes an axis of values, several axes become points.

A list is `5,10,20,45`, words included; a range is `0.5..5 kW, 10` (evenly) or `0.5..5 kW, 10 log`; without a
number of values, `0.5..5 kW` or `0.5..5 kW, log`, it is for sampling. The last unit holds for all that carry
none.
"""

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import NamedTuple

from reactor.errors import CaseError
from reactor.units import from_si, to_si, unit
from reactor.units.kinds import KINDS

NUMBER = r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?"
FORMS = (
    'write it like "lamp.power=0.5..5 kW, 10 log", "feed.chlorine.ratio=5,10,20" or "lamp.power=0.5..5 kW"'
)


class Point(NamedTuple):
    """One what-if: its place in the study, what it overrides (`key=text`), and its inputs in SI or words."""

    number: int
    overrides: tuple
    inputs: tuple


@dataclass(frozen=True)
class Axis:
    """
    One varied input.

    Parameters
    ----------
    key : str
        The key of the case file.
    unit : str
        SI unit of its numbers; "1" for plain numbers, "word" for words.
    values : sequence of str
        What is typed for each value; empty for a range that is to be sampled.
    low, high : float
        Ends of a sampled range, in `typed`. [any]
    typed : str
        Unit as typed, for a sampled range.
    log : bool
        Whether a range is spaced, or sampled, evenly in the logarithm.
    """

    key: str
    unit: str
    values: Sequence = ()
    low: float = math.nan
    high: float = math.nan
    typed: str = ""
    log: bool = False

    def at(self, share):
        """Return the text of the value at a share of 0 to 1 of a sampled range."""
        if self.log:
            return _text(self.low * (self.high / self.low) ** share, self.typed)
        return _text(self.low + (self.high - self.low) * share, self.typed)

    def share(self, si):
        """Return the share of 0 to 1 of an SI value in a sampled range; the reverse of `at`."""
        value = float(from_si(si, self.typed or "-"))
        if self.log:
            return math.log(value / self.low) / math.log(self.high / self.low)
        return (value - self.low) / (self.high - self.low)

    def si(self, text):
        """Return the SI value of one of the texts, or the word itself."""
        found = _split(text)
        return text if found is None or self.unit == "word" else float(to_si(found[0], found[1] or "-"))


def axis(text, case=None):
    """
    Return the `Axis` that `key=values` stands for.

    Parameters
    ----------
    text : str
        As typed after --vary.
    case : Case
        Resolves `feed.ratio` to the stream that brings the chlorine.

    Raises
    ------
    CaseError
        When it is no variation; says how one is written.

    Examples
    --------
    >>> tuple(axis("lamp.power=0.5..5 kW, 3 log").values)
    ('0.5 kW', '1.58113883008 kW', '5 kW')
    >>> axis("feed.chlorine.ratio=5,10,20").values, axis("cooling.mode=none,constant").unit
    (('5', '10', '20'), 'word')
    """
    key, sign, rest = text.partition("=")
    key, rest = key.strip(), rest.strip()
    if not sign or not key or not rest:
        raise CaseError(f"--vary {text}: {FORMS}")
    key = _resolved(key, case)
    if ".." in rest:
        return _range(key, rest, text)
    parts = [part.strip() for part in re.split(r",(?![^\[{]*[\]}])", rest)]
    if not all(parts):
        raise CaseError(f"--vary {text}: a value is missing between two commas; {FORMS}")
    return _list(key, parts, text)


def _resolved(key, case):
    """Return a key with `feed.ratio` put on the stream that brings the chlorine."""
    if key != "feed.ratio" or case is None:
        return key
    streams = [name for name, feed in case.feed.items() if feed.moles.get("Cl2", 0.0) > 0]
    return f"feed.{streams[0]}.ratio" if streams else key


def _split(text):
    """Return number and unit of a text, or None for words."""
    match = re.fullmatch(rf"({NUMBER})\s*(.*)", text.strip())
    if not match:
        return None
    try:
        unit(match[2] or "-")
    except ValueError:
        return None
    return float(match[1]), match[2]


def _text(number, typed):
    words = f"{number:.12g}"
    return f"{words} {typed}" if typed else words


def _list(key, parts, text):
    numbers = [_split(part) for part in parts]
    if any(number is None for number in numbers):
        return Axis(key, "word", tuple(parts))
    last = next((found[1] for found in reversed(numbers) if found[1]), "")
    typed = tuple(
        part if found[1] or not last else f"{part} {last}" for part, found in zip(parts, numbers, strict=True)
    )
    kinds = {unit(_split(value)[1] or "-").powers for value in typed}
    if len(kinds) > 1:
        raise CaseError(f"--vary {text}: the values have different dimensions; give all one kind of unit")
    return Axis(key, si_unit(last or "-"), typed)


def _range(key, rest, text):
    match = re.fullmatch(
        rf"({NUMBER})\s*(.*?)\s*\.\.\s*({NUMBER})\s*(.*?)\s*(?:[,/]\s*(?:(\d+)\s*)?(log)?)?", rest
    )
    if not match or (rest.rstrip().endswith((",", "/"))):
        raise CaseError(f"--vary {text}: is no range; {FORMS}")
    low, first, high, last, count, log = match.groups()
    try:
        known, start = unit(last or first or "-"), unit(first or last or "-")
    except ValueError as error:
        raise CaseError(f"--vary {text}: {error}; {FORMS}") from None
    if known.powers != start.powers:
        raise CaseError(f"--vary {text}: {first} and {last} are different kinds of unit")
    typed = last or first
    low = (
        (float(low) + start.shift) * start.factor / known.factor - known.shift
        if first and first != last
        else float(low)
    )
    high = float(high)
    if log and not (low > 0 and high > 0):
        raise CaseError(f"--vary {text}: a logarithmic range has both ends above 0")
    if low == high:
        raise CaseError(f"--vary {text}: both ends are the same")
    free = Axis(key, si_unit(typed or "-"), (), low, high, typed, bool(log))
    if count is None:
        return free
    if int(count) < 2:
        raise CaseError(f"--vary {text}: a range has at least 2 values")
    return replace(free, values=Spaced(free, int(count)))  # type: ignore[arg-type]


@dataclass(frozen=True)
class Spaced:
    """The texts of a range with a number of values; each is made when it is asked for."""

    axis: Axis
    count: int

    def __len__(self):
        return self.count

    def __getitem__(self, place):
        if not 0 <= place < self.count:
            raise IndexError(place)
        return self.axis.at(place / (self.count - 1))


def si_unit(text):
    """
    Return the name of the SI unit of a spelling.

    Examples
    --------
    >>> si_unit("degC"), si_unit("kW"), si_unit("barg"), si_unit("%"), si_unit("mm")
    ('K', 'W', 'Pa', '1', 'm')
    """
    powers = unit(text).powers
    for name in (
        "1",
        "K",
        "W",
        "Pa",
        "m",
        "1/s",
        "kg/s",
        "mol/s",
        "s",
        "W/m2/K",
        "m2*K/W",
        *(k.si for k in KINDS),
    ):
        if unit(name).powers == powers:
            return name
    return "SI"


@dataclass(frozen=True)
class Grid:
    """
    Points on the values of several axes: every combination, or (`zipped`) value by value.

    Points are made when they are asked for, so a large grid needs no memory.
    """

    axes: tuple
    zipped: bool = False

    def __post_init__(self):
        for each in self.axes:
            if not each.values:
                raise CaseError(
                    f"--vary {each.key}: a range without a number of values is for --sample; write it like "
                    f'"{each.key}={each.low:g}..{each.high:g} {each.typed}, 10"'
                )
        if self.zipped and len({len(each.values) for each in self.axes}) > 1:
            counts = ", ".join(f"{each.key} {len(each.values)}" for each in self.axes)
            raise CaseError(f"--zip: axes of equal length are due; these have {counts}")

    @property
    def size(self):
        """Return the number of points."""
        return len(self.axes[0].values) if self.zipped else math.prod(len(each.values) for each in self.axes)

    @property
    def words(self):
        """Return how the size comes about."""
        sign = " with " if self.zipped else " x "
        return sign.join(f"{len(each.values)} {each.key}" for each in self.axes)

    def spec(self):
        """Return what defines the points, as plain data."""
        values = {each.key: _spec(each.values) for each in self.axes}
        return {"form": "zip" if self.zipped else "grid", "values": values}

    def points(self, start=0):
        """Yield the points from number `start` on; the last axis runs fastest."""
        for number in range(start, self.size):
            yield point(self.axes, number, self._texts(number))

    def _texts(self, number):
        """Return one text an axis."""
        if self.zipped:
            return [each.values[number] for each in self.axes]
        places = []
        for each in reversed(self.axes):
            number, place = divmod(number, len(each.values))
            places.append(each.values[place])
        return places[::-1]


def _spec(values):
    """Return what defines the values of one axis, as plain data."""
    if isinstance(values, Spaced):
        return {
            "from": values[0],
            "to": values[len(values) - 1],
            "number": len(values),
            "log": values.axis.log,
        }
    return list(values)


def point(axes, number, texts):
    """Return the `Point` of one text an axis."""
    overrides = tuple(f"{each.key}={text}" for each, text in zip(axes, texts, strict=True))
    return Point(number, overrides, tuple(each.si(text) for each, text in zip(axes, texts, strict=True)))
