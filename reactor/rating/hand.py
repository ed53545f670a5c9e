"""
Hand estimates beside the full model: the rules of a pocket calculator with the numbers put in.

The constants are remembered ones (data/rating/hand.csv), not those of the model: a ratio far from one means
that one of the two is wrong, or that the rule does not hold here; the note of each rule says when it does
not.
"""

import math
import re
from typing import NamedTuple

from reactor import library
from reactor.case.species import is_alkane

GAS_CONSTANT, AVOGADRO, ATMOSPHERE = 8.314, 6.022e23, 101325.0
LOW, HIGH = 0.5, 2.0  # ratios outside are marked
ALKANES = ("CH4", "C2H6", "C3H8")
CHLORINE, ACID = 0.0709, 0.03646  # kg/mol


class Line(NamedTuple):
    """One rule: name, formula with numbers, hand and model value, unit, ratio model/hand, mark, note."""

    name: str
    formula: str
    hand: float
    model: float | None
    unit: str
    ratio: float | None
    marked: bool
    note: str


def hand(case, result):
    """
    Return the hand estimates of a rated case as a tuple of `Line`.

    Parameters
    ----------
    case : Case
        What was rated. [-]
    result : Result
        What the full model found. [-]
    """
    desk = _Desk(case, result)
    if desk.alkane is None:
        return ()
    rules = (acid, duty, rise, share, stay, depth, light, wall)
    return tuple(one for rule in rules if (one := rule(desk)) is not None)


class _Desk:
    """The numbers that the rules share, as an engineer would jot them down."""

    def __init__(self, case, result):
        self.case, self.result = case, result
        self.number = {name: datum.value for name, datum in library.sheet("rating/hand.csv").items()}
        self.moles: dict[str, float] = {}
        for feed in case.feed.values():
            for species, n in feed.moles.items():
                self.moles[species] = self.moles.get(species, 0.0) + n
        self.total, self.chlorine = sum(self.moles.values()), self.moles["Cl2"]
        feeds = [s for s in self.moles if s in ALKANES and is_alkane(s)]
        self.alkane = max(feeds, key=lambda s: self.moles[s], default=None)
        self.fuel = self.moles.get(self.alkane or "", 0.0)
        self.slip = result["chlorine_slip"]
        self.used = self.chlorine * (1 - self.slip)
        self.x = self.chlorine / self.total
        self.heats = ("CH4", "CH3Cl", "CH2Cl2", "CHCl3")
        self.gap, self.hydraulic, self.area = space(case)
        self.volume = self.area * case.vessel.length * case.vessel.vessels
        self.inlet = sum(sum(f.moles.values()) * f.temperature for f in case.feed.values()) / self.total
        self.rise = self.x * self.heat / self.capacity
        cooled = case.vessel.kind != "plug flow" and case.cooling.mode != "none"
        self.mean = result["temperature_outlet"] if cooled else self.inlet + (1 - self.slip) * self.rise / 2
        if case.vessel.kind != "plug flow" and not cooled:
            self.mean = self.inlet + (1 - self.slip) * self.rise

    @property
    def heat(self):
        """Return the heat per mol of chlorine, of one step or of all four where it is plenty [J/mol]."""
        steps = self.chlorine / self.fuel
        if self.alkane != "CH4" or steps <= 1:
            return self.number[f"heat_{self.alkane}"]
        taken, left = 0.0, steps
        for species in self.heats:
            part = min(1.0, max(left, 0.0))
            taken, left = taken + part * self.number[f"heat_{species}"], left - part
        return taken / min(steps, 4.0)

    @property
    def capacity(self):
        """Return the heat capacity of the mixed feed [J/mol/K]."""
        return (
            sum(
                n * self.number.get(f"capacity_{s}", self.number["capacity_other"])
                for s, n in self.moles.items()
            )
            / self.total
        )

    @property
    def concentration(self):
        """Return the chlorine at the inlet composition and the mean temperature [mol/m3]."""
        return self.x * self.case.vessel.pressure / (GAS_CONSTANT * self.mean)

    @property
    def time(self):
        """Return the stay at the mean temperature [s]."""
        return self.volume * self.case.vessel.pressure / (self.total * GAS_CONSTANT * self.mean)

    @property
    def sigma(self):
        """Return the cross-section of chlorine for the lamp [m2], None for a spectrum of the user's own."""
        kinds = [lamp.kind for lamp in self.case.lamp if lamp.kind]
        if not kinds or len(kinds) < len(self.case.lamp):
            return None
        if "medium" in kinds[0]:
            return self.number["sigma_arc"]
        found = re.search(r"(\d+) ?nm", kinds[0])
        known = {int(name[6:]): v for name, v in self.number.items() if re.fullmatch(r"sigma_\d+", name)}
        nm = int(found[1]) if found else 254
        return known[min(known, key=lambda each: abs(each - nm))]


