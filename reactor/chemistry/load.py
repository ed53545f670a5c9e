"""Read a mechanism file: the one that comes with the program, or the user's own."""

from functools import cache
from pathlib import Path

import numpy as np

from reactor import library
from reactor.chemistry import kept
from reactor.chemistry.phase import names, phase
from reactor.chemistry.record import Mechanism
from reactor.chemistry.tables import left_out, tables
from reactor.chemistry.transport import fits
from reactor.errors import CaseError

SHIPPED = "mechanism/light_alkanes.yaml"
NEEDED = ("Cl", "Cl2", "HCl")
ROLES = {"photolysis": "Cl2 => 2 Cl", "wall": "Cl => 0.5 Cl2"}
NOT_STATED = "not stated"


def mechanism(path=None):
    """
    Return a mechanism as a `Mechanism`; a file that has not changed is read once.

    Parameters
    ----------
    path : str or pathlib.Path
        A Cantera YAML file; None takes the mechanism that comes with the program. Of several phases the one
        with a reaction of role photolysis is taken, else the first.

    Raises
    ------
    CaseError
        When the file is missing, Cantera cannot use it, it holds what the tables cannot, or it lacks the
        photolysis or wall reaction; the message says which line to add.

    Examples
    --------
    >>> gas = mechanism()
    >>> gas.equations[gas.photolysis], gas.kinds[gas.index["CH3"]]
    ('Cl2 => 2 Cl', 'radical')
    """
    shipped = path is None
    file = library.folder() / SHIPPED if shipped else Path(path)
    try:
        stamp = file.stat().st_mtime_ns
    except OSError as error:
        raise CaseError(f"{file}: cannot be read ({error.strerror}); check the path") from None
    return _read(file.resolve(), stamp, shipped)


@cache
def _read(file, stamp, shipped):
    content = _content(file)
    key = kept.key(content, file.name, shipped)
    found = None if key is None else kept.find(key, file, stamp)
    if found is None:
        found = _made(file, stamp, shipped)
        if key is not None and _content(file) == content:
            kept.keep(key, found)
    return found


def _content(file):
    try:
        return file.read_bytes()
    except OSError as error:
        raise CaseError(f"{file}: cannot be read ({error.strerror}); check the path") from None


def _made(file, stamp, shipped):
    name, gas, remarks = _choose(file, stamp, ["gas-lit"] if shipped else names(file))
    missing = [species for species in NEEDED if species not in gas.species_names]
    if missing:
        raise CaseError(
            f"{file}: species {', '.join(missing)} missing; species carry the keys of data/species.csv, "
            "like Cl2, HCl, CH3Cl, 1,2-C2H4Cl2"
        )
    arrays = tables(gas, str(file))
    notes = [reaction.input_data for reaction in gas.reactions()]
    photolysis, wall = (_single(role, notes, gas, file) for role in ROLES)
    species, elements = tuple(gas.species_names), tuple(gas.element_names)
    kinds = tuple(map(_kind, gas.species()))
    return Mechanism(
        name=file.stem, path=file, phase=name, stamp=stamp,
        species=species, index={s: k for k, s in enumerate(species)},
        molar_mass=gas.molecular_weights / 1e3, elements=elements,
        atoms=np.array([[gas.n_atoms(s, e) for e in elements] for s in species], dtype=float),
        kinds=kinds, radical=np.array([kind == "radical" for kind in kinds]),
        tables=arrays, photolysis=photolysis, wall=wall, start=_start(notes, gas),
        valid=np.array([_numbers(note.get("valid"), 2) for note in notes]),
        f298=np.array([_numbers(note.get("uncertainty", {}).get("f298"))[0] for note in notes]),
        g=np.array([_numbers(note.get("uncertainty", {}).get("g"))[0] for note in notes]),
        status=tuple(note.get("status", NOT_STATED) for note in notes),
        equations=tuple(reaction.equation for reaction in gas.reactions()),
        cited=_cited(notes, gas, file), remarks=(*remarks, *left_out(gas)), condensing=_condensing(gas),
        fits=_fits(file, name, stamp, species.index("Cl")),
    )  # fmt: skip


