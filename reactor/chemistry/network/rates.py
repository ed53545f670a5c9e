"""
Rates by structure: Cl + RH by place, R + Cl2, the ends of radicals, loss of a chlorine beside the free carbon.

Units as in the mechanism file: cm, molecule, s, K. A measured value goes before the rule.
"""

import math
from functools import cache
from typing import NamedTuple

from reactor import library
from reactor.chemistry.network.tree import distances, molecule, radical, without_hydrogen

REFERENCE = 298.15  # K; temperature of the factors
CM3 = 1e6  # cm3 in 1 m3


class Rate(NamedTuple):
    """
    A rate constant with its provenance.

    Parameters
    ----------
    A, b, E : float
        k = A T^b exp(-E/T), cm-molecule-s, E in K. [-]
    source, status : str
        Where it comes from, how far to trust it.
    low, high : float
        Temperatures of the source. [K]
    f298 : float
        Uncertainty factor at 298 K. [-]
    note : str
        What a reader should know.
    """

    A: float
    b: float
    E: float
    source: str
    status: str
    low: float
    high: float
    f298: float
    note: str = ""

    def __call__(self, T):
        """Return the rate constant at a temperature [cm^3/molecule/s or 1/s]."""
        return self.A * T**self.b * math.exp(-self.E / T)


def worst(*words):
    """Return the least trusted of some status words."""
    return max(words, key=("seen", "computed", "common practice", "estimate", "memory").index)


@cache
def _rules():
    rows = library.table("networks/site_rates.csv")
    columns = zip(
        rows.text("rule"), rows.text("site"), rows.text("chlorine"), rows.si("A") * CM3, rows.si("E"),
        rows.si("factor"), rows.text("status"), rows.si("f298"), strict=True,
    )  # fmt: skip
    return {(rule, site, chlorine): rest for rule, site, chlorine, *rest in columns}


@cache
def _constants():
    return library.sheet("networks/constants.csv")


def _constant(name):
    return _constants()[name].value


@cache
def _measured():
    rows = library.table("networks/measured_rates.csv")
    found = {}
    for row, A, E, low, high, f298 in zip(
        rows.rows, rows.si("A") * CM3, rows.si("E"), rows.si("lowest"), rows.si("highest"), rows.si("f298"),
        strict=True,
    ):  # fmt: skip
        pair = molecule(row["molecule"]).code, molecule(row["radical"]).code
        found[pair] = Rate(A, 0.0, E, row["source"], row["status"], low, high, f298, row["note"])
    return found


def abstraction(parent, carbon, number):
    """
    Return the rate of Cl + RH at one kind of place: measured, else by rule.

    Parameters
    ----------
    parent : str
        Code of the molecule.
    carbon : int
        One of the equal carbons.
    number : int
        How many carbons are equal.

    Examples
    --------
    >>> rate = abstraction("C(C)C", 0, 1)
    >>> print(f"{rate(298.15):.2e} {rate.status}")
    7.32e-11 computed
    """
    return _measured().get((parent, radical(parent, carbon))) or rule(parent, carbon, number)


def rule(parent, carbon, number):
    """Return the rate of Cl + RH at one kind of place by the rule; arguments as for `abstraction`."""
    mol = molecule(parent)
    own, degree = mol.chlorine[carbon], len(mol.neighbours(carbon)) + mol.chlorine[carbon]
    base = _rules()["base", ("CH3", "CH3", "CH2", "CH")[degree], ""]
    A, E, factors = base[0] * number, base[1], _factors(mol, carbon, own, degree)
    spread, status = math.log(base[4]) ** 2, base[3]
    for theta, (_, _, factor, trust, f298) in factors:
        slope = theta * math.log(factor)
        A *= factor * math.exp(-slope / REFERENCE)
        E -= slope
        spread += math.log(f298) ** 2
        status = worst(status, trust)
    low, high = (195.0, 470.0) if not factors else (298.0, 470.0)
    text = "by rule" if not factors else "by rule: kind of carbon and chlorine around it"
    return Rate(A, 0.0, E, "own_networks", status, low, high, round(math.exp(math.sqrt(spread)), 2), text)


def _factors(mol, carbon, own, degree):
    """Return [(theta, row of the rules)] of all that acts on a place."""
    near, beyond, rules = _constant("theta_alpha"), _constant("theta_beyond"), _rules()
    found = []
    if own:
        found.append((near, rules["alpha", "CH" if degree == 3 else "CH2", str(min(own, 2))]))
    kind = "chlorinated" if own else "CH3" if degree == 1 else "plain"
    for other, away in distances(mol, carbon).items():
        count = mol.chlorine[other]
        if away == 1 and len(mol.neighbours(other)) == 4:
            found.append((0.0, rules["quaternary", "any", ""]))
        if away == 0 or not count:
            continue
        if away == 1:
            site = "CH3 of C2" if kind == "CH3" and mol.carbons == 2 else kind
            found.append((beyond, rules["beta", site, str(count)]))
        elif away <= 4:
            name, site = (("gamma", kind), ("delta", "any"), ("epsilon", "any"))[away - 2]
            found += [(beyond, rules[name, site, ""])] * count
    return found