def _line(name, formula, value, model, unit, note="", scale=1.0):
    """Return a `Line`, marked when the ratio lies outside 0.5 to 2."""
    ratio = None if model is None or not value else model / value
    marked = ratio is not None and not LOW <= ratio <= HIGH
    return Line(
        name, formula, value * scale, None if model is None else model * scale, unit, ratio, marked, note
    )


def acid(d):
    """HCl by moles: one for every chlorine used."""
    value = d.used * ACID * 3600
    return _line(
        "HCl", f"{d.used:.4g} mol/s x 36.46 g/mol", value, d.result["hydrogen_chloride_mass"], "kg/h"
    )


def duty(d):
    """Heat by moles of chlorine used."""
    return _line(
        "heat of reaction",
        f"{d.used:.4g} mol/s x {d.heat / 1e3:.4g} kJ/mol",
        d.used * d.heat,
        d.result["heat_reaction"],
        "kW",
        scale=1e-3,
    )


def rise(d):
    """Adiabatic rise: share of chlorine times heat over heat capacity."""
    return _line(
        "adiabatic rise",
        f"{d.x:.3g} x {d.heat / 1e3:.4g} kJ/mol / {d.capacity:.3g} J/mol/K",
        d.rise,
        d.result["adiabatic_rise"],
        "K",
        "the feed's heat capacity at 350 K; hot gas takes more",
    )


def share(d):
    """Poly share of two consecutive steps, in plug flow or in a stirred tank."""
    k, n = d.number[f"kappa_{d.alkane}"], d.used / d.fuel
    if n >= 1.2:
        return None
    tank = d.case.vessel.kind == "stirred tank"

    def left(y):
        one = y * (1 - y) / (y + k * (1 - y)) if tank else (y**k - y) / (1 - k)
        many = 1 - y - one
        return one, many, one + 2 * many

    low, high = 1e-6, 1.0
    for _ in range(80):
        y = (low + high) / 2
        low, high = (y, high) if left(y)[2] > n else (low, y)
    one, many, _ = left(y)
    rule = "y(1-y)/(y+k(1-y))" if tank else "(y^k-y)/(1-k)"
    return _line(
        "poly share by mol",
        f"mono = {rule}, y {y:.4f}, k {k:g}",
        many / (one + many),
        d.result["poly_share_mol"],
        "%",
        "k at 350 K; hot gas makes less poly from methane",
        scale=100,
    )


def stay(d):
    """Residence time at the mean temperature."""
    return _line(
        "residence time",
        f"{d.volume * 1e3:.3g} L x {d.case.vessel.pressure / 1e5:.3g} bar / ({d.total:.3g} mol/s R "
        f"{d.mean:.0f} K)",
        d.time,
        d.result["residence_time"],
        "s",
        "mean of inlet and adiabatic outlet",
    )


