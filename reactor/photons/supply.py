"""What the lamps of one tube (or tank) supply to its gas, by line and by section, ready for the kernel."""

from dataclasses import dataclass
from itertools import pairwise
from typing import Any, NamedTuple

import numpy as np

from reactor.curve import Curve
from reactor.photons import arcs, chlorine, even, lot, merge, remarks, spread, windows
from reactor.photons.energy import photon_energy
from reactor.photons.laws import RADIAL, SLOPES, slopes
from reactor.photons.rays import grouped
from reactor.photons.shapes import rays_of


class Account(NamedTuple):
    """One entry of the ledger of one tube: radiant or electrical watts, and mol/s where it is light."""

    name: str
    watts: float
    photons: float | None


class Spectrum(NamedTuple):
    """
    The lines of the lamps before they are merged: for print, and for the ledger by band.

    wavelength (m,) [m]; sigma (m, d) [m2] as in `Light`; into_gas (s, m) [mol/m/s]; at_window and passed (m,):
    photons that reach the window, and share of it that passes. [mol/s, -]
    """

    wavelength: np.ndarray
    sigma: np.ndarray
    into_gas: np.ndarray
    at_window: np.ndarray
    passed: np.ndarray


@dataclass(frozen=True)
class Light:
    """
    The light of one tube. n followed lines, s sections of constant light along the tube, dark ones included.

    photon_energy [J/mol], quantum_yield [-]: (n,). sigma: (n, d) polynomials [m2] in t = (T - 550 K)/350 K. path
    [m]: what optical thickness is measured across; area of the gas across the tube [m2]. Curves against ln(tau), one
    a section: absorbed, f/tau; transmitted, share that is not absorbed; ends, share that leaves by the ends. edges:
    (s + 1,) positions [m]. into_gas: (s, n) photons entering the gas per metre of tube [mol/m/s], mean of the section.
    along: curve of position, the entering light over its mean along the whole tube, which then replaces the mean of
    the sections; None: the light is even within each section. sleeve_heat: (s,)
    lamp heat and light caught in sleeve and deposit, per metre [W/m]. lit: (s,) whether an arc is beside it.
    law, lamp_radius: of the lamps. capture: share of what they send that reaches the window. accounts: the
    ledger of one tube, from mains to into-gas.
    """

    photon_energy: np.ndarray
    quantum_yield: np.ndarray
    sigma: np.ndarray
    path: float
    area: float
    absorbed: tuple
    transmitted: tuple
    ends: tuple
    edges: np.ndarray
    into_gas: np.ndarray
    along: Curve | None
    sleeve_heat: np.ndarray
    lit: np.ndarray
    shape: Any
    law: str
    lamp_radius: float
    capture: float
    slant: np.ndarray
    spectrum: Spectrum
    accounts: tuple = ()
    cited: tuple = ()
    notes: tuple = ()

    @property
    def emission(self):
        """Return the name of the emission law."""
        return self.law

    @property
    def wavelength(self):
        """Return the wavelength of each followed line, (n,) [m]."""
        return photon_energy(1.0) / self.photon_energy

    @property
    def entering(self):
        """Return the photons entering the gas of the whole tube in each line, (n,) [mol/s]."""
        return np.diff(self.edges) @ self.into_gas

    def unevenness(self, tau, share=1.0):
        """Return <sqrt J>^2/<J> over the gas for optical depths and photolysis weights, both (n,)."""
        return even.unevenness(self.cells, tau, share)

    @property
    def cells(self):
        """Return the light in each cell of the gas between long lamps, as `even.Cells`."""
        return even.cells(self.shape, self.law, self.lamp_radius, self.slant)


