"""What the light of a tube rests on, and the sentences that a report prints beside it."""

import numpy as np

from reactor import library
from reactor.photons import chlorine, field, windows


def cited(known, sleeve):
    """
    Return the numbers that the light of a tube rests on.

    Parameters
    ----------
    known : sequence of Lamp
        The lamps of the tube. [-]
    sleeve : object
        The sleeve of the case. [-]

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
    radius = any(each.emission == field.LAMBERTIAN for each in known)
    usual = (sheet["lamp radius over sleeve bore"].cited,) if radius else ()
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
    geometry : Field
        Emission law and radii. [-]
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
    found = ["The lamp counts as infinitely long: no light is booked as leaving through the ends of the gas."]
    if share := radiant[bands["no data"]].sum() / total:
        found.append(f"{share:.1%} of the radiant watts lie below 260 nm: no data, counted as not absorbed.")
    if geometry.law == field.LAMBERTIAN:
        found.append(f"The lamp is taken as a Lambertian cylinder of {geometry.lamp * 1e3:.0f} mm radius.")
    if geometry.law == field.RADIAL:
        found.append("The radial law is a lower bracket: it understates a thin gas by 21 to 36 %.")
    found += [f"Lamp spectrum as typed in {each.spectrum}." for each in lamps if each.spectrum is not None]
    if any(each.kind == "own spectrum" for each in known):
        found.append(
            "Own spectrum without a kind: what is not typed (law, driver, ageing, heat) is as for an arc."
        )
    if len(lamps) > 1 or any(each.number > 1 for each in lamps):
        found.append("Several lamps in one sleeve count as one on the axis.")
    if any(each.lit_from < 0 or each.lit_to > length for each in lamps):
        found.append("A lamp reaches beyond the tube: that light is booked as never entering.")
    followed = bands["followed"]
    return (*found, *_wall_notes(sleeve, line[followed], radiant[followed], total))


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
