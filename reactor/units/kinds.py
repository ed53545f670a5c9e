"""
Kinds of quantity: what the trade writes for a length or a pressure, and what a credible one is.

`LENGTH.read("3 m")` gives `Typed(text, si, unit)`; anything else raises a ValueError whose text is the
sentence for the user. A kind accepts every unit of the dimension and the sort of its listed spellings.
"""

import difflib
import math
import re
from dataclasses import dataclass, replace
from typing import Any, NamedTuple

from reactor.units.table import NONE, show, unit


class Typed(NamedTuple):
    """What was typed, its value (SI where it has a dimension), and the SI unit."""

    text: str
    si: Any
    unit: str


@dataclass(frozen=True)
class Kind:
    """A kind of quantity: name with its article, SI unit, spellings, an example, credible range, hints."""

    name: str
    si: str
    accepted: tuple[str, ...]
    like: str
    least: float
    most: float
    hints: tuple[tuple[str, str], ...] = ()

    def within(self, least, most, like=None):
        """Return the same kind with a narrower credible range (SI)."""
        return replace(self, least=least, most=most, like=like or self.like)

    @property
    def bare(self):
        """Tell whether a plain number will do."""
        return "-" in self.accepted

    @property
    def due(self):
        """Return what is due, as an error says it."""
        return f"{self.name}, like {self.like}" if self.bare else f'{self.name}, like "{self.like}"'

    def read(self, value):
        """Return what was typed as `Typed`; raise a ValueError with the sentence for the user."""
        if isinstance(value, bool) or not isinstance(value, str | int | float):
            raise ValueError(f"{value!r}: {self.name} is due; {self._like}")
        quoted = self._quote(value)
        number, name = _split(str(value), quoted, self)
        known = self._unit(quoted, name)
        si = (number + known.shift) * known.factor
        if si < self.least and si <= 0 < self.least:
            raise ValueError(f"{quoted}: {self.name} is more than 0; {self._like}")
        if not self.least <= si <= self.most:
            raise ValueError(f"{quoted}: outside {self._range(name, known)}; {self._like}")
        si_unit = self.si if known.powers == unit(self.si).powers else "kg/s"
        return Typed(str(value), si, si_unit)

    @property
    def _like(self):
        return f"write it like {self.like}" if self.bare else f'write it like "{self.like}"'

    @property
    def _written(self):
        return f'{self.name} is written in {", ".join(self.accepted)}; like "{self.like}"'

    def _quote(self, value):
        return f'"{value}"' if isinstance(value, str) else f"{value!r}"

    def _range(self, name, known):
        return f"{show(self.least, name)} to {show(self.most, name)}"

    def _unit(self, quoted, name):
        """Return the unit of a typed quantity, or say what is wrong with it."""
        if not name:
            raise ValueError(f"{quoted}: the unit is missing; {self._written}")
        name = "1" + name if name.startswith("/") else name
        if name in _TRAPS:
            raise ValueError(f"{quoted}: {name} {_TRAPS[name]}; {self._like}")
        try:
            known = unit(name)
        except ValueError as error:
            near = difflib.get_close_matches(name, self.accepted, 1)
            ask = f"; did you mean '{near[0]}'?" if near else ""
            raise ValueError(f"{quoted}: {error}{ask}; {self._written}") from None
        fits = [unit(accepted) for accepted in self.accepted]
        if (known.powers, known.sort) in {(fit.powers, fit.sort) for fit in fits}:
            return known
        for example, hint in self.hints:
            if (known.powers, known.sort) == (unit(example).powers, unit(example).sort):
                raise ValueError(f"{quoted}: {name} {hint}; {self._like}")
        if known.powers in {fit.powers for fit in fits} or known.powers not in _names():
            raise ValueError(f"{quoted}: {name} does not fit; {self._written}")
        raise ValueError(f"{quoted}: {name} is {_names()[known.powers]}, {self.name} is due; {self._like}")