def kind(code):
    """
    Return the kind of a radical: primary, secondary or tertiary, with `alpha` for chlorine on the free carbon.

    Examples
    --------
    >>> [kind(code) for code in ("[CH2]CC", "[CH](C)C", "[C](C)(C)C", "[CH](Cl)CC", "[C](Cl)(Cl)CC")]
    ['primary', 'secondary', 'tertiary', 'primary alpha', 'alpha,alpha']
    """
    mol = molecule(code)
    own, degree = mol.chlorine[mol.free], len(mol.neighbours(mol.free))
    if own >= 2:
        return "alpha,alpha"
    word = ("primary", "primary", "secondary", "tertiary")[degree]
    return f"{word} alpha" if own else word


def _beside(code):
    """Return the chlorine atoms beside the free carbon."""
    mol = molecule(code)
    return sum(mol.chlorine[other] for other in mol.neighbours(mol.free))


@cache
def _by_kind(file):
    rows = library.table(f"networks/{file}.csv")
    last = "beta" if file == "radical_chlorine" else "b"
    E = rows.si("E") if file == "radical_chlorine" else [0.0] * len(rows)
    columns = zip(rows.text("kind"), rows.si("A") * CM3, rows.si("n"), E, rows.si(last), rows.rows, strict=True)
    return {word: (A, n, E, more, row) for word, A, n, E, more, row in columns}


def chlorination(code):
    """Return the rate of R + Cl2 of a radical by its kind."""
    A, n, E, beta, row = _by_kind("radical_chlorine")[kind(code)]
    beside = _beside(code)
    taken = molecule(code).carbons > 2 or beside
    status = worst(row["status"], "estimate") if taken else row["status"]
    note = "by the kind of radical; sets its level, not the product split" if taken else row["note"]
    low, high = float(row["lowest [K]"]), float(row["highest [K]"])
    f298 = max(float(row["f298 [-]"]), 2.0 if beside else 1.5 if taken else 1.0)
    return Rate(A * 300.0**-n * beta**beside, n, E, row["source"], status, low, high, f298, note)


def coupling(one, other):
    """
    Return the rates of two radicals: combination, and {alkene: disproportionation} by donor.

    Returns
    -------
    Rate, dict
        Keys of the second: (radical that loses a hydrogen, alkene); only radicals without chlorine lose one here.
    """
    a, b = _by_kind("couplings")[kind(one)], _by_kind("couplings")[kind(other)]
    A, n = a[0] * 300.0 ** -a[1], a[1]
    if one != other:
        A, n = 2 * math.sqrt(A * b[0] * 300.0 ** -b[1]), (a[1] + b[1]) / 2
    share = math.sqrt(a[3] * b[3])
    moves: dict = {}
    for donor in (one, other):
        if not sum(molecule(donor).chlorine):
            for alkene, hydrogens in without_hydrogen(donor).items():
                moves[donor, alkene] = moves.get((donor, alkene), 0.0) + share * hydrogens
    f298 = max(float(a[4]["f298 [-]"]), float(b[4]["f298 [-]"]), 1.5)
    status = worst(a[4]["status"], b[4]["status"], "estimate")
    make = lambda part, note: Rate(A * part, n, 0.0, "own_networks", status, 298.0, 500.0, f298, note)  # noqa: E731
    total = 1.0 + sum(moves.values())
    return (
        make(1.0 / total, "by kind of radical; cross reactions: geometric mean, doubled"),
        {pair: make(part / total, "by hydrogen that can move") for pair, part in moves.items()},
    )


def with_atom(code):
    """Return the rates of R + Cl: combination, and {alkene: rate} with HCl."""
    estimate = ("own_networks", "estimate", 298.0, 500.0, 2.0)
    alkenes = without_hydrogen(code)
    if sum(molecule(code).chlorine) or not alkenes:
        value = _constant("atom_chlorinated" if sum(molecule(code).chlorine) else "atom_total") * CM3
        return Rate(value, 0.0, 0.0, *estimate, "order of the other radical + Cl combinations"), {}
    total, share = _constant("atom_total") * CM3, _constant("atom_combination")
    all_hydrogen = sum(alkenes.values())
    losing = {
        alkene: Rate(total * (1 - share) * number / all_hydrogen, 0.0, 0.0, *estimate, "split assumed")
        for alkene, number in alkenes.items()
    }
    return Rate(total * share, 0.0, 0.0, *estimate, "by analogy with C2H5; split assumed"), losing


def loss(number):
    """Return the rate of loss of one of `number` chlorines beside the free carbon [1/s]."""
    A, E = _constant("loss_A"), _constant("loss_E")
    text = "per chlorine as for the chloropropyls, 1 atm"
    return Rate(A * number, 0.0, E, "own_networks", "computed", 400.0, 500.0, 3.0, text)


def addition(carbons=1):
    """Return the rate of Cl + alkene at some of the carbons of its double bond."""
    value = _constant("addition") * CM3 * carbons
    return Rate(value, 0.0, 0.0, "own_networks", "estimate", 298.0, 298.0, 1.5, "half of propene per carbon, 1 atm")


def capture():
    """Return the rate of R + O2."""
    value = _constant("oxygen") * CM3
    return Rate(value, 0.0, 0.0, "own_networks", "estimate", 298.0, 298.0, 2.0, "of the order of the other alkyl radicals")
