"""What the lamps of one tube (or tank) supply to its gas, by line and by section, ready for the kernel."""

from dataclasses import dataclass, replace
from typing import NamedTuple

import numpy as np

from reactor import library
from reactor.curve import Curve
from reactor.errors import CaseError
from reactor.photons import chlorine, field, lamps, remarks, windows
from reactor.photons.energy import photon_energy

FAINT = 1e-6  # share of the radiant watts below which a line is booked but not followed


class Account(NamedTuple):
    """One entry of the ledger of one tube: radiant or electrical watts, and mol/s where it is light."""

    name: str
    watts: float
    photons: float | None


@dataclass(frozen=True)
class Light:
    """
    The light of one tube. n followed lines, s sections of constant light along the tube, dark ones included.

    wavelength [m], photon_energy [J/mol], quantum_yield [-]: (n,). sigma: (n, d) polynomials [m2] in
    t = (T - 550 K)/350 K. path = r2 - r1 [m]; area of the gas across the tube [m2]. absorbed: f/tau against
    ln(tau); transmitted: share at the outer wall against ln(tau). edges: (s + 1,) positions [m].
    into_gas: (s, n) photons entering the gas per metre of tube [mol/m/s]. sleeve_heat: (s,) lamp heat and
    light caught in sleeve and deposit, per metre [W/m]. accounts: the ledger of
    one tube, from mains to into-gas.
    """

    wavelength: np.ndarray
    photon_energy: np.ndarray
    quantum_yield: np.ndarray
    sigma: np.ndarray
    path: float
    area: float
    absorbed: Curve
    transmitted: Curve
    edges: np.ndarray
    into_gas: np.ndarray
    sleeve_heat: np.ndarray
    field: field.Field
    accounts: tuple = ()
    cited: tuple = ()
    notes: tuple = ()

    @property
    def emission(self):
        """Return the name of the emission law."""
        return self.field.law

    @property
    def entering(self):
        """Return the photons entering the gas of the whole tube in each line, (n,) [mol/s]."""
        return np.diff(self.edges) @ self.into_gas

    def unevenness(self, tau, share=1.0):
        """Return <sqrt J>^2/<J> over the gas for optical depths and photolysis weights, both (n,)."""
        return field.unevenness(self.field, tau, share)


class Source(NamedTuple):
    """A lamp with its defaults taken: mains watts, lit range [m], watts by common line when fresh."""

    lamp: lamps.Lamp
    mains: float
    start: float
    stop: float
    fresh: np.ndarray

    @property
    def at_lamp(self):
        """Return the electrical watts at the lamp."""
        return self.mains * self.lamp.driver

    @property
    def radiant(self):
        """Return the radiant watts of each line at the end of life."""
        return self.fresh * self.lamp.end_of_life

    def share_within(self, start, stop):
        """Return the share of the lamp that lies between two positions."""
        return max(0.0, min(self.stop, stop) - max(self.start, start)) / (self.stop - self.start)


