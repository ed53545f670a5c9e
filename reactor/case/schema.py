# ruff: noqa: RUF009  (need, assume, lookup and leave are `field` with a meaning)
"""
The case: every section of the file as a frozen record of SI floats, named as in the file.

Each key says what it holds and what happens when it is left out: `need` (a fault), `assume` (the trade's
own default, listed as assumed with its reason), `lookup` (taken from the data, with a source) or `leave`
(not given: whatever rests on it is not done).
"""

import datetime
import hashlib
import json
from dataclasses import asdict, dataclass, field
from pathlib import Path
from typing import Any, NamedTuple

from reactor.case.values import Choice, Count, Day, File, Listed, Text
from reactor.units import kinds


def need(kind):
    """Declare a key that must be typed."""
    return field(metadata={"kind": kind})


def assume(kind, value, why, when=None):
    """Declare a key with a default of the trade; a callable `value` or `when` gets the section's values."""
    default = None if callable(value) else value
    return field(default=default, metadata={"kind": kind, "value": value, "why": why, "when": when})


def lookup(kind, why):
    """Declare a key that, left out, is taken from the data."""
    return field(default=None, metadata={"kind": kind, "data": why})


def leave(kind, value=None):
    """Declare a key that may be left out, and is not assumed then."""
    return field(default=value, metadata={"kind": kind})


TANKS = ("stirred tank", "tanks in series")


class Assumed(NamedTuple):
    """A default that was taken: its key, its value as text, and the reason."""

    key: str
    value: str
    why: str


def is_tank(values):
    """Tell whether the vessel is a stirred tank."""
    return values.get("kind") in TANKS


def is_cooled(values):
    """Tell whether there is a coolant."""
    return values.get("mode", "none") != "none"


GEOMETRIES = ("annulus", "tube beside lamp", "tubes around lamp", "lamps around tube", "channel")


def is_outside(values):
    """Tell whether the lamps stand outside the gas tubes."""
    return values.get("geometry") in GEOMETRIES[1:4]


def not_outside(values):
    """Tell whether the gas has a wall opposite to the lamp."""
    return not is_outside(values)


def is_channel(values):
    """Tell whether the gas space is a flat channel."""
    return values.get("geometry") == "channel"


@dataclass(frozen=True, kw_only=True)
class About:
    """[case]: what the sheet says at its top."""

    title: str = need(Text())
    revision: str = leave(Text(), "-")
    date: datetime.date | None = leave(Day())
    note: str | None = leave(Text())


@dataclass(frozen=True, kw_only=True)
class Feed:
    """[feed.name]: a stream of the whole item, all parallel tubes together; `moles` in mol/s by species."""

    name: str
    moles: dict[str, float]
    temperature: float


@dataclass(frozen=True, kw_only=True)
class FeedForm:
    """The typed keys of a stream, beside its composition."""

    flow: float | None = leave(kinds.FLOW)
    ratio: float | None = leave(kinds.NUMBER.within(0.01, 1e5))
    temperature: float = need(kinds.TEMPERATURE)


@dataclass(frozen=True, kw_only=True)
class Inject:
    """[[inject]]: a share of the chlorine that enters along the length."""

    share: float = need(kinds.FRACTION.within(1e-9, 1.0, '"20 %"'))
    position: float = need(kinds.POSITION)
    temperature: float = leave(kinds.TEMPERATURE)