def light(lamps, sleeve, shape, length):
    """
    Return what the lamps of one tube send into its gas.

    Parameters
    ----------
    lamps : sequence of objects
        Each has kind or spectrum (a path), power (mains, each) [W], number, lit_from, lit_to [m], and
        end_of_life, driver, hot_junction, emission (None: of the kind); emitter radius if known [m]. [-]
    sleeve : object
        material, thickness [m], transmission (a path or None), deposit (share of the light lost in it), and where
        known film and film_thickness [m]: the window between lamp and gas. [-]
    shape : Shape
        The geometry, such as `shapes.Annulus`. [-]
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
    lot.check(lamps, sleeve, shape)
    known = [lot.known(each) for each in lamps]
    line = np.array(sorted({x for each in known for x in lot.rounded(each.spectrum.wavelength).tolist()}), float)
    sources = [lot.source(*pair, line, shape.tubes) for pair in zip(lamps, known, strict=True)]
    radiant = sum((source.radiant for source in sources), np.zeros(len(line)))
    law, radius = lot.law(lamps, known, shape)
    bands = lot.bands(line, radiant)
    followed = bands["followed"]
    every = rays_of(shape, law, radius)
    rays = grouped(every)
    phi, weight = slopes(shape.slopes(law), SLOPES if shape.name == "annulus" else SLOPES // 2)
    bright = np.where(followed, radiant, 0.0) / photon_energy(line) if len(line) else radiant
    arrive = rays.share[:, None] * weight / rays.share.sum()
    behind, passed = windows.passed(sleeve, line, rays.slant[:, None] * np.cos(phi), arrive)
    slant = behind(bright)
    reach = float(rays.share @ arcs.middle(rays)[1] / rays.share.sum())
    borders = arcs.edges({(s.start, s.stop) for s in sources}, reach, length)
    each_along = [arcs.along(rays, phi, slant, (s.start, s.stop), borders, shape.gap) for s in sources]
    if rays is not every:
        each_along = [_refined(one, every, rays, (phi, slant.sum(axis=0)), shape.gap) for one in each_along]
    photons = [(s.radiant * passed * rays.capture / photon_energy(line))[followed] for s in sources]
    flow = [p.sum() for p in photons]
    along = None
    if shape.name == "immersed lamps" or (law != RADIAL and _alike(photons)):
        borders, each_along = _ends_of(sources, shape, length), [_whole(a) for a in each_along]
        if shape.name != "immersed lamps" and any(flow):
            along = _profile(rays, phi, slant, sources, flow, arcs.places(reach, length))
    raw = _per_metre([_within(a, along, borders) for a in each_along], photons, borders, followed.sum())
    lines = merge.merged(line[followed], raw.sum(axis=0))
    absorbed, transmitted, ends = _curves(each_along, flow, len(borders) - 1)
    at_window = bright[followed] * rays.capture
    spectrum = Spectrum(line[followed], chlorine.sigma_fit(line[followed]), raw, at_window, passed[followed])
    entering = sum((p * a.entering.sum() for p, a in zip(photons, each_along, strict=True)), 0 * line[followed])
    flows = (radiant, passed * rays.capture, entering, followed, bands)
    heat = _heat(sources, shape, borders, np.where(followed, (1 - passed) * rays.capture, 0.0))
    return Light(
        lines.energy, lines.quantum_yield, lines.sigma, shape.gap, shape.area, absorbed, transmitted, ends, borders,
        raw @ lines.mix.T, along, heat, _lit(sources, borders), shape, law, radius, rays.capture, slant, spectrum,
        accounts=_accounts(sources, line, rays.capture, flows),
        cited=remarks.cited(known, sleeve, law, shape),
        notes=remarks.notes(lamps, known, sleeve, (law, radius, shape), (line, radiant, bands), length),
    )  # fmt: skip


def _refined(one, every, few, slopes_of, gap):
    """Return the light of an arc traced with few rays, with the ways of every ray of long lamps put in for theirs."""
    whole = spread.tilted(*slopes_of)

    def ways(rays):
        dies = (rays.weight - rays.next_weight) * (rays.share / rays.capture)[rays.ray]
        return spread.spread(rays.after / gap, dies, np.zeros(len(rays.ray), int), 1) @ whole

    return one._replace(wall=one.wall + one.entering[:, None] * (ways(every) - ways(few)))


def _alike(photons):
    """Return whether all lamps have the same spectrum, so that one profile along the tube holds for every line."""
    shapes = [flow / flow.sum() for flow in photons if flow.sum() > 0]
    return all(np.allclose(shape, shapes[0], rtol=1e-9, atol=1e-12) for shape in shapes)


def _ends_of(sources, shape, length):
    """Return the borders between lit and dark stretches; a stirred vessel is one section."""
    ends = set() if shape.name == "immersed lamps" else {z for s in sources for z in (s.start, s.stop)}
    return np.array([0.0, *sorted(z for z in ends if 1e-9 < z < length - 1e-9), length])


def _whole(one):
    """Return the light of an arc over the whole tube as one section."""
    return arcs.Along(*(np.asarray(part).sum(axis=0, keepdims=True) for part in one))


def _profile(rays, slope, slant, sources, flow, grid):
    """Return the light of all arcs along the tube over its mean, as a curve of position."""
    taken = sum(p * arcs.profile(rays, slope, slant, (s.start, s.stop), grid) for s, p in zip(sources, flow, strict=True))
    return arcs.smooth(taken, grid)


def _within(one, along, borders):
    """Return the share of an arc's light in each section."""
    if along is None or len(borders) == 2:
        return one.entering
    fine = [np.linspace(a, b, 201) for a, b in pairwise(borders)]
    part = np.array([np.trapezoid(along(z)[0], z) for z in fine])
    return one.entering.sum() * part / part.sum()


