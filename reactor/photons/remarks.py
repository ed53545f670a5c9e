"""What the light of a tube rests on, and the sentences that a report prints beside it."""

import numpy as np

from reactor import library
from reactor.photons import chlorine, windows
from reactor.photons.laws import EXTENDED, ISOTROPIC, RADIAL, SINE


def cited(known, sleeve, law, shape):
    """
    Return the numbers that the light of a tube rests on.

    Parameters
    ----------
    known : sequence of Lamp
        The lamps of the tube. [-]
    sleeve : object
        The sleeve of the case. [-]
    law : str
        Law of emission. [-]
    shape : Shape
        The geometry. [-]

    Returns
    -------
    entries : tuple of Cited
        Each once. [-]
    """
    sheet = library.sheet(chlorine.SHEET)
    formula = sheet["A1"].cited._replace(what="Cl2 cross-section formula")
    limits = (sheet[name].cited for name in ("extrapolation limit", "followed wavelength", "quantum yield"))
    wall = () if sleeve.transmission is not None else windows.range_of(sleeve.material)[2]
    lamps = (entry for each in known for entry in (*each.spectrum.cited, *each.cited))
    name = "lamp radius over sleeve bore" if shape.immersed else "lamp radius"
    usual = (sheet[name].cited,) if law in EXTENDED and not shape.panel and known else ()
    if getattr(sleeve, "film", None):
        table = library.table("photons/deposits.csv").where("material", sleeve.film)
        usual += tuple(table.cited(f"film of {sleeve.film}"))
    return tuple(dict.fromkeys((*lamps, *usual, *wall, formula, *limits)))


def notes(lamps, known, sleeve, geometry, spectrum, length):
    """
    Return the sentences that the report prints beside the light.

    Parameters
    ----------
    lamps, known : sequences
        The lamps as typed, and with their defaults. [-]
    sleeve : object
        The sleeve of the case. [-]
    geometry : tuple
        Emission law, radius of the emitter [m], shape. [-]
    spectrum : tuple
        Lines [m], their radiant watts [W] and the bands they fall in. [-]
    length : float
        Length of the tube. [m]

    Returns
    -------
    notes : tuple of str
        Finished sentences. [-]
    """
    line, radiant, bands = spectrum
    total = radiant.sum() or 1.0
    law, radius, shape = geometry
    found = []
    if share := radiant[bands["no data"]].sum() / total:
        found.append(f"{share:.1%} of the radiant watts lie below 260 nm: no data, counted as not absorbed.")
    if law in EXTENDED and not shape.panel:
        found.append(f"The lamp is taken as a {law} of {radius * 1e3:.0f} mm radius.")
    if law == RADIAL and not shape.panel:
        found.append("The radial law is a lower bracket: it understates a thin gas by 21 to 36 %.")
    if any(each.emission is None for each in lamps) and not shape.panel:
        found.append(
            f"The law of emission ({law}) is that of the class of lamp, not a measured one; between {ISOTROPIC} and "
            f"{SINE} a thin gas behind no window absorbs up to 20 % less (the photon report shows it for this case)."
        )
    if any(known_one.spectrum.cited and entry.status == "memory" for known_one in known
           for entry in known_one.spectrum.cited):  # fmt: skip
        found.append("The lamp spectrum rests on memory: replace it by the maker's.")
    found += _shape_notes(shape)
    found += [f"Lamp spectrum as typed in {each.spectrum}." for each in lamps if each.spectrum is not None]
    if any(each.kind == "own spectrum" for each in known):
        found.append(
            "Own spectrum without a kind: what is not typed (law, driver, ageing, heat) is as for an arc."
        )
    if shape.name == "annulus" and (len(lamps) > 1 or any(each.number > 1 for each in lamps)):
        found.append("Several lamps in one sleeve count as lying on its axis.")
    if any(each.lit_from < 0 or each.lit_to > length for each in lamps):
        found.append("A lamp reaches beyond the tube: that light is booked as never entering.")
    followed = bands["followed"]
    return (*found, *_wall_notes(sleeve, line[followed], radiant[followed], total))


def _shape_notes(shape):
    """Return what to say about the geometry."""
    if shape.name == "annulus" and shape.reflectance > 0:
        back = "is lost in the lamp" if shape.returning == 0 else f"passes the lamp by {shape.returning:.0%}"
        return [f"The shell reflects {shape.reflectance:.0%} (specular); light that comes back to the sleeve {back}."]
    if shape.name == "immersed lamps":
        return ["The sleeves are black to one another; the wall of the vessel is specular."]
    if shape.name == "channel":
        return ["The channel counts as wide: light that grazes to its narrow sides is kept in it."]
    if not shape.immersed:
        bent = "Rays go straight through the tube wall (no refraction); lamps are black to light that comes back."
        many = shape.tubes > 1 and shape.reflector
        wide = " In a ring of tubes with a reflector keep the reflected part below 25 % (tymoschuk1993)."
        return [bent + wide if many else bent]
    return []


def _wall_notes(sleeve, line, radiant, total):
    """Return what to say about the sleeve: typed data, and lines for which it has none."""
    if sleeve.transmission is None:
        name, (first, last, _), found = sleeve.material, windows.range_of(sleeve.material), []
    else:
        name, known = str(sleeve.transmission), windows.transmission_from_csv(sleeve.transmission)[0]
        first, last, found = known[0], known[-1], [f"Sleeve transmission as typed in {name}."]
    blind = ~windows.has_data(np.array([first, last]), line)
    if np.any(blind):
        found.append(
            f"Sleeve data of {name} run from {first * 1e9:.0f} to {last * 1e9:.0f} nm; outside them it "
            f"counts as opaque ({radiant[blind].sum() / total:.1%} of the radiant watts)."
        )
    return tuple(found)