@dataclass(frozen=True, kw_only=True)
class Vessel:
    """[vessel]: the gas space."""

    kind: str = need(Choice(("plug flow", *TANKS)))
    geometry: str | None = leave(Choice(GEOMETRIES))
    shell_inside: float | None = leave(kinds.LENGTH.within(2e-3, 20.0, "154 mm"))
    length: float = need(kinds.LENGTH.within(1e-2, 200.0, "3 m"))
    parallel: int = assume(Count(), 1, "one vessel, nothing in parallel")
    pressure: float = need(kinds.PRESSURE)
    shell_wall: float | None = assume(
        kinds.LENGTH.within(1e-5, 0.5, "3 mm"), None, "the resistance of the wall itself is left out"
    )
    shell_material: str = assume(
        Listed("a wall material", "heat/walls.csv", "material"),
        "not stated",
        "its temperature limit is not assessed",
    )
    stirring: float | None = leave(kinds.FREQUENCY)
    impeller: float | None = assume(
        kinds.LENGTH.within(1e-3, 20.0, "100 mm"),
        lambda values: values["shell_inside"] / 3,
        "common practice: one third of the shell",
        is_tank,
    )
    start: str = assume(Choice(("cold", "hot")), "cold", "the plant starts cold", is_tank)
    wall_reflectance: float = assume(
        kinds.FRACTION.within(0.0, 0.99, '"60 %"'), 0.0, "the wall opposite to the lamp is black", not_outside
    )
    lamp_passes: float = leave(kinds.FRACTION, 0.0)
    lamp_circle: float | None = leave(kinds.LENGTH.within(1e-3, 20.0, "200 mm"))
    axis_distance: float | None = leave(kinds.LENGTH.within(1e-3, 20.0, "80 mm"))
    ring: int | None = leave(Count(2, 1000))
    reflector: str = assume(
        Choice(("none", "flat", "elliptical", "circular")), "none", "no reflector: light that misses is lost", is_outside
    )
    reflector_size: float | None = leave(kinds.LENGTH.within(1e-3, 20.0, "120 mm"))
    reflectance: float | None = leave(kinds.FRACTION.within(0.0, 1.0, '"85 %"'))
    gap: float | None = leave(kinds.LENGTH.within(1e-4, 2.0, "20 mm"))
    width: float | None = leave(kinds.LENGTH.within(1e-3, 20.0, "200 mm"))
    lit_sides: int = assume(Count(1, 2), 1, "a panel on one side", is_channel)
    tanks: int = leave(Count(most=100), 1)

    @property
    def vessels(self):
        """Return how many equal vessels there are, in parallel and in series."""
        return self.parallel * self.tanks


@dataclass(frozen=True, kw_only=True)
class Lamp:
    """[[lamp]]: lamps of one kind over one lit length; every tube carries every entry."""

    kind: str | None = leave(Listed("a lamp kind", "photons/lamps.csv", "kind"))
    spectrum: str | None = leave(File())
    power: float = need(kinds.POWER.within(1e-6, 1e6, "0.4 kW"))
    number: int = assume(Count(), 1, "one lamp of this entry in each vessel")
    lit_from: float = assume(kinds.POSITION.within(0.0, 200.0, "0 m"), 0.0, "lit from the inlet")
    lit_to: float = leave(kinds.POSITION.within(0.0, 200.0, "1.2 m"))
    end_of_life: float = assume(
        kinds.FRACTION.within(0.01, 1.0, '"80 %"'), 0.8, "common practice: replaced at 80 % of the light"
    )
    driver: float | None = lookup(
        kinds.FRACTION.within(0.01, 1.0, '"90 %"'), "driver efficiency in the lamp data"
    )
    hot_junction: float | None = lookup(kinds.FRACTION.within(0.01, 1.0, '"90 %"'), "factor in the lamp data")
    emission: str | None = lookup(
        Choice(("isotropic line", "sine-law line", "Lambertian cylinder", "volumetric cylinder", "radial")),
        "emission law in the lamp data",
    )
    radius: float | None = leave(kinds.LENGTH.within(1e-4, 0.5, "10 mm"))


@dataclass(frozen=True, kw_only=True)
class Sleeve:
    """[sleeve]: the tube between lamp and gas."""

    outside: float | None = leave(kinds.LENGTH.within(1e-3, 2.0, "60 mm"))
    thickness: float = need(kinds.LENGTH.within(1e-5, 0.1, "2.5 mm"))
    material: str = assume(Text(), "fused silica", "common practice for light below 400 nm")
    transmission: str | None = lookup(File(), "transmission of the material")
    deposit: float = assume(
        kinds.FRACTION.within(0.0, 0.999, '"10 %"'), 0.0, "share of light lost: clean sleeve"
    )
    film: str | None = leave(Listed("a film", "photons/deposits.csv", "material"))
    film_thickness: float | None = leave(kinds.LENGTH.within(1e-9, 1e-3, "0.02 um"))
    emissivity: float | None = lookup(kinds.FRACTION.within(0.01, 1.0, "0.9"), "emissivity of the sleeve")
    number: int | None = leave(Count())


