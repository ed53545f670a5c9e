"""
Write a pruned network as a Cantera file in the form of the mechanism that comes with the program.

What the small mechanism holds is copied as it stands there; the rest carries the provenance of its rule.
"""

import re

from reactor.chemistry.network import enumerate as made
from reactor.chemistry.network import names, rates, small
from reactor.chemistry.network.rates import Rate
from reactor.chemistry.network.thermo import nasa7, peroxy, thermo
from reactor.chemistry.network.tree import alkanes, molecule, with_chlorine, with_hydrogen, without_chlorine
from reactor.chemistry.network.volatility import lennard_jones, volatility

ALWAYS = ("Cl", "Cl2", "HCl", "O2", "N2", "Ar", "CO2", "ClOO")
PHOSGENE = ("ClO", "CCl3O", "CHCl2O", "CHClO", "COCl", "COCl2", "CO")  # comes with CHCl2 and CCl3
LADDER = ("CC", "C(Cl)(Cl)(Cl)C(Cl)(Cl)Cl")  # the hazard side extends the enthalpies of chlorides by these two
COLLIDER = 6.0  # efficiency in 2 Cl + M of a molecule that the small mechanism does not list; estimate
PHASE = """\
  - name: {name}
    thermo: ideal-gas
    elements: [C, H, Cl, O, N, Ar]
    species: {species}
    kinetics: bulk
    reactions: [{reactions}]
    transport: mixture-averaged
    state: {{T: 300.0, P: 1 atm}}
"""
HEAD = """\
# {title}
#
# Made by rule and pruned; you may edit it and name it as chemistry.mechanism. {kept}
# {left}
# Rates of a kind of place, measured ones first; thermochemistry measured, else by groups, 200 to 2500 K. Chlorine
# that leaves beside a free carbon gives alkenes; hydrogen of alkenes is not attacked.
# Keys and units: see data/mechanism/light_alkanes.yaml; volatility [K, Pa] is for dew points.

description: >-
  {title}

units: {{length: cm, quantity: molec, time: s, activation-energy: K}}

phases:
"""


def text(pruned, title):
    """
    Return the mechanism of a pruned network as YAML.

    Parameters
    ----------
    pruned : Pruned
        What is kept.
    title : str
        One line that says what this is.
    """
    reactions = Reactions(pruned)
    codes, peroxies = reactions.species, reactions.peroxies
    listed = [names.key(code) for code in codes]
    oxygen = PHOSGENE if {"CHCl2", "CCl3"} & set(listed) else ()
    keys = [*listed, *ALWAYS, *peroxies, *oxygen]
    left = f"Left out: {len(pruned.dropped)} products, together at most {pruned.share:.1e} of the organic chlorine."
    kept = f"{len(keys)} species, {len(reactions.texts)} reactions."
    parts = [HEAD.format(title=title, left=left, kept=kept)]
    spelled = ", ".join(f'"{key}"' if "," in key else key for key in keys)
    anchor = "&species [" + _folded(spelled, 14) + "]"
    parts.append(PHASE.format(name="gas", species=anchor, reactions="reactions"))
    parts.append(PHASE.format(name="gas-lit", species="*species", reactions="reactions, light-and-wall"))
    parts.append("\nspecies:\n")
    parts += [_species(code) for code in codes]
    parts += [small.text(key) for key in ALWAYS] + [_peroxy(key, code) for key, code in peroxies.items()]
    parts += [small.text(key) for key in oxygen]
    parts += ["\nreactions:\n", *reactions.written(set(keys)), *_oxygen(keys), "\nlight-and-wall:\n", small.light()]
    return "".join(parts)


def size(pruned):
    """Return about how many species the mechanism of a pruned network holds."""
    made_ = Reactions(pruned)
    return len(made_.species) + len(made_.peroxies) + len(ALWAYS)


def _folded(words, indent, width=100):
    """Return a long list over several lines."""
    lines, line = [], ""
    for word in words.split(", "):
        if len(line) + len(word) > width:
            lines.append(line.rstrip())
            line = " " * indent
        line += word + ", "
    return "\n".join([*lines, line]).removesuffix(", ")


