"""Names, atoms and molar masses of the species that a feed may hold."""

import re
from functools import cache

from reactor import library
from reactor.case.values import nearest


def rows():
    """Return the rows of all species: those of the small mechanism, then those that only made mechanisms hold."""
    return (*library.table("species.csv").rows, *library.table("networks/names.csv").rows)


@cache
def names():
    """Return {any spelling: key} of every molecule in `data/species.csv` and `data/networks/names.csv`."""
    found: dict[str, str] = {}
    for row in (row for row in rows() if row["kind"] == "molecule"):
        for name in (row["key"], row["name"], *row["synonyms"].split(";")):
            if name.strip():
                found.setdefault(name.strip(), row["key"])
    return found


def find(name):
    """Return the key of a species, or raise a ValueError with the nearest spelling."""
    known = names()
    if name in known:
        return known[name]
    lower = {spelling.lower(): key for spelling, key in known.items()}
    if len(name) > 4 and name.lower() in lower:  # a trade name, not a formula
        return lower[name.lower()]
    raise ValueError(nearest(name, known))


@cache
def atoms(key):
    """
    Return {element: atoms} of a species.

    Examples
    --------
    >>> atoms("CH3Cl")
    {'C': 1, 'H': 3, 'Cl': 1}
    """
    (row,) = (row for row in rows() if row["key"] == key)
    counts: dict[str, int] = {}
    for element, number in re.findall(r"([A-Z][a-z]?)(\d*)", row["formula"]):
        counts[element] = counts.get(element, 0) + int(number or 1)
    return counts


@cache
def molar_mass(key):
    """
    Return the molar mass of a species [kg/mol].

    Examples
    --------
    >>> print(f"{molar_mass('CH3Cl'):.6f}")
    0.050485
    """
    weights = library.table("atoms.csv")
    weight = dict(zip(weights.text("element"), weights.si("weight"), strict=True))
    return float(sum(number * weight[element] for element, number in atoms(key).items()))


def is_alkane(key):
    """Tell whether a species is a saturated open-chain hydrocarbon."""
    count = atoms(key)
    return set(count) == {"C", "H"} and count["H"] == 2 * count["C"] + 2


def is_organic(key):
    """Tell whether a species has carbon-hydrogen bonds that chlorine can attack."""
    return {"C", "H"} <= set(atoms(key))
