"""What the case says of its lamps and sleeve, checked, and every lamp with its defaults and watts taken."""

from dataclasses import replace
from typing import NamedTuple

import numpy as np

from reactor import library
from reactor.errors import CaseError
from reactor.photons import chlorine, lamps, windows
from reactor.photons.laws import EXTENDED, ISOTROPIC, LAWS

FAINT = 1e-6  # share of the radiant watts below which a line is booked but not followed


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


def rounded(wavelength):
    """Return wavelengths to a tenth of a picometre, so that equal lines of two lamps fall together."""
    return np.round(wavelength, 13)


def check(each_lamp, sleeve, shape):
    """Refuse radii, lit ranges and shares that describe no tube."""
    faults = []
    if shape.immersed and not 0 < shape.inside < shape.outside:
        faults.append(f"sleeve radius {shape.inside:g} m must lie within the shell ({shape.outside:g} m)")
    if shape.immersed and not 0 <= (sleeve.thickness or 0.0) < shape.inside:
        faults.append(f"sleeve thickness {sleeve.thickness:g} m leaves no bore for the lamp")
    if not 0 <= (sleeve.deposit or 0.0) <= 1:
        faults.append(f"sleeve deposit {sleeve.deposit:g} must be a share of 0 to 1")
    if sleeve.material is None and sleeve.transmission is None:
        faults.append(f"sleeve needs a material or a transmission; materials: {', '.join(windows.materials())}")
    for each in each_lamp:
        if not each.lit_to > each.lit_from:
            faults.append(f"lamp lit_to ({each.lit_to:g} m) must lie beyond lit_from ({each.lit_from:g} m)")
        if not (each.power >= 0 and each.number >= 0):
            faults.append(f"lamp power ({each.power:g} W) and number ({each.number}) must not be negative")
        if each.kind is None and each.spectrum is None:
            faults.append(f"lamp needs a kind or a spectrum; kinds: {', '.join(lamps.kinds())}")
    if faults:
        raise CaseError(faults)


def known(each):
    """Return the `Lamp` behind a lamp of the case: its kind, overridden by what the case gives."""
    own = lamps.spectrum_from_csv(each.spectrum) if each.spectrum is not None else None
    found = lamps.own_lamp(own) if each.kind is None else lamps.lamp(each.kind)
    if own is not None:
        found = replace(found, spectrum=own)
    given = {name: getattr(each, name) for name in ("driver", "hot_junction", "end_of_life")}
    if each.emission is not None:
        given["emission"] = lamps.nearest(each.emission, LAWS, "emission law")
    return replace(found, **{name: value for name, value in given.items() if value is not None})


def source(each, lamp, line, tubes):
    """Return a lamp with its watts on the common lines, as far as one of the `tubes` that share it is concerned."""
    mains = each.power * each.number / tubes
    fresh = np.zeros(len(line))
    place = np.searchsorted(line, rounded(lamp.spectrum.wavelength))
    fresh[place] = mains * lamp.driver * lamp.spectrum.share * lamp.hot_junction
    return Source(lamp, mains, each.lit_from, each.lit_to, fresh)


def law(each_lamp, some, shape):
    """Return the one emission law that all lamps share, and the radius of the emitter [m]."""
    laws = sorted({each.emission for each in some}) or [ISOTROPIC]
    if len(laws) > 1:
        mixed = ", ".join(laws)
        raise CaseError(
            f"lamps of different emission laws in one tube ({mixed}) are not modelled; give one `emission`"
        )
    if laws[0] not in EXTENDED or shape.panel:
        return laws[0], 0.0
    sheet = library.sheet(chlorine.SHEET)
    usual = sheet["lamp radius over sleeve bore"].value * shape.bore if shape.immersed else sheet["lamp radius"].value
    radius = max(getattr(each, "radius", None) or usual for each in each_lamp)
    if radius > shape.bore:
        where = "the sleeve bore of" if shape.immersed else "beside the tube, which leaves"
        raise CaseError(f"lamp radius {radius:g} m does not fit {where} {shape.bore:g} m radius")
    return laws[0], float(radius)


def bands(line, radiant):
    """Return which lines are followed, which have no chlorine data, which are out of band or too faint."""
    used = library.sheet(chlorine.SHEET)["followed wavelength"]
    no_data = line < used.low * (1 - 1e-9)
    out = ~no_data & ((line > used.high * (1 + 1e-9)) | (radiant < FAINT * radiant.sum()))
    return {"no data": no_data, "out of band": out, "followed": ~no_data & ~out}
