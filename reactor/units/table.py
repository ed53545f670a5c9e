"""
The trade's units: a small table, and the rules that join its entries into `W/m2/K` or `Nm3/h`.

`SI = (number + shift) * factor`. `Nm3`, `Sm3` and `scf` are amounts of ideal gas at their reference
conditions, so they are moles. Gauge pressures are counted from 1.01325 bar.
"""

import math
import re
from functools import cache
from typing import NamedTuple

GAS_CONSTANT = 8.31446261815324  # J/mol/K, CODATA 2018 (exact)
ATMOSPHERE = 101325.0  # Pa
POUND, FOOT, INCH, RANKINE = 0.45359237, 0.3048, 0.0254, 5 / 9
PSI = POUND * 9.80665 / INCH**2
BTU = 1055.05585262  # J, International Table
NORMAL = ATMOSPHERE / GAS_CONSTANT / 273.15  # mol in 1 Nm3: 0 degC, 1.01325 bar
STANDARD = ATMOSPHERE / GAS_CONSTANT / 288.15  # mol in 1 Sm3: 15 degC, 1.01325 bar
SCF = 14.696 * PSI * FOOT**3 / GAS_CONSTANT / (519.67 * RANKINE)  # mol in 1 scf: 60 degF, 14.696 psia


class Unit(NamedTuple):
    """A unit: factor to SI, shift of its zero, powers of (m, kg, s, K, mol), and what it is counted from."""

    factor: float
    shift: float
    powers: tuple[int, ...]
    sort: str = ""


NONE, LENGTH, MASS, TIME, KELVIN, MOL = ((0,) * 5, *(tuple(int(i == j) for j in range(5)) for i in range(5)))
PRESSURE, ENERGY, POWER = (-1, 1, -2, 0, 0), (2, 1, -2, 0, 0), (2, 1, -3, 0, 0)
VOLUME, PER_TIME, FORCE = (3, 0, 0, 0, 0), (0, 0, -1, 0, 0), (1, 1, -2, 0, 0)

_PRESSURES = {"Pa": 1, "kPa": 1e3, "MPa": 1e6, "hPa": 100, "bar": 1e5, "mbar": 100, "psi": PSI}
_PLAIN = {
    NONE: {"-": 1, "1": 1, "%": 0.01},
    LENGTH: {"m": 1, "cm": 0.01, "mm": 1e-3, "um": 1e-6, "nm": 1e-9, "km": 1e3, "angstrom": 1e-10,
             "inch": INCH, "in": INCH, '"': INCH, "ft": FOOT},
    MASS: {"kg": 1, "g": 1e-3, "mg": 1e-6, "ug": 1e-9, "t": 1e3, "lb": POUND},
    TIME: {"s": 1, "ms": 1e-3, "us": 1e-6, "ns": 1e-9, "min": 60, "h": 3600, "d": 86400},
    KELVIN: {"delta_degC": 1, "delta_degF": RANKINE},
    MOL: {"mol": 1, "kmol": 1e3, "mmol": 1e-3, "umol": 1e-6, "lbmol": POUND * 1e3,
          "Nm3": NORMAL, "Sm3": STANDARD, "scf": SCF},
    PRESSURE: {**_PRESSURES, "uPa": 1e-6, "mPa": 1e-3, "GPa": 1e9,
               "mmHg": 133.322387415, "Torr": ATMOSPHERE / 760},
    ENERGY: {"J": 1, "kJ": 1e3, "MJ": 1e6, "cal": 4.184, "kcal": 4184, "kWh": 3.6e6, "BTU": BTU, "Btu": BTU},
    POWER: {"W": 1, "mW": 1e-3, "uW": 1e-6, "kW": 1e3, "MW": 1e6},
    VOLUME: {"L": 1e-3, "l": 1e-3, "litre": 1e-3, "liter": 1e-3, "mL": 1e-6, "gal": 231 * INCH**3},
    FORCE: {"N": 1, "mN": 1e-3},
    (0, 0, -1, 0, 1): {"scfm": SCF / 60, "scfh": SCF / 3600},
}  # fmt: skip
_SORTED = {
    ("K", 1, 0, KELVIN): "absolute or difference",
    ("degC", 1, 273.15, KELVIN): "absolute",
    ("degF", RANKINE, 459.67, KELVIN): "absolute",
    ("atm", ATMOSPHERE, 0, PRESSURE): "absolute",
    ("mol%", 0.01, 0, NONE): "mol",
    ("vol%", 0.01, 0, NONE): "mol",
    ("ppm_mol", 1e-6, 0, NONE): "mol",
    ("wt%", 0.01, 0, NONE): "mass",
    ("ppm_wt", 1e-6, 0, NONE): "mass",
    ("ppm", 1e-6, 0, NONE): "unsaid",
    ("ppb", 1e-9, 0, NONE): "unsaid",
    ("deg", math.pi / 180, 0, NONE): "angle",
    ("rad", 1, 0, NONE): "angle",
    ("Hz", 1, 0, PER_TIME): "turns",
    ("rpm", 1 / 60, 0, PER_TIME): "turns",
}
_SIGNS = {"²": "2", "³": "3", "°": "deg", "º": "deg", "µ": "u", "μ": "u", "Å": "angstrom", "·": "*", "″": '"'}
_SIGNS |= {"⁻¹": "-1", "^": "", "℃": "degC", "℉": "degF", "\u00a0": " "}