def light(lamps, sleeve, inside_radius, outside_radius, length):
    """
    Return what the lamps on the axis of one tube send into its gas.

    Parameters
    ----------
    lamps : sequence of objects
        Each has kind or spectrum (a path), power (mains, each) [W], number, lit_from, lit_to [m], and
        end_of_life, driver, hot_junction, emission (None: of the kind); emitter radius if known [m]. [-]
    sleeve : object
        material, thickness [m], transmission (a path or None), deposit (share of the light lost in it). [-]
    inside_radius : float
        Outside radius of the sleeve. [m]
    outside_radius : float
        Inside radius of the shell; of a tank the radius of the annulus of equal gas volume. [m]
    length : float
        Length of the tube. [m]

    Returns
    -------
    light : Light
        All that the kernel and the ledger need for one tube. [-]

    Raises
    ------
    CaseError
        Unknown kind, material or law; radii, lit range or shares that describe no tube; mixed laws.
    """
    _check(lamps, sleeve, inside_radius, outside_radius)
    known = [_known(each) for each in lamps]
    line = np.array(sorted({x for each in known for x in _rounded(each.spectrum.wavelength).tolist()}), float)
    sources = [_source(*pair, line) for pair in zip(lamps, known, strict=True)]
    radiant = sum((source.radiant for source in sources), np.zeros(len(line)))
    geometry = _field(lamps, known, sleeve, inside_radius, outside_radius)
    bands = _bands(line, radiant)
    followed = bands["followed"]
    passed = np.where(followed, _passed(sleeve, line, geometry.law), 0.0)
    photons = passed / photon_energy(line)
    edges = _edges(sources, length)
    absorbed, transmitted = field.tables(geometry)
    return Light(
        wavelength=line[followed],
        photon_energy=photon_energy(line[followed]),
        quantum_yield=chlorine.quantum_yield(line[followed]),
        sigma=chlorine.sigma_fit(line[followed]),
        path=outside_radius - inside_radius,
        area=np.pi * (outside_radius**2 - inside_radius**2),
        absorbed=absorbed,
        transmitted=transmitted,
        edges=edges,
        into_gas=_per_metre(
            sources, edges, lambda each: (each.radiant * photons)[followed], (followed.sum(),)
        ),
        sleeve_heat=_per_metre(sources, edges, lambda each: _heat(each, passed, followed)),
        field=geometry,
        accounts=_accounts(sources, radiant, length, passed, line, bands),
        cited=remarks.cited(known, sleeve),
        notes=remarks.notes(lamps, known, sleeve, geometry, (line, radiant, bands), length),
    )


def _rounded(wavelength):
    """Return wavelengths to a tenth of a picometre, so that equal lines of two lamps fall together."""
    return np.round(wavelength, 13)


def _check(each_lamp, sleeve, inside_radius, outside_radius):
    """Refuse radii, lit ranges and shares that describe no tube."""
    faults = []
    if not 0 < inside_radius < outside_radius:
        faults.append(f"sleeve radius {inside_radius:g} m must lie within the shell ({outside_radius:g} m)")
    if not 0 <= (sleeve.thickness or 0.0) < inside_radius:
        faults.append(f"sleeve thickness {sleeve.thickness:g} m leaves no bore for the lamp")
    if not 0 <= (sleeve.deposit or 0.0) <= 1:
        faults.append(f"sleeve deposit {sleeve.deposit:g} must be a share of 0 to 1")
    if sleeve.material is None and sleeve.transmission is None:
        faults.append(
            f"sleeve needs a material or a transmission; materials: {', '.join(windows.materials())}"
        )
    for each in each_lamp:
        if not each.lit_to > each.lit_from:
            faults.append(f"lamp lit_to ({each.lit_to:g} m) must lie beyond lit_from ({each.lit_from:g} m)")
        if not (each.power >= 0 and each.number >= 0):
            faults.append(f"lamp power ({each.power:g} W) and number ({each.number}) must not be negative")
        if each.kind is None and each.spectrum is None:
            faults.append(f"lamp needs a kind or a spectrum; kinds: {', '.join(lamps.kinds())}")
    if faults:
        raise CaseError(faults)


def _known(each):
    """Return the `Lamp` behind a lamp of the case: its kind, overridden by what the case gives."""
    own = lamps.spectrum_from_csv(each.spectrum) if each.spectrum is not None else None
    found = lamps.own_lamp(own) if each.kind is None else lamps.lamp(each.kind)
    if own is not None:
        found = replace(found, spectrum=own)
    given = {name: getattr(each, name) for name in ("driver", "hot_junction", "end_of_life")}
    if each.emission is not None:
        given["emission"] = lamps.nearest(each.emission, field.LAWS, "emission law")
    return replace(found, **{name: value for name, value in given.items() if value is not None})


def _source(each, known, line):
    """Return a lamp with its watts on the common lines: each factor counts once."""
    mains = each.power * each.number
    fresh = np.zeros(len(line))
    place = np.searchsorted(line, _rounded(known.spectrum.wavelength))
    fresh[place] = mains * known.driver * known.spectrum.share * known.hot_junction
    return Source(known, mains, each.lit_from, each.lit_to, fresh)