def _per_metre(entering, photons, borders, lines):
    """Return photons entering per metre in each section, by line [mol/m/s]."""
    total = np.zeros((len(borders) - 1, lines))
    for share, flow in zip(entering, photons, strict=True):
        total += np.outer(share, flow)
    return total / np.diff(borders)[:, None]


def _curves(each_along, photons, sections):
    """Return the curves of absorbed share over tau, of what passes unabsorbed, and of what the ends take."""
    flows = [(p, a) for p, a in zip(photons, each_along, strict=True) if p > 0]
    if flows and len(flows[0][1].entering) < sections:
        return tuple(tuple(each * sections) for each in _curves(each_along, photons, 1))
    if not flows:
        one = np.zeros((1, len(spread.LENGTHS)))
        one[0, len(spread.LENGTHS) // 2] = 1.0
        return tuple(tuple(pair * sections) for pair in (*spread.curves(one, one), spread.curves(one, 0 * one)[1]))
    wall, ends = (sum(p * getattr(a, name) for p, a in flows) for name in ("wall", "ends"))
    whole = (wall + ends).sum(axis=1)
    lit = whole > 0
    scale = np.where(lit, whole, 1.0)[:, None]
    all_, out = (wall + ends) / scale, ends / scale
    absorbed, passed = spread.curves(all_, all_)
    return tuple(absorbed), tuple(passed), tuple(spread.survival(out))


def _lit(sources, borders):
    """Return which sections lie beside an arc."""
    middle = (borders[1:] + borders[:-1]) / 2
    return np.array([any(s.start < z < s.stop for s in sources) for z in middle], bool)


def _heat(sources, shape, borders, lost):
    """Return the watts per metre that heat the sleeve: lamp heat, and light lost in sleeve and deposit."""
    total = np.zeros(len(borders) - 1)
    if not shape.immersed:
        return total  # the lamp stands outside; what its light leaves in the window goes to the coolant
    for source in sources:
        watts = source.lamp.heat * source.at_lamp + source.radiant @ lost
        held = [source.share_within(*pair) for pair in pairwise(borders)]
        total += watts * np.array(held) / np.diff(borders)
    return total


def _accounts(sources, line, capture, flows):
    """Return the ledger of one tube down to the light that enters the gas."""
    radiant, passed, entering, followed, bands = flows
    dark = np.zeros(len(line))
    mains = sum(source.mains for source in sources)
    at_lamp = sum(source.at_lamp for source in sources)
    fresh = sum((source.fresh for source in sources), dark)
    into = dark.copy()
    into[followed] = entering * photon_energy(line[followed])

    def entry(name, watts):
        return Account(name, float(watts.sum()), float((watts / photon_energy(line)).sum()) if len(line) else 0.0)

    in_band = radiant * followed
    outside = in_band * passed - into
    outside = np.where(abs(outside) < 1e-12 * in_band, 0.0, outside)
    return (
        Account("mains", mains, None),
        Account("driver loss", mains - at_lamp, None),
        Account("lamp heat", at_lamp - float(fresh.sum()), None),
        entry("lost to ageing", fresh - radiant),
        entry("radiant", radiant),
        entry("no data", radiant * bands["no data"]),
        entry("out of band", radiant * bands["out of band"]),
        entry("lost in sleeve and deposit", in_band * (capture - passed)),
        entry("never enters", in_band * (1 - capture) + outside),
        entry("into gas", into),
    )