class Reactions:
    """All reactions of a pruned network as {sides: Rate, or None where the small mechanism has it}."""

    def __init__(self, pruned):
        self.texts: dict = {}
        self.arrows: dict = {}
        self.peroxies: dict = {}
        self.steps = list(pruned.network.steps)
        held = {*pruned.network.molecules, *pruned.network.radicals}
        for code in pruned.coupled:
            self.steps += [
                step for step in made.substitutions(code) if step.product in (*pruned.chlorides, *held)
            ]
        self.stand_in = pruned.stand_in
        joined = [self.stand_in.get(product, product) for *_, product in pruned.pairs]
        ordered = (
            *pruned.network.molecules, *joined, *(s.product for s in self.steps), *pruned.alkenes,
            *(s.radical for s in self.steps),
        )  # fmt: skip
        sizes = {molecule(code).carbons for code in ordered}
        bare = {molecule(code).carbons for code in ordered if set(molecule(code).atoms) == {"C", "H"} and code in joined}
        bare |= {molecule(code).carbons for code in pruned.network.feeds if not sum(molecule(code).chlorine)}
        missing = [alkanes(size)[-1] for size in sorted(sizes - bare)]
        self.species = tuple(dict.fromkeys((*ordered, *missing, *map(_code, LADDER))))
        self._substitutions(pruned.network.radicals)
        self._alkenes(pruned.alkenes)
        self._ends(pruned)

    def _add(self, left, right, rate, arrow="=>"):
        sides = tuple(sorted(left)), tuple(sorted(right))
        if small.reaction(*sides):
            self.texts[sides] = None
        elif (before := self.texts.get(sides)) is not None:
            self.texts[sides] = before._replace(A=before.A + rate.A)
        else:
            self.texts[sides] = rate
            self.arrows[sides] = arrow

    def _substitutions(self, radicals):
        for step in self.steps:
            left, right = names.key(step.parent), names.key(step.radical)
            self._add((left, "Cl"), (right, "HCl"), step.rate, "<=>")
        for code in dict.fromkeys(step.radical for step in self.steps):
            key, product = names.key(code), names.key(with_chlorine(code))
            self._add((key, "Cl2"), (product, "Cl"), made.chlorination(code), "<=>")
            if code in radicals:
                self._capture(code, key)

    def _capture(self, code, key):
        """Let oxygen take a radical: the small mechanism's own product, else one lump for each formula."""
        known = next((sides for sides in small.reactions() if sides[0] == tuple(sorted((key, "O2")))), None)
        lump = known[1][0] if known else molecule(code).formula + "O2"
        self.peroxies.setdefault(lump, code)
        self._add((key, "O2"), (lump,), rates.capture())

    def _alkenes(self, alkenes):
        for code in dict.fromkeys(step.radical for step in self.steps):
            for alkene in without_chlorine(code):
                if alkene in alkenes:
                    ends = sum(other == code for other in _added(alkene))
                    self._add((names.key(alkene), "Cl"), (names.key(code),), rates.addition(ends), "<=>")

    def _ends(self, pruned):
        held = set(self.species)
        for one, other, product in pruned.pairs:
            joined, moves = made.coupling(one, other, product)
            pair = names.key(one), names.key(other)
            for (donor, alkene), rate in moves.items():
                whole = with_hydrogen(other if donor == one else one)
                if {alkene, whole} <= held:
                    self._add(pair, (names.key(alkene), names.key(whole)), rate)
                else:
                    joined = joined._replace(A=joined.A + rate.A)
            self._add(pair, (names.key(self.stand_in.get(product, product)),), joined)
        for code in pruned.network.radicals:
            joined, losing = made.with_atom(code)
            for alkene, rate in losing.items():
                if alkene in held:
                    self._add((names.key(code), "Cl"), (names.key(alkene), "HCl"), rate)
                else:
                    joined = joined._replace(A=joined.A + rate.A)
            self._add((names.key(code), "Cl"), (names.key(with_chlorine(code)),), joined)

    def written(self, keys):
        """Return the texts of all reactions, the thermal start first."""
        colliders = [key for key in map(names.key, self.species) if key in keys]
        parts = [_filtered(small.reaction_text(("Cl", "Cl"), ("Cl2",)), keys, colliders)]
        for sides, rate in self.texts.items():
            if rate is None:
                parts.append(_filtered(small.reaction_text(*sides), keys))
            else:
                parts.append(_reaction(sides, rate, self.arrows[sides]))
        return parts


def _code(structure):
    return molecule(structure).code


def _added(alkene):
    """Return the radicals that chlorine makes at either end of a double bond."""
    mol = molecule(alkene)
    for at, other in (mol.double, mol.double[::-1]):
        more = tuple(n + (i == at) for i, n in enumerate(mol.chlorine))
        yield mol.__class__(more, mol.bonds, free=other).code