def _field(each_lamp, known, sleeve, inside_radius, outside_radius):
    """Return the field of the one emission law that all lamps share."""
    laws = sorted({each.emission for each in known}) or [field.ISOTROPIC]
    if len(laws) > 1:
        mixed = ", ".join(laws)
        raise CaseError(
            f"lamps of different emission laws in one tube ({mixed}) are not modelled; give one `emission`"
        )
    radius = 0.0
    if laws[0] == field.LAMBERTIAN:
        bore = inside_radius - (sleeve.thickness or 0.0)
        usual = library.sheet(chlorine.SHEET)["lamp radius over sleeve bore"].value * bore
        radius = max(getattr(each, "radius", None) or usual for each in each_lamp)
        if radius > bore:
            raise CaseError(f"lamp radius {radius:g} m does not fit the sleeve bore of {bore:g} m radius")
    return field.Field(laws[0], float(inside_radius), float(outside_radius), float(radius))


def _bands(line, radiant):
    """Return which lines are followed, which have no chlorine data, which are out of band or too faint."""
    used = library.sheet(chlorine.SHEET)["followed wavelength"]
    no_data = line < used.low * (1 - 1e-9)
    out = ~no_data & ((line > used.high * (1 + 1e-9)) | (radiant < FAINT * radiant.sum()))
    return {"no data": no_data, "out of band": out, "followed": ~no_data & ~out}


def _passed(sleeve, line, emission):
    """Return the share of each line that passes sleeve and deposit."""
    if sleeve.transmission is None:
        share = windows.transmission(sleeve.material, sleeve.thickness, line, emission)
    else:
        known, T = windows.transmission_from_csv(sleeve.transmission)
        share = np.where(windows.has_data(known, line), np.interp(line, known, T), 0.0)
    return share * (1 - (sleeve.deposit or 0.0))


def _edges(sources, length):
    """Return the positions between which the light is constant, from 0 to `length`."""
    inner = {z for source in sources for z in (source.start, source.stop) if 0 < z < length}
    return np.array([0.0, *sorted(inner), length])


def _per_metre(sources, edges, amount, shape=()):
    """Return what each section receives per metre: each lamp spreads `amount(lamp)` over its lit length."""
    middle = (edges[1:] + edges[:-1]) / 2
    total = np.zeros((len(middle), *shape))
    for source in sources:
        lit = (middle > source.start) & (middle < source.stop)
        total = total + np.multiply.outer(lit, amount(source) / (source.stop - source.start))
    return total


def _heat(source, passed, followed):
    """Return the watts of a lamp that heat the sleeve: lamp heat, and light lost in sleeve and deposit."""
    return source.lamp.heat * source.at_lamp + (source.radiant * (1 - passed))[followed].sum()


def _accounts(sources, radiant, length, passed, line, bands):
    """Return the ledger of one tube down to the light that enters the gas."""
    dark = np.zeros(len(line))
    mains = sum(source.mains for source in sources)
    at_lamp = sum(source.at_lamp for source in sources)
    fresh = sum((source.fresh for source in sources), dark)
    inside = sum((source.radiant * source.share_within(0.0, length) for source in sources), dark)

    def entry(name, watts):
        return Account(name, float(watts.sum()), float((watts / photon_energy(line)).sum()))

    return (
        Account("mains", mains, None),
        Account("driver loss", mains - at_lamp, None),
        Account("lamp heat", at_lamp - float(fresh.sum()), None),
        entry("lost to ageing", fresh - radiant),
        entry("radiant", radiant),
        entry("no data", radiant * bands["no data"]),
        entry("out of band", radiant * bands["out of band"]),
        entry("lost in sleeve and deposit", radiant * (1 - passed) * bands["followed"]),
        entry("never enters", (radiant - inside) * passed),
        entry("into gas", inside * passed),
    )