def depth(d):
    """Share of the light that the inlet gas absorbs across the gap."""
    if d.sigma is None or d.case.vessel.kind != "plug flow" or not d.result.profile or not d.case.lamp:
        return None
    if min(lamp.lit_from for lamp in d.case.lamp) > 0:
        return None
    c = d.x * d.case.vessel.pressure / (GAS_CONSTANT * d.inlet)
    tau = d.sigma * AVOGADRO * c * d.gap
    z, photons = (d.result.profile[name] for name in ("z [m]", "photons_absorbed [mol/s]"))
    into = next((row["photons"]["value"] for row in d.result.ledger if row["name"] == "into gas"), None)
    lit = max((lamp.lit_to or d.case.vessel.length) for lamp in d.case.lamp)
    at = next((i for i, place in enumerate(z) if place > 1e-3 * lit), None)
    model = (
        photons[at] / z[at] * lit / into
        if at and into and len({lamp.lit_to for lamp in d.case.lamp}) == 1
        else None
    )
    return _line(
        "absorbed at the inlet",
        f"1 - exp(-{d.sigma * 1e4:.3g} cm2 x {c * 6.022e17:.3g} cm-3 x {d.gap * 1e3:.3g} mm)",
        1 - math.exp(-tau),
        model,
        "%",
        "rays straight across; real ones are slanted",
        scale=100,
    )


def light(d):
    """Light into the gas for the slip, from the tail law of a chain that ends by pairs."""
    if d.sigma is None or d.slip <= 0 or not d.case.lamp:
        return None
    b, kt = d.number[f"propagation_{d.alkane}"], d.number["termination"]
    c0 = d.concentration
    out = c0 * d.slip
    if d.case.vessel.kind == "stirred tank":
        root = math.sqrt(kt) * (c0 - out) / (b * d.time * out**1.5)
        rule = "J = kt ((c0-c)/(b t c^1.5))^2"
    else:
        root = 2 * math.sqrt(kt) / (b * d.time) * (out**-0.5 - c0**-0.5)
        rule = "J = 4 kt/(b t)^2 (c^-1/2 - c0^-1/2)^2"
    J = root**2
    photons = J * d.volume / (d.sigma * AVOGADRO * d.gap)
    into = next(
        (row for row in d.result.ledger if row["name"] == "into gas" and row["photons"]["value"]), None
    )
    energy = into["power"]["value"] / into["photons"]["value"] if into else 3.28e5
    return _line(
        "light into the gas",
        f"{rule} = {J:.3g} 1/s, W = J V E/(sigma N gap)",
        photons * energy,
        d.result["light_into_gas"],
        "W",
        "one radical, one temperature, thin gas: expect a factor 3; chloromethyl radicals ask for more, "
        "heat for less",
    )


def wall(d):
    """Transfer units of a turbulent annulus."""
    if (
        d.case.vessel.kind != "plug flow"
        or d.case.cooling.mode == "none"
        or d.result["transfer_units"] is None
    ):
        return None
    ratio = d.case.vessel.length / d.hydraulic
    return _line(
        "transfer units",
        f"{d.number['transfer']:g} x L/Dh {ratio:.3g}",
        d.number["transfer"] * ratio,
        d.result["transfer_units"],
        "1",
        "turbulent gas; below 0.3 the tube is close to adiabatic",
    )


def space(case):
    """Return gap [m], hydraulic diameter [m] and cross-section [m2] of one gas space."""
    vessel = case.vessel
    if vessel.geometry == "channel":
        return vessel.gap, 2 * vessel.gap * vessel.width / (vessel.gap + vessel.width), vessel.gap * vessel.width
    shell = vessel.shell_inside
    if vessel.geometry not in (None, "annulus"):
        return shell, shell, math.pi / 4 * shell**2
    sleeve = case.sleeve.outside if case.sleeve else 0.0
    number = case.sleeve.number or 1 if case.sleeve else 1
    return (shell - sleeve) / 2, shell - sleeve, math.pi / 4 * (shell**2 - number * sleeve**2)
