"""The entries of the mechanism that comes with the program, and of the networks' own additions, by structure."""

import re
from functools import cache

from reactor import library
from reactor.chemistry.network import names

FILES = ("mechanism/light_alkanes.yaml", "networks/more.yaml")


@cache
def _pieces():
    """Return ({key: text of a species}, {sides: text of a reaction}) of both files, not yet read as YAML."""
    species, reactions = {}, {}
    for name in FILES:
        text = (library.folder() / name).read_text(encoding="utf-8")
        for piece in re.split(r"^(?=  - (?:name|equation): |[a-z-]+:)", text, flags=re.MULTILINE):
            first = piece.splitlines()[0] if piece else ""
            word = first.partition(": ")[2].strip().strip('"')
            if first.startswith("  - equation: ") and not re.search(r"role: (photolysis|wall)", piece):
                reactions[sides({"equation": word})] = piece
            elif first.startswith("  - name: ") and "thermo: ideal-gas" not in piece:
                species[word] = piece
    return species, reactions


@cache
def _read(piece):
    """Return one entry of a mechanism file."""
    from ruamel.yaml import YAML  # comes with Cantera

    return YAML(typ="safe").load(piece)[0]


def species(code):
    """Return the entry of a structure, or of a key such as Cl, O2; None when there is none."""
    piece = _pieces()[0].get(code) or (_pieces()[0].get(names.key(code)) if code.startswith(("C", "[")) else None)
    return piece and _read(piece)


def text(key):
    """Return the entry of a species as it stands in its file, else an empty text."""
    return _clean(_pieces()[0].get(key, ""))


def reaction_text(left, right):
    """Return the entry of a reaction as it stands in its file, else an empty text."""
    return _clean(_pieces()[1].get((tuple(sorted(left)), tuple(sorted(right))), ""))


def light():
    """Return the entries of the light and wall steps as they stand in the small mechanism."""
    whole = (library.folder() / FILES[0]).read_text(encoding="utf-8")
    return whole.partition("\nlight-and-wall:\n")[2]


def _clean(piece):
    """Return a piece without the remarks and empty lines that follow it."""
    lines = piece.splitlines()
    while lines and (not lines[-1].strip() or lines[-1].lstrip().startswith("#")):
        lines.pop()
    return "\n".join(lines) + "\n" if lines else ""


def keys():
    """Return the keys of all species."""
    return tuple(_pieces()[0])


def sides(entry):
    """
    Return the species of both sides of a reaction entry, third bodies left out, as two sorted tuples.

    Examples
    --------
    >>> sides({"equation": "2 C2H5 => C2H4 + C2H6"})
    (('C2H5', 'C2H5'), ('C2H4', 'C2H6'))
    """
    equation = entry["equation"].replace("(+M)", "")
    left, right = equation.replace("<=>", "=>").split("=>")
    return tuple(tuple(sorted(_side(text))) for text in (left, right))


def _side(text):
    for term in text.split(" + "):
        words = term.split()
        if words and words[-1] != "M":
            number = int(words[0]) if len(words) == 2 else 1
            yield from [words[-1]] * number


def reaction(left, right):
    """Return the entry of a reaction by its two sides, else None."""
    piece = _pieces()[1].get((tuple(sorted(left)), tuple(sorted(right))))
    return piece and _read(piece)


def reactions():
    """Return the sides of all reactions."""
    return tuple(_pieces()[1])


def rate(left, right):
    """Return the `Rate` of a reaction of the small mechanism by its two sides, else None; fall-off: its upper limit."""
    from reactor.chemistry.network.rates import Rate

    entry = reaction(left, right)
    if entry is None:
        return None
    k = entry.get("rate-constant") or entry["high-P-rate-constant"]
    low, high = entry.get("valid", (298.0, 298.0))
    f298 = entry.get("uncertainty", {}).get("f298") or float("nan")
    numbers = (float(k["A"]), float(k["b"]), float(k["Ea"]))
    return Rate(*numbers, entry["source"], entry["status"], low, high, f298, entry.get("note", ""))