def _build():
    """Return every single unit by its spellings."""
    table = {
        name: Unit(float(factor), 0.0, powers)
        for powers, names in _PLAIN.items()
        for name, factor in names.items()
    }
    for (name, factor, shift, powers), sort in _SORTED.items():
        table[name] = Unit(float(factor), float(shift), powers, sort)
    for name, factor in _PRESSURES.items():
        for end in (" absolute", " abs", "(a)", "a"):
            table[name + end] = Unit(float(factor), 0.0, PRESSURE, "absolute")
        for end in (" gauge", "(g)", "g"):
            table[name + end] = Unit(float(factor), ATMOSPHERE / factor, PRESSURE, "gauge")
    return table


TABLE = _build()


@cache
def unit(text):
    """
    Return the `Unit` that a spelling such as `W/m^2/K` or `degC` stands for.

    Examples
    --------
    >>> print(unit("kJ/mol").factor)
    1000.0
    """
    plain = " ".join(text.split())
    for letter, plainer in _SIGNS.items():
        plain = plain.replace(letter, plainer)
    if plain in TABLE:
        return TABLE[plain]
    plain = re.sub(r"/\(([^()]*)\)", lambda group: "/" + re.sub(r"[* ]+", "/", group[1].strip()), plain)
    factor, powers, sign = 1.0, NONE, 1
    for piece in re.split(r"([*/])", plain):
        if piece in ("*", "/"):
            sign = 1 if piece == "*" else -1
            continue
        known, power = _atom(piece.strip(), text)
        factor *= known.factor ** (sign * power)
        powers = tuple(a + sign * power * b for a, b in zip(powers, known.powers, strict=True))
    return Unit(factor, 0.0, powers)


def _atom(piece, text):
    """Return the unit and the power of one factor of a compound unit, such as `ft2` or `m-3`."""
    match = re.fullmatch(r'([A-Za-z_%"]+)(-?[1-9])', piece)
    name = match[1] if match and piece not in TABLE else piece
    known = TABLE.get(name)
    if known is None or (known.shift and known.powers != KELVIN):
        raise ValueError(f"unknown unit {text!r}")
    return known, int(match[2]) if match and name != piece else 1


def to_si(number, text):
    """
    Return a number (or array) given in the unit `text` in SI.

    Parameters
    ----------
    number : float or array
        The number as printed. [any]
    text : str
        Its unit, such as `nm`, `W/m^2/K` or `degC`. [-]

    Returns
    -------
    si : same shape as `number`
        The number in SI. [SI]

    Examples
    --------
    >>> print(f"{to_si(25, 'degC'):.2f} {to_si(1, 'Nm3/h'):.5f}")
    298.15 0.01239
    """
    known = unit(text)
    return (number + known.shift) * known.factor


def from_si(number, text):
    """
    Return an SI number (or array) in the unit `text`; the reverse of `to_si`.

    Examples
    --------
    >>> print(f"{from_si(298.15, 'degF'):.1f}")
    77.0
    """
    known = unit(text)
    return number / known.factor - known.shift


def show(value, text, digits=4):
    """
    Write an SI number in the unit `text`, rounded to `digits` figures.

    Examples
    --------
    >>> print(show(0.012393, "Nm3/h"), show(151325.0, "barg"), show(0.0002, "-"), show(123456.7, "W"))
    1 Nm3/h 0.5 barg 0.0002 123457 W
    """
    number = float(from_si(value, text))
    if number == 0 or not math.isfinite(number):
        words = f"{number:g}"
    elif 1e-4 <= abs(number) < 1e7:
        words = f"{number:.{max(0, digits - 1 - math.floor(math.log10(abs(number))))}f}"
        words = words.rstrip("0").rstrip(".") if "." in words else words
    else:
        words = f"{number:.{digits}g}"
    return words if text in ("-", "1") else f"{words} {text}"