@dataclass(frozen=True, kw_only=True)
class Cooling:
    """[cooling]: what takes the heat out through the shell."""

    mode: str = need(Choice(("none", "constant", "co-current", "counter-current")))
    medium: str | None = leave(Text('a cooling medium, like "water"'))
    inlet: float | None = leave(kinds.TEMPERATURE.within(150.0, 700.0, "30 degC"))
    flow: float | None = leave(kinds.MASS_FLOW)
    film: float | None = lookup(kinds.COEFFICIENT, "coolant-side film of the medium")
    overall: float | None = lookup(kinds.COEFFICIENT, "computed from the films")
    fouling_gas: float | None = assume(kinds.FOULING, None, "clean surface", is_cooled)
    fouling_coolant: float | None = assume(kinds.FOULING, None, "clean surface", is_cooled)


@dataclass(frozen=True, kw_only=True)
class Chemistry:
    """[chemistry]: mechanism, walls, radicals."""

    mechanism: str | None = lookup(File(), "the mechanism that comes with the program")
    wall_loss: float | None = leave(kinds.RATE)
    wall_sticking: float | None = assume(
        kinds.FRACTION.within(0.0, 1.0, "1e-4"),
        None,
        "wall condition not given: loss of atoms by the sticking probability in the data",
        lambda values: values.get("wall_loss") is None,
    )
    photolysis_rate: float | None = leave(kinds.RATE.within(0.0, 1e4, "1e-3 1/s"))
    radicals: str = assume(Choice(("mixed", "local")), "mixed", "radicals see the mean light of the cross-section")


@dataclass(frozen=True, kw_only=True)
class Window:
    """[limits.window.species]: the user's own explosion limits, fuel in chlorine, with their source."""

    lel: float = need(kinds.MOLE_FRACTION)
    uel: float = need(kinds.MOLE_FRACTION)
    source: str = need(Text('where the limits come from, like "site test report 12"'))


@dataclass(frozen=True, kw_only=True)
class Limits:
    """[limits]: what the result is judged against; a limit left out is not assessed."""

    hottest: float | None = leave(kinds.TEMPERATURE)
    chlorine_slip: float | None = leave(kinds.FRACTION)
    poly_share_mol: float | None = leave(kinds.MOLE_FRACTION)
    poly_share_mass: float | None = leave(kinds.MASS_FRACTION)
    pressure_drop: float | None = leave(kinds.PRESSURE_DIFFERENCE)
    sleeve_skin: float | None = leave(kinds.TEMPERATURE)
    window: dict[str, Window] = field(default_factory=dict)


@dataclass(frozen=True, kw_only=True)
class Targets:
    """[targets]: what must come out, in SI by the name of the result, and which inputs may change for it."""

    find: tuple[str, ...] = ()
    wanted: dict[str, float] = field(default_factory=dict)


@dataclass(frozen=True, kw_only=True)
class RecycleForm:
    """The typed keys of [recycle], beside its shares."""

    purge: float = need(kinds.FRACTION.within(0.0, 1.0, '"2 %"'))
    temperature: float = leave(kinds.TEMPERATURE)
    share: float = assume(
        kinds.FRACTION.within(0.0, 1.0, '"99 %"'), 0.0, "what is not listed leaves the loop"
    )


@dataclass(frozen=True, kw_only=True)
class Recycle:
    """
    [recycle]: what goes back to the inlet: a share of each species that leaves, less the purge.

    The flow of the alkane stream then is what enters the reactor; how much of it is fresh gas is found.
    """

    stream: str
    purge: float
    temperature: float
    shares: dict[str, float]
    share: float = 0.0

    def of(self, species):
        """Return the share of a species that the separation sends back [-]."""
        return self.shares.get(species, self.share)


@dataclass(frozen=True, kw_only=True)
class Meters:
    """[meters]: errors of the two flow meters; left out, the corners are not assessed."""

    alkane: float | None = leave(kinds.FRACTION.within(0.0, 0.5, '"3 %"'))
    chlorine: float | None = leave(kinds.FRACTION.within(0.0, 0.5, '"3 %"'))


@dataclass(frozen=True, kw_only=True)
class Uncertainty:
    """[uncertainty]: factors, up or down, one standard deviation, on what a band varies; 1 holds it still."""

    cross_section: float | None = leave(kinds.NUMBER.within(1.0, 10.0, like="1.05"))
    lamp_output: float | None = leave(kinds.NUMBER.within(1.0, 10.0, like="1.1"))
    impurity: float | None = leave(kinds.NUMBER.within(1.0, 100.0, like="1.5"))
    wall_loss: float | None = leave(kinds.NUMBER.within(1.0, 1000.0, like="3"))
    exchange: float | None = leave(kinds.NUMBER.within(1.0, 10.0, like="1.3"))
    rates: float | None = leave(kinds.NUMBER.within(0.0, 10.0, like="1"))


