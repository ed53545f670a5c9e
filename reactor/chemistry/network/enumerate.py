"""What chlorine makes of alkanes: every substitution product, the radicals on the way, and all with rates."""

from dataclasses import dataclass
from functools import cache
from typing import NamedTuple

from reactor.chemistry.network import names, rates, small
from reactor.chemistry.network.rates import Rate
from reactor.chemistry.network.tree import molecule, radical, with_chlorine, with_hydrogen
from reactor.errors import CaseError

LARGEST = 6  # carbon atoms of a feed


class Step(NamedTuple):
    """One substitution: Cl takes a hydrogen of `parent`, the `radical` takes a chlorine; `rate` of the first."""

    parent: str
    radical: str
    product: str
    rate: Rate


@dataclass(frozen=True)
class Network:
    """
    Substitution products of some alkanes by canonical code.

    Parameters
    ----------
    feeds : tuple of str
        What is fed.
    chlorines : int
        Largest number of chlorine atoms in a product.
    molecules : tuple of str
        Feeds and products, fewest chlorines first.
    steps : tuple of Step
        All substitutions among them.
    """

    feeds: tuple
    chlorines: int
    molecules: tuple
    steps: tuple

    @property
    def radicals(self):
        """Return the radicals, in the order of the steps."""
        return tuple(dict.fromkeys(step.radical for step in self.steps))

    def within(self, kept):
        """Return the network of some of its molecules."""
        kept = set(kept)
        return Network(
            self.feeds, self.chlorines,
            tuple(code for code in self.molecules if code in kept),
            tuple(step for step in self.steps if step.parent in kept and step.product in kept),
        )  # fmt: skip


def network(feeds, chlorines):
    """
    Return all substitution products of some feeds up to a number of chlorine atoms.

    Parameters
    ----------
    feeds : sequence of str
        Alkanes C1 to C6 (or chloroalkanes) by canonical code.
    chlorines : int
        Largest number of chlorine atoms. [-]

    Examples
    --------
    >>> propane = network(["C(C)C"], 3)
    >>> len(propane.molecules), len(propane.radicals)
    (12, 16)
    """
    for code in feeds:
        if molecule(code).carbons > LARGEST:
            raise CaseError(f"{names.name(code)}: networks are made for feeds of one to {LARGEST} carbon atoms")
    reached, steps = dict.fromkeys(feeds), []
    todo = list(reached)
    for code in todo:
        if sum(molecule(code).chlorine) >= chlorines:
            continue
        for step in substitutions(code):
            steps.append(step)
            if step.product not in reached:
                reached[step.product] = None
                todo.append(step.product)
    ordered = sorted(reached, key=lambda code: (sum(molecule(code).chlorine), molecule(code).carbons))
    return Network(tuple(feeds), chlorines, tuple(ordered), tuple(steps))


@cache
def substitutions(code):
    """Return the steps that begin at a molecule, one for each kind of hydrogen."""
    mol, found = molecule(code), []
    for carbon, number in mol.sites():
        left = radical(code, carbon)
        listed = small.rate((names.key(code), "Cl"), (names.key(left), "HCl"))
        found.append(Step(code, left, with_chlorine(left), listed or rates.abstraction(code, carbon, number)))
    return tuple(found)


def chlorination(code):
    """Return the rate of R + Cl2 of a radical: of the small mechanism, else by kind."""
    listed = small.rate((names.key(code), "Cl2"), (names.key(with_chlorine(code)), "Cl"))
    return listed or rates.chlorination(code)


def coupling(one, other, product):
    """Return the rates of two radicals as `rates.coupling` does: of the small mechanism, else by kind."""
    pair = names.key(one), names.key(other)
    listed = small.rate(pair, (names.key(product),))
    if listed is None:
        return rates.coupling(one, other)
    _, moves = rates.coupling(one, other)
    known = {
        (donor, alkene): small.rate(pair, (names.key(alkene), names.key(with_hydrogen(acceptor))))
        for (donor, alkene) in moves
        for acceptor in ((other if donor == one else one),)
    }
    return listed, {way: rate for way, rate in known.items() if rate}


def with_atom(code):
    """Return the rates of R + Cl as `rates.with_atom` does: of the small mechanism, else by rule."""
    pair = names.key(code), "Cl"
    listed = small.rate(pair, (names.key(with_chlorine(code)),))
    if listed is None:
        return rates.with_atom(code)
    known = {alkene: small.rate(pair, (names.key(alkene), "HCl")) for alkene in rates.with_atom(code)[1]}
    return listed, {alkene: rate for alkene, rate in known.items() if rate}


def couple(radical_code):
    """Tell whether a radical is coupled: at most one chlorine, or one carbon; others are too few to count."""
    mol = molecule(radical_code)
    return mol.carbons == 1 or sum(mol.chlorine) <= 1
