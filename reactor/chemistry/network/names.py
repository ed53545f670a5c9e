"""The names that chemists use for chloroalkanes, their radicals and chloroalkenes, and the keys of the program."""

import re
from functools import cache

from reactor import library
from reactor.chemistry.network.tree import alkanes, molecule, paths, radical, with_chlorine

STEMS = ("", "meth", "eth", "prop", "but", "pent", "hex", "hept", "oct", "non", "dec", "undec", "dodec")
SIMPLE = ("", "", "di", "tri", "tetra", "penta", "hexa", "hepta", "octa", "nona", "deca", "undeca", "dodeca")
COMPLEX = ("", "", "bis", "tris", "tetrakis", "pentakis", "hexakis")


@cache
def name(code):
    """
    Return the systematic name.

    Examples
    --------
    >>> [name(code) for code in ("CC(Cl)CCl", "CC(C)(C)Cl", "C[CH]CCl", "C=CCCl")]
    ['1,2-dichloropropane', '2-chloro-2-methylpropane', '1-chloropropan-2-yl', '3-chloroprop-1-ene']
    """
    mol = molecule(code)
    chain = min((path for path in paths(mol) if _fit(mol, path)), key=lambda path: _rank(mol, path))
    parts = _substituents(mol, chain)
    stem, length = STEMS[len(chain)], len(chain)
    only = (
        length == 1
        or (length == 2 and mol.free is None and mol.double is None and len(parts) == 1)
        or (length == 2 and mol.double is not None and len(parts) == 1)
        or (mol.free is None and sum(mol.hydrogen(i) for i in chain) <= (length == 2))
    )
    return _prefix(parts, only) + stem + _ending(mol, chain)


def _fit(mol, path):
    """Tell whether a path holds the free carbon and the double bond."""
    return (mol.free is None or mol.free in path) and (mol.double is None or set(mol.double) <= set(path))


def _ending(mol, chain):
    if mol.double is not None:
        at = min(chain.index(i) for i in mol.double) + 1
        plain = len(chain) == 2 or (len(chain) == mol.carbons == 3 and not sum(mol.chlorine))
        return "ene" if plain else f"-{at}-ene"
    if mol.free is None:
        return "ane"
    return "yl" if len(chain) <= 2 else f"an-{chain.index(mol.free) + 1}-yl"


def _rank(mol, path):
    """Return what decides between two chains: length, substituents, locants, alphabet; the least is right."""
    parts = _substituents(mol, path)
    free = 0 if mol.free is None else path.index(mol.free)
    double = 0 if mol.double is None else min(path.index(i) for i in mol.double)
    locants = sorted(at for at, _ in parts)
    by_name = sorted(parts, key=lambda part: (_letters(part[1]), part[0]))
    return -len(path), free, double, -len(parts), locants, [at for at, _ in by_name], [n for _, n in by_name]


def _substituents(mol, chain, parent=None):
    """Return [(locant, name)] of all that hangs on a chain, which may itself hang on a parent."""
    found = []
    for at, i in enumerate(chain, start=1):
        found += [(at, "chloro")] * mol.chlorine[i]
        found += [(at, _branch(mol, other, i)) for other in mol.neighbours(i) if other not in (*chain, parent)]
    return found


def _branch(mol, root, parent):
    """Return the name of a branch as a prefix, numbered from where it is attached."""
    paths_out = _outward(mol, root, parent)
    best = max(paths_out, key=lambda path: (len(path), len(_substituents(mol, path, parent))))
    parts = _substituents(mol, best, parent)
    if [n for _, n in parts] == ["methyl"] and len(best) == 2 and parts[0][0] == 1:
        return "propan-2-yl"
    return _prefix(parts, len(best) == 1) + STEMS[len(best)] + "yl"


def _outward(mol, root, parent):
    """Return all paths from a root away from its parent, each to an end."""
    onward = [other for other in mol.neighbours(root) if other != parent]
    return [[root, *path] for other in onward for path in _outward(mol, other, root)] or [[root]]


def _prefix(parts, bare):
    """Return substituents in alphabetical order with their locants; `bare`: the locants are left out."""
    words = []
    for kind in sorted({n for _, n in parts}, key=_letters):
        at = sorted(locant for locant, n in parts if n == kind)
        complicated = kind not in ("chloro", "methyl", "ethyl", "propyl", "butyl")
        many = (COMPLEX if complicated else SIMPLE)[len(at)]
        word = f"{many}({kind})" if complicated else many + kind
        words.append(word if bare else ",".join(map(str, at)) + "-" + word)
    return ("" if bare else "-").join(words)