@dataclass(frozen=True, kw_only=True)
class Upsets:
    """[upsets]: how fast the plant acts and what fills it; keys left out are assumed by `reactor upset`."""

    temperature_detection: float | None = leave(kinds.TIME)
    direct_detection: float | None = leave(kinds.TIME)
    logic: float | None = leave(kinds.TIME)
    valve: float | None = leave(kinds.TIME)
    chlorine_wide_open: float | None = leave(kinds.NUMBER.within(1.0, 100.0, like="2.5"))
    chlorine_line: float | None = leave(kinds.VOLUME)
    dead_leg: float | None = leave(kinds.LENGTH.within(1e-4, 1.0, "12 mm"))
    purge_gas: str | None = leave(Choice(("N2", "Ar", "CO2")))
    filling: str | None = leave(Choice(("alkane first", "chlorine first")))


@dataclass(frozen=True, kw_only=True)
class Solver:
    """[solver]: tolerance and time budget."""

    rtol: float = leave(kinds.NUMBER.within(1e-13, 1e-2, like="1e-7"), 1e-7)
    seconds: float = leave(kinds.NUMBER.within(1e-6, 1e6, like="60"), 60.0)


@dataclass(frozen=True, kw_only=True)
class Case:
    """A checked case in SI; `typed`, `assumed` and `deviations` say where each value came from."""

    about: About
    feed: dict[str, Feed]
    inject: tuple[Inject, ...] = ()
    vessel: Vessel
    lamp: tuple[Lamp, ...] = ()
    sleeve: Sleeve | None = None
    cooling: Cooling = Cooling(mode="none")
    chemistry: Chemistry = Chemistry()
    limits: Limits = Limits()
    meters: Meters = Meters()
    uncertainty: Uncertainty = Uncertainty()
    upsets: Upsets = Upsets()
    targets: Targets = Targets()
    recycle: Recycle | None = None
    solver: Solver = Solver()
    typed: dict[str, Any] = field(default_factory=dict)
    assumed: tuple[Assumed, ...] = ()
    looked_up: tuple[Assumed, ...] = ()
    files: dict[str, str] = field(default_factory=dict)
    deviations: tuple[tuple[str, str, str], ...] = field(default=(), compare=False)
    tree: dict = field(default_factory=dict, compare=False, repr=False)
    folder: Path = field(default=Path("."), compare=False)
    name: str = field(default="case.toml", compare=False)

    @property
    def title(self):
        """Return the title of the sheet."""
        return self.about.title

    def path(self, typed):
        """Return the path of a file that the case names."""
        return self.folder / typed

    def hash(self):
        """Return the SHA-256 of all values in SI and of the files named; no path, no remark."""
        parts = ("about", "inject", "vessel", "lamp", "cooling", "chemistry", "limits", "meters", "uncertainty", "upsets",
                 "solver")
        content = {part: _plain(getattr(self, part)) for part in parts}
        content["sleeve"] = self.sleeve and asdict(self.sleeve)
        content["feed"] = {name: asdict(feed) for name, feed in self.feed.items()}
        for part in filter(self._states, ("targets", "recycle")):
            content[part] = _plain(getattr(self, part))
        for key, digest in self.files.items():
            *where, last = key.split(".")
            holder = content[where[0]] if len(where) == 1 else content[where[0]][int(where[1]) - 1]
            holder[last] = digest
        return hashlib.sha256(json.dumps(content, sort_keys=True, default=str).encode()).hexdigest()

    def _states(self, part):
        """Tell whether the case says anything in one of its later sections."""
        if part == "recycle":
            return self.recycle is not None
        return bool(self.targets.wanted or self.targets.find)

    def listing(self):
        """Return rows (key, typed text, SI text, "typed" | "assumed" | "data", why)."""
        rows = [(key, typed.text, _si_text(typed), "typed", "") for key, typed in self.typed.items()]
        rows += [(key, "", value, "assumed", why) for key, value, why in self.assumed]
        return rows + [(key, "", value, "data", why) for key, value, why in self.looked_up]


def _plain(part):
    """Return a section, or a row of sections, as plain dictionaries."""
    return [asdict(entry) for entry in part] if isinstance(part, tuple) else asdict(part)


def _si_text(typed):
    """Return a typed value in SI, as text."""
    return f"{typed.si:.6g} {typed.unit}".removesuffix(" -") if isinstance(typed.si, float) else str(typed.si)