def _split(text, quoted, kind):
    """Return the number and the unit of a typed quantity, or say what is wrong with the number."""
    plain = text.strip().replace("−", "-").replace("\u00a0", " ")
    if re.match(r"[+-]?(nan|inf)", plain, re.IGNORECASE):
        raise ValueError(f"{quoted}: not a number; {kind._like}")
    match = re.match(r"([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*(.*)", plain)
    if not match:
        raise ValueError(f"{quoted}: the number is missing; {kind._like}")
    number, rest = match[1], match[2]
    if re.match(r",\d", rest):
        raise ValueError(f"{quoted}: a comma cannot stand in a number; {_without_comma(plain)}")
    if re.match(r"[_']?\d(?!/)|\d/", rest) and not rest.startswith("1/"):
        joined = re.sub(r"(?<=\d)[\s_']+(?=\d)", "", plain)
        raise ValueError(f'{quoted}: the digits of a number stand together; write "{joined}"')
    if not math.isfinite(float(number)):
        raise ValueError(f"{quoted}: the number is too large; {kind._like}")
    return float(number), rest or ("-" if kind.bare else "")


def _without_comma(plain):
    """Return the advice for a number with commas: the point, or no mark, or both where it may be either."""
    point, joined = plain.replace(",", "."), plain.replace(",", "")
    if plain.count(",") > 1 or "." in plain:
        return f'write "{joined}"'
    if re.search(r",\d{3}(?!\d)", plain):
        return f'write "{point}" or "{joined}", whichever is meant'
    return f'write "{point}"'


_TRAPS = {
    "C": "is the coulomb; a temperature is written in degC",
    "F": "is the farad; a temperature is written in degF",
    "sccm": "has no agreed reference; say scfm (60 degF, 14.696 psia), Nm3/h (0 degC, 1.01325 bar) or mol/s",
    "slm": "has no agreed reference; say Nm3/h (0 degC, 1.01325 bar), Sm3/h (15 degC) or mol/s",
    "slpm": "has no agreed reference; say Nm3/h (0 degC, 1.01325 bar), Sm3/h (15 degC) or mol/s",
    "cfm": "does not say its conditions; say scfm (60 degF, 14.696 psia)",
    "acfm": "depends on the conditions; say scfm (60 degF, 14.696 psia)",
    "t/a": "does not say the hours run in a year; say kg/h or t/d",
    "t/y": "does not say the hours run in a year; say kg/h or t/d",
    "kt/a": "does not say the hours run in a year; say kg/h or t/d",
}
_GAS = (
    "is a volume at unsaid conditions; say Nm3/h (0 degC, 1.01325 bar), Sm3/h (15 degC, 1.01325 bar), "
    "scfm (60 degF, 14.696 psia), or a flow in kg/h or mol/s"
)
_GAUGE = "does not say absolute or gauge; say bar absolute or barg, psia or psig, kPa absolute or kPa gauge"
_MASS_FLOWS = ("kg/h", "kg/s", "g/s", "t/d", "lb/h")
_MOLE_FLOWS = ("mol/s", "mol/h", "kmol/h", "lbmol/h", "Nm3/h", "Sm3/h", "scfm", "scfh")
_LENGTHS = ("m", "cm", "mm", "um", "inch", "ft")