def _fits(file, name, stamp, atom):
    """Return the transport fits, None where the file has no sound ones: only who asks for them gets the reason."""
    try:
        return fits(phase(file, name, stamp, transport=True)[0], atom)
    except CaseError:
        return None


def _choose(file, stamp, candidates):
    """Return name, gas and remarks of the phase with a photolysis, else of the first."""
    found = None
    for name in candidates:
        gas, remarks = phase(file, name, stamp, transport=False)
        found = found or (gas.name, gas, remarks)
        if any(reaction.input_data.get("role") == "photolysis" for reaction in gas.reactions()):
            return gas.name, gas, remarks
    return found


def _single(role, notes, gas, file):
    """Return the number of the one reaction with this role: irreversible and at 1 1/s."""
    found = [number for number, note in enumerate(notes) if note.get("role") == role]
    line = f"{{equation: {ROLES[role]}, rate-constant: {{A: 1.0, b: 0.0, Ea: 0.0}}, role: {role}}}"
    if len(found) != 1:
        raise CaseError(
            f"{file}: phase {gas.name} has {len(found)} reactions of role {role}, one is needed; "
            f"add this line to its reactions: - {line}"
        )
    reaction = gas.reaction(found[0])
    rate = reaction.rate
    plain = reaction.reaction_type == "Arrhenius" and not reaction.reversible
    same = dict(reaction.reactants) == ({"Cl2": 1.0} if role == "photolysis" else {"Cl": 1.0})
    if not (plain and same and rate.input_data["rate-constant"] == {"A": 1.0, "b": 0.0, "Ea": 0.0}):
        raise CaseError(
            f"{file}: {reaction.equation}: the reaction of role {role} has no reverse and a rate of 1 1/s, "
            f"which the case multiplies; write - {line}"
        )
    return found[0]


def _start(notes, gas):
    marked = [number for number, note in enumerate(notes) if note.get("role") == "start"]
    alike = [
        number
        for number, reaction in enumerate(gas.reactions())
        if reaction.reversible and reaction.reactants == {"Cl": 2.0} and reaction.products == {"Cl2": 1.0}
    ]
    return np.array(marked or alike, dtype=int)


@cache
def _known():
    rows = library.table("species.csv")
    return dict(zip(rows.text("key"), rows.text("kind"), strict=True))


def _kind(species):
    from cantera import Element

    if species.name in _known():
        return _known()[species.name]
    if species.input_data.get("kind") in ("molecule", "radical", "peroxy"):
        return species.input_data["kind"]
    counts = {element: number for element, number in species.composition.items() if element != "E"}
    electrons = sum(Element(element).atomic_number * number for element, number in counts.items())
    return "radical" if round(electrons - species.charge) % 2 else "molecule"


def _condensing(gas):
    """Return the constants of the vapour pressure of each species that states them."""
    stated = {s.name: s.input_data["volatility"] for s in gas.species() if "volatility" in s.input_data}
    names = ("boiling", "critical-temperature", "critical-pressure")
    return {species: tuple(float(constants[name]) for name in names) for species, constants in stated.items()}


def _numbers(value, length=1):
    """Return floats; nan for each that is not stated."""
    values = list(value) if isinstance(value, list | tuple) else [value]
    return [float("nan") if v is None else float(v) for v in [*values, *[None] * length][:length]]


def _cited(notes, gas, file):
    species = [s.input_data for s in gas.species()]
    groups = {
        "rate constants": notes,
        "thermodynamic data": species,
        "transport data": [s["transport"] for s in species if "transport" in s],
        "boiling points": [s["volatility"] for s in species if "volatility" in s],
    }
    entries = (
        library.Cited(what, entry.get("source", file.name), entry.get("status", NOT_STATED))
        for what, group in groups.items()
        for entry in group
    )
    return tuple(dict.fromkeys(entries))
