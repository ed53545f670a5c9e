"""Lamps: kinds with their factors, and spectra as watts per 100 W electrical at the lamp, line by line."""

import difflib
from dataclasses import dataclass, field

import numpy as np

from reactor import library, units
from reactor.errors import CaseError

COLUMNS = ("wavelength [nm]", "radiant_share [%]")
FACTORS = ("driver_efficiency", "hot_junction", "end_of_life", "heat_through_sleeve", "heat_low", "heat_high")
ACCEPTED = (
    "accepted: a CSV file with the columns `wavelength [nm]` (rising) and `radiant_share [%]` "
    "(watts of that line or bin per 100 W electrical at the lamp)"
)


@dataclass(frozen=True)
class Spectrum:
    """Lines of a lamp: wavelength [m] and radiant watts per electrical watt at the lamp [-], both (n,)."""

    wavelength: np.ndarray
    share: np.ndarray
    cited: tuple = field(default=())


@dataclass(frozen=True)
class Lamp:
    """One kind of lamp: spectrum, emission law, factors [-], share of its watts heating a dry sleeve [-]."""

    kind: str
    spectrum: Spectrum
    emission: str
    driver: float
    hot_junction: float
    end_of_life: float
    heat: float
    heat_low: float
    heat_high: float
    cited: tuple = field(default=())


def kinds():
    """Return the kinds of lamp that the data hold."""
    return tuple(library.table("photons/lamps.csv").text("kind"))


def nearest(word, known, what):
    """
    Return the entry of `known` that `word` spells, whatever its capitals and blanks.

    Parameters
    ----------
    word : str
        What the user typed. [-]
    known : sequence of str
        The accepted spellings. [-]
    what : str
        What the word names, for the message. [-]

    Returns
    -------
    entry : str
        The accepted spelling. [-]

    Raises
    ------
    CaseError
        Unknown; the message lists what is accepted and the nearest spelling.
    """
    plain = {" ".join(entry.lower().split()): entry for entry in known}
    typed = " ".join(str(word).lower().split())
    if typed in plain:
        return plain[typed]
    close = difflib.get_close_matches(typed, plain, n=1, cutoff=0.5)
    hint = f"did you mean '{plain[close[0]]}'? " if close else ""
    raise CaseError(f"{what} '{word}' is unknown; {hint}accepted: {', '.join(known)}")


def lamp(kind):
    """
    Return one kind of lamp from the data.

    Parameters
    ----------
    kind : str
        A trade word such as "medium-pressure mercury" or "LED 365 nm". [-]

    Returns
    -------
    lamp : Lamp
        Spectrum, emission law and factors. [-]

    Examples
    --------
    >>> print(f"{lamp('LED 365 nm').spectrum.share.sum():.3f}")
    0.380
    """
    table = library.table("photons/lamps.csv")
    row = table.where("kind", nearest(kind, kinds(), "lamp kind"))
    name = row.text("kind")[0]
    lines = library.table(f"photons/lamps/{row.text('file')[0]}")
    spectrum = Spectrum(lines.si("wavelength"), lines.si("radiant_share"), lines.cited(f"spectrum of {name}"))
    driver, junction, life, *heat = (float(row.si(column)[0]) for column in FACTORS)
    emission, cited = row.text("emission")[0], row.cited(f"factors of {name}")
    return Lamp(name, spectrum, emission, driver, junction, life, heat[0], heat[1], heat[2], cited)


def own_lamp(spectrum):
    """Return a lamp without a kind around the user's own spectrum, with the general factors of the data."""
    sheet = library.sheet("photons/constants.csv")
    heat = sheet["heat through sleeve"]
    used = (sheet["driver efficiency"], sheet["end of life"], heat)
    return Lamp(
        "own spectrum", spectrum, "isotropic line", used[0].value, 1.0, used[1].value,
        heat.value, heat.low, heat.high, cited=tuple(datum.cited for datum in used),
    )  # fmt: skip


def spectrum_from_csv(path):
    """
    Read the user's own spectrum.

    Parameters
    ----------
    path : str or path
        CSV file, watts of each line or bin per 100 W electrical at the lamp. [-]

    Returns
    -------
    spectrum : Spectrum
        The lines as typed. [-]

    Raises
    ------
    CaseError
        Other columns, no numbers, negative shares, wavelengths that do not rise, more light than watts.
    """
    nm, share = numbers_from_csv(path, COLUMNS, ACCEPTED)
    faults = wavelength_faults(path, nm)
    if np.any(share < 0):
        faults.append(f"{path}: radiant_share is negative at {_first(nm, share < 0)} nm; {ACCEPTED}")
    if share.sum() <= 0:
        faults.append(f"{path}: the radiant shares add up to nothing; {ACCEPTED}")
    if share.sum() > 100:
        faults.append(f"{path}: the radiant shares add up to {share.sum():.4g} W per 100 W; {ACCEPTED}")
    if faults:
        raise CaseError(faults)
    return Spectrum(units.to_si(nm, "nm"), units.to_si(share, "%"))


def _first(values, where):
    """Return the first of `values` that is marked, as text."""
    return f"{values[np.argmax(where)]:g}"


def wavelength_faults(path, nm):
    """Return what is wrong with a column of wavelengths in nm."""
    faults = []
    if np.any((nm < 100) | (nm > 3000)):
        odd = _first(nm, (nm < 100) | (nm > 3000))
        faults.append(f"{path}: wavelength {odd} nm is outside 100 to 3000 nm; give it in nm")
    if np.any(np.diff(nm) <= 0):
        odd = _first(nm[1:], np.diff(nm) <= 0)
        faults.append(f"{path}: wavelength {odd} nm repeats or falls; sort the rows and give each line once")
    return faults


def numbers_from_csv(path, columns, accepted):
    """
    Read the named columns of a user's CSV file as arrays of numbers.

    Parameters
    ----------
    path : str or path
        The file. [-]
    columns : sequence of str
        Headers, with their units, that must stand in the file. [-]
    accepted : str
        What the file should be, for the messages. [-]

    Returns
    -------
    arrays : list of array
        One array for each of `columns`, in the unit of its header. [any]
    """
    rows = library.read(path).rows
    heads = {str(head).strip().lstrip("\ufeff"): head for head in rows[0]}
    missing = [column for column in columns if column not in heads]
    if missing:
        raise CaseError(f"{path}: column `{missing[0]}` is missing, found {', '.join(heads)}; {accepted}")
    try:
        found = [np.array([float(row[heads[column]]) for row in rows]) for column in columns]
    except (TypeError, ValueError):
        raise CaseError(f"{path}: a cell holds no plain number (decimal point); {accepted}") from None
    if not all(np.all(np.isfinite(column)) for column in found):
        raise CaseError(f"{path}: a cell is not a finite number; {accepted}")
    return found
