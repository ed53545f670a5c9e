"""
Molecules as trees of carbon atoms, with an exact canonical code that is also a SMILES string.

Every atom of a chloroalkane, of its radicals (one carbon with a free valence) and of its alkenes (one double bond)
hangs in a tree. A tree has one or two centres; written from a centre with sorted branches it has one spelling only.
"""

from dataclasses import dataclass, replace
from functools import cache
from itertools import combinations

VALENCE = 4


@dataclass(frozen=True)
class Molecule:
    """
    A chloroalkane, a radical of one, or a chloroalkene.

    Parameters
    ----------
    chlorine : tuple of int
        Chlorine atoms on each carbon.
    bonds : tuple of pairs of int
        Carbon-carbon bonds.
    free : int or None
        The carbon with a free valence.
    double : pair of int or None
        The double bond, one of `bonds`.
    """

    chlorine: tuple
    bonds: tuple = ()
    free: int | None = None
    double: tuple | None = None

    @property
    def carbons(self):
        """Return the number of carbon atoms."""
        return len(self.chlorine)

    def neighbours(self, i):
        """Return the carbons next to carbon `i`."""
        return [b if a == i else a for a, b in self.bonds if i in (a, b)]

    def hydrogen(self, i):
        """Return the hydrogen atoms on carbon `i`."""
        used = len(self.neighbours(i)) + self.chlorine[i] + (i == self.free)
        return VALENCE - used - (self.double is not None and i in self.double)

    @property
    def atoms(self):
        """
        Return {element: atoms}, in the order of a formula.

        Examples
        --------
        >>> molecule("CC(C)CCl").atoms
        {'C': 4, 'H': 9, 'Cl': 1}
        """
        hydrogen = sum(self.hydrogen(i) for i in range(self.carbons))
        counts = {"C": self.carbons, "H": hydrogen, "Cl": sum(self.chlorine)}
        return {element: number for element, number in counts.items() if number}

    @property
    def formula(self):
        """Return the formula, like C3H6Cl2."""
        return "".join(element + (str(number) if number > 1 else "") for element, number in self.atoms.items())

    def rooted(self, root, parent=None):
        """Return the spelling of the branch that begins at `root`, coming from `parent`."""
        branches = sorted(
            ("=" if self._is_double(root, other) else "") + self.rooted(other, root)
            for other in self.neighbours(root) if other != parent
        )  # fmt: skip
        own = "C"
        if root == self.free:
            number = self.hydrogen(root)
            own = "[C" + ("H" if number else "") + (str(number) if number > 1 else "") + "]"
        parts = ["Cl"] * self.chlorine[root] + branches
        return own + "".join(f"({part})" for part in parts[:-1]) + "".join(parts[-1:])

    def _is_double(self, a, b):
        return self.double is not None and {a, b} == set(self.double)

    def centres(self):
        """Return the one or two middle carbons: what is left when ends are taken off, round by round."""
        left = set(range(self.carbons))
        while len(left) > 2:
            ends = {i for i in left if len(left & set(self.neighbours(i))) <= 1}
            left -= ends
        return sorted(left)

    @property
    def code(self):
        """
        Return the canonical code: the same for two molecules exactly when their constitutions are the same.

        Examples
        --------
        >>> molecule("ClCCC").code == molecule("CCCCl").code, molecule("C[CH]CCl").code
        (True, '[CH](C)CCl')
        """
        return min(self.rooted(centre) for centre in self.centres())

    def sites(self):
        """
        Return [(carbon, number of carbons like it)] of all kinds of carbon that carry hydrogen.

        Examples
        --------
        >>> molecule("CCC").sites()
        [(0, 2), (1, 1)]
        """
        kinds: dict[str, list] = {}
        for i in range(self.carbons):
            if self.hydrogen(i):
                kinds.setdefault(self.rooted(i), []).append(i)
        return [(alike[0], len(alike)) for alike in kinds.values()]

    def symmetry(self):
        """
        Return the total symmetry number, external times internal.

        Examples
        --------
        >>> [molecule(code).symmetry() for code in ("CC", "CCC", "CC(C)C", "CC(C)(C)C", "[CH2]C")]
        [18, 18, 81, 972, 6]
        """
        centres = self.centres()
        if len(centres) == 2:
            a, b = centres
            halves = self._symmetry(a, b) * self._symmetry(b, a)
            return halves * (2 if self.rooted(a, b) == self.rooted(b, a) else 1)
        return self._symmetry(centres[0], None)

    def _symmetry(self, i, parent):
        branches = [other for other in self.neighbours(i) if other != parent]
        spelled = [self.rooted(other, i) for other in branches] + ["Cl"] * self.chlorine[i] + ["H"] * self.hydrogen(i)
        alike = tuple(sorted((spelled.count(kind) for kind in set(spelled)), reverse=True))
        if i == self.free:
            own = {(2,): 2, (3,): 6, (2, 1): 2}.get(alike, 1)
        else:
            own = {(3,): 3, (4,): 12, (3, 1): 3, (2, 2): 2}.get(alike, 1)
        for other in branches:
            own *= self._symmetry(other, i)
        return own

    def asymmetric(self):
        """Return the number of carbons with four different neighbours."""
        found = 0
        for i in range(self.carbons):
            spelled = [self.rooted(other, i) for other in self.neighbours(i)]
            spelled += ["Cl"] * self.chlorine[i] + ["H"] * self.hydrogen(i)
            found += len(spelled) == VALENCE == len(set(spelled))
        return found