TEMPERATURE = Kind("a temperature", "K", ("degC", "K", "degF"), "25 degC", 200, 1500)
TEMPERATURE_DIFFERENCE = Kind(
    "a temperature difference", "K", ("K", "delta_degC", "delta_degF"), "10 K", 0, 1000,
    (("degC", "is counted from a fixed zero; a difference is written in K"),),
)  # fmt: skip
PRESSURE = Kind(
    "a pressure", "Pa", ("bar absolute", "barg", "kPa absolute", "kPa gauge", "psia", "psig", "atm"),
    "1.5 bar absolute", 1e3, 1e7, (("bar", _GAUGE),),
)  # fmt: skip
PRESSURE_DIFFERENCE = Kind(
    "a pressure difference", "Pa", ("mbar", "bar", "Pa", "kPa", "psi"), "30 mbar", 0, 1e6,
    (("barg", "is gauge; a difference is neither absolute nor gauge"),
     ("bara", "is absolute; a difference is neither absolute nor gauge")),
)  # fmt: skip
LENGTH = Kind("a length", "m", _LENGTHS, "3 m", 1e-6, 1000)
POSITION = Kind("a position", "m", _LENGTHS, "0.4 m", 0, 1000)
AREA = Kind("an area", "m2", ("m2", "cm2", "mm2", "ft2"), "2 m2", 1e-12, 1e6)
VOLUME = Kind("a volume", "m3", ("m3", "L", "mL", "gal", "ft3"), "76 L", 1e-9, 1e4)
MASS = Kind("a mass", "kg", ("kg", "g", "t", "lb"), "2 kg", 1e-9, 1e7)
TIME = Kind("a time", "s", ("s", "min", "h", "d"), "30 s", 0, 1e9)
POWER = Kind("a power", "W", ("W", "kW", "MW", "BTU/h"), "2 kW", 1e-6, 1e8)
MASS_FLOW = Kind(
    "a mass flow", "kg/s", _MASS_FLOWS, "1200 kg/h", 1e-12, 1e5, (("m3/h", "is a volume; say kg/h"),)
)
FLOW = Kind("a flow", "mol/s", _MASS_FLOWS + _MOLE_FLOWS, "100 kg/h", 1e-15, 1e6, (("m3/h", _GAS),))
COEFFICIENT = Kind(
    "a heat transfer coefficient", "W/m2/K", ("W/m2/K", "kW/m2/K", "BTU/h/ft2/degF"), "25 W/m2/K", 0.01, 1e6
)
FOULING = Kind("a fouling resistance", "m2*K/W", ("m2*K/W", "m2*K/kW", "h*ft2*degF/BTU"), "2e-4 m2*K/W", 0, 1)
RATE = Kind("a rate constant", "1/s", ("1/s", "1/min", "1/h"), "0.1 1/s", 0, 1e9)
FREQUENCY = Kind("a frequency", "1/s", ("rpm", "1/s", "1/min", "Hz"), "300 rpm", 0, 1e4)
NUMBER = Kind("a number", "-", ("-",), "8", -math.inf, math.inf)
_BASE = (("mol%", "is by mol; a plain share is due"), ("wt%", "is by mass; a plain share is due"))
FRACTION = Kind("a fraction", "-", ("%", "-"), '"2 %"', 0, 1, _BASE)
MOLE_FRACTION = Kind(
    "a fraction by mol", "-", ("%", "-", "mol%", "vol%", "ppm_mol"), '"2 mol%"', 0, 1,
    (("wt%", "is by mass; a fraction by mol is due"), ("ppm", "does not say its base; say ppm_mol")),
)  # fmt: skip
MASS_FRACTION = Kind(
    "a fraction by mass", "-", ("%", "-", "wt%", "ppm_wt"), '"2 wt%"', 0, 1,
    (("mol%", "is by mol; a fraction by mass is due"), ("ppm", "does not say its base; say ppm_wt")),
)  # fmt: skip
PORTION = Kind(
    "a portion of a composition", "-", ("mol%", "wt%", "ppm_mol", "ppm_wt"), "99 mol%", 0, 1,
    (("%", "does not say its base; say mol% or wt%"),
     ("ppm", "does not say its base; say ppm_mol or ppm_wt")),
)  # fmt: skip
KINDS = (
    TEMPERATURE, TEMPERATURE_DIFFERENCE, PRESSURE, PRESSURE_DIFFERENCE, LENGTH, AREA, VOLUME, MASS, TIME,
    POWER, MASS_FLOW, FLOW, COEFFICIENT, FOULING, RATE, FREQUENCY, NUMBER, FRACTION, MOLE_FRACTION,
    MASS_FRACTION, PORTION,
)  # fmt: skip


def _names():
    """Return the name of each dimension, as an error says it."""
    return {unit(kind.si).powers: kind.name for kind in KINDS if unit(kind.si).powers != NONE} | {
        NONE: "a pure number",
        unit("Pa").powers: "a pressure",
        unit("K").powers: "a temperature",
        unit("mol").powers: "an amount of gas",
        unit("m3/s").powers: "a volume flow",
        unit("1/s").powers: "a rate constant",
        unit("kg/s").powers: "a mass flow",
        unit("mol/s").powers: "a flow of gas",
        unit("J").powers: "an energy",
    }


def help_rows():
    """Return (kind, SI unit, accepted spellings, example) of every kind, for `check` and the manual."""
    return [
        (kind.name.split(" ", 1)[1], kind.si, ", ".join(kind.accepted), kind.like.strip('"'))
        for kind in KINDS
    ]