def _letters(word):
    """Return the letters of a prefix by which it is sorted."""
    return "".join(character for character in word if character.isalpha())


@cache
def _known():
    rows = library.table("networks/structures.csv")
    return {molecule(code).code: key for code, key in zip(rows.text("structure"), rows.text("key"), strict=True)}


@cache
def structures():
    """Return {key: code} of the species whose keys do not follow from a rule."""
    return {key: code for code, key in _known().items()}


@cache
def key(code):
    """
    Return the key by which mechanism, case and result know a species.

    Unbranched chlorides: locants and formula. Alkanes and the species of the small mechanism: as listed. All
    others, and the radicals among them: the systematic name.

    Examples
    --------
    >>> [key(code) for code in (molecule("CC(Cl)CCCl").code, molecule("CC(C)CCl").code, molecule("C[CH]CCl").code)]
    ['1,3-C4H8Cl2', '1-chloro-2-methylpropane', 'CH3CHCH2Cl']
    """
    if code in _known():
        return _known()[code]
    mol, words = molecule(code), name(code)
    unbranched = all(len(mol.neighbours(i)) <= 2 for i in range(mol.carbons))
    if mol.free is not None or mol.double is not None or not unbranched or not sum(mol.chlorine):
        return words
    locants = words.rpartition("-")[0]
    return f"{locants}-{mol.formula}" if locants else mol.formula


@cache
def alkane(words):
    """
    Return the code of an alkane C1 to C6 by its key, its name or a trade name, else None.

    Examples
    --------
    >>> alkane("isobutane"), alkane("2-methylbutane") == alkane("i-C5H12"), alkane("natural")
    ('C(C)(C)C', True, None)
    """
    return _spellings().get(words.strip().lower())


@cache
def _spellings():
    rows = library.table("networks/names.csv").rows
    rows = [*rows, *library.table("species.csv").rows]
    trade = {row["key"]: [row["name"], *row["synonyms"].split(";")] for row in rows}
    found: dict[str, str] = {}
    for code in (code for carbons in range(1, 7) for code in alkanes(carbons)):
        for word in (key(code), name(code), *trade.get(key(code), ())):
            found.setdefault(word.strip().lower(), code)
    found.pop("", None)
    return found


@cache
def find(words):
    """
    Return the code of a molecule by its key, its name or a trade name, else None.

    Examples
    --------
    >>> find("isobutane"), find("1,2-C3H6Cl2") == find("propylene dichloride"), find("N2")
    ('C(C)(C)C', True, None)
    """
    if words in _formulae():
        return structures().get(words) or _isomers(_formulae()[words]).get(words)
    if code := alkane(words):
        return code
    spoken = words.strip().lower()
    for row in (*library.table("species.csv").rows, *library.table("networks/names.csv").rows):
        spellings = (row["key"], row["name"], *row["synonyms"].split(";"))
        if row["kind"] == "molecule" and spoken in (word.strip().lower() for word in spellings):
            if row["key"] in structures():
                return structures()[row["key"]]
            return _isomers(row["formula"]).get(row["key"])
    return None


@cache
def _formulae():
    """Return {key: formula} of the listed molecules."""
    rows = (*library.table("species.csv").rows, *library.table("networks/names.csv").rows)
    return {row["key"]: row["formula"] for row in rows if row["kind"] == "molecule"}


@cache
def _isomers(formula):
    """Return {key: code} of all chloroalkanes with a formula."""
    carbons, chlorine = (_count(formula, element) for element in ("C", "Cl"))
    if set(re.findall(r"[A-Z][a-z]?", formula)) - {"C", "H", "Cl"} or not 1 <= carbons <= 6:
        return {}
    codes = set(alkanes(carbons))
    for _ in range(chlorine):
        codes = {with_chlorine(radical(code, at)) for code in codes for at, _ in molecule(code).sites()}
    return {key(code): code for code in codes if molecule(code).formula == formula}


def _count(formula, element):
    found = re.search(rf"{element}(?![a-z])(\d*)", formula)
    return int(found[1] or 1) if found else 0