@cache
def molecule(code):
    """
    Return the molecule of a code, or of any SMILES made of C, Cl, =, brackets round a radical and parentheses.

    Examples
    --------
    >>> molecule("C(Cl)(Cl)Cl")
    Molecule(chlorine=(3,), bonds=(), free=None, double=None)
    """
    chlorine: list[int] = []
    opened: list[int] = []
    bonds, free, double, at, twice = [], None, None, -1, False
    i = 0
    while i < len(code):
        if code[i] == "(":
            opened.append(at)
        elif code[i] == ")":
            at = opened.pop()
        elif code[i] == "=":
            twice = True
        elif code.startswith("Cl", i) and at < 0:  # a code may begin with chlorine
            return molecule(code[2] + "(Cl)" + code[3:])
        elif code.startswith("Cl", i):
            chlorine[at] += 1
            i += 1
        else:
            chlorine.append(0)
            if at >= 0:
                bonds.append((at, len(chlorine) - 1))
                double = bonds[-1] if twice else double
            at, twice = len(chlorine) - 1, False
            if code[i] == "[":
                free, i = at, code.index("]", i)
            elif code[i] != "C":
                raise ValueError(f"{code!r} is no code of a chloroalkane")
        i += 1
    return Molecule(tuple(chlorine), tuple(bonds), free, double)


def radical(parent, carbon):
    """Return the code of what is left when a carbon loses a hydrogen."""
    return replace(molecule(parent), free=carbon).code


def with_chlorine(code):
    """Return the code of a radical that has taken a chlorine."""
    rest = molecule(code)
    more = tuple(n + (i == rest.free) for i, n in enumerate(rest.chlorine))
    return replace(rest, chlorine=more, free=None).code


def with_hydrogen(code):
    """Return the code of a radical that has taken a hydrogen."""
    return replace(molecule(code), free=None).code


def coupled(one, other):
    """
    Return the code of two radicals joined at their free carbons.

    Examples
    --------
    >>> coupled("[CH](C)C", "[CH2]CC") == molecule("CCCC(C)C").code
    True
    """
    a, b = molecule(one), molecule(other)
    shift = a.carbons
    moved = tuple((i + shift, j + shift) for i, j in b.bonds)
    return Molecule(a.chlorine + b.chlorine, (*a.bonds, *moved, (a.free, b.free + shift))).code


def without_hydrogen(code):
    """Return {alkene: hydrogens that lead to it} of a radical that loses a hydrogen beside its free carbon."""
    rest = molecule(code)
    found: dict[str, int] = {}
    for other in rest.neighbours(rest.free):
        if number := rest.hydrogen(other):
            alkene = replace(rest, free=None, double=_bond(rest, other)).code
            found[alkene] = found.get(alkene, 0) + number
    return found


def without_chlorine(code):
    """Return {alkene: chlorines that lead to it} of a radical that loses a chlorine beside its free carbon."""
    rest = molecule(code)
    found: dict[str, int] = {}
    for other in rest.neighbours(rest.free):
        if number := rest.chlorine[other]:
            less = tuple(n - (i == other) for i, n in enumerate(rest.chlorine))
            alkene = replace(rest, chlorine=less, free=None, double=_bond(rest, other)).code
            found[alkene] = found.get(alkene, 0) + number
    return found


def _bond(rest, other):
    return next(bond for bond in rest.bonds if set(bond) == {rest.free, other})


@cache
def alkanes(carbons):
    """
    Return the codes of all alkanes with this number of carbons.

    Examples
    --------
    >>> [len(alkanes(n)) for n in range(1, 7)]
    [1, 1, 1, 2, 3, 5]
    """
    if carbons == 1:
        return ("C",)
    grown = set()
    for code in alkanes(carbons - 1):
        for carbon, _ in molecule(code).sites():
            grown.add(coupled(radical(code, carbon), "[CH3]"))
    return tuple(sorted(grown))


def distances(mol, start):
    """Return {carbon: bonds away} of every carbon as seen from one."""
    found, edge = {start: 0}, [start]
    for i in edge:
        for other in mol.neighbours(i):
            if other not in found:
                found[other] = found[i] + 1
                edge.append(other)
    return found


def paths(mol):
    """Return every path between two carbons as a list of carbons, in both directions; one carbon: itself."""
    found = [[0]] if mol.carbons == 1 else []
    for a, b in combinations(range(mol.carbons), 2):
        path = _path(mol, a, b, None)
        found += [path, path[::-1]]
    return found


def _path(mol, at, goal, parent):
    if at == goal:
        return [at]
    for other in mol.neighbours(at):
        if other != parent and (rest := _path(mol, other, goal, at)):
            return [at, *rest]
    return []