def _filtered(piece, keys, colliders=()):
    """Return the text of a reaction whose third bodies are species of this file."""

    def only(match):
        pairs = [pair.split(": ") for pair in re.sub(r"\s+", " ", match[1]).split(", ")]
        found = {key: value for key, value in pairs if key in keys}
        found |= {key: f"{COLLIDER}" for key in colliders if key not in found and _plain(key)}
        spelled = ", ".join(f'"{k}": {v}' if "," in k else f"{k}: {v}" for k, v in found.items())
        return "efficiencies: {" + _folded(spelled, 6) + "}"

    return re.sub(r"efficiencies: \{([^}]*)\}", only, piece)


def _plain(key):
    """Tell whether a species is a large molecule that may be abundant: an alkane or a monochloride."""
    return bool(re.fullmatch(r"([\d,]+-|n-|i-|neo-)?C\d*H\d+(Cl)?", key)) and key[0] != "C"


def _reaction(sides, rate: Rate, arrow):
    left, right = (" + ".join(_counted(side)) for side in sides)
    lines = [
        f'  - equation: "{left} {arrow} {right}"',
        f"    rate-constant: {{A: {float(rate.A):.7g}, b: {float(rate.b):.7g}, Ea: {float(rate.E):.7g}}}",
        f"    source: {rate.source}",
        f"    status: {rate.status}",
        f"    valid: [{rate.low:g}, {rate.high:g}]",
        f"    uncertainty: {{f298: {rate.f298:.3g}, g: null}}",
    ]
    return "\n".join(lines + ([f'    note: "{rate.note}"'] if rate.note else [])) + "\n"


def _counted(side):
    return [f"{side.count(key)} {key}" if side.count(key) > 1 else key for key in dict.fromkeys(side)]


def _species(code):
    key = names.key(code)
    known = small.text(key)
    found = volatility(code)
    more = ""
    if molecule(code).free is None:
        numbers = (found.boiling, found.critical_temperature, found.critical_pressure)
        more = (
            "    volatility: {{boiling: {:.2f}, critical-temperature: {:.2f}, critical-pressure: {:.4g}, ".format(*numbers)
            + f"source: {found.source}, status: {found.status}}}\n"
        )
    if known:
        return known + more
    mol = molecule(code)
    diameter, depth = lennard_jones(code)
    transport = (f"{{model: gas, geometry: nonlinear, diameter: {diameter:.4g}, well-depth: {depth:.4g},\n"
                 "      rotational-relaxation: 1.0, source: chung, status: estimate}")  # fmt: skip
    spelled = f'    title: "{names.name(code)}"\n    structure: "{code}"\n'
    return _entry(key, mol.atoms, thermo(code), transport) + spelled + more


def _peroxy(key, code):
    known = small.text(key)
    if known:
        return known
    diameter, depth = lennard_jones(code)
    transport = (f"{{model: gas, geometry: nonlinear, diameter: {diameter:.4g}, well-depth: {depth:.4g},\n"
                 "      rotational-relaxation: 1.0, source: own_networks, status: estimate}")  # fmt: skip
    return _entry(key, molecule(code).atoms | {"O": 2}, peroxy(code), transport) + "    kind: peroxy\n"


def _entry(key, atoms, found, transport):
    low, high = nasa7(found, sum(atoms.values()))
    composition = ", ".join(f"{element}: {number}" for element, number in atoms.items())
    rows = ["        - [" + ",\n           ".join(_row(part) for part in (row[:5], row[5:])) + "]" for row in (low, high)]
    quoted = f'"{key}"' if "," in key else key
    return "\n".join([
        f"  - name: {quoted}",
        f"    composition: {{{composition}}}",
        "    thermo:",
        "      model: NASA7",
        "      reference-pressure: 1 bar",
        "      temperature-ranges: [200.0, 1000.0, 2500.0]",
        "      data:",
        *rows,
        f"    transport: {transport}",
        f"    source: {found.source}",
        f"    status: {found.status}",
        f'    note: "{found.note}"',
        "",
    ])  # fmt: skip


def _row(numbers):
    return ", ".join(f"{value:.11g}" for value in numbers)


def _oxygen(keys):
    """Return the texts of the small mechanism's and the networks' own reactions of oxygen among some species."""
    held, found = set(keys), []
    for sides in small.reactions():
        flat = {*sides[0], *sides[1]}
        own = {"ClOO", *PHOSGENE} & flat
        if own and flat <= held:
            found.append(small.reaction_text(*sides))
    return found

